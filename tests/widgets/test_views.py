"""Views without a browser: what they send, how they fall back, how they fail, and that they go away."""

from __future__ import annotations

import gc
import json
import weakref
from typing import Any

import ipywidgets
import pytest
from ipywidgets.widgets.widget import _instances

import kt_widgets as kt
from kt_widgets.figures.drawing import Drawing
from kt_widgets.widgets import view as base
from kt_widgets.widgets.cover_view import CoverView
from kt_widgets.widgets.diagram_view import DiagramView
from kt_widgets.widgets.explanation_view import ExplanationView
from kt_widgets.widgets.homology_view import HomologyView
from kt_widgets.widgets.line_view import LineView
from kt_widgets.widgets.matrix_view import MatrixView
from kt_widgets.widgets.relator_view import RelatorView
from kt_widgets.widgets.subject import Subject
from kt_widgets.widgets.view import SHARED, View
from kt_widgets.widgets.workbench import Workbench

KINDS: list[type[View]] = [
    CoverView,
    DiagramView,
    ExplanationView,
    HomologyView,
    LineView,
    MatrixView,
    RelatorView,
]
VALUES = [
    "braid 1 -2 1 -2",
    "< a, b | a b a = b a b >",
    "< t, x | t x t^-1 = x^2 >",
    kt.Diagram.from_braid([1, 1]),
    kt.Diagram.parse("dowker 4 6 2").wirtinger(),
    kt.Cover(kt.Presentation.parse("< x, y | x^3 = y^2 >")),
    kt.Diagram.from_braid([], strands=2),
]


@pytest.mark.parametrize("kind", KINDS, ids=lambda kind: kind.__name__)
@pytest.mark.parametrize("value", VALUES, ids=str)
def test_every_view_shows_every_subject_with_fallbacks(kind: type[View], value: Any) -> None:
    view = kind(value)
    data, _ = view._repr_mimebundle_()
    assert {"text/plain", "image/png", "image/svg+xml", "application/vnd.jupyter.widget-view+json"} <= set(
        data
    )
    assert data["text/plain"] == repr(view)
    assert " at 0x" not in repr(view)
    assert isinstance(view.snapshot(), Drawing)
    assert view.body == kind(value).body
    json.dumps(view.get_state())
    view.close()


def test_formulas_fall_back_to_latex_and_pictures_do_not() -> None:
    for kind in (RelatorView, MatrixView, HomologyView):
        assert "text/latex" in kind("braid 1 1 1")._repr_mimebundle_()[0]
    for kind in (DiagramView, CoverView, Workbench):
        assert "text/latex" not in kind("braid 1 1 1")._repr_mimebundle_()[0]


@pytest.mark.parametrize(
    "text",
    ["", "braid", "braid 1 x", "knot 3", "< a, b | a b", "< a, b, c | a^2 b^-1 c^-2 >", "dowker 4 6 3"],
)
def test_wrong_text_is_answered_under_the_line_and_changes_nothing(text: str) -> None:
    bench = Workbench("braid 1 1 1")
    before = {view: (view.body, view.links, view.steps) for view in bench.views}
    bench.line.text = text
    assert bench.line.error
    assert bench.line.text == text
    assert bench.subject == Subject.of("braid 1 1 1")
    assert before == {view: (view.body, view.links, view.steps) for view in bench.views}
    bench.line.text = "braid 1 -2 1 -2"
    assert bench.line.error == ""
    assert bench.subject == Subject.of("braid 1 -2 1 -2")
    assert all(view.subject == bench.subject for view in bench.views)
    bench.close()


def test_a_wrong_value_is_refused_at_once() -> None:
    with pytest.raises(kt.KtError, match="accepted"):
        Workbench("braid 1 x")
    with pytest.raises(kt.KtError, match="type int cannot be shown"):
        Workbench(3)  # type: ignore[arg-type]


def test_an_error_does_not_repeat_a_long_text() -> None:
    bench = Workbench("braid 1 1 1")
    for text in ("x" * 100_000, "braid 1 " + "x" * 10_000):
        bench.line.text = text
        assert 0 < len(bench.line.error) < 300
    bench.close()


def test_wide_matrices_have_the_whole_width() -> None:
    bench = Workbench("braid 1 1 1")
    matrices = (bench.boundary2, bench.boundary1)
    assert not any("kt-wide" in view._dom_classes for view in matrices)
    bench.show("braid 1 1 1 1 1 1 1 1 1")
    assert all("kt-wide" in view._dom_classes and view in bench.children for view in matrices)
    bench.show("< a, b | a b a = b a b >")
    assert not any("kt-wide" in view._dom_classes for view in matrices)
    bench.close()


def test_indices_are_lowered_by_the_page_and_exponents_can_be_copied() -> None:
    view = RelatorView("< x1, x2 | x1 x2^-1 >")
    assert "<i>x</i><sub>2</sub>⁻¹" in view.body
    view.close()


def test_what_is_too_large_for_a_picture_is_said_in_its_place() -> None:
    bench = Workbench("< x, y | x^71 = y^70 >")
    assert "cannot be drawn" in bench.cover.body.replace("\n", " ")
    assert bench.cover.steps
    assert 'data-place="entry:2:1:1"' in bench.boundary2.body
    bench.close()


def test_weights_given_by_the_cover_stay_when_it_is_shown() -> None:
    bench = Workbench("braid 1 1 1")
    cover = kt.Cover(kt.Presentation.parse("< a, b | [a, b] >"), {"a": 2, "b": 3})
    bench.show(cover)
    assert bench.subject.cover.weights == {"a": 2, "b": 3}
    assert not bench.line.error
    bench.close()


def test_selected_is_observed_and_explained() -> None:
    bench = Workbench("braid 1 1 1")
    seen: list[str] = []
    bench.observe(lambda change: seen.append(change["new"]), "selected")
    # The browser's links set it in every view.
    for view in bench.views:
        view.selected = "entry:2:2:3"
    assert seen == ["entry:2:2:3"]
    assert bench.selected == "entry:2:2:3"
    assert "row b and column r3" in bench.explanation.body
    bench.show("< a | >")
    assert bench.selected == ""
    assert "<svg" not in bench.explanation.body
    bench.close()


def test_a_place_is_selected_from_python_too() -> None:
    bench = Workbench("braid 1 1 1")
    bench.selected = "letter:3:1"
    assert {view.selected for view in bench.views} == {"letter:3:1"}
    assert "column r3" in bench.explanation.body
    bench.close()


@pytest.mark.parametrize("place", ["entry:2:9:1", "entry:2:0:1", "entry:2:1:4", "letter:1:5", "letter:0:1"])
def test_a_place_that_does_not_exist_is_said_so(place: str) -> None:
    view = ExplanationView("braid 1 1 1")
    view.selected = place
    assert view.error == f"there is no {place} (at selected); accepted: a place shown in the views"
    view.selected = "entry:2:1:1"
    assert not view.error
    view.close()


def test_other_primes_are_worked_out_on_demand() -> None:
    view = HomologyView("braid 1 -2 1 -2")
    assert "ring=11" not in view.body
    view.prime = "11"
    assert view.ring == "11"
    assert 'data-when="ring=11"' in view.body
    view.prime = "12"
    assert "12" in view.error
    assert view.ring == "11"
    view.prime = "13"
    assert view.error == ""
    view.close()


def test_every_line_sent_is_answered() -> None:
    bench = Workbench("braid 1 1 1")
    for count, text in enumerate(["", "   ", "braid 1 -2 1 -2", "braid x"], start=1):
        bench.line.text = text
        assert bench.line.answered == count
    bench.homology.prime = "7"
    assert bench.homology.answered == 1
    bench.close()


def test_an_unexpected_error_is_shown_too(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.undo()
    view = LineView("braid 1 1 1")
    with base.reporting(view):
        raise ZeroDivisionError("division by zero")
    assert view.error == "ZeroDivisionError: division by zero"
    view.close()


def test_what_is_shared_is_linked_in_the_browser_only() -> None:
    bench = Workbench("braid 1 1 1")
    links = [part for part in bench._parts if isinstance(part, ipywidgets.widgets.widget_link.Link)]
    assert {link.source[1] for link in links} == set(SHARED)
    assert len(links) == len(SHARED) * (len(bench.views) - 1)
    bench.line.focus = "arc:1"
    assert bench.cover.focus == ""
    bench.close()


@pytest.mark.parametrize("kind", [*KINDS, Workbench], ids=lambda kind: kind.__name__)
def test_a_closed_view_goes_away(kind: type[View] | type[Workbench]) -> None:
    gc.collect()
    before = len(_instances)
    view = kind("braid 1 1 1")
    dead = weakref.ref(view)
    view.close()
    del view
    gc.collect()
    assert dead() is None
    assert len(_instances) == before


def test_a_split_link_and_a_code_of_each_notation_are_read() -> None:
    lines = [
        "braid 1 -2 1 -2",
        "gauss 1 -2 3 -1 2 -3 signs + + +",
        "dowker 4 6 2",
        "planar 1,4,2,5; 5,2,6,3; 3,6,4,1",
    ]
    for line in lines:
        assert Subject.of(line).diagram == kt.Diagram.parse(line)
