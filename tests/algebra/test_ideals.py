"""Ideals of Z[t,1/t]: canonical bases, membership, sizes of quotients by resultants, and certificates."""

from __future__ import annotations

import copy
import json
import pickle
from functools import reduce
from itertools import combinations, pairwise
from math import gcd
from pathlib import Path

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from kt_widgets.algebra.fitting import (
    FittingCertificate,
    fitting_certificate,
    fitting_divisor,
    fitting_ideal,
)
from kt_widgets.algebra.flint_rings import hermite_rows, integer_kernel, integer_solution
from kt_widgets.algebra.ideals import MAX_IDEAL_SPAN, Ideal, IdealCertificate
from kt_widgets.algebra.laurent import LaurentPolynomial, gcd_of
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.errors import AlgebraError, CertificateError, KtError, LimitError, ParseError
from kt_widgets.text.portable import read

polynomials = st.builds(LaurentPolynomial, st.lists(st.integers(-6, 6), max_size=5), st.integers(-2, 2))
generators = st.lists(polynomials, max_size=6)
units = st.builds(LaurentPolynomial.monomial, st.integers(-3, 3), st.sampled_from([1, -1]))

RECORDS = json.loads((Path(__file__).parents[1] / "published/data/alexander_ideals.json").read_text())[
    "records"
]


@given(generators)
@settings(deadline=None)
def test_the_basis_is_canonical(gens):
    basis = Ideal(gens).basis
    degrees = [f.highest for f in basis]
    leading = [f.coefficients[-1] for f in basis]
    assert all(f.lowest == 0 for f in basis)
    assert degrees == sorted(set(degrees))
    assert all(a > b > 0 and a % b == 0 for a, b in pairwise(leading))
    assert all(c > 0 for c in leading)
    for i, f in enumerate(basis):
        for exponent in range(degrees[0], f.highest):
            reducer = max(k for k in range(i + 1) if degrees[k] <= exponent)
            assert 0 <= f.coefficient(exponent) < leading[reducer]
    assert Ideal(basis).basis == basis


@given(generators, st.randoms(use_true_random=False), st.data())
@settings(deadline=None)
def test_the_basis_depends_on_the_ideal_only(gens, random, data):
    ideal = Ideal(gens)
    shuffled = list(gens)
    random.shuffle(shuffled)
    assert Ideal([data.draw(units) * f for f in shuffled]) == ideal
    if len(gens) > 1:
        f = data.draw(polynomials)
        assert Ideal([gens[0] + f * gens[1], *gens[1:]]) == ideal
        assert Ideal([*gens, f * gens[0] - gens[1]]) == ideal
    assert hash(Ideal(shuffled)) == hash(ideal)


@given(generators, st.data())
@settings(deadline=None)
def test_membership(gens, data):
    ideal = Ideal(gens)
    member = sum((data.draw(polynomials) * f for f in gens), LaurentPolynomial())
    assert member in ideal
    cofactors = ideal.cofactors(member)
    assert cofactors is not None
    assert sum((q * b for q, b in zip(cofactors, ideal.basis, strict=True)), LaurentPolynomial()) == member
    other = data.draw(polynomials)
    assert (other in ideal) == (Ideal([*gens, other]) == ideal)
    assert (ideal.cofactors(other) is not None) == (other in ideal)


@given(generators)
@settings(deadline=None)
def test_certificates_hold(gens):
    c = Ideal.certificate(gens)
    assert c.verify()
    assert c.ideal == Ideal(gens)
    for f, combination in zip(c.basis, c.basis_cofactors, strict=True):
        assert sum((q * gens[i] for i, q in combination), LaurentPolynomial()) == f
    for f, combination in zip(gens, c.generator_cofactors, strict=True):
        assert sum((q * c.basis[i] for i, q in combination), LaurentPolynomial()) == f
    assert read(c.to_json()) == c


@given(generators)
@settings(deadline=None)
def test_ways_in_and_out(gens):
    ideal = Ideal(gens)
    assert Ideal.parse(str(ideal)) == ideal
    assert Ideal.parse(ideal.latex()) == ideal
    assert read(ideal.to_json()) == ideal
    for same in (pickle.loads(pickle.dumps(ideal)), copy.deepcopy(ideal), eval(repr(ideal))):
        assert same == ideal
        assert hash(same) == hash(ideal)


@given(generators, generators)
@settings(deadline=None)
def test_sums_products_conjugates(f, g):
    a, b = Ideal(f), Ideal(g)
    assert a + b == b + a == Ideal([*f, *g])
    assert a * b == b * a == Ideal([x * y for x in f for y in g])
    assert a * (a + b) == a * a + a * b
    assert all(x in a and x in b for x in (a * b).basis)
    assert a.conjugate().conjugate() == a
    assert (a * b).conjugate() == a.conjugate() * b.conjugate()
    assert a.gcd() == gcd_of(f)


@given(generators, st.sampled_from([2, 3, 5, 7, 11]))
@settings(deadline=None)
def test_reduction_modulo_a_prime(gens, p):
    # Ideals over a field are principal, so this compares with polynomial gcds alone.
    basis = Ideal(gens).basis
    assert gcd_of((f.change_ring(p) for f in basis), p) == gcd_of((f.change_ring(p) for f in gens), p)
    assert gcd_of((f.change_ring("Q") for f in basis), "Q") == gcd_of((f.change_ring("Q") for f in gens), "Q")


@given(st.lists(st.integers(-4, 4), max_size=3), st.lists(st.integers(-4, 4), min_size=1, max_size=4))
@settings(deadline=None)
def test_size_of_the_quotient_is_a_resultant(middle, g):
    """For f = 1 + ... + t^d, Z[t,1/t]/(f) is Z^d, and g acts on it with determinant +-Res(f, g)."""
    sympy = pytest.importorskip("sympy")
    t = sympy.Symbol("t")
    f = [1, *middle, 1]
    resultant = abs(int(sympy.resultant(sympy.Poly(f[::-1], t), sympy.Poly(g[::-1] or [0], t))))
    assume(resultant)
    basis = Ideal([LaurentPolynomial(f), LaurentPolynomial(g)]).basis
    assert basis[0].highest == 0
    assert basis[-1].coefficients[-1] == 1
    size = 1
    for low, high in pairwise(basis):
        size *= low.coefficients[-1] ** (high.highest - low.highest)
    assert size == resultant


def test_known_ideals():
    for given_, printed in (
        ([], "(0)"),
        ([0], "(0)"),
        ([1], "(1)"),
        (["-t^-3"], "(1)"),
        ([2, 3], "(1)"),
        (["2 - t", "1 - 2t"], "(3, 1 + t)"),
        (["6", "4"], "(2)"),
        (["2t", "t^2"], "(1)"),
        (["4", "2 + 2t"], "(4, 2 + 2t)"),
        (["8", "2 + 2t", "t^2 - 1"], "(8, 2 + 2t, 7 + t^2)"),
        (["t^2 - 3t + 1"], "(1 - 3t + t^2)"),
        (["t - 1", "t + 1"], "(2, 1 + t)"),
        (["3t - 3", "t^2 - 1"], "(-3 + 3t, -1 + t^2)"),
    ):
        assert str(Ideal(given_)) == printed
    assert Ideal(["3t - 3", "t^2 - 1"]) == Ideal(["t - 1"]) * Ideal(["3", "t + 1"])
    assert Ideal([]).is_zero()
    assert Ideal([1]).is_unit()
    assert not Ideal([2]).is_unit()


@pytest.mark.parametrize("record", RECORDS, ids=lambda record: record["name"])
def test_published_ideals_are_canonical_and_symmetric(record):
    """The data in tests/published/data/alexander_ideals.json, whose source it names."""
    ideals = [Ideal([LaurentPolynomial(c) for c in basis]) for basis in record["ideals"]]
    for ideal, basis in zip(ideals, record["ideals"], strict=True):
        assert [list(f.coefficients) for f in ideal.basis] == basis
        assert ideal.conjugate() == ideal
        assert Ideal.certificate([t_power(k) * f for k, f in enumerate(ideal.basis)]).verify()
    for small, large in pairwise(ideals):
        assert all(f in large for f in small.basis)
    assert ideals[-1].is_unit()


def t_power(k):
    return LaurentPolynomial.monomial(k)


@st.composite
def matrices(draw):
    rows, columns = draw(st.integers(0, 4)), draw(st.integers(0, 4))
    entry = st.builds(LaurentPolynomial, st.lists(st.integers(-2, 2), max_size=3), st.integers(-1, 1))
    grid = draw(st.lists(st.lists(entry, min_size=columns, max_size=columns), min_size=rows, max_size=rows))
    return LaurentMatrix(grid, "Z", (rows, columns))


@given(matrices(), st.integers(0, 5))
@settings(deadline=None)
def test_fitting_ideals_are_those_of_all_minors(a, k):
    size = a.shape[0] - k
    minors = [
        a.submatrix(rows, columns).determinant()
        for rows in combinations(range(a.shape[0]), max(size, 0))
        for columns in combinations(range(a.shape[1]), max(size, 0))
    ]
    expected = Ideal([1] if size <= 0 else minors)
    assert fitting_ideal(a, k) == expected
    assert fitting_divisor(a, k) == expected.gcd()
    c = fitting_certificate(a, k)
    assert c.verify()
    assert c.ideal == expected
    assert read(c.to_json()) == c
    assert fitting_divisor(a.change_ring("Q"), k) == gcd_of((f.change_ring("Q") for f in expected.basis), "Q")


def test_fitting_ideals_of_ordinary_modules():
    assert [str(fitting_ideal(LaurentMatrix([[2]]), k)) for k in (0, 1)] == ["(2)", "(1)"]
    free = LaurentMatrix([[], []])
    assert [str(fitting_ideal(free, k)) for k in (0, 1, 2)] == ["(0)", "(0)", "(1)"]
    assert str(fitting_ideal(LaurentMatrix([]), 0)) == "(1)"
    with pytest.raises(AlgebraError, match="number -1"):
        fitting_ideal(free, -1)
    with pytest.raises(AlgebraError, match="invariant_factors"):
        fitting_ideal(LaurentMatrix([[2]], "Q"), 0)


def integers_in(data, path=()):
    if isinstance(data, dict):
        for key, value in data.items():
            yield from integers_in(value, (*path, key))
    elif isinstance(data, list):
        for i, value in enumerate(data):
            yield from integers_in(value, (*path, i))
    elif isinstance(data, int):
        yield path


def changed_at(data, path):
    data = copy.deepcopy(data)
    *front, last = path
    spot = data
    for key in front:
        spot = spot[key]
    spot[last] += 1
    return data


@pytest.mark.parametrize("k", [0, 1])
def test_any_changed_number_of_a_fitting_certificate_is_rejected(k):
    # 9_46's matrix in disguise: Fitting ideals (2 - 5t + 2t^2) and (3, 1 + t).
    left = LaurentMatrix([[1, "t", 2], [0, 1, "1 - t"], [0, 0, 1]])
    a = left @ LaurentMatrix([[1, 0, 0], [0, "t - 2", 0], [0, 0, "2t - 1"]]) @ left.transpose()
    c = fitting_certificate(a, k)
    assert str(c.ideal) == ["(2 - 5t + 2t^2)", "(3, 1 + t)"][k]
    paths = list(integers_in(c.to_data()))
    assert len(paths) > 100
    for path in paths:
        with pytest.raises(KtError) as caught:
            FittingCertificate.from_data(changed_at(c.to_data(), path)).verify()
        if isinstance(caught.value, CertificateError):
            assert caught.value.where


def test_any_changed_number_of_an_ideal_certificate_is_rejected():
    c = Ideal.certificate(["6 - 2t", "4t^2 + 3", 0, "t^-1 + 5"])
    for path in integers_in(c.to_data()):
        with pytest.raises(KtError) as caught:
            IdealCertificate.from_data(changed_at(c.to_data(), path)).verify()
        if isinstance(caught.value, CertificateError):
            assert caught.value.where


@given(generators.filter(any), st.data())
@settings(deadline=None)
def test_the_wrong_combination_is_named(gens, data):
    c = Ideal.certificate(gens)
    name = data.draw(st.sampled_from(["generators", "basis"]))
    values = list(getattr(c, name))
    i = data.draw(st.integers(0, len(values) - 1))
    values[i] = values[i] + data.draw(polynomials.filter(bool))
    fields = {f: getattr(c, f) for f in ("generators", "basis", "basis_cofactors", "generator_cofactors")}
    fields[name] = tuple(values)
    with pytest.raises(CertificateError, match=r"at (generators|basis) \d"):
        IdealCertificate(**fields).verify()


def test_certificates_of_other_forms_are_rejected():
    c = Ideal.certificate(["3", "1 + t"])
    one = LaurentPolynomial([1])
    cases = [
        ((*c.basis_cofactors, ()), c.generator_cofactors, "combinations"),
        ((c.basis_cofactors[0][:1] * 2, *c.basis_cofactors[1:]), c.generator_cofactors, "ascending"),
        ((((7, one),), *c.basis_cofactors[1:]), c.generator_cofactors, "out of range"),
        ((((0, one - one),), *c.basis_cofactors[1:]), c.generator_cofactors, "is 0"),
    ]
    for basis_cofactors, generator_cofactors, reason in cases:
        with pytest.raises(CertificateError, match=reason):
            IdealCertificate(c.generators, c.basis, basis_cofactors, generator_cofactors).verify()
    same = (((0, one),), ((1, one),))
    other = tuple(LaurentPolynomial.parse(text) for text in ("3", "4 + t"))
    with pytest.raises(CertificateError, match="not canonical"):
        IdealCertificate(other, other, same, same).verify()


def test_bad_input_is_refused():
    with pytest.raises(AlgebraError, match=r"Ideal\.parse"):
        Ideal("(3, 1 + t)")
    with pytest.raises(AlgebraError, match="not over Z"):
        Ideal([LaurentPolynomial([1], 0, 5)])
    with pytest.raises(ParseError):
        Ideal(["x"])
    with pytest.raises(AlgebraError, match="canonical"):
        Ideal.from_data({"basis": [{"lowest": 0, "coefficients": [-3]}]})
    with pytest.raises(LimitError):
        Ideal([f"t^{MAX_IDEAL_SPAN + 1} - 3", "2t + 1"])
    # Principal ideals have no limit.
    assert Ideal([f"t^{10 * MAX_IDEAL_SPAN} - 3", 0]).gcd().span() == 10 * MAX_IDEAL_SPAN
    with pytest.raises(LimitError, match="minors"):
        fitting_ideal(LaurentMatrix.identity(20) * 2, 10)


small = st.integers(-9, 9)


@given(
    st.integers(0, 4).flatmap(
        lambda n: st.lists(st.lists(small, min_size=n, max_size=n), min_size=1, max_size=3)
    )
)
@settings(deadline=None)
def test_integer_kernels(rows):
    columns = len(rows[0])
    kernel = integer_kernel(rows, columns)
    for x in kernel:
        assert all(sum(a * b for a, b in zip(row, x, strict=True)) == 0 for row in rows)
    sympy = pytest.importorskip("sympy")
    rank = sympy.Matrix(rows).rank() if columns else 0
    assert len(kernel) == columns - rank
    # Primitive: the gcd of the maximal minors of a basis is 1.
    if kernel:
        minors = [
            int(sympy.Matrix(kernel).extract(range(len(kernel)), list(c)).det())
            for c in combinations(range(columns), len(kernel))
        ]
        assert reduce(gcd, minors, 0) == 1


@given(st.lists(st.lists(small, min_size=3, max_size=3), min_size=1, max_size=4), st.data())
@settings(deadline=None)
def test_integer_solutions(rows, data):
    x = data.draw(st.lists(small, min_size=len(rows), max_size=len(rows)))
    target = [sum(c * row[j] for c, row in zip(x, rows, strict=True)) for j in range(3)]
    found = integer_solution(rows, target)
    assert found is not None
    assert [sum(c * row[j] for c, row in zip(found, rows, strict=True)) for j in range(3)] == target
    other = data.draw(st.lists(small, min_size=3, max_size=3))
    assert (integer_solution(rows, other) is not None) == (hermite_rows(rows) == hermite_rows([*rows, other]))


def test_an_integer_among_long_generators():
    # Both ways to a basis give the same: with the Hermite form, and without it where an integer bounds it.
    assert str(Ideal.parse("t^99 + t + 1, 6")) == "(6, 1 + t + t^99)"
    f, g = (LaurentPolynomial.parse(text) for text in ("(1 + 2t - t^3) (t^32 - 5)", "3 - t^30 + 4t^35"))
    assert Ideal([f, g, 81]) == Ideal([f, g, "81 + 81t", "81t^2"])
    assert Ideal([f, 81]) == Ideal([f, 81 + f, 162 - 5 * f])
