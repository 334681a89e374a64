"""Unit pivots taken out of a matrix, and the transforms that prove two matrices equivalent."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from kt_widgets.algebra.flint_rings import RingName, ring
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.sparse import Pivot, Row, eliminate_units, kernel_vector, subtract_line
from kt_widgets.errors import AlgebraError, CertificateError

__all__ = ["Elimination", "Operations", "Transforms", "check_equal", "eliminate", "spare_columns"]


def check_equal(left: LaurentMatrix, right: LaurentMatrix, name: str) -> None:
    """Compare two matrices entry by entry.

    Parameters
    ----------
    left, right : LaurentMatrix
        What was multiplied out, and what it should be.
    name : str
        How the first is called in the error, for example "U A V".

    Raises
    ------
    CertificateError
        Naming the first entry (rows and columns from 1) in which they differ, or the shapes or rings.

    Examples
    --------
    >>> check_equal(LaurentMatrix([["t", 1]]), LaurentMatrix([["t", 2]]), "U A V")
    Traceback (most recent call last):
    kt_widgets.errors.CertificateError: U A V is 1 where it should be 2 (at entry (1, 2) of U A V)
    """
    if left.shape != right.shape or left.over != right.over:
        raise CertificateError(
            f"{name} has shape {left.shape} over {left.over!r}, not {right.shape} over {right.over!r}",
            where=name,
        )
    if left == right:
        return
    places = sorted({(i, j) for m in (left, right) for i, j, _ in m.entries()})
    i, j = next(place for place in places if left[place] != right[place])
    raise CertificateError(
        f"{name} is {left[i, j]} where it should be {right[i, j]}",
        where=f"entry ({i + 1}, {j + 1}) of {name}",
    )


@dataclass(frozen=True)
class Transforms:
    """Invertible matrices L and R that bring a matrix A to B = L A R, with their inverses.

    Examples
    --------
    >>> a = LaurentMatrix([["t", "1 - t"]])
    >>> p = eliminate(a).transforms()
    >>> print(p.left @ a @ p.right)
    [[1, 0]]
    """

    left: LaurentMatrix
    left_inverse: LaurentMatrix
    right: LaurentMatrix
    right_inverse: LaurentMatrix

    def __matmul__(self, other: Transforms) -> Transforms:
        """First `other`, then this: ``(L1 L2) A (R2 R1)``."""
        return Transforms(
            self.left @ other.left,
            other.left_inverse @ self.left_inverse,
            other.right @ self.right,
            self.right_inverse @ other.right_inverse,
        )

    def after(self, size: int) -> Transforms:
        """These beside an identity block of this size that comes first."""
        one = LaurentMatrix.identity(size, self.left.over)
        blocks = LaurentMatrix.blocks
        return Transforms(
            blocks(one, self.left),
            blocks(one, self.left_inverse),
            blocks(one, self.right),
            blocks(one, self.right_inverse),
        )

    def before(self, rows: int, columns: int) -> Transforms:
        """These with identity blocks behind: of size `rows` on the left side, `columns` on the right side."""
        left, right = (LaurentMatrix.identity(k, self.left.over) for k in (rows, columns))
        blocks = LaurentMatrix.blocks
        return Transforms(
            blocks(self.left, left),
            blocks(self.left_inverse, left),
            blocks(self.right, right),
            blocks(self.right_inverse, right),
        )

    def verify(
        self, source: LaurentMatrix, target: LaurentMatrix, names: tuple[str, str, str] = ("L", "A", "R")
    ) -> bool:
        """Multiply out: both pairs are inverse to each other, and L A R is the target.

        Raises
        ------
        CertificateError
            Naming the first wrong entry of the first wrong product.
        """
        left, middle, right = names
        try:
            for side, inverse, name in (
                (self.left, self.left_inverse, left),
                (self.right, self.right_inverse, right),
            ):
                if side.shape[0] != side.shape[1]:
                    raise CertificateError(f"{name} has shape {side.shape}: it is not square", where=name)
                # Of square matrices over a domain, a right inverse is a left inverse too.
                one = LaurentMatrix.identity(side.shape[0], source.over)
                check_equal(side @ inverse, one, f"{name} {name}_inverse")
            check_equal(self.left @ source @ self.right, target, f"{left} {middle} {right}")
        except AlgebraError as error:
            raise CertificateError(f"the matrices do not multiply: {error.what}", where=str(names)) from None
        return True


class Operations:
    """Row and column operations added up as invertible matrices and their inverses, line by line."""

    __slots__ = ("_left", "_left_inverse", "_over", "_right", "_right_inverse")

    def __init__(self, shape: tuple[int, int], over: RingName) -> None:
        one = LaurentPolynomial.constant(1, over)
        self._over = over
        self._left: list[Row] = [{i: one} for i in range(shape[0])]  # rows of L
        self._left_inverse: list[Row] = [{i: one} for i in range(shape[0])]  # columns of its inverse
        self._right: list[Row] = [{j: one} for j in range(shape[1])]  # columns of R
        self._right_inverse: list[Row] = [{j: one} for j in range(shape[1])]  # rows of its inverse

    def subtract_row(self, i: int, factor: LaurentPolynomial, other: int) -> None:
        """Row i loses factor times the other row."""
        subtract_line(self._left[i], factor, self._left[other])
        subtract_line(self._left_inverse[other], -factor, self._left_inverse[i])

    def subtract_column(self, j: int, factor: LaurentPolynomial, other: int) -> None:
        """Column j loses factor times the other column."""
        subtract_line(self._right[j], factor, self._right[other])
        subtract_line(self._right_inverse[other], -factor, self._right_inverse[j])

    def scale_row(self, i: int, unit: LaurentPolynomial) -> None:
        """Row i is multiplied by a unit."""
        inverse = unit.inverse()
        self._left[i] = {j: f * unit for j, f in self._left[i].items()}
        self._left_inverse[i] = {j: f * inverse for j, f in self._left_inverse[i].items()}

    def scale_column(self, j: int, unit: LaurentPolynomial) -> None:
        """Column j is multiplied by a unit."""
        inverse = unit.inverse()
        self._right[j] = {i: f * unit for i, f in self._right[j].items()}
        self._right_inverse[j] = {i: f * inverse for i, f in self._right_inverse[j].items()}

    def transforms(self, row_order: Sequence[int], column_order: Sequence[int]) -> Transforms:
        """The matrices, after rows and columns are put in these orders."""
        return Transforms(
            self._square(self._left, row_order),
            self._square(self._left_inverse, row_order).transpose(),
            self._square(self._right, column_order).transpose(),
            self._square(self._right_inverse, column_order),
        )

    def _square(self, lines: list[Row], order: Sequence[int]) -> LaurentMatrix:
        return LaurentMatrix._trusted((dict(lines[i]) for i in order), self._over, (len(order), len(order)))


@dataclass(frozen=True)
class Elimination:
    """A matrix, the unit pivots taken out of it, and the core that is left.

    Attributes
    ----------
    matrix : LaurentMatrix
    core : LaurentMatrix
        No entry is a unit.
    core_rows, core_columns : tuple of int
        Where the core's rows and columns sat in the matrix, from 0.
    pivots : tuple of Pivot
        The log, in order.

    Examples
    --------
    >>> e = eliminate(LaurentMatrix([["1 - t", "t", "-1"], ["-1", "1 - t", "t"], ["t", "-1", "1 - t"]]))
    >>> print(e.core, len(e.pivots))
    [[-t^-1 + 1 - t, t^-1 - 1 + t ],
     [t^-1 - 1 + t,  -t^-1 + 1 - t]] 1
    """

    matrix: LaurentMatrix
    core: LaurentMatrix
    core_rows: tuple[int, ...]
    core_columns: tuple[int, ...]
    pivots: tuple[Pivot, ...]

    @property
    def result(self) -> LaurentMatrix:
        """The matrix ``diag(1, ..., 1, core)``."""
        return LaurentMatrix.blocks(LaurentMatrix.identity(len(self.pivots), self.matrix.over), self.core)

    def transforms(self) -> Transforms:
        """P, Q and their inverses with ``P A Q = diag(1, ..., 1, core)``, made from the log."""
        operations = Operations(self.matrix.shape, self.matrix.over)
        for pivot in self.pivots:
            inverse = pivot.unit.inverse()
            for k, factor in pivot.below:
                operations.subtract_row(k, factor, pivot.row)
            for c, value in pivot.beside.items():
                operations.subtract_column(c, value * inverse, pivot.column)
            operations.scale_row(pivot.row, inverse)
        return operations.transforms(
            [p.row for p in self.pivots] + list(self.core_rows),
            [p.column for p in self.pivots] + list(self.core_columns),
        )

    def verify(self) -> bool:
        """Check the transforms by multiplication; `CertificateError` names a wrong entry."""
        return self.transforms().verify(self.matrix, self.result, ("P", "A", "Q"))


def eliminate(matrix: LaurentMatrix) -> Elimination:
    """Take out unit pivots until no entry is a unit: +-t^k over Z, c t^k over a field.

    The core has the same cokernel, and is small for the matrix of a diagram (2 or 3 rows at 20 crossings).

    Parameters
    ----------
    matrix : LaurentMatrix

    Returns
    -------
    Elimination
    """
    rows = matrix.sparse_rows()
    pivots = tuple(eliminate_units(rows))
    used, met = {p.row for p in pivots}, {p.column for p in pivots}
    core_rows = tuple(i for i in range(matrix.shape[0]) if i not in used)
    core_columns = tuple(j for j in range(matrix.shape[1]) if j not in met)
    new = {j: k for k, j in enumerate(core_columns)}
    core = LaurentMatrix._trusted(
        ({new[j]: f for j, f in rows[i].items()} for i in core_rows),
        matrix.over,
        (len(core_rows), len(core_columns)),
    )
    return Elimination(matrix, core, core_rows, core_columns, pivots)


def spare_columns(matrix: LaurentMatrix) -> list[tuple[int, Row]]:
    """Columns that are combinations of the others, as a knot's matrix has one.

    Each comes with a vector, 0 in the spare columns before it and a unit in its own place, that the matrix
    sends to 0. Over Z the columns that are left need not be independent.

    Examples
    --------
    >>> spare_columns(LaurentMatrix([["2", "2t", "3"]]))
    [(0, {1: LaurentPolynomial('1'), 0: LaurentPolynomial('-t')})]
    """
    columns = list(range(matrix.shape[1]))
    rows = matrix.sparse_rows()
    found: list[tuple[int, Row]] = []
    while (vector := kernel_vector(rows, columns, ring(matrix.over))) is not None:
        spare = next((j for j in sorted(vector) if vector[j].is_unit()), None)
        if spare is None:
            break
        columns.remove(spare)
        found.append((spare, vector))
    return found
