"""Elimination on sparse rows: unit pivots, then fraction-free elimination of the dense rest.

A row is a dict from column to nonzero polynomial. The functions here change their rows in place and know
nothing of `LaurentMatrix`, which is built on them.
"""

from __future__ import annotations

from collections.abc import Sequence
from heapq import heapify, heappop, heappush
from typing import NamedTuple, TypeAlias

from kt_widgets.algebra.flint_rings import FlintPolynomial, Ring
from kt_widgets.algebra.laurent import LaurentPolynomial, gcd_of, subtract_product

__all__ = [
    "FractionFree",
    "Pivot",
    "Row",
    "Rows",
    "Thrift",
    "eliminate_units",
    "fraction_free",
    "kernel_vector",
    "permutation_sign",
    "scaled_inverse",
    "subtract_line",
]

Row: TypeAlias = dict[int, LaurentPolynomial]
Rows: TypeAlias = list[Row]


class Pivot(NamedTuple):
    """One step of `eliminate_units`: what was done, in terms of the rows as they were then.

    ``below`` lists (other row, f): f times the pivot row was subtracted from the other row.
    ``beside`` is the rest of the pivot row, whose columns were cleared by the pivot column.
    """

    row: int
    column: int
    unit: LaurentPolynomial
    below: tuple[tuple[int, LaurentPolynomial], ...]
    beside: Row


class Thrift(NamedTuple):
    """When `eliminate_units` stops early: the most fill of a pivot, and the longest span it may lead to."""

    fill: int
    span: int


def eliminate_units(rows: Rows, thrift: Thrift | None = None) -> list[Pivot]:
    """Take out every unit, cheapest fill first; afterwards `rows` has no unit and its pivot rows are empty.

    With `thrift` only units that leave the rest sparse and its entries short are taken.

    The cost of a pivot is (entries beside it) * (entries below it) (H. M. Markowitz, The elimination form of
    the inverse and its application to linear programming, Management Sci. 3 (1957)); ties go to the entry
    changed last, so that a band is eaten from its end and keeps its units, then to the first row and column.
    A cost that fell since it was queued is noticed when its row changes.

    Examples
    --------
    >>> one, t = LaurentPolynomial.constant(1), LaurentPolynomial.monomial(1)
    >>> rows = [{0: one + t, 1: t}, {0: one, 1: one + t}]
    >>> [(p.row, p.column) for p in eliminate_units(rows)], rows
    ([(0, 1)], [{}, {0: LaurentPolynomial('-t^-1 - 1 - t')}])
    """
    columns: dict[int, set[int]] = {}
    for i, row in enumerate(rows):
        for j in row:
            columns.setdefault(j, set()).add(i)
    # Cost, minus the number of the step that last changed the entry, row, column.
    queue = [
        ((len(row) - 1) * (len(columns[j]) - 1), 0, i, j)
        for i, row in enumerate(rows)
        for j, entry in row.items()
        if entry.is_unit()
    ]
    heapify(queue)
    pivots: list[Pivot] = []
    while queue:
        cost, step, i, j = heappop(queue)
        row = rows[i]
        entry = row.get(j)
        if entry is None or not entry.is_unit():
            continue
        current = (len(row) - 1) * (len(columns[j]) - 1)
        if current > cost:
            heappush(queue, (current, step, i, j))
            continue
        if thrift and (cost > thrift.fill or _predicted_span(rows, columns[j], i, j) > thrift.span):
            continue
        del row[j]
        rows[i] = {}
        for c in row:
            columns[c].discard(i)
        inverse = entry.inverse()
        below = []
        for k in sorted(columns.pop(j) - {i}):
            other = rows[k]
            factor = other.pop(j) * inverse
            below.append((k, factor))
            for c, value in row.items():
                old = other.get(c)
                if old is None:
                    other[c] = -(factor * value)
                    columns[c].add(k)
                else:
                    new = subtract_product(old, factor, value)
                    if new:
                        other[c] = new
                    else:
                        del other[c]
                        columns[c].discard(k)
        for k, _ in below:
            other = rows[k]
            width = len(other) - 1
            for c, value in other.items():
                if value.is_unit():
                    heappush(queue, (width * (len(columns[c]) - 1), -len(pivots) - 1, k, c))
        pivots.append(Pivot(i, j, entry, tuple(below), row))
    return pivots


def _predicted_span(rows: Rows, column: set[int], i: int, j: int) -> int:
    """A bound for the spans of the products that the pivot in row i and column j makes."""
    row = rows[i].values()
    return max(f.highest for f in row) - min(f.lowest for f in row) + max(rows[k][j].span() for k in column)


def subtract_line(row: Row, factor: LaurentPolynomial, other: Row) -> None:
    """The line loses factor times the other line, in place."""
    for j, value in other.items():
        old = row.get(j)
        if old is None:
            row[j] = -(factor * value)
        else:
            new = subtract_product(old, factor, value)
            if new:
                row[j] = new
            else:
                del row[j]


class FractionFree(NamedTuple):
    """What `fraction_free` finds: the rank, a minor of that size, and its rows and columns in pivot order."""

    rank: int
    minor: LaurentPolynomial
    rows: tuple[int, ...]
    columns: tuple[int, ...]


def fraction_free(rows: Sequence[Row], columns: Sequence[int], base: Ring) -> FractionFree:
    """Fraction-free elimination with full pivoting on the shortest entry.

    Each step divides exactly by the previous pivot, so that all entries are minors of the matrix
    (E. H. Bareiss, Sylvester's identity and multistep integer-preserving Gaussian elimination,
    Math. Comp. 22 (1968)).

    Returns
    -------
    FractionFree
        The minor is the determinant of the submatrix with the named rows and columns in this order;
        1 when the rank is 0.
    """
    lows = [min((f.lowest for f in row.values()), default=0) for row in rows]
    zero = base.zero
    dense: list[list[FlintPolynomial]] = [
        [row[j].shifted(-low) if j in row else zero for j in columns]
        for row, low in zip(rows, lows, strict=True)
    ]
    row_order = list(range(len(rows)))
    column_order = list(range(len(columns)))
    previous = base.one
    rank = 0
    for step in range(min(len(rows), len(columns))):
        place = min(
            (
                (len(entry), i, j)
                for i in range(step, len(rows))
                for j, entry in enumerate(dense[i][step:], step)
                if entry
            ),
            default=None,
        )
        if place is None:
            break
        _, i, j = place
        dense[step], dense[i] = dense[i], dense[step]
        row_order[step], row_order[i] = row_order[i], row_order[step]
        if j != step:
            for line in dense:
                line[step], line[j] = line[j], line[step]
            column_order[step], column_order[j] = column_order[j], column_order[step]
        top = dense[step]
        pivot = top[step]
        rank = step + 1
        for line in dense[rank:]:
            factor = line[step]
            for c in range(rank, len(columns)):
                value = line[c] * pivot
                if factor:
                    value -= factor * top[c]
                line[c] = value / previous if step else value
        previous = pivot
    shift = sum(lows[i] for i in row_order[:rank])
    minor = LaurentPolynomial.from_flint(previous, shift, base)
    return FractionFree(rank, minor, tuple(row_order[:rank]), tuple(columns[j] for j in column_order[:rank]))


def scaled_inverse(
    rows: Sequence[Row], columns: Sequence[int], base: Ring
) -> tuple[LaurentPolynomial, list[list[LaurentPolynomial]]]:
    """For the nonsingular A in these columns of the rows: d = det A up to a unit, X with A X = X A = d.

    Fraction-free Gauss-Jordan elimination of A beside an identity; it divides exactly as in `fraction_free`.

    Examples
    --------
    >>> from kt_widgets.algebra.flint_rings import ring
    >>> scaled_inverse([{0: LaurentPolynomial.parse("1 - t")}], [0], ring("Z"))
    (LaurentPolynomial('1 - t'), [[LaurentPolynomial('1')]])
    """
    size = len(columns)
    zero = base.zero
    lows = [min(row[j].lowest for j in columns if j in row) for row in rows]
    dense: list[list[FlintPolynomial]] = [
        [row[j].shifted(-low) if j in row else zero for j in columns]
        + [base.one if k == i else zero for k in range(size)]
        for i, (row, low) in enumerate(zip(rows, lows, strict=True))
    ]
    previous = base.one
    for step in range(size):
        chosen = min((i for i in range(step, size) if dense[i][step]), key=lambda i: len(dense[i][step]))
        dense[step], dense[chosen] = dense[chosen], dense[step]
        top = dense[step]
        pivot = top[step]
        for i, line in enumerate(dense):
            if i == step:
                continue
            factor = line[step]
            for c in range(step + 1, 2 * size):
                value = line[c] * pivot
                if factor:
                    value -= factor * top[c]
                line[c] = value / previous if step else value
        previous = pivot
    determinant = LaurentPolynomial.from_flint(previous, 0, base)
    inverse = [
        [LaurentPolynomial.from_flint(f, -low, base) for f, low in zip(line[size:], lows, strict=True)]
        for line in dense
    ]
    return determinant, inverse


def kernel_vector(rows: Sequence[Row], columns: Sequence[int], base: Ring) -> Row | None:
    """A vector of gcd 1 that the matrix sends to 0, by column; None if its columns are independent.

    Examples
    --------
    >>> from kt_widgets.algebra.flint_rings import ring
    >>> f = LaurentPolynomial.parse("1 - t")
    >>> kernel_vector([{0: f, 1: f * f}], [0, 1], ring("Z"))
    {1: LaurentPolynomial('-1'), 0: LaurentPolynomial('1 - t')}
    """
    found = fraction_free(rows, columns, base)
    free = next((j for j in columns if j not in found.columns), None)
    if free is None:
        return None
    picked = [rows[i] for i in found.rows]
    determinant, inverse = scaled_inverse(picked, found.columns, base)
    vector = {free: determinant}
    zero = determinant - determinant
    for j, line in zip(found.columns, inverse, strict=True):
        total = zero
        for f, row in zip(line, picked, strict=True):
            if free in row:
                total = subtract_product(total, f, row[free])
        if total:
            vector[j] = total
    divisor = gcd_of(vector.values(), base.name)
    return {j: f.exact_division(divisor) for j, f in vector.items()}


def permutation_sign(images: Sequence[int]) -> int:
    """The sign of the permutation i -> images[i] of 0, 1, ..., n - 1.

    Examples
    --------
    >>> permutation_sign([1, 0, 2]), permutation_sign([1, 2, 0])
    (-1, 1)
    """
    seen = [False] * len(images)
    sign = 1
    for start in range(len(images)):
        length = 0
        while not seen[start]:
            seen[start] = True
            start = images[start]
            length += 1
        if length and length % 2 == 0:
            sign = -sign
    return sign
