"""`Evidence`: the exact data of a dossier, in the form that the stand-alone verifier checks."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from math import comb
from typing import Any

from kt_widgets import verify as verifier
from kt_widgets.algebra.elimination import eliminate
from kt_widgets.algebra.fitting import FittingCertificate, fitting_certificate
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.smith import smith_form
from kt_widgets.covers.chains import ChainComplex
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.errors import CertificateError, LimitError
from kt_widgets.groups.words import Word
from kt_widgets.text.portable import Portable

__all__ = ["MAX_BITS", "Evidence", "terms"]

MAX_BITS = 14_000
"""Longest integer in a dossier: Python refuses texts of integers with more than 4300 digits."""


@dataclass(frozen=True, repr=False)
class Evidence(Portable, kind=verifier.KIND):
    """What was computed from a diagram, with everything that proves it; made by `of`.

    The data are described at the top of `kt_widgets.verify`, which checks them with nothing but Python.

    Attributes
    ----------
    diagram : Diagram
    text : str
        The data as JSON.

    Examples
    --------
    >>> e = Evidence.of(Diagram.from_braid([1, 1, 1]))
    >>> e, e.verify()
    (Evidence('braid 1 1 1'), True)
    >>> e.to_data()["alexander_polynomial"]
    {'coefficients': [1, -1, 1], 'lowest': -1}
    """

    diagram: Diagram
    text: str

    @classmethod
    def of(cls, diagram: Diagram) -> Evidence:
        """Compute everything, with certificates.

        Raises
        ------
        LimitError
            If the diagram is larger than the verifier reads, or its matrix has too large a core.
        """
        _check_size(diagram)
        sections = _sections(diagram)
        digests = {name: _digest(section) for name, section in sections.items()}
        return cls(diagram, _json({**sections, "digests": digests}))

    def verify(self) -> bool:
        """Run the stand-alone verifier on the data.

        Raises
        ------
        CertificateError
            Naming the first statement that does not hold.
        """
        failures = verifier.verify(json.loads(self.to_json()))
        if failures:
            place, _, what = failures[0].partition(": ")
            raise CertificateError(f"the evidence does not hold: {what}", where=place)
        return True

    def to_data(self) -> dict[str, Any]:
        """The sections and their digests."""
        data: dict[str, Any] = json.loads(self.text)
        return data

    @classmethod
    def from_data(cls, data: Any) -> Evidence:
        """Read `to_data` back; data that the verifier refuses are refused with its first reason."""
        stated = data["diagram"]
        diagram = Diagram(stated["crossings"], stated["signs"], stated["circles"])
        evidence = cls(_with_source(diagram, data["subject"]["line"]), _json(data))
        evidence.verify()
        return evidence

    def __repr__(self) -> str:
        return f"Evidence({self.diagram.source!r})"


def terms(polynomial: Mapping[str, Any]) -> dict[int, Fraction]:
    """Exponent and coefficient of a polynomial of the data.

    Examples
    --------
    >>> terms({"lowest": -1, "coefficients": [1, 0, "1/2"]})
    {-1: Fraction(1, 1), 1: Fraction(1, 2)}
    """
    numbers = map(Fraction, polynomial["coefficients"])
    return {e: c for e, c in enumerate(numbers, polynomial["lowest"]) if c}


def _json(value: Any) -> str:
    return json.dumps(value, sort_keys=True, separators=(",", ":"))


def _digest(section: Any) -> str:
    return hashlib.sha256(_json(section).encode("ascii")).hexdigest()


def _with_source(diagram: Diagram, line: str) -> Diagram:
    """The same diagram, made from the line: the verifier sees to it that it is."""
    return Diagram.from_data({**diagram.to_data(), "source": line})


def _check_size(diagram: Diagram) -> None:
    most = verifier.MAX_CROSSINGS
    for count, what in ((len(diagram.crossings), "crossings"), (diagram.circles, "crossingless components")):
        if count > most:
            raise LimitError(f"a dossier of {count} {what}", accepted=f"at most {most}")


def _sections(diagram: Diagram) -> dict[str, Any]:
    chains = diagram.cover().chains()
    return {
        "subject": {"line": diagram.source},
        "diagram": {
            "crossings": [list(crossing.edges) for crossing in diagram.crossings],
            "signs": [crossing.sign for crossing in diagram.crossings],
            "circles": diagram.circles,
            "arcs": [list(arc.edges) for arc in diagram.arcs],
        },
        "presentation": _presentation(diagram),
        "chains": {
            "weights": list(diagram.cover().weights.values()),
            "boundary1": _matrix(chains.boundary(1)),
            "boundary2": _matrix(chains.boundary(2)),
        },
        "homology": _homology(chains),
        "fields": [_field(chains, ring) for ring in verifier.FIELDS],
        "ideals": _ideals(chains.boundary(2)),
        "alexander_polynomial": _polynomial(diagram.alexander_polynomial()),
    }


def _polynomial(f: LaurentPolynomial) -> dict[str, Any]:
    bits = max((max(c.numerator.bit_length(), c.denominator.bit_length()) for c in f.coefficients), default=0)
    if bits > MAX_BITS:
        raise LimitError(
            f"a certificate of this diagram holds a number of {bits} bits",
            accepted=f"at most {MAX_BITS} bits, since Python reads no longer ones from JSON",
        )
    data = f.to_data()
    return {"lowest": data["lowest"], "coefficients": data["coefficients"]}


def _matrix(matrix: LaurentMatrix) -> dict[str, Any]:
    entries = [[i + 1, j + 1, _polynomial(f)] for i, j, f in matrix.entries()]
    return {"shape": list(matrix.shape), "entries": entries}


def _word(word: Word) -> list[list[str | int]]:
    return [[name, sign] for name, sign in word]


def _presentation(diagram: Diagram) -> dict[str, Any]:
    p = diagram.cover().presentation
    numbers = range(1, len(p.boundary_words) + 1)
    components = range(1, len(diagram.components) + 1)
    return {
        "generators": list(p.generators),
        "relators": [_word(word) for word in p.boundary_words],
        "generator_places": [str(p.place_of("generator", name)) for name in p.generators],
        "relator_places": [str(p.place_of("relator", number)) for number in numbers],
        "peripheral": [
            {
                "meridian": _word(diagram.meridian(number)),
                "longitude": _word(diagram.longitude(number).reduced()),
            }
            for number in components
        ],
    }


def _homology(chains: ChainComplex) -> dict[str, Any]:
    basis = chains.kernel()
    return {
        "kernel": _matrix(basis.V),
        "kernel_inverse": _matrix(basis.V_inverse),
        "h0": _polynomial((chains.boundary(1) @ basis.V)[0, 0]),
        "h1_relations": _matrix(chains.homology(1).presentation_matrix()),
    }


def _field(chains: ChainComplex, ring: str | int) -> dict[str, Any]:
    module = chains.homology(1).over(ring)
    form = smith_form(module.presentation_matrix())
    size, columns = form.matrix.shape
    zero, one = LaurentPolynomial((), over=ring), LaurentPolynomial.constant(1, ring)
    whole = [*form.diagonal, *[zero] * (size - len(form.diagonal))]
    kept = [i for i, f in enumerate(whole) if f != 1]
    cycles = chains.cycles().change_ring(ring) @ form.U_inverse
    # The generators that are shown are unit multiples of those that the Smith form gives: scale it to them.
    units = [one] * size
    for i, summand in zip(kept, module.summands(), strict=True):
        pairs = zip(cycles.column(i), summand.cycle, strict=True)
        units[i] = next(f.unit_to(g) or one for f, g in pairs if f)
    left, left_inverse = _diagonal(units, size, ring), _diagonal([u.inverse() for u in units], size, ring)
    right, right_inverse = (
        _diagonal(scales, columns, ring) for scales in (units, [u.inverse() for u in units])
    )
    return {
        "ring": ring,
        "U": _matrix(left_inverse @ form.U),
        "U_inverse": _matrix(form.U_inverse @ left),
        "V": _matrix(form.V @ right),
        "V_inverse": _matrix(right_inverse @ form.V_inverse),
        "diagonal": [_polynomial(f) for f in form.diagonal],
        "invariant_factors": [_polynomial(whole[i]) for i in kept],
        "cycles": _matrix((cycles @ left).submatrix(range(cycles.shape[0]), kept)),
    }


def _diagonal(scales: Sequence[LaurentPolynomial], size: int, ring: str | int) -> LaurentMatrix:
    """A diagonal matrix of this size, filled up with 1."""
    entries = {(i, i): scales[i] if i < len(scales) else 1 for i in range(size)}
    return LaurentMatrix.from_entries(entries, (size, size), ring)


def _ideals(boundary2: LaurentMatrix) -> dict[str, Any]:
    elimination = eliminate(boundary2)
    core, transforms = elimination.core, elimination.transforms()
    rows, columns = core.shape
    if rows > verifier.MAX_CORE:
        raise LimitError(
            f"after the elimination of units, boundary 2 leaves a core of {rows} rows",
            accepted=f"a core of at most {verifier.MAX_CORE} rows, for its minors are listed",
        )
    proofs: list[FittingCertificate] = []
    while not (proofs and proofs[-1].ideal.is_unit()):
        size = max(rows - len(proofs) - 1, 0)
        if comb(rows, size) * comb(columns, size) > verifier.MAX_MINORS:
            break
        proofs.append(fitting_certificate(boundary2, len(proofs) + 1))
    return {
        "P": _matrix(transforms.left),
        "P_inverse": _matrix(transforms.left_inverse),
        "Q": _matrix(transforms.right),
        "Q_inverse": _matrix(transforms.right_inverse),
        "core": _matrix(core),
        "alexander": [_ideal(proof) for proof in proofs],
    }


def _ideal(proof: FittingCertificate) -> dict[str, Any]:
    spots = [[[i + 1 for i in rows], [j + 1 for j in columns]] for rows, columns in proof.minors]
    zero = LaurentPolynomial()
    minors = []
    for spot, combination in zip(spots, proof.minor_cofactors, strict=True):
        cofactor = dict(combination)
        minors.append([*spot, [_polynomial(cofactor.get(i, zero)) for i in range(len(proof.basis))]])
    return {
        "k": proof.k,
        "basis": [_polynomial(f) for f in proof.basis],
        "minors": minors,
        "from_minors": [
            [[*spots[i], _polynomial(f)] for i, f in sorted(combination, key=lambda term: term[0])]
            for combination in proof.basis_cofactors
        ],
    }
