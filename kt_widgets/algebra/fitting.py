"""Fitting ideals: of the minors of a presentation matrix, reduced by unit pivots first; with certificates."""

from __future__ import annotations

from bisect import bisect
from collections.abc import Iterator
from dataclasses import dataclass
from math import comb
from operator import index
from typing import Any, SupportsIndex, TypeAlias

from kt_widgets.algebra.determinants import SMALL_CORE
from kt_widgets.algebra.elimination import Elimination, Transforms, eliminate, spare_columns
from kt_widgets.algebra.ideals import (
    Combination,
    Ideal,
    check_canonical,
    check_combinations,
    combination_data,
    combination_from_data,
)
from kt_widgets.algebra.laurent import LaurentPolynomial, gcd_of, subtract_product
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.relations import without_repeated_relations
from kt_widgets.errors import AlgebraError, CertificateError, LimitError
from kt_widgets.text.portable import Portable
from kt_widgets.text.printing import integer_text

__all__ = [
    "MAX_MINORS",
    "FittingCertificate",
    "fitting_certificate",
    "fitting_divisor",
    "fitting_ideal",
    "minors",
]

MAX_MINORS = 50_000
"""Largest number of minors that a Fitting ideal is made from."""

_Place: TypeAlias = tuple[tuple[int, ...], tuple[int, ...]]


def minors(core: LaurentMatrix, size: int) -> Iterator[tuple[_Place, LaurentPolynomial]]:
    """The nonzero minors of a size with their rows and columns, in order; the one of size 0 is 1.

    Expanded along the last row: the minors of the first rows serve all sets of rows that begin with them.

    Raises
    ------
    LimitError
        If there are more than `MAX_MINORS`.

    Examples
    --------
    >>> [(place, str(f)) for place, f in minors(LaurentMatrix([["t", 2, 0], [0, 1, 1]]), 2)]
    [(((0, 1), (0, 1)), 't'), (((0, 1), (0, 2)), 't'), (((0, 1), (1, 2)), '2')]
    """
    height, width = core.shape
    count = comb(height, size) * comb(width, size)
    if count > MAX_MINORS:
        raise LimitError(
            f"{count} minors of size {size} in a core of shape {core.shape}", accepted=f"at most {MAX_MINORS}"
        )
    lines = core.sparse_rows()

    def extended(
        rows: tuple[int, ...], known: dict[tuple[int, ...], LaurentPolynomial]
    ) -> Iterator[tuple[_Place, LaurentPolynomial]]:
        if len(rows) == size:
            yield from (((rows, columns), known[columns]) for columns in sorted(known))
            return
        missing = size - len(rows)
        for i in range(rows[-1] + 1 if rows else 0, height - missing + 1):
            sums: dict[tuple[int, ...], LaurentPolynomial] = {}
            for columns, minor in known.items():
                negative = -minor
                for j, f in lines[i].items():
                    place = bisect(columns, j)
                    if place and columns[place - 1] == j:
                        continue
                    key = (*columns[:place], j, *columns[place:])
                    signed = negative if (len(columns) - place) % 2 == 0 else minor
                    old = sums.get(key)
                    sums[key] = -signed * f if old is None else subtract_product(old, signed, f)
            yield from extended((*rows, i), {key: f for key, f in sums.items() if f})

    one = LaurentPolynomial.constant(1, core.over)
    yield from extended((), {(): one})


def _core(matrix: LaurentMatrix, k: int) -> tuple[Elimination, int]:
    """The elimination of a presentation matrix, and the size of the core's minors that generate Fitt_k."""
    if not isinstance(k, SupportsIndex) or index(k) < 0:
        said = integer_text(k) if isinstance(k, int) else repr(k)
        raise AlgebraError(f"there is no Fitting ideal number {said}", accepted="0, 1, 2, ...")
    elimination = eliminate(matrix)
    return elimination, max(elimination.core.shape[0] - k, 0)


def _check_integral(matrix: LaurentMatrix) -> None:
    if matrix.over != "Z":
        raise AlgebraError(
            f"Fitting ideals are computed over Z[t,1/t], not over {matrix.over!r}",
            accepted="a matrix over Z; over a field use invariant_factors",
        )


def fitting_ideal(matrix: LaurentMatrix, k: int) -> Ideal:
    """The k-th Fitting ideal of the cokernel: of the minors of size (rows - k).

    Unit pivots are taken out first, which changes no Fitting ideal; minors of size 0 or less give (1), of a
    size larger than the matrix (0).

    Parameters
    ----------
    matrix : LaurentMatrix
        Over "Z"; rows are generators, columns are relations.
    k : int
        0, 1, 2, ...

    Raises
    ------
    AlgebraError
        If the matrix is not over Z or k is negative.
    LimitError
        If the core has more than `MAX_MINORS` such minors.

    Examples
    --------
    >>> a = LaurentMatrix([["t - 2", 0], [0, "2t - 1"]])
    >>> print(fitting_ideal(a, 0), fitting_ideal(a, 1), fitting_ideal(a, 2))
    (2 - 5t + 2t^2) (3, 1 + t) (1)
    """
    _check_integral(matrix)
    elimination, size = _core(matrix, k)
    return Ideal([minor for _, minor in minors(_without_spare_columns(elimination.core), size)])


def _without_spare_columns(core: LaurentMatrix) -> LaurentMatrix:
    spare = {j for j, _ in spare_columns(core)}
    return core.submatrix(range(core.shape[0]), [j for j in range(core.shape[1]) if j not in spare])


def fitting_divisor(matrix: LaurentMatrix, k: int) -> LaurentPolynomial:
    """The greatest common divisor of the k-th Fitting ideal, in normal form, over any of the rings.

    Examples
    --------
    >>> fitting_divisor(LaurentMatrix([["1 - t", "1 - t^2"]], over="Q"), 0)
    LaurentPolynomial('-1 + t', over='Q')
    """
    if k == 0 and matrix.over == "Z" and min(matrix.shape) > SMALL_CORE:
        matrix = without_repeated_relations(matrix)
        if matrix.shape[0] == matrix.shape[1]:
            return matrix.determinant().normal_form()
    elimination, size = _core(matrix, k)
    core = _without_spare_columns(elimination.core)
    return gcd_of((minor for _, minor in minors(core, size)), matrix.over)


@dataclass(frozen=True)
class FittingCertificate(Portable, kind="fitting certificate"):
    """Proof that the k-th Fitting ideal of the cokernel of a matrix A over Z[t,1/t] has a certain basis.

    P A Q = diag(1, ..., 1, core) with P and Q invertible, so the ideal is generated by the core's minors of
    size (rows of the core) - k; these are combinations of the basis, and the basis combinations of them.

    Attributes
    ----------
    matrix : LaurentMatrix
    k : int
    P, P_inverse, Q, Q_inverse, core : LaurentMatrix
    minors : tuple of (rows, columns)
        Where the nonzero minors sit in the core, from 0.
    basis : tuple of LaurentPolynomial
    basis_cofactors : tuple of Combination
        Each basis element as a combination of the minors.
    minor_cofactors : tuple of Combination
        Each minor as a combination of the basis.

    Examples
    --------
    >>> c = fitting_certificate(LaurentMatrix([["t - 2", 0], [0, "2t - 1"]]), 1)
    >>> print(c.ideal, c.verify())
    (3, 1 + t) True
    """

    matrix: LaurentMatrix
    k: int
    P: LaurentMatrix
    P_inverse: LaurentMatrix
    Q: LaurentMatrix
    Q_inverse: LaurentMatrix
    core: LaurentMatrix
    minors: tuple[_Place, ...]
    basis: tuple[LaurentPolynomial, ...]
    basis_cofactors: tuple[Combination, ...]
    minor_cofactors: tuple[Combination, ...]

    @property
    def ideal(self) -> Ideal:
        """The ideal."""
        return Ideal(self.basis)

    def verify(self) -> bool:
        """Multiply everything out.

        Raises
        ------
        CertificateError
            Naming the entry of a product, the minor or the basis element that is wrong.
        """
        if self.matrix.over != "Z" or self.k < 0:
            raise CertificateError("not a Fitting ideal over Z[t,1/t]", where="k")
        units = self.matrix.shape[0] - self.core.shape[0]
        if units < 0:
            raise CertificateError("the core has more rows than the matrix", where="core")
        target = LaurentMatrix.blocks(LaurentMatrix.identity(units), self.core)
        transforms = Transforms(self.P, self.P_inverse, self.Q, self.Q_inverse)
        transforms.verify(self.matrix, target, ("P", "A", "Q"))
        found = dict(minors(self.core, max(self.core.shape[0] - self.k, 0)))
        if list(found) != list(self.minors):
            raise CertificateError("the places are not those of the nonzero minors, in order", where="minors")
        values = tuple(found.values())
        check_combinations("basis", self.basis, self.basis_cofactors, values)
        check_combinations("minors", values, self.minor_cofactors, self.basis)
        check_canonical(self.basis)
        return True

    def to_data(self) -> dict[str, Any]:
        """Matrices and polynomials by name, places as [rows, columns], combinations as pairs."""
        return {
            **{name: getattr(self, name).to_data() for name in _MATRICES},
            "k": self.k,
            "minors": [[list(rows), list(columns)] for rows, columns in self.minors],
            "basis": [f.to_data() for f in self.basis],
            "basis_cofactors": [combination_data(c) for c in self.basis_cofactors],
            "minor_cofactors": [combination_data(c) for c in self.minor_cofactors],
        }

    @classmethod
    def from_data(cls, data: Any) -> FittingCertificate:
        """Read `to_data` back; call `verify` before believing it."""
        return cls(
            **{name: LaurentMatrix.from_data(data[name]) for name in _MATRICES},
            k=index(data["k"]),
            minors=tuple((tuple(map(index, r)), tuple(map(index, c))) for r, c in data["minors"]),
            basis=tuple(LaurentPolynomial.from_data(f) for f in data["basis"]),
            basis_cofactors=tuple(combination_from_data(c) for c in data["basis_cofactors"]),
            minor_cofactors=tuple(combination_from_data(c) for c in data["minor_cofactors"]),
        )


_MATRICES = ("matrix", "P", "P_inverse", "Q", "Q_inverse", "core")


def fitting_certificate(matrix: LaurentMatrix, k: int) -> FittingCertificate:
    """The k-th Fitting ideal as `fitting_ideal` gives it, with its proof; the same errors."""
    _check_integral(matrix)
    elimination, size = _core(matrix, k)
    transforms = elimination.transforms()
    found = dict(minors(elimination.core, size))
    proof = Ideal.certificate(tuple(found.values()))
    return FittingCertificate(
        matrix,
        k,
        transforms.left,
        transforms.left_inverse,
        transforms.right,
        transforms.right_inverse,
        elimination.core,
        tuple(found),
        proof.basis,
        proof.basis_cofactors,
        proof.generator_cofactors,
    )
