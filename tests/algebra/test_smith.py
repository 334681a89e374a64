"""Smith forms over fields: certificates, divisibility, known invariant factors, sympy, and tampering."""

from __future__ import annotations

import copy
from fractions import Fraction
from itertools import pairwise

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.algebra.diagonal import Core
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.smith import SmithForm, invariant_factors, smith_form
from kt_widgets.errors import AlgebraError, CertificateError, KtError
from kt_widgets.text.portable import read

FIELDS = ("Q", 2, 3, 7)


def polynomials(over):
    return st.builds(
        LaurentPolynomial, st.lists(st.integers(-3, 3), max_size=3), st.integers(-1, 1), st.just(over)
    )


@st.composite
def matrices(draw, most=4):
    over = draw(st.sampled_from(FIELDS))
    shape = draw(st.tuples(st.integers(0, most), st.integers(0, most)))
    row = st.lists(polynomials(over), min_size=shape[1], max_size=shape[1])
    return LaurentMatrix(draw(st.lists(row, min_size=shape[0], max_size=shape[0])), over, shape)


@st.composite
def disguised(draw):
    """A diagonal matrix with repeated factors, and the same after random operations on rows and columns."""
    over = draw(st.sampled_from(FIELDS))
    rows, columns = draw(st.integers(1, 4)), draw(st.integers(1, 4))
    texts = st.sampled_from(["0", "1", "t - 2", "1 + t", "1 - t + t^2", "1 + 2t + t^2", "2 - 5t + 2t^2"])
    diagonal = [LaurentPolynomial.parse(draw(texts), over) for _ in range(min(rows, columns))]
    plain = LaurentMatrix.from_entries({(i, i): f for i, f in enumerate(diagonal)}, (rows, columns), over)
    return plain, invertible(draw, rows, over) @ plain @ invertible(draw, columns, over)


def invertible(draw, size, over):
    result = LaurentMatrix.identity(size, over)
    for _ in range(draw(st.integers(0, 4)) if size > 1 else 0):
        i, j = draw(st.lists(st.integers(0, size - 1), min_size=2, max_size=2, unique=True))
        f = draw(polynomials(over))
        step = LaurentMatrix.from_entries({(i, j): f, **{(k, k): 1 for k in range(size)}}, (size, size), over)
        result = result @ step
    return result


@given(st.one_of(matrices(), disguised().map(lambda pair: pair[1])))
@settings(deadline=None)
def test_the_certificate_holds(a):
    s = smith_form(a)
    assert s.verify()
    assert s.U @ a @ s.V == s.D
    assert s.U_inverse @ s.U == LaurentMatrix.identity(a.shape[0], a.over)
    assert s.U.determinant().is_unit()
    assert s.V.determinant().is_unit()
    assert all(i == j for i, j, _ in s.D.entries())
    for d, e in pairwise(s.diagonal):
        assert d.divides(e)
    assert all(d == d.normal_form() for d in s.diagonal)
    assert s.diagonal == invariant_factors(a)
    assert a.rank() == sum(map(bool, s.diagonal))
    assert read(s.to_json()) == s


@given(matrices(most=3))
@settings(deadline=None)
def test_euclid_finds_the_same_factors(a):
    core = Core(a)
    core.compress()
    zeros = min(a.shape) - len(core.rows)
    factors = core.euclid()
    assert (*factors, *[LaurentPolynomial((), 0, a.over)] * zeros) == invariant_factors(a)
    entries = {(i, i): f for i, f in enumerate(factors)}
    assert core.transforms().verify(a, LaurentMatrix.from_entries(entries, a.shape, a.over))


@given(disguised())
@settings(deadline=None)
def test_operations_do_not_change_the_factors(pair):
    plain, mixed = pair
    assert invariant_factors(plain) == invariant_factors(mixed)
    # Of a diagonal matrix they come from gcds and lcms alone.
    entries = [plain[i, i].normal_form() for i in range(min(plain.shape))]
    for i in range(len(entries)):
        for j in range(i + 1, len(entries)):
            d = entries[i].gcd(entries[j])
            product = entries[i] * entries[j]
            entries[i], entries[j] = d, product.exact_division(d).normal_form() if d else d
    assert invariant_factors(mixed) == tuple(entries)


@given(
    st.integers(1, 3).flatmap(
        lambda n: st.lists(
            st.lists(st.lists(st.integers(-2, 2), min_size=2, max_size=2), min_size=n, max_size=n),
            min_size=n,
            max_size=n,
        )
    )
)
@settings(deadline=None, max_examples=25)
def test_sympy_agrees(grid):
    sympy = pytest.importorskip("sympy")
    from sympy.matrices.normalforms import smith_normal_form

    t = sympy.Symbol("t")
    domain = sympy.QQ[t]
    theirs = smith_normal_form(sympy.Matrix([[a + b * t for a, b in row] for row in grid]), domain=domain)
    # Powers of t are units here but not there.
    expected = []
    for i in range(len(grid)):
        poly = sympy.Poly(theirs[i, i], t, domain="QQ")
        coefficients = [Fraction(int(c.p), int(c.q)) for c in reversed(poly.all_coeffs())]
        expected.append(LaurentPolynomial(coefficients, 0, "Q").normal_form())
    a = LaurentMatrix([[LaurentPolynomial(pair, 0, "Q") for pair in row] for row in grid], "Q")
    assert invariant_factors(a) == tuple(expected)


@pytest.mark.parametrize("over", FIELDS)
@pytest.mark.parametrize("shape", [(0, 0), (0, 3), (3, 0), (2, 3), (3, 2)])
def test_zero_and_empty_matrices(over, shape):
    s = smith_form(LaurentMatrix.zero(*shape, over))
    assert s.verify()
    assert s.diagonal == (LaurentPolynomial((), 0, over),) * min(shape)


def test_cores_that_are_not_cyclic():
    p, q = "1 - t + t^2", "1 - 3t + t^2"
    for diagonal, expected in (
        ([p, p, p], [p, p, p]),
        ([p, q, f"({p})({q})"], ["1", f"({p})({q})", f"({p})({q})"]),
        ([p, f"({p})^2", q, q], ["1", "1", f"({p})({q})", f"({p})^2({q})"]),
    ):
        n = len(diagonal)
        lower = {(i, j): "1 + t" for i in range(n) for j in range(i)}
        ones = {(i, i): 1 for i in range(n)}
        mixer = LaurentMatrix.from_entries({**lower, **ones}, (n, n), "Q")
        d = LaurentMatrix.from_entries({(i, i): f for i, f in enumerate(diagonal)}, (n, n), "Q")
        a = mixer @ d @ mixer.transpose()
        assert invariant_factors(a) == tuple(LaurentPolynomial.parse(f, "Q") for f in expected)
        assert smith_form(a).verify()


def test_cyclic_cores_where_no_cofactor_serves():
    # The cokernel is cyclic, but no single cofactor is prime to the determinant.
    a = LaurentMatrix([["1 + t", 0], [0, "1 + t + t^2"]], over=2)
    s = smith_form(a)
    assert s.verify()
    assert [str(d) for d in s.diagonal] == ["1", "1 + t^3"]


def test_integers_are_refused_with_the_way_out():
    for function in (smith_form, invariant_factors):
        with pytest.raises(AlgebraError, match=r"principal ideal domain.*change_ring"):
            function(LaurentMatrix([[2]]))


def numbers_in(data, path=()):
    """The paths of all integers and fractions in nested data."""
    if isinstance(data, dict):
        for key, value in data.items():
            yield from numbers_in(value, (*path, key))
    elif isinstance(data, list):
        for i, value in enumerate(data):
            yield from numbers_in(value, (*path, i))
    elif isinstance(data, int) or (isinstance(data, str) and "over" not in path):
        yield path


def changed_at(data, path):
    data = copy.deepcopy(data)
    *front, last = path
    spot = data
    for key in front:
        spot = spot[key]
    spot[last] = spot[last] + 1 if isinstance(spot[last], int) else str(Fraction(spot[last]) + 1)
    return data


def test_any_changed_number_is_rejected():
    a = LaurentMatrix([["1 - t", "t", "3"], ["2", "1 - t", "t + 5"], ["t^2", "7", "2 - t"]], over="Q")
    s = smith_form(a)
    paths = list(numbers_in(s.to_data()))
    assert len(paths) > 100
    for path in paths:
        with pytest.raises(KtError):
            SmithForm.from_data(changed_at(s.to_data(), path)).verify()


@given(disguised(), st.data())
@settings(deadline=None)
def test_any_changed_entry_is_named(pair, data):
    s = smith_form(pair[1])
    name = data.draw(st.sampled_from(["matrix", "D", "U", "U_inverse", "V", "V_inverse"]))
    m = getattr(s, name)
    i = data.draw(st.integers(0, m.shape[0] - 1))
    j = data.draw(st.integers(0, m.shape[1] - 1))
    f = data.draw(polynomials(m.over).filter(bool))
    values = {n: getattr(s, n) for n in ("matrix", "D", "U", "U_inverse", "V", "V_inverse")}
    values[name] = m + LaurentMatrix.from_entries({(i, j): f}, m.shape, m.over)
    with pytest.raises(CertificateError, match=r"at entry \(\d+, \d+\) of "):
        SmithForm(**values).verify()


def test_forms_that_are_no_smith_forms_are_rejected():
    one, two = LaurentMatrix.identity(1, "Q"), LaurentMatrix.identity(2, "Q")

    def claimed(d):
        return SmithForm(d, d, *([one] * 4 if d.shape == (1, 1) else [two] * 4))

    for rows, reason in (
        ([["2"]], "not monic"),
        ([["t"]], "not monic"),
        ([["t - 1", 0], [0, "1"]], "does not divide"),
        ([[0, 0], [0, 1]], "does not divide"),
        ([[0, 1], [0, 0]], "off the diagonal"),
    ):
        with pytest.raises(CertificateError, match=reason):
            claimed(LaurentMatrix(rows, "Q")).verify()
    over_z = LaurentMatrix([[2]])
    with pytest.raises(CertificateError, match="no Smith form"):
        SmithForm(over_z, over_z, *[LaurentMatrix.identity(1)] * 4).verify()
    wide = LaurentMatrix([[1, 0]], "Q")
    with pytest.raises(CertificateError, match="square"):
        SmithForm(wide @ wide.transpose(), wide @ wide.transpose(), wide, wide.transpose(), one, one).verify()
    with pytest.raises(CertificateError):
        SmithForm(two, two, one, one, two, two).verify()
