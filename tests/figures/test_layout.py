"""Packing, symmetry, relaxation and label places, each by what defines it."""

from __future__ import annotations

import math
import random
from itertools import combinations

import numpy as np
import pytest

from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.diagrams.planar_map import PlanarMap
from kt_widgets.figures.labels import Obstacles, Wish, place_labels
from kt_widgets.figures.layout import lay_out
from kt_widgets.figures.magnify import magnified
from kt_widgets.figures.packing import pack, triangulate
from kt_widgets.figures.quality import clearance, crossing_angle, is_embedded, score
from kt_widgets.figures.relaxation import relaxed
from kt_widgets.figures.strands import Curves, curves_of_packing
from kt_widgets.figures.symmetry import automorphisms, outer_face

WORDS = {
    "kink": [1],
    "two kinks": [1, 2],
    "Hopf link": [1, 1],
    "trefoil": [1, 1, 1],
    "figure eight": [1, -2, 1, -2],
    "nested kinks": [1, 2, 3, 4, 5],
    "torus knot (3, 7)": [1, 2] * 7,
    "mixed": [1, -2, 3, -1, 2, -3, 1, 1, -2, 3],
}


def map_of(word: list[int]) -> PlanarMap:
    return Diagram.from_braid(word).planar_map


@pytest.mark.parametrize("name", WORDS)
def test_packing_is_tangent_where_joined_and_apart_elsewhere(name: str) -> None:
    planar_map = map_of(WORDS[name])
    for outer in range(len(planar_map.faces)):
        triangulation = triangulate(planar_map, outer)
        packing = pack(triangulation)
        joined = {
            frozenset(pair) for triangle in triangulation.triangles for pair in combinations(triangle, 2)
        }
        largest = max(packing.radii)
        for one, other in combinations(range(triangulation.nodes), 2):
            gap = abs(packing.centres[one] - packing.centres[other])
            gap -= packing.radii[one] + packing.radii[other]
            if frozenset((one, other)) in joined:
                assert abs(gap) < 1e-9 * largest
            else:
                assert gap > -1e-9 * largest


@pytest.mark.parametrize("name", WORDS)
def test_triangulation_is_a_disc(name: str) -> None:
    planar_map = map_of(WORDS[name])
    for outer in range(len(planar_map.faces)):
        triangulation = triangulate(planar_map, outer)
        sides = [(t[i], t[(i + 1) % 3]) for t in triangulation.triangles for i in range(3)]
        assert len(set(sides)) == len(sides)
        rim = {(a, b) for a, b in sides if (b, a) not in set(sides)}
        assert {a for a, _ in rim} == set(triangulation.rim)
        edges = (len(sides) + len(rim)) // 2
        assert triangulation.nodes - edges + len(triangulation.triangles) == 1


def test_a_large_packing_uses_the_sparse_solver() -> None:
    chance = random.Random(3)
    planar_map = map_of([chance.choice((1, -1)) * chance.randint(1, 5) for _ in range(150)])
    packing = pack(triangulate(planar_map, outer_face(planar_map)))
    angles: dict[int, float] = {}
    for triangle in packing.triangulation.triangles:
        for i in range(3):
            a, b, c = (packing.centres[triangle[(i + k) % 3]] for k in range(3))
            angle = np.angle((c - a) / (b - a))
            assert angle > 0
            angles[triangle[i]] = angles.get(triangle[i], 0.0) + float(angle)
    rim = set(packing.triangulation.rim)
    for node, total in angles.items():
        wanted = math.pi * (len(rim) - 2) / len(rim) if node in rim else 2 * math.pi
        assert total == pytest.approx(wanted, abs=1e-7)


@pytest.mark.parametrize(
    ("word", "order"),
    [([1], 2), ([1, 1], 8), ([1, 1, 1], 6), ([1, -2] * 3, 24), ([1, 2] * 7, 14), ([1, 1, 2, -3, 2], 1)],
)
def test_number_of_rotations(word: list[int], order: int) -> None:
    """Rotation groups of the shadows: dihedral for closed two-braids, of the octahedron for (1 -2)^3."""
    planar_map = map_of(word)
    found = automorphisms(planar_map)
    assert len(set(found)) == len(found) == order
    for images in found:
        for dart, image in enumerate(images):
            assert images[planar_map.mate[dart]] == planar_map.mate[image]
            assert images[dart & ~3 | (dart + 1) & 3] == image & ~3 | (image + 1) & 3


def test_outer_face_prefers_symmetry_then_size() -> None:
    torus = map_of([1, 2] * 7)
    assert len(torus.faces[outer_face(torus)]) == 7
    nugatory = map_of([1, 1, 1, 2])
    assert len(nugatory.faces[outer_face(nugatory)]) == max(map(len, nugatory.faces))


@pytest.mark.parametrize("name", WORDS)
def test_no_stage_makes_strands_meet(name: str) -> None:
    planar_map = map_of(WORDS[name])
    packed = curves_of_packing(planar_map, outer_face(planar_map))
    assert is_embedded(packed)
    assert is_embedded(magnified(packed))


@pytest.mark.parametrize("seed", range(6))
def test_relaxation_improves_random_diagrams(seed: int) -> None:
    chance = random.Random(seed)
    word = [chance.choice((1, -1)) * chance.randint(1, 3) for _ in range(12)]
    pieces = Diagram.from_braid(word).planar_map
    if len(pieces.pieces) > 1:
        pytest.skip("this word is split")
    packed = curves_of_packing(pieces, outer_face(pieces))
    smooth = relaxed(magnified(packed))
    assert is_embedded(smooth)
    assert score(smooth) > score(packed)
    assert crossing_angle(smooth) > 35


def test_meetings_are_noticed() -> None:
    planar_map = map_of([1, 1, 1])
    packed = curves_of_packing(planar_map, outer_face(planar_map))
    broken = dict(packed.paths)
    dart = min(broken)
    path = broken[dart].copy()
    path[len(path) // 2] -= 3 * (path[len(path) // 2] - packed.points().mean())
    broken[dart] = path
    assert not is_embedded(Curves(planar_map, packed.outer, broken))
    mirrored = {dart: path.conj() for dart, path in packed.paths.items()}
    assert not is_embedded(Curves(planar_map, packed.outer, mirrored))


def test_room_and_angles_of_the_table_stay_large() -> None:
    """Sizes measured on ten-crossing diagrams: at 6 cm a tenth of the width is 6 mm."""
    for word in ([1, 1, -2, 1, 1, -2, 3, -2, 3, -2], [1, -2, 1, -2, 1, -2, 1, -2, 1, -2]):
        planar_map = map_of(word)
        smooth = relaxed(magnified(curves_of_packing(planar_map, outer_face(planar_map))))
        assert clearance(smooth) > 0.05
        assert crossing_angle(smooth) > 45


def test_pieces_lie_beside_each_other() -> None:
    d = Diagram.from_braid([1, 1, 1, 3, 3, -5], 9)
    layout = lay_out(d.slots, d.signs, d.circles)
    assert len(layout.circles) == 3
    groups = [
        [layout.edges[label - 1] for c in piece for label in d.slots[c]] for piece in d.planar_map.pieces
    ]
    boxes = []
    for paths in [*groups, *([ring] for ring in layout.circles)]:
        points = np.concatenate(paths)
        boxes.append((points.real.min(), points.imag.min(), points.real.max(), points.imag.max()))
    for a, b in combinations(boxes, 2):
        assert a[2] < b[0] or b[2] < a[0] or a[3] < b[1] or b[3] < a[1]


def straight(y: float, owner: int) -> tuple[np.ndarray, np.ndarray]:
    points = np.arange(0, 101) + 1j * y
    return points, np.full(101, owner)


def test_labels_keep_clear_and_use_leaders_where_it_is_narrow() -> None:
    lines = [straight(y, owner) for owner, y in enumerate((50, 56, 62), start=1)]
    points = np.concatenate([line for line, _ in lines])
    owners = np.concatenate([own for _, own in lines])
    obstacles = Obstacles(points, np.full(len(points), 0.5), owners)
    wishes = [Wish(8, 6, line, owner) for owner, (line, _) in enumerate(lines, start=1)]
    spots = place_labels(wishes, obstacles, (100, 100), gap=1.5)
    assert spots[0] is not None
    assert spots[0].leader is None
    assert spots[0].centre.imag < 50 - 3
    assert spots[2] is not None
    assert spots[2].centre.imag > 62 + 3
    # Between the lines there is no room, and a leader would have to cross one of them.
    assert spots[1] is None


def test_a_leader_reaches_out_of_a_narrow_place() -> None:
    """Dots along both sides leave no room for a label beside the strand, but let a leader pass."""
    strand = np.arange(10, 91) + 50j
    dots = np.concatenate([np.arange(5, 96, 6) + 45j, np.arange(5, 96, 6) + 55j])
    points = np.concatenate([strand, dots])
    owners = np.concatenate([np.full(len(strand), 1), np.zeros(len(dots), dtype=int)])
    obstacles = Obstacles(points, np.full(len(points), 0.3), owners)
    (spot,) = place_labels([Wish(8, 6, strand, 1)], obstacles, (100, 100), gap=1.0)
    assert spot is not None
    assert spot.leader is not None
    assert abs(spot.centre.imag - 50) > 5 + 3
    start, end = spot.leader
    assert abs(start.imag - 50) <= 0.3 + 1e-9
    for share in np.linspace(0, 1, 50):
        assert np.abs(dots - start - share * (end - start)).min() > 0.3
