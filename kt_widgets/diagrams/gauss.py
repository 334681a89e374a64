"""Signed Gauss codes: the crossings met along each component, and the sign of each crossing."""

from __future__ import annotations

from collections.abc import Sequence

from kt_widgets.diagrams.entries import (
    MAX_CROSSINGS,
    check_components,
    check_planar,
    items,
    sign_list,
    size,
    whole,
)
from kt_widgets.diagrams.planar_map import Code, Slots
from kt_widgets.errors import DiagramError

__all__ = ["assemble", "gauss_of", "read_gauss"]

ACCEPTED = "a list per component of the crossings in order of travel, +i passing over crossing i, -i under"


def read_gauss(components: object, signs: object) -> tuple[Code, str]:
    """The diagram of a signed Gauss code, and its line; crossings 1, 2, ... in the order of their numbers.

    An empty list is a crossingless component.

    Examples
    --------
    >>> code, line = read_gauss([[1, -2, 3, -1, 2, -3]], [1, 1, 1])
    >>> code[0], line
    (((4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 3)), 'gauss 1 -2 3 -1 2 -3 signs + + +')
    """
    rows = items(components, "the Gauss code", ACCEPTED, MAX_CROSSINGS)
    read = [_component(row, number) for number, row in enumerate(rows, start=1)]
    code = slots, checked, circles = assemble(read, sign_list(signs, _check_labels(read)))
    check_components(slots, circles)
    check_planar(slots, checked)
    return code, _gauss_text(read, checked)


def _component(values: object, number: int) -> list[int]:
    where = f"component {number}"
    labels = []
    for position, value in enumerate(items(values, where, ACCEPTED, 2 * MAX_CROSSINGS), start=1):
        label = whole(value, f"{where}, position {position}")
        if not label:
            raise DiagramError(
                "0 names no crossing", where=f"{where}, position {position}", accepted=ACCEPTED
            )
        labels.append(label)
    return labels


def _check_labels(components: list[list[int]]) -> int:
    """The number of crossings, each of which must be met once over and once under."""
    seen: dict[int, str] = {}
    for number, labels in enumerate(components, start=1):
        for position, label in enumerate(labels, start=1):
            where = f"component {number}, position {position}"
            if label in seen:
                way, other = ("over", "under") if label > 0 else ("under", "over")
                raise DiagramError(
                    f"crossing {abs(label)} is passed {way} twice (first at {seen[label]})",
                    where=where,
                    accepted=f"{-label} for the pass {other} it",
                )
            seen[label] = where
    size(len(seen), 2 * MAX_CROSSINGS, "passes")
    for label, where in seen.items():
        if -label not in seen:
            raise DiagramError(
                f"crossing {abs(label)} is passed {'over' if label > 0 else 'under'} only",
                where=where,
                accepted=f"{-label} once as well",
            )
    crossings = len(seen) // 2
    for number in range(1, crossings + 1):
        if number not in seen:
            largest = max(seen)
            raise DiagramError(
                f"crossing {number} is missing although crossing {largest} occurs",
                where=seen[largest],
                accepted=f"the crossings numbered 1 to {crossings}",
            )
    return crossings


def assemble(components: Sequence[Sequence[int]], signs: Sequence[int]) -> Code:
    """The code of checked Gauss data; the edge that leads into a component's first pass is its base edge."""
    crossings = len(signs)
    over = [(0, 0)] * crossings
    under = [(0, 0)] * crossings
    edge = 1
    for labels in components:
        base = edge
        for position, label in enumerate(labels, start=1):
            ends = (edge, edge + 1 if position < len(labels) else base)
            if label > 0:
                over[label - 1] = ends
            else:
                under[-label - 1] = ends
            edge += 1
    slots: list[Slots] = []
    for (under_in, under_out), (over_in, over_out), sign in zip(under, over, signs, strict=True):
        right, left = (over_out, over_in) if sign > 0 else (over_in, over_out)
        slots.append((under_in, right, under_out, left))
    return tuple(slots), tuple(signs), sum(not labels for labels in components)


def gauss_of(code: Code) -> tuple[tuple[tuple[int, ...], ...], tuple[int, ...]]:
    """The Gauss labels along each component from its base edge on, and the signs.

    Examples
    --------
    >>> gauss_of((((4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 3)), (1, 1, 1), 0))
    (((1, -2, 3, -1, 2, -3),), (1, 1, 1))
    """
    slots, signs, circles = code
    label = [0] * (2 * len(slots) + 1)
    after = label.copy()
    for number, ((under_in, right, under_out, left), sign) in enumerate(
        zip(slots, signs, strict=True), start=1
    ):
        over_in, over_out = (left, right) if sign > 0 else (right, left)
        label[under_in], after[under_in] = -number, under_out
        label[over_in], after[over_in] = number, over_out
    components: list[tuple[int, ...]] = []
    base = 1
    for edge in range(1, len(label)):
        if after[edge] == base:
            components.append(tuple(label[base : edge + 1]))
            base = edge + 1
    return (*components, *[()] * circles), signs


def _gauss_text(components: Sequence[Sequence[int]], signs: Sequence[int]) -> str:
    """The line of a signed Gauss code.

    Examples
    --------
    >>> _gauss_text([[1, 2], [-1, -2], []], [1, 1])
    'gauss 1 2 / -1 -2 signs + + circles 1'
    """
    knotted = [labels for labels in components if labels]
    parts = ["gauss"]
    if knotted:
        parts.append(" / ".join(" ".join(map(str, labels)) for labels in knotted))
        parts += ["signs", *("+" if sign > 0 else "-" for sign in signs)]
    if len(knotted) < len(components):
        parts.append(f"circles {len(components) - len(knotted)}")
    return " ".join(parts)
