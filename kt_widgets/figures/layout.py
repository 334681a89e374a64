"""Where a diagram's strands lie: each connected piece drawn, turned, and set beside the others."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from kt_widgets.diagrams.planar_map import PlanarMap, Slots, ends_of_edges
from kt_widgets.errors import DiagramError, LimitError
from kt_widgets.figures.magnify import magnified
from kt_widgets.figures.quality import is_embedded, score
from kt_widgets.figures.relaxation import relaxed
from kt_widgets.figures.strands import Curves, Path, curves_of_packing
from kt_widgets.figures.symmetry import outer_face

__all__ = ["MAX_DRAWN_CIRCLES", "MAX_DRAWN_CROSSINGS", "Layout", "lay_out"]

MAX_DRAWN_CROSSINGS = 400
MAX_DRAWN_CIRCLES = 100
# Beyond this a relaxation takes more than a second and the picture is too dense to read anyway.
_MAX_RELAXED = 100
_SMOOTHNESS = 1.25

# In units of a typical face: the diameter of a crossingless component, and the room between pieces.
_CIRCLE, _BETWEEN = 1.4, 0.6
_CIRCLE_POINTS = 96
# Rows of pieces are about so many times wider than all of them are high.
_ASPECT = 1.8


@dataclass(frozen=True, eq=False)
class Layout:
    """The strands of a diagram in the plane, as paths of complex numbers in units of a typical face.

    Attributes
    ----------
    edges : tuple of arrays
        The path of each edge 1, 2, ... in its direction, from crossing to crossing.
    circles : tuple of arrays
        The closed path of each crossingless component, counter-clockwise, without its last point.
    """

    edges: tuple[Path, ...]
    circles: tuple[Path, ...]

    def box(self) -> tuple[complex, complex]:
        """The lower left and the upper right corner of everything."""
        points = np.concatenate([*self.edges, *self.circles])
        return (
            complex(points.real.min(), points.imag.min()),
            complex(points.real.max(), points.imag.max()),
        )


@lru_cache(maxsize=64)
def lay_out(
    slots: tuple[Slots, ...], signs: tuple[int, ...], circles: int = 0, outer: int | None = None
) -> Layout:
    """Lay out a diagram given by its planar diagram code.

    Each connected piece is drawn by circle packing, then its small places are magnified and the whole is
    relaxed; the best of these is kept that meets itself at the crossings only. Pieces are set side by side,
    crossingless components last.

    Parameters
    ----------
    slots, signs, circles
        The code, as in `kt_widgets.diagrams.diagram.Diagram`.
    outer : int, optional
        The number of the face to draw outside in its piece; otherwise chosen by symmetry and size.

    Raises
    ------
    LimitError
        Beyond 400 crossings or 100 crossingless components.
    DiagramError
        If there is no face `outer`.

    Examples
    --------
    >>> layout = lay_out(((4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 3)), (1, 1, 1))
    >>> len(layout.edges), len(layout.circles)
    (6, 0)
    """
    for count, most, what in (
        (len(slots), MAX_DRAWN_CROSSINGS, "crossings"),
        (circles, MAX_DRAWN_CIRCLES, "crossingless components"),
    ):
        if count > most:
            raise LimitError(f"a picture of {count} {what} cannot be read", accepted=f"up to {most}")
    tails, heads = ends_of_edges(slots, signs)
    whole = PlanarMap.from_ends(tails, heads)
    if outer is not None and not 1 <= outer <= len(whole.faces):
        accepted = (
            f"a face from 1 to {len(whole.faces)}"
            if whole.faces
            else "no face of a diagram without crossings"
        )
        raise DiagramError(f"the diagram has no face {outer}", where="outer", accepted=accepted)
    outer_dart = None if outer is None else whole.faces[outer - 1][0]
    drawn: list[tuple[Curves | None, Path]] = []
    darts_of: list[dict[int, int]] = []
    for crossings in whole.pieces:
        within = {4 * c + s: 4 * new + s for new, c in enumerate(crossings) for s in range(4)}
        piece = PlanarMap(tuple(within[whole.mate[dart]] for dart in within))
        chosen = outer_face(piece) if outer_dart not in within else piece.face_of_dart[within[outer_dart]]
        curves = _upright(_drawn(piece, chosen))
        darts_of.append(within)
        drawn.append((curves, curves.points()))
    turn = np.exp(2j * np.pi * np.arange(_CIRCLE_POINTS) / _CIRCLE_POINTS)
    drawn += [(None, _CIRCLE / 2 * turn)] * circles
    edges: list[Path] = [np.empty(0, dtype=np.complex128)] * (len(tails) - 1)
    rings: list[Path] = []
    moves = _side_by_side([points for _, points in drawn])
    for index, (move, (curves_of_piece, points)) in enumerate(zip(moves, drawn, strict=True)):
        if curves_of_piece is None:
            rings.append(points + move)
            continue
        within = darts_of[index]
        for edge, tail in enumerate(tails[1:]):
            if tail in within:
                edges[edge] = curves_of_piece.path(within[tail]) + move
    return Layout(tuple(edges), tuple(rings))


def _drawn(piece: PlanarMap, outer: int) -> Curves:
    """One piece, in a size that suits its number of crossings."""
    curves = _best_curves(piece, outer)
    points = curves.points()
    size = max(np.ptp(points.real), np.ptp(points.imag))
    return curves.moved((0.6 + 1.1 * (len(piece.mate) / 4) ** 0.5) / size)


def _best_curves(piece: PlanarMap, outer: int) -> Curves:
    """The relaxed curves if they are sound, else the magnified or the packed ones."""
    packed = curves_of_packing(piece, outer)
    if len(piece.mate) // 4 > _MAX_RELAXED:
        return packed
    magnified_curves = magnified(packed)
    smooth = relaxed(magnified_curves)
    # Relaxed curves are the smoothest, so the packed ones must be better by a good part.
    if _SMOOTHNESS * score(smooth) > score(packed) and is_embedded(smooth):
        return smooth
    if score(magnified_curves) > score(packed) and is_embedded(magnified_curves):
        return magnified_curves
    return packed


def _upright(curves: Curves) -> Curves:
    """The piece turned so that it is low and wide; among equals, a crossing of the outer face points down."""
    points = curves.points()
    middle = points.mean()
    walk = curves.planar_map.faces[curves.outer]
    # Rounded, so that symmetric crossings tie and the first one wins.
    far = max(walk, key=lambda dart: (round(abs(curves.crossing(dart // 4) - middle), 6), -dart))
    down = -1j / (curves.crossing(far // 4) - middle)
    down /= abs(down)
    best, best_height = down, np.inf
    for step in range(24):
        factor = down * np.exp(1j * np.pi * step / 12)
        height = float(np.ptp((factor * points).imag))
        # A slightly lower picture is not worth a tilted one.
        if height < 0.88 * best_height:
            best, best_height = factor, height
    return curves.moved(complex(best))


def _side_by_side(pieces: Sequence[Path]) -> list[complex]:
    """The shift of each piece: rows from left to right, each centred in height."""
    sizes = [complex(np.ptp(points.real), np.ptp(points.imag)) for points in pieces]
    area = sum((size.real + _BETWEEN) * (size.imag + _BETWEEN) for size in sizes)
    longest = max([(_ASPECT * area) ** 0.5, *(size.real for size in sizes[:3])]) if sizes else 0.0
    rows: list[list[int]] = []
    length = np.inf
    for index, size in enumerate(sizes):
        # Up to three pieces stay in one row.
        if length + size.real > longest and (len(sizes) > 3 or not rows):
            rows.append([])
            length = 0.0
        rows[-1].append(index)
        length += size.real + _BETWEEN
    shifts = [0j] * len(pieces)
    top = 0.0
    for row in rows:
        height = max(sizes[index].imag for index in row)
        left = 0.0
        for index in row:
            points = pieces[index]
            corner = complex(points.real.min(), points.imag.min())
            shifts[index] = complex(left, top - (height + sizes[index].imag) / 2) - corner
            left += sizes[index].real + _BETWEEN
        top -= height + _BETWEEN
    return shifts
