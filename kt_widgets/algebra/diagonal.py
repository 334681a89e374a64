"""Diagonal forms over a field: compression to a nonsingular square, then its factors split off in blocks."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from functools import cached_property
from itertools import combinations

from kt_widgets.algebra.elimination import Operations, Transforms
from kt_widgets.algebra.flint_rings import ring
from kt_widgets.algebra.laurent import LaurentPolynomial, gcd_of, subtract_product
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.sparse import Row, kernel_vector, scaled_inverse, subtract_line

__all__ = ["Core", "diagonalise"]


class Core:
    """A matrix under row and column operations: its live rows and columns, and the operations so far."""

    def __init__(self, matrix: LaurentMatrix, *, tracked: bool = True) -> None:
        self.shape = matrix.shape
        self.over = matrix.over
        self.entries = matrix.sparse_rows()
        self.rows = list(range(matrix.shape[0]))
        self.columns = list(range(matrix.shape[1]))
        self.dead_rows: list[int] = []
        self.dead_columns: list[int] = []
        self.operations = Operations(matrix.shape, matrix.over) if tracked else None

    def subtract_row(self, i: int, factor: LaurentPolynomial, other: int) -> None:
        """Row i loses factor times the other row."""
        subtract_line(self.entries[i], factor, self.entries[other])
        if self.operations:
            self.operations.subtract_row(i, factor, other)

    def subtract_column(self, j: int, factor: LaurentPolynomial, other: int) -> None:
        """Column j loses factor times the other column."""
        for row in self.entries:
            if other in row:
                subtract_line(row, factor, {j: row[other]})
        if self.operations:
            self.operations.subtract_column(j, factor, other)

    def square(self) -> LaurentMatrix:
        """The live part."""
        new = {j: k for k, j in enumerate(self.columns)}
        rows = ({new[j]: f for j, f in self.entries[i].items()} for i in self.rows)
        return LaurentMatrix._trusted(rows, self.over, (len(self.rows), len(self.columns)))

    def transforms(self) -> Transforms:
        """All operations so far; the live part comes first."""
        assert self.operations is not None
        return self.operations.transforms(self.rows + self.dead_rows, self.columns + self.dead_columns)

    def compress(self) -> None:
        """Make the live part square and nonsingular: each kernel vector turns a row or column into zeros."""
        base = ring(self.over)
        while vector := kernel_vector([self.entries[i] for i in self.rows], self.columns, base):
            j = _reduce(vector, self.subtract_column)
            self.columns.remove(j)
            self.dead_columns.append(j)
        while len(self.rows) > len(self.columns):
            turned: list[Row] = [{} for _ in range(self.shape[1])]
            for i in self.rows:
                for j, f in self.entries[i].items():
                    turned[j][i] = f
            vector = kernel_vector([turned[j] for j in self.columns], self.rows, base)
            assert vector is not None
            i = _reduce(vector, self.subtract_row)
            self.rows.remove(i)
            self.dead_rows.append(i)

    def euclid(self) -> list[LaurentPolynomial]:
        """Diagonalise a live part that is square and nonsingular by division with remainder."""
        factors: list[LaurentPolynomial] = []
        for step in range(len(self.rows)):
            while (place := self._clear(step)) is not None:
                i, k = place
                self.subtract_row(i, LaurentPolynomial.constant(-1, self.over), k)
            i, j = self.rows[step], self.columns[step]
            pivot = self.entries[i][j]
            normal = pivot.normal_form()
            self.entries[i] = {j: normal}
            if self.operations:
                self.operations.scale_row(i, normal.exact_division(pivot))
            factors.append(normal)
        return factors

    def _clear(self, step: int) -> tuple[int, int] | None:
        """Clear the row and column of a pivot; give a row it does not divide, to be added to its own."""
        while True:
            _, r, c = min(
                (f.span(), r, c)
                for r, i in enumerate(self.rows[step:], step)
                for c, j in enumerate(self.columns[step:], step)
                if (f := self.entries[i].get(j)) is not None
            )
            self.rows[step], self.rows[r] = self.rows[r], self.rows[step]
            self.columns[step], self.columns[c] = self.columns[c], self.columns[step]
            i, j = self.rows[step], self.columns[step]
            pivot = self.entries[i][j]
            for k in self.rows[step + 1 :]:
                if j in self.entries[k]:
                    self.subtract_row(k, divmod(self.entries[k][j], pivot)[0], i)
            if any(j in self.entries[k] for k in self.rows[step + 1 :]):
                continue
            for k in self.columns[step + 1 :]:
                if k in self.entries[i]:
                    self.subtract_column(k, divmod(self.entries[i][k], pivot)[0], j)
            if len(self.entries[i]) > 1:
                continue
            for k in self.rows[step + 1 :]:
                if not all(pivot.divides(f) for f in self.entries[k].values()):
                    return i, k
            return None


def _reduce(vector: Row, subtract: Callable[[int, LaurentPolynomial, int], None]) -> int:
    """Euclid on a kernel vector, with the opposite operations on the lines: gives the line that became 0."""
    while True:
        pivot = min(vector, key=lambda i: (vector[i].span(), i))
        for i in sorted(vector):
            if i != pivot:
                quotient, remainder = divmod(vector[i], vector[pivot])
                subtract(pivot, -quotient, i)
                vector[i] = remainder
        vector = {i: f for i, f in vector.items() if f}
        if len(vector) == 1:
            return pivot


def diagonalise(matrix: LaurentMatrix, *, tracked: bool) -> tuple[list[LaurentPolynomial], Transforms | None]:
    """The invariant factors of a nonsingular square matrix B, and the transforms to them if wanted.

    After division by the gcd of the entries let S be the largest factor, X = S B^-1, and k the number of
    factors that are not 1. If the last k coordinates are chosen well, the projection of the column space of X
    to them, T R^k, has det T = S^k / det B. Then H = S T^-1 has the same cokernel as B: with Q such that
    X Q = (Y, T) modulo S, and h = Y H / S,

        V = [[1, h], [0, 1]],  U = [[(X_top - h X_bottom) / S], [H X_bottom / S]],  U B V = diag(1, H),

    and S divides all that is divided. For k = 1 this is the kernel vector (h, 1) of B modulo S = det B. H is
    treated in the same way; it is smaller since B has a factor 1. Where no choice of coordinates serves,
    which may happen over small fields, Euclid's algorithm runs on rows and columns (H. J. S. Smith, On
    systems of linear indeterminate equations and congruences, Phil. Trans. 151 (1861)).
    """
    size = matrix.shape[0]
    if size == 0:
        return [], _identities(matrix) if tracked else None
    content = gcd_of((f for _, _, f in matrix.entries()), matrix.over)
    primitive = matrix._mapped(lambda f: f.exact_division(content))
    if size == 1:
        unit = primitive[0, 0]
        one = LaurentMatrix.identity(1, matrix.over)
        return [content], Transforms(unit.inverse() * one, unit * one, one, one) if tracked else None
    split = _split(primitive)
    if split is None:
        core = Core(matrix, tracked=tracked)
        return core.euclid(), core.transforms() if tracked else None
    outer = split.transforms() if tracked else None
    factors, inner = diagonalise(split.block, tracked=tracked)
    ones = size - len(factors)
    return (
        [content] * ones + [content * f for f in factors],
        inner.after(ones) @ outer if inner and outer else None,
    )


def _identities(matrix: LaurentMatrix) -> Transforms:
    one = LaurentMatrix.identity(matrix.shape[0], matrix.over)
    return Transforms(one, one, one, one)


@dataclass(frozen=True)
class _Split:
    """What `diagonalise` finds for B and one choice of coordinates, in its words.

    forward, backward : the change of coordinates and its inverse; exponent : S; inverse : X after the change;
    generators : T; combination : Q; block : H.
    """

    matrix: LaurentMatrix
    forward: LaurentMatrix
    backward: LaurentMatrix
    exponent: LaurentPolynomial
    inverse: LaurentMatrix
    generators: LaurentMatrix
    combination: LaurentMatrix

    @cached_property
    def block(self) -> LaurentMatrix:
        over, k = self.matrix.over, self.generators.shape[0]
        divisor, scaled = scaled_inverse(self.generators.sparse_rows(), range(k), ring(over))
        rows = [[(f * self.exponent).exact_division(divisor) for f in row] for row in scaled]
        return LaurentMatrix(rows, over, (k, k))

    def transforms(self) -> Transforms:
        """U, V and their inverses with U B V = diag(1, block)."""
        over, k = self.matrix.over, self.block.shape[0]
        size = self.matrix.shape[0]
        top, bottom = range(size - k), range(size - k, size)
        every = range(size)
        upper, lower = self.inverse.submatrix(top, every), self.inverse.submatrix(bottom, every)

        def divided(m: LaurentMatrix) -> LaurentMatrix:
            return m._mapped(lambda f: f.exact_division(self.exponent))

        h = divided((upper @ self.combination)._mapped(self._remainder) @ self.block)
        left = [*divided(upper - h @ lower).rows, *divided(self.block @ lower).rows]
        one = LaurentMatrix.identity(size, over)
        shear = LaurentMatrix.from_entries({(i, j + size - k): f for i, j, f in h.entries()}, one.shape, over)
        moved = self.matrix @ self.backward
        image = divided(moved @ (one + shear).submatrix(every, bottom) @ self.generators)
        left_inverse = [(*row[: size - k], *end) for row, end in zip(moved.rows, image.rows, strict=True)]
        return Transforms(
            LaurentMatrix(left, over, one.shape),
            LaurentMatrix(left_inverse, over, one.shape),
            self.backward @ (one + shear),
            (one - shear) @ self.forward,
        )

    def _remainder(self, f: LaurentPolynomial) -> LaurentPolynomial:
        return divmod(f, self.exponent)[1]


def _split(matrix: LaurentMatrix) -> _Split | None:
    size, over = matrix.shape[0], matrix.over
    determinant, cofactors = scaled_inverse(matrix.sparse_rows(), range(size), ring(over))
    common = gcd_of((f for row in cofactors for f in row), over)
    exponent = determinant.exact_division(common).normal_form()
    unit = exponent.exact_division(determinant.exact_division(common))
    grid = [[unit * f.exact_division(common) for f in row] for row in cofactors]
    inverse = LaurentMatrix(grid, over, matrix.shape)
    # If the exponent is the determinant, all other factors are 1; otherwise at least two are not.
    for k in range(1, 2) if common.is_unit() else range(2, size):
        for forward, backward in _changes(size, k, over):
            moved = forward @ inverse
            lower = moved.submatrix(range(size - k, size), range(size))
            generators, combination = _column_generators(lower, exponent)
            product = LaurentPolynomial.constant(1, over)
            for i in range(k):
                product = product * generators[i, i]
            if (product * determinant).unit_to(exponent**k) is not None:
                return _Split(matrix, forward, backward, exponent, moved, generators, combination)
    return None


def _changes(size: int, k: int, over: int | str) -> Iterator[tuple[LaurentMatrix, LaurentMatrix]]:
    """Changes of coordinates and their inverses: others last, then sums of others added to the last."""
    for last in list(combinations(range(size), k))[::-1][:12]:
        order = [i for i in range(size) if i not in last] + list(last)
        forward = LaurentMatrix.from_entries(dict.fromkeys(enumerate(order), 1), (size, size), over)
        yield forward, forward.transpose()
    one = LaurentMatrix.identity(size, over)
    for c in range(1, 6):
        sums = {(i, j): (c + i) ** j for i in range(size - k, size) for j in range(size - k)}
        shear = LaurentMatrix.from_entries(sums, (size, size), over)
        yield one + shear, one - shear


def _column_generators(
    rows: LaurentMatrix, modulus: LaurentPolynomial
) -> tuple[LaurentMatrix, LaurentMatrix]:
    """A triangular T whose columns span those of Y = `rows` and the multiples of S, and Q with Y Q = T mod S.

    Euclid's algorithm row by row, on columns that carry their combination along; everything is kept modulo S.
    """
    k, size = rows.shape
    over = rows.over
    zero = LaurentPolynomial((), 0, over)
    one = zero + 1
    columns = [[*rows.column(j), *(one if i == j else zero for i in range(size))] for j in range(size)]
    columns += [[modulus if i == r else zero for i in range(k)] + [zero] * size for r in range(k)]
    found: list[list[LaurentPolynomial]] = []

    def combined(
        a: LaurentPolynomial, f: list[LaurentPolynomial], b: LaurentPolynomial, g: list[LaurentPolynomial]
    ) -> list[LaurentPolynomial]:
        sums = [subtract_product(a * x, b, y) for x, y in zip(f, g, strict=True)]
        return [divmod(x, modulus)[1] if x.span() >= modulus.span() else x for x in sums]

    for r in range(k):
        divisor = gcd_of((c[r] for c in columns), over)
        active = [c for c in columns if c[r]]
        columns = [c for c in columns if not c[r]]
        active.sort(key=lambda c: c[r].span())
        pivot = active[0]
        rest = []
        for column in active[1:]:
            if pivot[r].unit_to(divisor) is None and not pivot[r].divides(column[r]):
                d, s, t = pivot[r].bezout(column[r])
                a, b = pivot[r].exact_division(d), column[r].exact_division(d)
                pivot, column = combined(s, pivot, -t, column), combined(a, column, b, pivot)
                pivot[r], column[r] = d, zero
            rest.append(column)
        if r < k - 1:
            for column in rest:
                if column[r]:
                    quotient = column[r].exact_division(pivot[r])
                    column = combined(one, column, quotient, pivot)
                    column[r] = zero
                columns.append(column)
        found.append(pivot)
    generators = {(i, j): column[i] for j, column in enumerate(found) for i in range(k)}
    combination = {(i, j): column[k + i] for j, column in enumerate(found) for i in range(size)}
    return (
        LaurentMatrix.from_entries(generators, (k, k), over),
        LaurentMatrix.from_entries(combination, (size, k), over),
    )
