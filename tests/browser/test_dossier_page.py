"""The page of a dossier, from disk and without network: focus, selection, stepping, print, narrow windows."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.figures.dossier_folder import dossier

pytestmark = pytest.mark.browser


@pytest.fixture(scope="module")
def address(tmp_path_factory: pytest.TempPathFactory) -> str:
    folder = tmp_path_factory.mktemp("dossier")
    dossier(Diagram.from_braid([1, -2, 1, -2]), folder)
    return (folder / "dossier.html").as_uri()


@pytest.fixture
def page(chromium_page: Any, address: str) -> Any:
    """The page, with the network off; anything it asks for but itself fails the test."""
    asked: list[str] = []
    chromium_page.context.set_offline(True)
    chromium_page.on("request", lambda request: asked.append(request.url))
    chromium_page.goto(address)
    chromium_page.locator("[data-stepper] input").wait_for()
    yield chromium_page
    assert asked == [address]


def lit(page: Any, kind: str = "kt-linked") -> set[str]:
    return set(page.locator(f".{kind}").evaluate_all("parts => parts.map(part => part.dataset.place)"))


# r1 is c a^-1 b^-1 a: c goes from e to t e, a^-1 back to e along the edge a, b^-1 on to t^-1 e, and the last
# a returns along t^-1 a. So the entry (a, r1) is t^-1 - 1, from the letters 2 and 4.
TIED = {
    "letter:1:2",
    "letter:1:4",
    "edge:a:0",
    "edge:a:-1",
    "arc:1",
    "crossing:1",
    "relator:1",
    "generator:a",
}


def test_pointing_at_an_entry_lights_what_belongs_to_it(page: Any) -> None:
    page.locator("td[data-place='entry:2:1:1']").hover()
    assert lit(page, "kt-focus") == {"entry:2:1:1"}
    assert lit(page) >= TIED
    assert not {place for place in lit(page) if place.startswith(("arc:", "crossing:"))} - TIED
    for view, place in (("diagram", "arc:1"), ("diagram", "crossing:1"), ("cover", "edge:a:-1")):
        part = page.locator(f"#{view} svg [data-place='{place}'].kt-linked").first
        assert part.is_visible()
    said = page.locator("#diagram .kt-says").inner_text()
    assert "letters 2, 4 of r1; edges t⁻¹ a, a;" in said
    assert "crossing 1" in said
    page.mouse.move(2, 2)
    assert lit(page) == set()


def test_clicking_keeps_the_light_and_another_click_ends_it(page: Any) -> None:
    entry = page.locator("td[data-place='entry:2:1:1']")
    entry.click()
    page.mouse.move(2, 2)
    assert lit(page) >= TIED
    entry.click()
    page.mouse.move(2, 2)
    assert lit(page) == set()


def test_pointing_at_the_diagram_lights_the_matrix(page: Any) -> None:
    page.locator("#diagram svg [data-place='crossing:2']").first.hover()
    assert {f"entry:2:{i}:2" for i in (1, 2, 4)} <= lit(page)
    assert "relator:2" in lit(page)


def test_stepping_through_the_letters(page: Any) -> None:
    caption, total = page.locator(".kt-caption"), page.locator(".kt-sum")
    forward = page.get_by_role("button", name="next letter")
    captions = [caption.inner_text()]
    for _ in range(4):
        forward.click()
        captions.append(caption.inner_text())
    assert len(set(captions)) == 5
    assert captions[1].startswith("c from e to t e")
    assert total.inner_text().startswith("∂f₁ = ")
    # The sum after the last letter is the column of the matrix.
    for row, name in enumerate("abcd", 1):
        entry = page.locator(f"td[data-place='entry:2:{row}:1']").inner_text()
        assert (entry == "0") == (name not in total.inner_text())
    slider = page.locator("[data-stepper] input")
    slider.focus()
    page.keyboard.press("Home")
    assert caption.inner_text() == captions[0]
    page.locator("[data-stepper] select").select_option("cell:3:0")
    assert "lifted from e" in caption.inner_text()
    assert caption.inner_text() != captions[0]


def test_keys_reach_every_entry(page: Any) -> None:
    page.locator("td[data-place='entry:2:1:1']").focus()
    assert lit(page, "kt-focus") == {"entry:2:1:1"}
    page.keyboard.press("ArrowRight")
    assert lit(page, "kt-focus") == {"entry:2:1:2"}
    page.keyboard.press("ArrowDown")
    assert lit(page, "kt-focus") == {"entry:2:2:2"}


@pytest.mark.parametrize("width", [420, 1200])
def test_nothing_is_wider_than_the_window(page: Any, width: int) -> None:
    page.set_viewport_size({"width": width, "height": 900})
    assert page.evaluate("document.documentElement.scrollWidth") <= width


def test_on_paper_the_controls_are_gone(page: Any, tmp_path: Path) -> None:
    page.emulate_media(media="print")
    assert not page.locator(".kt-tools").first.is_visible()
    assert not page.locator("[data-stepper]").is_visible()
    assert page.locator("#homology h3").count() == 5
    assert page.locator("#homology h3").last.is_visible()


def test_without_scripts_it_can_be_read(chromium: Any, address: str) -> None:
    context = chromium.new_context(java_script_enabled=False, offline=True)
    plain = context.new_page()
    plain.goto(address)
    assert plain.locator("#diagram svg").is_visible()
    assert plain.locator("td[data-place='entry:2:1:1']").is_visible()
    traces = plain.locator("[data-traces] [data-place^='letter:2:']")
    assert traces.count() > 0
    assert not traces.first.is_visible()
    context.close()
