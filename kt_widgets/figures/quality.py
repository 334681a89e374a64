"""How good drawn curves are: no meetings but at crossings, room between strands, crossing angles."""

from __future__ import annotations

import numpy as np

from kt_widgets.figures.strands import Curves, Path, resampled

__all__ = ["clearance", "crossing_angle", "is_embedded", "score"]

_SAMPLES, _NEAR_CROSSING = 13, 3
_BLOCK = 256


def _extent(points: Path) -> float:
    return float(max(np.ptp(points.real), np.ptp(points.imag)))


def clearance(curves: Curves) -> float:
    """The smallest distance between two edges, as a part of the size of the picture.

    Of two edges that share a crossing only the middle halves count.
    """
    mate, darts = curves.planar_map.mate, sorted(curves.paths)
    points = np.concatenate([resampled(curves.paths[dart], _SAMPLES) for dart in darts])
    ends = np.array([(dart // 4, mate[dart] // 4) for dart in darts])
    adjacent = (ends[:, None, :, None] == ends[None, :, None, :]).any(axis=(2, 3))
    x, y = points.real.astype(np.float32), points.imag.astype(np.float32)
    square = (x[:, None] - x) ** 2 + (y[:, None] - y) ** 2
    between = square.reshape(len(darts), _SAMPLES, len(darts), _SAMPLES)
    near = slice(_NEAR_CROSSING, -_NEAR_CROSSING)
    distance = np.where(adjacent, between[:, near, :, near].min(axis=(1, 3)), between.min(axis=(1, 3)))
    np.fill_diagonal(distance, np.inf)
    least = float(np.sqrt(distance.min()))
    # One crossing with two loops has no two edges without a common crossing; there the size is the room.
    return min(1.0, least / _extent(points))


def crossing_angle(curves: Curves) -> float:
    """The smallest angle in degrees between neighbours at a crossing, seen a fiftieth of the size away."""
    mate = curves.planar_map.mate
    reach = _extent(curves.points()) / 50
    least = 90.0
    for crossing in range(len(mate) // 4):
        ahead = []
        for slot in range(4):
            path = curves.path(4 * crossing + slot)
            away = np.abs(path - path[0])
            far = np.flatnonzero(away >= reach)
            ahead.append(path[far[0] if len(far) else len(path) // 2] - path[0])
        for slot in range(4):
            turn = np.angle(ahead[(slot + 1) % 4] / ahead[slot], deg=True) % 360
            least = min(least, float(turn))
    return least


def is_embedded(curves: Curves) -> bool:
    """Whether the drawn polygons meet at the crossings only, in the right order round each of them.

    Examples
    --------
    >>> from kt_widgets.diagrams.planar_map import PlanarMap
    >>> from kt_widgets.figures.strands import curves_of_packing
    >>> is_embedded(curves_of_packing(PlanarMap((1, 0, 3, 2)), 0))
    True
    """
    starts, ends, names_start, names_end = [], [], [], []
    mate = curves.planar_map.mate
    fresh = len(mate) // 4
    for dart in sorted(curves.paths):
        path = curves.paths[dart]
        inner = list(range(fresh, fresh + len(path) - 2))
        fresh += len(inner)
        names = [dart // 4, *inner, mate[dart] // 4]
        starts.append(path[:-1])
        ends.append(path[1:])
        names_start += names[:-1]
        names_end += names[1:]
    start, end = np.concatenate(starts), np.concatenate(ends)
    one, other = np.array(names_start), np.array(names_end)
    # Two segments cross where each has the other's ends on different sides.
    apart = np.empty((len(start), len(start)), dtype=bool)
    for low in range(0, len(start), _BLOCK):
        block = slice(low, low + _BLOCK)
        along = (end - start)[block, None]
        offset = along.real * start.imag[block, None] - along.imag * start.real[block, None]
        side_of_start = along.real * start.imag - along.imag * start.real - offset
        side_of_end = along.real * end.imag - along.imag * end.real - offset
        apart[block] = side_of_start * side_of_end <= 0
    i, j = np.divmod(np.flatnonzero(apart & apart.T), len(start))
    # Segments of one straight line pass that test, up to rounding, though they lie far from each other.
    reach = np.abs(end - start) / 2
    near = np.abs((start + end)[i] - (start + end)[j]) / 2 <= reach[i] + reach[j]
    i, j = i[near], j[near]
    if not ((one[i] == one[j]) | (one[i] == other[j]) | (other[i] == one[j]) | (other[i] == other[j])).all():
        return False
    return all(_turns_once(curves, crossing) for crossing in range(len(mate) // 4))


def _turns_once(curves: Curves, crossing: int) -> bool:
    """Whether the four edges leave a crossing counter-clockwise, turning once in all."""
    ahead = []
    for slot in range(4):
        path = curves.path(4 * crossing + slot)
        ahead.append(complex(path[1] - path[0]))
    turns = [np.angle(ahead[(slot + 1) % 4] / ahead[slot]) % (2 * np.pi) for slot in range(4)]
    return bool(min(turns) > 0 and abs(sum(turns) - 2 * np.pi) < 1e-6)


def score(curves: Curves) -> float:
    """Room times min(1, angle / 45 degrees); larger is better."""
    return clearance(curves) * min(1.0, crossing_angle(curves) / 45)
