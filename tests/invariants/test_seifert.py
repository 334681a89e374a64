"""Seifert matrices of closed braids against Wirtinger's presentation: ideals, modules, signatures."""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings

from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.diagrams import Diagram
from kt_widgets.errors import AlgebraError, DiagramError
from kt_widgets.invariants.seifert import seifert_matrix
from kt_widgets.modules.comparison import compare
from kt_widgets.modules.module import Module
from kt_widgets.testing.strategies import knot_braids

DATA = Path(__file__).parent.parent / "published" / "data" / "prime_knots.json"
KNOTS = json.loads(DATA.read_text(encoding="utf-8"))["knots"]


def signature(V: LaurentMatrix) -> int:
    form = np.array([[float(f(1)) for f in row] for row in (V + V.transpose()).rows])
    values = np.linalg.eigvalsh(form) if len(form) else []
    return sum(int(np.sign(x)) for x in values if abs(x) > 1e-9)


def test_alexander_ideals_of_all_table_knots_from_wirtinger_and_from_seifert_matrices():
    wrong = []
    for knot in KNOTS:
        wirtinger = Diagram.from_braid(knot["braid"], knot["strands"]).cover()
        seifert = Module.from_seifert_matrix(seifert_matrix(knot["braid"], knot["strands"]))
        # E_k is Fitt_(k - 1) of H_1 for a knot
        if any(wirtinger.alexander_ideal(k) != seifert.fitting_ideal(k - 1) for k in (1, 2, 3)):
            wrong.append(knot["name"])
    assert wrong == []
    assert len(KNOTS) == 249


@pytest.mark.parametrize("name", ["3_1", "4_1", "6_1", "8_18", "9_46", "10_98", "10_155"])
def test_the_modules_are_isomorphic(name):
    (knot,) = (k for k in KNOTS if k["name"] == name)
    m = Diagram.from_braid(knot["braid"], knot["strands"]).cover().chains().homology(1)
    c = compare(m, Module.from_seifert_matrix(seifert_matrix(knot["braid"], knot["strands"])))
    assert c.verdict == "isomorphic"
    assert c.verify()


@given(knot_braids())
@settings(deadline=None)
def test_knots(braid):
    word, strands = braid
    V = seifert_matrix(word, strands)
    # V - V^T is the intersection form of a surface with one boundary component: of determinant 1.
    assert (V - V.transpose()).determinant() == 1
    d = Diagram.from_braid(word, strands)
    m = Module.from_seifert_matrix(V)
    assert m.order() == d.cover().order()
    assert m.fitting_ideal(1) == d.cover().alexander_ideal(2)
    mirror = seifert_matrix([-letter for letter in word], strands)
    assert signature(mirror) == -signature(V)


@pytest.mark.parametrize("word", [[1, 1], [1, 1, 1, 1], [1, -2, 1, -2, 1, -2], [1, 1, 2, 2], [-1, -1, 2, 2]])
def test_links(word):
    d = Diagram.from_braid(word)
    m = Module.from_seifert_matrix(seifert_matrix(word))
    assert compare(m, d.cover().chains().homology(1)).verdict == "isomorphic"


def test_signatures():
    """Right-handed torus links T(2, n) have signature 1 - n, the figure-eight knot 0 (common practice)."""
    for n in range(1, 8):
        assert signature(seifert_matrix([1] * n)) == 1 - n
    assert signature(seifert_matrix([1, 1, 1])) == -2
    assert signature(seifert_matrix([1, -2, 1, -2])) == 0


def test_smallest_surfaces():
    """For V = (-1) det(V t^(-1/2) - V^T t^(1/2)) is z = t^(1/2) - t^(-1/2): the positive Hopf link's."""
    assert seifert_matrix([1, 1]) == LaurentMatrix([[-1]])
    assert seifert_matrix([-1, -1]) == LaurentMatrix([[1]])
    assert seifert_matrix([1]).shape == (0, 0)
    assert seifert_matrix([], strands=1).shape == (0, 0)


def test_refusals():
    with pytest.raises(DiagramError, match="not connected"):
        seifert_matrix([1, 3])
    with pytest.raises(DiagramError, match="not connected"):
        seifert_matrix([1], strands=3)
    with pytest.raises(DiagramError):
        seifert_matrix([1, 0])
    with pytest.raises(DiagramError):
        seifert_matrix([3], strands=2)
    with pytest.raises(AlgebraError, match="shape"):
        Module.from_seifert_matrix([[1, 2]])
    with pytest.raises(AlgebraError, match="no integer"):
        Module.from_seifert_matrix([["t"]])
    assert Module.from_seifert_matrix([]).is_zero()
    assert Module.from_seifert_matrix("[[-1, 0], [1, -1]]").order() == LaurentPolynomial.parse("1 - t + t^2")
