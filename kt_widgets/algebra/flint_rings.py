"""Coefficient rings Z, Q and F_p on python-flint: the only file of the package that imports flint."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from functools import lru_cache
from math import gcd, lcm
from operator import index
from typing import Any, TypeAlias

from flint import fmpq_poly, fmpz, fmpz_mat, fmpz_poly, nmod_mat, nmod_poly

from kt_widgets.errors import AlgebraError
from kt_widgets.text.printing import integer_text, number_text

__all__ = [
    "MAX_PRIME",
    "FlintPolynomial",
    "Ring",
    "RingName",
    "hermite_rows",
    "hermite_transform",
    "integer_inverse",
    "integer_kernel",
    "integer_solution",
    "is_prime",
    "prime_determinant",
    "prime_kernel",
    "prime_product",
    "ring",
    "smith_diagonal",
]

RingName: TypeAlias = str | int
"""``"Z"``, ``"Q"`` or a prime number p, which stands for the field of p elements."""

FlintPolynomial: TypeAlias = Any
"""A polynomial of python-flint; mutable, so it never leaves the algebra room."""

MAX_PRIME = 2**31


class Ring:
    """A ring of coefficients: how python numbers become flint polynomials and come back.

    Get one by `ring`; there is one object per ring, so rings are compared by ``is``.

    Attributes
    ----------
    name : RingName
    is_field : bool
    text, latex : str
        How the ring of Laurent polynomials over it is written.
    zero, one : FlintPolynomial
    """

    __slots__ = ("is_field", "latex", "name", "one", "text", "zero")

    name: RingName
    is_field: bool
    text: str
    latex: str

    def __init__(self) -> None:
        self.zero = self.polynomial([])
        self.one = self.polynomial([1])

    def __repr__(self) -> str:
        return f"ring({self.name!r})"

    def __reduce__(self) -> tuple[object, ...]:
        return (ring, (self.name,))

    def number(self, value: object) -> Any:
        """The python number that stands for `value` in this ring; `AlgebraError` if there is none."""
        raise NotImplementedError

    def polynomial(self, coefficients: Sequence[Any]) -> FlintPolynomial:
        """The flint polynomial with these coefficients, lowest first, each a result of `number`."""
        raise NotImplementedError

    def from_integers(self, polynomial: FlintPolynomial) -> FlintPolynomial:
        """The image of a flint polynomial over Z."""
        raise NotImplementedError

    def numbers(self, polynomial: FlintPolynomial) -> list[Any]:
        """The coefficients as python numbers, lowest first."""
        raise NotImplementedError

    def value(self, coefficient: Any) -> Any:
        """One flint coefficient as a python number."""
        return int(coefficient)

    def is_unit(self, coefficient: Any) -> bool:
        """Whether a nonzero flint coefficient has an inverse."""
        return True

    def normal(self, polynomial: FlintPolynomial) -> FlintPolynomial:
        """The associate with leading coefficient positive (over Z) or 1 (over a field)."""
        return polynomial / self.constant(polynomial) if polynomial else polynomial

    def constant(self, polynomial: FlintPolynomial) -> FlintPolynomial:
        """The leading coefficient as a constant polynomial."""
        return self.one * polynomial[len(polynomial) - 1]

    def _integer(self, value: object) -> int:
        # index() also takes the integers of numpy, and no float.
        try:
            return index(value)  # type: ignore[arg-type]
        except TypeError:
            accepted = "an int or Fraction" if self.is_field else "an int (Fractions live over 'Q')"
            said = number_text(value) if isinstance(value, Fraction) else repr(value)
            raise AlgebraError(f"{said} is no coefficient of {self.text}", accepted=accepted) from None


class _Integers(Ring):
    __slots__ = ()
    name, is_field = "Z", False
    text, latex = "Z[t,1/t]", r"\mathbb{Z}[t^{\pm 1}]"

    def number(self, value: object) -> int:
        if isinstance(value, Fraction) and value.denominator == 1:
            return value.numerator
        return self._integer(value)

    def polynomial(self, coefficients: Sequence[Any]) -> FlintPolynomial:
        return fmpz_poly(coefficients)

    def from_integers(self, polynomial: FlintPolynomial) -> FlintPolynomial:
        return polynomial

    def numbers(self, polynomial: FlintPolynomial) -> list[Any]:
        return [int(c) for c in polynomial.coeffs()]

    def is_unit(self, coefficient: Any) -> bool:
        return bool(coefficient == 1 or coefficient == -1)

    def normal(self, polynomial: FlintPolynomial) -> FlintPolynomial:
        return -polynomial if polynomial and polynomial[len(polynomial) - 1] < 0 else polynomial


class _Rationals(Ring):
    __slots__ = ()
    name, is_field = "Q", True
    text, latex = "Q[t,1/t]", r"\mathbb{Q}[t^{\pm 1}]"

    def number(self, value: object) -> Fraction:
        return value if isinstance(value, Fraction) else Fraction(self._integer(value))

    def polynomial(self, coefficients: Sequence[Any]) -> FlintPolynomial:
        common = lcm(*(c.denominator for c in coefficients))
        numerators = [c.numerator * (common // c.denominator) for c in coefficients]
        return fmpq_poly(numerators, common)

    def from_integers(self, polynomial: FlintPolynomial) -> FlintPolynomial:
        return fmpq_poly(polynomial)

    def value(self, coefficient: Any) -> Fraction:
        return Fraction(int(coefficient.p), int(coefficient.q))

    def numbers(self, polynomial: FlintPolynomial) -> list[Any]:
        common = int(polynomial.denom())
        return [Fraction(int(c), common) for c in polynomial.numer().coeffs()]


class _PrimeField(Ring):
    __slots__ = ("p",)
    is_field = True

    def __init__(self, p: int) -> None:
        self.name = self.p = p
        self.text = f"F_{p}[t,1/t]"
        self.latex = rf"\mathbb{{F}}_{{{p}}}[t^{{\pm 1}}]"
        super().__init__()

    def number(self, value: object) -> int:
        if isinstance(value, Fraction):
            if value.denominator % self.p == 0:
                raise AlgebraError(
                    f"the denominator of {number_text(value)} is 0 modulo {self.p}",
                    accepted=f"fractions whose denominator is prime to {self.p}",
                )
            return value.numerator * pow(value.denominator, -1, self.p) % self.p
        return self._integer(value) % self.p

    def polynomial(self, coefficients: Sequence[Any]) -> FlintPolynomial:
        return nmod_poly(coefficients, self.p)

    def from_integers(self, polynomial: FlintPolynomial) -> FlintPolynomial:
        return nmod_poly(polynomial, self.p)

    def numbers(self, polynomial: FlintPolynomial) -> list[Any]:
        return [int(c) for c in polynomial.coeffs()]


_INTEGERS = _Integers()
_RATIONALS = _Rationals()


@lru_cache(maxsize=256)
def _prime_field(p: int) -> Ring:
    if not 2 <= p < MAX_PRIME:
        raise AlgebraError(
            f"{integer_text(p)} is no prime below 2^31", where="ring", accepted="'Z', 'Q' or a prime p < 2^31"
        )
    if not fmpz(p).is_prime():
        small = next(d for d in range(2, p) if p % d == 0)
        raise AlgebraError(
            f"the integers modulo {p} = {small} * {p // small} are not a field",
            where="ring",
            accepted="'Z', 'Q' or a prime p < 2^31",
        )
    return _PrimeField(p)


def ring(name: RingName) -> Ring:
    """The ring of coefficients called `name`.

    Parameters
    ----------
    name : "Z", "Q" or int
        An int is a prime p < 2^31 and names the field of p elements.

    Raises
    ------
    AlgebraError
        For any other name, and for composite p.

    Examples
    --------
    >>> ring("Q").text
    'Q[t,1/t]'
    >>> ring(6)
    Traceback (most recent call last):
    ...
    kt_widgets.errors.AlgebraError: the integers modulo 6 = 2 * 3 are not a field (at ring);
    accepted: 'Z', 'Q' or a prime p < 2^31
    """
    if name == "Z":
        return _INTEGERS
    if name == "Q":
        return _RATIONALS
    if isinstance(name, int) and not isinstance(name, bool):
        return _prime_field(name)
    raise AlgebraError(f"{name!r} names no ring", where="ring", accepted="'Z', 'Q' or a prime p < 2^31")


def integer_kernel(rows: Sequence[Sequence[int]], columns: int) -> list[list[int]]:
    """A basis of the integer vectors that every row sends to 0; the first nonzero entry of each is positive.

    The Hermite form of the transpose with an identity beside it leaves the kernel beside its zero rows;
    LLL then makes the basis short.

    Parameters
    ----------
    rows : sequence of sequences of int
    columns : int
        The length of the rows, needed when there is none.

    Examples
    --------
    >>> integer_kernel([[2, 0, 3]], 3)
    [[0, 1, 0], [3, 0, -2]]
    """
    height = len(rows)
    if columns == 0:
        return []
    augmented = [[row[j] for row in rows] + [int(i == j) for i in range(columns)] for j in range(columns)]
    hermite = fmpz_mat(augmented).hnf().tolist()
    kernel = [row[height:] for row in hermite if not any(row[:height])]
    if not kernel:
        return []
    reduced = _integers(fmpz_mat(kernel).lll())
    return [row if next(x for x in row if x) > 0 else [-x for x in row] for row in reduced]


def hermite_rows(rows: Sequence[Sequence[int]]) -> list[list[int]]:
    """The nonzero rows of the Hermite normal form: a basis of the lattice that the rows span.

    Examples
    --------
    >>> hermite_rows([[4, 1], [6, 1], [2, 0]])
    [[2, 0], [0, 1]]
    """
    reduced = fmpz_mat([list(row) for row in rows]).hnf().tolist() if rows else []
    return [[int(x) for x in row] for row in reduced if any(row)]


def hermite_transform(rows: Sequence[Sequence[int]]) -> tuple[list[list[int]], list[list[int]]]:
    """The Hermite normal form H, zero rows last, and an invertible T with T rows = H.

    The Hermite form of the rows with an identity beside them, so that T does not depend on the algorithm.

    Examples
    --------
    >>> hermite_transform([[4], [6]])
    ([[2], [0]], [[2, -1], [3, -2]])
    """
    width = len(rows[0]) if rows else 0
    augmented = [[*row, *(int(i == k) for k in range(len(rows)))] for i, row in enumerate(rows)]
    hermite = _integers(fmpz_mat(augmented).hnf()) if rows else []
    return [row[:width] for row in hermite], [row[width:] for row in hermite]


def integer_inverse(rows: Sequence[Sequence[int]]) -> list[list[int]]:
    """The inverse of a matrix of determinant 1 or -1.

    Examples
    --------
    >>> integer_inverse([[2, 1], [1, 0]])
    [[0, 1], [1, -2]]
    """
    # python-flint 0.9's inv(integer=True) gives the negative of the inverse where the determinant is -1.
    if not rows:
        return []
    return [[int(x.p) for x in row] for row in fmpz_mat([list(row) for row in rows]).inv().tolist()]


def smith_diagonal(rows: Sequence[Sequence[int]]) -> list[int]:
    """The diagonal of the Smith normal form over Z: 0 or more, each dividing the next.

    Examples
    --------
    >>> smith_diagonal([[2, 0, 0], [0, 3, 0]])
    [1, 6]
    """
    if not rows or not rows[0]:
        return []
    form = fmpz_mat([list(row) for row in rows]).snf()
    return [int(form[i, i]) for i in range(min(len(rows), len(rows[0])))]


def _integers(matrix: fmpz_mat) -> list[list[int]]:
    return [[int(x) for x in row] for row in matrix.tolist()]


def integer_solution(rows: Sequence[Sequence[int]], target: Sequence[int]) -> list[int] | None:
    """A short integer vector x with sum(x_i * rows_i) = target, or None if there is none.

    Among the relations between the rows and the target, one has to have coefficient +-1 at the target. LLL
    with that coefficient weighed heavily puts such a relation last, shortened by the others (A. K. Lenstra,
    H. W. Lenstra, L. Lovasz, Factoring polynomials with rational coefficients, Math. Ann. 261 (1982)).

    Examples
    --------
    >>> integer_solution([[4, 0], [6, 1], [0, 1]], [2, 0])
    [-1, 1, -1]
    >>> integer_solution([[4, 0]], [2, 0]) is None
    True
    """
    relations = integer_kernel(list(zip(*rows, target, strict=True)), len(rows) + 1)
    if gcd(*(relation[-1] for relation in relations)) != 1:
        return None
    size = max(abs(x) for relation in relations for x in relation)
    # Without the target the relations have a basis below size^2 entrywise; LLL may exceed it by 2^(rank).
    weight = (len(rows) * size * size) << (len(relations) + 2)
    weighed = [[*relation[:-1], relation[-1] * weight] for relation in relations]
    relation = [int(x) for x in fmpz_mat(weighed).lll().tolist()[-1]]
    return [-x if relation[-1] > 0 else x for x in relation[:-1]]


def is_prime(number: int) -> bool:
    """Whether an integer is a prime.

    Examples
    --------
    >>> is_prime(2**31 - 1), is_prime(2**32 + 1)
    (True, False)
    """
    return bool(fmpz(number).is_prime())


def prime_determinant(rows: Sequence[Sequence[int]], p: int) -> int:
    """The determinant of a square matrix over the field of p elements, in [0, p).

    Examples
    --------
    >>> prime_determinant([[0, 1], [2, 5]], 7)
    5
    """
    entries = [value for row in rows for value in row]
    return int(nmod_mat(len(rows), len(rows), entries, p).det())


def prime_kernel(rows: Sequence[Sequence[int]], columns: int, p: int) -> list[list[int]]:
    """A basis of the vectors that all rows send to 0 over the field of p elements, in echelon form.

    Examples
    --------
    >>> prime_kernel([[1, 2, 3], [2, 4, 6]], 3, 7)
    [[5, 1, 0], [4, 0, 1]]
    """
    entries = [value for row in rows for value in row]
    basis, nullity = nmod_mat(len(rows), columns, entries, p).nullspace()
    return [[int(basis[i, k]) for i in range(columns)] for k in range(nullity)]


def prime_product(left: Sequence[int], right: Sequence[int], p: int) -> list[int]:
    """The coefficients of the product of two polynomials over the field of p elements, lowest first.

    Examples
    --------
    >>> prime_product([1, 1], [2, 0, 4], 5)
    [2, 2, 4, 4]
    """
    product = nmod_poly(list(left), p) * nmod_poly(list(right), p)
    return [int(c) for c in product.coeffs()]
