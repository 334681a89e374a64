"""Checks of a finished scene, from what is drawn alone: collisions, room, and the diagram that one sees."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import combinations, pairwise

import numpy as np

from kt_widgets.errors import KtError
from kt_widgets.figures.presets import arrow_outline, label_box, preset_named, style
from kt_widgets.figures.scene import Arrow, Dot, Label, Scene, Stroke
from kt_widgets.figures.strands import Path

__all__ = ["label_collisions", "meetings", "read_gauss", "room_between_strands"]

_Box = tuple[float, float, float, float]


def _path(stroke: Stroke) -> Path:
    points = [complex(x, y) for x, y in stroke.points]
    if stroke.closed:
        points.append(points[0])
    # Rounding may have made neighbours equal.
    return np.array([points[0], *(after for before, after in pairwise(points) if after != before)])


def _strands(scene: Scene) -> dict[str, Path]:
    return {i.id: _path(i) for i in scene.items if isinstance(i, Stroke) and i.role == "strand"}


def _crossings_of(one: Path, other: Path) -> Iterator[tuple[int, int, float, float]]:
    """Where two polygons cross: the segments of both, and how far along each of these (0 to 1)."""
    start, along = one[:-1, None], np.diff(one)[:, None]
    begin, ahead = other[:-1], np.diff(other)
    across = (along.conj() * ahead).imag
    offset = begin - start
    with np.errstate(divide="ignore", invalid="ignore"):
        s = (offset.conj() * ahead).imag / across
        t = (offset.conj() * along).imag / across
        # Coordinates are multiples of 0.01, so a cross product below this is 0: the sides are parallel.
        hit = (np.abs(across) > 1e-6) & (s >= 0) & (s <= 1) & (t >= 0) & (t <= 1)
    for i, j in zip(*np.nonzero(hit), strict=True):
        yield int(i), int(j), float(s[i, j]), float(t[i, j])


def meetings(scene: Scene) -> list[tuple[str, str]]:
    """The pairs of strands that touch or cross, which none should, since under-strands have gaps.

    Examples
    --------
    >>> cross = (Stroke("arc:1", ((0, 0), (9, 9)), "strand"), Stroke("arc:2", ((0, 9), (9, 0)), "strand"))
    >>> meetings(Scene(cross, 9, 9))
    [('arc:1', 'arc:2')]
    """
    strands = _strands(scene)
    found = [
        (one, other)
        for one, other in combinations(strands, 2)
        if next(_crossings_of(strands[one], strands[other]), None)
    ]
    for name, path in strands.items():
        last = len(path) - 2
        closed = path[0] == path[-1]
        for i, j, _, _ in _crossings_of(path, path):
            if abs(i - j) > 1 and not (closed and {i, j} == {0, last}):
                found.append((name, name))
                break
    return found


def room_between_strands(scene: Scene) -> float:
    """The smallest distance, in points, between the middle parts of two different strands.

    The last tenth at each end of a strand, which goes up to a gap, is left out.
    """
    strands = [path[len(path) // 10 : len(path) - len(path) // 10] for path in _strands(scene).values()]
    return min((_distance(one, other) for one, other in combinations(strands, 2)), default=float("inf"))


def _distance(one: Path, other: Path) -> float:
    return float(np.abs(one[:, None] - other).min())


def label_collisions(scene: Scene) -> list[str]:
    """What collides with a label, in words: strands, arrows, other labels, the frame. Empty is good.

    Examples
    --------
    >>> label_collisions(Scene((Label("arc:1", "$a$", (1, 5)),), 10, 10))
    ['label arc:1 leaves the frame']
    """
    preset = preset_named(scene.preset)
    labels = [(item.id, label_box(item, preset)) for item in scene.items if isinstance(item, Label)]
    found = []
    for name, (left, low, right, high) in labels:
        if left < -0.01 or low < -0.01 or right > scene.width + 0.01 or high > scene.height + 0.01:
            found.append(f"label {name} leaves the frame")
    for (one, a), (other, b) in combinations(labels, 2):
        if a[0] < b[2] and b[0] < a[2] and a[1] < b[3] and b[1] < a[3]:
            found.append(f"label {one} overlaps label {other}")
    for item in scene.items:
        for name, box in labels:
            if isinstance(item, Stroke):
                path, half = _path(item), preset.line * style(item.role).line / 2
            elif isinstance(item, Arrow):
                path, half = np.array([complex(*corner) for corner in arrow_outline(item, preset)]), 0.0
            else:
                continue
            if _box_distance(box, path) < half:
                found.append(f"label {name} overlaps {item.role} {item.id}")
    return found


def _box_distance(box: _Box, path: Path) -> float:
    """The distance from a box to a polygon, sampled finely."""
    parts = [np.linspace(a, b, 9) for a, b in pairwise(path)]
    points = np.concatenate(parts)
    x = np.maximum(np.maximum(box[0] - points.real, points.real - box[2]), 0)
    y = np.maximum(np.maximum(box[1] - points.imag, points.imag - box[3]), 0)
    return float(np.hypot(x, y).min())


def read_gauss(scene: Scene) -> tuple[tuple[tuple[int, ...], ...], tuple[int, ...]]:
    """The signed Gauss code that a reader of the picture of a diagram finds.

    Each strand's end is joined straight on to the next strand's start; that bridge must cross just one
    strand, and their directions give the sign. Crossings are numbered by the discs of the scene. Components
    are in the order of their lowest arc, from that arc's start; those without crossings are empty.

    Raises
    ------
    KtError
        If an end has no continuation, or a bridge crosses no strand or several.
    """
    strands = _strands(scene)
    numbers = {item.id: complex(*item.position) for item in scene.items if isinstance(item, Dot)}
    closed = {item.id for item in scene.items if isinstance(item, Stroke) and item.closed}
    after = {name: _continuation(name, strands, closed) for name in strands if name not in closed}
    over: dict[str, list[tuple[float, int]]] = {name: [] for name in strands}
    under: dict[str, int] = {}
    signs: dict[int, int] = {}
    for name, follower in after.items():
        bridge = np.array([strands[name][-1], strands[follower][0]])
        # A strand has a corner just where it crosses, so two of its sides may be hit in one point.
        hits = {
            (other, round(j + t, 6)): np.diff(path)[j]
            for other, path in strands.items()
            for _, j, s, t in _crossings_of(bridge, path)
            if 0.01 < s < 0.99  # the bridge stands on its own two strands
        }
        if len(hits) != 1:
            raise KtError(
                f"the end of {name} goes on under {len(hits)} strands", where=name, accepted="one strand"
            )
        (other, at), ahead = next(iter(hits.items()))
        point = bridge.mean()
        number = int(min(numbers, key=lambda disc: abs(numbers[disc] - point)).split(":")[1])
        # Positive: counter-clockwise from the over-strand's direction to the under-strand's.
        signs[number] = 1 if (ahead.conjugate() * (bridge[1] - bridge[0])).imag > 0 else -1
        over[other].append((at, number))
        under[name] = number
    components = []
    seen: set[str] = set()
    for name in strands:
        if name in seen:
            continue
        code: list[int] = []
        here = name
        while here not in seen:
            seen.add(here)
            code += [number for _, number in sorted(over[here])]
            if here in under:
                code.append(-under[here])
                here = after[here]
        components.append(tuple(code))
    return tuple(components), tuple(signs[number] for number in sorted(signs))


def _continuation(name: str, strands: dict[str, Path], closed: set[str]) -> str:
    """The strand that goes on where this one ends: the nearest start ahead."""
    end = strands[name][-1]
    ahead = end - strands[name][-2]
    candidates = {}
    for other, path in strands.items():
        step = path[0] - end
        if other not in closed and (step.conjugate() * ahead).real > 0:
            candidates[other] = abs(step)
    if not candidates:
        raise KtError(f"{name} ends with nothing ahead of it", where=name, accepted="a strand that goes on")
    return min(candidates, key=lambda other: candidates[other])
