"""H_1 of cyclic branched covers against a table and published examples.

The table `data/cyclic_covers.json` names its source at its top: computed by two methods that agree.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

from kt_widgets.diagrams import Diagram

DATA = Path(__file__).parent / "data"
RECORDS = json.loads((DATA / "cyclic_covers.json").read_text(encoding="utf-8"))["records"]
KNOTS = json.loads((DATA / "prime_knots.json").read_text(encoding="utf-8"))["knots"]
BY_NAME = {knot["name"]: knot for knot in KNOTS}


@pytest.mark.parametrize("record", RECORDS, ids=[f"{r['knot']}-{r['n']}" for r in RECORDS])
def test_branched_covers(record: dict[str, Any]) -> None:
    knot = BY_NAME[record["knot"]]
    for d in (Diagram.from_braid(knot["braid"]), Diagram.from_planar_diagram(knot["planar_diagram"])):
        cover = d.cover().branched_cover(record["n"])
        assert list(cover.invariant_factors()) == record["h1"]
        assert cover.certificate().verify()


def test_double_branched_covers_have_the_determinant_as_order() -> None:
    # |Delta(-1)|, H. Seifert, Über das Geschlecht von Knoten, Math. Ann. 110 (1935), from memory.
    wrong = [
        knot["name"]
        for knot in KNOTS
        if Diagram.from_braid(knot["braid"], knot["strands"]).cover().branched_cover(2).order()
        != abs(sum(c * (-1) ** k for k, c in enumerate(knot["alexander"])))
    ]
    assert wrong == []


@pytest.mark.parametrize("n", range(1, 8))
def test_links(n: int) -> None:
    # The n-fold cover over the Hopf link is a lens space with group Z/n; the double cover over T(2, q) one
    # with group Z/q (Rolfsen, Knots and Links, ch. 10, from memory).
    assert Diagram.from_braid([1, 1]).cover().branched_cover(n).invariant_factors() == ((n,) if n > 1 else ())
    double = Diagram.from_braid([1] * n).cover().branched_cover(2)
    assert double.invariant_factors() == ((n,) if n > 1 else ())


def test_brieskorn_spheres() -> None:
    # The n-fold cover over T(p, q) is the Brieskorn manifold (p, q, n): a homology sphere for pairwise
    # coprime p, q, n (E. Brieskorn, Beispiele zur Differentialtopologie von Singularitäten, Invent. Math. 2
    # (1966), from memory), and (2, 3, 6) a circle bundle over a torus.
    three_four = Diagram.from_braid([1, 2] * 4).cover()
    assert [three_four.branched_cover(n).order() for n in (5, 7, 11)] == [1, 1, 1]
    assert Diagram.from_braid([1, 1, 1]).cover().branched_cover(6).invariant_factors() == (0, 0)
