"""A module as a vector space or a group on which t acts: bases, matrices of t, primary summands."""

from __future__ import annotations

from dataclasses import dataclass
from math import inf
from operator import index
from typing import TYPE_CHECKING, Any

from kt_widgets.algebra.elimination import check_equal
from kt_widgets.algebra.fitting import fitting_ideal
from kt_widgets.algebra.ideals import Ideal
from kt_widgets.algebra.integers import IntegerSmithForm, at_companion, integer_smith_form
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.solving import scaled_right_inverses
from kt_widgets.errors import AlgebraError, CertificateError
from kt_widgets.modules.isomorphism import Isomorphism, companion_form, diagonal_form, direct_sum, short_form
from kt_widgets.text.portable import Portable
from kt_widgets.text.printing import matrix_too_large

if TYPE_CHECKING:
    from kt_widgets.modules.module import Module

__all__ = ["Operator", "dimension", "integral_element", "operator"]


@dataclass(frozen=True)
class Operator(Portable, kind="operator"):
    """A module as a group with a finite basis, or a vector space, and the matrices of t and 1/t on it.

    Over a field the matrix is the rational canonical form: companion matrices of the invariant factors. For
    H_1 of the infinite cyclic cover of a knot the integer matrix is that of the monodromy on the homology of
    the fibre, if the knot is fibred, which homology cannot prove.

    Attributes
    ----------
    matrix, inverse : LaurentMatrix
        Of t and 1/t, with constant entries; column k has the coordinates of t times basis element k.
    torsion : tuple of int
        The orders of the basis elements: 0 for infinite order, and over a field.
    witness : Isomorphism
        From the module's relations to the matrix (t - T, orders): the cokernel of the latter is the group
        on which t acts as T. Its backward matrix writes the basis in the generators.

    Examples
    --------
    >>> from kt_widgets.modules.module import Module
    >>> o = Module.from_matrix([["1 - 3t + t^2"]]).operator()
    >>> print(o, o.verify())
    t on Z^2 by [[0, -1],
     [1, 3 ]] True
    """

    matrix: LaurentMatrix
    inverse: LaurentMatrix
    torsion: tuple[int, ...]
    witness: Isomorphism

    @property
    def size(self) -> int:
        """The number of basis elements: the dimension over a field."""
        return len(self.torsion)

    def characteristic_polynomial(self) -> LaurentPolynomial:
        """Of t on the group modulo torsion, or on the vector space: monic.

        Examples
        --------
        >>> from kt_widgets.modules.module import Module
        >>> print(Module.from_matrix([["1 - t + t^2"]]).operator().characteristic_polynomial())
        1 - t + t^2
        """
        free = [k for k, d in enumerate(self.torsion) if not d]
        return self.witness.target.submatrix(free, free).determinant()

    def verify(self) -> bool:
        """Check the isomorphism, the form of its target, and that both matrices are inverse to each other.

        Raises
        ------
        CertificateError
            Naming what is wrong.
        """
        T, over = self.matrix, self.witness.source.over
        for name, matrix in (("matrix", T), ("inverse", self.inverse)):
            if matrix.shape != (self.size, self.size) or matrix.over != over:
                raise CertificateError(f"the {name} has the wrong shape or ring", where=name)
            for i, j, f in matrix.entries():
                if f.span() or f.lowest:
                    raise CertificateError(f"{f} is no constant", where=f"entry ({i + 1}, {j + 1}) of {name}")
        for k, d in enumerate(self.torsion, 1):
            if d < 0 or (d and over != "Z"):
                raise CertificateError(f"{d} is no order", where=f"order {k}")
        check_equal(self.witness.target, _presentation(T, self.torsion), "the target")
        one = LaurentMatrix.identity(self.size, over)
        orders = LaurentMatrix.from_entries({(k, k): d for k, d in enumerate(self.torsion)}, one.shape, over)
        for name, matrix in (
            ("matrix orders", T @ orders),
            ("inverse orders", self.inverse @ orders),
            ("matrix inverse", T @ self.inverse - one),
            ("inverse matrix", self.inverse @ T - one),
        ):
            for i, j, f in matrix.entries():
                if not self.torsion[i] or f.content() % self.torsion[i]:
                    raise CertificateError(f"{f} is not 0", where=f"entry ({i + 1}, {j + 1}) of {name}")
        return self.witness.verify()

    def _space(self, latex: bool) -> str:
        over = self.witness.source.over
        names = {"Z": (r"\mathbb{Z}", "Z"), "Q": (r"\mathbb{Q}", "Q")}
        symbol = names.get(str(over), (rf"\mathbb{{F}}_{{{over}}}", f"F_{over}"))[0 if latex else 1]
        free = self.torsion.count(0)
        power = f"^{{{free}}}" if latex else f"^{free}"
        parts = [symbol + power] if free or not self.size else []
        parts += [f"{symbol}/{d}" for d in self.torsion if d]
        return (r" \oplus " if latex else " + ").join(parts)

    def __str__(self) -> str:
        if matrix_too_large(*self.matrix.shape):
            return f"t on {self._space(False)}"
        return f"t on {self._space(False)} by {self.matrix}"

    def __repr__(self) -> str:
        return f"<Operator: t on {self._space(False)}>"

    def latex(self) -> str:
        """The group and the matrix in LaTeX, without dollar signs."""
        return rf"t \text{{ on }} {self._space(True)}: \quad {self.matrix.latex()}"

    def _repr_latex_(self) -> str | None:
        return None if matrix_too_large(*self.matrix.shape) else f"$\\displaystyle {self.latex()}$"

    def to_data(self) -> dict[str, Any]:
        """Both matrices, the orders and the isomorphism's data."""
        return {
            "matrix": self.matrix.to_data(),
            "inverse": self.inverse.to_data(),
            "torsion": list(self.torsion),
            "witness": self.witness.to_data(),
        }

    @classmethod
    def from_data(cls, data: Any) -> Operator:
        """Read `to_data` back; call `verify` before believing it."""
        return cls(
            LaurentMatrix.from_data(data["matrix"]),
            LaurentMatrix.from_data(data["inverse"]),
            tuple(map(index, data["torsion"])),
            Isomorphism.from_data(data["witness"]),
        )


def _presentation(T: LaurentMatrix, torsion: tuple[int, ...]) -> LaurentMatrix:
    """The matrix (t - T, orders) of the group with these orders on which t acts as T."""
    size = len(torsion)
    finite = [k for k, d in enumerate(torsion) if d]
    entries = {(i, j): -f for i, j, f in T.entries()}
    t = LaurentPolynomial.monomial(1, 1, T.over)
    for k in range(size):
        entries[k, k] = entries.get((k, k), t - t) + t
    for column, k in enumerate(finite, size):
        entries[k, column] = LaurentPolynomial.constant(torsion[k], T.over)
    return LaurentMatrix.from_entries(entries, (size, size + len(finite)), T.over)


def dimension(m: Module) -> int | float:
    """The dimension over the field of coefficients; see `Module.dimension`."""
    factors = m.invariant_factors()
    return sum(f.span() for f in factors) if all(factors) else inf


def operator(m: Module) -> Operator:
    """The module as a group or vector space with the operator t; see `Module.operator`."""
    return _over_integers(m.relations) if m.ring == "Z" else _over_field(m.relations)


def _over_field(relations: LaurentMatrix) -> Operator:
    first = diagonal_form(relations)
    factors = [first.target[i, i] for i in range(first.target.shape[1])]
    if len(factors) < first.target.shape[0]:
        raise AlgebraError(
            "the module has a free summand, so its dimension over the field is infinite",
            accepted="a torsion module",
        )
    witness = direct_sum([companion_form(f) for f in factors], relations.over) @ first
    t = LaurentPolynomial.monomial(1, 1, relations.over)
    size = witness.target.shape[0]
    T = LaurentMatrix.identity(size, relations.over) * t - witness.target
    return Operator(T, _constant_inverse(T, factors), (0,) * size, witness)


def _constant_inverse(T: LaurentMatrix, factors: list[LaurentPolynomial]) -> LaurentMatrix:
    """The inverse of the sum of the companion matrices of some polynomials."""
    entries: dict[tuple[int, int], LaurentPolynomial] = {}
    start = 0
    for f in factors:
        size, low = f.span(), f.coefficient(0)
        for k in range(1, size):
            entries[start + k - 1, start + k] = LaurentPolynomial.constant(1, f.over)
        for k in range(size):
            c = LaurentPolynomial.constant(f.coefficient(k + 1), f.over)
            entries[start + k, start] = -c * LaurentPolynomial.constant(low, f.over).inverse()
        start += size
    return LaurentMatrix.from_entries(entries, T.shape, T.over)


# Over Z


def integral_element(ideal: Ideal) -> LaurentPolynomial | None:
    """An element of an ideal of Z[t,1/t] from t^0 on with 1 or -1 at both ends; None if there is none.

    The last element of the canonical basis has the smallest leading coefficient in the ideal, and that of
    the conjugate ideal gives the smallest coefficient at the lowest exponent.

    Examples
    --------
    >>> print(integral_element(Ideal(["2", "1 + t + t^2"])), integral_element(Ideal(["2 - t"])))
    1 + t + t^2 None
    """
    if ideal.is_zero():
        return None
    top, bottom = ideal.basis[-1], ideal.conjugate().basis[-1].conjugate().normal_form()
    if abs(top.coefficient(top.highest)) != 1 or abs(bottom.coefficient(0)) != 1:
        return None
    if abs(top.coefficient(0)) == 1:
        return top
    shift = max(1, bottom.span() - top.span() + 1)
    return bottom + LaurentPolynomial.monomial(shift) * top


def _over_integers(relations: LaurentMatrix) -> Operator:
    first = short_form(relations)
    ideal = fitting_ideal(first.target, 0)
    modulus = integral_element(ideal)
    if modulus is None:
        raise AlgebraError(
            f"the module is not finitely generated as a group: no element of its Fitting ideal number 0,"
            f" {ideal}, has 1 or -1 as lowest and as leading coefficient",
            accepted='a module with such an element, or over("Q")',
        )
    if not modulus.span():
        modulus = LaurentPolynomial.parse("t - 1")  # the ideal is (1), and coordinates need a degree
    group = _Group(first.target, modulus)
    keep = [i for i, d in enumerate(group.orders) if d != 1]
    torsion = tuple(group.orders[i] for i in keep)
    t = LaurentPolynomial.monomial(1)
    T, inverse = (group.action(unit, keep) for unit in (t, t.inverse()))
    A, over_t = first.target, _presentation(T, torsion)
    height, degree = A.shape[0], modulus.span()
    B = group.collapse(height) @ group.smith.U_inverse.submatrix(range(height * degree), keep)
    K = group.smith.U.submatrix(keep, [degree * j for j in range(height)])
    second = Isomorphism(
        A,
        over_t,
        K,
        B,
        _divided(K @ A, T, torsion),
        group.relations(B @ over_t),
        group.relations(B @ K - LaurentMatrix.identity(height)),
        _divided(K @ B - LaurentMatrix.identity(len(keep)), T, torsion),
    )
    return Operator(T, inverse, torsion, second @ first)


class _Group:
    """The cokernel of A as a group, for h in Fitt_0 with units at both ends: that of A on (Z[t]/h)^g."""

    def __init__(self, matrix: LaurentMatrix, modulus: LaurentPolynomial) -> None:
        self.matrix, self.modulus = matrix, modulus
        self.smith: IntegerSmithForm = integer_smith_form(at_companion(matrix, modulus))
        diagonal = self.smith.diagonal
        self.orders = diagonal + (0,) * (self.smith.D.shape[0] - len(diagonal))
        scaled = scaled_right_inverses(matrix)
        cofactors = Ideal([f for f, _ in scaled]).cofactors(modulus) or ()
        self.multiple = sum(
            (T * q for (_, T), q in zip(scaled, cofactors, strict=True)),
            LaurentMatrix.zero(matrix.shape[1], matrix.shape[0]),
        )

    def collapse(self, count: int) -> LaurentMatrix:
        """From coefficients on 1, t, ..., t^(d-1), one after the other, to that many polynomials."""
        degree = self.modulus.span()
        terms = ((j, degree * j + k, k, 1) for j in range(count) for k in range(degree))
        return LaurentMatrix.from_monomials(terms, (count, degree * count))

    def action(self, unit: LaurentPolynomial, keep: list[int]) -> LaurentMatrix:
        """The matrix of multiplication by a unit, in some of the coordinates of the Smith form."""
        one = LaurentMatrix.identity(self.matrix.shape[0])
        every = range(self.smith.D.shape[0])
        image = self.smith.U.submatrix(keep, every) @ at_companion(one * unit, self.modulus)
        return image @ self.smith.U_inverse.submatrix(every, keep)

    def relations(self, target: LaurentMatrix) -> LaurentMatrix:
        """The X with A X = V, for columns V that are 0 in the cokernel.

        The Smith form solves A w = V modulo h; the rest is a multiple of h, and h = A times `multiple`.
        """
        degree, (height, width) = self.modulus.span(), target.shape
        columns = [degree * j for j in range(width)]
        image = at_companion(target, self.modulus).submatrix(range(degree * height), columns)
        moved = {(i, j): f.exact_division(self.orders[i]) for i, j, f in (self.smith.U @ image).entries()}
        size = self.smith.V.shape[0]
        solved = self.smith.V @ LaurentMatrix.from_entries(moved, (size, width))
        w = self.collapse(self.matrix.shape[1]) @ solved
        rest = (target - self.matrix @ w)._mapped(lambda f: f.exact_division(self.modulus))
        return w + self.multiple @ rest


def _divided(target: LaurentMatrix, T: LaurentMatrix, torsion: tuple[int, ...]) -> LaurentMatrix:
    """The X with (t - T, orders) X = V, for columns V that are 0 in the cokernel: division by t - T."""
    size, width = target.shape
    finite = [k for k, d in enumerate(torsion) if d]
    entries: dict[tuple[int, int], LaurentPolynomial] = {}
    for j in range(width):
        column = target.column(j)
        low = min((f.lowest for f in column if f), default=0)
        high = max((f.highest for f in column if f), default=0)
        rest = LaurentMatrix.zero(size, 1)
        for exponent in range(high, low - 1, -1):
            for i, _, f in rest.entries():
                shifted = f * LaurentPolynomial.monomial(exponent)
                entries[i, j] = entries.get((i, j), LaurentPolynomial()) + shifted
            here = {(i, 0): f.coefficient(exponent) for i, f in enumerate(column)}
            rest = T @ rest + LaurentMatrix.from_entries(here, (size, 1))
        for place, k in enumerate(finite, size):
            entries[place, j] = rest[k, 0].exact_division(torsion[k]) * LaurentPolynomial.monomial(low)
    return LaurentMatrix.from_entries(entries, (size + len(finite), width))
