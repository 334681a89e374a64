"""Row and column operations that make the entries of a small matrix over Z[t,1/t] shorter."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from itertools import product

from kt_widgets.algebra.elimination import Operations, Transforms
from kt_widgets.algebra.ideals import Ideal
from kt_widgets.algebra.laurent import LaurentPolynomial, subtract_product
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.errors import LimitError

__all__ = ["MAX_SHORTENED", "shorten"]

MAX_SHORTENED = 5
"""Largest number of rows and columns of a matrix that is shortened."""


def shorten(matrix: LaurentMatrix) -> tuple[LaurentMatrix, Transforms]:
    """A matrix B = L A R with shorter entries, and the transforms L and R with their inverses.

    One line plus or minus a power of t times another one, whichever step saves most, as long as one does;
    then entries that lie in the ideal of lone entries of their row and column are cleared; both are left out
    beyond `MAX_SHORTENED` rows or columns. Then rows and columns are divided by powers of t.

    Examples
    --------
    >>> B, transforms = shorten(LaurentMatrix([["t - 2", "t^3 - 2t^2"], [0, "2t - 1"]]))
    >>> print(B)
    [[-2 + t, 0      ],
     [0,      -1 + 2t]]
    >>> print(shorten(LaurentMatrix([["2 - t", "1 - t^2"], [0, "2t - 1"]]))[0])
    [[2 - t, 0      ],
     [0,     -1 + 2t]]
    """
    height, width = matrix.shape
    operations = Operations(matrix.shape, matrix.over)
    grid = [list(row) for row in matrix.rows]
    while max(height, width) <= MAX_SHORTENED:
        step = max(_steps(grid), default=None)
        if step is None or step[0] <= 0:
            break
        _, rows, i, j, exponent, sign = step
        factor = LaurentPolynomial.monomial(exponent, sign, matrix.over)
        if rows:
            operations.subtract_row(i, factor, j)
            grid[i] = _difference(grid[i], factor, grid[j])
        else:
            operations.subtract_column(i, factor, j)
            for row in grid:
                row[i] = subtract_product(row[i], factor, row[j])
    if max(height, width) <= MAX_SHORTENED and matrix.over == "Z":
        _clear_entries(grid, operations)
    for i, line in enumerate(grid):
        if any(line) and (low := _lowest(line)):
            unit = LaurentPolynomial.monomial(-low, 1, matrix.over)
            operations.scale_row(i, unit)
            grid[i] = [unit * f for f in line]
    for j, column in enumerate(zip(*grid, strict=True)):
        if any(column) and (low := _lowest(column)):
            unit = LaurentPolynomial.monomial(-low, 1, matrix.over)
            operations.scale_column(j, unit)
            for row in grid:
                row[j] = unit * row[j]
    return (
        LaurentMatrix(grid, matrix.over, matrix.shape),
        operations.transforms(range(height), range(width)),
    )


def _clear_entries(grid: list[list[LaurentPolynomial]], operations: Operations) -> None:
    """Clear each entry that columns and rows with no other entry than one beside or below it can clear."""
    height, width = len(grid), len(grid[0]) if grid else 0
    for i, j in product(range(height), range(width)):
        columns = [k for k in range(width) if k != j and [h for h in range(height) if grid[h][k]] == [i]]
        rows = [h for h in range(height) if h != i and [k for k in range(width) if grid[h][k]] == [j]]
        lone = [grid[i][k] for k in columns] + [grid[h][j] for h in rows]
        factors = _combination(grid[i][j], lone) if grid[i][j] and lone else None
        if factors is None:
            continue
        for k, factor in zip(columns, factors, strict=False):
            operations.subtract_column(j, factor, k)
        for h, factor in zip(rows, factors[len(columns) :], strict=True):
            operations.subtract_row(i, factor, h)
        grid[i][j] = LaurentPolynomial()


def _combination(
    target: LaurentPolynomial, elements: Sequence[LaurentPolynomial]
) -> list[LaurentPolynomial] | None:
    """Factors with which the elements sum to the target; None if there are none or too much is asked."""
    try:
        proof = Ideal.certificate(elements)
        over_basis = proof.ideal.cofactors(target)
    except LimitError:
        return None
    if over_basis is None:
        return None
    factors = [LaurentPolynomial() for _ in elements]
    for factor, combination in zip(over_basis, proof.basis_cofactors, strict=True):
        for k, cofactor in combination:
            factors[k] += factor * cofactor
    return factors


def _steps(grid: list[list[LaurentPolynomial]]) -> Iterator[tuple[int, bool, int, int, int, int]]:
    """What each step saves, whether it is on rows, the line, the other line, the exponent and the sign."""
    for rows, lines in ((True, grid), (False, [list(column) for column in zip(*grid, strict=True)])):
        for i, line in enumerate(lines):
            for j, other in enumerate(lines):
                if i == j or not any(line) or not any(other):
                    continue
                size = _size(line)
                for exponent in range(_lowest(line) - _lowest(other), _highest(line) - _highest(other) + 1):
                    for sign in (1, -1):
                        factor = LaurentPolynomial.monomial(exponent, sign, line[0].over)
                        yield size - _size(_difference(line, factor, other)), rows, i, j, exponent, sign


def _difference(
    line: list[LaurentPolynomial], factor: LaurentPolynomial, other: list[LaurentPolynomial]
) -> list[LaurentPolynomial]:
    return [subtract_product(f, factor, g) for f, g in zip(line, other, strict=True)]


def _size(line: list[LaurentPolynomial]) -> int:
    """Powers of t reached, and the bits of the coefficients."""
    return sum(f.span() + 1 + sum(int(c).bit_length() for c in f.coefficients) for f in line if f)


def _lowest(line: Sequence[LaurentPolynomial]) -> int:
    return min(f.lowest for f in line if f)


def _highest(line: list[LaurentPolynomial]) -> int:
    return max(f.highest for f in line if f)
