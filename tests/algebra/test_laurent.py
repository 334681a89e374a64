"""Laurent polynomials against naive dictionary arithmetic, ring laws, and every way in and out."""

from __future__ import annotations

import copy
import pickle
from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.algebra.laurent import MAX_SPAN, LaurentPolynomial, gcd_of, subtract_product
from kt_widgets.errors import AlgebraError, LimitError, ParseError
from kt_widgets.text.portable import read

RINGS = ("Z", "Q", 2, 7)


def numbers(over):
    integers = st.integers(-20, 20)
    return st.fractions(-5, 5, max_denominator=6) if over == "Q" else integers


def polynomials(over):
    return st.builds(
        lambda coefficients, lowest: LaurentPolynomial(coefficients, lowest, over),
        st.lists(numbers(over), max_size=5),
        st.integers(-4, 4),
    )


def over_one_ring(count):
    return st.sampled_from(RINGS).flatmap(lambda over: st.tuples(*[polynomials(over)] * count))


def trimmed(f):
    return bool(f.coefficients[0] and f.coefficients[-1]) if f else f.lowest == 0


def naive(over, *products):
    """The sum of the products of pairs of polynomials, by their terms."""
    total = {}
    for f, g in products:
        for i, a in f.terms().items():
            for j, b in g.terms().items():
                total[i + j] = total.get(i + j, 0) + a * b
    if isinstance(over, int):
        total = {k: c % over for k, c in total.items()}
    return {k: c for k, c in total.items() if c}


@given(over_one_ring(3))
@settings(deadline=None)
def test_arithmetic_is_that_of_terms(fgh):
    f, g, h = fgh
    over, one = f.over, LaurentPolynomial.constant(1, f.over)
    assert all(map(trimmed, (f * g, f + g, f - g, subtract_product(f, g, h), f.conjugate())))
    assert (f * g).terms() == naive(over, (f, g))
    assert (f + g).terms() == naive(over, (f, one), (g, one))
    assert (f - g).terms() == naive(over, (f, one), (g, -one))
    assert subtract_product(f, g, h).terms() == naive(over, (f, one), (-g, h))


@given(over_one_ring(3))
@settings(deadline=None)
def test_ring_laws(fgh):
    f, g, h = fgh
    assert f * (g + h) == f * g + f * h
    assert (f * g) * h == f * (g * h)
    assert f + g == g + f
    assert f * g == g * f
    assert f - f == 0
    assert f**3 == f * f * f
    assert f**0 == 1
    assert (f * g).conjugate() == f.conjugate() * g.conjugate()


@given(over_one_ring(1))
@settings(deadline=None)
def test_invariants_and_ways_in_and_out(one):
    (f,) = one
    assert len(f.coefficients) == (f.highest - f.lowest + 1 if f else 0)
    assert trimmed(f)
    assert LaurentPolynomial.parse(str(f), f.over) == f
    assert LaurentPolynomial.parse(f.latex(), f.over) == f
    assert LaurentPolynomial.parse(f.text("unicode"), f.over) == f
    assert LaurentPolynomial.from_terms(f.terms(), f.over) == f
    assert read(f.to_json()) == f
    for same in (pickle.loads(pickle.dumps(f)), copy.deepcopy(f), eval(repr(f))):
        assert same == f
        assert hash(same) == hash(f)
    assert [f.coefficient(k) for k in range(-10, 15)] == [f.terms().get(k, 0) for k in range(-10, 15)]


@given(over_one_ring(2))
@settings(deadline=None)
def test_division(fg):
    f, g = fg
    if not g:
        with pytest.raises(AlgebraError, match="division by 0"):
            f.exact_division(g)
        return
    assert (f * g).exact_division(g) == f
    assert g.divides(f * g)
    if f.over != "Z":
        quotient, remainder = divmod(f, g)
        assert f == quotient * g + remainder
        assert trimmed(quotient)
        assert trimmed(remainder)
        assert not remainder or remainder.span() < g.span()
        d, s, u = f.bezout(g)
        assert all(map(trimmed, (d, s, u)))
        assert s * f + u * g == d == f.gcd(g)


@given(over_one_ring(3))
@settings(deadline=None)
def test_gcd(fgh):
    f, g, h = fgh
    d = f.gcd(g)
    assert d == d.normal_form() == g.gcd(f)
    assert not d or (d.divides(f) and d.divides(g))
    assert d or (not f and not g)
    assert (f * h).gcd(g * h) == (d * h).normal_form()
    assert gcd_of([f, g, h], f.over) == d.gcd(h)


@given(over_one_ring(1), st.integers(-3, 3), st.sampled_from([1, -1, 2]))
@settings(deadline=None)
def test_units(one, exponent, coefficient):
    (f,) = one
    u = LaurentPolynomial.monomial(exponent, coefficient, f.over)
    if u.is_unit():
        assert u * u.inverse() == 1
        assert u**-2 * u * u == 1
        assert f.normal_form() == (u * f).normal_form()
        found = f.unit_to(u * f)
        assert found is not None
        assert found * f == u * f
        assert found.is_unit()
    elif f and u:
        assert f.unit_to(u * f) is None
    assert f.is_unit() == (len(f.terms()) == 1 and (f.over != "Z" or abs(f.coefficients[0]) == 1))


@given(over_one_ring(2), st.integers(-4, 4))
@settings(deadline=None)
def test_values_are_homomorphisms(fg, value):
    f, g = fg
    if (min(f.lowest, g.lowest) < 0) and (value == 0 or (isinstance(f.over, int) and value % f.over == 0)):
        return
    modulus = f.over if isinstance(f.over, int) else None
    product, total = f(value) * g(value), f(value) + g(value)
    if modulus:
        product, total = product % modulus, total % modulus
    assert (f * g)(value) == product
    assert (f + g)(value) == total


def test_values_of_every_kind():
    f = LaurentPolynomial.parse("t^-1 - 3 + t")
    assert f(1) == -1
    assert isinstance(f(1), int)
    assert f(Fraction(1, 2)) == Fraction(-1, 2)
    assert f(1j) == pytest.approx(-3)
    t = LaurentPolynomial.monomial(1)
    assert f(t * t) == LaurentPolynomial.parse("t^-2 - 3 + t^2")
    assert f.change_ring(5)(2) == (3 - 3 + 2) % 5
    with pytest.raises(AlgebraError, match="pole at 0"):
        f(0)
    with pytest.raises(AlgebraError, match="pole at 0"):
        f.change_ring(5)(10)


@given(polynomials("Q"))
@settings(deadline=None)
def test_content(f):
    c = f.content()
    if not f:
        assert c == 0
    else:
        primitive = f.exact_division(c).change_ring("Z")
        assert c > 0
        assert primitive.content() == 1


@given(st.lists(st.integers(-9, 9), max_size=9), st.lists(st.integers(-9, 9), max_size=4), st.integers(1, 9))
@settings(deadline=None)
def test_floor_quotient_leaves_small_coefficients(f, g, leading):
    f, g = LaurentPolynomial(f), LaurentPolynomial([1, *g, leading])
    rest = f - f.floor_quotient(g) * g
    assert all(0 <= rest.coefficient(k) < leading for k in range(g.highest, 12))


def test_trimming_and_zero():
    assert LaurentPolynomial([0, 0, 3, 0], -1) == LaurentPolynomial.monomial(1, 3)
    zero = LaurentPolynomial([0, 0], 5)
    assert (zero.lowest, zero.highest, zero.coefficients, zero.span(), bool(zero)) == (0, 0, (), 0, False)
    assert LaurentPolynomial([5, 10], 3, 5) == LaurentPolynomial((), 0, 5)


def test_equality_with_numbers_agrees_with_hashes():
    for over in RINGS:
        one = LaurentPolynomial.constant(1, over)
        assert one == 1
        assert hash(one) == hash(1)
    assert LaurentPolynomial([1]) != LaurentPolynomial([1], 0, "Q")
    assert LaurentPolynomial([1], 1) != 1
    assert LaurentPolynomial([Fraction(1, 2)], 0, "Q") == Fraction(1, 2)
    assert {LaurentPolynomial([2]): "two"}[2] == "two"


def test_symmetric_form():
    assert str(LaurentPolynomial.parse("t^3 - 3t^4 + t^5").symmetric_form()) == "-t^-1 + 3 - t"
    for text, reason in (
        ("1 + t", "its value at 1 is 2"),
        ("1 - t - t^3", "palindrome"),
        ("2 - t", "palindrome"),
    ):
        with pytest.raises(AlgebraError, match=reason):
            LaurentPolynomial.parse(text).symmetric_form()


def test_change_of_rings():
    f = LaurentPolynomial.parse("1/2 - 2t", "Q")
    assert f.change_ring(3) == LaurentPolynomial([2, 1], 0, 3)
    for over in ("Z", 2):
        with pytest.raises(AlgebraError):
            f.change_ring(over)
    with pytest.raises(AlgebraError, match="no map"):
        LaurentPolynomial([1], 0, 5).change_ring("Z")


@pytest.mark.parametrize("over", [1, 0, -3, 4, 6, 2**31, 2**31 + 11, True, "R", 2.0, None])
def test_other_rings_are_refused(over):
    with pytest.raises(AlgebraError, match="ring"):
        LaurentPolynomial([1], 0, over)


def test_composite_moduli_are_refused_with_a_factor():
    with pytest.raises(AlgebraError, match=r"91 = 7 \* 13"):
        LaurentPolynomial([1], 0, 91)


def test_rings_do_not_mix():
    f, g = LaurentPolynomial([1, 1]), LaurentPolynomial([1, 1], 0, 5)
    for operation in (lambda: f + g, lambda: f * g, lambda: f - g, lambda: f.gcd(g), lambda: f.divides(g)):
        with pytest.raises(AlgebraError, match="change_ring"):
            operation()
    with pytest.raises(AlgebraError, match="Q"):
        f * Fraction(1, 2)


@pytest.mark.parametrize("other", ["t", 1.5, None, [1]])
def test_other_operands_are_refused(other):
    f = LaurentPolynomial([1, 1])
    for operation in (lambda: f + other, lambda: f - other, lambda: other * f):
        with pytest.raises(TypeError):
            operation()
    with pytest.raises(AlgebraError, match="no polynomial"):
        f.gcd(other)


def test_bad_input_is_refused_with_the_reason():
    with pytest.raises(AlgebraError, match="no coefficient"):
        LaurentPolynomial([1.5])
    with pytest.raises(ParseError):
        LaurentPolynomial("t +")
    with pytest.raises(ParseError, match="column 5"):
        LaurentPolynomial.parse("1 + x")
    with pytest.raises(AlgebraError, match="remainder"):
        divmod(LaurentPolynomial([1, 1]), LaurentPolynomial([2]))
    with pytest.raises(AlgebraError, match="Bezout"):
        LaurentPolynomial([1, 1]).bezout(2)
    with pytest.raises(AlgebraError, match="does not divide"):
        LaurentPolynomial([1, 1]).exact_division(LaurentPolynomial([2]))
    with pytest.raises(AlgebraError, match="units"):
        LaurentPolynomial([2]) ** -1
    for data in ({"lowest": 0, "coefficients": [0, 1]}, {"lowest": 1, "coefficients": []}):
        with pytest.raises(AlgebraError, match="trimmed"):
            LaurentPolynomial.from_data(data)


def test_limits_are_enforced_at_once():
    t = LaurentPolynomial.monomial(1)
    with pytest.raises(LimitError):
        t ** (MAX_SPAN + 1) + 1
    with pytest.raises(LimitError):
        LaurentPolynomial.from_terms({0: 1, MAX_SPAN + 1: 1})
    with pytest.raises(LimitError):
        (1 + t) ** 10**8
    with pytest.raises(LimitError):
        (t**10**12)(3)
    assert (t**10**12)(-1) == 1


def test_sympy_agrees():
    sympy = pytest.importorskip("sympy")
    f = LaurentPolynomial.parse("1/2 t^-2 - 3 + t", "Q")
    t = sympy.Symbol("t")
    assert sympy.expand(f._sympy_() - (t**-2 / 2 - 3 + t)) == 0
    assert sympy.expand(sympy.sympify(f) ** 2 - sympy.sympify(f * f)) == 0


def test_numbers_longer_than_python_prints_are_printed():
    # Python refuses str() of integers with more than 4300 digits.
    f = LaurentPolynomial([Fraction(10**5000, 3), -(10**9000)], over="Q")
    digits = "1" + "0" * 5000
    assert str(f) == f"{digits}/3 - 1{'0' * 9000}t"
    assert digits in f.latex()
    assert digits in repr(f)
    assert f.to_data()["coefficients"][0] == f"{digits}/3"
    with pytest.raises(LimitError, match="4300 digits"):
        f.to_json()
    with pytest.raises(AlgebraError, match=f"^{digits} is no prime below"):
        LaurentPolynomial([1], over=10**5000)


def test_a_refused_coefficient_has_its_place():
    with pytest.raises(AlgebraError, match=r"^3/4 is no coefficient of Z\[t,1/t\]") as refused:
        LaurentPolynomial.parse("t^-1 + 3/4 t^2")
    assert refused.value.where == "the coefficient of t^2"


def test_exponents_that_are_none_are_refused():
    with pytest.raises(AlgebraError, match=r"the lowest exponent is 1\.5"):
        LaurentPolynomial([1], 1.5)
    with pytest.raises(LimitError, match="the power 1000"):
        LaurentPolynomial.monomial(1) ** 10**5000
    with pytest.raises(LimitError, match="exponents 1000"):
        LaurentPolynomial.monomial(10**5000) + 1
