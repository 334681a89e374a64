"""`LaurentMatrix`: matrices of Laurent polynomials, stored by their nonzero entries."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from itertools import chain
from typing import Any, TypeAlias

from kt_widgets.algebra.determinants import determinant
from kt_widgets.algebra.evaluation import Reciprocal
from kt_widgets.algebra.flint_rings import Ring, RingName, ring
from kt_widgets.algebra.laurent import LaurentPolynomial, Scalar, integer_from_data, subtract_product
from kt_widgets.algebra.sparse import Row, eliminate_units, fraction_free
from kt_widgets.errors import AlgebraError, LimitError
from kt_widgets.text.parsing import parse_matrix
from kt_widgets.text.portable import Portable
from kt_widgets.text.printing import Style, matrix_text, matrix_too_large

__all__ = ["MAX_SIDE", "Entry", "LaurentMatrix"]

Entry: TypeAlias = LaurentPolynomial | Scalar | str
"""What a matrix may be given as an entry: text is parsed, numbers are constants."""

MAX_SIDE = 100_000
"""Largest number of rows or columns."""


class LaurentMatrix(Portable, kind="matrix"):
    """A matrix over Z[t,1/t], Q[t,1/t] or F_p[t,1/t]; frozen by convention, hashable, picklable.

    Parameters
    ----------
    rows : sequence of sequences of LaurentPolynomial, int, Fraction or str
    over : "Z", "Q" or a prime p, optional
        The ring of coefficients; by default that of the first polynomial among the entries, else "Z".
    shape : pair of int, optional
        Needed for a matrix without rows that has columns.

    Raises
    ------
    AlgebraError
        If the rows differ in length or an entry is not in the ring.
    ParseError
        If a text is no polynomial in t.

    Examples
    --------
    >>> a = LaurentMatrix([["t - 2", 0], [1, "2t - 1"]])
    >>> print(a)
    [[-2 + t, 0      ],
     [1,      -1 + 2t]]
    >>> a[1, 1], a.shape, a.determinant()
    (LaurentPolynomial('-1 + 2t'), (2, 2), LaurentPolynomial('2 - 5t + 2t^2'))
    """

    __slots__ = ("_base", "_rows", "_shape")

    _rows: tuple[Row, ...]
    _base: Ring
    _shape: tuple[int, int]

    def __init__(
        self,
        rows: Sequence[Sequence[Entry]],
        over: RingName | None = None,
        shape: tuple[int, int] | None = None,
    ) -> None:
        lines = _lines(rows)
        width = len(lines[0]) if lines else (shape[1] if shape else 0)
        if shape is None:
            shape = (len(lines), width)
        _check_shape(shape)
        for i, line in enumerate(lines, 1):
            if len(line) != shape[1]:
                raise AlgebraError(
                    f"row {i} has {len(line)} entries",
                    where=f"row {i}",
                    accepted=f"rows of {shape[1]} entries",
                )
        if len(lines) != shape[0]:
            raise AlgebraError(f"{len(lines)} rows were given", accepted=f"{shape[0]} rows")
        base = ring(_ring_name(chain.from_iterable(lines)) if over is None else over)
        self._base = base
        self._shape = shape
        self._rows = tuple(
            {j: f for j, entry in enumerate(line) if (f := _entry(entry, base, i, j))}
            for i, line in enumerate(lines)
        )

    # Other ways in

    @classmethod
    def _trusted(cls, rows: Iterable[Row], over: RingName, shape: tuple[int, int]) -> LaurentMatrix:
        # Trusted: shape[0] rows of nonzero entries over the ring, columns in range; the dicts are given away.
        matrix = cls.__new__(cls)
        matrix._rows = tuple(rows)
        matrix._base = ring(over)
        matrix._shape = shape
        return matrix

    @classmethod
    def parse(cls, text: str, over: RingName = "Z") -> LaurentMatrix:
        """Read plain rows or a LaTeX matrix.

        Raises
        ------
        ParseError
            With line and column, if the text is no matrix of polynomials in t.

        Examples
        --------
        >>> LaurentMatrix.parse("[[1, t], [0, 1 - t]]").determinant()
        LaurentPolynomial('1 - t')
        """
        rows = [[LaurentPolynomial.from_terms(terms, over) for terms in row] for row in parse_matrix(text)]
        return cls(rows, over)

    @classmethod
    def from_entries(
        cls, entries: Mapping[tuple[int, int], Entry], shape: tuple[int, int], over: RingName = "Z"
    ) -> LaurentMatrix:
        """The matrix with these entries by (row, column), counted from 0, and 0 elsewhere.

        Examples
        --------
        >>> print(LaurentMatrix.from_entries({(0, 1): "t"}, (1, 2)))
        [[0, t]]
        """
        _check_shape(shape)
        base = ring(over)
        rows: list[Row] = [{} for _ in range(shape[0])]
        for (i, j), value in entries.items():
            if not (0 <= i < shape[0] and 0 <= j < shape[1]):
                raise _no_entry(i, j, shape)
            if f := _entry(value, base, i, j):
                rows[i][j] = f
        return cls._trusted(rows, over, shape)

    @classmethod
    def from_monomials(
        cls, monomials: Iterable[tuple[int, int, int, int]], shape: tuple[int, int], over: RingName = "Z"
    ) -> LaurentMatrix:
        """The sum of the monomials (row, column, exponent, coefficient), rows and columns counted from 0.

        Examples
        --------
        >>> print(LaurentMatrix.from_monomials([(0, 0, 0, 1), (0, 0, 2, -1), (0, 1, 1, 1)], (1, 2)))
        [[1 - t^2, t]]
        """
        _check_shape(shape)
        base = ring(over)
        sums: list[dict[int, dict[int, int]]] = [{} for _ in range(shape[0])]
        for i, j, exponent, coefficient in monomials:
            if not (0 <= i < shape[0] and 0 <= j < shape[1]):
                raise _no_entry(i, j, shape)
            terms = sums[i].setdefault(j, {})
            terms[exponent] = terms.get(exponent, 0) + coefficient
        rows = (
            {j: f for j, terms in row.items() if (f := LaurentPolynomial.from_integers(terms, base))}
            for row in sums
        )
        return cls._trusted(rows, over, shape)

    @classmethod
    def identity(cls, size: int, over: RingName = "Z") -> LaurentMatrix:
        """The identity matrix.

        Examples
        --------
        >>> LaurentMatrix.identity(2)
        LaurentMatrix([['1', '0'], ['0', '1']])
        """
        _check_shape((size, size))
        one = LaurentPolynomial.constant(1, over)
        return cls._trusted(({i: one} for i in range(size)), over, (size, size))

    @classmethod
    def zero(cls, rows: int, columns: int, over: RingName = "Z") -> LaurentMatrix:
        """The zero matrix."""
        _check_shape((rows, columns))
        return cls._trusted(({} for _ in range(rows)), over, (rows, columns))

    @classmethod
    def blocks(cls, *blocks: LaurentMatrix) -> LaurentMatrix:
        """The block diagonal matrix.

        Examples
        --------
        >>> print(LaurentMatrix.blocks(LaurentMatrix([[1]]), LaurentMatrix([["t", 2]])))
        [[1, 0, 0],
         [0, t, 2]]
        """
        if not blocks:
            return cls.zero(0, 0)
        rows: list[Row] = []
        right = 0
        for block in blocks:
            blocks[0]._same_ring(block)
            rows.extend({j + right: f for j, f in row.items()} for row in block._rows)
            right += block._shape[1]
        return cls._trusted(rows, blocks[0].over, (len(rows), right))

    # What it is made of

    @property
    def shape(self) -> tuple[int, int]:
        """Number of rows, number of columns."""
        return self._shape

    @property
    def over(self) -> RingName:
        """The ring of coefficients: "Z", "Q" or a prime."""
        return self._base.name

    @property
    def rows(self) -> tuple[tuple[LaurentPolynomial, ...], ...]:
        """All entries, zeros included."""
        zero = LaurentPolynomial((), 0, self.over)
        width = range(self._shape[1])
        return tuple(tuple(row.get(j, zero) for j in width) for row in self._rows)

    def entries(self) -> Iterator[tuple[int, int, LaurentPolynomial]]:
        """The nonzero entries as (row, column, entry), row by row, counted from 0."""
        for i, row in enumerate(self._rows):
            for j in sorted(row):
                yield i, j, row[j]

    def sparse_rows(self) -> list[Row]:
        """A copy of the rows as dicts from column to nonzero entry."""
        return [dict(row) for row in self._rows]

    def __getitem__(self, place: tuple[int, int]) -> LaurentPolynomial:
        i, j = place
        if not (0 <= i < self._shape[0] and 0 <= j < self._shape[1]):
            raise IndexError(f"no entry [{i}, {j}] in a matrix of shape {self._shape}")
        return self._rows[i].get(j) or LaurentPolynomial((), 0, self.over)

    def column(self, j: int) -> tuple[LaurentPolynomial, ...]:
        """Column j, counted from 0."""
        return tuple(self[i, j] for i in range(self._shape[0]))

    def is_zero(self) -> bool:
        """Whether every entry is 0."""
        return not any(self._rows)

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, LaurentMatrix):
            return NotImplemented
        return self._shape == other._shape and self._base is other._base and self._rows == other._rows

    def __hash__(self) -> int:
        return hash((self._shape, self.over, tuple(self.entries())))

    def __reduce__(self) -> tuple[object, ...]:
        return (_from_pickle, (self._rows, self.over, self._shape))

    # Arithmetic

    def _same_ring(self, other: LaurentMatrix) -> None:
        if other._base is not self._base:
            raise AlgebraError(
                f"a matrix over {self._base.text} does not meet one over {other._base.text}",
                accepted="change_ring() one of them",
            )

    def __matmul__(self, other: LaurentMatrix) -> LaurentMatrix:
        if not isinstance(other, LaurentMatrix):
            return NotImplemented
        self._same_ring(other)
        if self._shape[1] != other._shape[0]:
            raise AlgebraError(
                f"shapes {self._shape} and {other._shape} do not multiply",
                accepted=f"a right factor with {self._shape[1]} rows",
            )
        right = other._rows
        rows = []
        for row in self._rows:
            total: Row = {}
            for k, a in row.items():
                minus = -a
                for j, b in right[k].items():
                    old = total.get(j)
                    total[j] = a * b if old is None else subtract_product(old, minus, b)
            rows.append({j: f for j, f in total.items() if f})
        return self._trusted(rows, self.over, (self._shape[0], other._shape[1]))

    def _entrywise(
        self,
        other: LaurentMatrix,
        combine: Callable[[LaurentPolynomial, LaurentPolynomial], LaurentPolynomial],
    ) -> LaurentMatrix:
        self._same_ring(other)
        if self._shape != other._shape:
            raise AlgebraError(f"shapes {self._shape} and {other._shape} differ", accepted="equal shapes")
        zero = LaurentPolynomial((), 0, self.over)
        rows = (
            {j: f for j in {**a, **b} if (f := combine(a.get(j, zero), b.get(j, zero)))}
            for a, b in zip(self._rows, other._rows, strict=True)
        )
        return self._trusted(rows, self.over, self._shape)

    def __add__(self, other: LaurentMatrix) -> LaurentMatrix:
        if not isinstance(other, LaurentMatrix):
            return NotImplemented
        return self._entrywise(other, lambda a, b: a + b)

    def __sub__(self, other: LaurentMatrix) -> LaurentMatrix:
        if not isinstance(other, LaurentMatrix):
            return NotImplemented
        return self._entrywise(other, lambda a, b: a - b)

    def __neg__(self) -> LaurentMatrix:
        return self._mapped(lambda f: -f)

    def __mul__(self, factor: LaurentPolynomial | Scalar) -> LaurentMatrix:
        """Every entry times one polynomial; matrices are multiplied by ``@``."""
        if isinstance(factor, LaurentMatrix):
            raise AlgebraError("* multiplies by one polynomial", accepted="@ for the product of matrices")
        return self._mapped(lambda f: f * factor)

    __rmul__ = __mul__

    def _mapped(
        self, image: Callable[[LaurentPolynomial], LaurentPolynomial], over: RingName | None = None
    ) -> LaurentMatrix:
        rows = ({j: g for j, f in row.items() if (g := image(f))} for row in self._rows)
        return self._trusted(rows, self.over if over is None else over, self._shape)

    def conjugate(self) -> LaurentMatrix:
        """The image of every entry under t -> 1/t."""
        return self._mapped(LaurentPolynomial.conjugate)

    def change_ring(self, over: RingName) -> LaurentMatrix:
        """The same matrix with coefficients in another ring.

        Raises
        ------
        AlgebraError
            If an entry has no image there.
        """
        if over == self.over:
            return self
        return self._mapped(lambda f: f.change_ring(over), over)

    def transpose(self) -> LaurentMatrix:
        """The transposed matrix.

        Examples
        --------
        >>> LaurentMatrix([[1, "t"]]).transpose()
        LaurentMatrix([['1'], ['t']])
        """
        rows: list[Row] = [{} for _ in range(self._shape[1])]
        for i, row in enumerate(self._rows):
            for j, f in row.items():
                rows[j][i] = f
        return self._trusted(rows, self.over, (self._shape[1], self._shape[0]))

    def submatrix(self, rows: Sequence[int], columns: Sequence[int]) -> LaurentMatrix:
        """The matrix of these rows and columns, counted from 0, in this order.

        Examples
        --------
        >>> LaurentMatrix([[1, 2], [3, 4]]).submatrix([1], [1, 0])
        LaurentMatrix([['4', '3']])
        """
        for i in rows:
            if not 0 <= i < self._shape[0]:
                raise IndexError(f"no row {i} in a matrix of shape {self._shape}")
        for j in columns:
            if not 0 <= j < self._shape[1]:
                raise IndexError(f"no column {j} in a matrix of shape {self._shape}")
        places: dict[int, list[int]] = {}
        for new, j in enumerate(columns):
            places.setdefault(j, []).append(new)
        picked = ({new: f for j, f in self._rows[i].items() for new in places.get(j, ())} for i in rows)
        return self._trusted(picked, self.over, (len(rows), len(columns)))

    def delete(self, *, row: int | None = None, column: int | None = None) -> LaurentMatrix:
        """The matrix without that row and that column, counted from 0.

        Examples
        --------
        >>> LaurentMatrix([[1, 2], [3, 4]]).delete(row=0)
        LaurentMatrix([['3', '4']])
        """
        if row is not None and not 0 <= row < self._shape[0]:
            raise IndexError(f"no row {row} in a matrix of shape {self._shape}")
        if column is not None and not 0 <= column < self._shape[1]:
            raise IndexError(f"no column {column} in a matrix of shape {self._shape}")
        return self.submatrix(
            [i for i in range(self._shape[0]) if i != row], [j for j in range(self._shape[1]) if j != column]
        )

    # Determinant and rank

    def determinant(self, symmetry: Callable[[], Reciprocal] | None = None) -> LaurentPolynomial:
        """The determinant: unit pivots first, then fraction-free elimination or values at roots of unity.

        Parameters
        ----------
        symmetry : function, optional
            Gives what a theorem says of this determinant; called only if it is large.

        Raises
        ------
        AlgebraError
            If the matrix is not square.

        Examples
        --------
        >>> LaurentMatrix([[0, "1 - t"], ["1 + t", 5]]).determinant()
        LaurentPolynomial('-1 + t^2')
        >>> LaurentMatrix([]).determinant()
        LaurentPolynomial('1')
        """
        size = self._shape[0]
        if size != self._shape[1]:
            raise AlgebraError(
                f"a {size} x {self._shape[1]} matrix has no determinant", accepted="a square matrix"
            )
        return determinant(self._rows, self._base, symmetry)

    def rank(self) -> int:
        """The rank over the field of fractions.

        Examples
        --------
        >>> LaurentMatrix([["1 - t", "1 - t^2"], [1, "1 + t"]]).rank()
        1
        """
        rows = self.sparse_rows()
        pivots = eliminate_units(rows)
        met = {p.column for p in pivots}
        columns = [j for j in range(self._shape[1]) if j not in met]
        return len(pivots) + fraction_free([row for row in rows if row], columns, self._base).rank

    # Out into the world

    def text(self, style: Style = "plain") -> str:
        """Print it as "plain", "unicode" or "latex"."""
        return matrix_text([[f.text(style) for f in row] for row in self.rows], style)

    def latex(self) -> str:
        """Its LaTeX, without dollar signs."""
        return self.text("latex")

    def __str__(self) -> str:
        return self.text()

    def __repr__(self) -> str:
        over = "" if self.over == "Z" else f", over={self.over!r}"
        rows, columns = self._shape
        if not rows or not columns:
            return f"LaurentMatrix({[[]] * rows}{over}, shape={self._shape})"
        if rows * columns > 16:
            return f"<LaurentMatrix {rows} x {columns} over {self._base.text}>"
        return f"LaurentMatrix({[[str(f) for f in row] for row in self.rows]}{over})"

    def _repr_latex_(self) -> str | None:
        # A large matrix stalls the page: then the notebook falls back to the text.
        return None if matrix_too_large(*self._shape) else f"$\\displaystyle {self.latex()}$"

    def _sympy_(self) -> Any:
        import sympy

        return sympy.Matrix(*self._shape, [f._sympy_() for row in self.rows for f in row])

    def to_data(self) -> dict[str, Any]:
        """``{"shape", "over", "entries": [[row, column, polynomial], ...]}``, rows and columns from 0."""
        entries = [[i, j, f.to_data()] for i, j, f in self.entries()]
        return {"shape": list(self._shape), "over": self.over, "entries": entries}

    @classmethod
    def from_data(cls, data: Any) -> LaurentMatrix:
        """Read `to_data` back."""
        rows, columns = map(integer_from_data, data["shape"])
        entries = {
            (integer_from_data(i), integer_from_data(j)): LaurentPolynomial.from_data(f)
            for i, j, f in data["entries"]
        }
        if len(entries) != len(data["entries"]) or not all(entries.values()):
            raise AlgebraError("an entry is given twice, or is 0", accepted="each nonzero entry once")
        return cls.from_entries(entries, (rows, columns), data["over"])


def _from_pickle(rows: tuple[Row, ...], over: RingName, shape: tuple[int, int]) -> LaurentMatrix:
    return LaurentMatrix._trusted(rows, over, shape)


def _no_entry(i: int, j: int, shape: tuple[int, int]) -> AlgebraError:
    return AlgebraError(
        f"there is no entry ({i + 1}, {j + 1}) in a {shape[0]} x {shape[1]} matrix",
        accepted="rows and columns within the shape",
    )


def _lines(rows: object) -> list[list[Any]]:
    if isinstance(rows, Iterable) and not isinstance(rows, str):
        given = list(rows)
        if all(isinstance(row, Iterable) and not isinstance(row, str) for row in given):
            return [list(row) for row in given]
    raise AlgebraError(
        f"{rows!r} is no list of rows", accepted="a list of lists, or LaurentMatrix.parse(text)"
    )


def _ring_name(entries: Iterable[Entry]) -> RingName:
    return next((entry.over for entry in entries if isinstance(entry, LaurentPolynomial)), "Z")


def _entry(value: Entry, base: Ring, i: int, j: int) -> LaurentPolynomial:
    if isinstance(value, LaurentPolynomial):
        if value.over != base.name:
            raise AlgebraError(
                f"{value!r} is not over {base.text}",
                where=f"entry {i + 1}, {j + 1}",
                accepted="one ring for all",
            )
        return value
    if isinstance(value, str):
        return LaurentPolynomial.parse(value, base.name)
    return LaurentPolynomial((value,), 0, base.name)


def _check_shape(shape: tuple[int, int]) -> None:
    if any(type(side) is not int or side < 0 for side in shape):
        raise AlgebraError(f"{shape!r} is no shape", accepted="two integers, 0 or more")
    if max(shape) > MAX_SIDE:
        raise LimitError(f"a matrix of shape {shape}", accepted=f"at most {MAX_SIDE} rows and columns")
