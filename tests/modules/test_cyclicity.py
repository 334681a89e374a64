"""Cyclic modules, numbers of generators, annihilators: each verdict with its witness."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.algebra.ideals import Ideal
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.solving import quotient
from kt_widgets.diagrams import Diagram
from kt_widgets.errors import AlgebraError, CertificateError
from kt_widgets.modules.cyclicity import Cyclicity
from kt_widgets.modules.module import Module
from kt_widgets.text.portable import read

DATA = Path(__file__).parent.parent / "published" / "data" / "prime_knots.json"
BY_NAME = {knot["name"]: knot for knot in json.loads(DATA.read_text(encoding="utf-8"))["knots"]}
entry = st.builds(LaurentPolynomial, st.lists(st.integers(-3, 3), max_size=3), st.integers(-1, 1))


@st.composite
def modules(draw):
    height, width = draw(st.integers(0, 2)), draw(st.integers(0, 3))
    grid = draw(st.lists(st.lists(entry, min_size=width, max_size=width), min_size=height, max_size=height))
    return Module(LaurentMatrix(grid, "Z", (height, width)))


def knot_module(name: str) -> Module:
    knot = BY_NAME[name]
    return Diagram.from_braid(knot["braid"], knot["strands"]).cover().chains().homology(1)


@given(modules())
@settings(deadline=None, max_examples=60)
def test_verdicts_bounds_and_annihilators_agree(m):
    c = m.cyclicity()
    assert c.verify()
    low, high = m.generator_bounds()
    assert low <= high
    assert m.is_zero() == (low == 0)
    assert m.fitting_ideal(low).is_unit()
    assert low == 0 or not m.fitting_ideal(low - 1).is_unit()
    assert (c.verdict == "not cyclic") == (low > 1)
    if c.verdict == "cyclic":
        assert high <= 1
        assert c.ideal == m.fitting_ideal(0)
    ideal = m.annihilator()
    if ideal is None:
        assert c.verdict != "cyclic"
        return
    # Fitt_0 is contained in it, and some power of it in Fitt_0.
    zero = m.fitting_ideal(0)
    assert ideal + zero == ideal
    assert ideal.is_zero() == zero.is_zero()
    if c.verdict == "cyclic":
        assert ideal == zero


@pytest.mark.parametrize("name", ["9_46", "8_18", "10_98", "9_38", "10_63"])
def test_annihilators_kill_and_are_no_larger_than_needed(name):
    m = knot_module(name)
    core = m.simplified().relations
    square = core.submatrix(range(core.shape[0]), range(core.shape[0]))
    if not square.determinant() or square.determinant().unit_to(m.order()) is None:
        square = core.submatrix(range(core.shape[0]), range(1, core.shape[1]))
    (f,) = m.annihilator().basis
    one = LaurentMatrix.identity(square.shape[0])
    assert quotient(square, one * f) is not None
    assert f.divides(m.order())


def test_knots():
    """8_18 needs two generators (E_2 is not (1)); for 9_38 the ideals do not tell."""
    assert str(knot_module("8_18").cyclicity()) == ("not cyclic: the Fitting ideal number 1 is (1 - t + t^2)")
    assert knot_module("8_18").generator_bounds() == (2, 2)
    assert knot_module("9_38").cyclicity().verdict == "locally cyclic, cyclic not decided"
    assert knot_module("9_38").generator_bounds() == (1, 2)
    assert str(knot_module("3_1").cyclicity()) == "cyclic: Z[t,1/t]/(1 - t + t^2)"
    assert str(knot_module("8_18").annihilator()) == "(1 - 4t + 5t^2 - 4t^3 + t^4)"


def test_ordinary_modules():
    for rows, low, ideal in (
        ([], 0, "(1)"),
        ([["1"]], 0, "(1)"),
        ([["0"]], 1, "(0)"),
        ([["0"], ["0"]], 2, "(0)"),
        ([["2"]], 1, "(2)"),
        ([["2", "1 + t"]], 1, "(2, 1 + t)"),
        ([["2", "0"], ["0", "4"]], 2, "(4)"),
    ):
        m = Module.from_matrix(rows)
        assert m.generator_bounds()[0] == low
        assert m.annihilator() == Ideal.parse(ideal)
    assert Module.from_matrix([["2", "1 + t", "0"], ["0", "0", "2"]]).annihilator() is None
    for ask in (Module.cyclicity, Module.generator_bounds, Module.annihilator):
        with pytest.raises(AlgebraError, match="invariant_factors"):
            ask(Module.from_matrix([["2"]], over="Q"))


def test_certificates():
    for m in (knot_module("8_18"), knot_module("3_1"), knot_module("9_38")):
        c = m.cyclicity()
        again = read(c.to_json())
        assert isinstance(again, Cyclicity)
        assert again == c
        assert again.verify()
        assert c._repr_latex_().startswith("$")
        assert c.verdict in repr(c)
    cyclic, not_cyclic = knot_module("3_1").cyclicity(), knot_module("8_18").cyclicity()
    with pytest.raises(CertificateError):
        Cyclicity(replace(not_cyclic.witness, k=0)).verify()
    with pytest.raises(CertificateError):
        Cyclicity(replace(cyclic.witness, forward=cyclic.witness.forward * 2)).verify()
    with pytest.raises(CertificateError):
        Cyclicity(cyclic.witness.inverse()).verify()


def test_the_divisors_of_a_cover_are_those_of_its_ideals():
    knot = BY_NAME["8_18"]
    x = Diagram.from_braid(knot["braid"], knot["strands"]).cover()
    for k in range(1, 4):
        assert x.alexander_polynomial(k) == x.alexander_ideal(k).gcd()
        assert x.alexander_polynomial(k) == x.chains().homology(1).fitting_divisor(k - 1)
