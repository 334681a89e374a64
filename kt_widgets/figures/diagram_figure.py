"""The picture of a link diagram: strands with gaps, arrows, colours and labels of the arcs."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.errors import KtError
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.labels import Obstacles, Spot, Wish, place_labels
from kt_widgets.figures.layout import Layout, lay_out
from kt_widgets.figures.lettering import extent
from kt_widgets.figures.presets import Preset, arrow_outline, label_size, preset_named
from kt_widgets.figures.render import draw
from kt_widgets.figures.scene import Arrow, Dot, Item, Label, Point, Scene, Stroke
from kt_widgets.figures.strands import Path, resampled
from kt_widgets.places import Place

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["arc_colours", "diagram"]

# Half a gap in line widths, over the sine of the crossing angle or this, and at most this part of an edge.
_HALF_GAP, _LEAST_SINE, _MOST_OF_EDGE = 2.3, 0.5, 1 / 3
# Diagrams with more crossings than this are drawn larger, as far as the column allows.
_CROSSINGS_OF_SIDE = 10
# How much larger a picture may get, without a width asked for, to find room for its labels.
_GROWTH = (1.0, 1.2, 1.45)
# Where on a stretch an arrow head may stand, best first, and how far it may bend there, in radians.
_ARROW_AT = (0.5, 0.42, 0.58, 0.34, 0.66, 0.26, 0.74)
_ARROW_BEND = 0.35
_LEAST_WIDTH, _MOST_WIDTH = 36.0, 5000.0
# Larger diagrams are not told crossing by crossing; those of more arcs or crossings carry no letters.
_DESCRIBED, _LETTERED = 30, 120


def diagram(
    d: Diagram,
    ax: Axes | None = None,
    preset: str = "paper",
    labels: bool = True,
    arrows: bool = True,
    crossings: bool = False,
    colour: bool = True,
    outer: int | None = None,
    width: float | None = None,
) -> Drawing:
    """Draw a link diagram.

    Under-strands have real gaps, so the picture stands on any background. Arcs carry the names of their
    Wirtinger generators; a label for which there is no room clear of everything is left out, and diagrams of
    more than 120 arcs carry none.

    Parameters
    ----------
    d : Diagram
        The diagram. Split pieces are set side by side, crossingless components are circles.
    ax : matplotlib.axes.Axes, optional
        Axes to draw into, at their present size; the drawing is returned all the same.
    preset : {"paper", "talk", "screen"}
        Line widths, letter sizes and the usual size.
    labels, arrows, crossings : bool
        Whether to show the names of the arcs, the orientation, the numbers and signs of the crossings.
    colour : bool
        Whether arcs that meet at a crossing differ in colour; otherwise everything is ink.
    outer : int, optional
        The number (as in ``d.faces``) of the face to draw outside. Otherwise it is chosen so that symmetry is
        seen.
    width : float, optional
        The largest width and height in points.

    Returns
    -------
    Drawing
        Its scene has a stroke ``arc:i`` for each arc and an invisible disc ``crossing:i`` at each crossing.

    Raises
    ------
    KtError
        If `d` is no diagram, or the preset, the width or the outer face does not exist.
    LimitError
        Beyond 400 crossings.

    Examples
    --------
    >>> picture = diagram(Diagram.from_braid([1, 1, 1]))
    >>> picture.scene.title, len(picture.scene.at("crossing:3"))
    ('Diagram with 3 crossings and 1 component', 1)
    """
    if not isinstance(d, Diagram):
        raise KtError(
            f"{type(d).__name__} is not drawn as a diagram",
            accepted="a Diagram, such as Diagram.parse('braid 1 1 1')",
        )
    look = preset_named(preset)
    layout = lay_out(d.slots, d.signs, d.circles, outer)
    few = max(len(d.arcs), len(d.slots)) <= _LETTERED
    show = _Shown(labels and few, arrows, crossings and few, colour)
    if ax is not None:
        room = ax.get_window_extent()
        points = 72 / ax.figure.dpi
        across, up = room.width * points, room.height * points
        scene, _ = _scene(d, layout, look, show, across, up)
        draw(scene, ax, scale=min(across / scene.width, up / scene.height))
        return Drawing(scene)
    if width is not None:
        if not _LEAST_WIDTH <= width <= _MOST_WIDTH:
            raise KtError(
                f"a picture cannot be {width} points wide",
                accepted=f"{_LEAST_WIDTH:g} to {_MOST_WIDTH:g} points",
            )
        first, _ = _scene(d, layout, look, show, width, width)
        # Labels mostly find room inside, so the margin kept for them can be used.
        wider = 2 * width - max(first.width, first.height)
        second, _ = _scene(d, layout, look, show, wider, wider)
        return Drawing(second if max(second.width, second.height) <= width else first)
    side = look.side * max(1.0, (len(d.slots) / _CROSSINGS_OF_SIDE) ** 0.5)
    sides = dict.fromkeys(min(look.width, side * growth) for growth in _GROWTH)
    scenes = (_scene(d, layout, look, show, side, side) for side in sides)
    smallest = None
    for scene, left_out in scenes:
        smallest = smallest or scene
        if not left_out:
            return Drawing(scene)
    assert smallest is not None
    return Drawing(scene)


@dataclass(frozen=True, slots=True)
class _Shown:
    """Which layers are drawn."""

    labels: bool
    arrows: bool
    crossings: bool
    colour: bool


@dataclass(frozen=True, eq=False)
class _Strand:
    """An arc as it is drawn, and the longest stretch of it that no crossing interrupts."""

    path: Path
    stretch: Path
    closed: bool


def arc_colours(d: Diagram) -> tuple[int, ...]:
    """A palette index for each arc, so that arcs that meet at a crossing differ: greedily, in order.

    Examples
    --------
    >>> arc_colours(Diagram.from_braid([1, 1, 1]))
    (0, 1, 2)
    """
    meets: list[set[int]] = [set() for _ in range(len(d.arcs) + 1)]
    for crossing in d.crossings:
        there = {crossing.over_arc, crossing.under_in, crossing.under_out}
        for arc in there:
            meets[arc] |= there - {arc}
    chosen = [-1] * (len(d.arcs) + 1)
    for arc in range(1, len(chosen)):
        taken = {chosen[other] for other in meets[arc]}
        chosen[arc] = next(index for index in range(len(taken) + 1) if index not in taken)
    return tuple(chosen[1:])


def _scene(
    d: Diagram, layout: Layout, look: Preset, show: _Shown, across: float, up: float
) -> tuple[Scene, int]:
    """The scene within a frame, cropped to what is in it, and the number of labels left out."""
    letter = look.label
    gap = 0.16 * letter + 0.5 * look.line
    margin = 0.5 * look.line + (1.0 * letter + 1.5 * gap if show.labels else gap)
    low, high = layout.box() if layout.edges or layout.circles else (0j, 1 + 1j)
    size = high - low
    factor = max(min((across - 2 * margin) / size.real, (up - 2 * margin) / size.imag), 1e-3)
    corner = complex(across - factor * size.real, up - factor * size.imag) / 2
    edges = [factor * (path - low) + corner for path in layout.edges]
    circles = [factor * (path - low) + corner for path in layout.circles]

    strands = _strands(d, edges, circles, look)
    colours: Sequence[int | None] = arc_colours(d) if show.colour else [None] * len(strands)
    items: list[Item] = []
    heads: list[Arrow] = []
    for arc, (strand, tint) in enumerate(zip(strands, colours, strict=True), start=1):
        name = str(Place("arc", (arc,)))
        items.append(Stroke(name, _points(strand.path), "strand", closed=strand.closed, colour_index=tint))
        if show.arrows and (head := _arrow(name, strand.stretch, tint, look)):
            heads.append(head)
    centres = _crossing_points(d, edges)
    items += heads
    items += [
        Dot(str(Place("crossing", (number,))), (z.real, z.imag), "handle", radius=3.2 * look.line, z=2)
        for number, z in enumerate(centres, start=1)
    ]
    texts, wishes, spots = _lettered(d, strands, centres, heads, look, show, (across, up), gap)
    for (name, text, role, arc), spot in zip(texts, spots, strict=True):
        if spot is None:
            continue
        tint = colours[arc - 1] if arc else None
        if spot.leader:
            items.append(Stroke(name, _points(np.array(spot.leader)), "leader"))
        items.append(Label(name, text, (spot.centre.real, spot.centre.imag), role, z=1, colour_index=tint))
    return _cropped(d, items, wishes, spots, look), sum(spot is None for spot in spots)


def _points(path: Path) -> tuple[Point, ...]:
    return tuple((z.real, z.imag) for z in path.tolist())


def _crossing_points(d: Diagram, edges: Sequence[Path]) -> list[complex]:
    """Where each crossing lies: the end of its incoming under-edge."""
    return [complex(edges[row[0] - 1][-1]) for row in d.slots]


def _strands(d: Diagram, edges: Sequence[Path], circles: Sequence[Path], look: Preset) -> list[_Strand]:
    """The arcs, cut back where they go under."""
    incoming = {row[0]: crossing for crossing, row in enumerate(d.slots)}
    outgoing = {row[2]: crossing for crossing, row in enumerate(d.slots)}
    half = [_half_gap(d, edges, crossing, look) for crossing in range(len(d.slots))]
    rings = iter(circles)
    strands = []
    for arc in d.arcs:
        if not arc.edges:
            ring = next(rings)
            strands.append(_Strand(ring, ring[: 2 * len(ring) // 3], True))
            continue
        pieces = []
        for edge in arc.edges:
            start = half[outgoing[edge]] if edge in outgoing else 0.0
            end = half[incoming[edge]] if edge in incoming else 0.0
            pieces.append(_cut(edges[edge - 1], start, end))
        closed = arc.edges[0] not in outgoing
        joined = np.concatenate([pieces[0], *(piece[1:] for piece in pieces[1:])])
        stretch = max(pieces, key=lambda piece: round(_length(piece), 3))
        strands.append(_Strand(joined[:-1] if closed else joined, stretch, closed))
    return strands


def _length(path: Path) -> float:
    return float(np.abs(np.diff(path)).sum())


def _half_gap(d: Diagram, edges: Sequence[Path], crossing: int, look: Preset) -> float:
    """Half the gap of an under-strand: wider where the strands meet at a small angle."""
    under_in, right, under_out, left = d.slots[crossing]
    over_out = right if d.signs[crossing] > 0 else left
    over_in = left if d.signs[crossing] > 0 else right
    reach = 1.5 * look.line
    under = _near(edges[under_out - 1], reach) - _near(edges[under_in - 1][::-1], reach)
    over = _near(edges[over_out - 1], reach) - _near(edges[over_in - 1][::-1], reach)
    sine = abs((under.conjugate() * over).imag) / (abs(under) * abs(over))
    return _HALF_GAP * look.line / max(sine, _LEAST_SINE)


def _near(path: Path, reach: float) -> complex:
    """The first point of a path that is so far from its start."""
    far = np.flatnonzero(np.abs(path - path[0]) >= reach)
    return complex(path[far[0] if len(far) else -1])


def _cut(path: Path, start: float, end: float) -> Path:
    """The path without so much of its length at both ends, but never less than the middle third."""
    lengths = np.concatenate([[0.0], np.cumsum(np.abs(np.diff(path)))])
    first = min(start, _MOST_OF_EDGE * lengths[-1])
    last = lengths[-1] - min(end, _MOST_OF_EDGE * lengths[-1])
    inner = (lengths > first) & (lengths < last)
    ends = np.interp([first, last], lengths, path.real) + 1j * np.interp([first, last], lengths, path.imag)
    return np.concatenate([ends[:1], path[inner], ends[1:]])


def _arrow(name: str, stretch: Path, tint: int | None, look: Preset) -> Arrow | None:
    """A head on a stretch that is long enough to show it: near the middle, where the stretch is straight."""
    probe = arrow_outline(Arrow(name, (0, 0), (1, 0), "strand"), look)
    head = -min(x for x, _ in probe)
    length = _length(stretch)
    if length < 1.8 * head:
        return None
    lengths = np.concatenate([[0.0], np.cumsum(np.abs(np.diff(stretch)))])
    shares = np.array(_ARROW_AT)
    at = head / 2 + shares * (length - head)
    spots = at[:, None] + np.array([-1.0, -0.5, 0.0, 0.5]) * head
    points = np.interp(spots, lengths, stretch.real) + 1j * np.interp(spots, lengths, stretch.imag)
    before, after = points[:, 1] - points[:, 0], points[:, 3] - points[:, 2]
    bend = np.abs(np.angle(after / np.where(before == 0, 1, before)))
    best = int(np.argmin(np.round(np.maximum(bend - _ARROW_BEND, 0), 2)))
    tip, along = points[best, 3], points[best, 3] - points[best, 1]
    return Arrow(name, (tip.real, tip.imag), (along.real, along.imag), "strand", z=1, colour_index=tint)


def _lettered(
    d: Diagram,
    strands: Sequence[_Strand],
    centres: Sequence[complex],
    heads: Sequence[Arrow],
    look: Preset,
    show: _Shown,
    frame: tuple[float, float],
    gap: float,
) -> tuple[list[tuple[str, str, str, int]], list[Wish], list[Spot | None]]:
    """The labels as (place, text, role, arc or 0), their wishes and where they go."""
    texts: list[tuple[str, str, str, int]] = []
    wishes: list[Wish] = []
    if show.labels:
        for arc, (generator, strand) in enumerate(
            zip(d.wirtinger().generators, strands, strict=True), start=1
        ):
            texts.append((str(Place("arc", (arc,))), _generator_text(generator), "label", arc))
            size = extent(texts[-1][1], label_size("label", look))
            wishes.append(Wish(size.width, size.above + size.below, strand.path, arc))
    if show.crossings:
        for number, (centre, sign) in enumerate(zip(centres, d.signs, strict=True), start=1):
            text = f"${number}^{{{'+' if sign > 0 else '-'}}}$"
            texts.append((str(Place("crossing", (number,))), text, "number", 0))
            size = extent(text, label_size("number", look))
            wishes.append(Wish(size.width, size.above + size.below, np.array([centre]), 0, around=True))
    if not wishes:
        return texts, wishes, []
    points, radii, owners = [], [], []
    for arc, strand in enumerate(strands, start=1):
        path = np.append(strand.path, strand.path[0]) if strand.closed else strand.path
        dense = resampled(path, max(2, int(_length(path) / (0.3 * look.label)) + 2))
        points.append(dense)
        radii.append(np.full(len(dense), look.line / 2))
        owners.append(np.full(len(dense), arc))
    for head in heads:
        outline = np.array([complex(*corner) for corner in arrow_outline(head, look)])
        points.append(resampled(np.append(outline, outline[0]), 9))
        radii.append(np.zeros(9))
        owners.append(np.zeros(9, dtype=int))
    obstacles = Obstacles(np.concatenate(points), np.concatenate(radii), np.concatenate(owners))
    return texts, wishes, place_labels(wishes, obstacles, frame, gap)


def _generator_text(name: str) -> str:
    """A generator's name as mathematics: a letter, its number lowered."""
    digits = name[1:].lstrip("_")
    return f"${name[0]}_{{{digits}}}$" if digits else f"${name}$"


def _cropped(
    d: Diagram, items: Sequence[Item], wishes: Sequence[Wish], spots: Sequence[Spot | None], look: Preset
) -> Scene:
    """The scene moved to the lower left, with a narrow margin round everything that is seen."""
    corners: list[complex] = []
    for item in items:
        match item:
            case Stroke():
                half = look.line / 2
                x, y = [p[0] for p in item.points], [p[1] for p in item.points]
                corners += [complex(min(x) - half, min(y) - half), complex(max(x) + half, max(y) + half)]
            case Arrow():
                corners += [complex(*corner) for corner in arrow_outline(item, look)]
    for wish, spot in zip(wishes, spots, strict=True):
        if spot:
            half_box = complex(wish.width, wish.height) / 2
            corners += [spot.centre - half_box, spot.centre + half_box]
    if not corners:
        corners = [0j, complex(look.label, look.label)]
    pad = 0.5 * look.line
    low = complex(min(c.real for c in corners), min(c.imag for c in corners)) - complex(pad, pad)
    high = complex(max(c.real for c in corners), max(c.imag for c in corners)) + complex(pad, pad)
    moved = tuple(_moved(item, -low) for item in items)
    size = high - low
    return Scene(moved, size.real, size.imag, *_words(d), preset=look.name)


def _moved(item: Item, by: complex) -> Item:
    match item:
        case Stroke():
            return replace(item, points=tuple((x + by.real, y + by.imag) for x, y in item.points))
        case Arrow():
            return replace(item, tip=(item.tip[0] + by.real, item.tip[1] + by.imag))
        case Label() | Dot():
            return replace(item, position=(item.position[0] + by.real, item.position[1] + by.imag))
    raise KtError(f"a diagram has no {type(item).__name__}", where=item.id)


def _words(d: Diagram) -> tuple[str, str]:
    """The title, and a description for those who do not see the picture."""
    count, parts = len(d.slots), len(d.components)
    title = (
        f"Diagram with {count or 'no'} crossing{'s' * (count != 1)} and {parts} component{'s' * (parts != 1)}"
    )
    if count > _DESCRIBED:
        return title, ""
    names = d.wirtinger().generators
    told = [
        f"crossing {c.number}: {names[c.under_in - 1]} goes under {names[c.over_arc - 1]} and becomes "
        f"{names[c.under_out - 1]}, {'positive' if c.sign > 0 else 'negative'}"
        for c in d.crossings
    ]
    return title, "; ".join(told)
