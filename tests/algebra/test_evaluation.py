"""Determinants by values against fraction-free elimination: bounds, symmetry, zero pivots, determinant 0."""

from __future__ import annotations

import random
import subprocess
import sys
from importlib.util import find_spec
from itertools import permutations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.algebra import determinants, evaluation_points
from kt_widgets.algebra.evaluation import Bounds, Reciprocal, bounds
from kt_widgets.algebra.evaluation_lanes import Terms, powers
from kt_widgets.algebra.evaluation_lanes import runner as numpy_runner
from kt_widgets.algebra.evaluation_points import determinant_by_values
from kt_widgets.algebra.evaluation_program import straight_line
from kt_widgets.algebra.flint_rings import prime_determinant, ring
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.sparse import fraction_free
from kt_widgets.diagrams import Diagram
from kt_widgets.errors import AlgebraError
from kt_widgets.testing.strategies import diagrams, knots

NUMBA = pytest.param(
    0, marks=pytest.mark.skipif(find_spec("numba") is None, reason="numba, the extra `fast`, is missing")
)
BACKENDS = pytest.mark.parametrize("compiled_from", [10**18, NUMBA], ids=["numpy", "numba"])

entries = st.one_of(
    st.just(LaurentPolynomial()),
    st.builds(LaurentPolynomial.monomial, st.integers(-2, 2), st.sampled_from([1, -1])),
    st.builds(LaurentPolynomial, st.lists(st.integers(-3, 3), max_size=3), st.integers(-2, 2)),
    st.builds(LaurentPolynomial, st.lists(st.integers(-(10**12), 10**12), max_size=2)),
)


def squares(most: int = 5) -> st.SearchStrategy[LaurentMatrix]:
    def of_size(n: int) -> st.SearchStrategy[LaurentMatrix]:
        line = st.lists(entries, min_size=n, max_size=n)
        return st.lists(line, min_size=n, max_size=n).map(lambda rows: LaurentMatrix(rows, "Z", (n, n)))

    return st.integers(1, most).flatmap(of_size)


def by_elimination(matrix: LaurentMatrix) -> LaurentPolynomial:
    """Fraction-free elimination of the whole matrix: no unit pivots, no values."""
    found = fraction_free(matrix.sparse_rows(), range(matrix.shape[1]), ring("Z"))
    if found.rank < matrix.shape[0]:
        return LaurentPolynomial()
    inversions = sum(
        order[i] > order[j]
        for order in (found.rows, found.columns)
        for j in range(len(order))
        for i in range(j)
    )
    return found.minor if inversions % 2 == 0 else -found.minor


def by_values(matrix: LaurentMatrix) -> LaurentPolynomial:
    rows = matrix.sparse_rows()
    return determinant_by_values(rows, bounds(rows)) if all(rows) else LaurentPolynomial()


@BACKENDS
@given(matrix=squares())
@settings(deadline=None)
def test_values_and_elimination_agree(compiled_from: int, matrix: LaurentMatrix) -> None:
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(evaluation_points, "COMPILED_FROM", compiled_from)
        assert by_values(matrix) == by_elimination(matrix)


@given(squares(4))
@settings(deadline=None)
def test_the_bounds_hold_for_each_term_of_the_expansion(matrix: LaurentMatrix) -> None:
    rows = matrix.sparse_rows()
    if not all(rows):
        return
    found = bounds(rows)
    for images in permutations(range(len(rows))):
        term = [matrix[i, j] for i, j in enumerate(images)]
        if all(term):
            assert found.low <= sum(f.lowest for f in term)
            assert found.high >= sum(f.highest for f in term)
    f = by_elimination(matrix)
    assert max(map(abs, f.coefficients), default=0) <= found.height


def braid(crossings: int, strands: int, seed: int, alternating: bool = False) -> list[int]:
    """A braid word that uses all strands, so that its closure is connected; most are links."""
    rng = random.Random(seed)
    letters = list(range(1, strands)) + [rng.randint(1, strands - 1) for _ in range(crossings - strands + 1)]
    rng.shuffle(letters)
    return [i * (rng.choice((1, -1)) if not alternating else (-1) ** i) for i in letters]


CLOSURES = [(20, 4), (21, 4), (40, 5), (41, 6), (80, 7), (81, 8), (150, 9), (151, 11)]


@BACKENDS
@pytest.mark.parametrize(
    ("crossings", "strands", "alternating"),
    [(*size, kind) for size in CLOSURES for kind in (False, True)] + [(300, 14, False), (300, 17, False)],
)
def test_closed_braids(
    crossings: int, strands: int, alternating: bool, compiled_from: int, monkeypatch: pytest.MonkeyPatch
) -> None:
    word = braid(crossings, strands, crossings + strands, alternating)
    monkeypatch.setattr(determinants, "SMALL_CORE", 10**9)
    expected = Diagram.from_braid(word).alexander_polynomial()
    monkeypatch.setattr(determinants, "SMALL_CORE", 0)
    monkeypatch.setattr(evaluation_points, "COMPILED_FROM", compiled_from)
    found = Diagram.from_braid(word).alexander_polynomial()
    assert found == expected
    # Without the symmetry and its bounds: more points and more primes, the same answer.
    boundary = Diagram.from_braid(word).cover().chains().boundary(2)
    assert boundary.delete(row=3, column=5).determinant().unit_to(expected) is not None


def test_both_backends_give_the_same_values() -> None:
    pytest.importorskip("numba")
    from kt_widgets.algebra.evaluation_compiled import runner as compiled_runner

    boundary = Diagram.from_braid(braid(60, 7, 1)).cover().chains().boundary(2).delete(row=0, column=0)
    rows = boundary.sparse_rows()
    lows = [min(f.lowest for f in row.values()) for row in rows]
    program = straight_line(rows)
    terms = Terms.of(rows[i][j] * LaurentPolynomial.monomial(-lows[i]) for i, j in program.entries)
    p = next(evaluation_points._primes(311, 1))
    table = powers(evaluation_points._root(311, p), 311, p)
    points = np.arange(311)
    ours, failed = numpy_runner(program, terms)(table, points, p)
    theirs, also_failed = compiled_runner(program, terms)(table, points, p)
    assert np.array_equal(failed, also_failed)
    # At t = 1 entries 1 - t serve as pivots; elsewhere nothing vanishes.
    assert failed.any()
    assert not failed.all()
    assert np.array_equal(ours[~failed], theirs[~failed])
    for k in (1, 2, 310):
        at = int(table[k])
        power = {e: pow(at, e, p) for e in range(20)}
        grid = [[0] * len(rows) for _ in rows]
        for i, row in enumerate(rows):
            for j, f in row.items():
                grid[i][j] = sum(c * power[e - lows[i]] for e, c in f.terms().items()) % p
        assert program.sign * int(ours[k]) % p == prime_determinant(grid, p)


def blocks(*sizes: tuple[int, int]) -> LaurentMatrix:
    """Rank below size: (rows, columns) blocks of polynomials that are no units, on the diagonal."""
    rng = random.Random(5)
    height, width = (sum(side) for side in zip(*sizes, strict=True))
    assert height == width
    made = {}
    top = left = 0
    for rows, columns in sizes:
        for i in range(rows):
            for j in range(columns):
                made[top + i, left + j] = LaurentPolynomial(
                    [rng.randint(2, 9), rng.randint(2, 9)], rng.randint(-2, 2)
                )
        top, left = top + rows, left + columns
    return LaurentMatrix.from_entries(made, (height, width))


@BACKENDS
def test_determinant_zero(compiled_from: int, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(evaluation_points, "COMPILED_FROM", compiled_from)
    monkeypatch.setattr(determinants, "SMALL_CORE", 0)
    zero = LaurentPolynomial()
    # A block with more rows than columns: zero for its pattern alone.
    assert blocks((3, 2), (2, 3)).determinant() == zero
    # A row that is a combination of others: zero for its values only.
    full = blocks((6, 6))
    rows = [list(row) for row in full.rows]
    rows[4] = [LaurentPolynomial.parse("1 - t") * f + g for f, g in zip(rows[0], rows[2], strict=True)]
    assert LaurentMatrix(rows).determinant() == zero
    assert full.determinant() == by_elimination(full) != zero
    # A zero row, a zero column.
    assert LaurentMatrix([*rows[:5], [zero] * 6]).determinant() == zero
    assert LaurentMatrix([[zero, *row[1:]] for row in rows]).determinant() == zero


def test_a_whole_column_of_vanishing_pivots_is_met_with_pivots_anew() -> None:
    # Both leading entries vanish where t^2 = 4: at points of a field that has a root of unity 2 or -2.
    matrix = LaurentMatrix([["4 - t^2", 3, 1], [5, "4 - t^2", 7], [2, 3, "4 - t^2"]])
    assert by_values(matrix) == by_elimination(matrix)


@BACKENDS
def test_too_small_bounds_are_noticed_here(compiled_from: int, monkeypatch: pytest.MonkeyPatch) -> None:
    # The agreement above would fail if the bound, the points or the primes were too small.
    monkeypatch.setattr(evaluation_points, "COMPILED_FROM", compiled_from)
    matrix = Diagram.from_braid(braid(90, 5, 3, True)).cover().chains().boundary(2).delete(row=0, column=0)
    rows, truth = matrix.sparse_rows(), by_elimination(matrix)
    known = bounds(rows)
    assert determinant_by_values(rows, known) == truth
    assert max(map(abs, truth.coefficients)) > 2**32
    assert determinant_by_values(rows, known._replace(height=2**28)) != truth
    narrow = known._replace(low=truth.lowest + 1, high=truth.highest - 1)
    assert determinant_by_values(rows, narrow) != truth
    exact = Bounds(truth.lowest, truth.highest, max(map(abs, truth.coefficients)))
    assert determinant_by_values(rows, exact) == truth
    symmetry = Reciprocal(truth.span(), exact.height)
    assert determinant_by_values(rows, known, symmetry) == truth
    assert determinant_by_values(rows, known, symmetry._replace(span=truth.span() - 2)) != truth
    assert determinant_by_values(rows, known, symmetry._replace(height=1)) != truth
    with monkeypatch.context() as patch:
        primes = evaluation_points._primes
        patch.setattr(evaluation_points, "_primes", lambda order, product: primes(order, product >> 40))
        assert determinant_by_values(rows, exact) != truth


def test_a_determinant_without_the_symmetry_is_refused() -> None:
    rows = LaurentMatrix([["1 - t", 2], [3, "5 + t^2"]]).sparse_rows()
    with pytest.raises(AlgebraError, match="not symmetric"):
        determinant_by_values(rows, bounds(rows), Reciprocal(3, 100))


def test_what_is_out_of_reach_is_eliminated(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(determinants, "SMALL_CORE", 0)
    long = LaurentMatrix([[f"2 + t^{10**6}", 3], [5, "7 + t"]])
    assert long.determinant() == by_elimination(long)
    tall = LaurentMatrix([[3**40_000, "1 + t"], [2, 5**40_000]])
    assert tall.determinant() == by_elimination(tall)


@pytest.mark.parametrize("over", ["Q", 7])
def test_fields_are_eliminated(over: int | str, monkeypatch: pytest.MonkeyPatch) -> None:
    matrix = Diagram.from_braid(braid(60, 5, 2)).cover().chains().boundary(2).delete(row=0, column=0)
    monkeypatch.setattr(determinants, "SMALL_CORE", 0)
    assert matrix.change_ring(over).determinant() == matrix.determinant().change_ring(over)


@pytest.mark.parametrize(
    ("crossings", "strands"), [(500, 20), pytest.param(1000, 31, marks=pytest.mark.slow)]
)
def test_a_large_polynomial_at_points_of_fields(crossings: int, strands: int) -> None:
    # flint's determinants of the whole matrix at a point are +-t^k times the value, with one sign and one k.
    d = Diagram.from_braid(braid(crossings, strands, 4))
    f = d.alexander_polynomial()
    matrix = d.cover().chains().boundary(2).delete(row=1, column=2)
    units = set()
    for p in (1_000_003, 998_244_353):
        at = 5
        terms = {(i, j): g.terms() for i, j, g in matrix.entries()}
        grid = [[0] * (crossings - 1) for _ in range(crossings - 1)]
        for (i, j), g in terms.items():
            grid[i][j] = sum(c * pow(at, e, p) for e, c in g.items()) % p
        value = sum(c * pow(at, e, p) for e, c in f.terms().items()) % p
        ratio = prime_determinant(grid, p) * pow(value, -1, p) % p
        reach = range(-2 * crossings, 2 * crossings)
        units.add(frozenset((k, s) for k in reach for s in (1, -1) if s * pow(at, k, p) % p == ratio))
    assert frozenset.intersection(*units)


def test_numpy_is_loaded_for_large_determinants_only() -> None:
    code = """
import sys, kt_widgets as kt
kt.Diagram.from_braid([1, 2] * 20).alexander_polynomial()
assert "numpy" not in sys.modules
from kt_widgets.algebra import determinants
determinants.SMALL_CORE = 2
kt.Diagram.from_braid([1, 2] * 20).alexander_polynomial()
assert "numpy" in sys.modules
assert "numba" not in sys.modules
"""
    subprocess.run([sys.executable, "-c", code], check=True)


@given(diagrams(5, 20))
@settings(deadline=None, max_examples=60)
def test_small_links_by_values(d: Diagram) -> None:
    expected = d.cover().order()
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(determinants, "SMALL_CORE", -1)
        found = d.alexander_polynomial()
    assert found.normal_form() == expected


@given(knots(4, 12))
@settings(deadline=None, max_examples=40)
def test_the_diagram_bounds_its_polynomial(d: Diagram) -> None:
    f = d.alexander_polynomial()
    symmetry = d._symmetry()
    assert f.span() <= symmetry.span
    assert (f.span() - symmetry.span) % 2 == 0
    assert sum(map(abs, f.coefficients)) <= symmetry.height
