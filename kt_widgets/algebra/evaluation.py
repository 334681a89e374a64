"""What is known of a determinant over Z[t,1/t] before it is computed."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from math import isqrt, prod
from typing import NamedTuple

from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.sparse import Row

__all__ = ["MOST_BITS", "MOST_POINTS", "Bounds", "Reciprocal", "bounds"]

MOST_POINTS = 20_000
"""The widest range of exponents for which values are computed."""

MOST_BITS = 50_000
"""The longest coefficients for which values are computed: beyond there are not enough primes below 2^30."""


class Bounds(NamedTuple):
    """Where the exponents of a polynomial lie, and what its coefficients do not exceed in absolute value."""

    low: int
    high: int
    height: int

    def both(self, other: Bounds) -> Bounds:
        """What follows from two bounds."""
        return Bounds(max(self.low, other.low), min(self.high, other.high), min(self.height, other.height))

    def shifted(self, shift: int) -> Bounds:
        """Those of t^shift times the polynomial."""
        return Bounds(self.low + shift, self.high + shift, self.height)

    def within_reach(self) -> bool:
        """Whether `MOST_POINTS` points and `MOST_BITS` bits suffice."""
        return self.high - self.low <= MOST_POINTS and self.height.bit_length() <= MOST_BITS


class Reciprocal(NamedTuple):
    """What a theorem says of a polynomial f: f(1/t) = +-t^-k f(t) for some k that has the parity of `span`.

    Its exponents lie between (k - span) / 2 and (k + span) / 2, and the absolute values of its coefficients
    are at most `height`.
    """

    span: int
    height: int


def bounds(rows: Iterable[Row]) -> Bounds:
    """Bounds for the determinant of a square matrix without zero rows or columns.

    Each product of n entries takes one exponent from each row, and one from each column. For |t| = 1 the
    determinant is at most the product of the lengths of the rows, or of the columns (J. Hadamard, Résolution
    d'une question relative aux déterminants, Bull. Sci. Math. 17 (1893)), where an entry is at most the sum
    of its coefficients' absolute values; a coefficient is a mean over the circle, and at most as large.

    Examples
    --------
    >>> from kt_widgets.algebra.matrix import LaurentMatrix
    >>> bounds(LaurentMatrix([["1 - t", 2], [3, "t"]]).sparse_rows())
    Bounds(low=0, high=2, height=8)
    """
    across: list[list[LaurentPolynomial]] = []
    down: dict[int, list[LaurentPolynomial]] = {}
    for row in rows:
        across.append(list(row.values()))
        for j, f in row.items():
            down.setdefault(j, []).append(f)
    return _of_lines(across).both(_of_lines(down.values()))


def _of_lines(lines: Iterable[Sequence[LaurentPolynomial]]) -> Bounds:
    low = high = 0
    squares = []
    for line in lines:
        low += min(f.lowest for f in line)
        high += max(f.highest for f in line)
        squares.append(sum(sum(map(abs, f.coefficients)) ** 2 for f in line))
    return Bounds(low, high, isqrt(prod(squares)))
