"""Alexander polynomials of infinite families against closed formulas, and of all table knots at +-1.

The diagrams are built by naive code of this file, so that the program's own families are not used.
"""

from __future__ import annotations

import json
from fractions import Fraction
from itertools import pairwise
from math import gcd
from pathlib import Path

import pytest

from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.diagrams import Diagram

KNOTS = json.loads((Path(__file__).parent / "data" / "prime_knots.json").read_text(encoding="utf-8"))["knots"]
t = LaurentPolynomial.monomial(1)


# Torus knots: (t^pq - 1)(t - 1)/((t^p - 1)(t^q - 1)); Burde, Zieschang, Heusener, Knots, ch. 9 (from memory).

LARGE_TORUS = [(p, p + 1) for p in range(6, 21)] + [(2, 41), (3, 40), (5, 37), (7, 19), (11, 13), (13, 20)]


@pytest.mark.parametrize(("p", "q"), LARGE_TORUS)
def test_large_torus_knots(p: int, q: int) -> None:
    assert gcd(p, q) == 1
    expected = ((t ** (p * q) - 1) * (t - 1)).exact_division((t**p - 1) * (t**q - 1))
    d = Diagram.from_braid(list(range(1, p)) * q)
    assert len(d.crossings) == (p - 1) * q
    assert d.alexander_polynomial() == expected.symmetric_form()


# Diagrams from crossings that lie upright in the plane.

Corner = tuple[int, int, int]
"""A crossing, and one of its corners (1, 1), (1, -1), (-1, 1), (-1, -1): right or left, above or below."""


def walked(rising_over: list[bool], joined: dict[Corner, Corner]) -> Diagram:
    """The knot whose crossings are joined at these corners.

    At crossing c the strand that rises to the right is over if `rising_over[c]`. The code is read off on a
    walk; a crossing is positive if turning the over-strand counter-clockwise by less than 180 degrees gives
    the direction of the under-strand.
    """
    passes, directions = [], {}
    corner = start = (0, -1, -1)
    while True:
        c, x, y = corner
        over = rising_over[c] == (x == y)
        passes.append(c + 1 if over else -(c + 1))
        directions[c, over] = (-x, -y)
        corner = joined[c, -x, -y]
        if corner == start:
            break
    assert len(passes) == 2 * len(rising_over), "a link"
    signs = []
    for c in range(len(rising_over)):
        (a, b), (u, v) = directions[c, True], directions[c, False]
        signs.append(1 if a * v - b * u > 0 else -1)
    return Diagram.from_gauss([passes], signs)


def joins(pairs: list[tuple[Corner, Corner]]) -> dict[Corner, Corner]:
    return dict(pairs) | {b: a for a, b in pairs}


def four_plat(twists: list[int]) -> Diagram:
    """Strands 1 to 4 that twist in the middle, on the left, in the middle, ...; neighbours 12, 34 are capped.

    A positive entry is over-rising in the middle and under-rising on the left: then all crossings of positive
    entries alternate.
    """
    assert len(twists) % 2
    rising, pairs = [], []
    ends: list[Corner | int] = [0, 0, 1, 1]
    first: dict[int, Corner] = {}

    def join(end: Corner | int, corner: Corner) -> None:
        # A number stands for a cap below whose other end is not met yet.
        if not isinstance(end, int):
            pairs.append((end, corner))
        elif end in first:
            pairs.append((first[end], corner))
        else:
            first[end] = corner

    for k, twist in enumerate(twists):
        left = 0 if k % 2 else 1
        for _ in range(abs(twist)):
            c = len(rising)
            rising.append((twist > 0) == (left == 1))
            join(ends[left], (c, -1, -1))
            join(ends[left + 1], (c, 1, -1))
            ends[left : left + 2] = [(c, -1, 1), (c, 1, 1)]
    for a, b in (ends[:2], ends[2:]):
        # The fourth strand is never twisted, so that the last end of a cap may be met only here.
        if isinstance(a, int):
            a, b = b, a
        assert not isinstance(a, int)
        if isinstance(b, int):
            join(b, a)
        else:
            pairs.append((a, b))
    return walked(rising, joins(pairs))


def continued_fraction(p: int, q: int) -> list[int]:
    """p/q = a + 1/(b + 1/(...)), with an odd number of positive terms."""
    terms = []
    while q:
        terms.append(p // q)
        p, q = q, p % q
    return terms if len(terms) % 2 else [*terms[:-1], terms[-1] - 1, 1]


TWO_BRIDGE = [(p, q) for p in range(3, 48, 2) for q in range(1, p) if gcd(p, q) == 1]


@pytest.mark.parametrize("p", sorted({p for p, _ in TWO_BRIDGE}))
def test_two_bridge_knots(p: int) -> None:
    # Sum of (-1)^k t^(e_1 + ... + e_k), k = 0, ..., p - 1, with e_i = (-1)^floor(i q / p) and q odd:
    # R. Hartley, On two-bridged knot polynomials, J. Austral. Math. Soc. 28 (1979); J. Minkus, The branched
    # cyclic coverings of 2 bridge knots and links, Mem. Amer. Math. Soc. 255 (1982); from memory.
    for q in (q for a, q in TWO_BRIDGE if a == p):
        odd = q if q % 2 else q - p
        expected, exponent = LaurentPolynomial(), 0
        for k in range(p):
            expected = expected + (-1) ** k * t**exponent
            exponent += -1 if (k + 1) * odd // p % 2 else 1
        d = four_plat(continued_fraction(p, q))
        assert d.alexander_polynomial() == expected.symmetric_form()
        assert abs(d.alexander_polynomial()(-1)) == p


def test_a_long_two_bridge_knot() -> None:
    twists = [2] * 127 + [1, 1]
    p, q = 1, 0
    for a in reversed(twists):
        p, q = a * p + q, p
    d = four_plat(twists)
    assert len(d.crossings) == 256
    assert abs(d.alexander_polynomial()(-1)) == p


ODD_PRETZELS = [
    (1, 1, 1),
    (-3, 5, 7),
    (3, 5, 7),
    (-3, 3, 9),
    (5, -7, 11),
    (-5, -7, 3),
    (21, -33, 45),
    (101, 99, -51),
]


@pytest.mark.parametrize("twists", ODD_PRETZELS)
def test_odd_pretzels_of_three_columns(twists: tuple[int, int, int]) -> None:
    # ((pq + qr + rp)(t^2 - 2t + 1) + t^2 + 2t + 1)/4: W. B. R. Lickorish, An Introduction to Knot Theory,
    # ch. 6, from memory. (-3, 5, 7) has polynomial 1.
    rising, pairs, columns = [], [], []
    for twist in twists:
        column = range(len(rising), len(rising) + abs(twist))
        rising += [twist > 0] * len(column)
        for low, high in pairwise(column):
            pairs += [((low, -1, 1), (high, -1, -1)), ((low, 1, 1), (high, 1, -1))]
        columns.append(column)
    for left, right in zip(columns, columns[1:] + columns[:1], strict=True):
        pairs += [((left[-1], 1, 1), (right[-1], -1, 1)), ((left[0], 1, -1), (right[0], -1, -1))]
    p, q, r = twists
    form = p * q + q * r + r * p
    expected = (form * (t**2 - 2 * t + 1) + t**2 + 2 * t + 1).exact_division(LaurentPolynomial([4]))
    d = walked(rising, joins(pairs))
    assert d.alexander_polynomial() == expected.symmetric_form()
    if twists == (-3, 5, 7):
        assert d.alexander_polynomial() == 1


SUMS = [("3_1", "4_1"), ("9_46", "6_1"), ("8_19", "8_19"), ("10_124", "7_4"), ("10_161", "9_35")]


@pytest.mark.parametrize(("one", "other"), SUMS)
def test_connected_sums_multiply(one: str, other: str) -> None:
    # The closed braids share one strand: Burde, Zieschang, Heusener, Knots, ch. 8 (from memory).
    knots = {knot["name"]: knot for knot in KNOTS}
    a, b = knots[one], knots[other]
    shift = a["strands"] - 1
    word = a["braid"] + [i + shift if i > 0 else i - shift for i in b["braid"]]
    product = Diagram.from_braid(word).alexander_polynomial()
    factors = [Diagram.from_braid(k["braid"], k["strands"]).alexander_polynomial() for k in (a, b)]
    assert product == factors[0] * factors[1]


def test_a_sum_of_many_knots_multiplies() -> None:
    # 40 summands, some 380 crossings: large enough for values at roots of unity.
    word: list[int] = []
    expected, strands = LaurentPolynomial([1]), 1
    for knot in KNOTS[150:190]:
        shift = strands - 1
        word += [i + shift if i > 0 else i - shift for i in knot["braid"]]
        strands += knot["strands"] - 1
        expected = expected * Diagram.from_braid(knot["braid"], knot["strands"]).alexander_polynomial()
    assert Diagram.from_braid(word).alexander_polynomial() == expected


def colouring_determinant(d: Diagram) -> int:
    """|det| of the colouring matrix 2 over - under - under less a row and a column, by exact elimination."""
    size = len(d.crossings) - 1
    rows = [[Fraction(0)] * (size + 1) for _ in d.crossings]
    for row, c in zip(rows, d.crossings, strict=True):
        row[c.over_arc - 1] += 2
        row[c.under_in - 1] -= 1
        row[c.under_out - 1] -= 1
    product = Fraction(1)
    left = rows[:-1]
    for k in range(size):
        chosen = next((row for row in left if row[k]), None)
        if chosen is None:
            return 0
        left.remove(chosen)
        product *= chosen[k]
        for row in left:
            factor = row[k] / chosen[k]
            if factor:
                row[k:] = [x - factor * y for x, y in zip(row[k:], chosen[k:], strict=True)]
    return abs(int(product))


def test_all_table_knots_at_1_and_at_minus_1() -> None:
    # Symmetric, 1 at t = 1, and the determinant at t = -1: Burde, Zieschang, Heusener, Knots, ch. 8 (from
    # memory).
    wrong = []
    for knot in KNOTS:
        d = Diagram.from_planar_diagram(knot["planar_diagram"])
        f = d.alexander_polynomial()
        if f != f.conjugate() or f(1) != 1 or abs(f(-1)) != colouring_determinant(d):
            wrong.append(knot["name"])
    assert wrong == []
    assert len(KNOTS) == 249
