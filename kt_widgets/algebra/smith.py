"""Smith normal forms over Q[t,1/t] and F_p[t,1/t], with the transforms that prove them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Self

from kt_widgets.algebra.diagonal import Core, diagonalise
from kt_widgets.algebra.elimination import Transforms, eliminate
from kt_widgets.algebra.flint_rings import ring
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.errors import AlgebraError, CertificateError
from kt_widgets.text.portable import Portable

__all__ = ["SMITH_MATRICES", "SmithForm", "SmithMatrices", "invariant_factors", "smith_form"]


SMITH_MATRICES = ("matrix", "D", "U", "U_inverse", "V", "V_inverse")


@dataclass(frozen=True)
class SmithMatrices(Portable):
    """The matrices of U A V = D with both inverses: what Smith forms over a field and over Z share."""

    matrix: LaurentMatrix
    D: LaurentMatrix
    U: LaurentMatrix
    U_inverse: LaurentMatrix
    V: LaurentMatrix
    V_inverse: LaurentMatrix

    def check_products(self, abnormal: str) -> None:
        """Multiply out; D must be diagonal and normal, which `abnormal` denies, each entry dividing the next.

        Raises
        ------
        CertificateError
            Naming the entry of U U_inverse, V V_inverse, U A V or D that is wrong.
        """
        Transforms(self.U, self.U_inverse, self.V, self.V_inverse).verify(
            self.matrix, self.D, ("U", "A", "V")
        )
        for i, j, f in self.D.entries():
            where = f"entry ({i + 1}, {j + 1}) of D"
            if i != j:
                raise CertificateError(f"D is {f} off the diagonal", where=where)
            if f != f.normal_form():
                raise CertificateError(f"{f} is {abnormal}", where=where)
            if i and not self.D[i - 1, i - 1].divides(f):
                raise CertificateError(f"{self.D[i - 1, i - 1]} does not divide {f}", where=where)

    def to_data(self) -> dict[str, Any]:
        """The six matrices by name."""
        return {name: getattr(self, name).to_data() for name in SMITH_MATRICES}

    @classmethod
    def from_data(cls, data: Any) -> Self:
        """Read `to_data` back; call `verify` before believing it."""
        return cls(*(LaurentMatrix.from_data(data[name]) for name in SMITH_MATRICES))


@dataclass(frozen=True)
class SmithForm(SmithMatrices, kind="smith form"):
    """U A V = D with U and V invertible and D diagonal, each diagonal entry dividing the next.

    The nonzero diagonal entries are monic with lowest exponent 0; zeros come last.

    Examples
    --------
    >>> s = smith_form(LaurentMatrix([["t - 2", 0], [0, "2t - 1"]], over="Q"))
    >>> print(s.D, s.verify())
    [[1, 0              ],
     [0, 1 - 5/2 t + t^2]] True
    """

    @property
    def diagonal(self) -> tuple[LaurentPolynomial, ...]:
        """The diagonal of D."""
        return tuple(self.D[i, i] for i in range(min(self.D.shape)))

    def verify(self) -> bool:
        """Check everything by multiplication.

        Raises
        ------
        CertificateError
            Naming the entry of U U_inverse, V V_inverse, U A V or D that is wrong.
        """
        if not ring(self.matrix.over).is_field:
            raise CertificateError("Z[t,1/t] has no Smith form", where="matrix", accepted="a field")
        self.check_products("not monic with lowest exponent 0")
        return True


def smith_form(matrix: LaurentMatrix) -> SmithForm:
    """The Smith normal form over a field of coefficients, with transforms.

    Unit pivots are taken out first; kernel vectors on both sides cut the rest down to a nonsingular square,
    and `kt_widgets.algebra.diagonal.diagonalise` splits its factors off.

    Parameters
    ----------
    matrix : LaurentMatrix
        Over "Q" or a prime.

    Raises
    ------
    AlgebraError
        Over "Z": Z[t,1/t] is no principal ideal domain.

    Examples
    --------
    >>> smith_form(LaurentMatrix([["2", "t"], ["0", "2"]], over=3)).diagonal
    (LaurentPolynomial('1', over=3), LaurentPolynomial('1', over=3))
    """
    _check_field(matrix)
    elimination = eliminate(matrix)
    units = len(elimination.pivots)
    core = Core(elimination.core)
    core.compress()
    factors, inner = diagonalise(core.square(), tracked=True)
    assert inner is not None
    inner = inner.before(len(core.dead_rows), len(core.dead_columns)) @ core.transforms()
    total = inner.after(units) @ elimination.transforms()
    diagonal = [LaurentPolynomial.constant(1, matrix.over)] * units + factors
    D = LaurentMatrix.from_entries({(i, i): f for i, f in enumerate(diagonal)}, matrix.shape, matrix.over)
    return SmithForm(matrix, D, total.left, total.left_inverse, total.right, total.right_inverse)


def invariant_factors(matrix: LaurentMatrix) -> tuple[LaurentPolynomial, ...]:
    """The diagonal of the Smith normal form over a field, without transforms: units first, zeros last.

    Raises
    ------
    AlgebraError
        Over "Z".

    Examples
    --------
    >>> f = "1 - t + t^2"
    >>> [str(d) for d in invariant_factors(LaurentMatrix([[f, 0, 0], [0, f, 0]], over="Q"))]
    ['1 - t + t^2', '1 - t + t^2']
    """
    _check_field(matrix)
    elimination = eliminate(matrix)
    core = Core(elimination.core, tracked=False)
    core.compress()
    factors, _ = diagonalise(core.square(), tracked=False)
    one = LaurentPolynomial.constant(1, matrix.over)
    zeros = min(core.shape) - len(factors)
    return (one,) * len(elimination.pivots) + tuple(factors) + (one - 1,) * zeros


def _check_field(matrix: LaurentMatrix) -> None:
    if not ring(matrix.over).is_field:
        raise AlgebraError(
            "Z[t,1/t] is no principal ideal domain: matrices over it have no Smith form",
            accepted="a matrix over 'Q' or a prime, by change_ring(), or fitting_ideal over Z",
        )
