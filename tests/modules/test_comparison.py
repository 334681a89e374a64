"""Comparing modules: verdicts with witnesses, changed certificates, pairs of knots with one polynomial."""

from __future__ import annotations

import json
from dataclasses import fields, replace
from itertools import combinations
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.diagrams import Diagram
from kt_widgets.errors import AlgebraError, CertificateError
from kt_widgets.modules.comparison import Comparison, DifferentFactors, DifferentIdeals, compare
from kt_widgets.modules.isomorphism import Isomorphism, cyclic_form, found_isomorphism, reduced_form
from kt_widgets.modules.module import Module
from kt_widgets.text.portable import read

DATA = Path(__file__).parent.parent / "published" / "data" / "prime_knots.json"
KNOTS = json.loads(DATA.read_text(encoding="utf-8"))["knots"]
BY_NAME = {knot["name"]: knot for knot in KNOTS}
zero_to_two = st.integers(0, 2)
few = settings(deadline=None, max_examples=50)
entry = st.builds(LaurentPolynomial, st.lists(st.integers(-3, 3), max_size=3), st.integers(-1, 1))


@st.composite
def matrices(draw, rows=zero_to_two, columns=zero_to_two):
    height, width = draw(rows), draw(columns)
    grid = draw(st.lists(st.lists(entry, min_size=width, max_size=width), min_size=height, max_size=height))
    return LaurentMatrix(grid, "Z", (height, width))


@st.composite
def disguised(draw, matrix):
    """The same cokernel: generators and relations changed by elementary steps, one of each added."""
    one = LaurentMatrix.identity(1)
    matrix = LaurentMatrix.blocks(matrix, one)
    height, width = matrix.shape
    for size, left in ((height, True), (width, False)) * 2:
        i, j = draw(st.integers(0, size - 1)), draw(st.integers(0, size - 1))
        if i != j:
            step = LaurentMatrix.identity(size) + LaurentMatrix.from_entries(
                {(i, j): draw(entry)}, (size, size)
            )
            matrix = step @ matrix if left else matrix @ step
    return matrix


def module(name: str, code: str = "braid") -> Module:
    knot = BY_NAME[name]
    d = (
        Diagram.from_braid(knot["braid"], knot["strands"])
        if code == "braid"
        else Diagram.from_planar_diagram(knot["planar_diagram"])
    )
    return d.cover().chains().homology(1)


@few
@given(matrices(), st.data())
def test_a_module_in_disguise_is_never_called_different(a, data):
    b = data.draw(disguised(a))
    m, n = Module(a), Module(b)
    result = compare(m, n)
    assert result.verdict in ("isomorphic", "not decided")
    if result.verdict == "isomorphic":
        assert result.verify()
    for ring in ("Q", 2, 3):
        c = compare(m.over(ring), n.over(ring))
        assert c.verdict == "isomorphic"
        assert c.verify()


@few
@given(matrices(), matrices())
def test_verdicts_agree_with_change_of_ring(a, b):
    m, n = Module(a), Module(b)
    over_z = compare(m, n)
    for ring in ("Q", 2, 3):
        over_field = compare(m.over(ring), n.over(ring))
        equal = m.over(ring).invariant_factors() == n.over(ring).invariant_factors()
        assert over_field.verdict == ("isomorphic" if equal else "different")
        assert over_field.verify()
        if over_z.verdict == "isomorphic":
            assert equal
    if over_z.verdict != "not decided":
        assert over_z.verify()


@few
@given(matrices())
def test_reduced_and_cyclic_forms(a):
    i = reduced_form(a)
    assert i.verify()
    assert i.inverse().verify()
    assert (i.inverse() @ i).verify()
    c = cyclic_form(a)
    if c is not None:
        assert c.verify()
        assert c.target.shape[0] == 1
        assert Module(a).fitting_ideal(0).basis == c.target.rows[0]


ORDINARY = {
    "zero": [],
    "zero too": [["1"]],
    "free": [["0"]],
    "free of rank 2": [["0"], ["0"]],
    "R/2": [["2"]],
    "R/3": [["3"]],
    "R/(2, 1 + t)": [["2", "1 + t"]],
    "R/2 + R": [["2"], ["0"]],
    "R/2 + R/2": [["2", "0"], ["0", "2"]],
    "R/6": [["6"]],
    "R/2 + R/3": [["2", "0"], ["0", "3"]],
    "R/(t - 2)": [["t - 2"]],
    "R/(2t - 1)": [["2t - 1"]],
}
SAME = {frozenset(("zero", "zero too")), frozenset(("R/6", "R/2 + R/3"))}


@pytest.mark.parametrize(("one", "other"), list(combinations(ORDINARY, 2)))
def test_ordinary_modules(one, other):
    c = compare(Module.from_matrix(ORDINARY[one]), Module.from_matrix(ORDINARY[other]))
    assert c.verdict == ("isomorphic" if frozenset((one, other)) in SAME else "different")
    assert c.verify()


@pytest.mark.parametrize("name", ORDINARY)
def test_each_is_isomorphic_to_itself(name):
    m = Module.from_matrix(ORDINARY[name])
    assert compare(m, m).verify()
    assert compare(m, m.conjugate()).verdict == ("different" if "t - " in name else "isomorphic")
    found = found_isomorphism(m.relations, m.relations)
    assert found is not None
    assert found.verify()


@pytest.mark.parametrize("name", ["9_46", "8_18", "10_63", "10_155", "10_140", "10_98", "10_103", "9_38"])
def test_two_diagrams_of_a_knot_with_a_module_that_is_not_cyclic(name):
    """Both codes of the table are of one knot, perhaps mirrored, which changes t to 1/t at most."""
    m, n = module(name), module(name, "planar")
    assert cyclic_form(m.relations) is None
    c = compare(m, n)
    assert c.verdict == "isomorphic"
    assert c.verify()
    assert isinstance(c.witness, Isomorphism)


def test_9_46_is_its_own_conjugate_and_6_1_is_not_it():
    m, n = module("9_46"), module("6_1")
    assert compare(m, m.conjugate()).verify()
    c = compare(m, n)
    assert str(c) == (
        "different: the Fitting ideals number 1 are (3, 1 + t) and (1); 1 is in the second only"
    )
    over_q = compare(m.over("Q"), n.over("Q"))
    assert over_q.verdict == "isomorphic"
    assert repr(over_q) == "<Comparison: isomorphic>"
    three = compare(m.over(3), n.over(3))
    assert str(three) == "different: the invariant factors number 1 are 1 + t and 1 + 2t + t^2"


def test_rings_must_agree():
    m = Module.from_matrix([["2"]])
    with pytest.raises(AlgebraError, match="are not compared"):
        compare(m, m.over("Q"))
    i = reduced_form(m.relations)
    with pytest.raises(AlgebraError, match="does not end"):
        i @ reduced_form(LaurentMatrix([["3"]]))
    with pytest.raises(AlgebraError, match="compare"):
        assert m == Module.from_matrix([["2"]])


def test_too_large_is_not_decided():
    m = Module(LaurentMatrix.identity(25) * 2)
    n = Module(LaurentMatrix.identity(25) * 2 + LaurentMatrix.from_entries({(0, 1): 4}, (25, 25)))
    c = compare(m, n)
    assert c.verdict == "not decided"
    assert "too large" in str(c)
    with pytest.raises(CertificateError):
        c.verify()
    assert read(c.to_json()).verdict == "not decided"


# Certificates


def changed(matrix: LaurentMatrix):
    for i in range(matrix.shape[0]):
        for j in range(matrix.shape[1]):
            yield matrix + LaurentMatrix.from_entries(
                {(i, j): LaurentPolynomial([1], 7, matrix.over)}, matrix.shape, matrix.over
            )


NINE_46 = Module.from_matrix([["t - 2", "0"], ["0", "2t - 1"]])
WITNESSED = [
    lambda: compare(NINE_46, NINE_46.conjugate()),
    lambda: compare(module("3_1").over("Q"), module("3_1", "planar").over("Q")),
    lambda: compare(Module.from_matrix(ORDINARY["R/6"]), Module.from_matrix(ORDINARY["R/2 + R/3"])),
]


@pytest.mark.parametrize("make", WITNESSED)
def test_changed_isomorphisms_are_rejected(make):
    c = make()
    assert c.verify()
    again = read(c.to_json())
    assert isinstance(again, Comparison)
    assert again.verify()
    assert again.witness == c.witness
    for field in fields(c.witness):
        for wrong in changed(getattr(c.witness, field.name)):
            with pytest.raises(CertificateError) as caught:
                replace(c, witness=replace(c.witness, **{field.name: wrong})).verify()
            assert caught.value.where
    with pytest.raises(CertificateError):
        replace(c, first=Module.from_matrix([["5"]], c.first.ring)).verify()
    assert c._repr_latex_() is None or c._repr_latex_().startswith("$")


def test_changed_differences_are_rejected():
    c = compare(module("9_46"), module("6_1"))
    w = c.witness
    assert isinstance(w, DifferentIdeals)
    assert read(c.to_json()).verify()
    assert "Fitt" in c._repr_latex_()
    for wrong in (
        replace(w, element=LaurentPolynomial([3])),
        replace(w, element=LaurentPolynomial()),
        replace(w, second=w.first),
        replace(w, first=replace(w.first, k=2)),
        replace(w, first=replace(w.first, basis=(LaurentPolynomial([1]),))),
    ):
        with pytest.raises(CertificateError):
            replace(c, witness=wrong).verify()
    f = compare(module("9_46").over(3), module("6_1").over(3))
    assert isinstance(f.witness, DifferentFactors)
    assert read(f.to_json()).verify()
    assert f._repr_latex_()
    for wrong_factors in (
        replace(f.witness, second=f.witness.first),
        replace(f.witness, first=replace(f.witness.first, factors=())),
    ):
        with pytest.raises(CertificateError):
            replace(f, witness=wrong_factors).verify()


@pytest.mark.slow
def test_all_pairs_of_knots_with_one_polynomial():
    """Prints the table: over Q, over Z[t,1/t], each with a verified witness."""
    groups: dict[tuple[int, ...], list[str]] = {}
    for knot in KNOTS:
        groups.setdefault(tuple(knot["alexander"]), []).append(knot["name"])
    groups = {key: names for key, names in groups.items() if len(names) > 1}
    assert len(groups) == 36
    print()
    for names in groups.values():
        for one, other in combinations(names, 2):
            m, n = module(one), module(other)
            over_z, over_q = compare(m, n), compare(m.over("Q"), n.over("Q"))
            assert over_z.verify()
            assert over_q.verify()
            detail = "" if isinstance(over_z.witness, Isomorphism) else f": {over_z.witness}"
            print(f"{one:7} {other:7} over Q {over_q.verdict:10}  over Z {over_z.verdict}{detail}")
            if over_q.verdict == "different":
                assert over_z.verdict == "different"
