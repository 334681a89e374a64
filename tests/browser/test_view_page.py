"""The script of linked views in a page without kernel: focus, keys, words, traces, export, themes, widths."""

from __future__ import annotations

import json
from importlib.resources import files
from pathlib import Path
from typing import Any

import pytest

from kt_widgets.covers.cover import Cover
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.figures import bodies
from kt_widgets.figures.cover_figure import cover_scene
from kt_widgets.figures.diagram_figure import diagram
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.links import links
from kt_widgets.figures.steps import steps
from kt_widgets.groups.presentations import Presentation

pytestmark = pytest.mark.browser

STATIC = files("kt_widgets.figures") / "static"
KNOT = Diagram.from_braid([1, -2, 1, -2])


@pytest.fixture
def page(chromium_page: Any, tmp_path: Path) -> Any:
    """Two copies of the same four views, as two independent pages would be."""
    x = KNOT.cover()
    strip = Drawing(cover_scene(x, [1, 2, 3, 4]))
    views = [
        bodies.picture(diagram(KNOT, preset="screen"), "diagram"),
        bodies.presentation(x.presentation) + '<p data-says="nothing is lit"></p>',
        bodies.stepper() + bodies.picture(strip, "cover", traces=True),
        bodies.matrix(x.chains(), 2) + bodies.homology(x),
    ]
    part = "".join(f"<div data-view>{body}</div>" for body in views)
    state = json.dumps({"links": links(x), "steps": steps(x)}).replace("<", "\\u003c")
    file = tmp_path / "page.html"
    file.write_text(
        f"<!doctype html><meta charset='utf-8'><title>views</title><style>{(STATIC / 'view.css').read_text()}"
        f"</style><body><main id='one'>{part}</main><main id='two'>{part}</main><script type='module'>"
        f"{(STATIC / 'view.js').read_text()}\nfor (const id of ['one', 'two']) "
        f"linkPage(document.getElementById(id), {state});</script>"
    )
    chromium_page.context.set_offline(True)
    chromium_page.goto(file.as_uri())
    chromium_page.wait_for_selector("#two .kt-view input[type=range]")
    return chromium_page


def places(parts: Any) -> set[str]:
    return set(parts.evaluate_all("parts => parts.map((part) => part.dataset.place)"))


@pytest.mark.parametrize(
    "place", ["entry:2:1:1", "letter:2:3", "crossing:3", "arc:2", "generator:a", "relator:4"]
)
def test_whatever_is_pointed_at_lights_what_is_linked(page: Any, place: str) -> None:
    part = page.locator(f"#one [data-place='{place}']").first
    if place.startswith("arc"):
        # The middle of its box may lie off the line: point at the line itself.
        box = part.locator(".kt-hit").evaluate(
            """hit => {
                const middle = hit.getPointAtLength(hit.getTotalLength() / 2);
                const p = middle.matrixTransform(hit.getScreenCTM());
                return [p.x, p.y];
            }"""
        )
        page.mouse.move(*box)
    else:
        part.hover()
    expected = set(links(KNOT.cover())[place])
    there = places(page.locator("#one [data-place]"))
    assert places(page.locator("#one .kt-linked")) == expected & there
    assert places(page.locator("#one .kt-focus")) == {place}
    assert page.locator("#two .kt-linked").count() == 0
    assert "—" in page.locator("#one [data-says]").inner_text()
    page.mouse.move(2, 2)
    page.locator("h3").first.hover()
    assert page.locator("#one .kt-linked").count() == 0
    assert page.locator("#one [data-says]").inner_text() == "nothing is lit"


def test_ids_are_unique_on_the_page(page: Any) -> None:
    ids = page.locator("[id]").evaluate_all("nodes => nodes.map((node) => node.id)")
    assert len(ids) == len(set(ids)) > 100


def test_one_tab_stop_per_view_and_arrows_inside(page: Any) -> None:
    stops = page.locator("#one [data-place][tabindex='0']")
    assert stops.count() == 4
    first = page.locator("#one .kt-view").last.locator("[data-place][tabindex='0']")
    first.focus()
    page.keyboard.press("End")
    last = page.evaluate("document.activeElement.dataset.place")
    assert last == "entry:2:4:4"
    page.keyboard.press("ArrowUp")
    assert page.evaluate("document.activeElement.dataset.place") == "entry:2:3:4"
    page.keyboard.press("ArrowLeft")
    assert page.evaluate("document.activeElement.dataset.place") == "entry:2:3:3"
    page.keyboard.press("Enter")
    assert places(page.locator("#one .kt-selected")) == {"entry:2:3:3"}
    assert places(page.locator("#one .kt-view").nth(2).locator(".trace:not(.kt-away)")) == {
        f"letter:3:{j}" for j in (1, 2, 3, 4)
    }
    page.keyboard.press("Escape")
    assert page.locator("#one .kt-selected").count() == 0


def test_the_parts_of_a_picture_are_all_reached_by_arrows(page: Any) -> None:
    picture = page.locator("#one .kt-view").first
    picture.locator("[data-place][tabindex='0']").focus()
    page.keyboard.press("Home")
    seen = set()
    for _ in range(20):
        seen.add(page.evaluate("document.activeElement.dataset.place"))
        page.keyboard.press("ArrowRight")
    assert seen == {*(f"arc:{i}" for i in range(1, 5)), *(f"crossing:{i}" for i in range(1, 5))}
    labels = picture.locator("[data-place][tabindex]").evaluate_all("parts => parts.map(p => p.ariaLabel)")
    assert {"arc 1", "crossing 4"} <= set(labels)


def test_stepping_reads_the_letters_of_every_relator(page: Any) -> None:
    slider = page.locator("#one input[type=range]")
    slider.focus()
    wanted = steps(KNOT.cover())
    following = page.locator("#one").get_by_role("button", name="next letter")
    for position, step in enumerate(wanted):
        assert page.locator("#one .kt-caption").inner_text() == step["caption"]
        assert page.locator("#one .kt-sum").inner_text() == step["sum_text"]
        now = places(page.locator("#one .kt-now"))
        assert ({step["letter"], step["edge"], step["entry"]} if step["letter"] else set()) <= now
        assert bool(now) == bool(step["letter"])
        if position + 1 < len(wanted):
            following.click()
    page.locator("#one").get_by_label("relator to be read").select_option("r2")
    assert page.locator("#one .kt-caption").inner_text() == wanted[5]["caption"]
    assert page.locator("#two .kt-now").count() == 0


def test_export_holds_the_trace_that_is_shown(page: Any, tmp_path: Path) -> None:
    view = page.locator("#one .kt-view").nth(2)
    page.locator("#one").get_by_label("relator to be read").select_option("r3")
    with page.expect_download() as download:
        view.locator("[data-act=svg]").click()
    assert download.value.suggested_filename == "cover.svg"
    text = Path(download.value.path()).read_text()
    assert "letter:3:1" in text
    assert "letter:1:1" not in text
    assert "kt-hit" not in text
    with page.expect_download() as download:
        view.locator("[data-act=png]").click()
    assert Path(download.value.path()).read_bytes().startswith(b"\x89PNG")


def test_coefficients_are_chosen_without_kernel(page: Any) -> None:
    choice = page.locator("#one select[data-set=ring]")
    assert page.locator("#one section[data-when='ring=Z']").is_visible()
    choice.select_option("3")
    assert page.locator("#one section[data-when='ring=3']").is_visible()
    assert not page.locator("#one section[data-when='ring=Z']").is_visible()
    assert page.locator("#two section[data-when='ring=Z']").is_visible()


def test_themes_and_widths(page: Any) -> None:
    def ink() -> int:
        colour = page.locator(".kt-view").first.evaluate("view => getComputedStyle(view).color")
        return sum(int(part) for part in colour[4:-1].split(","))

    assert ink() < 200
    page.emulate_media(color_scheme="dark")
    assert ink() > 500
    for width in (320, 600, 1600):
        page.set_viewport_size({"width": width, "height": 900})
        for view in page.locator("#one > .kt-view, #one > [data-view]").all():
            box = view.bounding_box()
            assert box["x"] + box["width"] <= width
        assert page.evaluate("document.documentElement.scrollWidth") <= width


def test_text_can_be_selected(page: Any) -> None:
    line = page.locator("#one ol.kt-words li").first
    line.evaluate("node => getSelection().selectAllChildren(node)")
    assert "⁻¹" in page.evaluate("getSelection().toString()")


def test_an_entry_that_is_zero_has_its_name_in_every_view(page: Any) -> None:
    # The words stand in another view than the matrix, and nothing is linked to this entry.
    page.locator("#one td[data-place='entry:2:3:2']").hover()
    assert page.locator("#one [data-says]").inner_text() == "entry (c, r2) of ∂2"


def test_the_entry_in_focus_is_legible_in_both_themes(page: Any) -> None:
    # Dark letters on the pale mark, whatever the theme and whether the entry's letter is being read.
    for scheme in ("light", "dark"):
        page.emulate_media(color_scheme=scheme)
        entry = page.locator("#one td[data-place='entry:2:1:1']")
        entry.hover()
        page.locator("#one input[type=range]").focus()
        page.keyboard.press("Home")
        page.keyboard.press("ArrowRight")
        page.keyboard.press("ArrowRight")
        entry.hover()
        assert entry.evaluate("cell => getComputedStyle(cell).color") == "rgb(27, 27, 31)"


def test_a_narrow_strip_is_not_blown_up(page: Any) -> None:
    x = Cover(Presentation.parse("< t, x | t x t^-1 = x^2 >"))
    strip = Drawing(cover_scene(x, [1]))
    body = bodies.picture(strip, "cover", traces=True)
    width = page.evaluate(
        """(body) => {
            document.querySelector("#one .kt-view").innerHTML = body;
            return document.querySelector("#one svg").getBoundingClientRect().width;
        }""",
        body,
    )
    assert abs(width - strip.scene.width * 96 / 72) < 1
