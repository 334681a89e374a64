"""`compare`: whether two modules are isomorphic, each verdict with its witness."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Literal, TypeAlias

from kt_widgets.algebra.elimination import check_equal
from kt_widgets.algebra.fitting import FittingCertificate, fitting_certificate, fitting_ideal
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.errors import AlgebraError, CertificateError, LimitError
from kt_widgets.modules.isomorphism import (
    Isomorphism,
    cyclic_form,
    diagonal_form,
    found_isomorphism,
    reduced_form,
)
from kt_widgets.modules.module import Module, ModuleCertificate
from kt_widgets.text.portable import Portable

__all__ = ["Comparison", "DifferentFactors", "DifferentIdeals", "Verdict", "compare"]

Verdict: TypeAlias = Literal["isomorphic", "different", "not decided"]


@dataclass(frozen=True)
class DifferentIdeals(Portable, kind="different ideals"):
    """Two modules over Z[t,1/t] have different Fitting ideals of one number.

    Attributes
    ----------
    first, second : FittingCertificate
        Proofs of the two ideals.
    element : LaurentPolynomial
        An element of one of them that is not in the other.
    """

    first: FittingCertificate
    second: FittingCertificate
    element: LaurentPolynomial

    @property
    def k(self) -> int:
        """The number of the Fitting ideals."""
        return self.first.k

    def verify(self) -> bool:
        """Check both ideals, and that the element is in exactly one.

        Raises
        ------
        CertificateError
            Naming what is wrong.
        """
        self.first.verify()
        self.second.verify()
        if self.first.k != self.second.k:
            raise CertificateError(f"ideals number {self.first.k} and {self.second.k}", where="k")
        if (self.element in self.first.ideal) == (self.element in self.second.ideal):
            raise CertificateError(f"{self.element} is in both ideals or in none", where="element")
        return True

    def __str__(self) -> str:
        one, two = self.first.ideal, self.second.ideal
        side = "first" if self.element in one else "second"
        return f"the Fitting ideals number {self.k} are {one} and {two}; {self.element} is in the {side} only"

    def latex(self) -> str:
        """The two ideals in LaTeX, without dollar signs."""
        one, two = (
            rf"\operatorname{{Fitt}}_{{{self.k}}} = {c.ideal.latex()}" for c in (self.first, self.second)
        )
        return rf"{one} \quad\text{{and}}\quad {two}"

    def _repr_latex_(self) -> str:
        return f"${self.latex()}$"

    def to_data(self) -> dict[str, Any]:
        """Both certificates' data and the element."""
        return {
            "first": self.first.to_data(),
            "second": self.second.to_data(),
            "element": self.element.to_data(),
        }

    @classmethod
    def from_data(cls, data: Any) -> DifferentIdeals:
        """Read `to_data` back; call `verify` before believing it."""
        return cls(
            FittingCertificate.from_data(data["first"]),
            FittingCertificate.from_data(data["second"]),
            LaurentPolynomial.from_data(data["element"]),
        )


@dataclass(frozen=True)
class DifferentFactors(Portable, kind="different factors"):
    """Two modules over one field's Laurent polynomials have different invariant factors, with the proofs."""

    first: ModuleCertificate
    second: ModuleCertificate

    def verify(self) -> bool:
        """Check both certificates, and that the factors differ; `CertificateError` names what is wrong."""
        self.first.verify()
        self.second.verify()
        if self.first.factors == self.second.factors:
            raise CertificateError("the invariant factors are equal", where="factors")
        if self.first.smith.matrix.over != self.second.smith.matrix.over:
            raise CertificateError("the rings are not the same", where="matrix")
        return True

    def __str__(self) -> str:
        one, two = self.first.factors, self.second.factors
        for i, (f, g) in enumerate(zip(one, two, strict=False), 1):
            if f != g:
                return f"the invariant factors number {i} are {f} and {g}"
        return f"there are {len(one)} and {len(two)} invariant factors"

    def latex(self) -> str:
        """The two lists of factors in LaTeX, without dollar signs."""
        one, two = (
            rf"\left({', '.join(f.latex() for f in c.factors)}\right)" for c in (self.first, self.second)
        )
        return rf"{one} \quad\text{{and}}\quad {two}"

    def _repr_latex_(self) -> str:
        return f"${self.latex()}$"

    def to_data(self) -> dict[str, Any]:
        """Both certificates' data."""
        return {"first": self.first.to_data(), "second": self.second.to_data()}

    @classmethod
    def from_data(cls, data: Any) -> DifferentFactors:
        """Read `to_data` back; call `verify` before believing it."""
        return cls(ModuleCertificate.from_data(data["first"]), ModuleCertificate.from_data(data["second"]))


Witness: TypeAlias = Isomorphism | DifferentIdeals | DifferentFactors


@dataclass(frozen=True, eq=False)
class Comparison(Portable, kind="comparison of modules"):
    """The verdict on two modules and its witness.

    Attributes
    ----------
    first, second : Module
    witness : Isomorphism, DifferentIdeals, DifferentFactors or None
    reason : str
        What was tried, where nothing was decided.
    """

    first: Module
    second: Module
    witness: Witness | None
    reason: str = ""

    @property
    def verdict(self) -> Verdict:
        """ "isomorphic", "different" or "not decided"."""
        if self.witness is None:
            return "not decided"
        return "isomorphic" if isinstance(self.witness, Isomorphism) else "different"

    def verify(self) -> bool:
        """Check the witness by multiplication, and that it speaks of these two modules.

        Raises
        ------
        CertificateError
            Naming what is wrong; also where nothing was decided.
        """
        if self.witness is None:
            raise CertificateError("nothing was decided, so there is nothing to verify", where="witness")
        match self.witness:
            case Isomorphism():
                ours = self.witness.source, self.witness.target
            case DifferentIdeals():
                ours = self.witness.first.matrix, self.witness.second.matrix
            case DifferentFactors():
                ours = self.witness.first.smith.matrix, self.witness.second.smith.matrix
        check_equal(ours[0], self.first.relations, "the first matrix of the witness")
        check_equal(ours[1], self.second.relations, "the second matrix of the witness")
        return self.witness.verify()

    def __str__(self) -> str:
        return f"{self.verdict}: {self.reason if self.witness is None else self.witness}"

    def __repr__(self) -> str:
        return f"<Comparison: {self.verdict}>"

    def _repr_latex_(self) -> str | None:
        return None if self.witness is None else self.witness._repr_latex_()

    def to_data(self) -> dict[str, Any]:
        """Both modules' data, the witness as its kind and data or null, the reason."""
        witness = self.witness
        return {
            "first": self.first.to_data(),
            "second": self.second.to_data(),
            "witness": witness and {"kind": witness.kind, "data": witness.to_data()},
            "reason": self.reason,
        }

    @classmethod
    def from_data(cls, data: Any) -> Comparison:
        """Read `to_data` back; call `verify` before believing it."""
        witness = data["witness"]
        if witness is not None:
            witness = _WITNESSES[witness["kind"]].from_data(witness["data"])
        return cls(Module.from_data(data["first"]), Module.from_data(data["second"]), witness, data["reason"])


_WITNESSES: dict[str, type[Isomorphism] | type[DifferentIdeals] | type[DifferentFactors]] = {
    kind.kind: kind for kind in (Isomorphism, DifferentIdeals, DifferentFactors)
}


def compare(m: Module, n: Module) -> Comparison:
    """Decide whether two modules over one ring are isomorphic, if that can be done here.

    Over a field the invariant factors decide. Over Z[t,1/t] the Fitting ideals may tell the modules apart;
    if they do not, a generator of each is looked for, since cyclic modules are isomorphic when their ideals
    are equal, and then an isomorphism among small homomorphisms. Where all this fails nothing is decided:
    equal ideals alone never make two modules isomorphic.

    Raises
    ------
    AlgebraError
        If the rings differ.

    Examples
    --------
    >>> m = Module.from_matrix([["t - 2", 0], [0, "2t - 1"]])
    >>> n = Module.from_matrix([["(t - 2)(2t - 1)"]])
    >>> print(compare(m, n))
    different: the Fitting ideals number 1 are (3, 1 + t) and (1); 1 is in the second only
    >>> print(compare(m.over("Q"), n.over("Q")).verdict, compare(m, m.conjugate()).verdict)
    isomorphic isomorphic
    """
    for value in (m, n):
        if not isinstance(value, Module):
            raise AlgebraError(f"{type(value).__name__} is no module", accepted="two modules over one ring")
    if m.ring != n.ring:
        raise AlgebraError(
            f"modules over {m.ring!r} and {n.ring!r} are not compared", accepted="modules over one ring"
        )
    if m.ring != "Z":
        return Comparison(m, n, _over_field(m, n))
    try:
        witness = _different_ideals(m, n) or _isomorphism(m, n)
    except LimitError as error:
        return Comparison(m, n, None, f"too large: {error}")
    reason = "" if witness else "all Fitting ideals are equal, and no isomorphism was found"
    return Comparison(m, n, witness, reason)


def _over_field(m: Module, n: Module) -> Witness:
    if m.invariant_factors() != n.invariant_factors():
        return DifferentFactors(m.certificate(), n.certificate())
    return diagonal_form(n.relations).inverse() @ diagonal_form(m.relations)


def _different_ideals(m: Module, n: Module) -> DifferentIdeals | None:
    cores = [reduced_form(x.relations).target for x in (m, n)]
    for k in range(max(core.shape[0] for core in cores)):
        one, two = (fitting_ideal(core, k) for core in cores)
        if one != two:
            only = [f for f in one.basis if f not in two] or [f for f in two.basis if f not in one]
            first, second = (fitting_certificate(x.relations, k) for x in (m, n))
            return DifferentIdeals(first, second, only[0])
    return None


def _isomorphism(m: Module, n: Module) -> Isomorphism | None:
    one, two = m.relations, n.relations
    if (first := cyclic_form(one)) and (second := cyclic_form(two)):
        return second.inverse() @ first
    return found_isomorphism(one, two)
