"""The longitude of every knot of the table: zero in H_1 of the cover, and commuting with the meridian.

Burde, Zieschang, Heusener, Knots, ch. 3 (from memory): the longitude lies in the second commutator subgroup.
"""

from __future__ import annotations

import json
from itertools import islice
from pathlib import Path
from typing import Any

import pytest

from kt_widgets.algebra.flint_rings import RingName
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.smith import invariant_factors
from kt_widgets.diagrams import Diagram
from kt_widgets.testing.quotients import commute, quotients

DATA = Path(__file__).parent / "data"
KNOTS = json.loads((DATA / "prime_knots.json").read_text(encoding="utf-8"))["knots"]


def both_codes(knot: dict[str, Any]) -> list[Diagram]:
    return [Diagram.from_braid(knot["braid"]), Diagram.from_planar_diagram(knot["planar_diagram"])]


@pytest.mark.slow
@pytest.mark.parametrize("ring", ["Q", 2, 3])
def test_longitudes_bound_in_the_cover(ring: RingName) -> None:
    # Dividing by one more column leaves a module over a principal ideal domain isomorphic only if that column
    # is in the image already (a surjection between isomorphic finitely generated modules is injective).
    wrong = []
    for knot in KNOTS:
        for d in both_codes(knot):
            boundary = d.cover().chains().boundary(2).change_ring(ring)
            lift = d.cover().chain(d.longitude()).change_ring(ring)
            rows = [(*row, *entry) for row, entry in zip(boundary.rows, lift.rows, strict=True)]
            extended = invariant_factors(LaurentMatrix(rows, over=ring))
            if [f for f in extended if f != 1] != [f for f in invariant_factors(boundary) if f != 1]:
                wrong.append(knot["name"])
    assert wrong == []


@pytest.mark.slow
def test_longitudes_commute_with_meridians_in_finite_quotients() -> None:
    wrong = []
    for knot in KNOTS:
        d = Diagram.from_planar_diagram(knot["planar_diagram"])
        found = islice(quotients(d.wirtinger()), 50)
        if not all(commute(d.meridian(), d.longitude(), images) for images in found):
            wrong.append(knot["name"])
    assert wrong == []
