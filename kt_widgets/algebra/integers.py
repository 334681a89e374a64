"""Smith normal forms over Z with the transforms that prove them, and matrices of multiplication by t.

An integer matrix is a `LaurentMatrix` over "Z" whose entries are constants.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise

from kt_widgets.algebra.elimination import Transforms, eliminate
from kt_widgets.algebra.flint_rings import hermite_transform, integer_inverse, smith_diagonal
from kt_widgets.algebra.laurent import LaurentPolynomial, subtract_product
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.smith import SMITH_MATRICES, SmithMatrices
from kt_widgets.errors import AlgebraError, CertificateError, LimitError

__all__ = [
    "MAX_INTEGER_SIDE",
    "IntegerSmithForm",
    "at_companion",
    "integer_factors",
    "integer_smith_form",
]

MAX_INTEGER_SIDE = 3000
"""Largest number of rows or columns of an integer matrix that is brought to Smith form."""


@dataclass(frozen=True)
class IntegerSmithForm(SmithMatrices, kind="integer smith form"):
    """U A V = D over the integers, U and V invertible, D diagonal, each entry dividing the next.

    The diagonal is not negative; ones come first and zeros last. All six matrices have constant entries.

    Examples
    --------
    >>> s = integer_smith_form(LaurentMatrix([[4, 6], [2, 8]]))
    >>> s.diagonal, s.verify()
    ((2, 10), True)
    """

    @property
    def diagonal(self) -> tuple[int, ...]:
        """The diagonal of D."""
        return tuple(int(self.D[i, i].coefficient(0)) for i in range(min(self.D.shape)))

    @property
    def factors(self) -> tuple[int, ...]:
        """The cokernel: factors > 1, then a 0 for each free Z."""
        return _cokernel(self.diagonal, self.D.shape[0])

    def verify(self) -> bool:
        """Check everything by multiplication.

        Raises
        ------
        CertificateError
            Naming the entry of a matrix or product that is wrong.
        """
        for name in SMITH_MATRICES:
            _check_integers(getattr(self, name), name)
        self.check_products("negative")
        return True


def _check_integers(matrix: LaurentMatrix, name: str) -> None:
    if matrix.over != "Z":
        raise CertificateError(f"{name} is over {matrix.over!r}, not over the integers", where=name)
    for i, j, f in matrix.entries():
        if f.span() or f.lowest:
            raise CertificateError(f"{f} is no integer", where=f"entry ({i + 1}, {j + 1}) of {name}")


def _rows(matrix: LaurentMatrix) -> list[list[int]]:
    rows = [[0] * matrix.shape[1] for _ in range(matrix.shape[0])]
    for i, j, f in matrix.entries():
        rows[i][j] = int(f.coefficients[0])
    return rows


def _matrix(rows: Sequence[Sequence[int]], width: int) -> LaurentMatrix:
    terms = ((i, j, 0, c) for i, row in enumerate(rows) for j, c in enumerate(row) if c)
    return LaurentMatrix.from_monomials(terms, (len(rows), width))


def _check_input(matrix: LaurentMatrix) -> None:
    for i, j, f in matrix.entries():
        if matrix.over != "Z" or f.span() or f.lowest:
            raise AlgebraError(
                f"{f} is no integer", where=f"entry ({i + 1}, {j + 1})", accepted="a matrix of integers"
            )
    if max(matrix.shape) > MAX_INTEGER_SIDE:
        raise LimitError(
            f"an integer matrix of shape {matrix.shape}",
            accepted=f"at most {MAX_INTEGER_SIDE} rows and columns",
        )


def integer_factors(matrix: LaurentMatrix) -> tuple[int, ...]:
    """The cokernel of an integer matrix: factors > 1, each dividing the next, then a 0 for each free Z.

    Raises
    ------
    AlgebraError
        If an entry is no integer.
    LimitError
        Beyond `MAX_INTEGER_SIDE`.

    Examples
    --------
    >>> integer_factors(LaurentMatrix([[4, 6], [2, 8], [0, 0]]))
    (2, 10, 0)
    """
    _check_input(matrix)
    core = eliminate(matrix).core
    return _cokernel(smith_diagonal(_rows(core)), core.shape[0])


def _cokernel(diagonal: Sequence[int], generators: int) -> tuple[int, ...]:
    return tuple(d for d in diagonal if d != 1) + (0,) * (generators - len(diagonal))


def integer_smith_form(matrix: LaurentMatrix) -> IntegerSmithForm:
    """The Smith normal form of an integer matrix with transforms; the same errors as `integer_factors`.

    Entries 1 and -1 are taken out first. Then Hermite forms of rows and columns in turn, until the matrix is
    diagonal (R. Kannan, A. Bachem, Polynomial algorithms for computing the Smith and Hermite normal forms of
    an integer matrix, SIAM J. Comput. 8 (1979)); where an entry does not divide the next one, its row is
    added to that one and the turns go on.

    Examples
    --------
    >>> integer_smith_form(LaurentMatrix([[2, 0, 0], [0, 3, 0]])).diagonal
    (1, 6)
    """
    _check_input(matrix)
    elimination = eliminate(matrix)
    units = len(elimination.pivots)
    core, inner = _diagonalised(elimination.core)
    total = inner.after(units) @ elimination.transforms()
    D = LaurentMatrix.blocks(LaurentMatrix.identity(units), core)
    return IntegerSmithForm(matrix, D, total.left, total.left_inverse, total.right, total.right_inverse)


def _diagonalised(matrix: LaurentMatrix) -> tuple[LaurentMatrix, Transforms]:
    height, width = matrix.shape
    current = _rows(matrix)
    U, V = LaurentMatrix.identity(height), LaurentMatrix.identity(width)
    while height and width:
        current, step = hermite_transform(current)
        U = _matrix(step, height) @ U
        current, V = _column_turn(current, V)
        if any(c for i, row in enumerate(current) for j, c in enumerate(row) if i != j):
            continue
        place = _not_dividing([current[i][i] for i in range(min(height, width))])
        if place is None:
            break
        # This row takes the next one in; the Hermite form of the columns then has the gcd of the two entries.
        current[place][place + 1] = current[place + 1][place + 1]
        added = LaurentMatrix.from_entries({(place, place + 1): 1}, (height, height))
        U = (LaurentMatrix.identity(height) + added) @ U
        current, V = _column_turn(current, V)
    U_inverse, V_inverse = (_matrix(integer_inverse(_rows(m)), m.shape[0]) for m in (U, V))
    return _matrix(current, width), Transforms(U, U_inverse, V, V_inverse)


def _column_turn(rows: list[list[int]], V: LaurentMatrix) -> tuple[list[list[int]], LaurentMatrix]:
    """The Hermite form of the columns, and V with their transform behind it."""
    turned, step = hermite_transform(list(zip(*rows, strict=True)))
    return [list(column) for column in zip(*turned, strict=True)], V @ _matrix(step, len(step)).transpose()


def _not_dividing(diagonal: Sequence[int]) -> int | None:
    """The first index whose entry does not divide the next; zeros come last."""
    for i, (a, b) in enumerate(pairwise(diagonal)):
        if a and b % a:
            return i
    return None


def at_companion(matrix: LaurentMatrix, modulus: LaurentPolynomial) -> LaurentMatrix:
    """The integer matrix of a matrix over Z[t,1/t] on the powers 1, t, ... of Z[t,1/t]/(f).

    Every entry becomes the block of its multiplication, a polynomial in the companion matrix of f.

    Parameters
    ----------
    matrix : LaurentMatrix
        Over "Z".
    modulus : LaurentPolynomial
        f, whose lowest exponent is 0 and whose lowest and leading coefficients are 1 or -1.

    Raises
    ------
    AlgebraError
        If f is not such a polynomial.
    LimitError
        Beyond `MAX_INTEGER_SIDE`.

    Examples
    --------
    >>> f = LaurentPolynomial.parse("1 + t + t^2")
    >>> print(at_companion(LaurentMatrix([["1 - t + t^2"]]), f))
    [[0,  2],
     [-2, 2]]
    """
    ends = [modulus.coefficient(e) for e in (modulus.lowest, modulus.highest)]
    if modulus.over != "Z" or modulus.lowest or any(abs(c) != 1 for c in ends):
        raise AlgebraError(
            f"powers of t are no basis modulo {modulus}",
            accepted="a polynomial over Z from t^0 on, with lowest and leading coefficient 1 or -1",
        )
    size = modulus.span()
    height, width = size * matrix.shape[0], size * matrix.shape[1]
    if max(height, width) > MAX_INTEGER_SIDE:
        raise LimitError(
            f"an integer matrix of shape {(height, width)}",
            accepted=f"at most {MAX_INTEGER_SIDE} rows and columns: a modulus of smaller degree",
        )
    monomials = (
        (i * size + k, j * size + shift, 0, c)
        for i, j, f in matrix.entries()
        for shift, column in enumerate(_multiples(f, modulus))
        for k, c in enumerate(column)
        if c
    )
    return LaurentMatrix.from_monomials(monomials, (height, width))


def _multiples(f: LaurentPolynomial, modulus: LaurentPolynomial) -> Iterator[list[int]]:
    """The coefficients of f, t f, ..., t^(d-1) f modulo a polynomial of degree d with units at both ends."""
    down, size = modulus.coefficients, modulus.span()
    start = f * LaurentPolynomial.monomial(-min(f.lowest, 0))
    rest = subtract_product(start, start.floor_quotient(modulus), modulus)
    column = [int(rest.coefficient(e)) for e in range(size)]
    for _ in range(-min(f.lowest, 0)):
        # Divided by t: the lowest coefficient is taken away by a multiple of the modulus.
        multiple = column[0] * down[0] if size else 0
        column = [c - multiple * d for c, d in zip([*column, 0], down, strict=True)][1:]
    for _ in range(size):
        yield column
        multiple = column[-1] * down[-1]
        column = [c - multiple * d for c, d in zip([0, *column], down, strict=True)][:-1]
