"""`LaurentPolynomial`: the elements of Z[t,1/t], Q[t,1/t] and F_p[t,1/t]."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from fractions import Fraction
from functools import reduce
from math import gcd as integer_gcd
from math import lcm
from operator import index
from typing import Any, TypeAlias

from kt_widgets.algebra.flint_rings import FlintPolynomial, Ring, RingName, ring
from kt_widgets.errors import AlgebraError, LimitError
from kt_widgets.text.parsing import parse_polynomial
from kt_widgets.text.portable import Portable
from kt_widgets.text.printing import Style, integer_text, number_text, polynomial_text

__all__ = [
    "MAX_BITS",
    "MAX_POWER",
    "MAX_SPAN",
    "LaurentPolynomial",
    "Scalar",
    "gcd_of",
    "integer_from_data",
    "subtract_product",
]

Scalar: TypeAlias = int | Fraction
"""Python numbers that coerce to constants."""

MAX_SPAN = 10_000_000
"""Largest distance between the lowest and the highest exponent that sums and powers may reach."""

MAX_BITS = 100_000_000
"""Largest result, by a bound for its number of bits, that powers and values at numbers may have."""


MAX_POWER = 2**62
"""Largest power of a polynomial, however small the result."""


class LaurentPolynomial(Portable, kind="polynomial"):
    """A Laurent polynomial in t; frozen by convention, hashable, picklable.

    Stored as t^lowest times a polynomial with nonzero constant term (zero has lowest 0).
    Arithmetic takes ints and, over fields, Fractions; polynomials over different rings do not mix.
    Two polynomials are equal when their rings, exponents and coefficients are; a number equals the constant
    that has it as its coefficient.

    Parameters
    ----------
    coefficients : sequence of int or Fraction, or str
        Lowest exponent first; zeros at both ends are trimmed. A text is parsed.
    lowest : int
        Exponent of the first coefficient.
    over : "Z", "Q" or a prime p

    Raises
    ------
    AlgebraError
        If a coefficient is not in the ring, or the ring is none.
    ParseError
        If a text is no polynomial in t.

    Examples
    --------
    >>> f = LaurentPolynomial([1, -3, 1], lowest=-1)
    >>> print(f, "|", f * f, "|", f.lowest, f.coefficients)
    t^-1 - 3 + t | t^-2 - 6t^-1 + 11 - 6t + t^2 | -1 (1, -3, 1)
    >>> f.change_ring(5)
    LaurentPolynomial('t^-1 + 2 + t', over=5)
    >>> f == LaurentPolynomial("t^-1 - 3 + t")
    True
    """

    __slots__ = ("_low", "_poly", "_ring")

    _low: int
    _poly: FlintPolynomial
    _ring: Ring

    def __init__(
        self, coefficients: Sequence[Scalar] | str = (), lowest: int = 0, over: RingName = "Z"
    ) -> None:
        base = ring(over)
        try:
            lowest = index(lowest)
        except TypeError:
            raise AlgebraError(f"the lowest exponent is {lowest!r}", accepted="an integer") from None
        if isinstance(coefficients, str):
            parsed = LaurentPolynomial.parse(coefficients, over)
            coefficients, lowest = parsed.coefficients, parsed._low + lowest
        numbers: list[Any] = []
        try:
            for c in coefficients:
                numbers.append(base.number(c))
        except AlgebraError as error:
            where = f"the coefficient of t^{lowest + len(numbers)}"
            raise AlgebraError(error.what, where=where, accepted=error.accepted) from None
        start, stop = 0, len(numbers)
        while stop and not numbers[stop - 1]:
            stop -= 1
        while start < stop and not numbers[start]:
            start += 1
        self._low = lowest + start if stop else 0
        self._poly = base.polynomial(numbers[start:stop])
        self._ring = base

    # Other ways in

    @classmethod
    def parse(cls, text: str, over: RingName = "Z") -> LaurentPolynomial:
        """Read plain, unicode or LaTeX text in the variable t.

        Raises
        ------
        ParseError
            With line and column, if the text is no polynomial in t.
        AlgebraError
            If a coefficient is not in the ring.

        Examples
        --------
        >>> LaurentPolynomial.parse("(t - 1)(t + 1)/t")
        LaurentPolynomial('-t^-1 + t')
        """
        return cls.from_terms(parse_polynomial(text), over)

    @classmethod
    def from_terms(cls, terms: Mapping[int, Scalar], over: RingName = "Z") -> LaurentPolynomial:
        """The polynomial with these coefficients by exponent.

        Examples
        --------
        >>> LaurentPolynomial.from_terms({3: 1, -1: 2})
        LaurentPolynomial('2t^-1 + t^3')
        """
        if not terms:
            return cls((), 0, over)
        low, high = min(terms), max(terms)
        _check_span(high - low)
        coefficients: list[Scalar] = [0] * (high - low + 1)
        for exponent, coefficient in terms.items():
            coefficients[exponent - low] = coefficient
        return cls(coefficients, low, over)

    @classmethod
    def monomial(cls, exponent: int, coefficient: Scalar = 1, over: RingName = "Z") -> LaurentPolynomial:
        """``coefficient * t^exponent``.

        Examples
        --------
        >>> LaurentPolynomial.monomial(-2, 3)
        LaurentPolynomial('3t^-2')
        """
        return cls((coefficient,), exponent, over)

    @classmethod
    def constant(cls, value: Scalar, over: RingName = "Z") -> LaurentPolynomial:
        """The constant polynomial."""
        return cls((value,), 0, over)

    @classmethod
    def from_integers(cls, terms: Mapping[int, int], base: Ring) -> LaurentPolynomial:
        """The polynomial with these integers by exponent, at least one, over a ring that is at hand."""
        low = min(terms)
        length = max(terms) - low + 1
        _check_span(length - 1)
        coefficients = [0] * length
        for exponent, coefficient in terms.items():
            coefficients[exponent - low] = coefficient
        # Sums may have cancelled at both ends; flint drops zeros at the upper one itself.
        return _trimmed(low, base.polynomial(coefficients), base)

    @classmethod
    def from_flint(cls, polynomial: FlintPolynomial, lowest: int, base: Ring) -> LaurentPolynomial:
        """t^lowest times a flint polynomial over the ring, which must not be changed afterwards."""
        return _trimmed(lowest, polynomial, base)

    # What it is made of

    @property
    def lowest(self) -> int:
        """The lowest exponent with nonzero coefficient (0 for zero)."""
        return self._low

    @property
    def highest(self) -> int:
        """The highest exponent with nonzero coefficient (0 for zero)."""
        return self._low + max(len(self._poly) - 1, 0)

    @property
    def coefficients(self) -> tuple[Any, ...]:
        """Lowest first: ints over Z, ints in [0, p) over F_p, Fractions over Q; () for zero."""
        return tuple(self._ring.numbers(self._poly))

    @property
    def over(self) -> RingName:
        """The ring of coefficients: "Z", "Q" or a prime."""
        return self._ring.name

    def span(self) -> int:
        """Highest minus lowest exponent; 0 for zero."""
        return max(len(self._poly) - 1, 0)

    def shifted(self, shift: int) -> FlintPolynomial:
        """t^shift times this as a flint polynomial; the exponents must come out 0 or more."""
        return self._poly.left_shift(self._low + shift)

    def coefficient(self, exponent: int) -> Any:
        """The coefficient of t^exponent.

        Examples
        --------
        >>> LaurentPolynomial.parse("1 - 3t").coefficient(1)
        -3
        """
        place = exponent - self._low
        if not 0 <= place < len(self._poly):
            return self._ring.number(0)
        return self._ring.value(self._poly[place])

    def terms(self) -> dict[int, Any]:
        """Exponent to nonzero coefficient, lowest first.

        Examples
        --------
        >>> LaurentPolynomial([1, 0, 2], -1).terms()
        {-1: 1, 1: 2}
        """
        return {k: c for k, c in enumerate(self.coefficients, self._low) if c}

    def __bool__(self) -> bool:
        return bool(self._poly)

    def __eq__(self, other: object) -> bool:
        if other.__class__ is LaurentPolynomial:
            return self._low == other._low and self._ring is other._ring and self._poly == other._poly
        if isinstance(other, int | Fraction):
            return len(self._poly) <= 1 and self._low == 0 and (self.coefficients or (0,))[0] == other
        return NotImplemented

    def __hash__(self) -> int:
        coefficients = self.coefficients
        if self._low == 0 and len(coefficients) <= 1:
            return hash(coefficients[0] if coefficients else 0)
        return hash((self._low, coefficients))

    def __reduce__(self) -> tuple[object, ...]:
        return (LaurentPolynomial, (self.coefficients, self._low, self._ring.name))

    # Arithmetic

    def _coerced(self, other: object) -> Any:
        if isinstance(other, LaurentPolynomial):
            if other._ring is self._ring:
                return other
            raise AlgebraError(
                f"a polynomial of {self._ring.text} does not meet one of {other._ring.text}",
                accepted="change_ring() one of them",
            )
        if isinstance(other, int | Fraction):
            return LaurentPolynomial((other,), 0, self._ring.name)
        return NotImplemented

    def _given(self, other: object) -> LaurentPolynomial:
        given = self._coerced(other)
        if given is NotImplemented:
            raise AlgebraError(f"{other!r} is no polynomial", accepted="a LaurentPolynomial, int or Fraction")
        return given  # type: ignore[no-any-return]

    def __neg__(self) -> LaurentPolynomial:
        return _made(self._low, -self._poly, self._ring)

    def __pos__(self) -> LaurentPolynomial:
        return self

    def __add__(self, other: LaurentPolynomial | Scalar) -> LaurentPolynomial:
        addend: Any = other
        if addend.__class__ is not LaurentPolynomial or addend._ring is not self._ring:
            addend = self._coerced(other)
            if addend is NotImplemented:
                return NotImplemented
        if not self._poly:
            return addend  # type: ignore[no-any-return]
        if not addend._poly:
            return self
        low = self._low
        shift = addend._low - low
        if shift == 0:
            poly = self._poly + addend._poly
        elif shift > 0:
            if shift > MAX_SPAN:
                _check_span(shift)
            poly = self._poly + addend._poly.left_shift(shift)
        else:
            if shift < -MAX_SPAN:
                _check_span(-shift)
            low = addend._low
            poly = self._poly.left_shift(-shift) + addend._poly
        return _trimmed(low, poly, self._ring)

    __radd__ = __add__

    def __sub__(self, other: LaurentPolynomial | Scalar) -> LaurentPolynomial:
        other = self._coerced(other)
        if other is NotImplemented:
            return NotImplemented
        return self + (-other)

    def __rsub__(self, other: Scalar) -> LaurentPolynomial:
        return (-self) + other

    def __mul__(self, other: LaurentPolynomial | Scalar) -> LaurentPolynomial:
        factor: Any = other
        if factor.__class__ is not LaurentPolynomial or factor._ring is not self._ring:
            factor = self._coerced(other)
            if factor is NotImplemented:
                return NotImplemented
        poly = self._poly * factor._poly
        return _made(self._low + factor._low if poly else 0, poly, self._ring)

    __rmul__ = __mul__

    def __pow__(self, exponent: int) -> LaurentPolynomial:
        if not isinstance(exponent, int):
            return NotImplemented
        if exponent < 0:
            if not self.is_unit():
                raise AlgebraError(
                    f"{self} has no inverse in {self._ring.text}", accepted="negative powers of units only"
                )
            return self.inverse() ** -exponent
        span = self.span()
        if exponent > MAX_POWER:
            raise LimitError(f"the power {integer_text(exponent)}", accepted=f"at most {MAX_POWER}")
        if self.over in ("Z", "Q"):
            height = max(map(_height, self.coefficients), default=1) + span.bit_length()
            _check_bits((exponent * span + 1) * exponent * (height - 1))
        elif span:
            _check_bits(32 * exponent * span)
        return _made(self._low * exponent, self._poly**exponent, self._ring)

    def inverse(self) -> LaurentPolynomial:
        """The inverse of a unit.

        Raises
        ------
        AlgebraError
            If this is no unit.

        Examples
        --------
        >>> LaurentPolynomial.parse("-t^3").inverse()
        LaurentPolynomial('-t^-3')
        """
        if not self.is_unit():
            raise AlgebraError(f"{self} has no inverse in {self._ring.text}", accepted=_unit_text(self._ring))
        return _made(-self._low, self._ring.one / self._poly, self._ring)

    def exact_division(self, other: LaurentPolynomial | Scalar) -> LaurentPolynomial:
        """The q with self = q * other.

        Raises
        ------
        AlgebraError
            If there is none, or `other` is 0.

        Examples
        --------
        >>> LaurentPolynomial.parse("t^2 - 1").exact_division(LaurentPolynomial.parse("1 + t"))
        LaurentPolynomial('-1 + t')
        """
        divisor = self._divisor(other)
        quotient, remainder = divmod(self._poly, divisor._poly)
        if remainder:
            raise AlgebraError(
                f"{divisor} does not divide {self} in {self._ring.text}", accepted="a divisor of it"
            )
        return _made(self._low - divisor._low if quotient else 0, quotient, self._ring)

    def divides(self, other: LaurentPolynomial) -> bool:
        """Whether `other` is a multiple of this.

        Examples
        --------
        >>> LaurentPolynomial.parse("1 + t").divides(LaurentPolynomial.parse("t^2 - 1"))
        True
        """
        other = self._given(other)
        return not divmod(other._poly, self._poly)[1] if self._poly else not other._poly

    def floor_quotient(self, other: LaurentPolynomial) -> LaurentPolynomial:
        """Over Z, for exponents 0 or more: the q that brings self - q * other nearest to a remainder.

        Every coefficient of self - q * other from the degree of `other` upwards is in [0, c), where c > 0 is
        the leading coefficient of `other`.

        Examples
        --------
        >>> f, g = LaurentPolynomial.parse("5t^2 + 1"), LaurentPolynomial.parse("2t + 1")
        >>> f.floor_quotient(g), f - f.floor_quotient(g) * g
        (LaurentPolynomial('-1 + 2t'), LaurentPolynomial('2 + t^2'))
        """
        divisor = other.shifted(0)
        leading = divisor[len(divisor) - 1]
        if leading == 1:
            return _trimmed(0, self.shifted(0) // divisor, self._ring)
        # flint rounds small coefficients otherwise, and the remainder has to be unique.
        remainder = [0] * self._low + self._ring.numbers(self._poly)
        below = other._ring.numbers(divisor)
        c = below.pop()
        degree = len(below)
        quotient = [0] * max(len(remainder) - degree, 0)
        for exponent in range(len(remainder) - 1, degree - 1, -1):
            q = remainder[exponent] // c
            if q:
                start = exponent - degree
                quotient[start] = q
                for k, b in enumerate(below, start):
                    remainder[k] -= q * b
        return _trimmed(0, self._ring.polynomial(quotient), self._ring)

    def __divmod__(self, other: LaurentPolynomial | Scalar) -> tuple[LaurentPolynomial, LaurentPolynomial]:
        if not self._ring.is_field:
            raise AlgebraError(
                "Z[t,1/t] has no division with remainder", accepted="exact_division, or change_ring('Q')"
            )
        divisor = self._divisor(other)
        quotient, remainder = divmod(self._poly, divisor._poly)
        return (
            _trimmed(self._low - divisor._low, quotient, self._ring),
            _trimmed(self._low, remainder, self._ring),
        )

    def _divisor(self, other: LaurentPolynomial | Scalar) -> LaurentPolynomial:
        divisor = self._given(other)
        if not divisor:
            raise AlgebraError("division by 0", accepted="a nonzero divisor")
        return divisor

    def __call__(self, value: Any) -> Any:
        """The value at an int, Fraction, float, complex or Laurent polynomial.

        Over F_p the values of ints and Fractions are ints in [0, p).

        Raises
        ------
        AlgebraError
            At a value without inverse where exponents are negative.
        LimitError
            If the value may have more than `MAX_BITS` bits.

        Examples
        --------
        >>> f = LaurentPolynomial.parse("t^-1 - 3 + t")
        >>> f(-1), f(2), f(0.5)
        (-5, Fraction(-1, 2), -0.5)
        """
        base = self._ring
        modular = base.is_field and base.name != "Q"
        if modular and isinstance(value, int | Fraction):
            value = base.number(value)
        if self._low < 0 and not value:
            raise AlgebraError(f"{self} has a pole at 0", accepted="a nonzero value")
        if isinstance(value, int | Fraction) and abs(value) != 1 and not modular:
            _check_bits((abs(self._low) + self.span()) * _height(value))
        total = reduce(lambda sum_, c: sum_ * value + c, reversed(self.coefficients), 0 * value)
        if modular and isinstance(value, int):
            return total * pow(value, self._low, int(base.name)) % int(base.name)
        if self._low >= 0 or not isinstance(value, int):
            return total * value**self._low
        divisor = value**-self._low
        return total * divisor if abs(value) == 1 else Fraction(total) / divisor

    # Divisibility and units

    def gcd(self, other: LaurentPolynomial | Scalar) -> LaurentPolynomial:
        """The greatest common divisor in normal form, content included over Z.

        Examples
        --------
        >>> LaurentPolynomial.parse("6t^2 - 6").gcd(LaurentPolynomial.parse("4t^-1 + 4"))
        LaurentPolynomial('2 + 2t')
        """
        return _made(0, self._poly.gcd(self._given(other)._poly), self._ring)

    def bezout(
        self, other: LaurentPolynomial | Scalar
    ) -> tuple[LaurentPolynomial, LaurentPolynomial, LaurentPolynomial]:
        """Over a field: the gcd d in normal form, and s, u with ``s * self + u * other == d``.

        Raises
        ------
        AlgebraError
            Over Z.

        Examples
        --------
        >>> f, g = (LaurentPolynomial.parse(text, "Q") for text in ("t - 1", "1 - t + t^2"))
        >>> print(*f.bezout(g))
        1 -t 1
        """
        if not self._ring.is_field:
            raise AlgebraError("Z[t,1/t] has no Bezout identity", accepted="change_ring('Q')")
        given = self._given(other)
        divisor, s, u = self._poly.xgcd(given._poly)
        base = self._ring
        return (
            _made(0, divisor, base),
            _trimmed(-self._low, s, base),
            _trimmed(-given._low, u, base),
        )

    def is_unit(self) -> bool:
        """Whether it has an inverse: +-t^k over Z, c t^k with c nonzero over a field."""
        poly = self._poly
        return len(poly) == 1 and self._ring.is_unit(poly[0])

    def unit_to(self, other: LaurentPolynomial) -> LaurentPolynomial | None:
        """The unit u with ``other == u * self``, or None.

        Examples
        --------
        >>> f = LaurentPolynomial.parse("1 - 3t + t^2")
        >>> print(f.unit_to(LaurentPolynomial.parse("-t^-1 + 3 - t")))
        -t^-1
        >>> f.unit_to(2 * f) is None
        True
        """
        other = self._given(other)
        mine, theirs, base = self._poly, other._poly, self._ring
        if not mine or not theirs:
            return _made(0, base.one, base) if not mine and not theirs else None
        quotient, remainder = divmod(theirs, mine)
        if remainder or len(quotient) != 1 or not base.is_unit(quotient[0]):
            return None
        return _made(other._low - self._low, quotient, base)

    def normal_form(self) -> LaurentPolynomial:
        """The associate with lowest exponent 0 and leading coefficient positive (Z) or 1 (fields).

        Examples
        --------
        >>> LaurentPolynomial.parse("3t^-1 - 2").normal_form()
        LaurentPolynomial('-3 + 2t')
        """
        return _made(0, self._ring.normal(self._poly), self._ring)

    def content(self) -> Scalar:
        """The positive number c with self / c primitive with integer coefficients; 1 over F_p; 0 for zero.

        Examples
        --------
        >>> LaurentPolynomial.parse("6 - 4t").content()
        2
        """
        if not self:
            return 0
        if self.over == "Z":
            return integer_gcd(*self.coefficients)
        if self.over == "Q":
            numbers = self.coefficients
            return Fraction(
                integer_gcd(*(c.numerator for c in numbers)), lcm(*(c.denominator for c in numbers))
            )
        return 1

    def conjugate(self) -> LaurentPolynomial:
        """Its image under t -> 1/t.

        Examples
        --------
        >>> LaurentPolynomial.parse("2 - t^3").conjugate()
        LaurentPolynomial('-t^-3 + 2')
        """
        poly = self._ring.polynomial(self._ring.numbers(self._poly)[::-1])
        return _made(-self.highest, poly, self._ring)

    def change_ring(self, over: RingName) -> LaurentPolynomial:
        """The same polynomial with coefficients in another ring, where they have an image.

        Raises
        ------
        AlgebraError
            From Q to Z if a coefficient is no integer, to F_p if p divides a denominator, from F_p always.
        """
        base = ring(over)
        if base is self._ring:
            return self
        if self._ring.name == "Z":
            return _trimmed(self._low, base.from_integers(self._poly), base)
        if self.over != "Q":
            raise AlgebraError(
                f"there is no map from {self._ring.text} to {base.text}",
                accepted="change the ring of the polynomial over Z that it came from",
            )
        return LaurentPolynomial(self.coefficients, self._low, over)

    def symmetric_form(self) -> LaurentPolynomial:
        """The associate f over Z with f(t) = f(1/t) and f(1) = 1, as the polynomial of a knot has one.

        Raises
        ------
        AlgebraError
            If there is none.

        Examples
        --------
        >>> LaurentPolynomial.parse("-2t + 5t^2 - 2t^3").symmetric_form()
        LaurentPolynomial('-2t^-1 + 5 - 2t')
        """
        if self.over != "Z":
            raise AlgebraError("only polynomials over Z are made symmetric", accepted="over='Z'")
        numbers = self.coefficients
        value = sum(numbers)
        if abs(value) != 1 or numbers != numbers[::-1]:
            reason = (
                f"its value at 1 is {integer_text(value)}"
                if abs(value) != 1
                else "its coefficients are no palindrome"
            )
            raise AlgebraError(
                f"{self} has no symmetric form: {reason}",
                accepted="palindromic coefficients with sum 1 or -1",
            )
        return _made(-(len(numbers) // 2), self._poly * value, self._ring)

    # Out into the world

    def text(self, style: Style = "plain") -> str:
        """Print it as "plain", "unicode" or "latex", lowest exponent first."""
        return polynomial_text(self.terms(), style)

    def latex(self) -> str:
        """Its LaTeX, without dollar signs."""
        return self.text("latex")

    def __str__(self) -> str:
        return self.text()

    def __repr__(self) -> str:
        over = "" if self.over == "Z" else f", over={self.over!r}"
        return f"LaurentPolynomial({str(self)!r}{over})"

    def _repr_latex_(self) -> str:
        return f"${self.latex()}$"

    def _sympy_(self) -> Any:
        import sympy

        t = sympy.Symbol("t")
        terms = (sympy.Rational(c.numerator, c.denominator) * t**k for k, c in self.terms().items())
        return sympy.Add(*terms)

    def to_data(self) -> dict[str, Any]:
        """``{"lowest", "coefficients", "over"}``; fractions are strings "p/q"."""
        numbers = self.coefficients
        if self.over == "Q":
            numbers = tuple(c.numerator if c.denominator == 1 else number_text(c) for c in numbers)
        return {"lowest": self._low, "coefficients": list(numbers), "over": self.over}

    @classmethod
    def from_data(cls, data: Any) -> LaurentPolynomial:
        """Read `to_data` back; the first and last coefficient must not be 0."""
        over = data.get("over", "Z")
        numbers = [_number_from_data(c, over) for c in data["coefficients"]]
        f = cls(numbers, integer_from_data(data["lowest"]), over)
        if len(f.coefficients) != len(numbers) or f._low != data["lowest"]:
            raise AlgebraError(
                "the polynomial is not trimmed", accepted="nonzero first and last coefficients"
            )
        return f


def _number_from_data(value: object, over: RingName) -> Scalar:
    if not isinstance(value, str):
        return integer_from_data(value)
    fraction = Fraction(value)
    if over != "Q" or fraction.denominator == 1 or number_text(fraction) != value:
        accepted = 'an integer, or over "Q" a text such as "-1/2" in lowest terms'
        raise AlgebraError(f"the coefficient {value!r} is not in its one form", accepted=accepted)
    return fraction


def integer_from_data(value: object) -> int:
    """An integer of JSON data; floats and truth values are none."""
    if type(value) is not int:
        raise AlgebraError(f"{value!r} is no integer", accepted="an integer")
    return value


_new = LaurentPolynomial.__new__


def _made(low: int, poly: FlintPolynomial, base: Ring) -> LaurentPolynomial:
    # Trusted: poly is trimmed, belongs to base and is never changed afterwards.
    f = _new(LaurentPolynomial)
    f._low = low
    f._poly = poly
    f._ring = base
    return f


def _trimmed(low: int, poly: FlintPolynomial, base: Ring) -> LaurentPolynomial:
    if not poly:
        low = 0
    elif not poly[0]:
        shift = 1
        while not poly[shift]:
            shift += 1
        poly = poly.right_shift(shift)
        low += shift
    f = _new(LaurentPolynomial)
    f._low = low
    f._poly = poly
    f._ring = base
    return f


def _check_span(span: int) -> None:
    if span > MAX_SPAN:
        raise LimitError(
            f"exponents {integer_text(span)} apart in one polynomial", accepted=f"at most {MAX_SPAN}"
        )


def _height(value: Scalar) -> int:
    return max(value.numerator.bit_length(), value.denominator.bit_length())


def _check_bits(bits: int) -> None:
    if bits > MAX_BITS:
        raise LimitError(
            f"the result may have {integer_text(bits)} bits", accepted=f"results of at most {MAX_BITS} bits"
        )


def _unit_text(base: Ring) -> str:
    return "c t^k with c nonzero" if base.is_field else "+t^k or -t^k"


def subtract_product(f: LaurentPolynomial, a: LaurentPolynomial, b: LaurentPolynomial) -> LaurentPolynomial:
    """``f - a * b`` for polynomials of one ring, in one step and unchecked: the inner loop of eliminations.

    Examples
    --------
    >>> t = LaurentPolynomial.monomial(1)
    >>> subtract_product(t, t, t)
    LaurentPolynomial('t - t^2')
    """
    product = a._poly * b._poly
    if not product:
        return f
    low = a._low + b._low
    mine = f._poly
    if not mine:
        return _made(low, -product, f._ring)
    shift = low - f._low
    if shift == 0:
        poly = mine - product
    elif shift > 0:
        if shift > MAX_SPAN:
            _check_span(shift)
        low = f._low
        poly = mine - product.left_shift(shift)
    else:
        if shift < -MAX_SPAN:
            _check_span(-shift)
        poly = mine.left_shift(-shift) - product
    return _trimmed(low, poly, f._ring)


def gcd_of(polynomials: Iterable[LaurentPolynomial], over: RingName = "Z") -> LaurentPolynomial:
    """The greatest common divisor of any number of polynomials, in normal form; 0 of none.

    Examples
    --------
    >>> gcd_of([LaurentPolynomial([2, 2]), LaurentPolynomial([1, 0, -1])])
    LaurentPolynomial('1 + t')
    """
    result = LaurentPolynomial((), 0, over)
    for f in polynomials:
        result = result.gcd(f)
        if result == 1:
            break
    return result
