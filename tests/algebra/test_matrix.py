"""Matrices of Laurent polynomials: arithmetic, determinants and ranks against naive expansion and sympy."""

from __future__ import annotations

import pickle
from itertools import combinations, permutations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.algebra.elimination import check_equal, eliminate
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import MAX_SIDE, LaurentMatrix
from kt_widgets.errors import AlgebraError, CertificateError, LimitError, ParseError
from kt_widgets.text.portable import read

RINGS = ("Z", "Q", 3)


@st.composite
def matrices(draw, over=None, rows=None, columns=None, most=4):
    over = draw(st.sampled_from(RINGS)) if over is None else over
    rows = draw(st.integers(0, most)) if rows is None else rows
    columns = draw(st.integers(0, most)) if columns is None else columns
    # Units and zeros often, so that every branch of an elimination is taken.
    entry = st.one_of(
        st.just(LaurentPolynomial((), 0, over)),
        st.builds(LaurentPolynomial.monomial, st.integers(-2, 2), st.sampled_from([1, -1]), st.just(over)),
        st.builds(
            LaurentPolynomial,
            st.lists(st.integers(-3, 3), max_size=3),
            st.integers(-1, 1),
            st.just(over),
        ),
    )
    grid = draw(st.lists(st.lists(entry, min_size=columns, max_size=columns), min_size=rows, max_size=rows))
    return LaurentMatrix(grid, over, (rows, columns))


def squares(most=4):
    return st.integers(0, most).flatmap(lambda n: matrices(rows=n, columns=n))


def expansion(matrix):
    """The determinant as the sum over all permutations."""
    size = matrix.shape[0]
    total = LaurentPolynomial((), 0, matrix.over)
    for images in permutations(range(size)):
        inversions = sum(a > b for a, b in combinations(images, 2))
        term = LaurentPolynomial.constant((-1) ** inversions, matrix.over)
        for i, j in enumerate(images):
            term = term * matrix[i, j]
        total = total + term
    return total


@given(squares())
@settings(deadline=None)
def test_determinant_is_the_sum_over_permutations(a):
    assert a.determinant() == expansion(a)
    assert a.transpose().determinant() == a.determinant()


@given(matrices())
@settings(deadline=None)
def test_rank_is_the_size_of_the_largest_minor(a):
    sizes = [
        k
        for k in range(min(a.shape) + 1)
        for rows in combinations(range(a.shape[0]), k)
        for columns in combinations(range(a.shape[1]), k)
        if expansion(a.submatrix(rows, columns))
    ]
    assert a.rank() == max(sizes)


@given(st.integers(0, 3).flatmap(lambda n: st.tuples(*[matrices("Z", n, n)] * 3)))
@settings(deadline=None)
def test_algebra_of_matrices(abc):
    a, b, c = abc
    one = LaurentMatrix.identity(a.shape[0])
    assert a @ (b + c) == a @ b + a @ c
    assert (a @ b) @ c == a @ (b @ c)
    assert (a @ b).transpose() == b.transpose() @ a.transpose()
    assert (a @ b).determinant() == a.determinant() * b.determinant()
    assert a @ one == one @ a == a
    assert a - a == LaurentMatrix.zero(*a.shape)
    assert (a - a).is_zero()
    assert -a + a == 0 * a
    assert (a @ b).conjugate() == a.conjugate() @ b.conjugate()
    assert (a @ b).change_ring(3) == a.change_ring(3) @ b.change_ring(3)
    assert LaurentMatrix.blocks(a, b).determinant() == (a @ b).determinant()
    naive = [
        [
            sum((a[i, k] * b[k, j] for k in range(len(a.rows))), LaurentPolynomial())
            for j in range(len(a.rows))
        ]
        for i in range(len(a.rows))
    ]
    assert a @ b == LaurentMatrix(naive, "Z", a.shape)


@given(matrices())
@settings(deadline=None)
def test_ways_in_and_out(a):
    assert read(a.to_json()) == a
    for same in (pickle.loads(pickle.dumps(a)), LaurentMatrix(a.rows, a.over, a.shape)):
        assert same == a
        assert hash(same) == hash(a)
    assert LaurentMatrix.from_entries({(i, j): f for i, j, f in a.entries()}, a.shape, a.over) == a
    assert a.transpose().transpose() == a
    if all(a.shape):
        assert LaurentMatrix.parse(str(a), a.over) == a
        assert LaurentMatrix.parse(a.latex(), a.over) == a
        assert eval(repr(a)) == a
        assert a.column(0) == a.transpose().rows[0]
        assert a.delete(row=0) == a.submatrix(range(1, a.shape[0]), range(a.shape[1]))


place = st.tuples(st.integers(0, 1), st.integers(0, 1), st.integers(-3, 3), st.integers(-3, 3))


@given(st.sampled_from(RINGS), st.lists(place, max_size=12))
@settings(deadline=None)
def test_sums_of_monomials(over, monomials):
    total = LaurentMatrix.zero(2, 2, over)
    for i, j, exponent, coefficient in monomials:
        f = LaurentPolynomial.monomial(exponent, coefficient, over)
        total = total + LaurentMatrix.from_entries({(i, j): f}, (2, 2), over)
    assert LaurentMatrix.from_monomials(monomials, (2, 2), over) == total
    assert all(f.coefficients[0] and f.coefficients[-1] for _, _, f in total.entries())


@given(matrices())
@settings(deadline=None)
def test_elimination_and_its_transforms(a):
    e = eliminate(a)
    assert e.verify()
    assert not any(f.is_unit() for _, _, f in e.core.entries())
    units = len(e.pivots)
    assert e.core.shape == (a.shape[0] - units, a.shape[1] - units)
    assert a.rank() == units + e.core.rank()
    transforms = e.transforms()
    assert transforms.left @ a @ transforms.right == e.result


@given(matrices(), st.data())
@settings(deadline=None)
def test_a_changed_entry_is_found(a, data):
    if not all(a.shape):
        return
    i = data.draw(st.integers(0, a.shape[0] - 1))
    j = data.draw(st.integers(0, a.shape[1] - 1))
    changed = LaurentMatrix(
        [[f + ((k, c) == (i, j)) for c, f in enumerate(row)] for k, row in enumerate(a.rows)], a.over
    )
    with pytest.raises(CertificateError, match=rf"at entry \({i + 1}, {j + 1}\) of X"):
        check_equal(changed, a, "X")


@given(st.integers(1, 4).flatmap(lambda n: matrices("Z", n, n)))
@settings(deadline=None, max_examples=20)
def test_sympy_agrees(a):
    sympy = pytest.importorskip("sympy")
    assert sympy.expand(a._sympy_().det(method="berkowitz") - a.determinant()._sympy_()) == 0


def test_entries_of_every_kind():
    a = LaurentMatrix([["t^2", 1], [LaurentPolynomial.monomial(-1), 0]])
    assert a.over == "Z"
    assert a[0, 0] == LaurentPolynomial.monomial(2)
    assert LaurentMatrix([[LaurentPolynomial([1], 0, 5), 7]])[0, 1] == 2
    assert LaurentMatrix.from_monomials([(0, 0, 1, 1), (0, 0, 1, -1)], (1, 1)).is_zero()
    assert LaurentMatrix.parse(r"\begin{pmatrix} 1 & t \\ 0 & t^{-1} \end{pmatrix}")[1, 1].lowest == -1


def test_shapes_without_rows_or_columns():
    for shape in ((0, 0), (0, 3), (2, 0)):
        a = LaurentMatrix.zero(*shape)
        assert a.shape == shape
        assert a.rank() == 0
        assert a.transpose().shape == shape[::-1]
        assert (a @ LaurentMatrix.zero(shape[1], 4)).shape == (shape[0], 4)
        assert eliminate(a).verify()
        assert str(a).startswith("[")
    assert LaurentMatrix([]).determinant() == 1
    assert LaurentMatrix([], shape=(0, 3)).shape == (0, 3)


def test_zero_pivots_and_zero_determinants():
    # No unit anywhere, and zeros on the diagonal.
    a = LaurentMatrix([[0, "1 - t", 0], [0, 0, "2"], ["1 + t", 0, 0]])
    assert a.determinant() == LaurentPolynomial.parse("2 - 2t^2")
    assert LaurentMatrix([["1 - t", "2 - 2t"], [3, 6]]).determinant() == 0
    assert LaurentMatrix([[0, 0], [0, 0]]).determinant() == 0


def test_bad_input_is_refused_with_the_place():
    with pytest.raises(AlgebraError, match="row 2"):
        LaurentMatrix([[1, 2], [3]])
    with pytest.raises(AlgebraError, match="entry 1, 2"):
        LaurentMatrix([[LaurentPolynomial([1]), LaurentPolynomial([1], 0, 5)]])
    with pytest.raises(ParseError):
        LaurentMatrix([["x"]])
    for rows in ("[[1]]", 5, [1, 2], ["ab"]):
        with pytest.raises(AlgebraError, match="no list of rows"):
            LaurentMatrix(rows)
    with pytest.raises(AlgebraError, match="no determinant"):
        LaurentMatrix([[1, 2]]).determinant()
    with pytest.raises(AlgebraError, match="do not multiply"):
        LaurentMatrix([[1]]) @ LaurentMatrix([[1], [2]])
    with pytest.raises(AlgebraError, match="differ"):
        LaurentMatrix([[1]]) + LaurentMatrix([[1, 2]])
    with pytest.raises(AlgebraError, match="@"):
        LaurentMatrix([[1]]) * LaurentMatrix([[1]])
    with pytest.raises(AlgebraError, match="change_ring"):
        LaurentMatrix([[1]]) @ LaurentMatrix([[1]], over=5)
    with pytest.raises(AlgebraError, match=r"\(3, 1\)"):
        LaurentMatrix.from_entries({(2, 0): 1}, (2, 2))
    with pytest.raises(AlgebraError, match=r"\(1, 3\)"):
        LaurentMatrix.from_monomials([(0, 2, 0, 1)], (2, 2))
    with pytest.raises(LimitError):
        LaurentMatrix.zero(MAX_SIDE + 1, 1)
    with pytest.raises(IndexError):
        LaurentMatrix([[1]])[0, 1]
    with pytest.raises(IndexError):
        LaurentMatrix([[1]])[-1, 0]
    with pytest.raises(AlgebraError, match="twice"):
        LaurentMatrix.from_data(
            {"shape": [1, 1], "over": "Z", "entries": [[0, 0, {"lowest": 0, "coefficients": []}]]}
        )


def test_a_large_matrix_is_not_typeset():
    assert LaurentMatrix.zero(30, 30)._repr_latex_() is None
    assert "30 x 30" in repr(LaurentMatrix.zero(30, 30))
    assert "pmatrix" in LaurentMatrix([[1]])._repr_latex_()


@pytest.mark.parametrize("place", [1.5, True, "1", None])
def test_data_with_places_that_are_no_integers_are_refused(place):
    data = LaurentMatrix([[0, 2], [3, 4]]).to_data()
    data["entries"][0][1] = place
    with pytest.raises(AlgebraError, match="is no integer"):
        LaurentMatrix.from_data(data)


@pytest.mark.parametrize(
    ("number", "over"), [("1", "Z"), ("2/4", "Q"), ("3/1", "Q"), (" 1/2", "Q"), ("1/2", 5)]
)
def test_data_with_coefficients_in_another_form_are_refused(number, over):
    data = LaurentMatrix([[1]], over).to_data()
    data["entries"][0][2]["coefficients"] = [number]
    with pytest.raises(AlgebraError, match="not in its one form"):
        LaurentMatrix.from_data(data)
