"""Pictures of diagrams: what is drawn is the diagram, nothing collides, and the bytes never change."""

from __future__ import annotations

import json
import os
import random
import subprocess
import sys
from pathlib import Path

import pytest

from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.errors import DiagramError, KtError, LimitError
from kt_widgets.figures.checks_of_drawing import label_collisions, meetings, read_gauss, room_between_strands
from kt_widgets.figures.diagram_figure import arc_colours, diagram
from kt_widgets.figures.presets import PRESETS
from kt_widgets.figures.scene import Arrow, Dot, Label, Stroke

TABLE = Path(__file__).parent.parent / "published" / "data" / "prime_knots.json"


def random_braids() -> dict[str, Diagram]:
    chance = random.Random(20260)
    found = {}
    for crossings in (2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 12, 12, 14, 16, 20, 24, 30):
        strands = chance.randint(2, 5)
        word = [chance.choice((1, -1)) * chance.randint(1, strands - 1) for _ in range(crossings)]
        found[" ".join(map(str, word))] = Diagram.from_braid(word, strands)
    return found


DIAGRAMS = {
    "one kink": Diagram.from_braid([1]),
    "one negative kink": Diagram.from_braid([-1]),
    "Hopf link": Diagram.from_braid([1, 1]),
    "unlinked circles": Diagram.from_braid([1, -1]),
    "trefoil": Diagram.from_braid([1, 1, 1]),
    "figure eight": Diagram.from_braid([1, -2, 1, -2]),
    "Borromean rings": Diagram.from_braid([1, -2] * 3),
    "torus knot (3, 7)": Diagram.from_braid([1, 2] * 7),
    "torus knot (2, 15)": Diagram.from_braid([1] * 15),
    "split": Diagram.from_braid([1, 1, 1, 3, 3, -5], 8),
    "nugatory crossings": Diagram.from_braid([1, 1, 1, 2, -3, 4]),
    "row of kinks": Diagram.from_braid([1, 2, 3, 4, 5, 6]),
    "ten kinks within each other": Diagram.from_braid(range(1, 11)),
    "nested kinks": Diagram.from_gauss([[1, -2, 2, -3, 3, -1]], [1, 1, -1]),
    "over everywhere": Diagram.from_gauss([[1, 2], [-1, -2]], [1, -1]),
    "circles only": Diagram.from_braid([], 5),
    "unknot": Diagram((), circles=1),
    "braid of four strands": Diagram.from_braid([1, -2, 1, 3, -2, 3, 3, -1]),
    **random_braids(),
}


def cycles(code: tuple[tuple[int, ...], ...]) -> list[tuple[int, ...]]:
    """Components as cycles: each rotated to its least rotation."""
    return [min((part[k:] + part[:k] for k in range(len(part))), default=()) for part in code]


def assert_well_drawn(d: Diagram, preset: str = "paper") -> None:
    scene = diagram(d, preset=preset, crossings=True).scene
    assert meetings(scene) == []
    assert label_collisions(scene) == []
    code, signs = read_gauss(scene)
    wanted, wanted_signs = d.to_gauss()
    assert cycles(code) == cycles(wanted)
    assert signs == wanted_signs
    assert room_between_strands(scene) > 1.2 * PRESETS[preset].line


@pytest.mark.parametrize("name", DIAGRAMS)
def test_the_picture_is_the_diagram(name: str) -> None:
    assert_well_drawn(DIAGRAMS[name])


@pytest.mark.parametrize("preset", PRESETS)
def test_every_preset(preset: str) -> None:
    for name in ("figure eight", "split", "nested kinks"):
        assert_well_drawn(DIAGRAMS[name], preset)


@pytest.mark.slow
def test_every_knot_of_the_table() -> None:
    rows = json.loads(TABLE.read_text())["knots"]
    assert len(rows) == 249
    for row in rows:
        d = Diagram.from_planar_diagram(row["planar_diagram"])
        assert_well_drawn(d)
        labels = [i for i in diagram(d, crossings=False).scene.items if isinstance(i, Label)]
        assert len(labels) == len(d.arcs), row["name"]


def test_each_outer_face_can_be_named() -> None:
    d = DIAGRAMS["figure eight"]
    for face in d.faces:
        scene = diagram(d, outer=face.number, labels=False).scene
        assert meetings(scene) == []
        assert cycles(read_gauss(scene)[0]) == cycles(d.to_gauss()[0])


def test_layers_can_be_left_out() -> None:
    d = DIAGRAMS["trefoil"]
    everything = diagram(d, crossings=True).scene
    assert {i.id for i in everything.items if isinstance(i, Label)} == {
        *(f"arc:{k}" for k in (1, 2, 3)),
        *(f"crossing:{k}" for k in (1, 2, 3)),
    }
    bare = diagram(d, labels=False, arrows=False, colour=False).scene
    assert not [i for i in bare.items if isinstance(i, Label | Arrow)]
    assert {i.colour_index for i in bare.items} == {None}
    assert [i.id for i in bare.items if isinstance(i, Stroke)] == ["arc:1", "arc:2", "arc:3"]
    assert [i.id for i in bare.items if isinstance(i, Dot)] == ["crossing:1", "crossing:2", "crossing:3"]


def test_arrows_follow_the_strands() -> None:
    scene = diagram(DIAGRAMS["torus knot (3, 7)"]).scene
    strokes = {i.id: i for i in scene.items if isinstance(i, Stroke) and i.role == "strand"}
    heads = [i for i in scene.items if isinstance(i, Arrow)]
    assert len(heads) == 14
    for head in heads:
        points = [complex(*p) for p in strokes[head.id].points]
        tip, direction = complex(*head.tip), complex(*head.direction)
        nearest = min(range(len(points) - 1), key=lambda k: abs(points[k] - tip))
        assert abs(points[nearest] - tip) < 5
        along = points[nearest + 1] - points[nearest]
        assert (along.conjugate() * direction).real > 0.7 * abs(along)


@pytest.mark.parametrize("name", DIAGRAMS)
def test_arcs_that_meet_differ_in_colour(name: str) -> None:
    d = DIAGRAMS[name]
    colours = arc_colours(d)
    for crossing in d.crossings:
        over, under_in, under_out = crossing.over_arc, crossing.under_in, crossing.under_out
        for one, other in ((over, under_in), (over, under_out), (under_in, under_out)):
            assert one == other or colours[one - 1] != colours[other - 1]


def test_a_symmetric_diagram_is_drawn_symmetric() -> None:
    scene = diagram(DIAGRAMS["torus knot (2, 15)"], labels=False, arrows=False, width=400).scene
    centres = [complex(*i.position) for i in scene.items if isinstance(i, Dot)]
    middle = sum(centres) / 15
    turn = (centres[1] - middle) / (centres[0] - middle)
    assert abs(abs(turn) - 1) < 1e-3
    for k in range(15):
        assert abs((centres[k] - middle) * turn - (centres[(k + 1) % 15] - middle)) < 0.1


def test_the_size_asked_for_is_kept() -> None:
    for width in (60, 170, 500):
        scene = diagram(DIAGRAMS["Borromean rings"], width=width).scene
        assert 0.8 * width < max(scene.width, scene.height) <= width


def test_refusals_are_in_words() -> None:
    d = DIAGRAMS["trefoil"]
    with pytest.raises(DiagramError, match=r"no face 6 .*accepted: a face from 1 to 5"):
        diagram(d, outer=6)
    with pytest.raises(KtError, match=r"no preset 'poster'.*paper"):
        diagram(d, preset="poster")
    with pytest.raises(KtError, match="36 to 5000"):
        diagram(d, width=-3)
    with pytest.raises(LimitError, match=r"401 crossings.*400"):
        diagram(Diagram.from_braid([1] * 401))
    with pytest.raises(LimitError, match="101 crossingless components"):
        diagram(Diagram((), circles=101))


def test_drawing_into_axes_fits_them() -> None:
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    figure = Figure(figsize=(6, 3))
    FigureCanvasAgg(figure)
    ax = figure.add_subplot()
    scene = diagram(DIAGRAMS["Borromean rings"], ax=ax).scene
    assert scene.height < 3 * 72
    gids = {artist.get_gid() for artist in ax.lines}
    assert {f"arc:{k}" for k in range(1, 7)} <= gids


SCRIPT = """
import hashlib
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.figures.diagram_figure import diagram
for word in ([1, -2, 1, -2], [1, 2] * 7, [1, 1, 2, -3, 2], [1, -2, 3] * 4):
    picture = diagram(Diagram.from_braid(word, 6), crossings=True)
    for data in (picture.svg().encode(), picture.pdf(), picture.png(), picture.tikz().encode()):
        print(hashlib.sha256(data).hexdigest())
"""


def test_the_bytes_do_not_depend_on_the_hash_seed() -> None:
    outputs = set()
    for seed in ("0", "1"):
        done = subprocess.run(
            [sys.executable, "-c", SCRIPT],
            env={**os.environ, "PYTHONHASHSEED": seed},
            capture_output=True,
            text=True,
            check=True,
        )
        outputs.add(done.stdout)
    assert len(outputs) == 1
    assert len(outputs.pop().split()) == 16


def test_no_scientific_library_is_loaded_for_a_small_picture() -> None:
    script = (
        "import sys\n"
        "from kt_widgets.diagrams.diagram import Diagram\n"
        "from kt_widgets.figures.diagram_figure import diagram\n"
        "diagram(Diagram.from_braid([1, -2] * 6)).svg()\n"
        "print([m for m in ('scipy', 'matplotlib', 'sympy', 'networkx') if m in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_only_diagrams_are_drawn() -> None:
    with pytest.raises(KtError, match=r"str is not drawn as a diagram.*Diagram\.parse"):
        diagram("braid 1 1 1")
