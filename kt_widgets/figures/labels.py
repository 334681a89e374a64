"""Places for labels: beside their strands, clear of every strand, arrow and other label."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from kt_widgets.figures.strands import Path, resampled

__all__ = ["Obstacles", "Spot", "Wish", "place_labels"]

Floats: TypeAlias = NDArray[np.float64]

_POSITIONS = 17
# Distances from the strand to try, in gaps beyond the first; leaders are tried only where none of these fit.
_OFFSETS = (0.0, 0.6, 1.4)
_LEADERS = (1.2, 1.8, 2.6, 3.6, 5.0)
_SLANTS = (0.0, 0.5, -0.5, 1.0, -1.0)


@dataclass(frozen=True)
class Wish:
    """A label to be placed: its size, and the points beside which it may stand.

    `owner` is the strand that the label names, by its number in `Obstacles`; `path` is what is seen of it.
    Where `around` is set the label stands near the one point of `path` instead, and no strand owns it.
    """

    width: float
    height: float
    path: Path
    owner: int
    around: bool = False


@dataclass(frozen=True)
class Spot:
    """Where a label stands: its middle, and the two ends of a leader line if it has one."""

    centre: complex
    leader: tuple[complex, complex] | None = None


@dataclass(frozen=True, eq=False)
class Obstacles:
    """What labels must keep clear of: points of strands and arrows, with their radii and their owners."""

    points: Path
    radii: Floats
    owners: NDArray[np.intp]

    def near(self, path: Path, reach: float) -> Obstacles:
        """The obstacles no farther than `reach` from the box round a path."""
        x, y = self.points.real, self.points.imag
        kept = (
            (x >= path.real.min() - reach)
            & (x <= path.real.max() + reach)
            & (y >= path.imag.min() - reach)
            & (y <= path.imag.max() + reach)
        )
        return Obstacles(self.points[kept], self.radii[kept], self.owners[kept])


def place_labels(
    wishes: Sequence[Wish], obstacles: Obstacles, frame: tuple[float, float], gap: float
) -> list[Spot | None]:
    """A spot for each label, or None where there is no room for it.

    Every spot keeps `gap` from all strands, arrows, leaders and other labels and lies inside `frame` (width
    and height, from 0). A label is nearer to its own strand than to any other, or has a leader line.

    The labels with the fewest possible spots choose first; ties go to the earlier one.

    Examples
    --------
    >>> strand = np.linspace(10 + 50j, 90 + 50j, 41)
    >>> obstacles = Obstacles(strand, np.full(41, 0.5), np.full(41, 1))
    >>> (spot,) = place_labels([Wish(8, 6, strand, 1)], obstacles, (100, 100), gap=2)
    >>> abs(spot.centre.imag - 50) > 3.5
    True
    """
    reach = [4 * max(wish.width, wish.height) + 20 * gap for wish in wishes]
    near = [obstacles.near(wish.path, far) for wish, far in zip(wishes, reach, strict=True)]
    beside = [_beside(wish, there, frame, gap) for wish, there in zip(wishes, near, strict=True)]
    order = sorted(range(len(wishes)), key=lambda index: (wishes[index].around, len(beside[index][0]), index))
    spots: list[Spot | None] = [None] * len(wishes)
    boxes: list[tuple[complex, float, float]] = []
    lines: list[Path] = []
    without: list[int] = []
    for index in order:
        wish = wishes[index]
        centres, scores = beside[index]
        free = _free_of(boxes, lines, centres, wish, gap)
        if free.any():
            best = int(np.argmax(np.where(free, scores, -np.inf)))
            spots[index] = Spot(complex(centres[best]))
            boxes.append((complex(centres[best]), wish.width, wish.height))
        elif not wish.around:
            without.append(index)
    for index in without:
        wish = wishes[index]
        far = (_LEADERS[-1] + 3) * max(wish.width, wish.height) + 4 * gap
        spot = _led(wish, obstacles.near(wish.path, far), frame, gap, boxes, lines)
        if spot and spot.leader:
            spots[index] = spot
            boxes.append((spot.centre, wish.width, wish.height))
            lines.append(resampled(np.array(spot.leader), 24))
    return spots


def _distances(centres: Path, width: float, height: float, points: Path) -> Floats:
    """The distance from each box (rows) to each point (columns)."""
    x = np.abs(centres.real[:, None] - points.real) - width / 2
    y = np.abs(centres.imag[:, None] - points.imag) - height / 2
    return np.asarray(np.sqrt(np.maximum(x, 0) ** 2 + np.maximum(y, 0) ** 2))


def _inside(centres: Path, wish: Wish, frame: tuple[float, float]) -> NDArray[np.bool_]:
    x, y = centres.real, centres.imag
    return (
        (x >= wish.width / 2)
        & (x <= frame[0] - wish.width / 2)
        & (y >= wish.height / 2)
        & (y <= frame[1] - wish.height / 2)
    )


def _positions(path: Path) -> tuple[Path, Path, Floats]:
    """Points along a path, the left normals there, and how far from its middle they are (0 to 1)."""
    fine = resampled(path, 4 * _POSITIONS + 1)
    at = np.arange(2, 4 * _POSITIONS, 4)
    ahead = fine[at + 1] - fine[at - 1]
    normal = 1j * ahead / np.maximum(np.abs(ahead), 1e-12)
    return fine[at], normal, np.abs(2 * at / (4 * _POSITIONS) - 1)


def _beside(wish: Wish, obstacles: Obstacles, frame: tuple[float, float], gap: float) -> tuple[Path, Floats]:
    """The spots beside the strand that keep clear of all strands, with their scores (larger is better)."""
    if wish.around:
        turn = np.exp(2j * np.pi * np.arange(24) / 24)
        reach = [np.abs(turn.real) * wish.width / 2 + np.abs(turn.imag) * wish.height / 2]
        centres = np.concatenate(
            [wish.path[0] + (reach[0] + gap * k) * turn for k in (1, 1.5, 2, 2.6, 3.3, 4)]
        )
        middle = np.repeat([0.0, 1.0, 2.0, 3.0, 4.5, 6.0], 24)
    else:
        points, normal, middle = _positions(wish.path)
        own_radius = float(obstacles.radii[obstacles.owners == wish.owner].max(initial=0.0))
        reach_across = np.abs(normal.real) * wish.width / 2 + np.abs(normal.imag) * wish.height / 2
        options = [
            points + side * normal * (reach_across + own_radius + gap * (1.05 + offset))
            for side in (1, -1)
            for offset in _OFFSETS
        ]
        centres = np.concatenate(options)
        middle = np.tile(middle, len(options))
    inside = _inside(centres, wish, frame)
    centres, middle = centres[inside], middle[inside]
    if not len(centres):
        return centres, middle
    distance = _distances(centres, wish.width, wish.height, obstacles.points) - obstacles.radii
    own = obstacles.owners == wish.owner
    to_own = distance[:, own].min(axis=1, initial=np.inf)
    to_other = distance[:, ~own].min(axis=1, initial=np.inf)
    if wish.around:
        clear = to_other >= 0.7 * gap
        scores = np.minimum(to_other, 2 * gap) - gap * middle
    else:
        # Nearer to its own strand by a good part, or a reader may take it for another's.
        clear = (to_own >= gap) & (to_other >= np.maximum(gap, 1.35 * to_own))
        scores = np.minimum(to_other, 14 * gap) - 1.5 * to_own - 2 * gap * middle
    return centres[clear], np.asarray(scores[clear])


def _free_of(
    boxes: Sequence[tuple[complex, float, float]],
    lines: Sequence[Path],
    centres: Path,
    wish: Wish,
    gap: float,
) -> NDArray[np.bool_]:
    """Which spots keep clear of the labels and leaders already placed."""
    free = np.ones(len(centres), dtype=bool)
    for centre, width, height in boxes:
        x = np.abs(centres.real - centre.real) - (width + wish.width) / 2
        y = np.abs(centres.imag - centre.imag) - (height + wish.height) / 2
        free &= np.maximum(x, y) >= gap
    for line in lines:
        free &= _distances(centres, wish.width, wish.height, line).min(axis=1, initial=np.inf) >= gap
    return free


def _led(
    wish: Wish,
    obstacles: Obstacles,
    frame: tuple[float, float],
    gap: float,
    boxes: Sequence[tuple[complex, float, float]],
    lines: Sequence[Path],
) -> Spot | None:
    """The nearest spot that a straight leader can reach without meeting anything."""
    points, normal, middle = _positions(wish.path)
    own = obstacles.owners == wish.owner
    own_radius = float(obstacles.radii[own].max(initial=0.0))
    size = max(wish.width, wish.height)
    found: list[tuple[float, int, Spot]] = []
    for length in _LEADERS:
        for slant in _SLANTS:
            for side in (1, -1):
                ahead = side * normal * np.exp(1j * slant)
                starts = points + side * normal * own_radius
                reach = np.abs(ahead.real) * wish.width / 2 + np.abs(ahead.imag) * wish.height / 2
                ends = starts + ahead * (gap + length * size)
                centres = ends + ahead * (reach + 0.4 * gap)
                good = _inside(centres, wish, frame) & _free_of(boxes, lines, centres, wish, gap)
                distance = _distances(centres, wish.width, wish.height, obstacles.points) - obstacles.radii
                good &= distance.min(axis=1, initial=np.inf) >= gap
                for index in np.flatnonzero(good).tolist():
                    line = (complex(starts[index]), complex(ends[index]))
                    apart = _line_distance(line, obstacles.points) - obstacles.radii
                    # The leader touches its own strand where it starts, and nothing else.
                    apart[own & (np.abs(obstacles.points - line[0]) < 2 * gap + own_radius)] = np.inf
                    if apart.min(initial=np.inf) < 0.7 * gap or not _line_is_free(line, boxes, lines, gap):
                        continue
                    cost = length * size + 0.5 * size * abs(slant) + 0.5 * size * float(middle[index])
                    found.append((round(cost, 6), len(found), Spot(complex(centres[index]), line)))
    return min(found)[2] if found else None


def _line_distance(line: tuple[complex, complex], points: Path) -> Floats:
    """The distance of each point from a straight line between two ends."""
    along = line[1] - line[0]
    share = np.clip(((points - line[0]) * along.conjugate()).real / abs(along) ** 2, 0, 1)
    return np.abs(points - line[0] - share * along)


def _line_is_free(
    line: tuple[complex, complex],
    boxes: Sequence[tuple[complex, float, float]],
    lines: Sequence[Path],
    gap: float,
) -> bool:
    """Whether a leader keeps clear of the labels and leaders already placed."""
    points = resampled(np.array(line), max(8, int(abs(line[1] - line[0]) / (0.5 * gap))))
    for centre, width, height in boxes:
        if _distances(np.array([centre]), width, height, points).min() < gap:
            return False
    return all(_line_distance(line, other).min() >= gap for other in lines)
