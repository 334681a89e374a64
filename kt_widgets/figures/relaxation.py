"""Relaxation of a drawn map: strands even out, small faces grow, and no strand passes through another.

The strands become chains of points. Tension, bending and the wish of crossings to be square are one quadratic
form of the points; the pressure of the faces and a repulsion between near strands act against it. Each step
solves the quadratic form for the forces and goes a part of the way. The number of steps is fixed.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from kt_widgets.diagrams.planar_map import PlanarMap
from kt_widgets.figures.strands import Curves, Path, resampled

__all__ = ["relaxed"]

Floats: TypeAlias = NDArray[np.float64]
Indices: TypeAlias = NDArray[np.intp]

_STEPS = 100
# The part of the way to the solution that one step goes, and the part of the free room that it may use up.
_SHARE, _ROOM = 0.2, 0.45
# How far along the strands a point that has little room slows its neighbours down.
_SPREAD = 5
_TENSION, _BENDING, _SQUARENESS, _REPULSION = 1.0, 8.0, 3.0, 5.0
# With the mean area of a face as unit: how far repulsion reaches, and the area that pressure counts as small.
_REACH, _SMALL_AREA = 0.7, 0.1
_STRONGEST = 4.0
# Matrices of up to this size are inverted without threads.
_SMALL_MATRIX = 64
# Points of an edge between its crossings, for diagrams of up to so many crossings and for larger ones.
_INNER = ((10, 7), (30, 5))
_COARSE = 3
# Points drawn for each step of a chain: so many, and more where there are few crossings.
_DRAWN, _DRAWN_MOST, _DRAWN_IN_ALL = 4, 10, 96


@dataclass(frozen=True, eq=False)
class _Net:
    """Chains of points along the edges: indices only, the crossings first."""

    planar_map: PlanarMap
    chains: tuple[tuple[int, ...], ...]  # of each dart, from its crossing to the other end
    sides: Indices  # pairs of neighbours
    size: int

    def bends(self) -> Indices:
        """Triples of neighbours along a strand, through crossings too."""
        mate = self.planar_map.mate
        triples = [
            triple
            for dart, chain in enumerate(self.chains)
            if dart < mate[dart]
            for triple in zip(chain, chain[1:], chain[2:], strict=False)
        ]
        for dart, chain in enumerate(self.chains):
            if dart & 3 < 2:
                triples.append((chain[1], chain[0], self.chains[dart ^ 2][1]))
        return np.array(triples, dtype=np.intp)

    def squares(self) -> Indices:
        """The four points next to each crossing, counter-clockwise."""
        return np.array([chain[1] for chain in self.chains], dtype=np.intp).reshape(-1, 4)

    def cycles(self, outer: int) -> list[list[int]]:
        """The boundary of each face but the outer one, counter-clockwise."""
        return [
            [point for dart in walk for point in self.chains[dart][:-1]]
            for index, walk in enumerate(self.planar_map.faces)
            if index != outer
        ]


def _net(curves: Curves) -> tuple[_Net, Path]:
    """The chains of a drawn map, and where their points are at first."""
    mate = curves.planar_map.mate
    crossings = len(mate) // 4
    inner = next((points for most, points in _INNER if crossings <= most), _COARSE)
    points = [curves.crossing(index) for index in range(crossings)]
    chains: list[tuple[int, ...]] = [()] * len(mate)
    sides: list[tuple[int, int]] = []
    for dart in sorted(curves.paths):
        way = resampled(curves.path(dart), inner + 2)[1:-1]
        chain = (dart // 4, *range(len(points), len(points) + inner), mate[dart] // 4)
        points += way.tolist()
        chains[dart], chains[mate[dart]] = chain, chain[::-1]
        sides += pairwise(chain)
    net = _Net(curves.planar_map, tuple(chains), np.array(sides, dtype=np.intp), len(points))
    return net, np.array(points, dtype=np.complex128)


def _add_squares(form: Path, points: Indices, weights: Sequence[complex], scale: float) -> None:
    """Add to a Hermitian form scale times the sum of |sum of weights[k] z[points[:, k]]|^2."""
    for k, one in enumerate(weights):
        for m, other in enumerate(weights):
            np.add.at(form, (points[:, k], points[:, m]), scale * complex(one).conjugate() * other)


def _stiffness(net: _Net) -> Path:
    form = np.zeros((net.size, net.size), dtype=np.complex128)
    steps = len(net.chains[0]) - 1
    _add_squares(form, net.sides, (1, -1), _TENSION * steps)
    _add_squares(form, net.bends(), (1, -2, 1), _BENDING * steps**3 / 36)
    # A square crossing has its second diagonal a quarter turn ahead of the first.
    _add_squares(form, net.squares(), (-1j, 1, 1j, -1), _SQUARENESS * steps)
    return form


def _inverse(form: Path) -> Path:
    """The inverse of a positive definite Hermitian matrix, by halves.

    Small blocks and einsum keep it in one thread: threaded routines become fifty times slower, for matrices
    of these sizes, on a busy machine.
    """
    if len(form) <= _SMALL_MATRIX:
        return np.asarray(np.linalg.inv(form))
    half = len(form) // 2
    first = _inverse(form[:half, :half])
    corner = form[half:, :half].conj()
    across = np.einsum("ij,kj->ik", first, corner)
    rest = _inverse(form[half:, half:] - np.einsum("ij,kj->ik", corner.conj(), across.T))
    lower = -np.einsum("ij,kj->ik", rest, across.conj())
    return np.block([[first - np.einsum("ij,kj->ik", across, lower.T), lower.conj().T], [lower, rest]])


def _gathered(index: Indices, values: Path, size: int) -> Path:
    real = np.bincount(index, values.real, size)
    return np.asarray(real + 1j * np.bincount(index, values.imag, size))


def _squared_distances(points: Path, start: Path, end: Path) -> tuple[Floats, Floats]:
    """For each point (rows) and side (columns): the square of the distance, and where on the side it is met.

    Written with real numbers in place, since nearly all the time of a relaxation goes here.
    """
    along_x, along_y = end.real - start.real, end.imag - start.imag
    x = points.real[:, None] - start.real
    y = points.imag[:, None] - start.imag
    share = x * along_x
    share += y * along_y
    share /= along_x**2 + along_y**2
    np.clip(share, 0, 1, out=share)
    x -= share * along_x
    y -= share * along_y
    x *= x
    y *= y
    x += y
    return x, share


def relaxed(curves: Curves) -> Curves:
    """The same map with evened-out strands.

    No step moves a point by more than a fixed part of the distance to the nearest strand, so the chains never
    cross each other; the smooth curves through them are to be checked by the caller. Whatever rotational
    symmetry the curves have, they keep.

    Examples
    --------
    >>> from kt_widgets.figures.quality import is_embedded
    >>> from kt_widgets.figures.strands import curves_of_packing
    >>> trefoil = PlanarMap((9, 4, 7, 10, 1, 8, 11, 2, 5, 0, 3, 6))
    >>> is_embedded(relaxed(curves_of_packing(trefoil, 0)))
    True
    """
    net, points = _net(curves)
    form = _stiffness(net)
    # The form does not feel translations; adding their projection makes it invertible and keeps the mean.
    inverse = _inverse(form + 1 / net.size)
    steps = len(net.chains[0]) - 1
    cycles = net.cycles(curves.outer)
    at = np.array([point for cycle in cycles for point in cycle], dtype=np.intp)
    after = np.array([point for cycle in cycles for point in cycle[1:] + cycle[:1]], dtype=np.intp)
    before = np.array([point for cycle in cycles for point in cycle[-1:] + cycle[:-1]], dtype=np.intp)
    face = np.repeat(np.arange(len(cycles)), [len(cycle) for cycle in cycles])
    wanted = np.sqrt([max(len(cycle) / steps, 2.0) for cycle in cycles])
    start, end = net.sides.T
    # In a table with a row for each point, the entries of the sides that end there.
    own = np.concatenate([start, end]) * len(start) + np.tile(np.arange(len(start)), 2)

    def areas() -> Floats:
        return np.bincount(face, (points[at].conj() * points[after]).imag, len(cycles)) / 2

    points = points / np.sqrt(areas().mean())
    for _ in range(_STEPS):
        pressure = (wanted / (areas() + _SMALL_AREA))[face]
        force = _gathered(at, -0.5j * pressure * (points[after] - points[before]), net.size)
        square, share = _squared_distances(points, points[start], points[end])
        square.ravel()[own] = np.inf
        close = np.flatnonzero(square < _REACH**2)
        point, side = np.divmod(close, len(start))
        near, part = np.sqrt(square.ravel()[close]), share.ravel()[close]
        strength = _REPULSION / steps * np.minimum(_REACH / near - 1, _STRONGEST)
        apart = points[point] - (1 - part) * points[start[side]] - part * points[end[side]]
        push = strength * apart / near
        force += _gathered(point, push, net.size)
        force -= _gathered(start[side], (1 - part) * push, net.size)
        force -= _gathered(end[side], part * push, net.size)
        # The inverse of the form times the form leaves the points as they are, up to their mean.
        solution = np.einsum("ij,j->i", inverse, force)
        move = _SHARE * (solution - points + points.mean())
        room = np.sqrt(square.min(axis=1))
        nearest = np.sqrt(square.min(axis=0))
        np.minimum.at(room, start, nearest)
        np.minimum.at(room, end, nearest)
        slower = np.minimum(1, _ROOM * room / np.maximum(np.abs(move), 1e-300))
        # Neighbours slow down together, or the chain would crumple.
        for _ in range(_SPREAD):
            held = slower.copy()
            np.minimum.at(held, start, slower[end])
            np.minimum.at(held, end, slower[start])
            slower = held
        points = points + slower * move
    return _smooth(curves, net, points)


def _smooth(curves: Curves, net: _Net, points: Path) -> Curves:
    """Lead a periodic cubic spline through the points of each component."""
    mate = curves.planar_map.mate
    drawn = max(_DRAWN, min(_DRAWN_MOST, 4 * _DRAWN_IN_ALL // len(mate)))
    paths: dict[int, Path] = {}
    for first in sorted(curves.paths):
        if first in paths:
            continue
        way = [first]
        while (dart := mate[way[-1]] ^ 2) != first:
            way.append(dart)
        knots = [point for dart in way for point in net.chains[dart][:-1]]
        curve = _spline(points[knots], drawn)
        steps = drawn * (len(net.chains[0]) - 1)
        for position, dart in enumerate(way):
            path = curve[position * steps : (position + 1) * steps + 1]
            paths[min(dart, mate[dart])] = path if dart < mate[dart] else path[::-1]
    return Curves(curves.planar_map, curves.outer, paths)


def _spline(knots: Path, drawn: int) -> Path:
    """The closed cubic spline with uniform knots; its slopes solve a circulant system."""
    count = len(knots)
    circulant = 4 + 2 * np.cos(2 * np.pi * np.arange(count) / count)
    slopes = np.fft.ifft(np.fft.fft(3 * (np.roll(knots, -1) - np.roll(knots, 1))) / circulant)
    u = np.arange(drawn) / drawn
    curve = (
        np.outer(knots, (1 + 2 * u) * (1 - u) ** 2)
        + np.outer(slopes, u * (1 - u) ** 2)
        + np.outer(np.roll(knots, -1), u**2 * (3 - 2 * u))
        + np.outer(np.roll(slopes, -1), u**2 * (u - 1))
    ).ravel()
    return np.append(curve, curve[0])
