"""The figure of an infinite cyclic cover: a strip of lifted edges, and boundaries of 2-cells traced on it."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from kt_widgets.covers.cover import Cover
from kt_widgets.errors import KtError
from kt_widgets.figures.arrange import moved
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.lettering import extent
from kt_widgets.figures.presets import PALETTE, Preset, label_size, preset_named
from kt_widgets.figures.scene import Arrow, Dot, Item, Label, Point, Region, Scene, Stroke
from kt_widgets.figures.tables import typeset
from kt_widgets.groups.fox import Visit
from kt_widgets.places import Place
from kt_widgets.text.printing import lift_text, name_text, word_text

__all__ = ["MAX_EDGES", "MAX_WINDOW", "cover", "cover_scene"]

MAX_EDGES = 16
"""With more generators only those that the traced boundaries pass are drawn."""

MAX_WINDOW = 60
"""The longest window drawn: more vertices than this leave no room for the edges between them."""

# Parts of a length, the ones that look best first.
_NAMES = tuple(0.5 + sign * 0.02 * i for i in range(14) for sign in (1, -1))
_HEADS = tuple(0.7 + sign * 0.02 * i for i in range(12) for sign in (1, -1))
_NUMBERS = tuple(0.26 + sign * 0.02 * i for i in range(8) for sign in (1, -1))
_TALLEST = 1.5

# The angle between a fan's outermost arc and the line; at 90 degrees it would touch the next fan.
_STEEPEST = math.radians(84)
_SAMPLES = 36
_LONGEST = 12  # letters of a relator in the title

Path = tuple[Point, ...]


@dataclass(frozen=True)
class _Edge:
    """How the lifts of one generator are drawn: `path` is the lift that starts at t^0 e, with e at (0, 0).

    `slot` counts a fan's arcs from above (None for arches and loops), `angle` is the angle between an arc and
    the next one. The name and the arrow head stand after these parts of the length.
    """

    generator: str
    weight: int
    path: Path
    slot: int | None = None
    angle: float = 0.0
    name_at: float = 0.5
    head_at: float = 0.7


@dataclass(frozen=True)
class _Strip:
    """The measures of one strip: the distance between vertices, the window, and an `_Edge` per generator."""

    spacing: float
    lo: int
    hi: int
    origin: Point
    edges: Mapping[str, _Edge]
    preset: Preset

    @property
    def near(self) -> float:
        """The radius around a vertex within which traces turn."""
        return min(0.15 * self.spacing, 2.2 * self.preset.label)

    def vertex(self, k: int) -> Point:
        return self.origin[0] + (k - self.lo) * self.spacing, self.origin[1]

    def path(self, generator: str, k: int) -> Path:
        x, y = self.vertex(k)
        return tuple((x + u, y + v) for u, v in self.edges[generator].path)

    @cached_property
    def ink(self) -> NDArray[np.float64]:
        """Points along all edges shown, and round their names."""
        powers = range(self.lo, self.hi + 1)
        lifts = [(g, self.path(g, k)) for g in self.edges for k in powers if self.shows(g, k)]
        lines = [_fine(path, 0.4 * self.preset.label) for _, path in lifts]
        names = [_box(_at(path, self.edges[g].name_at)[0], self.preset) for g, path in lifts]
        return np.vstack([np.empty((0, 2)), *lines, *names])

    def shows(self, generator: str, k: int) -> bool:
        return self.lo <= min(k, k + self.edges[generator].weight) and (
            max(k, k + self.edges[generator].weight) <= self.hi
        )


# Curves -------------------------------------------------------------------------------------------------


def _arc(length: float, angle: float) -> Path:
    """The circular arc from (0, 0) to (length, 0) that leaves the line at `angle`, upwards if positive."""
    if abs(angle) < 1e-6:
        return tuple((length * i / _SAMPLES, 0.0) for i in range(_SAMPLES + 1))
    radius = length / (2 * math.sin(angle))
    low = -radius * math.cos(angle)
    turns = (angle * (1 - 2 * i / _SAMPLES) for i in range(_SAMPLES + 1))
    return tuple((length / 2 - radius * math.sin(a), low + radius * math.cos(a)) for a in turns)


def _bezier(start: Point, first: Point, second: Point, end: Point, samples: int = _SAMPLES) -> Path:
    points = []
    for i in range(samples + 1):
        u = i / samples
        a, b, c, d = (1 - u) ** 3, 3 * u * (1 - u) ** 2, 3 * u * u * (1 - u), u**3
        points.append(
            (
                a * start[0] + b * first[0] + c * second[0] + d * end[0],
                a * start[1] + b * first[1] + c * second[1] + d * end[1],
            )
        )
    return tuple(points)


def _arch(length: float, height: float) -> Path:
    """A flat arch from (0, 0) to (length, 0), of that height, which may be negative."""
    side = math.copysign(0.12 * abs(length), length)
    return _bezier((0, 0), (side, height * 4 / 3), (length - side, height * 4 / 3), (length, 0))


def _teardrop(height: float, spread: float) -> Path:
    """A loop at (0, 0) that leaves to the right of the vertical and comes back on its left."""
    reach = height * 4 / 3
    return _bezier((0, 0), (spread * abs(reach), reach), (-spread * abs(reach), reach), (0, 0))


def _lengths(path: Path) -> list[float]:
    found = [0.0]
    for (x0, y0), (x1, y1) in pairwise(path):
        found.append(found[-1] + math.hypot(x1 - x0, y1 - y0))
    return found


def _at(path: Path, part: float) -> tuple[Point, Point]:
    """The point after that part of a path's length, and the direction there."""
    lengths = _lengths(path)
    target = part * lengths[-1]
    i = next(
        (i for i in range(1, len(path)) if lengths[i] >= target and lengths[i] > lengths[i - 1]),
        len(path) - 1,
    )
    (x0, y0), (x1, y1) = path[i - 1], path[i]
    step = (lengths[i] - lengths[i - 1]) or 1.0
    u = (target - lengths[i - 1]) / step
    return (x0 + u * (x1 - x0), y0 + u * (y1 - y0)), ((x1 - x0) / step, (y1 - y0) / step)


def _spots(path: Path, parts: NDArray[np.float64]) -> NDArray[np.float64]:
    """The points after these parts of a path's length."""
    points = np.array(path)
    lengths = np.concatenate(([0.0], np.hypot(*np.diff(points, axis=0).T).cumsum()))
    return np.column_stack([np.interp(parts * lengths[-1], lengths, line) for line in points.T])


def _fine(path: Path, step: float) -> NDArray[np.float64]:
    """Points along a path, about `step` apart."""
    return _spots(path, np.linspace(0, 1, math.ceil(_lengths(path)[-1] / step) + 1))


def _clearest(path: Path, parts: Sequence[float], taken: NDArray[np.float64], enough: float) -> float:
    """The first part of a path's length that is `enough` away from the points taken, else the clearest."""
    spots = _spots(path, np.array(parts))
    low, high = spots.min(axis=0) - enough, spots.max(axis=0) + enough
    taken = taken[((low < taken) & (taken < high)).all(axis=1)]
    away = ((spots[:, None, :] - taken[None, :, :]) ** 2).sum(axis=2).min(axis=1, initial=enough**2)
    # Rounded, so that equals stay equal on every machine.
    return parts[int(np.argmax(np.round(away, 3)))]


def _box(spot: Point, preset: Preset) -> NDArray[np.float64]:
    """The corners of a letter's box."""
    corners = [(u, v) for u in (-0.45, 0.45) for v in (-0.3, 0.3)]
    return np.array(spot) + preset.label * np.array(corners)


def _cut(path: Path, start: float, end: float) -> Path:
    """The part of a path between two parts of its length."""
    lengths = _lengths(path)
    inside = [p for p, s in zip(path, lengths, strict=True) if start * lengths[-1] < s < end * lengths[-1]]
    return (_at(path, start)[0], *inside, _at(path, end)[0])


def _broken(path: Path, part: float, gap: float) -> tuple[Path, ...]:
    """The path with a gap of that length around `part`; whole where it is too short for that."""
    half = gap / 2 / (_lengths(path)[-1] or 1.0)
    if part - half < 0.04 or part + half > 0.96:
        return (path,)
    return _cut(path, 0, part - half), _cut(path, part + half, 1)


# Where the edges run ------------------------------------------------------------------------------------


def _edges(
    weights: Mapping[str, int], spacing: float, preset: Preset, crowd: Mapping[str, int]
) -> dict[str, _Edge]:
    """Weight one: a fan of arcs, the first generator uppermost. Larger: arches outside it. Zero: loops.

    Edges that traces pass several times (`crowd`) get more room.
    """
    fan = [g for g, w in weights.items() if abs(w) == 1]
    wide = sorted((g for g, w in weights.items() if abs(w) > 1), key=lambda g: abs(weights[g]))
    loops = [g for g, w in weights.items() if w == 0]
    found: dict[str, _Edge] = {}

    lanes = sum(crowd.get(g, 0) for g in fan)
    opened = math.radians(20 + 18 * (len(fan) - 1) + 10 * max(lanes - len(fan), 0))
    steepest = min(_STEEPEST, opened) if len(fan) > 1 else 0.0
    between = 2 * steepest / (len(fan) - 1) if len(fan) > 1 else math.radians(60)
    # A fan of many arcs is taller than half circles, for the letters between them.
    tall = min(max(1.5 * preset.label * len(fan) / spacing, 1.0), _TALLEST)
    name, turn, head = (0.5, 0.06, 0.74) if spacing > 5 * preset.label else (0.37, 0.0, 0.85)
    for i, g in enumerate(fan):
        arc = tuple((x, tall * y) for x, y in _arc(spacing, steepest - i * between))
        if weights[g] < 0:
            arc = tuple((x - spacing, y) for x, y in reversed(arc))
        # Names of close arcs take turns.
        found[g] = _Edge(
            g, weights[g], arc, i, between * tall, name + turn * (i % 3 - 1) * (len(fan) > 4), head
        )

    sides = {1: tall * spacing / 2 * math.tan(steepest / 2), -1: tall * spacing / 2 * math.tan(steepest / 2)}
    tops = dict.fromkeys(sides, 0.0)
    for i, g in enumerate(loops):
        side = 1 if i % 2 == 0 else -1
        room = 4.2 + 1.3 * max(crowd.get(g, 0) - 1, 0)
        height = max(tops[side] * 1.45, min(0.5 * spacing, room * preset.label))
        tops[side] = height
        found[g] = _Edge(g, 0, _teardrop(side * height, 0.8))

    step = 2.6 * preset.label
    for side, top in tops.items():
        sides[side] = max(sides[side], top + 0.8 * step if top else 0.0)
    for i, g in enumerate(wide):
        side = 1 if i % 2 == 0 else -1
        sides[side] += step * (1.0 if sides[side] else 1.6)
        # Lifts of a flat arch would cross each other at small angles.
        height = sides[side] + 0.1 * abs(weights[g]) * spacing
        found[g] = _Edge(g, weights[g], _arch(weights[g] * spacing, side * height))
    return _marked({g: found[g] for g in weights}, spacing, preset)


def _marked(edges: Mapping[str, _Edge], spacing: float, preset: Preset) -> dict[str, _Edge]:
    """Put the names and arrow heads of arches where they are clear of all other lifts."""
    found = dict(edges)
    reach = max((abs(e.weight) for e in edges.values()), default=0)
    for g, edge in edges.items():
        if abs(edge.weight) < 2:
            continue
        lifts = [
            tuple((x + k * spacing, y) for x, y in other.path)
            for h, other in edges.items()
            for k in range(-reach, reach + 1)
            if (h, k) != (g, 0)
        ]
        taken = np.vstack([_fine(lift, 0.4 * preset.label) for lift in lifts])
        middle = _clearest(edge.path, _NAMES, taken, 1.1 * preset.label)
        name = _box(_at(edge.path, middle)[0], preset)
        head = _clearest(edge.path, _HEADS, np.vstack([taken, name]), 0.9 * preset.label)
        found[g] = replace(edge, name_at=middle, head_at=head)
    return found


# The trace of a boundary --------------------------------------------------------------------------------


def _forward(visit: Visit, edge: _Edge) -> bool:
    """Whether the letter moves to the right along the strip (a loop is run through as it is drawn)."""
    return visit.sign * edge.weight > 0 if edge.weight else visit.sign > 0


def _lanes(visits: Sequence[Visit], edges: Mapping[str, _Edge]) -> list[tuple[int, float]]:
    """For each letter: how many earlier ones have its edge on the same side, and its share of the room there.

    The room between two neighbouring arcs of a fan is divided evenly among the lanes that lie in it, of
    the upper arc (run through to the right) and of the lower one (to the left).
    """
    rooms = [
        (v.generator, v.exponent, forward)
        if (slot := edges[v.generator].slot) is None
        else (min(v.start, v.end), slot + forward)
        for v in visits
        for forward in [_forward(v, edges[v.generator])]
    ]
    used, crowd = Counter[tuple[str, int, int]](), Counter[tuple[object, ...]](rooms)
    found = []
    for visit, room in zip(visits, rooms, strict=True):
        key = (visit.generator, visit.exponent, visit.sign)
        found.append((used[key], (used[key] + 1) / (crowd[room] + 1)))
        used[key] += 1
    return found


def _smaller(a: float, b: float) -> float:
    """A smooth minimum of two positive numbers, so that a lane has no corner."""
    return a * b / (a**4 + b**4) ** 0.25 if a > 0 and b > 0 else 0.0


def _lane(strip: _Strip, visit: Visit, rank: int, share: float) -> Path:
    """The letter's way along its edge, on its right, trimmed near the vertices."""
    edge = strip.edges[visit.generator]
    path = strip.path(visit.generator, visit.exponent)
    if visit.sign < 0:
        path = path[::-1]
    wanted = strip.preset.label * (0.75 + 0.8 * rank)
    points: list[Point] = []
    for i, (x, y) in enumerate(path):
        (x0, y0), (x1, y1) = path[max(i - 1, 0)], path[min(i + 1, len(path) - 1)]
        step = math.hypot(x1 - x0, y1 - y0) or 1.0
        away = min(math.dist((x, y), path[0]), math.dist((x, y), path[-1]))
        # Two arcs of a fan that leave a vertex at this angle are about this far apart.
        room = edge.angle * away * max(1 - away / strip.spacing, 0.5) if edge.angle else 0.7 * away
        offset = _smaller(wanted, share * room)
        points.append((x + offset * (y1 - y0) / step, y - offset * (x1 - x0) / step))
    near = min(strip.near / _lengths(tuple(points))[-1], 0.3)
    return _cut(tuple(points), near, 1 - near)


def _turn(before: Path, after: Path, centre: Point) -> Path:
    """A smooth turn at a vertex from the end of one lane to the start of the next."""
    (_, arriving), (_, leaving) = _at(before, 1.0), _at(after, 0.0)
    start, end = before[-1], after[0]
    reach = 0.62 * max(math.dist(start, centre), math.dist(end, centre))
    return _bezier(
        start,
        (start[0] + reach * arriving[0], start[1] + reach * arriving[1]),
        (end[0] - reach * leaving[0], end[1] - reach * leaving[1]),
        end,
        16,
    )


def _trace(strip: _Strip, visits: Sequence[Visit]) -> list[Item]:
    """The boundary of a lifted 2-cell, letter by letter: a stroke, a number and an arrow head for each."""
    preset = strip.preset
    lanes = [_lane(strip, v, *lane) for v, lane in zip(visits, _lanes(visits, strip.edges), strict=True)]
    turns = [
        _turn(lane, lanes[(i + 1) % len(lanes)], strip.vertex(visits[i].end)) for i, lane in enumerate(lanes)
    ]
    outline = [point for lane, turn in zip(lanes, turns, strict=True) for point in (*lane, *turn[1:-1])]
    items: list[Item] = [Region(str(visits[0].cell), tuple(outline), "cell", z=-1)]
    taken = [strip.ink, *(_fine(lane, 0.4 * preset.label) for lane in lanes)]
    for i, (visit, lane) in enumerate(zip(visits, lanes, strict=True)):
        name = str(visit.letter)
        text = str(visit.position)
        size = extent(text, label_size("number", preset))
        others = np.vstack([points for j, points in enumerate(taken) if j != i + 1])
        number = _clearest(lane, _NUMBERS, others, 0.5 * preset.label)
        first, *rest = _broken(lane, number, size.width + 0.5 * preset.label)
        # A letter brings the turn towards it; the last one also brings the turn back to the start.
        pieces = [(*turns[i - 1], *first[1:]) if i else first, *rest]
        if i == len(lanes) - 1:
            pieces[-1] = (*pieces[-1], *turns[i][1:])
        items += [Stroke(name, piece, "trace", z=3) for piece in pieces]
        tip, direction = _at(lane, 0.8)
        items.append(Arrow(name, tip, direction, "trace", z=3))
        if rest:
            spot = _at(lane, number)[0]
            items.append(Label(name, text, spot, "number", z=4))
            taken.append(_box(spot, preset))
    return items


# The scene ----------------------------------------------------------------------------------------------


def _window(
    visits: Iterable[Visit], weights: Mapping[str, int], lo: int | None, hi: int | None
) -> tuple[int, int]:
    for name, end in (("lo", lo), ("hi", hi)):
        if end is not None and (not isinstance(end, int) or isinstance(end, bool)):
            raise KtError(f"{end!r} is not a power of t", where=name, accepted="a whole number")
    ends = [end for v in visits for end in (v.start, v.end)] or [0, *weights.values()]
    low, high = (min(0, *ends) if lo is None else lo), (max(1, *ends) if hi is None else hi)
    if not 1 <= high - low <= MAX_WINDOW:
        raise KtError(
            f"the window from t^{low} to t^{high} cannot be drawn",
            where="lo, hi",
            accepted=f"1 to {MAX_WINDOW} edges' length between lo and hi",
        )
    return low, high


def cover_scene(
    x: Cover,
    relators: Sequence[int] = (),
    lo: int | None = None,
    hi: int | None = None,
    preset: str = "screen",
    title: str = "",
    colours: Mapping[str, int] | None = None,
) -> Scene:
    """The strip of an infinite cyclic cover, with the boundaries of the 2-cells that start at e traced on it.

    Every trace is laid out by itself: a page that holds several shows one at a time.

    Parameters
    ----------
    x : Cover
    relators : sequence of int
        The numbers (from 1) of the relators to be traced.
    lo, hi : int, optional
        The powers of t at the ends; otherwise what the traces need.
    preset : str
    title : str, optional
        What stands above; otherwise nothing.
    colours : mapping, optional
        The colour index of each generator; otherwise they are counted.

    Raises
    ------
    KtError
        If `x` is no cover, or the window or a relator cannot be drawn.
    """
    if not isinstance(x, Cover):
        raise KtError(
            f"an object of type {type(x).__name__} is not a cover",
            accepted="a Cover, such as d.cover() of a diagram d, or kt.Cover(presentation)",
        )
    look = preset_named(preset)
    traces = {r: tuple(x.visits(r)) for r in relators}
    traces = {r: visits for r, visits in traces.items() if visits}
    visits = [v for trace in traces.values() for v in trace]
    passed = {v.generator for v in visits}
    weights = dict(x.weights)
    left_out = len(weights) - len(passed) if passed and len(weights) > MAX_EDGES else 0
    if left_out:
        weights = {g: w for g, w in weights.items() if g in passed}
    low, high = _window(visits, weights, lo, hi)
    outside = [v for v in visits if not (low <= min(v.start, v.end) and max(v.start, v.end) <= high)]
    if outside:
        raise KtError(
            f"the window from t^{low} to t^{high} does not hold the boundary to be traced",
            where=str(outside[0].letter),
            accepted=f"lo at most {min(min(v.start, v.end) for v in visits)} and hi at least "
            f"{max(max(v.start, v.end) for v in visits)}",
        )

    margin = 3.2 * look.label
    fan = sum(abs(w) == 1 for w in weights.values())
    spacing = min((look.width - 2 * margin) / (high - low), look.label * max(11.0, 1.35 * fan))
    # A long strip is wider than the column rather than illegible.
    spacing = max(spacing, 3.4 * look.label)
    crowds = [Counter((v.generator, v.exponent) for v in trace) for trace in traces.values()]
    crowd: dict[str, int] = {}
    for found in crowds:
        for (g, _), times in found.items():
            crowd[g] = max(crowd.get(g, 0), times)
    strip = _Strip(spacing, low, high, (margin, 0.0), _edges(weights, spacing, look, crowd), look)
    items: list[Item] = []
    for i, (g, edge) in enumerate(strip.edges.items()):
        # Black, the last of the palette, is for the trace.
        tint = (i if colours is None else colours[g]) % (len(PALETTE) - 1)
        for k in range(low, high + 1):
            if strip.shows(g, k):
                items += _edge_items(strip, edge, k, tint)
    for trace in traces.values():
        items += _trace(strip, trace)
    heights = [y for item in items if isinstance(item, Stroke) for _, y in item.points]
    rail = min(heights, default=0.0) - 0.9 * look.label
    items += _rail_items(strip, rail)
    width, top = 2 * margin + (high - low) * spacing, max(heights, default=0.0) + 0.9 * look.label
    if title:
        items.append(Label("title", title, (width / 2, top + 0.7 * look.label), "caption"))
        top += 1.6 * look.label
    bottom = rail - 2 * look.label
    items = [moved(item, 0, -bottom) for item in items]
    names = ", ".join(f"{g} of weight {w}" for g, w in weights.items())
    words = f"Vertices t^k e on a line for k from {low} to {high}, joined by the lifts of the edges {names}."
    for r, trace in traces.items():
        words += f" The boundary of the lift of r{r} at e: {word_text((v.generator, v.sign) for v in trace)}."
    if left_out:
        words += f" {left_out} generators that do not occur there are left out."
    return Scene(tuple(items), width, top - bottom, "infinite cyclic cover", words, preset)


def _edge_items(strip: _Strip, edge: _Edge, k: int, tint: int) -> list[Item]:
    """One lifted edge: its line, an arrow head, and its name in a gap of the line where there is room."""
    preset = strip.preset
    name, path, text = (
        str(Place("edge", (edge.generator, k))),
        strip.path(edge.generator, k),
        _maths(edge.generator),
    )
    pieces: tuple[Path, ...] = (path,)
    items: list[Item] = []
    if not edge.angle or edge.angle * strip.spacing / 4 > 0.6 * preset.label:
        size = extent(text, label_size("label", preset))
        pieces = _broken(path, edge.name_at, size.width + 0.5 * preset.label)
        if len(pieces) == 2:
            items.append(Label(name, text, _at(path, edge.name_at)[0], "label", z=2, colour_index=tint))
    tip, direction = _at(path, edge.head_at)
    return [
        *(Stroke(name, piece, "edge", z=1, colour_index=tint) for piece in pieces),
        Arrow(name, tip, direction, "edge", z=1, colour_index=tint),
        *items,
    ]


def _maths(name: str) -> str:
    return f"${name_text(name, 'latex')}$"


def _rail_items(strip: _Strip, rail: float) -> list[Item]:
    """The vertices, the rail with their names, and the dots that say that the strip goes on."""
    size = strip.preset.label
    (left, y), (right, _) = strip.vertex(strip.lo), strip.vertex(strip.hi)
    items: list[Item] = [Stroke("rail", ((left - 2 * size, rail), (right + 2 * size, rail)), "rail")]
    for k in range(strip.lo, strip.hi + 1):
        name, (x, _) = str(Place("vertex", (k,))), strip.vertex(k)
        items += [
            Stroke(name, ((x, y), (x, rail)), "dropline"),
            Stroke(name, ((x, rail), (x, rail - 0.35 * size)), "rail"),
            Dot(name, (x, y), "vertex", z=5),
            Label(name, f"${lift_text(k, 'e', 'latex')}$", (x, rail - 1.1 * size)),
        ]
    for end, side in ((left, -1), (right, 1)):
        items += [Dot("more", (end + side * (1.2 + 0.55 * i) * size, y), "more") for i in range(3)]
    return items


def cover(
    x: Cover, trace: int | str | None = 1, lo: int | None = None, hi: int | None = None, preset: str = "paper"
) -> Drawing:
    """Draw the infinite cyclic cover as a strip, with the boundary of one lifted 2-cell traced on it.

    Vertices t^k e stand on a line; edges of weight one fan out between neighbours, larger weights arch
    over, weight 0 makes a loop. The trace runs on the right of each edge, its letters numbered in order.

    Parameters
    ----------
    x : Cover
    trace : int or str, optional
        The relator whose 2-cell at e is traced, by its number from 1 or as "r1"; None for none.
    lo, hi : int, optional
        The powers of t at the ends of the strip; otherwise what the trace needs.
    preset : {"paper", "screen", "talk"}

    Raises
    ------
    KtError
        If `x` is no cover, the trace does not fit between `lo` and `hi`, or the window is empty or too long.

    Examples
    --------
    >>> from kt_widgets.groups.presentations import Presentation
    >>> drawing = cover(Cover(Presentation.parse("< a, b | a b a = b a b >")))
    >>> drawing
    Drawing('infinite cyclic cover', 241 x 76.74 pt)
    >>> [item.role for item in drawing.scene.at("vertex:3")]
    ['dropline', 'rail', 'vertex', 'label']
    """
    traced: tuple[int, ...] = ()
    if isinstance(x, Cover) and x.presentation.relators and trace is not None:
        traced = (x.presentation.relator_number(trace),)
    title = "".join(_title(x, relator) for relator in traced)
    return Drawing(cover_scene(x, traced, lo, hi, preset, title))


def _title(x: Cover, relator: int) -> str:
    """The relator's word, cut short where it is long, and what is traced."""
    letters = [(v.generator, v.sign) for v in x.visits(relator)]
    word = word_text(letters[:_LONGEST], "unicode") + (" …" if len(letters) > _LONGEST else "")
    return typeset(f"{name_text(f'r{relator}', 'unicode')} = {word}")
