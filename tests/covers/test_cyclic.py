"""Finite cyclic covers: against chain complexes over Z, subgroups by coset enumeration, product formulas."""

from __future__ import annotations

import json
from dataclasses import replace
from math import gcd, prod

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st
from sympy.combinatorics.fp_groups import FpGroup, reidemeister_presentation
from sympy.combinatorics.free_groups import free_group
from sympy.matrices.normalforms import invariant_factors

from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.covers.cover import Cover
from kt_widgets.covers.cyclic import CyclicCoverCertificate
from kt_widgets.diagrams import Diagram
from kt_widgets.errors import AlgebraError, CertificateError, KtError, LimitError, ParseError
from kt_widgets.groups.presentations import Presentation
from kt_widgets.groups.words import Word
from kt_widgets.testing.strategies import knots, weighted_presentations, words
from kt_widgets.text.portable import read

TREFOIL = Presentation.parse("< a, b | a b a = b a b >")
FIGURE_EIGHT = "< x, y | x^-1 y x y^-1 x = y x^-1 y x y^-1 >"

few = settings(deadline=None, max_examples=40)


def group(rows: list[list[int]], generators: int) -> tuple[int, ...]:
    """The cokernel of an integer matrix (rows are generators), by sympy."""
    if not rows or not rows[0]:
        return (0,) * generators
    factors = [abs(int(d)) for d in invariant_factors(sympy.Matrix(rows), domain=sympy.ZZ)]
    free = generators - sum(1 for d in factors if d)
    return tuple(d for d in factors if d > 1) + (0,) * free


def lifted(word: Word, weights: dict[str, int], n: int, start: int) -> tuple[dict[tuple[str, int], int], int]:
    """The edges of the n-fold cover that a word passes, and the sheet where it ends; naive on purpose."""
    at, edges = start, {}
    for name, sign in word:
        if sign > 0:
            edge, at = (name, at), (at + weights[name]) % n
        else:
            at = (at - weights[name]) % n
            edge = (name, at)
        edges[edge] = edges.get(edge, 0) + sign
    return edges, at


def naive(x: Cover, n: int, meridians: tuple[Word, ...] = ()) -> tuple[int, ...]:
    """H_1 of the n-fold cover as a cell complex with n vertices: torsion of C_1/im d_2, and its rank."""
    names, weights = x.presentation.generators, x.weights
    edges = [(name, k) for name in names for k in range(n)]
    columns = []
    for word in x.presentation.boundary_words:
        columns += [lifted(word, weights, n, k)[0] for k in range(n)]
    for word in meridians:
        for k in range(n):
            power, end = lifted(word, weights, n, k)
            while end != k:
                more, end = lifted(word, weights, n, end)
                power = {e: power.get(e, 0) + more.get(e, 0) for e in {*power, *more}}
            columns.append(power)
    second = group([[c.get(e, 0) for c in columns] for e in edges], len(edges))
    components = gcd(n, *weights.values())
    return second[: len(second) - (n - components)]


@few
@given(weighted_presentations(), st.integers(1, 5))
def test_unbranched_covers_against_their_cells(pair, n):
    x = Cover(*pair)
    c = x.cyclic_cover(n)
    assert c.invariant_factors() == naive(x, n)
    assert c.order() == prod(c.invariant_factors())


@few
@given(weighted_presentations(), st.integers(1, 5), st.data())
def test_branched_covers_over_any_words_against_their_cells(pair, n, data):
    x = Cover(*pair)
    meridians = tuple(data.draw(st.lists(words(pair[0].generators, 4), min_size=1, max_size=2)))
    assert x.branched_cover(n, meridians).invariant_factors() == naive(x, n, meridians)


@few
@given(knots(), st.integers(1, 5))
def test_covers_of_knots(d, n):
    x = d.cover()
    branched, unbranched = x.branched_cover(n), x.cyclic_cover(n)
    assert unbranched.invariant_factors() == (*branched.invariant_factors(), 0)
    assert branched.modulus() * LaurentPolynomial([-1, 1]) == unbranched.modulus()
    assert branched.modulus()(1) == n
    # R. H. Fox, Free differential calculus III, Ann. of Math. 64 (1956), from memory; infinite where it is 0.
    t = sympy.Symbol("t")
    nu = sum(t**k for k in range(n))
    delta = x.order()._sympy_()
    value = sympy.resultant(nu, delta, t) if n > 1 else 1
    assert branched.order() == abs(int(value))


@few
@given(st.lists(st.sampled_from([1, -1, 2, -2]), max_size=6), st.integers(1, 4))
def test_branched_covers_of_links_against_their_cells(word, n):
    x = Diagram.from_braid(word, 3).cover()
    c = x.branched_cover(n)
    assert c.invariant_factors() == naive(x, n, c.meridians)
    assert x.cyclic_cover(n).invariant_factors() == naive(x, n)
    assert c.certificate().verify()


GROUPS = [
    (TREFOIL, None),
    (Presentation.parse(FIGURE_EIGHT), None),
    (Presentation.parse("< x, y | x^3 = y^2 >"), None),
    (Presentation.parse("< t, x | t x t^-1 = x^2 >"), None),
    (Presentation.parse("< a, b | [a, b] >"), {"a": 1, "b": 1}),
    (Presentation.parse("< a, b, c | [a, b], [b, c] >"), {"a": 1, "b": 2, "c": 0}),
]


@pytest.mark.parametrize(("p", "weights"), GROUPS)
@pytest.mark.parametrize("n", [1, 2, 3, 4])
def test_unbranched_covers_against_subgroups(p, weights, n):
    """The kernel of the map to Z/n by coset enumeration and Reidemeister-Schreier, by sympy, abelianised."""
    x = Cover(p, weights)
    free, *letters = free_group(", ".join(p.generators))
    of = dict(zip(p.generators, letters, strict=True))

    def element(word: Word):
        return prod((of[name] ** sign for name, sign in word), start=free.identity)

    whole = FpGroup(free, [element(r) for r in p.relators])
    # Schreier generators of the kernel for the transversal 1, s, ..., s^(n-1), s of weight 1.
    s = next(w for k in range(-3, 4) for a in letters for b in letters if weight(w := a * b**k, x) == 1)
    subgroup = [
        g
        for k in range(n)
        for name, a in of.items()
        if (g := s**k * a * s ** -((k + x.weights[name]) % n)) != free.identity
    ]
    subgroup.append(s**n)
    assert whole.coset_enumeration(subgroup).compress() is None
    assert whole.index(subgroup) == n
    generators, relators = reidemeister_presentation(whole, subgroup)
    rows = [[r.exponent_sum(g) for r in relators] for g in generators]
    assert x.cyclic_cover(n).invariant_factors() == group(rows, len(generators))


def weight(element, x: Cover) -> int:
    return sum(x.weights[str(symbol)] * exponent for symbol, exponent in element.array_form)


def test_weights_with_a_common_divisor_give_several_components():
    p = Presentation.parse("< a, b | [a, b] >")
    x = Cover(p, {"a": 2, "b": 4})
    # over Z/4: two tori, over Z/3: one
    assert x.cyclic_cover(4).invariant_factors() == (0,) * 4
    assert x.cyclic_cover(3).invariant_factors() == (0,) * 2
    assert Cover(p, {"a": 0, "b": 0}).cyclic_cover(3).invariant_factors() == (0,) * 6


def test_ordinary_ones():
    empty = Cover(Presentation.parse("< a | >"), {"a": 1})
    assert empty.cyclic_cover(5).invariant_factors() == (0,)
    assert empty.branched_cover(5, ["a"]).invariant_factors() == ()
    assert empty.branched_cover(5, ["a"]).order() == 1
    # one component of two: the other one's tori stay
    link = Diagram.from_braid([1, 1]).cover()
    assert link.branched_cover(2, ["a"]).invariant_factors() == (0,)
    unlink = Diagram([], circles=2).cover()
    assert unlink.branched_cover(4).invariant_factors() == (0, 0, 0)
    assert unlink.branched_cover(4).order() == 0
    p = Cover(Presentation.parse("< a, b | a^2 >"), {"a": 0, "b": 1})
    assert p.cyclic_cover(2).invariant_factors() == (2, 2, 0)


def test_marks_survive_simplification():
    p, _ = Diagram.from_braid([1, -2, 1, -2]).wirtinger().simplified()
    assert Cover(p).branched_cover(3).invariant_factors() == (4, 4)


def test_refusals():
    x = Cover(TREFOIL)
    for n in (0, -1, 2.0, True, "2"):
        for make in (x.cyclic_cover, lambda k: x.branched_cover(k, ["a"])):
            with pytest.raises(AlgebraError, match="fold cover"):
                make(n)
    with pytest.raises(AlgebraError, match="needs meridians"):
        x.branched_cover(2)
    with pytest.raises(AlgebraError, match="needs meridians"):
        x.branched_cover(2, [])
    with pytest.raises(AlgebraError, match="one text"):
        x.branched_cover(2, "ab")
    with pytest.raises(ParseError):
        x.branched_cover(2, ["z"])
    with pytest.raises(KtError):
        x.branched_cover(2, [Word.parse("z")])
    with pytest.raises(LimitError):
        x.cyclic_cover(1_000_000).invariant_factors()


def test_how_they_look():
    c = Cover(TREFOIL).branched_cover(3, ["a"])
    assert str(c) == "3-fold branched cyclic cover, H_1 = Z/2 + Z/2"
    assert c._repr_latex_() == r"$H_1 = \mathbb{Z}/2 \oplus \mathbb{Z}/2$"
    assert repr(c).startswith("<3-fold branched cyclic cover of Cover(")
    assert str(Cover(TREFOIL).branched_cover(5, ["a"])).endswith("H_1 = 0")


# Certificates


CERTIFIED = [
    lambda: Cover(TREFOIL).branched_cover(3, ["a"]),
    lambda: Diagram.from_braid([1, -2, 1, -2]).cover().branched_cover(4),
    lambda: Diagram.from_braid([1, 1]).cover().branched_cover(3, ["a"]),
    lambda: Cover(Presentation.parse("< x, y | x^3 = y^2 >")).cyclic_cover(6),
]


@pytest.mark.parametrize("make", CERTIFIED)
def test_certificates(make):
    cover = make()
    certificate = cover.certificate()
    assert certificate.verify()
    assert certificate.factors == cover.invariant_factors()
    again = read(certificate.to_json())
    assert isinstance(again, CyclicCoverCertificate)
    assert again == certificate
    assert again.verify()
    for name in ("matrix", "P", "P_inverse", "Q", "Q_inverse", "core"):
        old = getattr(certificate, name)
        for i in range(old.shape[0]):
            for j in range(old.shape[1]):
                wrong = old + LaurentMatrix.from_entries({(i, j): LaurentPolynomial([1, 1])}, old.shape)
                with pytest.raises(CertificateError) as caught:
                    replace(certificate, **{name: wrong}).verify()
                assert caught.value.where
    for i in range(len(certificate.factors)):
        changed = list(certificate.factors)
        changed[i] += 1
        with pytest.raises(CertificateError, match="factor"):
            replace(certificate, factors=tuple(changed)).verify()
    for wrong_n in (certificate.n + 1, 0):
        with pytest.raises(CertificateError):
            replace(certificate, n=wrong_n).verify()
    with pytest.raises(CertificateError):
        replace(certificate, factors=(*certificate.factors, 0)).verify()


def test_malformed_certificates_are_refused():
    document = json.loads(CERTIFIED[0]().certificate().to_json())
    for key, value in (("reduced", 1), ("n", "3"), ("smith", {}), ("factors", 5)):
        changed = json.loads(json.dumps(document))
        changed["data"][key] = value
        with pytest.raises(ParseError):
            read(json.dumps(changed))
