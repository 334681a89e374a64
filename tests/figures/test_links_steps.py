"""Links, steps and bodies: symmetric, equal to the boundary matrix, deterministic, escaped."""

from __future__ import annotations

import re
from html.parser import HTMLParser
from typing import Any

import pytest
from hypothesis import given

from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.covers.cover import Cover
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.errors import AlgebraError, LimitError
from kt_widgets.figures import bodies
from kt_widgets.figures.explain_figure import explain
from kt_widgets.figures.links import MAX_LETTERS, links
from kt_widgets.figures.scene import Stroke
from kt_widgets.figures.steps import steps
from kt_widgets.groups.presentations import Presentation
from kt_widgets.testing.strategies import diagrams

TEXTS = ["< a, b | a b a = b a b >", "< x, y | x^3 = y^2 >", "< t, x | t x t^-1 = x^2 >", "< a | >"]


def covers() -> list[Cover]:
    return [*(Cover(Presentation.parse(text)) for text in TEXTS), Diagram.from_braid([1, -2, 1, -2]).cover()]


@pytest.mark.parametrize("x", covers(), ids=str)
def test_links_are_symmetric(x: Cover) -> None:
    found = links(x)
    for place, others in found.items():
        assert place not in others
        assert len(others) == len(set(others))
        for other in others:
            assert place in found[other]


def test_an_entry_is_linked_to_its_letters_edges_arc_and_crossing() -> None:
    d = Diagram.from_braid([1, -2, 1, -2])
    x = d.cover()
    found = links(x, d)
    for r, crossing in enumerate(d.crossings, 1):
        for i, g in enumerate(x.presentation.generators, 1):
            visits = [v for v in x.visits(r) if v.generator == g]
            if not visits:
                assert f"entry:2:{i}:{r}" not in found
                continue
            near = set(found[f"entry:2:{i}:{r}"])
            assert {str(v.letter) for v in visits} == {p for p in near if p.startswith("letter")}
            assert {str(v.edge) for v in visits} == {p for p in near if p.startswith("edge")}
            assert {p for p in near if p.startswith("arc")} == {f"arc:{i}"}
            assert {p for p in near if p.startswith("crossing")} == {f"crossing:{crossing.number}"}
    assert "component:1" in found["arc:2"]


@given(diagrams())
def test_the_last_sum_is_the_column_of_the_boundary(d: Diagram) -> None:
    x = d.cover()
    found = steps(x)
    boundary = x.chains().boundary(2)
    for r in range(1, len(x.presentation.boundary_words) + 1):
        mine = [step for step in found if step["cell"] == f"cell:{r}:0"]
        assert mine[0]["letter"] == ""
        assert [step["letter"] for step in mine[1:]] == [str(v.letter) for v in x.visits(r)]
        for i, g in enumerate(x.presentation.generators):
            assert LaurentPolynomial.parse(mine[-1]["sum"].get(g, "0")) == boundary[i, r - 1]


def test_relators_too_long_to_be_linked_are_refused() -> None:
    x = Cover(Presentation.parse(f"< a, b | a^{MAX_LETTERS} b^-{MAX_LETTERS} >"))
    for make in (links, steps):
        with pytest.raises(LimitError, match=str(MAX_LETTERS)):
            make(x)


class Checker(HTMLParser):
    """Counts tags, so that what is opened is closed; collects places."""

    void = frozenset({"input", "br", "path", "circle"})

    def __init__(self, text: str) -> None:
        super().__init__()
        self.stack: list[str] = []
        self.places: list[str] = []
        self.feed(text)
        self.close()
        assert not self.stack

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.places += [value for name, value in attrs if name == "data-place" and value]
        if tag not in self.void:
            self.stack.append(tag)

    def handle_endtag(self, tag: str) -> None:
        if tag not in self.void:
            assert self.stack.pop() == tag


def all_bodies(x: Cover) -> str:
    c = x.chains()
    return "".join(
        [
            bodies.presentation(x.presentation),
            bodies.matrix(c, 1),
            bodies.matrix(c, 2),
            bodies.homology(x),
            bodies.stepper(),
        ]
    )


@pytest.mark.parametrize("x", covers(), ids=str)
def test_bodies_are_well_formed_and_name_each_place(x: Cover) -> None:
    places = set(Checker(all_bodies(x)).places)
    for r, word in enumerate(x.presentation.boundary_words, 1):
        assert {f"letter:{r}:{j}" for j in range(1, len(word) + 1)} <= places
        assert {f"entry:2:{i}:{r}" for i in range(1, len(x.presentation.generators) + 1)} <= places
    assert all_bodies(x) == all_bodies(x)


def test_text_from_outside_is_escaped() -> None:
    from kt_widgets.figures.drawing import Drawing
    from kt_widgets.figures.scene import Label, Scene

    nasty = '<script>alert("1")</script>&'
    drawing = Drawing(Scene((Label("label", nasty, (5, 5)),), 10, 10, nasty, nasty))
    body = bodies.picture(drawing, nasty, nasty)
    assert "<script" not in body
    assert re.search(r'data-text="&lt;script&gt;', body)


def test_a_large_matrix_is_told_in_words() -> None:
    d = Diagram.from_braid([1] * 101)
    assert "101 × 101" in bodies.matrix(d.cover().chains(), 2)


def test_a_composite_number_is_no_field() -> None:
    with pytest.raises(AlgebraError):
        bodies.homology(covers()[0], ["Z", 4])


# The figure that explains an entry


def test_leaders_never_cross_and_stand_over_their_edges() -> None:
    x = Cover(Presentation.parse("< a, b | a b a^-1 b a b^-1 a^-2 b a b^-1 a b a^-1 b^-1 a b^-1 a^-1 >"))
    scene = explain(x.chains(), ("a", "r1")).scene
    leaders = [item for item in scene.items if isinstance(item, Stroke) and item.role == "leader"]
    letters = [v for v in x.visits(1) if v.generator == "a"]
    assert len(leaders) == 2 * len(letters)
    columns = []
    for item in leaders:
        (x0, _), (x1, _) = item.points
        assert x0 == x1
        columns.append(x0)
    assert len(set(columns)) == len(letters)


@pytest.mark.parametrize("x", covers()[:3], ids=str)
def test_the_terms_of_an_explanation_add_up_to_the_entry(x: Cover) -> None:
    c = x.chains()
    for i, g in enumerate(x.presentation.generators):
        scene = explain(c, (g, "r1")).scene
        total = scene.at(f"entry:2:{i + 1}:1")[0].text.strip("$").split("=")[-1]  # type: ignore[union-attr]
        assert LaurentPolynomial.parse(total) == c.boundary(2)[i, 0]


def test_an_entry_that_does_not_exist_is_refused() -> None:
    c = covers()[0].chains()
    for entry in [("z", "r1"), ("a", "r9"), (0, 1)]:
        with pytest.raises(AlgebraError):
            explain(c, entry)


@pytest.mark.parametrize("entry", ["a", ("a",), 5, ("a", "r1", 1)])
def test_what_is_no_entry_is_refused_with_an_example(entry: Any) -> None:
    c = Cover(Presentation.parse("< a, b | a b a = b a b >")).chains()
    with pytest.raises(AlgebraError, match=r"not the place of an entry.*accepted: .*\('a', 'r1'\)"):
        explain(c, entry)


def test_only_a_chain_complex_is_explained() -> None:
    x: Any = Cover(Presentation.parse("< a, b | a b a = b a b >"))
    with pytest.raises(AlgebraError, match="type Cover is not a chain complex; accepted: the chain complex"):
        explain(x, ("a", "r1"))
