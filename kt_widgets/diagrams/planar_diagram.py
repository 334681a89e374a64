"""Planar diagram codes: four edge labels for each crossing."""

from __future__ import annotations

from collections.abc import Sequence

from kt_widgets.diagrams.entries import (
    MAX_CROSSINGS,
    check_components,
    check_planar,
    circle_count,
    items,
    listed,
    sign_list,
    whole,
)
from kt_widgets.diagrams.planar_map import Code, Slots
from kt_widgets.errors import DiagramError

__all__ = ["planar_text", "read_planar"]

ACCEPTED = "four edge labels for each crossing, incoming under-edge first, then counter-clockwise"


def read_planar(tuples: object, signs: object = None, circles: object = 0) -> tuple[Code, str]:
    """The diagram of a planar diagram code, and its line; crossings in the order of the tuples.

    The labels are 1 to 2n, consecutive along each component in its direction, so that they tell the direction
    of the over-strands too, except for a component of two edges that is over at both its crossings: then
    `signs` must be given. Elsewhere given signs must agree with the labels.

    Examples
    --------
    >>> code, line = read_planar([(4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 3)])
    >>> code[1], line
    ((1, 1, 1), 'planar 4,2,5,1; 2,6,3,5; 6,4,1,3')
    >>> read_planar([], circles=1)
    (((), (), 1), 'planar circles 1')

    References
    ----------
    M. Mastin, Links and planar diagram codes, J. Knot Theory Ramifications 24 (2015).
    """
    rows = items(tuples, "the planar diagram code", ACCEPTED, MAX_CROSSINGS)
    slots = [_slots(row, number) for number, row in enumerate(rows, start=1)]
    loops = circle_count(circles)
    _check_labels(slots)
    given = None if signs is None else sign_list(signs, len(slots))
    derived = _signs(slots, _successors(slots), given)
    check_components(slots, loops)
    check_planar(slots, derived)
    code = tuple(slots), derived, loops
    return code, planar_text(code)


def planar_text(code: Code) -> str:
    """The line that reads back as this code; with signs only where the labels do not tell them.

    Examples
    --------
    >>> planar_text((((3, 1, 4, 2), (4, 1, 3, 2)), (-1, 1), 0))
    'planar 3,1,4,2; 4,1,3,2 signs - +'
    """
    slots, signs, circles = code
    parts = ["planar"]
    if slots:
        parts.append("; ".join(",".join(map(str, row)) for row in slots))
    if _is_ambiguous(slots):
        parts += ["signs", *("+" if sign > 0 else "-" for sign in signs)]
    if circles:
        parts.append(f"circles {circles}")
    return " ".join(parts)


def _is_ambiguous(slots: Sequence[Slots]) -> bool:
    """Whether some component of two edges is over at both its crossings."""
    over = {frozenset((right, left)) for _, right, _, left in slots}
    return len(over) < len(slots)


def _slots(row: object, number: int) -> Slots:
    where = f"crossing {number}"
    labels = [
        whole(value, f"{where}, label {k}")
        for k, value in enumerate(items(row, where, ACCEPTED, MAX_CROSSINGS), start=1)
    ]
    if len(labels) != 4:
        raise DiagramError(f"{len(labels)} labels at one crossing", where=where, accepted=ACCEPTED)
    return (labels[0], labels[1], labels[2], labels[3])


def _check_labels(slots: Sequence[Slots]) -> None:
    """Each of 1 to 2n must occur exactly twice."""
    edges = 2 * len(slots)
    count = [0] * (edges + 1)
    for number, row in enumerate(slots, start=1):
        for position, label in enumerate(row, start=1):
            where = f"crossing {number}, label {position}"
            if not 1 <= label <= edges:
                raise DiagramError(
                    f"label {label} is out of range", where=where, accepted=f"labels 1 to {edges}, each twice"
                )
            count[label] += 1
            if count[label] > 2:
                raise DiagramError(
                    f"label {label} occurs a third time", where=where, accepted="each label twice"
                )
    for label in range(1, edges + 1):
        if count[label] < 2:
            raise DiagramError(
                f"label {label} occurs {'once' if count[label] else 'nowhere'}",
                where=f"label {label}",
                accepted=f"labels 1 to {edges}, each twice",
            )


def _successors(slots: Sequence[Slots]) -> list[int]:
    """The edge after each edge, if the edges of each component are consecutive."""
    passes: list[list[int]] = [[] for _ in range(2 * len(slots) + 1)]
    for under_in, right, under_out, left in slots:
        passes[under_in].append(under_out)
        passes[under_out].append(under_in)
        passes[right].append(left)
        passes[left].append(right)
    after = [0] * len(passes)
    for base in range(1, len(passes)):
        if after[base]:
            continue
        component = _closed_curve(passes, base)
        last = base + len(component) - 1
        if last == base:
            raise DiagramError(
                f"edge {base} is a component with a single pass; closed curves in the plane meet an even "
                "number of times",
                where=f"label {base}",
                accepted="components of an even number of edges",
            )
        for position, edge in enumerate(component):
            if edge != base + position:
                raise DiagramError(
                    f"the labels along the component of edge {base} are {listed(component)}: not consecutive",
                    where=f"label {edge}",
                    accepted=f"labels {base} to {last} in order of travel",
                )
            after[base + position] = base + (position + 1) % len(component)
    return after


def _closed_curve(passes: Sequence[Sequence[int]], base: int) -> list[int]:
    """The edges of the component of `base`, straight on at each crossing, in one of its two directions."""
    # Each edge has two neighbours along the curve; starting towards base + 1 when that is one of them.
    one, two = passes[base]
    towards = base + 1 if base + 1 in (one, two) else one
    curve = [base]
    previous, edge = base, towards
    while edge != base:
        curve.append(edge)
        one, two = passes[edge]
        previous, edge = edge, (two if one == previous else one)
    return curve


def _signs(slots: Sequence[Slots], after: Sequence[int], given: Sequence[int] | None) -> tuple[int, ...]:
    """The sign of each crossing from the direction of its over-strand."""
    under_goes: dict[int, int] = {}
    for number, (under_in, _, under_out, _) in enumerate(slots, start=1):
        if after[under_in] != under_out:
            raise DiagramError(
                f"the under-strand runs from edge {under_in} to edge {under_out}, against the labels",
                where=f"crossing {number}",
                accepted=f"incoming under-edge first: {after[under_in]} follows {under_in}",
            )
        if under_in in under_goes:
            raise DiagramError(
                f"edge {under_in} goes under twice, at crossings {under_goes[under_in]} and {number}",
                where=f"crossing {number}",
                accepted="each label once as the end of an edge and once as its start",
            )
        under_goes[under_in] = number
    signs = []
    chosen: dict[int, int] = {}
    for number, (_, right, _, left) in enumerate(slots, start=1):
        positive, negative = after[left] == right, after[right] == left
        if positive and negative:
            # two edges: the direction comes from the other pass of the component, or from the given signs
            if left in under_goes or right in under_goes:
                sign = 1 if right in under_goes else -1
            elif given is None:
                raise DiagramError(
                    f"the component of edges {min(left, right)} and {max(left, right)} is over at both its "
                    "crossings, so that the labels do not tell its direction",
                    where=f"crossing {number}",
                    accepted="the same code with the signs of the crossings",
                )
            else:
                sign = given[number - 1]
                start = left if sign > 0 else right
                if start in chosen:
                    raise DiagramError(
                        f"by the signs of crossings {chosen[start]} and {number}, edge {start} ends twice",
                        where=f"crossing {number}",
                        accepted=f"the sign {-sign:+d} at one of the two",
                    )
                chosen[start] = number
        else:
            sign = 1 if positive else -1
        if given is not None and given[number - 1] != sign:
            raise DiagramError(
                f"the sign {given[number - 1]:+d} disagrees with the labels",
                where=f"crossing {number}",
                accepted=f"{sign:+d}",
            )
        signs.append(sign)
    return tuple(signs)
