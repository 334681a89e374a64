"""The Wirtinger presentation, meridians and longitudes.

A wrong crossing law leaves the Alexander polynomial and the ideals as they are; only the peripheral words
notice. So each knot's longitude must commute with its meridian in every finite quotient that a naive search
finds, and a law that is deliberately wrong must be caught by the very same search.
"""

from __future__ import annotations

import pytest

from kt_widgets.diagrams import Diagram
from kt_widgets.diagrams import wirtinger as law
from kt_widgets.errors import DiagramError
from kt_widgets.groups.words import Word
from kt_widgets.places import Place
from kt_widgets.testing.quotients import CLASSES, commute, quotients


def commuting(d: Diagram, longitude: Word) -> list[bool]:
    """For each quotient found, whether the word commutes with the meridian there."""
    return [commute(d.meridian(), longitude, images) for images in quotients(d.wirtinger())]


KNOTS = {
    "right-handed trefoil": [1, 1, 1],
    "left-handed trefoil": [-1, -1, -1],
    "figure-eight": [1, -2, 1, -2],
    "T(2,5)": [1, 1, 1, 1, 1],
    "T(3,4)": [1, 2] * 4,
    "8_20": [1, 1, 1, -2, -1, -1, -1, -2],
    "granny": [1, 1, 1, 2, 2, 2],
    "square": [1, 1, 1, -2, -2, -2],
    "figure-eight with kinks": [1, -2, 1, -2, 3, -4],
}


@pytest.mark.parametrize("word", KNOTS.values(), ids=KNOTS.keys())
def test_longitudes_commute_with_meridians(word: list[int]) -> None:
    for d in (
        Diagram.from_braid(word),
        Diagram.from_braid(word).reverse(),
        Diagram.from_braid(word).mirror(),
    ):
        verdicts = commuting(d, d.longitude())
        assert len(verdicts) > len(CLASSES)  # more than the cyclic quotients
        assert all(verdicts)


def test_a_wrong_crossing_law_is_caught_here_but_not_by_the_polynomial(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    right = {name: Diagram.from_braid(word).alexander_polynomial() for name, word in KNOTS.items()}
    relator = law.relator
    monkeypatch.setattr(
        law, "relator", lambda over, enters, leaves, sign: relator(over, enters, leaves, -sign)
    )
    caught = set()
    for name, word in KNOTS.items():
        d = Diagram.from_braid(word)
        assert d.alexander_polynomial() == right[name]
        if not all(commuting(d, d.longitude())):
            caught.add(name)
    assert caught >= {"right-handed trefoil", "left-handed trefoil", "T(2,5)", "8_20", "granny", "square"}


@pytest.mark.parametrize("word", [[1, 1, 1], [1, 1, 1, -2, -1, -1, -1, -2]])
def test_a_longitude_read_backwards_is_caught(word: list[int]) -> None:
    d = Diagram.from_braid(word)
    backwards = Word(d.longitude().letters[::-1])
    assert not all(commuting(d, backwards))


@pytest.mark.parametrize(("p", "q"), [(2, 3), (2, 9), (3, 4)])
@pytest.mark.parametrize("sign", [1, -1])
def test_fibre_slope_of_torus_knots_pins_the_handedness(p: int, q: int, sign: int) -> None:
    # A regular fibre on the boundary of a neighbourhood of T(p, q) runs along the knot and links it pq times,
    # so that longitude * meridian^(pq) is central for the right-handed knot (Burde, Zieschang, Heusener,
    # Knots, ch. 3, from memory). With products or signs the other way round it would be meridian^(-pq).
    d = Diagram.from_braid([sign * i for i in range(1, p)] * q)
    fibre, other = (
        Word((*d.longitude().letters, *(d.meridian() ** (e * p * q)).letters)) for e in (sign, -sign)
    )
    generators = [Word(((name, 1),)) for name in d.wirtinger().generators]
    found = list(quotients(d.wirtinger()))
    assert all(commute(fibre, g, images) for images in found for g in generators)
    assert not all(commute(other, g, images) for images in found for g in generators)


# the words themselves


def test_trefoil_by_hand() -> None:
    # Arcs a = edges 1 2, b = 3 4, c = 5 6; at crossing 1 edge 4 (b) goes under a and leaves as edge 5 (c).
    d = Diagram.from_braid([1, 1, 1])
    assert [arc.edges for arc in d.arcs] == [(1, 2), (3, 4), (5, 6)]
    p = d.wirtinger()
    assert str(p) == "< a, b, c | c a^-1 b^-1 a, b c^-1 a^-1 c, a b^-1 c^-1 b >"
    assert str(d.mirror().wirtinger().boundary_words[0]).count("^-1") == 2
    assert p.place_of("relator", 2) == Place("crossing", (2,))
    assert p.place_of("generator", "c") == Place("arc", (3,))
    assert dict(p.marks) == {"meridian:1": Word.parse("a"), "longitude:1": Word.parse("c a b a^-3")}


def test_negative_crossing_by_hand() -> None:
    # One kink -1: the under-strand enters from below left (edge 1) and leaves as edge 2, over it edge 2 to 1.
    d = Diagram.from_braid([-1])
    assert d.slots == ((1, 2, 2, 1),)
    assert d.wirtinger().boundary_words == (Word.parse("a a a^-1 a^-1"),)
    assert d.longitude() == Word.parse("a^-1 a")


def test_names_avoid_the_variable() -> None:
    assert Diagram.from_braid([1] * 19).wirtinger().generators[-1] == "s"
    names = Diagram.from_braid([1] * 21).wirtinger().generators
    assert (names[0], names[-1], len(names)) == ("a1", "a21", 21)


def test_all_relators_are_kept_in_the_order_of_the_crossings() -> None:
    d = Diagram.from_braid([1, -2, 1, -2])
    p = d.wirtinger()
    assert len(p.relators) == 4
    for crossing, word in zip(d.crossings, p.boundary_words, strict=True):
        over, enters, leaves = (
            p.generators[arc - 1] for arc in (crossing.over_arc, crossing.under_in, crossing.under_out)
        )
        sign = crossing.sign
        assert word.letters == ((leaves, 1), (over, -sign), (enters, -1), (over, sign))


def test_links_and_circles() -> None:
    d = Diagram.from_braid([1, 1, -2, -2], 4)
    p = d.wirtinger()
    assert [str(d.meridian(k)) for k in (1, 2, 3, 4)] == ["a", "b", "d", "e"]
    assert len(d.longitude(4)) == 0
    assert len(p.generators) == len(d.arcs) == 5
    # exponents of the longitude in the meridians of each component: its linking numbers
    component = {p.generators[arc.number - 1]: arc.component for arc in d.arcs}
    for i, row in enumerate(d.linking_matrix(), start=1):
        sums = [0] * 4
        for name, sign in d.longitude(i):
            sums[component[name] - 1] += sign
        assert tuple(sums) == row


@pytest.mark.parametrize("number", [0, 2, -1, 1.0, "1", True])
def test_components_that_do_not_exist(number: object) -> None:
    d = Diagram.from_braid([1, 1, 1])
    for peripheral in (d.meridian, d.longitude):
        with pytest.raises(DiagramError) as caught:
            peripheral(number)  # type: ignore[arg-type]
        assert caught.value.accepted
