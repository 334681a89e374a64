"""Circle packing of a connected planar map: circles for crossings, edges and faces, tangent where these meet.

Method: the radii are the unknowns of a convex problem; Newton's method on their logarithms, whose Hessian is
a weighted graph Laplacian, with backtracking (C. Collins and K. Stephenson, A circle packing algorithm,
Comput. Geom. 25 (2003), has the problem and the placing of the circles).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from kt_widgets.diagrams.planar_map import PlanarMap
from kt_widgets.errors import KtError

__all__ = ["Packing", "Triangulation", "pack", "triangulate"]

Floats: TypeAlias = NDArray[np.float64]

_TOLERANCE = 1e-12
_NEWTON_STEPS = 100
# Up to so many circles a dense solve is faster than loading a sparse solver.
_DENSE = 160


@dataclass(frozen=True)
class Triangulation:
    """A triangulated disc made from a map and its outer face.

    `node_of_dart` is the node of the edge at that dart's end (a loop has two nodes, other edges one); the
    first nodes are the crossings. `triangles` are counter-clockwise triples of nodes, `rim` the boundary
    cycle.
    """

    nodes: int
    node_of_dart: tuple[int, ...]
    triangles: tuple[tuple[int, int, int], ...]
    rim: tuple[int, ...]


@dataclass(frozen=True)
class Packing:
    """Centres (complex numbers) and radii of the circles of a triangulation's nodes."""

    triangulation: Triangulation
    centres: tuple[complex, ...]
    radii: tuple[float, ...]

    def touching_point(self, one: int, other: int) -> complex:
        """The point where two tangent circles meet."""
        share = self.radii[one] / (self.radii[one] + self.radii[other])
        return self.centres[one] + share * (self.centres[other] - self.centres[one])


def triangulate(planar_map: PlanarMap, outer: int) -> Triangulation:
    """A node for each crossing, edge (two on a loop) and face but the outer one, joined where they meet.

    A face whose boundary walk meets a crossing twice (there is a nugatory crossing) first gets a collar: a
    ring of nodes along its walk, so that no two nodes are joined twice.

    Examples
    --------
    >>> triangulate(PlanarMap((9, 4, 7, 10, 1, 8, 11, 2, 5, 0, 3, 6)), 0).nodes
    13
    """
    mate = planar_map.mate
    count = len(mate) // 4
    node_of_dart = [-1] * len(mate)
    for dart, other in enumerate(mate):
        if node_of_dart[dart] == -1:
            node_of_dart[dart] = count
            count += dart // 4 == other // 4
            node_of_dart[other] = count
            count += 1
    triangles: list[tuple[int, int, int]] = []
    rim: list[int] = []
    for index, walk in enumerate(planar_map.faces):
        cycle: list[int] = []
        for dart in walk:
            cycle += [dart // 4, node_of_dart[dart]]
            if node_of_dart[mate[dart]] != node_of_dart[dart]:
                cycle.append(node_of_dart[mate[dart]])
        if len(set(cycle)) < len(cycle):
            ring = list(range(count, count + len(cycle)))
            count += len(cycle)
            for position, node in enumerate(cycle):
                after = (position + 1) % len(cycle)
                triangles.append((node, cycle[after], ring[position]))
                triangles.append((cycle[after], ring[after], ring[position]))
            cycle = ring
        if index == outer:
            rim = cycle
        else:
            triangles += [(cycle[i - 1], cycle[i], count) for i in range(len(cycle))]
            count += 1
    return Triangulation(count, tuple(node_of_dart), tuple(triangles), tuple(rim))


def pack(triangulation: Triangulation) -> Packing:
    """The packing in which the centres of the rim's circles are corners of equal angles of a convex polygon.

    Raises
    ------
    KtError
        If Newton's method does not reach the tolerance; this has not been seen.

    Examples
    --------
    >>> packing = pack(triangulate(PlanarMap((9, 4, 7, 10, 1, 8, 11, 2, 5, 0, 3, 6)), 0))
    >>> len(packing.radii)
    13
    """
    triangles = np.array(triangulation.triangles, dtype=np.intp)
    target = np.full(triangulation.nodes, 2 * np.pi)
    corners = len(triangulation.rim)
    target[list(triangulation.rim)] = np.pi * (corners - 2) / corners
    radii = _radii(triangles, target)
    return Packing(triangulation, tuple(_centres(triangulation, radii)), tuple(radii.tolist()))


def _angles(triangles: NDArray[np.intp], radii: Floats) -> tuple[Floats, Floats]:
    """The angle at each corner of each triangle, and the slope of the angles for the side after the corner.

    In a triangle of mutually tangent circles of radii a, b, c the angle at a is 2 atan(rho / a), where rho is
    the radius of the inscribed circle, and its derivative by log b is rho / (a + b).
    """
    r = radii[triangles]
    inscribed = np.sqrt(r.prod(axis=1) / r.sum(axis=1))[:, None]
    return 2 * np.arctan(inscribed / r), inscribed / (r + np.roll(r, -1, axis=1))


def _radii(triangles: NDArray[np.intp], target: Floats) -> Floats:
    count = len(target)
    logarithms = np.zeros(count)
    angles, slopes = _angles(triangles, np.exp(logarithms))
    excess = np.bincount(triangles.ravel(), angles.ravel(), count) - target
    for _ in range(_NEWTON_STEPS):
        error = float(np.abs(excess).max())
        if error < _TOLERANCE:
            break
        step = _solve(triangles, slopes, excess)
        # Long steps leave the region where the quadratic model means anything.
        length = min(1.0, 2.0 / float(np.abs(step).max()))
        while True:
            trial = logarithms + length * step
            angles, slopes = _angles(triangles, np.exp(trial))
            new_excess = np.bincount(triangles.ravel(), angles.ravel(), count) - target
            if np.linalg.norm(new_excess) < np.linalg.norm(excess):
                break
            length /= 2
            if length < 1e-6:
                # Rounding of the angle sums bounds what can be reached.
                if error < 1e-9:
                    return np.asarray(np.exp(logarithms), dtype=np.float64)
                raise KtError("the circle packing of this diagram does not converge", where="layout")
        logarithms, excess = trial - trial.mean(), new_excess
    else:
        raise KtError("the circle packing of this diagram does not converge", where="layout")
    return np.asarray(np.exp(logarithms), dtype=np.float64)


def _solve(triangles: NDArray[np.intp], slopes: Floats, excess: Floats) -> Floats:
    """The Newton step: the Laplacian with `slopes` as weights of the sides, grounded at the last node."""
    count = len(excess)
    ends = np.stack([triangles, np.roll(triangles, -1, axis=1)], axis=-1).reshape(-1, 2)
    rows = np.concatenate([ends[:, 0], ends[:, 1], ends[:, 0], ends[:, 1]])
    columns = np.concatenate([ends[:, 1], ends[:, 0], ends[:, 0], ends[:, 1]])
    weights = slopes.ravel()
    values = np.concatenate([-weights, -weights, weights, weights])
    step = np.zeros(count)
    if count <= _DENSE:
        laplacian: Any = np.bincount(rows * count + columns, values, count * count).reshape(count, count)
        step[:-1] = np.linalg.solve(laplacian[:-1, :-1], excess[:-1])
    else:
        from scipy.sparse import csc_array
        from scipy.sparse.linalg import spsolve

        laplacian = csc_array((values, (rows, columns)), shape=(count, count))
        step[:-1] = spsolve(laplacian[:-1, :-1], excess[:-1])
    return step


def _centres(triangulation: Triangulation, radii: Floats) -> list[complex]:
    """Lay the triangles out one by one, from the largest to its neighbours."""
    triangles = triangulation.triangles
    beside: dict[tuple[int, int], int] = {}
    for index, (a, b, c) in enumerate(triangles):
        beside[a, b] = beside[b, c] = beside[c, a] = index
    r = radii.tolist()
    centres = [0j] * triangulation.nodes
    known = [False] * triangulation.nodes
    first = max(range(len(triangles)), key=lambda index: (min(r[node] for node in triangles[index]), -index))
    a, b, _ = triangles[first]
    centres[b] = complex(r[a] + r[b])
    known[a] = known[b] = True
    todo = [(a, b), (b, a)]
    done: set[int] = set()
    for a, b in todo:
        found = beside.get((a, b))
        if found is None or found in done:
            continue
        done.add(found)
        c = next(node for node in triangles[found] if node not in (a, b))
        if not known[c]:
            known[c] = True
            start, end = centres[a], centres[b]
            inscribed = (r[a] * r[b] * r[c] / (r[a] + r[b] + r[c])) ** 0.5
            half = complex(r[a], inscribed)
            turn = half * half / abs(half) ** 2
            centres[c] = start + (r[a] + r[c]) * turn * (end - start) / abs(end - start)
        todo += [(c, b), (a, c)]
    return centres
