"""What a diagram shows of its polynomial's size: Seifert circles, trees of the checkerboard graph."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from heapq import heapify, heappop, heappush
from math import ceil, fsum, log2

from kt_widgets.diagrams.planar_map import PlanarMap, Slots

__all__ = ["checkerboard_edges", "seifert_circles", "spanning_trees_at_most"]


def seifert_circles(slots: Sequence[Slots], signs: Sequence[int]) -> int:
    """The number of circles that are left when each crossing is cut open along the orientation.

    H. Seifert, Über das Geschlecht von Knoten, Math. Ann. 110 (1935).

    Examples
    --------
    >>> seifert_circles([(4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 3)], [1, 1, 1])
    2
    """
    after = [0] * (2 * len(slots) + 1)
    for (under_in, right, under_out, left), sign in zip(slots, signs, strict=True):
        over_in, over_out = (left, right) if sign > 0 else (right, left)
        after[under_in], after[over_in] = over_out, under_out
    circles = 0
    for edge in range(1, len(after)):
        if after[edge]:
            circles += 1
        while after[edge]:
            after[edge], edge = 0, after[edge]
    return circles


def checkerboard_edges(plane: PlanarMap) -> list[tuple[int, int]]:
    """The checkerboard graph of a connected diagram: faces of one colour, joined at each crossing.

    Of the two colours it takes the one with fewer faces; both graphs have equally many spanning trees.

    Examples
    --------
    >>> from kt_widgets.diagrams.planar_map import ends_of_edges
    >>> slots = [(4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 3)]
    >>> len(checkerboard_edges(PlanarMap.from_ends(*ends_of_edges(slots, [1, 1, 1]))))
    3
    """
    face = plane.face_of_dart
    colour = [-1] * len(plane.faces)
    colour[face[0]] = 0
    queue = [face[0]]
    for found in queue:
        for dart in plane.faces[found]:
            # across the edge, and hence of the other colour
            beside = face[plane.mate[dart]]
            if colour[beside] < 0:
                colour[beside] = 1 - colour[found]
                queue.append(beside)
    chosen = int(2 * sum(colour) < len(colour))
    corners = (face[dart : dart + 4] for dart in range(0, len(face), 4))
    return [(c[0], c[2]) if colour[c[0]] == chosen else (c[1], c[3]) for c in corners]


def spanning_trees_at_most(edges: Iterable[tuple[int, int]]) -> int:
    """A power of 2 that the number of spanning trees of a connected graph does not exceed.

    Vertices are replaced one by one, the star of edges w_i round one by edges w_i w_j / (sum of all w): the
    weighted number of trees is divided by that sum (A. E. Kennelly 1899, G. Kirchhoff 1847, from memory). No
    subtraction occurs, so that lower and upper bounds of the weights stay close to each other; each step
    widens them by more than its rounding errors.

    Examples
    --------
    The triangle has 3 spanning trees.

    >>> spanning_trees_at_most([(0, 1), (1, 2), (2, 0)])
    4
    """
    stars: dict[int, dict[int, tuple[float, float]]] = {}
    for a, b in edges:
        for one, other in ((a, b), (b, a)):
            around = stars.setdefault(one, {})
            if a != b:
                low, high = around.get(other, (0.0, 0.0))
                around[other] = (low + 1, high + 1)
    narrower, wider = 1 - 2.0**-50, 1 + 2.0**-50
    queue = [(len(star), vertex) for vertex, star in stars.items()]
    heapify(queue)
    logarithms = []
    while len(stars) > 1:
        degree, vertex = heappop(queue)
        star = stars.get(vertex)
        if star is None or len(star) != degree:
            continue
        del stars[vertex]
        least = fsum(low for low, _ in star.values()) * narrower
        most = fsum(high for _, high in star.values()) * wider
        logarithms.append(log2(most) + 1e-12)
        ends = list(star.items())
        for a, _ in ends:
            del stars[a][vertex]
        for i, (a, (a_low, a_high)) in enumerate(ends):
            for b, (b_low, b_high) in ends[:i]:
                low, high = stars[a].get(b, (0.0, 0.0))
                weight = (
                    (low + a_low * b_low / most) * narrower,
                    (high + a_high * b_high / least) * wider,
                )
                stars[a][b] = stars[b][a] = weight
        for a, _ in ends:
            heappush(queue, (len(stars[a]), a))
    return int(2 ** ceil(fsum(logarithms) + 1e-9))
