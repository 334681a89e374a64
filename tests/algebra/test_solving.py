"""Linear equations over Laurent polynomials, multiplied out; operations that shorten a matrix."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.algebra.elimination import spare_columns
from kt_widgets.algebra.fitting import fitting_ideal
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.shortening import shorten
from kt_widgets.algebra.solving import homomorphisms, quotient, scaled_right_inverses
from kt_widgets.errors import LimitError

entry = st.builds(LaurentPolynomial, st.lists(st.integers(-3, 3), max_size=3), st.integers(-1, 1))


@st.composite
def matrices(draw, rows, columns):
    height, width = draw(rows), draw(columns)
    grid = draw(st.lists(st.lists(entry, min_size=width, max_size=width), min_size=height, max_size=height))
    return LaurentMatrix(grid, "Z", (height, width))


small = st.integers(0, 2)


@given(matrices(small, st.integers(0, 3)))
@settings(deadline=None)
def test_scaled_right_inverses(a):
    found = scaled_right_inverses(a)
    assert tuple(f for f, _ in found) == fitting_ideal(a, 0).basis
    for f, T in found:
        assert a @ T == LaurentMatrix.identity(a.shape[0]) * f


@given(matrices(small, small), st.data())
@settings(deadline=None)
def test_quotients(b, data):
    x = data.draw(matrices(st.just(b.shape[1]), small))
    found = quotient(b, b @ x)
    independent = b.rank() == b.shape[1]
    assert found == x if independent else found is None or b @ found == b @ x


def test_what_does_not_divide_is_refused():
    assert quotient(LaurentMatrix([["2"]]), LaurentMatrix([["1"]])) is None
    assert quotient(LaurentMatrix([["1 - t"], ["0"]]), LaurentMatrix([["1 - t"], ["1"]])) is None
    assert quotient(LaurentMatrix([["2", "1 + t"]]), LaurentMatrix([["1"]])) is None
    assert quotient(LaurentMatrix([["2", "3"]]), LaurentMatrix([["t"]])) is not None


@given(matrices(small, st.integers(0, 4)))
@settings(deadline=None)
def test_spare_columns_are_combinations_of_the_others(a):
    gone: set[int] = set()
    for spare, vector in spare_columns(a):
        assert vector[spare].is_unit()
        assert not gone & set(vector)
        column = LaurentMatrix.from_entries({(j, 0): f for j, f in vector.items()}, (a.shape[1], 1))
        assert (a @ column).is_zero()
        gone.add(spare)


def test_homomorphisms_send_relations_to_relations():
    a = LaurentMatrix([["1 - t + t^2", "0"], ["1", "2 - t"]])
    b = LaurentMatrix([["(1 - t + t^2)(2 - t)"]])
    found = list(homomorphisms(a, b))
    assert found
    for F in found:
        assert quotient(b, F @ a) is not None
    # Every homomorphism R/2 -> R/6 is a multiple of 3; from the zero module there is the zero map only.
    assert list(map(str, homomorphisms(LaurentMatrix([["2"]]), LaurentMatrix([["6"]])))) == ["[[3]]"]
    assert [F.shape for F in homomorphisms(LaurentMatrix([["2"]]), LaurentMatrix([]))] == [(0, 1)]
    with pytest.raises(LimitError):
        list(homomorphisms(LaurentMatrix.identity(9) * 2, LaurentMatrix.identity(9) * 2))


@given(matrices(st.integers(0, 3), st.integers(0, 3)))
@settings(deadline=None)
def test_shortened_matrices_are_equivalent_and_no_longer(a):
    b, transforms = shorten(a)
    assert transforms.verify(a, b)

    def bits(m):
        return sum(f.span() + 1 + sum(c.bit_length() for c in f.coefficients) for _, _, f in m.entries())

    assert bits(b) <= bits(a)
    assert all(min((f.lowest for f in row if f), default=0) == 0 for row in b.rows)
