"""Ideals of Z[t,1/t] in canonical form, and their certificates."""

from __future__ import annotations

import reprlib
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from operator import index
from typing import Any, TypeAlias

from kt_widgets.algebra.flint_rings import hermite_rows, integer_kernel, integer_solution
from kt_widgets.algebra.laurent import LaurentPolynomial, Scalar, gcd_of, subtract_product
from kt_widgets.errors import AlgebraError, CertificateError, LimitError
from kt_widgets.text.parsing import parse_polynomial_list
from kt_widgets.text.portable import Portable
from kt_widgets.text.printing import Style

__all__ = [
    "MAX_IDEAL_SPAN",
    "Combination",
    "Ideal",
    "IdealCertificate",
    "check_canonical",
    "check_combinations",
    "combination_data",
    "combination_from_data",
]

MAX_IDEAL_SPAN = 100
"""Largest span of a generator, divided by the gcd of all, of an ideal that is not principal."""

Combination: TypeAlias = tuple[tuple[int, LaurentPolynomial], ...]
"""A linear combination: (index from 0, nonzero cofactor)."""


class Ideal(Portable, kind="ideal"):
    """An ideal of Z[t,1/t], kept by its canonical basis; frozen by convention, hashable, picklable.

    The basis is the reduced strong Groebner basis, in Z[t], of the polynomials in the ideal: ascending
    degrees, positive leading coefficients each dividing the one before, and every further coefficient in
    [0, c) where c is the leading coefficient of the basis element that reduces it. So two ideals are equal
    exactly when they print the same (G. Szekeres, A canonical basis for the ideals of a polynomial domain,
    Amer. Math. Monthly 59 (1952)).

    Parameters
    ----------
    generators : sequence of LaurentPolynomial, int or str

    Raises
    ------
    AlgebraError
        If a generator is not over Z.
    LimitError
        If the ideal is not principal and its generators reach spans beyond `MAX_IDEAL_SPAN`.
    ParseError
        If a text is no polynomial in t.

    Examples
    --------
    >>> e = Ideal(["2 - t", "1 - 2t"])
    >>> print(e, "|", Ideal(["6t", "4t - 2"]), "|", Ideal([]), "|", Ideal(["t^5"]))
    (3, 1 + t) | (6, 2 + 2t) | (0) | (1)
    >>> "7t - 2" in e, 1 in e, e == Ideal.parse("(1 + t, 3t^-1)")
    (True, False, True)
    """

    __slots__ = ("_basis",)

    _basis: tuple[LaurentPolynomial, ...]

    def __init__(self, generators: Sequence[LaurentPolynomial | Scalar | str]) -> None:
        if isinstance(generators, str) or not isinstance(generators, Iterable):
            raise AlgebraError(
                f"{reprlib.repr(generators)} is no list of generators",
                accepted="Ideal.parse(text), or a list",
            )
        self._basis = _canonical([f for g in generators if (f := _element(g))])

    @classmethod
    def parse(cls, text: str) -> Ideal:
        """Read a list of generators such as "(3, 1 + t)".

        Examples
        --------
        >>> Ideal.parse("(2, 4 - 6t)")
        Ideal(['2'])
        """
        return cls([LaurentPolynomial.from_terms(terms) for terms in parse_polynomial_list(text)])

    @property
    def basis(self) -> tuple[LaurentPolynomial, ...]:
        """The canonical basis; () for the zero ideal."""
        return self._basis

    def __eq__(self, other: object) -> bool:
        return self._basis == other._basis if isinstance(other, Ideal) else NotImplemented

    def __hash__(self) -> int:
        return hash(self._basis)

    def __reduce__(self) -> tuple[object, ...]:
        return (Ideal, (self._basis,))

    def is_zero(self) -> bool:
        """Whether this is (0)."""
        return not self._basis

    def is_unit(self) -> bool:
        """Whether this is (1)."""
        return self._basis[:1] == (LaurentPolynomial([1]),)

    def __contains__(self, element: LaurentPolynomial | Scalar | str) -> bool:
        return not _divided(_element(element).normal_form(), self._basis)[1]

    def cofactors(self, element: LaurentPolynomial | Scalar | str) -> tuple[LaurentPolynomial, ...] | None:
        """The q_i with element = sum q_i basis_i, or None if it is not in the ideal.

        Examples
        --------
        >>> [str(q) for q in Ideal(["3", "1 + t"]).cofactors("t - 2")]
        ['-1', '1']
        """
        combination = _over_basis(_element(element), self._basis)
        if combination is None:
            return None
        found = dict(combination)
        zero = LaurentPolynomial()
        return tuple(found.get(i, zero) for i in range(len(self._basis)))

    def gcd(self) -> LaurentPolynomial:
        """The greatest common divisor of its elements, in normal form.

        Examples
        --------
        >>> Ideal(["2 - 2t^2", "4 + 4t"]).gcd()
        LaurentPolynomial('2 + 2t')
        """
        return gcd_of(self._basis)

    def conjugate(self) -> Ideal:
        """Its image under t -> 1/t."""
        return Ideal([f.conjugate() for f in self._basis])

    def __add__(self, other: Ideal) -> Ideal:
        if not isinstance(other, Ideal):
            return NotImplemented
        return Ideal(self._basis + other._basis)

    def __mul__(self, other: Ideal) -> Ideal:
        if not isinstance(other, Ideal):
            return NotImplemented
        return Ideal([f * g for f in self._basis for g in other._basis])

    @staticmethod
    def certificate(generators: Sequence[LaurentPolynomial | Scalar | str]) -> IdealCertificate:
        """The canonical basis of the ideal of these generators, with cofactors both ways.

        Examples
        --------
        >>> c = Ideal.certificate(["2 - t", "1 - 2t"])
        >>> print(c.ideal, c.verify())
        (3, 1 + t) True
        """
        elements = tuple(_element(g) for g in generators)
        ideal = Ideal(elements)
        chosen = _enough(elements, ideal)
        return IdealCertificate(
            elements,
            ideal._basis,
            tuple(_over_generators(f, elements, chosen) for f in ideal._basis),
            tuple(_over_basis(f, ideal._basis) or () for f in elements),
        )

    def text(self, style: Style = "plain") -> str:
        """Print it as "plain", "unicode" or "latex"."""
        left, right = (r"\left(", r"\right)") if style == "latex" else ("(", ")")
        return left + (", ".join(f.text(style) for f in self._basis) or "0") + right

    def latex(self) -> str:
        """Its LaTeX, without dollar signs."""
        return self.text("latex")

    def __str__(self) -> str:
        return self.text()

    def __repr__(self) -> str:
        return f"Ideal({[str(f) for f in self._basis]})"

    def _repr_latex_(self) -> str:
        return f"${self.latex()}$"

    def to_data(self) -> dict[str, Any]:
        """``{"basis": [polynomial, ...]}``."""
        return {"basis": [f.to_data() for f in self._basis]}

    @classmethod
    def from_data(cls, data: Any) -> Ideal:
        """Read `to_data` back; refuses a basis that is not canonical."""
        basis = tuple(LaurentPolynomial.from_data(f) for f in data["basis"])
        ideal = cls(basis)
        if ideal._basis != basis:
            raise AlgebraError("the basis of the ideal is not the canonical one", accepted=str(ideal))
        return ideal


def _element(value: LaurentPolynomial | Scalar | str) -> LaurentPolynomial:
    f = LaurentPolynomial.parse(value) if isinstance(value, str) else value
    if not isinstance(f, LaurentPolynomial):
        return LaurentPolynomial.constant(f)
    if f.over != "Z":
        raise AlgebraError(f"{f!r} is not over Z", accepted="generators over Z: other rings have gcd instead")
    return f


# Groebner bases in Z[t]. Multiplication by t is invertible here, so every polynomial is divided by the
# highest power of t at once, and its leading coefficient made positive: `normal_form`.


def _leading(f: LaurentPolynomial) -> int:
    return int(f.coefficient(f.highest))


def _divided(
    f: LaurentPolynomial, basis: Sequence[LaurentPolynomial]
) -> tuple[dict[int, LaurentPolynomial], LaurentPolynomial]:
    """Quotients by index, and the remainder: what the basis reaches is in [0, leading coefficient)."""
    quotients: dict[int, LaurentPolynomial] = {}
    for i in range(len(basis) - 1, -1, -1):
        quotient = f.floor_quotient(basis[i])
        if quotient:
            quotients[i] = quotient
            f = subtract_product(f, quotient, basis[i])
    return quotients, f


def _reduced(f: LaurentPolynomial, basis: Sequence[LaurentPolynomial]) -> LaurentPolynomial:
    """The remainder of a polynomial, divided by t and reduced again while t divides it."""
    f = f.normal_form()
    while True:
        _, f = _divided(f, basis)
        if f.lowest == 0:
            return f.normal_form()
        f = f.normal_form()


def _close(basis: list[LaurentPolynomial], waiting: list[LaurentPolynomial]) -> None:
    """Add elements to a strong Groebner basis in Z[t], in place.

    Degrees ascend and leading coefficients descend. A new element sends those whose leading terms it reduces
    back to the queue, together with its S-polynomials with both neighbours; where the leading coefficient of
    a neighbour is no multiple, that S-polynomial is a step of Euclid's algorithm towards their gcd. When the
    queue is empty each leading coefficient divides the one before, and the S-polynomials of neighbours reduce
    to 0, which is enough: those of others are sums of multiples of them.
    """
    while waiting:
        waiting.sort(key=lambda f: (-f.span(), -_leading(f)))
        f = _reduced(waiting.pop(), basis)
        if not f:
            continue
        degree, leading = f.highest, _leading(f)
        below = [g for g in basis if g.highest < degree]
        above = [g for g in basis if g.highest >= degree]
        covered = [g for g in above if _leading(g) >= leading]
        above = above[len(covered) :]
        basis[:] = [*below, f, *above]
        waiting += covered
        waiting += (h for g in below[-1:] if (h := _s_polynomial(g, f)))
        waiting += (h for g in above[:1] if (h := _s_polynomial(f, g)))


def _s_polynomial(low: LaurentPolynomial, high: LaurentPolynomial) -> LaurentPolynomial:
    shift = LaurentPolynomial.monomial(high.highest - low.highest)
    quotient = LaurentPolynomial.constant(_leading(low) // _leading(high))
    return subtract_product(shift * low, quotient, high).normal_form()


def _saturate(basis: list[LaurentPolynomial]) -> None:
    """Close a strong Groebner basis under division by t, in place.

    The elements of J that t divides are t J and the integer combinations of the basis whose constant terms
    cancel; these divided by t are added until nothing new comes.
    """
    while True:
        new: list[LaurentPolynomial] = []
        for relation in integer_kernel([[g.coefficient(0) for g in basis]], len(basis)):
            f = sum((c * g for c, g in zip(relation, basis, strict=True) if c), LaurentPolynomial())
            if f and (f := _reduced(f, basis)):
                new.append(f)
        if not new:
            return
        _close(basis, new)


def _canonical(generators: Sequence[LaurentPolynomial]) -> tuple[LaurentPolynomial, ...]:
    """The canonical basis of the ideal of some nonzero polynomials."""
    divisor = gcd_of(generators)
    rest = [f.exact_division(divisor).normal_form() for f in generators]
    if any(f.is_unit() for f in rest):
        return (divisor,)
    span = max((f.span() for f in rest), default=0)
    if span > MAX_IDEAL_SPAN:
        raise LimitError(
            f"the generators of the ideal, divided by {divisor}, reach span {span}",
            accepted=f"spans up to {MAX_IDEAL_SPAN}, or a principal ideal",
        )
    # Short ones first; a few generators mostly span what all of them do.
    rest.sort(key=lambda f: (f.span(), sum(map(abs, f.coefficients)), f.coefficients))
    basis: list[LaurentPolynomial] = []
    while rest:
        basis = _spanned([*basis, *rest[:_BATCH]])
        rest = [f for f in rest[_BATCH:] if _divided(f, basis)[1]]
    basis = [divisor * f for f in basis]
    for i, f in enumerate(basis):
        basis[i] = _divided(f, basis[:i])[1]
    return tuple(basis)


_BATCH = 4
_LONG = 60


def _spanned(generators: Sequence[LaurentPolynomial]) -> list[LaurentPolynomial]:
    """A saturated strong Groebner basis.

    The Hermite form of the generators' multiples by powers of t, up to the degree where Bezout's identity
    over Q is found, has nearly all of it, with coefficients as small as the ideal allows; `_close` and
    `_saturate` bring the rest. Where that form is large and an integer among the generators keeps all
    coefficients small anyway, it is left out.
    """
    basis: list[LaurentPolynomial] = []
    length = 2 * max(f.span() for f in generators) + 1
    if length > _LONG and any(f.span() == 0 for f in generators):
        _close(basis, list(generators))
        _saturate(basis)
        return basis
    rows = [
        [0] * shift + list(f.coefficients[::-1]) + [0] * (length - 1 - f.span() - shift)
        for f in generators
        for shift in range(length - f.span())
    ]
    _close(basis, [LaurentPolynomial(row[::-1]).normal_form() for row in hermite_rows(rows)])
    _saturate(basis)
    return basis


# Combinations


def _over_basis(f: LaurentPolynomial, basis: Sequence[LaurentPolynomial]) -> Combination | None:
    """One element as a combination of a canonical basis, or None if it is not in the ideal."""
    shift = LaurentPolynomial.monomial(f.lowest)
    quotients, rest = _divided(f * shift.inverse(), basis)
    return None if rest else tuple((i, quotients[i] * shift) for i in sorted(quotients))


def _enough(generators: Sequence[LaurentPolynomial], ideal: Ideal) -> list[int]:
    """Indices of a few of the generators, short ones preferred, that span the ideal; none can be left out."""
    order = sorted(
        (i for i, f in enumerate(generators) if f),
        key=lambda i: (generators[i].span(), max(map(abs, generators[i].coefficients)), i),
    )
    chosen: list[int] = []
    span = Ideal([])
    for i in order:
        if span == ideal:
            break
        if generators[i] not in span:
            chosen.append(i)
            span = Ideal([*span.basis, generators[i]])
    for i in list(chosen):
        rest = [k for k in chosen if k != i]
        if Ideal([generators[k] for k in rest]) == ideal:
            chosen = rest
    return sorted(chosen)


def _over_generators(
    f: LaurentPolynomial, generators: Sequence[LaurentPolynomial], chosen: Sequence[int]
) -> Combination:
    """One element as a combination, with small coefficients, of chosen generators that span an ideal with it.

    Integer combinations of the generators times powers of t, whose range grows until it is enough.
    """
    length = max(generators[i].span() for i in chosen)
    length = max(f.span(), length)
    margin = 0
    while True:
        low, high = -margin, length + margin
        columns = range(low, high + 1)
        shifts = [(i, k) for i in chosen for k in range(low, high - generators[i].span() + 1)]
        rows = [
            [generators[i].coefficient(generators[i].lowest + exponent - k) for exponent in columns]
            for i, k in shifts
        ]
        target = [f.coefficient(f.lowest + exponent) for exponent in columns]
        solution = integer_solution(rows, target)
        if solution is not None:
            break
        margin = 2 * margin + 1
    terms: dict[int, dict[int, Scalar]] = {}
    for (i, k), c in zip(shifts, solution, strict=True):
        if c:
            terms.setdefault(i, {})[k + f.lowest - generators[i].lowest] = c
    return tuple((i, LaurentPolynomial.from_terms(terms[i])) for i in sorted(terms))


def _combined(combination: Combination, elements: Sequence[LaurentPolynomial]) -> LaurentPolynomial:
    return sum((q * elements[i] for i, q in combination), LaurentPolynomial())


@dataclass(frozen=True)
class IdealCertificate(Portable, kind="ideal certificate"):
    """Proof that generators and basis span one ideal: each is a combination of the others.

    Attributes
    ----------
    generators, basis : tuple of LaurentPolynomial
    basis_cofactors, generator_cofactors : tuple of Combination
        One for each element of the basis (over the generators) and for each generator (over the basis).
    """

    generators: tuple[LaurentPolynomial, ...]
    basis: tuple[LaurentPolynomial, ...]
    basis_cofactors: tuple[Combination, ...]
    generator_cofactors: tuple[Combination, ...]

    @property
    def ideal(self) -> Ideal:
        """The ideal."""
        return Ideal(self.basis)

    def verify(self) -> bool:
        """Multiply every combination out; the basis has to be the canonical one.

        Raises
        ------
        CertificateError
            Naming the basis element or generator (from 1) whose combination is wrong.
        """
        check_combinations("basis", self.basis, self.basis_cofactors, self.generators)
        check_combinations("generators", self.generators, self.generator_cofactors, self.basis)
        check_canonical(self.basis)
        return True

    def to_data(self) -> dict[str, Any]:
        """Lists of polynomials, and of combinations as lists of [index from 0, cofactor]."""
        return {
            "generators": [f.to_data() for f in self.generators],
            "basis": [f.to_data() for f in self.basis],
            "basis_cofactors": [combination_data(c) for c in self.basis_cofactors],
            "generator_cofactors": [combination_data(c) for c in self.generator_cofactors],
        }

    @classmethod
    def from_data(cls, data: Any) -> IdealCertificate:
        """Read `to_data` back; call `verify` before believing it."""
        return cls(
            tuple(LaurentPolynomial.from_data(f) for f in data["generators"]),
            tuple(LaurentPolynomial.from_data(f) for f in data["basis"]),
            tuple(combination_from_data(c) for c in data["basis_cofactors"]),
            tuple(combination_from_data(c) for c in data["generator_cofactors"]),
        )


def check_combinations(
    name: str,
    targets: Sequence[LaurentPolynomial],
    combinations_: Sequence[Combination],
    elements: Sequence[LaurentPolynomial],
) -> None:
    """Refuse at the first of the targets that is not its combination of the elements."""
    if len(targets) != len(combinations_):
        raise CertificateError(f"{len(combinations_)} combinations for {len(targets)} of {name}", where=name)
    for i, (target, combination) in enumerate(zip(targets, combinations_, strict=True), 1):
        where = f"{name} {i}"
        places = [k for k, _ in combination]
        if places != sorted(set(places)) or not all(0 <= k < len(elements) for k in places):
            raise CertificateError(
                "the combination's indices are not ascending, or out of range", where=where
            )
        for k, q in combination:
            if not q or not elements[k]:
                raise CertificateError(
                    f"the cofactor of element {k + 1} is 0, or that element is", where=where
                )
        total = _combined(combination, elements)
        if total != target:
            raise CertificateError(f"the combination gives {total}, not {target}", where=where)


def check_canonical(basis: tuple[LaurentPolynomial, ...]) -> None:
    """Refuse at the first element that the canonical basis of the ideal has otherwise."""
    canonical = Ideal(basis).basis
    for i, (f, g) in enumerate(zip(basis, canonical, strict=False), 1):
        if f != g:
            raise CertificateError(f"{f} is not canonical: {g} is", where=f"basis {i}")
    if len(basis) != len(canonical):
        raise CertificateError("the basis is not the canonical one", where="basis")


def combination_data(combination: Combination) -> list[list[Any]]:
    """A combination as JSON data: [index from 0, cofactor] pairs."""
    return [[i, q.to_data()] for i, q in combination]


def combination_from_data(data: Any) -> Combination:
    """Read `combination_data` back."""
    return tuple((index(i), LaurentPolynomial.from_data(q)) for i, q in data)
