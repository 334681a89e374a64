"""Dowker-Thistlethwaite codes: the even partners of the odd passes, and their realisation in the plane."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from itertools import accumulate, pairwise

from kt_widgets.diagrams.entries import MAX_CIRCLES, check_components, check_planar, items, size, whole
from kt_widgets.diagrams.gauss import assemble
from kt_widgets.diagrams.planar_map import Code, PlanarMap, Slots, ends_of_edges
from kt_widgets.errors import DiagramError

__all__ = ["MAX_DOWKER_CROSSINGS", "dowker_of", "read_dowker"]

MAX_DOWKER_CROSSINGS = 2_000
"""A Dowker-Thistlethwaite code has at most this many crossings: each is realised by a planarity test."""

ACCEPTED = (
    "the even partners of the passes 1, 3, 5, ..., minus where the even pass is over; a list per component"
)


def read_dowker(components: object) -> tuple[Code, str]:
    """The diagram of a Dowker-Thistlethwaite code, and its line; crossing i is met at the odd label 2i - 1.

    The passes are numbered 1, 2, 3, ... along the components, one component after the other, in such a way
    that each crossing gets one odd and one even number (each component has an even number of passes). The
    code lists the even partners of 1, 3, 5, ..., with a minus sign where the even pass is over. A flat list
    is a knot; for a link there is a list per component, with half as many entries as the component has passes
    (an empty list is a crossingless component). Components run in the direction of their numbers.

    The code fixes a prime diagram up to mirror image. Chosen here: each summand is mirrored so that its first
    crossing is positive. The summands are what is left when the diagram is cut through all edges that border
    the same two faces; a crossing that such a cut isolates is a summand too.

    The realisation is a planarity test of the graph in which each crossing is a wheel whose four rim
    vertices are the ends of its edges in the order in, in, out, out.

    Examples
    --------
    >>> read_dowker([4, 6, 2])
    ((((4, 2, 5, 1), (6, 4, 1, 3), (2, 6, 3, 5)), (1, 1, 1), 0), 'dowker 4 6 2')

    References
    ----------
    C. H. Dowker and M. B. Thistlethwaite, Classification of knot projections, Topology Appl. 16 (1983).
    """
    read = _components(components)
    gauss, passes = _gauss_labels(read)
    turns = _realise(passes, _stretches(_bases(read)))
    over = [gauss_label > 0 for labels in gauss for gauss_label in labels[::2]]
    signs = [turn if odd_over else -turn for turn, odd_over in zip(turns, over, strict=True)]
    slots, _, circles = assemble(gauss, signs)
    check_components(slots, circles)
    code = slots, chosen, circles = assemble(gauss, _mirror_summands(slots, signs))
    check_planar(slots, chosen)
    return code, _dowker_text(read)


def _components(components: object) -> list[list[int]]:
    """The code as lists of whole numbers, one per component."""
    most = MAX_DOWKER_CROSSINGS + MAX_CIRCLES
    entries = items(components, "the Dowker-Thistlethwaite code", ACCEPTED, most)
    if not entries:
        raise DiagramError("the code is empty", where="the code", accepted=ACCEPTED)
    nested = [isinstance(entry, Iterable) and not isinstance(entry, (str, bytes)) for entry in entries]
    if not any(nested):
        rows = [entries]
    elif all(nested):
        rows = [
            items(entry, f"component {number}", ACCEPTED, MAX_DOWKER_CROSSINGS)
            for number, entry in enumerate(entries, start=1)
        ]
    else:
        at = nested.index(False) + 1
        raise DiagramError(
            f"entry {at} is not a list although others are", where=f"component {at}", accepted=ACCEPTED
        )
    size(sum(map(len, rows)), MAX_DOWKER_CROSSINGS, "crossings of a Dowker-Thistlethwaite code")
    read = []
    entry_number = 0
    for row in rows:
        labels = []
        for value in row:
            entry_number += 1
            labels.append(whole(value, f"entry {entry_number}"))
        read.append(labels)
    return read


def _bases(components: Sequence[Sequence[int]]) -> list[int]:
    """The first pass of each component, and one more than the last pass of all."""
    return list(accumulate((2 * len(labels) for labels in components), initial=1))


def _gauss_labels(components: Sequence[Sequence[int]]) -> tuple[list[list[int]], list[int]]:
    """The passes as Gauss labels per component, and the crossing (from 0) of each pass 1, 2, ..., 2n."""
    entries = [entry for labels in components for entry in labels]
    most = 2 * len(entries)
    label = [0] * (most + 1)
    for number, entry in enumerate(entries, start=1):
        even = abs(entry)
        where = f"entry {number}"
        if even % 2 or not 2 <= even <= most:
            raise DiagramError(
                f"{entry} is not a partner of pass {2 * number - 1}",
                where=where,
                accepted=f"even numbers from 2 to {most}, each once, with a sign",
            )
        if label[even]:
            raise DiagramError(
                f"{even} occurs twice (first as entry {abs(label[even])})",
                where=where,
                accepted=f"even numbers from 2 to {most}, each once, with a sign",
            )
        label[even] = number if entry < 0 else -number
        label[2 * number - 1] = -label[even]
    gauss = [label[low:high] for low, high in pairwise(_bases(components))]
    return gauss, [abs(value) - 1 for value in label[1:]]


def _stretches(bases: Sequence[int]) -> list[tuple[int, int]]:
    """The edges of the curve as pairs of passes, in the order of the labels, each component closed last."""
    return [
        (tail, tail + 1 if tail + 1 < high else low)
        for low, high in pairwise(bases)
        for tail in range(low, high)
    ]


def _turns(passes: Sequence[int], stretches: Sequence[tuple[int, int]]) -> list[int] | None:
    """How each crossing lies in a drawing of the stretches: +1 if odd in, even in, odd out turn left.

    None if there is no such drawing. `passes[k]` is the crossing (from 0) of pass k + 1.
    """
    import networkx

    # Crossing c is a wheel with hub 5c and rim 5c + 1 (odd in), 5c + 2 (even in), 5c + 3 (odd out),
    # 5c + 4 (even out), so that the two strands cross in every drawing.
    graph = networkx.Graph()
    for hub in range(0, 5 * (len(passes) // 2), 5):
        rim = [hub + 1, hub + 2, hub + 3, hub + 4]
        graph.add_edges_from((hub, port) for port in rim)
        graph.add_edges_from(zip(rim, [*rim[1:], rim[0]], strict=True))
    for number, (tail, head) in enumerate(stretches):
        start = 5 * passes[tail - 1] + (3 if tail % 2 else 4)
        end = 5 * passes[head - 1] + (1 if head % 2 else 2)
        if graph.has_edge(start, end):  # a loop beside the rim: parallel edges need a vertex between
            middle = -1 - number
            graph.add_edges_from([(start, middle), (middle, end)])
        else:
            graph.add_edge(start, end)
    planar, embedding = networkx.check_planarity(graph)
    if not planar:
        return None
    turns = []
    for hub in range(0, 5 * (len(passes) // 2), 5):
        clockwise = list(embedding.neighbors_cw_order(hub))
        follower = clockwise[(clockwise.index(hub + 1) + 1) % 4]
        turns.append(-1 if follower == hub + 2 else 1)
    return turns


def _realise(passes: Sequence[int], stretches: Sequence[tuple[int, int]]) -> list[int]:
    """The turns of the crossings in a drawing of the whole curve."""
    turns = _turns(passes, stretches)
    if turns is not None:
        return turns
    # draw the curve stretch by stretch, to find the first that does not fit
    fits, fails = 0, len(stretches)
    while fails - fits > 1:
        middle = (fits + fails) // 2
        if _turns(passes, stretches[:middle]) is None:
            fails = middle
        else:
            fits = middle
    tail, head = stretches[fails - 1]
    raise DiagramError(
        f"not realisable in the plane: when the curve is drawn by its labels, the stretch from pass {tail} "
        f"(at crossing {passes[tail - 1] + 1}) to pass {head} (at crossing {passes[head - 1] + 1}) "
        "cannot get there without a further crossing",
        where=f"pass {head}",
        accepted="the code of a curve in the plane",
    )


def _mirror_summands(slots: Sequence[Slots], signs: Sequence[int]) -> list[int]:
    """The signs after mirroring every summand so that its first crossing is positive."""
    tails, heads = ends_of_edges(slots, signs)
    face = PlanarMap.from_ends(tails, heads).face_of_dart
    # edges that border the same two faces, in order of travel: the curve can be cut at all of them
    classes: dict[frozenset[int], list[int]] = {}
    for edge in range(1, len(tails)):
        classes.setdefault(frozenset((face[tails[edge]], face[heads[edge]])), []).append(edge)
    leader = list(range(len(slots)))

    def find(crossing: int) -> int:
        while leader[crossing] != crossing:
            leader[crossing] = leader[leader[crossing]]
            crossing = leader[crossing]
        return crossing

    for edges in classes.values():
        for before, after in zip(edges, [*edges[1:], edges[0]], strict=True):
            # a summand of the cut runs from the head of one edge to the tail of the next
            one, other = sorted((find(heads[before] // 4), find(tails[after] // 4)))
            leader[other] = one
    return [sign * signs[find(crossing)] for crossing, sign in enumerate(signs)]


def dowker_of(components: Sequence[Sequence[int]]) -> tuple[tuple[int, ...], ...]:
    """The even partners of the odd passes per component, from the Gauss labels of a planar diagram.

    Examples
    --------
    >>> dowker_of([[1, -2, 3, -1, 2, -3]])
    ((4, 6, 2),)
    >>> dowker_of([[1, -2], [-1, 2]])
    ((4,), (2,))
    """
    started = [
        [*labels[shift:], *labels[:shift]]
        for labels, shift in zip(components, _shifts(components), strict=True)
    ]
    number = {}
    for position, label in enumerate((label for labels in started for label in labels), start=1):
        number[label] = position
    return tuple(
        tuple(number[-label] if label > 0 else -number[-label] for label in labels[::2]) for labels in started
    )


def _dowker_text(components: Sequence[Sequence[int]]) -> str:
    """The line of a Dowker-Thistlethwaite code.

    Examples
    --------
    >>> _dowker_text([[4], [2], []])
    'dowker 4 / 2 circles 1'
    """
    knotted = [labels for labels in components if labels]
    parts = ["dowker"]
    if knotted:
        parts.append(" / ".join(" ".join(map(str, labels)) for labels in knotted))
    if len(knotted) < len(components):
        parts.append(f"circles {len(components) - len(knotted)}")
    return " ".join(parts)


def _shifts(components: Sequence[Sequence[int]]) -> list[int]:
    """1 for each component numbered from its second pass on, so that odd meets even at every crossing."""
    at = {
        label: (number, position)
        for number, labels in enumerate(components)
        for position, label in enumerate(labels)
    }
    shifts = [-1] * len(components)
    for first in range(len(components)):
        if shifts[first] >= 0:
            continue
        shifts[first] = 0
        reached = [first]
        for number in reached:
            for position, label in enumerate(components[number]):
                other, there = at[-label]
                if shifts[other] < 0:
                    # possible for planar curves: the faces left of the two incoming edges differ in colour
                    shifts[other] = (shifts[number] + position + there + 1) % 2
                    reached.append(other)
    return shifts
