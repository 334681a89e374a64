"""The linked views in a real JupyterLab, driven by mouse and keys."""

from __future__ import annotations

import json
import shutil
from pathlib import Path
from typing import Any

import nbformat
import pytest

pytestmark = pytest.mark.browser

NOTEBOOKS = Path(__file__).parents[2] / "notebooks"


def notebook(folder: Path, name: str, *cells: str) -> str:
    made = nbformat.v4.new_notebook(cells=[nbformat.v4.new_code_cell(cell) for cell in cells])
    made.metadata["kernelspec"] = {"name": "python3", "display_name": "Python 3", "language": "python"}
    nbformat.write(made, folder / name)
    return name


def places(parts: Any) -> set[str]:
    return set(parts.evaluate_all("parts => parts.map((part) => part.dataset.place)"))


def wait_for(page: Any, lab: Any, expression: str, value: str) -> None:
    """Wait until a Python expression has this text: a click reaches the kernel a moment later."""
    for _ in range(50):
        found = lab.value(page, expression)
        if found == value:
            return
        page.wait_for_timeout(100)
    assert found == value


def halo(part: Any) -> str:
    """The colour of the marker under a line of a picture."""
    return str(part.locator(".kt-hit").first.evaluate("hit => getComputedStyle(hit).stroke"))


def test_focus_selection_stepping_and_errors(lab: Any, chromium_page: Any) -> None:
    page = chromium_page
    name = notebook(
        lab.folder,
        "two.ipynb",
        "import kt_widgets as kt\nbench = kt.Workbench('braid 1 -2 1 -2')\nbench",
        "other = kt.Workbench('< a, b | a b a = b a b >')\nother",
    )
    lab.open(page, name)
    lab.run(page)
    first, second = page.locator(".kt-workbench").nth(0), page.locator(".kt-workbench").nth(1)
    second.wait_for()
    cells = page.locator(".jp-Cell").count()

    # Pointing at an entry lights its letters, edges, arc and crossing in the browser, in this workbench only.
    entry = first.locator("td[data-place='entry:2:1:1']")
    entry.hover()
    first.locator(".arc, .strand.kt-linked").first.wait_for(state="attached")
    expected = set(
        json.loads(lab.value(page, "__import__('json').dumps(bench.line.links['entry:2:1:1'])")[1:-1])
    )
    assert {place.split(":")[0] for place in expected} >= {"letter", "edge", "arc", "crossing", "cell"}
    assert places(first.locator(".kt-linked[data-place]")) == expected
    assert places(second.locator(".kt-linked[data-place]")) == set()
    arc = first.locator("svg .strand.kt-linked[data-place^='arc:']").first
    assert halo(arc) != halo(first.locator("svg .strand:not(.kt-linked)[data-place^='arc:']").first)
    assert "crossing 1" in first.locator(".kt-says").inner_text()

    # A click selects, Python reads it, and the entry is explained.
    entry.click()
    wait_for(page, lab, "bench.selected", "'entry:2:1:1'")
    page.mouse.move(5, 5)
    assert places(first.locator(".kt-linked[data-place]")) >= expected
    first.get_by_role("heading", name="row a and column r1").wait_for()

    # The slider steps by keys; the sum at the end is the column of boundary(2).
    slider = first.locator("input[type=range]")
    slider.focus()
    page.keyboard.press("Home")
    page.keyboard.press("ArrowRight")
    assert first.locator(".kt-caption").inner_text() == json.loads(
        lab.value(page, "__import__('json').dumps(bench.cover.steps[1]['caption'], ensure_ascii=False)")[1:-1]
    )
    assert places(first.locator(".kt-now[data-place^='letter:']")) == {"letter:1:1"}
    page.keyboard.press("End")
    wait_for(page, lab, "bench.cover.step", "4")
    assert first.locator(".kt-sum").inner_text().startswith("∂f₁ = ")
    assert second.locator(".kt-now").count() == 0

    # Arrows move among the parts of one view; letters typed there are not commands of the notebook.
    entry.focus()
    page.keyboard.press("ArrowDown")
    assert places(first.locator("td.kt-focus")) == {"entry:2:2:1"}
    page.keyboard.press("a")
    page.keyboard.press("b")
    assert page.locator(".jp-Cell").count() == cells
    page.keyboard.press("Enter")
    wait_for(page, lab, "bench.selected", "'entry:2:2:1'")

    # A wrong line is answered under the field, stays, and changes nothing.
    field = first.locator("form[data-set=text] input")
    before = first.locator("svg").first.inner_html()
    field.fill("braid 1 -2 x")
    field.press("Enter")
    alert = first.locator("[role=alert]:visible")
    alert.wait_for()
    assert "x" in alert.inner_text()
    assert field.input_value() == "braid 1 -2 x"
    first.locator(".kt-waiting").wait_for(state="detached")
    assert first.locator("svg").first.inner_html() == before
    field.fill("braid 1 1 1")
    field.press("Enter")
    wait_for(page, lab, "bench.subject.diagram.writhe", "3")
    first.locator("td[data-place='entry:2:4:4']").wait_for(state="detached")
    assert first.locator("[role=alert]:visible").count() == 0
    assert second.locator("td[data-place='entry:2:2:1']").count() == 1

    # The second one has no diagram; its own focus stays in it.
    second.locator("span[data-place='letter:1:2']").hover()
    assert "edge:b:1" in places(second.locator(".kt-linked[data-place]"))
    assert places(first.locator(".kt-linked[data-place]")) == set()


def test_ids_are_unique_on_the_page(lab: Any, chromium_page: Any) -> None:
    page = chromium_page
    # One shown twice, and another one of the same diagram.
    cells = (
        "import kt_widgets as kt\nb = kt.Workbench('braid 1 1 1'); b",
        "b",
        "kt.Workbench('braid 1 1 1')",
    )
    lab.open(page, notebook(lab.folder, "three.ipynb", *cells))
    lab.run(page)
    page.locator(".kt-workbench").nth(2).wait_for()
    page.locator(".kt-workbench").nth(2).locator("input[type=range]").wait_for()
    ids = page.locator(".kt-view [id]").evaluate_all("nodes => nodes.map((node) => node.id)")
    assert len(ids) == len(set(ids)) > 0


def test_coefficients_and_explanation_come_from_python(lab: Any, chromium_page: Any) -> None:
    page = chromium_page
    lab.open(
        page,
        notebook(
            lab.folder, "rings.ipynb", "import kt_widgets as kt\nb = kt.Workbench('braid 1 -2 1 -2'); b"
        ),
    )
    lab.run(page)
    page.locator("select[data-set=ring]").select_option("Q")
    page.locator("section[data-when='ring=Q']").wait_for()
    field = page.locator("form[data-set=prime] input")
    field.fill("11")
    field.press("Enter")
    page.locator("section[data-when='ring=11']").wait_for()
    field.fill("12")
    field.press("Enter")
    page.locator("[role=alert]:visible").wait_for()
    assert page.locator("section[data-when='ring=11']").is_visible()


def test_start_notebook(lab: Any, chromium_page: Any) -> None:
    page = chromium_page
    shutil.copytree(NOTEBOOKS, lab.folder, dirs_exist_ok=True)
    lab.open(page, "start.ipynb")
    lab.run(page, seconds=180)
    bench = page.locator(".kt-workbench").first
    entry = bench.locator("td[data-place^='entry:2:']:not(.kt-zero)").first
    entry.click()
    place = entry.get_attribute("data-place")
    shown = "[w for w in [*Out.values(), *globals().values()] if type(w).__name__ == 'Workbench'][0]"
    wait_for(page, lab, f"{shown}.selected", repr(place))
    kinds = {name.split(":")[0] for name in places(bench.locator(".kt-linked[data-place]"))}
    assert kinds >= {"letter", "edge", "arc", "crossing", "relator", "generator"}
    slider = bench.locator("input[type=range]")
    slider.focus()
    page.keyboard.press("ArrowRight")
    bench.locator(".kt-now[data-place^='letter:']").first.wait_for(state="attached")
    assert bench.locator(".kt-caption").inner_text()
