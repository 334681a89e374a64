"""Magnifying the small places of a drawn map by maps of the plane, which keep it a drawing of the same map.

In a circle packing the crossings of nested kinks, say, are smaller than their surroundings by a factor of
twenty for each level. The map r -> r^a about such a crossing, with 0 < a < 1, is a homeomorphism of the plane
that brings them nearer to each other in scale.
"""

from __future__ import annotations

import numpy as np

from kt_widgets.figures.strands import Curves, Path

__all__ = ["magnified"]

# The least edge at a crossing that is large enough, as a part of the picture's radius over the root of the
# number of crossings, and how near to it is near enough.
_LEAST_EDGE, _ENOUGH = 0.35, 0.9
_ROUNDS = 60
# A single map bends the rest too much below this exponent.
_LEAST_EXPONENT = 0.5
# A straight piece may be so long, as a part of its distance from the centre, before it is halved.
_STRAIGHT, _HALVINGS = 0.4, 8


def magnified(curves: Curves) -> Curves:
    """The curves with their smallest crossings magnified one after another, until none is very small.

    Examples
    --------
    >>> from kt_widgets.diagrams.planar_map import PlanarMap
    >>> from kt_widgets.figures.quality import is_embedded
    >>> from kt_widgets.figures.strands import curves_of_packing
    >>> is_embedded(magnified(curves_of_packing(PlanarMap((1, 0, 3, 2)), 0)))
    True
    """
    crossings = len(curves.planar_map.mate) // 4
    for _ in range(_ROUNDS):
        sizes = [_least_edge(curves, crossing) for crossing in range(crossings)]
        smallest = int(np.argmin(sizes))
        points = curves.points()
        wanted = _LEAST_EDGE * float(np.abs(points - points.mean()).max()) / crossings**0.5
        if sizes[smallest] >= _ENOUGH * wanted:
            break
        centre = curves.crossing(smallest)
        reach = float(np.abs(points - centre).max())
        exponent = max(np.log(wanted / reach) / np.log(sizes[smallest] / reach), _LEAST_EXPONENT)
        paths = {dart: _stretched(path, centre, reach, exponent) for dart, path in curves.paths.items()}
        curves = Curves(curves.planar_map, curves.outer, paths)
    return curves


def _least_edge(curves: Curves, crossing: int) -> float:
    """How far the shortest edge at a crossing reaches from it."""
    centre = curves.crossing(crossing)
    return min(float(np.abs(curves.path(4 * crossing + slot) - centre).max()) for slot in range(4))


def _stretched(path: Path, centre: complex, reach: float, exponent: float) -> Path:
    """The image of a path under r -> r^exponent about the centre, in units of `reach`."""
    away = _halved(path - centre)
    radius = np.abs(away) / reach
    return np.asarray(away * np.where(radius > 0, np.maximum(radius, 1e-300) ** (exponent - 1), 0))


def _halved(away: Path) -> Path:
    """The path with points put into its long pieces, whose images would otherwise not be followed."""
    for _ in range(_HALVINGS):
        radius = np.abs(away)
        nearer = np.minimum(radius[1:], radius[:-1])
        long = np.flatnonzero((np.abs(np.diff(away)) > _STRAIGHT * nearer) & (nearer > 0))
        if not len(long):
            break
        away = np.insert(away, long + 1, (away[long] + away[long + 1]) / 2)
    return away
