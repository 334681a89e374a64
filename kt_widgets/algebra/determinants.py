"""Determinants of sparse square matrices: which method for which size."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from kt_widgets.algebra.evaluation import Reciprocal, bounds
from kt_widgets.algebra.flint_rings import Ring
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.sparse import (
    Pivot,
    Row,
    Rows,
    Thrift,
    eliminate_units,
    fraction_free,
    permutation_sign,
)

__all__ = ["SMALL_CORE", "THRIFT", "determinant"]

THRIFT = Thrift(fill=6, span=20)
"""Unit pivots beyond this cost more in long entries than values save (measured on closed braids)."""

SMALL_CORE = 60
"""Up to this many rows left by thrifty elimination, fraction-free elimination is faster than values."""


def determinant(
    lines: Sequence[Row], base: Ring, symmetry: Callable[[], Reciprocal] | None = None
) -> LaurentPolynomial:
    """The determinant of a square matrix with columns 0, 1, ...

    Unit pivots first. If thrifty elimination leaves more than `SMALL_CORE` rows over Z, the rest is found
    from its values at roots of unity; otherwise all units are taken out, and what is left is eliminated
    fraction-free.

    Parameters
    ----------
    lines : sequence of Row
    base : Ring
    symmetry : function, optional
        Gives what a theorem says of this determinant; called only where values are used.

    Examples
    --------
    >>> from kt_widgets.algebra.flint_rings import ring
    >>> from kt_widgets.algebra.matrix import LaurentMatrix
    >>> print(determinant(LaurentMatrix([[0, "1 - t"], ["1 + t", 5]]).sparse_rows(), ring("Z")))
    -1 + t^2
    """
    size = len(lines)
    rows = [dict(line) for line in lines]
    pivots: list[Pivot] = []
    minor = None
    if base.name == "Z" and size > SMALL_CORE:
        pivots = eliminate_units(rows, THRIFT)
        if size - len(pivots) > SMALL_CORE:
            minor = _by_values(lines, rows, pivots, symmetry)
    if minor is None:
        pivots += eliminate_units(rows)
        minor = _fraction_free(rows, pivots, base)
    images = [0] * size
    for i, j in zip(*_left(pivots, size), strict=True):
        images[i] = j
    for pivot in pivots:
        images[pivot.row] = pivot.column
        minor = minor * pivot.unit
    return minor if permutation_sign(images) == 1 else -minor


def _left(pivots: Sequence[Pivot], size: int) -> tuple[list[int], list[int]]:
    """The rows and the columns without a pivot."""
    used, met = {p.row for p in pivots}, {p.column for p in pivots}
    return [i for i in range(size) if i not in used], [j for j in range(size) if j not in met]


def _fraction_free(rows: Rows, pivots: Sequence[Pivot], base: Ring) -> LaurentPolynomial:
    """The minor that the pivots leave."""
    left, columns = _left(pivots, len(rows))
    found = fraction_free([rows[i] for i in left], columns, base)
    if found.rank < len(left):
        return LaurentPolynomial((), 0, base.name)
    place = {j: k for k, j in enumerate(columns)}
    sign = permutation_sign(found.rows) * permutation_sign([place[j] for j in found.columns])
    return found.minor if sign == 1 else -found.minor


def _by_values(
    lines: Sequence[Row], rows: Rows, pivots: Sequence[Pivot], symmetry: Callable[[], Reciprocal] | None
) -> LaurentPolynomial | None:
    """The minor that the pivots leave, from its values; None if there are too many or too long ones."""
    left, columns = _left(pivots, len(rows))
    new = {j: k for k, j in enumerate(columns)}
    core = [{new[j]: f for j, f in rows[i].items()} for i in left]
    if not all(core):
        return LaurentPolynomial()
    unit = sum(pivot.unit.lowest for pivot in pivots)
    known = bounds(core).both(bounds(lines).shifted(-unit))
    if not known.within_reach():
        return None
    # numpy, and numba where it is installed, are loaded only for large matrices.
    from kt_widgets.algebra.evaluation_points import determinant_by_values

    return determinant_by_values(core, known, symmetry() if symmetry else None)
