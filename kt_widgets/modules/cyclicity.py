"""Whether a module over Z[t,1/t] is cyclic, how many generators it needs, and what annihilates it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Literal, TypeAlias

from kt_widgets.algebra.fitting import FittingCertificate, fitting_certificate, fitting_ideal
from kt_widgets.algebra.flint_rings import ring
from kt_widgets.algebra.ideals import Ideal
from kt_widgets.algebra.laurent import gcd_of
from kt_widgets.algebra.sparse import scaled_inverse
from kt_widgets.errors import AlgebraError, CertificateError
from kt_widgets.modules.isomorphism import Isomorphism, cyclic_form, short_form
from kt_widgets.text.portable import Portable

if TYPE_CHECKING:
    from kt_widgets.modules.module import Module

__all__ = ["Cyclicity", "annihilator", "cyclicity", "generator_bounds"]

Verdict: TypeAlias = Literal["cyclic", "not cyclic", "locally cyclic, cyclic not decided"]


@dataclass(frozen=True, repr=False)
class Cyclicity(Portable, kind="cyclicity"):
    """A verdict on whether a module over Z[t,1/t] is cyclic, with its witness.

    Attributes
    ----------
    witness : Isomorphism or FittingCertificate
        Cyclic: an isomorphism onto Z[t,1/t]/I. Its backward matrix is the generator, its forward matrix
        writes each generator of the module as a multiple of it. Otherwise the Fitting ideal number 1: if it
        is not (1) the module is not cyclic; if it is (1) the module is locally cyclic, and no generator was
        found, which proves nothing.

    Examples
    --------
    >>> from kt_widgets.modules.module import Module
    >>> print(Module.from_matrix([["2", 0], [0, "1 - 2t"]]).cyclicity())
    cyclic: Z[t,1/t]/(-2 + 4t)
    >>> print(Module.from_matrix([["t - 2", 0], [0, "2t - 1"]]).cyclicity())
    not cyclic: the Fitting ideal number 1 is (3, 1 + t)
    """

    witness: Isomorphism | FittingCertificate

    @property
    def verdict(self) -> Verdict:
        """ "cyclic", "not cyclic" or "locally cyclic, cyclic not decided"."""
        if isinstance(self.witness, Isomorphism):
            return "cyclic"
        return "locally cyclic, cyclic not decided" if self.witness.ideal.is_unit() else "not cyclic"

    @property
    def ideal(self) -> Ideal:
        """The I of Z[t,1/t]/I, or the Fitting ideal number 1."""
        return (
            Ideal(self.witness.target.rows[0])
            if isinstance(self.witness, Isomorphism)
            else self.witness.ideal
        )

    def verify(self) -> bool:
        """Check the witness; `CertificateError` names what is wrong."""
        if isinstance(self.witness, Isomorphism):
            if self.witness.target.shape[0] != 1:
                raise CertificateError("the target has more than one generator", where="target")
        elif self.witness.k != 1:
            raise CertificateError(f"the Fitting ideal is number {self.witness.k}, not 1", where="k")
        return self.witness.verify()

    def __str__(self) -> str:
        detail = (
            f"Z[t,1/t]/{self.ideal}"
            if self.verdict == "cyclic"
            else f"the Fitting ideal number 1 is {self.ideal}"
        )
        return f"{self.verdict}: {detail}"

    def __repr__(self) -> str:
        return f"<Cyclicity: {self.verdict}>"

    def latex(self) -> str:
        """The quotient, or the Fitting ideal number 1, in LaTeX, without dollar signs."""
        if self.verdict == "cyclic":
            return f"{ring('Z').latex}/{self.ideal.latex()}"
        return rf"\operatorname{{Fitt}}_1 = {self.ideal.latex()}"

    def _repr_latex_(self) -> str:
        return f"${self.latex()}$"

    def to_data(self) -> dict[str, Any]:
        """The witness as its kind and data."""
        return {"kind": self.witness.kind, "data": self.witness.to_data()}

    @classmethod
    def from_data(cls, data: Any) -> Cyclicity:
        """Read `to_data` back; call `verify` before believing it."""
        kinds: tuple[type[Isomorphism] | type[FittingCertificate], ...] = (Isomorphism, FittingCertificate)
        witnesses = {kind.kind: kind for kind in kinds}
        return cls(witnesses[data["kind"]].from_data(data["data"]))


def cyclicity(m: Module) -> Cyclicity:
    """See `kt_widgets.modules.module.Module.cyclicity`."""
    _check_integral(m)
    return Cyclicity(cyclic_form(m.relations) or fitting_certificate(m.relations, 1))


def generator_bounds(m: Module) -> tuple[int, int]:
    """See `kt_widgets.modules.module.Module.generator_bounds`."""
    _check_integral(m)
    core = short_form(m.relations).target
    low = next(k for k in range(core.shape[0] + 1) if fitting_ideal(core, k).is_unit())
    if low == 0:
        return 0, 0
    return low, 1 if low == 1 and cyclic_form(core) else core.shape[0]


def annihilator(m: Module) -> Ideal | None:
    """See `kt_widgets.modules.module.Module.annihilator`."""
    _check_integral(m)
    core = short_form(m.relations).target
    size = core.shape[0]
    if m.rank():
        return Ideal([])
    if core.shape[1] == size:
        determinant, adjugate = scaled_inverse(core.sparse_rows(), range(size), ring("Z"))
        common = gcd_of((f for line in adjugate for f in line), "Z").gcd(determinant)
        return Ideal([determinant.exact_division(common)])
    cyclic = cyclic_form(core)
    return None if cyclic is None else Ideal(cyclic.target.rows[0])


def _check_integral(m: Module) -> None:
    if m.ring != "Z":
        raise AlgebraError(
            f"this is a question about modules over Z[t,1/t], not over {ring(m.ring).text}",
            accepted="a module over Z; over a field invariant_factors() says more",
        )
