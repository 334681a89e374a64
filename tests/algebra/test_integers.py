"""Smith forms over Z: factors against sympy, transforms by multiplication, tampering; companion blocks."""

from __future__ import annotations

from dataclasses import replace

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st
from sympy.matrices.normalforms import invariant_factors

from kt_widgets.algebra.integers import (
    IntegerSmithForm,
    at_root_of_unity,
    integer_factors,
    integer_smith_form,
)
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.errors import AlgebraError, CertificateError, LimitError
from kt_widgets.text.portable import read


@st.composite
def integer_matrices(draw, most=4, least=0):
    rows, columns = draw(st.integers(least, most)), draw(st.integers(least, most))
    entry = st.sampled_from([0, 0, 1, -1, 2, 3, -4, 6, 12])
    grid = draw(st.lists(st.lists(entry, min_size=columns, max_size=columns), min_size=rows, max_size=rows))
    return LaurentMatrix(grid, "Z", (rows, columns))


@given(integer_matrices())
@settings(deadline=None)
def test_factors_and_transforms(m):
    s = integer_smith_form(m)
    assert s.verify()
    assert s.factors == integer_factors(m)
    if min(m.shape):
        expected = [abs(int(d)) for d in invariant_factors(sympy.Matrix(m._sympy_()), domain=sympy.ZZ)]
        assert list(s.diagonal) == expected
    again = read(s.to_json())
    assert again == s
    assert again.verify()


@given(integer_matrices(3, 1), st.data())
@settings(deadline=None)
def test_any_changed_entry_is_rejected(m, data):
    s = integer_smith_form(m)
    name = data.draw(st.sampled_from(["matrix", "D", "U", "U_inverse", "V", "V_inverse"]))
    old = getattr(s, name)
    place = (
        data.draw(st.integers(0, old.shape[0] - 1)),
        data.draw(st.integers(0, old.shape[1] - 1)),
    )
    added = data.draw(st.sampled_from([1, -2, LaurentPolynomial.monomial(1)]))
    wrong = old + LaurentMatrix.from_entries({place: added}, old.shape)
    with pytest.raises(CertificateError) as caught:
        replace(s, **{name: wrong}).verify()
    assert caught.value.where


def test_a_diagonal_out_of_order_or_negative_is_rejected():
    one = LaurentMatrix.identity(2)
    for rows, place in (([[2, 0], [0, 3]], "entry (2, 2) of D"), ([[1, 0], [0, -1]], "entry (2, 2) of D")):
        m = LaurentMatrix(rows)
        with pytest.raises(CertificateError) as caught:
            IntegerSmithForm(m, m, one, one, one, one).verify()
        assert caught.value.where == place
    m = LaurentMatrix([[0, 0], [0, 1]])
    with pytest.raises(CertificateError):
        IntegerSmithForm(m, m, one, one, one, one).verify()


def test_polynomials_are_no_integers():
    for work in (integer_factors, integer_smith_form):
        with pytest.raises(AlgebraError, match="t is no integer"):
            work(LaurentMatrix([["2t", 0], [0, "2t"]]))
        with pytest.raises(LimitError):
            work(LaurentMatrix.zero(3001, 1))
    with pytest.raises(LimitError):
        at_root_of_unity(LaurentMatrix([["t"]]), 10_000, reduced=False)


polynomials = st.builds(LaurentPolynomial, st.lists(st.integers(-3, 3), max_size=4), st.integers(-5, 3))


@given(polynomials, polynomials, st.integers(1, 6), st.booleans())
def test_blocks_are_the_ring_modulo_a_polynomial(f, g, n, reduced):
    def block(h):
        return at_root_of_unity(LaurentMatrix([[h]]), n, reduced=reduced)

    assert block(f) @ block(g) == block(f * g)
    assert block(f) + block(g) == block(f + g)
    t = LaurentPolynomial.monomial(1)
    assert block(t**n - 1).is_zero()
    if reduced:
        assert block(sum((t**k for k in range(n)), t - t)).is_zero()
    if f and not reduced:
        # the first column is f on the powers of t, modulo t^n - 1
        column = [sum(c for e, c in f.terms().items() if e % n == k) for k in range(n)]
        assert [int(c(1)) for c in block(f).column(0)] == column
