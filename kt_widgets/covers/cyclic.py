"""`CyclicCover`: finite cyclic covers of a presentation complex, branched and unbranched, and their H_1."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from math import gcd, prod
from operator import index
from typing import TYPE_CHECKING, Any

from kt_widgets.algebra.elimination import Transforms, check_equal, eliminate
from kt_widgets.algebra.integers import (
    IntegerSmithForm,
    at_companion,
    integer_factors,
    integer_smith_form,
)
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.errors import AlgebraError, CertificateError
from kt_widgets.groups.words import Word
from kt_widgets.text.portable import Portable
from kt_widgets.text.printing import Style

if TYPE_CHECKING:
    from kt_widgets.covers.cover import Cover

__all__ = ["CyclicCover", "CyclicCoverCertificate", "branched_cover", "cyclic_cover"]


@dataclass(frozen=True, repr=False)
class CyclicCover:
    """The n-fold cyclic cover under an infinite cyclic cover, with meridians filled in or without.

    The n-fold cover is the infinite one divided by t^n; it has as many components as the greatest common
    divisor of n and the weights.

    Attributes
    ----------
    cover : Cover
    n : int
        The number of sheets.
    meridians : tuple of Word
        Words whose least powers that lift to loops bound discs in a branched cover; () if it is unbranched.

    Examples
    --------
    >>> from kt_widgets.covers.cover import Cover
    >>> from kt_widgets.groups.presentations import Presentation
    >>> x = Cover(Presentation.parse("< a, b | a b a = b a b >"))
    >>> print(x.cyclic_cover(3))
    3-fold cyclic cover, H_1 = Z/2 + Z/2 + Z
    >>> print(x.branched_cover(2, meridians=["a"]))
    2-fold branched cyclic cover, H_1 = Z/3
    """

    cover: Cover
    n: int
    meridians: tuple[Word, ...] = ()

    @cached_property
    def _presented(self) -> tuple[LaurentMatrix, bool]:
        if not self.meridians:
            return _unbranched(self.cover, self.n), False
        if _generate(self.cover, self.meridians):
            return self.cover.chains().homology(1).relations, True
        return _filled(self.cover, self.n, self.meridians), False

    def presentation_matrix(self) -> LaurentMatrix:
        """A matrix over Z[t,1/t] whose cokernel, divided by `modulus`, is H_1 of this cover.

        Unbranched: the relations of H_1 of the infinite cover, and a generator for the kernel of t^n - 1 on
        H_0, which is free: H_1 of the cover is the sum of H_1/(t^n - 1) and this kernel. Branched over
        meridians of weight 1 or -1 that generate the abelianisation: the relations of H_1, since nu_n H_1 is
        then spanned by (t^n - 1) H_1 and the lifts of the powers of the meridians. Branched over others: the
        unbranched case and the lifts of the powers of the meridians.

        R. H. Fox, Free differential calculus III, Ann. of Math. 64 (1956), from memory.
        """
        return self._presented[0]

    def modulus(self) -> LaurentPolynomial:
        """t^n - 1, or nu_n = 1 + t + ... + t^(n-1): what H_1 is divided by (see `presentation_matrix`)."""
        return _modulus(self.n, self._presented[1])

    @cached_property
    def _factors(self) -> tuple[int, ...]:
        matrix, _ = self._presented
        return integer_factors(at_companion(eliminate(matrix).core, self.modulus()))

    def invariant_factors(self) -> tuple[int, ...]:
        """H_1: integers > 1, each dividing the next, then a 0 for each free summand Z.

        Raises
        ------
        LimitError
            If the integer matrix gets larger than `kt_widgets.algebra.integers.MAX_INTEGER_SIDE`.

        Examples
        --------
        >>> from kt_widgets.covers.cover import Cover
        >>> from kt_widgets.groups.presentations import Presentation
        >>> x = Cover(Presentation.parse("< a, b | a b a = b a b >"))
        >>> x.branched_cover(6, meridians=["a"]).invariant_factors()
        (0, 0)
        """
        return self._factors

    def order(self) -> int:
        """The number of elements of H_1; 0 if there are infinitely many."""
        return prod(self._factors)

    def certificate(self) -> CyclicCoverCertificate:
        """The invariant factors with everything that proves them."""
        matrix, reduced = self._presented
        elimination = eliminate(matrix)
        smith = integer_smith_form(at_companion(elimination.core, self.modulus()))
        transforms = elimination.transforms()
        return CyclicCoverCertificate(
            matrix,
            self.n,
            reduced,
            transforms.left,
            transforms.left_inverse,
            transforms.right,
            transforms.right_inverse,
            elimination.core,
            smith,
            self._factors,
        )

    def text(self, style: Style = "plain") -> str:
        """H_1 as a sum of cyclic groups."""
        plus = r" \oplus " if style == "latex" else " + "
        integers = r"\mathbb{Z}" if style == "latex" else "Z"
        return plus.join(f"{integers}/{d}" if d else integers for d in self._factors) or "0"

    @property
    def _name(self) -> str:
        return f"{self.n}-fold {'branched ' if self.meridians else ''}cyclic cover"

    def __str__(self) -> str:
        return f"{self._name}, H_1 = {self.text()}"

    def __repr__(self) -> str:
        return f"<{self._name} of {self.cover!r}>"

    def _repr_latex_(self) -> str:
        return f"$H_1 = {self.text('latex')}$"


@dataclass(frozen=True)
class CyclicCoverCertificate(Portable, kind="cyclic cover certificate"):
    """Proof of the invariant factors of the cokernel of a matrix A over Z[t,1/t], divided by t^n - 1 or nu_n.

    P A Q = diag(1, ..., 1, core) with P and Q invertible; the Smith form is that of the core with every entry
    put as the integer block of its multiplication.

    Attributes
    ----------
    matrix : LaurentMatrix
    n : int
    reduced : bool
        Whether it is divided by nu_n rather than by t^n - 1.
    P, P_inverse, Q, Q_inverse, core : LaurentMatrix
    smith : IntegerSmithForm
    factors : tuple of int
        The claim: integers > 1, each dividing the next, then zeros.
    """

    matrix: LaurentMatrix
    n: int
    reduced: bool
    P: LaurentMatrix
    P_inverse: LaurentMatrix
    Q: LaurentMatrix
    Q_inverse: LaurentMatrix
    core: LaurentMatrix
    smith: IntegerSmithForm
    factors: tuple[int, ...]

    def verify(self) -> bool:
        """Multiply everything out.

        Raises
        ------
        CertificateError
            Naming the entry of a product, or the factor, that is wrong.

        Examples
        --------
        >>> from kt_widgets.covers.cover import Cover
        >>> from kt_widgets.groups.presentations import Presentation
        >>> x = Cover(Presentation.parse("< a, b | a b a = b a b >"))
        >>> x.cyclic_cover(2).certificate().verify()
        True
        """
        if self.n < 1:
            raise CertificateError(f"there is no {self.n}-fold cover", where="n", accepted="1 or more")
        units = self.matrix.shape[0] - self.core.shape[0]
        if units < 0:
            raise CertificateError("the core has more rows than the matrix", where="core")
        target = LaurentMatrix.blocks(LaurentMatrix.identity(units), self.core)
        transforms = Transforms(self.P, self.P_inverse, self.Q, self.Q_inverse)
        transforms.verify(self.matrix, target, ("P", "A", "Q"))
        image = at_companion(self.core, _modulus(self.n, self.reduced))
        check_equal(self.smith.matrix, image, "the integer matrix")
        self.smith.verify()
        found = self.smith.factors
        for i, (claimed, factor) in enumerate(zip(self.factors, found, strict=False), 1):
            if claimed != factor:
                raise CertificateError(f"the factor is {claimed}, not {factor}", where=f"factor {i}")
        if len(found) != len(self.factors):
            raise CertificateError(f"{len(self.factors)} factors instead of {len(found)}", where="factors")
        return True

    def to_data(self) -> dict[str, Any]:
        """Matrices by name, the Smith form's data, n, and the list of factors."""
        return {
            **{name: getattr(self, name).to_data() for name in _MATRICES},
            "n": self.n,
            "reduced": self.reduced,
            "smith": self.smith.to_data(),
            "factors": list(self.factors),
        }

    @classmethod
    def from_data(cls, data: Any) -> CyclicCoverCertificate:
        """Read `to_data` back; call `verify` before believing it."""
        if type(data["reduced"]) is not bool:
            raise TypeError("reduced is no truth value")
        return cls(
            **{name: LaurentMatrix.from_data(data[name]) for name in _MATRICES},
            n=index(data["n"]),
            reduced=data["reduced"],
            smith=IntegerSmithForm.from_data(data["smith"]),
            factors=tuple(map(index, data["factors"])),
        )


_MATRICES = ("matrix", "P", "P_inverse", "Q", "Q_inverse", "core")


def cyclic_cover(cover: Cover, n: int) -> CyclicCover:
    """The n-fold cover, unbranched; see `kt_widgets.covers.cover.Cover.cyclic_cover`."""
    _check_sheets(n)
    return CyclicCover(cover, n)


def branched_cover(cover: Cover, n: int, meridians: Sequence[Word | str] | None = None) -> CyclicCover:
    """The n-fold branched cover; see `kt_widgets.covers.cover.Cover.branched_cover`."""
    _check_sheets(n)
    presentation = cover.presentation
    if meridians is None:
        words = [word for name, word in presentation.marks if name.startswith("meridian:")]
    elif isinstance(meridians, str):
        raise AlgebraError("one text is no list of meridians", accepted='a list of words, such as ["a"]')
    else:
        words = [Word.parse(w, presentation.generators) if isinstance(w, str) else w for w in meridians]
    if not words:
        raise AlgebraError(
            "a branched cover needs meridians, and the presentation carries none",
            where="meridians",
            accepted='meridians=["a"], or the presentation of a diagram; cyclic_cover(n) is unbranched',
        )
    for word in words:
        cover.chain(word)  # refuses letters that are no generators
    return CyclicCover(cover, n, tuple(words))


def _check_sheets(n: int) -> None:
    if type(n) is not int or n < 1:
        raise AlgebraError(f"there is no {n!r}-fold cover", where="n", accepted="a whole number, 1 or more")


def _modulus(n: int, reduced: bool) -> LaurentPolynomial:
    t_to_n = LaurentPolynomial.monomial(n) - 1
    return t_to_n.exact_division(LaurentPolynomial.monomial(1) - 1) if reduced else t_to_n


def _unbranched(cover: Cover, n: int) -> LaurentMatrix:
    """The relations of H_1 of the infinite cover beside t^g - 1, g the gcd of n and the weights.

    H_0 is Z[t,1/t]/(t^d - 1) with d the gcd of the weights, so that t^n - 1 has a kernel of rank g there, and
    none if all weights are 0.
    """
    relations = cover.chains().homology(1).relations
    if not cover.sheets:
        return relations
    return LaurentMatrix.blocks(
        LaurentMatrix([[LaurentPolynomial.monomial(gcd(cover.sheets, n)) - 1]]), relations
    )


def _filled(cover: Cover, n: int, meridians: Sequence[Word]) -> LaurentMatrix:
    """`_unbranched` with a relation for each meridian: the lift of its least power that is a loop.

    In coordinates in which boundary(1) is (t^d - 1, 0, ..., 0), a cycle modulo t^n - 1 has a first coordinate
    that is a multiple of (t^n - 1)/(t^g - 1), the first generator of `_unbranched`.
    """
    chains = cover.chains()
    matrix = _unbranched(cover, n)
    rank = len(chains.generators) - chains.cycles().shape[1]
    common = gcd(cover.sheets, n)
    first = _modulus(n, False).exact_division(LaurentPolynomial.monomial(common) - 1)
    columns = []
    for word in meridians:
        weight = word.weight(cover.weights)
        turns = n // gcd(weight, n)
        loop = sum((LaurentPolynomial.monomial(weight * k) for k in range(turns)), LaurentPolynomial())
        column = list((chains.kernel().V_inverse @ cover.chain(word) * loop).column(0))
        columns.append([f.exact_division(first) for f in column[:rank]] + column[rank:])
    rows = [[*row, *added] for row, added in zip(matrix.rows, zip(*columns, strict=True), strict=True)]
    return LaurentMatrix(rows, "Z", (matrix.shape[0], matrix.shape[1] + len(columns)))


def _generate(cover: Cover, meridians: Sequence[Word]) -> bool:
    """Whether the meridians have weight 1 or -1 and generate the abelianisation of the group."""
    weights, presentation = cover.weights, cover.presentation
    if any(abs(word.weight(weights)) != 1 for word in meridians):
        return False
    words = (*presentation.boundary_words, *meridians)
    rows = {name: i for i, name in enumerate(presentation.generators)}
    letters = ((rows[name], j, 0, sign) for j, word in enumerate(words) for name, sign in word)
    return not integer_factors(LaurentMatrix.from_monomials(letters, (len(rows), len(words))))
