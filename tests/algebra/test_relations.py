"""Repeated relations of large matrices, and orders of modules by way of them."""

from __future__ import annotations

import random

import pytest

from kt_widgets.algebra import fitting
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.relations import without_repeated_relations
from kt_widgets.diagrams import Diagram
from kt_widgets.modules.module import Module


def closure(crossings: int, strands: int, seed: int) -> Diagram:
    rng = random.Random(seed)
    letters = list(range(1, strands)) + [rng.randint(1, strands - 1) for _ in range(crossings - strands + 1)]
    rng.shuffle(letters)
    return Diagram.from_braid([i * rng.choice((1, -1)) for i in letters])


@pytest.mark.parametrize(("crossings", "strands"), [(8, 3), (30, 5), (31, 5), (90, 8), (140, 9)])
def test_one_relator_of_a_connected_diagram_is_repeated(crossings: int, strands: int) -> None:
    d = closure(crossings, strands, crossings)
    relations = d.cover().chains().homology(1).presentation_matrix()
    assert relations.shape == (crossings - 1, crossings)
    square = without_repeated_relations(relations)
    assert square.shape == (crossings - 1, crossings - 1)
    assert square.determinant().unit_to(d.alexander_polynomial()) is not None


def test_each_piece_of_a_diagram_has_a_repeated_relator() -> None:
    d = Diagram.from_braid([1, 2] * 5 + [4, 5, 5] * 4)
    boundary = d.cover().chains().boundary(2)
    assert without_repeated_relations(boundary).shape == (22, 20)


def test_other_combinations_stay() -> None:
    # Column 3 = 2 (column 1): no unit. Column 2 is no combination at all.
    a = LaurentMatrix([["2 + t", "3", "4 + 2t"], ["5 - t", "1 + 7t", "10 - 2t"]])
    assert without_repeated_relations(a) == a
    assert without_repeated_relations(LaurentMatrix.zero(2, 0)) == LaurentMatrix.zero(2, 0)
    assert without_repeated_relations(LaurentMatrix.zero(2, 3)) == LaurentMatrix.zero(2, 0)
    same = LaurentMatrix([["2 + t", "2t^-3 + t^-2"]])
    assert without_repeated_relations(same) == LaurentMatrix([["2 + t"]])


@pytest.mark.parametrize(("crossings", "strands"), [(40, 5), (41, 6), (80, 7)])
def test_orders_agree_with_those_of_small_matrices(
    crossings: int, strands: int, monkeypatch: pytest.MonkeyPatch
) -> None:
    d = closure(crossings, strands, 7)
    monkeypatch.setattr(fitting, "SMALL_CORE", 10**9)
    expected = d.cover().order()
    monkeypatch.setattr(fitting, "SMALL_CORE", 0)
    assert d.cover().order() == expected == d.alexander_polynomial().normal_form()


def test_orders_of_large_modules() -> None:
    d = closure(260, 15, 1)
    assert d.cover().order() == d.alexander_polynomial().normal_form()
    split = Diagram.from_braid([1, 2] * 40 + [4, 5] * 40)
    assert split.cover().order() == LaurentPolynomial()
    # More relations than generators, none repeated: the gcd of the minors, 3 here.
    size = 62
    rows = [[LaurentPolynomial()] * (size + 1) for _ in range(size)]
    for i in range(size):
        rows[i][i] = LaurentPolynomial([1])
    rows[0][0], rows[0][size] = LaurentPolynomial([6]), LaurentPolynomial([3, 9])
    assert Module.from_matrix(rows).order() == 3
