"""Determinants over Z[t,1/t] from their values at roots of unity modulo primes. Loaded when first needed.

f = c_0 + ... + c_d t^d is known from its values at all N-th roots of unity but 1, for N > d + 1: the value at
1 is what makes c_(d+1) vanish. N is prime, since the minors that serve as pivots often have cyclotomic
factors of small order, which vanish at roots of unity of composite order. Remainders of the c_k modulo enough
primes p = 1 mod N give the integers: the product of the primes has to exceed twice a bound for them.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from importlib.util import find_spec
from itertools import count
from math import prod
from typing import NamedTuple

import numpy as np

from kt_widgets.algebra import evaluation_lanes
from kt_widgets.algebra.evaluation import Bounds, Reciprocal
from kt_widgets.algebra.evaluation_lanes import Lanes, Points, Runner, Terms, powers
from kt_widgets.algebra.evaluation_program import Program, straight_line
from kt_widgets.algebra.flint_rings import is_prime, prime_determinant, prime_product
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.sparse import Row
from kt_widgets.errors import AlgebraError

__all__ = ["determinant_by_values"]

PRIMES_BELOW = 2**30

POINTS_AT_A_TIME = 512

COMPILED_FROM = 10_000_000
"""From this many multiplications on numba is used where it is installed; the answers are the same."""


def determinant_by_values(
    rows: Sequence[Row], known: Bounds, symmetry: Reciprocal | None = None
) -> LaurentPolynomial:
    """The determinant of a square matrix over Z with columns 0, 1, ...

    Parameters
    ----------
    rows : sequence of Row
    known : Bounds
        True bounds for the determinant, within reach; from too small ones a wrong answer follows.
    symmetry : Reciprocal, optional
        Halves the points.

    Examples
    --------
    >>> from kt_widgets.algebra.evaluation import bounds
    >>> from kt_widgets.algebra.matrix import LaurentMatrix
    >>> rows = LaurentMatrix([["1 - t", 2], [3, "1 + t^-1"]]).sparse_rows()
    >>> determinant_by_values(rows, bounds(rows))
    LaurentPolynomial('t^-1 - 6 - t')
    """
    if not all(rows) or known.high < known.low:
        return LaurentPolynomial()
    program = straight_line(rows)
    if program.rest == ():
        return LaurentPolynomial()
    lows = [min(f.lowest for f in row.values()) for row in rows]
    known = known.shifted(-sum(lows))
    window = known.high - known.low
    span = window if symmetry is None else symmetry.span
    height = known.height if symmetry is None else min(known.height, symmetry.height)
    # The window counts too, so that an exponent in it is known when it is known modulo the order.
    order = next(n for n in count(max(span, window) + 2) if n > 2 and is_prime(n))
    primes = list(_primes(order, 2 * height))
    points = np.arange(1, order if symmetry is None else (order + 1) // 2)
    units = [LaurentPolynomial.monomial(-low) for low in lows]
    terms = Terms.of(rows[i][j] * units[i] for i, j in program.entries)
    products = sum(len(step.targets) for step in program.steps) * len(points) * len(primes)
    run = _runner(program, terms, products)
    matrix = _Matrix(program, terms, len(rows))
    low = known.low
    turn: _Turn | None = None
    residues = []
    for p in primes:
        table = powers(_root(order, p), order, p)
        values = np.zeros(order, np.uint64)
        for chunk in np.array_split(points, -(-len(points) // POINTS_AT_A_TIME)):
            values[chunk], failed = run(table, chunk, p)
            for point in chunk[failed]:
                values[point] = matrix.determinant(int(table[point]), p)
        if symmetry is not None:
            turn = turn or _turn(values, table, matrix, p)
            if turn is not None:
                values[order - points] = _turned(values[points], points, turn, table, p)
                low = (turn.exponent - span) * pow(2, -1, order) % order
        residues.append(_coefficients(values, low, span, table, p))
    if symmetry is not None:
        least = known.low - span // 2
        low = least + (low - least) % order
    coefficients = [program.sign * c for c in _chinese(residues, primes)]
    return LaurentPolynomial(coefficients, low + sum(lows))


def _runner(program: Program, terms: Terms, products: int) -> Runner:
    if products >= COMPILED_FROM and find_spec("numba"):
        from kt_widgets.algebra import evaluation_compiled

        return evaluation_compiled.runner(program, terms)
    return evaluation_lanes.runner(program, terms)


def _primes(order: int, product: int) -> Iterator[int]:
    """The largest primes that are 1 modulo `order`, until their product exceeds this one."""
    p = (PRIMES_BELOW - 2) // order * order + 1
    reached = 1
    while reached <= product:
        if is_prime(p):
            reached *= p
            yield p
        p -= order


def _root(order: int, p: int) -> int:
    """A root of unity modulo p whose order is the given prime."""
    return next(w for g in count(2) if (w := pow(g, (p - 1) // order, p)) != 1)


class _Matrix:
    """The same matrix at one point, for the points where the program would divide by 0."""

    def __init__(self, program: Program, terms: Terms, size: int) -> None:
        self.program = program
        self.terms = terms
        self.size = size

    def determinant(self, at: int, p: int) -> int:
        """The determinant with the program's sign, by flint, which chooses its own pivots."""
        rows = [[0] * self.size for _ in range(self.size)]
        exponents, ends = self.terms.exponents.tolist(), self.terms.ends.tolist()
        power = {e: pow(at, e, p) for e in set(exponents)}
        for (i, j), begin, end in zip(self.program.entries, ends, ends[1:], strict=False):
            terms = zip(self.terms.coefficients[begin:end], exponents[begin:end], strict=True)
            rows[i][j] = sum(c * power[e] for c, e in terms) % p
        return self.program.sign * prime_determinant(rows, p) % p


class _Turn(NamedTuple):
    """f(1/t) = sign * t^-exponent * f(t); the exponent is known modulo the order of the roots of unity."""

    sign: int
    exponent: int


def _turn(values: Lanes, table: Lanes, matrix: _Matrix, p: int) -> _Turn | None:
    """The symmetry, seen at the first point with a value that is not 0, if there is one."""
    found = np.flatnonzero(values)
    if not len(found):
        return None
    point, order = int(found[0]), len(table)
    opposite = matrix.determinant(int(table[order - point]), p)
    ratio = opposite * pow(int(values[point]), -1, p) % p
    for sign in (1, -1):
        if len(place := np.flatnonzero(table == np.uint64(sign * ratio % p))):
            return _Turn(sign, -int(place[0]) * pow(point, -1, order) % order)
    raise AlgebraError("the determinant is not symmetric up to units", accepted="no `Reciprocal`")


def _turned(values: Lanes, points: Points, turn: _Turn, table: Lanes, p: int) -> Lanes:
    """The values at the inverses of these points."""
    factors = table[-points * turn.exponent % len(table)] * values % np.uint64(p)
    return factors if turn.sign > 0 else (np.uint64(p) - factors) % np.uint64(p)


def _coefficients(values: Lanes, low: int, span: int, table: Lanes, p: int) -> list[int]:
    """c_0, ..., c_span of f = t^low (c_0 + ... + c_span t^span) modulo p, from its values but that at 1.

    Sum over i of v_i w^(-ik) for all k is one product of polynomials, since -ik = C(i, 2) + C(k, 2) -
    C(i + k, 2) (L. I. Bluestein, A linear filtering approach to the computation of discrete Fourier
    transform, IEEE Trans. Audio Electroacoust. 18 (1970)).
    """
    order, modulus = len(table), np.uint64(p)
    i = np.arange(order + span + 1)
    half = i * (i - 1) // 2 % order
    shifted = values * table[-low * i[:order] % order] % modulus
    left = shifted * table[half[:order]] % modulus
    right = table[-half % order]
    product = prime_product(left[::-1].tolist(), right.tolist(), p)
    product += [0] * (order + span + 1 - len(product))
    sums = np.array(product[order - 1 : order + span + 1], np.uint64) * table[half[: span + 2]] % modulus
    # The value at 1 is missing from all sums alike; it makes the last coefficient 0.
    sums = (sums[:-1] + (modulus - sums[-1])) * np.uint64(pow(order, -1, p)) % modulus
    return [int(c) for c in sums]


def _chinese(residues: Sequence[Sequence[int]], primes: Sequence[int]) -> list[int]:
    """The integers of least absolute value that leave these remainders, a row for each prime."""
    product = prod(primes)
    parts = [(q := product // p) * pow(q, -1, p) for p in primes]
    sums = (
        sum(r * part for r, part in zip(column, parts, strict=True)) for column in zip(*residues, strict=True)
    )
    remainders = (total % product for total in sums)
    return [r - product if 2 * r > product else r for r in remainders]
