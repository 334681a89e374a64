"""Modules as vector spaces and groups with the operator t: certificates, quotients, primary parts."""

from __future__ import annotations

from dataclasses import fields, replace
from functools import reduce
from math import inf, prod
from operator import mul

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.algebra.factoring import irreducible_factors
from kt_widgets.algebra.integers import at_companion, integer_factors
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.diagrams import Diagram
from kt_widgets.errors import AlgebraError, CertificateError
from kt_widgets.modules.isomorphism import companion_form
from kt_widgets.modules.module import Module
from kt_widgets.modules.operator import Operator
from kt_widgets.testing.strategies import knots
from kt_widgets.text.portable import read

FIELDS = ("Q", 2, 3, 5)
few = settings(deadline=None, max_examples=60)
entry = st.builds(LaurentPolynomial, st.lists(st.integers(-2, 2), max_size=3), st.integers(-1, 1))
T = LaurentPolynomial.monomial(1)


@st.composite
def modules(draw):
    height, width = draw(st.integers(0, 2)), draw(st.integers(0, 3))
    grid = draw(st.lists(st.lists(entry, min_size=width, max_size=width), min_size=height, max_size=height))
    return Module(LaurentMatrix(grid, "Z", (height, width)))


def power(matrix: LaurentMatrix, n: int) -> LaurentMatrix:
    return reduce(lambda a, b: a @ b, [matrix] * n, LaurentMatrix.identity(matrix.shape[0], matrix.over))


@few
@given(modules(), st.sampled_from(FIELDS))
def test_over_fields(m, over):
    h = m.over(over)
    if h.rank():
        assert h.dimension() == inf
        with pytest.raises(AlgebraError, match="infinite"):
            h.operator()
        return
    o = h.operator()
    assert o.verify()
    assert o.size == h.dimension()
    assert o.characteristic_polynomial() == h.order()
    # the rational canonical form: companion matrices of the invariant factors, whose last one kills it
    blocks = [companion_form(f).target for f in h.invariant_factors()]
    expected = LaurentMatrix.blocks(LaurentMatrix.zero(0, 0, over), *blocks)
    assert o.witness.target == expected
    if h.invariant_factors():
        last = h.invariant_factors()[-1]
        terms = (power(o.matrix, e) * c for e, c in last.terms().items())
        assert reduce(lambda a, b: a + b, terms).is_zero()


@few
@given(modules())
def test_over_the_integers(m):
    if not m.is_finitely_generated_group():
        with pytest.raises(AlgebraError, match="not finitely generated as a group"):
            m.operator()
        return
    o = m.operator()
    assert o.verify()
    assert o.torsion.count(0) == m.over("Q").dimension()
    assert o.characteristic_polynomial() == m.over("Q").order().change_ring("Z") or m.rank()
    # quotients by t^n - 1, from the matrix of t and from the relations
    for n in (1, 2, 3):
        one = LaurentMatrix.identity(o.size)
        orders = [[d if i == j else 0 for j in range(o.size)] for i, d in enumerate(o.torsion)]
        rows = [[*row, *extra] for row, extra in zip((power(o.matrix, n) - one).rows, orders, strict=True)]
        ours = integer_factors(LaurentMatrix(rows, "Z", (o.size, 2 * o.size)))
        assert ours == integer_factors(at_companion(m.relations, T**n - 1))


@few
@given(modules(), st.sampled_from(FIELDS))
def test_primary_summands(m, over):
    h = m.over(over)
    witness = h.primary_form()
    assert witness.verify()
    summands = h.primary_summands()
    torsion = [s.factor for s in summands if s.factor]
    assert len(summands) - len(torsion) == h.rank()
    assert all(len(irreducible_factors(f)) == 1 for f in torsion)
    assert prod(torsion, start=LaurentPolynomial.constant(1, over)) == h.torsion_order()


@given(st.lists(entry, max_size=4), st.sampled_from(("Z", *FIELDS)))
def test_irreducible_factors(parts, over):
    f = reduce(mul, parts, T).change_ring(over)
    if not f:
        with pytest.raises(AlgebraError):
            irreducible_factors(f)
        return
    factors = irreducible_factors(f)
    product = reduce(mul, (p**e for p, e in factors), LaurentPolynomial.constant(1, over))
    assert product == f.normal_form()
    assert all(p == p.normal_form() and not p.is_unit() for p, _ in factors)


@few
@given(knots())
def test_knots(d):
    m = d.cover().chains().homology(1)
    delta = m.order()
    unit_ends = abs(delta.coefficient(0)) == 1
    assert m.is_finitely_generated_group() == unit_ends
    if unit_ends:
        o = m.operator()
        assert o.verify()
        assert o.torsion == (0,) * delta.span()
        assert o.characteristic_polynomial().unit_to(delta) is not None
        # the basis consists of cycles of the cover
        chains = d.cover().chains()
        for cycle in m.operator_basis():
            column = LaurentMatrix([[f] for f in cycle], "Z", (len(cycle), 1))
            assert (chains.boundary(1) @ column).is_zero()


ORDINARY = [
    ([["2"]], None),
    ([["0"]], None),
    ([["t - 2"]], None),
    ([["2t - 1"]], None),
    ([["2", "t - 2"]], ()),
    ([["2", "1 + t + t^2"]], (2, 2)),
    ([["4", "2 + 2t", "1 + t^2"]], (2, 4)),
    ([["1"]], ()),
    ([["t - 1"]], (0,)),
    ([["t^2 - 1", "2t - 2"]], (2, 0)),
    ([["(t - 2)(1 + t)", "(2t - 1)(1 + t)"]], (3, 0)),
    ([], ()),
]


@pytest.mark.parametrize(("rows", "torsion"), ORDINARY)
def test_ordinary_modules(rows, torsion):
    m = Module.from_matrix(rows)
    assert m.is_finitely_generated_group() == (torsion is not None)
    if torsion is not None:
        o = m.operator()
        assert o.torsion == torsion
        assert o.verify()


def test_how_they_look():
    o = Module.from_matrix([["2", "1 + t + t^2"]]).operator()
    assert str(o).startswith("t on Z/2 + Z/2 by [[")
    assert repr(Module.from_matrix([]).operator()) == "<Operator: t on Z^0>"
    five = Module.from_matrix([["1 - t + t^2"]], over=5).operator()
    assert str(five) == "t on F_5^2 by [[0, 4],\n [1, 1]]"
    assert r"\mathbb{F}_{5}^{2}" in five._repr_latex_()
    with pytest.raises(AlgebraError, match="dimension"):
        Module.from_matrix([]).dimension()
    with pytest.raises(AlgebraError):
        Module.from_matrix([["t"]], over="Q").is_finitely_generated_group()


CERTIFIED = [
    lambda: Diagram.from_braid([1, 1, 1]).cover().chains().homology(1).operator(),
    lambda: Module.from_matrix([["1 - t + t^2", "1"], ["0", "2 - t"]], "Q").operator(),
    lambda: Module.from_matrix([["4", "2 + 2t", "1 + t^2"]]).operator(),
]


@pytest.mark.parametrize("make", CERTIFIED)
def test_changed_operators_are_rejected(make):
    o = make()
    again = read(o.to_json())
    assert isinstance(again, Operator)
    assert again == o
    assert again.verify()
    for name in ("matrix", "inverse"):
        for wrong in changed(getattr(o, name)):
            with pytest.raises(CertificateError) as caught:
                replace(o, **{name: wrong}).verify()
            assert caught.value.where
    for k, d in enumerate(o.torsion):
        for wrong_order in (d + 1, -d - 1):
            orders = (*o.torsion[:k], wrong_order, *o.torsion[k + 1 :])
            with pytest.raises(CertificateError):
                replace(o, torsion=orders).verify()
    for field in fields(o.witness):
        for wrong in changed(getattr(o.witness, field.name)):
            with pytest.raises(CertificateError):
                replace(o, witness=replace(o.witness, **{field.name: wrong})).verify()


def changed(matrix: LaurentMatrix):
    for i in range(matrix.shape[0]):
        for j in range(matrix.shape[1]):
            yield matrix + LaurentMatrix.from_entries(
                {(i, j): LaurentPolynomial([1, 1], 3, matrix.over)}, matrix.shape, matrix.over
            )
