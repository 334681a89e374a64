"""Chain complexes: the product of the boundaries, kernel bases by Euclid, and what they present."""

from __future__ import annotations

import pickle
from math import gcd

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.covers.chains import ChainComplex
from kt_widgets.errors import AlgebraError, ParseError
from kt_widgets.text.portable import read

few = settings(deadline=None, max_examples=40)
rings = st.sampled_from(["Z", "Q", 2, 5])


def row_of(weights, over="Z"):
    return LaurentMatrix([[f"t^{w} - 1" for w in weights]], over)


def without_cells(boundary1):
    return ChainComplex.from_matrices(
        boundary1, LaurentMatrix.zero(boundary1.shape[1], 0, boundary1.over), boundary1.over
    )


@few
@given(st.lists(st.integers(-12, 12), min_size=1, max_size=5), rings)
def test_kernel_by_euclid_on_the_weights(weights, over):
    boundary1 = row_of(weights, over)
    V, V_inverse = without_cells(boundary1).kernel()
    identity = LaurentMatrix.identity(len(weights), over)
    assert V @ V_inverse == identity
    assert V_inverse @ V == identity
    image = boundary1 @ V
    assert all(j == 0 for _, j, _ in image.entries())
    # boundary(1) V is (d, 0, ..., 0) with d = t^g - 1 up to a unit, g the gcd of the weights.
    d = LaurentPolynomial.parse(f"t^{gcd(*weights)} - 1", over)
    assert image[0, 0].normal_form() == d.normal_form()


@few
@given(st.lists(st.integers(-6, 6), max_size=3), st.integers(0, 3), st.sampled_from([1, -1]))
def test_explicit_kernel_when_a_weight_is_one(weights, at, unit):
    at = min(at, len(weights))
    weights = [*weights[:at], unit, *weights[at:]]
    cycles = without_cells(row_of(weights)).cycles()
    t = sympy.Symbol("t")
    first = next(i for i, w in enumerate(weights) if abs(w) == 1)
    others = [i for i in range(len(weights)) if i != first]
    assert cycles.shape == (len(weights), len(others))
    for column, i in enumerate(others):
        # a_i - (t^w_i - 1)/(t^w_1 - 1) a_1
        quotient = sympy.cancel((t ** weights[i] - 1) / (t ** weights[first] - 1))
        for row in range(len(weights)):
            expected = 1 if row == i else -quotient if row == first else 0
            assert sympy.simplify(cycles[row, column]._sympy_() - expected) == 0


@few
@given(st.lists(st.integers(-4, 4), min_size=2, max_size=4), st.data(), rings)
def test_relations_of_homology_are_the_boundaries(weights, data, over):
    kernel = without_cells(row_of(weights, over)).cycles()
    coefficients = st.lists(st.integers(-2, 2), min_size=1, max_size=3)
    polynomials = coefficients.map(lambda c: LaurentPolynomial(c, -1, over))
    columns = data.draw(st.integers(1, 3))
    rows = [[data.draw(polynomials) for _ in range(columns)] for _ in range(kernel.shape[1])]
    boundary2 = kernel @ LaurentMatrix(rows, over, (kernel.shape[1], columns))
    c = ChainComplex.from_matrices(row_of(weights, over), boundary2, over)
    # Written in the basis of cycles, the relations are the boundaries again.
    relations = c.homology(1).presentation_matrix()
    assert c.cycles() @ relations == boundary2
    assert c.boundary(1) @ c.cycles() == LaurentMatrix.zero(1, kernel.shape[1], over)
    assert c.rank(0) - c.rank(1) + c.rank(2) == 1 - len(weights) + columns


def test_several_vertices():
    # A circle made of two edges: from e1 to e2, and from e2 to t e1.
    c = ChainComplex.from_matrices("-1, t; 1, -1", "0; 0")
    V, V_inverse = c.kernel()
    assert V @ V_inverse == LaurentMatrix.identity(2)
    assert c.cycles().shape == (2, 0)
    assert c.rank(0) == 0
    # The same two edges without a shift are a closed circle: one cycle.
    c = ChainComplex.from_matrices("-1, 1; 1, -1", "0; 0")
    assert c.boundary(1) @ c.cycles() == LaurentMatrix.zero(2, 1)
    assert (c.rank(0), c.rank(1)) == (1, 1)


def test_boundaries_are_multiplied_out():
    with pytest.raises(AlgebraError, match=r"boundary\(1\) boundary\(2\) is 1 - t, not 0") as caught:
        ChainComplex.from_matrices("t - 1, t - 1", [[1, 1], [-1, -2]])
    assert caught.value.where == "entry (1, 2)"


@pytest.mark.parametrize(
    ("first", "second", "said"),
    [
        ("t - 1, t - 1", "0; 0; 0", r"boundary\(1\) has 2 columns, boundary\(2\) has 3 rows"),
        (["t - 1"], "0", "is no list of rows"),
        ([["t - 1", 0], [1]], "0; 0", "row 2 has 1 entries"),
    ],
)
def test_shapes_are_checked(first, second, said):
    with pytest.raises(AlgebraError, match=said) as caught:
        ChainComplex.from_matrices(first, second)
    assert caught.value.accepted


def test_text_is_parsed():
    with pytest.raises(ParseError):
        ChainComplex.from_matrices("t - 1, x", "0; 0")


def test_names_are_counted():
    with pytest.raises(AlgebraError, match="1 names of generators for 2"):
        ChainComplex.from_matrices("t - 1, t - 1", "0; 0", generators=["a"])


def test_euclid_may_stop_over_the_integers():
    c = ChainComplex.from_matrices("2, 1 + t", "1 + t; -2")
    with pytest.raises(AlgebraError, match="stops over") as caught:
        c.homology(1)
    assert caught.value.where == "row 1 of boundary(1)"
    assert "Q" in caught.value.accepted
    # Over a field it never does; here 2 is a unit.
    over = c.over("Q")
    assert over.boundary(1) @ over.kernel().V == LaurentMatrix([[2, 0]], "Q")


def test_euclid_uses_divisibility_over_the_integers():
    boundary1 = LaurentMatrix([["2 - 4t", "2 + 4t^2", "6", "2"]])
    c = without_cells(boundary1)
    V, V_inverse = c.kernel()
    assert V @ V_inverse == LaurentMatrix.identity(4)
    assert boundary1 @ V == LaurentMatrix([[2, 0, 0, 0]])


def test_homology_of_the_trefoil():
    c = ChainComplex.from_matrices("t - 1, t - 1", "1 - t + t^2; -1 + t - t^2", generators=["a", "b"])
    assert c.homology(0).order() == LaurentPolynomial.parse("t - 1")
    assert c.homology(1).order() == LaurentPolynomial.parse("1 - t + t^2")
    assert c.homology(1).presentation_matrix().shape == (1, 1)
    assert c.relative_homology(1).presentation_matrix() == c.boundary(2)
    assert c.over(3).homology(1).order() == LaurentPolynomial.parse("1 + 2t + t^2", 3)
    assert c.homology(2).presentation_matrix().shape == (0, 0)
    for n in (-1, 3):
        with pytest.raises(AlgebraError):
            c.homology(n)
        with pytest.raises(AlgebraError):
            c.rank(n)
        with pytest.raises(AlgebraError):
            c.boundary(n)
    with pytest.raises(AlgebraError):
        c.relative_homology(0)


def test_summands_carry_cycles():
    c = ChainComplex.from_matrices("t - 1, t - 1", "1 - t + t^2; -1 + t - t^2", generators=["a", "b"])
    h = c.homology(1).over("Q")
    (summand,) = h.summands()
    assert summand.names == ("a", "b")
    assert summand.factor == LaurentPolynomial.parse("1 - t + t^2", "Q")
    column = LaurentMatrix([[f] for f in summand.cycle], "Q")
    assert c.over("Q").boundary(1) @ column == LaurentMatrix.zero(1, 1, "Q")
    assert h.certificate().verify()


def test_changing_the_ring_before_or_after_homology_can_differ():
    # H_0 is Z[t,1/t]/2; its 2-torsion makes H_1 of the reduced complex free of rank one, H_1 itself being 0.
    c = without_cells(LaurentMatrix([[2]]))
    assert c.homology(1).over(2).invariant_factors() == ()
    assert c.over(2).homology(1).invariant_factors() == (0,)


def test_second_homology_counts_redundant_cells():
    c = ChainComplex.from_matrices("t - 1, t - 1", "1 - t + t^2, 1 - t + t^2; -1 + t - t^2, -1 + t - t^2")
    assert c.rank(2) == 1
    assert c.homology(2).presentation_matrix().shape == (1, 0)


def test_places_of_entries():
    c = ChainComplex.from_matrices("t - 1, t - 1", "0; 0", generators=["a", "b"])
    assert str(c.place(2, "b", "r1")) == str(c.place(2, 2, 1)) == "entry:2:2:1"
    assert str(c.place(1, 1, "b")) == "entry:1:1:2"
    for row, column in (("c", "r1"), (0, 1), (3, 1), (1, 2), ("r1", "a")):
        with pytest.raises(AlgebraError):
            c.place(2, row, column)


def test_complexes_travel():
    c = ChainComplex.from_matrices("t - 1, t - 1", "1 - t + t^2; -1 + t - t^2", generators=["a", "b"])
    for again in (read(c.to_json()), pickle.loads(pickle.dumps(c)), read(c.over(5).to_json())):
        assert again in (c, c.over(5))
    spoilt = c.to_json().replace("-1, 1, -1", "-1, 2, -1")
    assert spoilt != c.to_json()
    with pytest.raises(AlgebraError, match="not 0"):
        read(spoilt)
