"""Columns of a large matrix over Z[t,1/t] that are combinations of others with coefficients +-t^k."""

from __future__ import annotations

from kt_widgets.algebra.determinants import THRIFT
from kt_widgets.algebra.flint_rings import prime_kernel
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.sparse import Row, eliminate_units

__all__ = ["without_repeated_relations"]

_PRIME = 2**61 - 1
_POINT = 1_172_812_402_961_167_381 % _PRIME
_MOST_EXPONENT = 100_000


def without_repeated_relations(matrix: LaurentMatrix) -> LaurentMatrix:
    """A matrix over Z with the same column space, less some columns that +-t^k combinations of others give.

    The relators of a connected diagram have such a relation, in which all of them occur. Relations are
    guessed from the kernel at one point of a finite field, after thrifty elimination, and multiplied out.

    Examples
    --------
    >>> a = LaurentMatrix([["1 - t", "t - t^2", "2"], ["3", "3t", "1 + t"]])
    >>> print(without_repeated_relations(a))
    [[1 - t, 2    ],
     [3,     1 + t]]
    """
    rows = matrix.sparse_rows()
    met = {pivot.column for pivot in eliminate_units(rows, THRIFT)}
    left = [row for row in rows if row]
    columns = [j for j in range(matrix.shape[1]) if j not in met]
    core = LaurentMatrix._trusted(left, matrix.over, (len(left), matrix.shape[1]))
    spare = set()
    for vector in _monomial_vectors(left, columns):
        entries = {(j, 0): f for j, f in vector.items()}
        if (core @ LaurentMatrix.from_entries(entries, (matrix.shape[1], 1))).is_zero():
            spare.add(max(vector))
    return matrix.submatrix(range(matrix.shape[0]), [j for j in range(matrix.shape[1]) if j not in spare])


def _monomial_vectors(rows: list[Row], columns: list[int]) -> list[Row]:
    """Vectors with entries +-t^k, the last 1, that seem to be sent to 0; each is alone in its last place."""
    spans = [f.span() for row in rows for f in row.values()]
    reach = min((max(spans, default=0) + 1) * len(columns), _MOST_EXPONENT)
    exponents: dict[int, tuple[int, int]] = {}
    for base, direction in ((_POINT, 1), (pow(_POINT, -1, _PRIME), -1)):
        power = 1
        for k in range(reach + 1):
            exponents.setdefault(power, (direction * k, 1))
            exponents.setdefault(_PRIME - power, (direction * k, -1))
            power = power * base % _PRIME
    powers: dict[int, int] = {}
    grid = [[0] * len(columns) for _ in rows]
    place = {j: k for k, j in enumerate(columns)}
    for line, row in zip(grid, rows, strict=True):
        for j, f in row.items():
            total = 0
            for exponent, c in f.terms().items():
                if exponent not in powers:
                    powers[exponent] = pow(_POINT, exponent, _PRIME)
                total += c * powers[exponent]
            line[place[j]] = total % _PRIME
    found = []
    for vector in prime_kernel(grid, len(columns), _PRIME):
        last = max(k for k, value in enumerate(vector) if value)
        scale = pow(vector[last], -1, _PRIME)
        logs = {j: exponents.get(v * scale % _PRIME) for j, v in zip(columns, vector, strict=True) if v}
        if all(logs.values()):
            found.append({j: LaurentPolynomial.monomial(*log) for j, log in logs.items() if log})
    return found
