"""Polynomials, ideals and linking numbers against published tables and formulas.

The tables in `data/` name their sources at their tops: `prime_knots.json` (Rolfsen 1976, Conway 1970, Jones
1987, recalled from memory and cross-checked), `alexander_ideals.json` and `links.json` (computed by two
methods that agree).
"""

from __future__ import annotations

import json
from math import gcd
from pathlib import Path
from typing import Any

import pytest

from kt_widgets.algebra.ideals import Ideal
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.diagrams import Diagram

DATA = Path(__file__).parent / "data"


def load(name: str) -> Any:
    return json.loads((DATA / name).read_text(encoding="utf-8"))


KNOTS = load("prime_knots.json")["knots"]
IDEALS = load("alexander_ideals.json")["records"]
LINKS = load("links.json")["records"]
BY_NAME = {knot["name"]: knot for knot in KNOTS}


def from_braid(knot: dict[str, Any]) -> Diagram:
    return Diagram.from_braid(knot["braid"], knot["strands"])


def from_planar_diagram(knot: dict[str, Any]) -> Diagram:
    return Diagram.from_planar_diagram(knot["planar_diagram"])


def from_dowker(knot: dict[str, Any]) -> Diagram:
    return Diagram.from_dowker(knot["dowker"])


def from_gauss(knot: dict[str, Any]) -> Diagram:
    return Diagram.from_gauss(*from_planar_diagram(knot).to_gauss())


NOTATIONS = [from_braid, from_planar_diagram, from_dowker, from_gauss]


@pytest.mark.parametrize("make", NOTATIONS)
def test_alexander_polynomials_through_ten_crossings(make: Any) -> None:
    wrong = []
    for knot in KNOTS:
        breadth = len(knot["alexander"]) - 1
        expected = LaurentPolynomial(knot["alexander"], -breadth // 2)
        if make(knot).alexander_polynomial() != expected:
            wrong.append(knot["name"])
    assert wrong == []
    assert len(KNOTS) == 249


def reflected(d: Diagram) -> Diagram:
    """The diagram seen in a mirror that stands on the plane: crossings keep over and under, signs change."""
    slots = [(under_in, left, under_out, right) for under_in, right, under_out, left in d.slots]
    return Diagram(slots, [-sign for sign in d.signs], d.circles)


def test_codes_of_the_table_are_codes_of_one_diagram() -> None:
    # The planar and Dowker-Thistlethwaite codes were derived from one drawing of each knot, the latter
    # up to mirror image (of both kinds) and reversal.
    wrong = []
    for knot in KNOTS:
        planar, dowker = from_planar_diagram(knot), from_dowker(knot)
        variants = [v for d in (dowker, reflected(dowker)) for m in (d, d.mirror()) for v in (m, m.reverse())]
        if not any(planar.same_diagram(v) for v in variants):
            wrong.append(knot["name"])
    assert wrong == []


@pytest.mark.parametrize("record", IDEALS, ids=[record["name"] for record in IDEALS])
@pytest.mark.parametrize("make", NOTATIONS)
def test_alexander_ideals(record: dict[str, Any], make: Any) -> None:
    cover = make(BY_NAME[record["name"]]).cover()
    for k, basis in enumerate(record["ideals"], start=1):
        expected = Ideal([LaurentPolynomial(coefficients) for coefficients in basis])
        assert cover.alexander_ideal(k) == expected, k
        assert [list(f.coefficients) for f in cover.alexander_ideal(k).basis] == basis


def test_9_46_and_6_1_have_one_polynomial_and_two_second_ideals() -> None:
    one, other = from_braid(BY_NAME["9_46"]), from_braid(BY_NAME["6_1"])
    assert one.alexander_polynomial() == other.alexander_polynomial()
    assert str(one.cover().alexander_ideal(2)) == "(3, 1 + t)"
    assert str(other.cover().alexander_ideal(2)) == "(1)"


TORUS = [(p, q) for p in range(2, 6) for q in range(p + 1, 9) if gcd(p, q) == 1]


@pytest.mark.parametrize(("p", "q"), TORUS)
def test_torus_knots(p: int, q: int) -> None:
    # (t^pq - 1)(t - 1)/((t^p - 1)(t^q - 1)): Burde, Zieschang, Heusener, Knots, ch. 9 (from memory)
    t = LaurentPolynomial.monomial(1)
    numerator = (t ** (p * q) - 1) * (t - 1)
    expected = numerator.exact_division((t**p - 1) * (t**q - 1))
    word = list(range(1, p)) * q
    for d in (Diagram.from_braid(word), Diagram.from_braid([-i for i in word])):
        assert d.alexander_polynomial() == expected.symmetric_form()


@pytest.mark.parametrize("record", LINKS, ids=[record["name"] for record in LINKS])
def test_links(record: dict[str, Any]) -> None:
    braid = Diagram.from_braid(record["braid"], record["strands"])
    again = Diagram.from_gauss(*braid.to_gauss())
    matrix = tuple(map(tuple, record["linking_matrix"]))
    # For two or more components the polynomial of the total map is (t - 1) Delta(t, ..., t): J. Milnor, A
    # duality theorem for Reidemeister torsion, Ann. of Math. 76 (1962); G. Torres 1953 (from memory).
    at_t = record["multivariable_alexander"]
    for name in "xyz":
        at_t = at_t.replace(name, "t")
    expected = LaurentPolynomial.parse(at_t) * LaurentPolynomial.parse("t - 1")
    for d in (braid, again, Diagram.parse(str(braid)), Diagram.from_dowker(braid.to_dowker())):
        assert len(d.components) == record["components"]
        assert d.alexander_polynomial() == expected.normal_form()
    for d in (braid, again, Diagram.parse(str(braid))):
        assert d.linking_matrix() == matrix
    negative = tuple(tuple(-entry for entry in row) for row in matrix)
    assert braid.mirror().linking_matrix() == negative
    assert Diagram.from_dowker(braid.to_dowker()).linking_matrix() in (matrix, negative)


def test_split_links_have_polynomial_zero() -> None:
    # H_1 of the cover has positive rank (R. H. Crowell, R. H. Fox, Introduction to Knot Theory, 1963).
    for d in (Diagram.from_braid([1, 1, 1], 3), Diagram.from_braid([1, 1, 3, 3]), Diagram([], circles=2)):
        assert d.alexander_polynomial() == LaurentPolynomial()
    assert Diagram([], circles=1).alexander_polynomial() == LaurentPolynomial([1])


@pytest.mark.parametrize("make", NOTATIONS)
def test_right_handed_torus_knot_of_five_crossings_and_9_46(make: Any) -> None:
    # The two subjects that dossiers are compared on, in all four notations.
    right = Diagram.from_braid([1, 1, 1, 1, 1])
    knot = {
        "braid": [1] * 5,
        "strands": 2,
        "planar_diagram": right.slots,
        "dowker": right.to_dowker()[0],
    }
    d = make(knot)
    assert d.writhe == 5
    assert str(d.alexander_polynomial()) == "t^-2 - t^-1 + 1 - t + t^2"
    assert d.cover().alexander_ideal(2) == Ideal([1])
