"""What a diagram derives from its code, and its behaviour as a value."""

from __future__ import annotations

import copy
import pickle
import time
from dataclasses import FrozenInstanceError

import pytest

from kt_widgets.diagrams import Diagram
from kt_widgets.diagrams.entries import check_planar
from kt_widgets.errors import DiagramError, ParseError
from kt_widgets.text.portable import read

EXAMPLES = [
    Diagram.from_braid([1, 1, 1]),
    Diagram.from_braid([1, -2, 1, -2]),
    Diagram.from_braid([1, -2, 1, -2, 1, -2]),
    Diagram.from_braid([1, 1, 3, -3], 6),
    Diagram.from_braid([-1, 2]),
    Diagram.from_dowker([4, 8, -12, 2, 14, 16, -6, 10]),
    Diagram([(1, 3, 2, 4), (2, 3, 1, 4)], [1, -1]),
    Diagram([], circles=2),
]


@pytest.mark.parametrize("d", EXAMPLES, ids=repr)
def test_value(d: Diagram) -> None:
    d.wirtinger()
    for again in (pickle.loads(pickle.dumps(d)), copy.deepcopy(d), Diagram.parse(str(d)), read(d.to_json())):
        assert again == d
        assert hash(again) == hash(d)
    assert pickle.loads(pickle.dumps(d)).source == d.source
    assert read(d.to_json()).source == d.source
    assert Diagram.parse(d.source) == d
    assert len(repr(d)) < 120
    with pytest.raises(FrozenInstanceError):
        d.signs = ()  # type: ignore[misc]


@pytest.mark.parametrize("d", EXAMPLES, ids=repr)
def test_derived_data_fit_together(d: Diagram) -> None:
    n = len(d.crossings)
    assert [e for c in d.components for e in c.edges] == list(range(1, 2 * n + 1))
    assert sorted(e for a in d.arcs for e in a.edges) == list(range(1, 2 * n + 1))
    assert [a for c in d.components for a in c.arcs] == [a.number for a in d.arcs]
    for component in d.components:
        first = d.arcs[component.arcs[0] - 1]
        assert first.component == component.number
        assert component.edges[:1] == () or component.edges[0] in first.edges
    for crossing in d.crossings:
        under_in, right, under_out, left = crossing.edges
        assert d.arcs[crossing.under_in - 1].edges[-1] == under_in
        assert d.arcs[crossing.under_out - 1].edges[0] == under_out
        over = d.arcs[crossing.over_arc - 1].edges
        incoming, outgoing = (left, right) if crossing.sign > 0 else (right, left)
        at = over.index(incoming)
        # a component that never goes under closes up inside its arc
        assert over[(at + 1) % len(over)] == outgoing
    crossing_pieces = len(d.pieces) - d.circles
    assert len(d.faces) == n + 2 * crossing_pieces
    sides = [side for face in d.faces for side in face.boundary]
    assert sorted(sides) == sorted((e, s) for e in range(1, 2 * n + 1) for s in (1, -1))
    assert sorted(c for piece in d.pieces for c in piece) == [c.number for c in d.components]
    assert d.writhe == sum(c.sign for c in d.crossings)


@pytest.mark.parametrize("d", EXAMPLES, ids=repr)
def test_mirror_and_reverse(d: Diagram) -> None:
    for other, writhe in ((d.mirror(), -d.writhe), (d.reverse(), d.writhe)):
        check_planar(other.slots, other.signs)
        assert Diagram.parse(str(other)) == other
        assert other.writhe == writhe
        assert [len(c.edges) for c in other.components] == [len(c.edges) for c in d.components]
    assert d.mirror().mirror() == d == d.reverse().reverse()
    assert d.mirror().reverse() == d.reverse().mirror()
    # the mirror image passes over where the diagram passes under, in the same order
    negated = tuple(tuple(-x for x in labels) for labels in d.to_gauss()[0])
    assert d.mirror().to_gauss() == (negated, tuple(-s for s in d.signs))
    backwards = tuple(labels[:0:-1] + labels[:1] for labels in d.reverse().to_gauss()[0])
    assert sorted(map(sorted, backwards)) == sorted(map(sorted, d.to_gauss()[0]))
    assert d.reverse().to_gauss()[0] == tuple(labels[::-1] for labels in d.to_gauss()[0])


def test_component_that_never_goes_under_has_one_arc() -> None:
    d = Diagram([(1, 3, 2, 4), (2, 3, 1, 4)], [1, -1])
    assert [len(c.arcs) for c in d.components] == [2, 1]
    assert d.arcs[2].edges == (3, 4)


def test_linking_numbers() -> None:
    # By hand: half the sum of the signs of the mixed crossings.
    assert Diagram.from_braid([1, 1]).linking_matrix() == ((0, 1), (1, 0))
    assert Diagram.from_braid([-1, -1, -1, -1]).linking_matrix() == ((0, -2), (-2, 0))
    chain = Diagram.from_braid([1, 1, -2, -2], 4)
    assert chain.linking_matrix() == ((0, 1, 0, 0), (1, 0, -1, 0), (0, -1, 0, 0), (0, 0, 0, 0))


def test_same_diagram_finds_and_refuses() -> None:
    knot = Diagram.from_braid([1, 1, 1, -2, 1, -2])
    turned = Diagram.from_braid([-2, 1, -2, 1, 1, 1])
    found = knot.same_diagram(turned)
    assert found is not None
    assert sorted(found.crossings) == list(range(1, 7))
    for row, target in zip(knot.slots, found.crossings, strict=True):
        assert tuple(found.edges[e - 1] for e in row) == turned.slots[target - 1]
    assert knot.same_diagram(knot.mirror()) is None
    assert knot.same_diagram(Diagram.from_braid([1, 1, 1, 1, -2, -2])) is None
    both = Diagram.from_braid([1, 1, 1, 3, -3, 3, -3], 5)
    other_way = Diagram.from_braid([1, -1, 1, -1, 3, 3, 3], 5)
    assert len(both.pieces) == 3
    assert both.same_diagram(other_way)
    circle = Diagram([], circles=1)
    assert circle.same_diagram(circle)


def test_trefoil_diagram_is_its_own_reverse() -> None:
    # A half-turn of the sphere about the axis through a crossing reverses both strands there.
    d = Diagram.from_braid([1, 1, 1])
    assert d.same_diagram(d.reverse())


def test_large_diagrams_are_fast() -> None:
    start = time.perf_counter()
    d = Diagram.from_braid([1, -2, 3] * 667)
    assert len(d.wirtinger().relators) == 2001
    assert time.perf_counter() - start < 5  # 0.02 s here; a machine under load gets its time


def test_malformed_json() -> None:
    text = Diagram.from_braid([1, 1]).to_json()
    with pytest.raises(ParseError):
        read(text.replace('"circles": 0', '"circle": 0'))
    with pytest.raises(DiagramError):
        read(text.replace("[1, 1]", "[1, -1]"))
    with pytest.raises(DiagramError):
        read(text.replace('"circles": 0', '"circles": "0"'))
