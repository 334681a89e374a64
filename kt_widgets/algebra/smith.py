"""Smith normal forms over Q[t,1/t] and F_p[t,1/t], with the transforms that prove them."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from itertools import combinations, pairwise, product
from typing import Any, TypeAlias

from kt_widgets.algebra.elimination import Operations, Transforms, eliminate
from kt_widgets.algebra.flint_rings import ring
from kt_widgets.algebra.laurent import LaurentPolynomial, gcd_of
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.sparse import Row, kernel_vector, scaled_inverse, subtract_line
from kt_widgets.errors import AlgebraError, CertificateError
from kt_widgets.text.portable import Portable

__all__ = ["SmithForm", "invariant_factors", "smith_form"]


@dataclass(frozen=True)
class SmithForm(Portable, kind="smith form"):
    """U A V = D with U and V invertible and D diagonal, each diagonal entry dividing the next.

    The nonzero diagonal entries are monic with lowest exponent 0; zeros come last.

    Examples
    --------
    >>> s = smith_form(LaurentMatrix([["t - 2", 0], [0, "2t - 1"]], over="Q"))
    >>> print(s.D, s.verify())
    [[1, 0              ],
     [0, 1 - 5/2 t + t^2]] True
    """

    matrix: LaurentMatrix
    D: LaurentMatrix
    U: LaurentMatrix
    U_inverse: LaurentMatrix
    V: LaurentMatrix
    V_inverse: LaurentMatrix

    @property
    def diagonal(self) -> tuple[LaurentPolynomial, ...]:
        """The diagonal of D."""
        return tuple(self.D[i, i] for i in range(min(self.D.shape)))

    def verify(self) -> bool:
        """Check everything by multiplication.

        Raises
        ------
        CertificateError
            Naming the entry of U U_inverse, V V_inverse, U A V or D that is wrong.
        """
        if not ring(self.matrix.over).is_field:
            raise CertificateError("Z[t,1/t] has no Smith form", where="matrix", accepted="a field")
        Transforms(self.U, self.U_inverse, self.V, self.V_inverse).verify(
            self.matrix, self.D, ("U", "A", "V")
        )
        for i, j, f in self.D.entries():
            where = f"entry ({i + 1}, {j + 1}) of D"
            if i != j:
                raise CertificateError(f"D is {f} off the diagonal", where=where)
            if f != f.normal_form():
                raise CertificateError(f"{f} is not monic with lowest exponent 0", where=where)
            if i and not self.D[i - 1, i - 1].divides(f):
                raise CertificateError(f"{self.D[i - 1, i - 1]} does not divide {f}", where=where)
        return True

    def to_data(self) -> dict[str, Any]:
        """The six matrices by name."""
        return {name: getattr(self, name).to_data() for name in _NAMES}

    @classmethod
    def from_data(cls, data: Any) -> SmithForm:
        """Read `to_data` back; call `verify` before believing it."""
        return cls(*(LaurentMatrix.from_data(data[name]) for name in _NAMES))


_NAMES = ("matrix", "D", "U", "U_inverse", "V", "V_inverse")


def smith_form(matrix: LaurentMatrix) -> SmithForm:
    """The Smith normal form over a field of coefficients, with transforms.

    Unit pivots are taken out first. Kernel vectors on both sides then cut the core down to a nonsingular
    square B. If B has a cyclic cokernel, one row of d B^-1 gives the transforms: with h a vector such that
    B (h, 1) is divisible by d = det B, take V = [[1, h], [0, 1]] and U = D V^-1 B^-1, both of unit
    determinant. Otherwise Euclid's algorithm runs on rows and columns (H. J. S. Smith, On systems of linear
    indeterminate equations and congruences, Phil. Trans. 151 (1861)).

    Parameters
    ----------
    matrix : LaurentMatrix
        Over "Q" or a prime.

    Raises
    ------
    AlgebraError
        Over "Z": Z[t,1/t] is no principal ideal domain.

    Examples
    --------
    >>> smith_form(LaurentMatrix([["2", "t"], ["0", "2"]], over=3)).diagonal
    (LaurentPolynomial('1', over=3), LaurentPolynomial('1', over=3))
    """
    _check_field(matrix)
    elimination = eliminate(matrix)
    units = len(elimination.pivots)
    core = _Core(elimination.core)
    core.compress()
    factors, inner = core.diagonalise()
    total = core.transforms(inner).after(units) @ elimination.transforms()
    diagonal = [LaurentPolynomial.constant(1, matrix.over)] * units + factors
    D = LaurentMatrix.from_entries({(i, i): f for i, f in enumerate(diagonal)}, matrix.shape, matrix.over)
    return SmithForm(matrix, D, total.left, total.left_inverse, total.right, total.right_inverse)


def invariant_factors(matrix: LaurentMatrix) -> tuple[LaurentPolynomial, ...]:
    """The diagonal of the Smith normal form over a field, without transforms: units first, zeros last.

    On the nonsingular square B that is left after compression, with d = det B, the last factor is d divided
    by the greatest common divisor of the cofactors; where that is 1, the other factors are too. The rest are
    quotients of greatest common divisors of minors, from large to small, until one is 1.

    Raises
    ------
    AlgebraError
        Over "Z".

    Examples
    --------
    >>> f = "1 - t + t^2"
    >>> [str(d) for d in invariant_factors(LaurentMatrix([[f, 0, 0], [0, f, 0]], over="Q"))]
    ['1 - t + t^2', '1 - t + t^2']
    """
    _check_field(matrix)
    elimination = eliminate(matrix)
    core = _Core(elimination.core, tracked=False)
    core.compress()
    one = LaurentPolynomial.constant(1, matrix.over)
    zeros = min(core.shape) - len(core.rows)
    factors = _nonsingular_factors(core.square())
    return (one,) * len(elimination.pivots) + factors + (one - 1,) * zeros


def _check_field(matrix: LaurentMatrix) -> None:
    if not ring(matrix.over).is_field:
        raise AlgebraError(
            "Z[t,1/t] is no principal ideal domain: matrices over it have no Smith form",
            accepted="a matrix over 'Q' or a prime, by change_ring(), or fitting_ideal over Z",
        )


def _nonsingular_factors(matrix: LaurentMatrix) -> tuple[LaurentPolynomial, ...]:
    size = matrix.shape[0]
    one = LaurentPolynomial.constant(1, matrix.over)
    if size == 0:
        return ()
    determinant, cofactors = scaled_inverse(matrix.sparse_rows(), range(size), ring(matrix.over))
    divisors = [determinant.normal_form(), gcd_of((f for row in cofactors for f in row), matrix.over)]
    for k in range(size - 2, 0, -1):
        if divisors[-1] == 1:
            break
        minors = (
            matrix.submatrix(rows, columns).determinant()
            for rows, columns in product(combinations(range(size), k), repeat=2)
        )
        divisors.append(gcd_of(minors, matrix.over))
    divisors = (divisors + [one] * size)[: size + 1] if size > 1 else [divisors[0], one]
    return tuple(a.exact_division(b) for a, b in pairwise(divisors))[::-1]


class _Core:
    """A matrix on its way to diagonal form: live rows and columns, and the operations so far."""

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
        subtract_line(self.entries[i], factor, self.entries[other])
        if self.operations:
            self.operations.subtract_row(i, factor, other)

    def subtract_column(self, j: int, factor: LaurentPolynomial, other: int) -> None:
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

    def compress(self) -> None:
        """Make the live part square and nonsingular: each kernel vector turns a row or column into zeros."""
        while (
            vector := kernel_vector([self.entries[i] for i in self.rows], self.columns, ring(self.over))
        ) is not None:
            j = _reduce(vector, self.subtract_column)
            self.columns.remove(j)
            self.dead_columns.append(j)
        while len(self.rows) > len(self.columns):
            turned: list[Row] = [{} for _ in range(self.shape[1])]
            for i in self.rows:
                for j, f in self.entries[i].items():
                    turned[j][i] = f
            vector = kernel_vector([turned[j] for j in self.columns], self.rows, ring(self.over))
            assert vector is not None
            i = _reduce(vector, self.subtract_row)
            self.rows.remove(i)
            self.dead_rows.append(i)

    def transforms(self, inner: Transforms | None) -> Transforms:
        """All operations so far, then the transforms of the live part."""
        assert self.operations is not None
        outer = self.operations.transforms(self.rows + self.dead_rows, self.columns + self.dead_columns)
        if inner is None:
            return outer
        return inner.before(len(self.dead_rows), len(self.dead_columns)) @ outer

    def diagonalise(self) -> tuple[list[LaurentPolynomial], Transforms | None]:
        """The factors of the live part, and the transforms of it that are not among the operations."""
        size = len(self.rows)
        if size == 0:
            return [], None
        content = gcd_of((f for i in self.rows for f in self.entries[i].values()), self.over)
        base = ring(self.over)
        determinant, inverse = scaled_inverse([self.entries[i] for i in self.rows], self.columns, base)
        # For B / content these are:
        determinant = determinant.exact_division(content**size)
        inverse = [[f.exact_division(content ** (size - 1)) for f in row] for row in inverse]
        found = _kernel_modulo(determinant, inverse)
        if found is None:
            return self._euclid(), None
        functional, pivot, kernel = found
        last = self.columns[pivot]
        for k, c in enumerate(functional):
            if k != pivot and c:
                self.subtract_column(self.columns[k], LaurentPolynomial.constant(c, self.over), last)
                inverse[pivot] = [f + c * g for f, g in zip(inverse[pivot], inverse[k], strict=True)]
        self.columns.remove(last)
        self.columns.append(last)
        inverse.append(inverse.pop(pivot))
        delta = determinant.normal_form()
        one = LaurentPolynomial.constant(1, self.over)
        factors = [one] * (size - 1) + [delta]

        def matrix(rows: list[list[LaurentPolynomial]]) -> LaurentMatrix:
            return LaurentMatrix(rows, self.over, (size, size))

        def identity_with(column: list[LaurentPolynomial]) -> LaurentMatrix:
            last_column = {(i, size - 1): h for i, h in enumerate(column)}
            diagonal = {(i, i): one for i in range(size)}
            return LaurentMatrix.from_entries({**last_column, **diagonal}, (size, size), self.over)

        right = identity_with(kernel)
        right_inverse = identity_with([-h for h in kernel])
        bottom = inverse[-1]
        unit = delta.exact_division(determinant)
        upper = [
            [(f - h * g).exact_division(determinant) for f, g in zip(row, bottom, strict=True)]
            for row, h in zip(inverse[:-1], kernel, strict=True)
        ]
        left = matrix([*upper, [unit * g for g in bottom]])
        primitive = self.square()._mapped(lambda f: f.exact_division(content))
        divided = (primitive @ right).rows
        left_inverse = matrix([[*row[:-1], row[-1].exact_division(delta)] for row in divided])
        return [content * f for f in factors], Transforms(left, left_inverse, right, right_inverse)

    def _euclid(self) -> list[LaurentPolynomial]:
        """Diagonalise the live part by division with remainder on rows and columns."""
        factors: list[LaurentPolynomial] = []
        for step in range(len(self.rows)):
            while (place := self._clear(step)) is not None:
                i, k = place
                self.subtract_row(i, LaurentPolynomial.constant(-1, self.over), k)
            i, j = self.rows[step], self.columns[step]
            pivot = self.entries[i][j]
            normal = pivot.normal_form()
            unit = normal.exact_division(pivot)
            self.entries[i] = {j: normal}
            assert self.operations is not None
            self.operations.scale_row(i, unit)
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


_Found: TypeAlias = tuple[tuple[int, ...], int, list[LaurentPolynomial]]


def _kernel_modulo(determinant: LaurentPolynomial, inverse: list[list[LaurentPolynomial]]) -> _Found | None:
    """From d = det B and X = d B^-1: a functional v, a coordinate m with v_m = 1, and h with v . (h, 1) = 1.

    After the coordinate m is replaced by v, the vector (h, 1) spans the kernel of B modulo d. It is looked
    for as a multiple of X w, whose value under v has to be prime to d. None if the cokernel of B is not
    cyclic, or no pair of small v, w serves (possible over small fields).
    """
    size = len(inverse)
    if gcd_of((f for row in inverse for f in row), determinant.over) != 1:
        return None
    for functional, weights in _small_pairs(size, inverse):
        pivot = functional.index(1)
        vector = [
            sum((w * f for w, f in zip(weights, row, strict=True) if w), determinant * 0) for row in inverse
        ]
        value = sum((c * f for c, f in zip(functional, vector, strict=True) if c), determinant * 0)
        reciprocal = value.inverse_modulo(determinant) if value else None
        if reciprocal is not None:
            rest = [divmod(f * reciprocal, determinant)[1] for i, f in enumerate(vector) if i != pivot]
            return functional, pivot, rest
    return None


def _small_pairs(
    size: int, inverse: list[list[LaurentPolynomial]]
) -> Iterator[tuple[tuple[int, ...], tuple[int, ...]]]:
    units = [tuple(int(i == k) for i in range(size)) for k in range(size)]
    places = sorted(product(range(size), repeat=2), key=lambda p: (-inverse[p[0]][p[1]].span(), p))
    yield from ((units[i], units[j]) for i, j in places if inverse[i][j])
    powers = [tuple(c**k for k in range(size)) for c in range(1, 2 * size + 2)]
    yield from product(powers, repeat=2)
