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
    at_companion,
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
        for entry in ("2t", "t"):
            with pytest.raises(AlgebraError, match="t is no integer"):
                work(LaurentMatrix([[entry, 0], [0, "2t"]]))
        with pytest.raises(LimitError):
            work(LaurentMatrix.zero(3001, 1))
    with pytest.raises(LimitError):
        at_companion(LaurentMatrix([["t"]]), LaurentPolynomial.monomial(10_000) - 1)


polynomials = st.builds(LaurentPolynomial, st.lists(st.integers(-3, 3), max_size=4), st.integers(-5, 3))


moduli = st.builds(
    lambda low, inner, high: LaurentPolynomial([low, *inner, high]),
    st.sampled_from([1, -1]),
    st.lists(st.integers(-3, 3), max_size=3),
    st.sampled_from([1, -1]),
)


@given(polynomials, polynomials, moduli)
def test_blocks_are_the_ring_modulo_a_polynomial(f, g, modulus):
    def block(h):
        return at_companion(LaurentMatrix([[h]]), modulus)

    assert block(f) @ block(g) == block(f * g)
    assert block(f) + block(g) == block(f + g)
    assert block(modulus).is_zero()
    t = LaurentPolynomial.monomial(1)
    assert block(t * 0 + 1) == LaurentMatrix.identity(modulus.span())
    # t takes each power but the last one to the next
    for k in range(modulus.span() - 1):
        assert [int(c(1)) for c in block(t).column(k)] == [int(i == k + 1) for i in range(modulus.span())]


def test_without_units_at_both_ends_powers_of_t_are_no_basis():
    for text in ("2 + t", "1 + 2t", "t + t^2", "0", "3"):
        with pytest.raises(AlgebraError, match="no basis"):
            at_companion(LaurentMatrix([["t"]]), LaurentPolynomial.parse(text))
    assert at_companion(LaurentMatrix([["t"]]), LaurentPolynomial([1])).shape == (0, 0)
