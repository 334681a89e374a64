"""The curves of a diagram's edges through the circles of a packing."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from kt_widgets.diagrams.planar_map import PlanarMap
from kt_widgets.figures.packing import Packing, pack, triangulate

__all__ = ["Curves", "Path", "curves_of_packing", "resampled"]

Path: TypeAlias = NDArray[np.complex128]

# Points of one arc, and of half an arc from a crossing to the edge of its circle.
_ARC, _HALF = 13, 7


@dataclass(frozen=True, eq=False)
class Curves:
    """The edges of a connected map drawn in the plane: a path from crossing to crossing for each edge.

    `paths` is indexed by the lower dart of each edge; points are complex numbers.
    """

    planar_map: PlanarMap
    outer: int
    paths: dict[int, Path]

    def path(self, dart: int) -> Path:
        """The edge that leaves its crossing by `dart`, drawn in that direction."""
        other = self.planar_map.mate[dart]
        return self.paths[dart] if dart < other else self.paths[other][::-1]

    def crossing(self, index: int) -> complex:
        """Where a crossing (from 0) lies."""
        return complex(self.path(4 * index)[0])

    def moved(self, factor: complex, offset: complex = 0j) -> Curves:
        """The same curves, every point z at factor z + offset."""
        paths = {dart: factor * path + offset for dart, path in self.paths.items()}
        return Curves(self.planar_map, self.outer, paths)

    def points(self) -> Path:
        """All points, edge after edge."""
        return np.concatenate([self.paths[dart] for dart in sorted(self.paths)])


def resampled(path: Path, count: int) -> Path:
    """Points at equal distances along a path, its ends among them."""
    lengths = np.concatenate([[0.0], np.cumsum(np.abs(np.diff(path)))])
    at = np.linspace(0, lengths[-1], count)
    points = np.interp(at, lengths, path.real) + 1j * np.interp(at, lengths, path.imag)
    return np.asarray(points)


def curves_of_packing(planar_map: PlanarMap, outer: int) -> Curves:
    """Pack circles for the map and lead its strands through them.

    Inside each circle a strand is the circular arc that meets the circle at right angles where it touches the
    two neighbours of the strand's way, so the pieces join smoothly, and two strands of a crossing, whose ends
    alternate on the circle, meet exactly once.

    Examples
    --------
    >>> trefoil = PlanarMap((9, 4, 7, 10, 1, 8, 11, 2, 5, 0, 3, 6))
    >>> len(curves_of_packing(trefoil, 0).paths)
    6
    """
    packing = pack(triangulate(planar_map, outer))
    half = _halves(planar_map, packing)
    paths = {}
    for dart, other in enumerate(planar_map.mate):
        if dart < other:
            pieces = [half[dart], *_edge_arcs(planar_map, packing, dart), half[other][::-1]]
            paths[dart] = np.concatenate([piece[int(i > 0) :] for i, piece in enumerate(pieces)])
    return Curves(planar_map, outer, paths)


def _geodesic(start: complex, end: complex, count: int, from_rim: bool = True) -> Path:
    """The arc at right angles to the unit circle between two points given in Klein's model of the disc.

    There it is a chord; z -> z / (1 + sqrt(1 - |z|^2)) bends chords into the arcs of Poincare's model. Points
    are denser near the rim, where the map stretches.
    """
    turns = np.linspace(0, np.pi if from_rim else np.pi / 2, count)
    share = (1 - np.cos(turns)) / 2 if from_rim else np.sin(turns)
    chord = start + share * (end - start)
    return np.asarray(chord / (1 + np.sqrt(np.maximum(1 - np.abs(chord) ** 2, 0))))


def _halves(planar_map: PlanarMap, packing: Packing) -> list[Path]:
    """For each dart the half arc from the crossing point to the rim of the crossing's circle."""
    halves: list[Path] = []
    node_of_dart = packing.triangulation.node_of_dart
    for crossing in range(len(planar_map.mate) // 4):
        centre, radius = packing.centres[crossing], packing.radii[crossing]
        rim = [
            (packing.touching_point(crossing, node_of_dart[4 * crossing + slot]) - centre) / radius
            for slot in range(4)
        ]
        one, other = rim[2] - rim[0], rim[3] - rim[1]
        share = ((rim[1] - rim[0]) * other.conjugate()).imag / (one * other.conjugate()).imag
        meeting = rim[0] + share * one
        halves += [centre + radius * _geodesic(meeting, end, _HALF, from_rim=False) for end in rim]
    return halves


def _edge_arcs(planar_map: PlanarMap, packing: Packing, dart: int) -> list[Path]:
    """The arcs through the one or two circles of an edge."""
    node_of_dart = packing.triangulation.node_of_dart
    other = planar_map.mate[dart]
    way = [dart // 4, node_of_dart[dart]]
    if node_of_dart[other] != node_of_dart[dart]:
        way.append(node_of_dart[other])
    way.append(other // 4)
    arcs = []
    for before, node, after in zip(way, way[1:], way[2:], strict=False):
        centre, radius = packing.centres[node], packing.radii[node]
        start, end = (packing.touching_point(node, beside) for beside in (before, after))
        arcs.append(centre + radius * _geodesic((start - centre) / radius, (end - centre) / radius, _ARC))
    return arcs
