"""The checks that all notations share: whole numbers, signs, sizes, and that a code is planar."""

from __future__ import annotations

import operator
from collections.abc import Iterable, Sequence
from itertools import islice

from kt_widgets.diagrams.planar_map import PlanarMap, Slots, ends_of_edges
from kt_widgets.errors import DiagramError, LimitError

__all__ = [
    "MAX_CIRCLES",
    "MAX_CROSSINGS",
    "check_components",
    "check_planar",
    "circle_count",
    "items",
    "listed",
    "sign_list",
    "size",
    "whole",
]

MAX_CROSSINGS = 100_000
"""A diagram has at most this many crossings."""

MAX_CIRCLES = 10_000
"""A diagram has at most this many crossingless components, a braid at most this many strands."""

MAX_NUMBER = 10**12
"""Numbers in a code are at most this large, up to sign."""


def whole(value: object, where: str) -> int:
    """The value as an int; floats, bools and strings are refused."""
    if not isinstance(value, bool):
        try:
            number = operator.index(value)  # type: ignore[arg-type]
        except TypeError:
            pass
        else:
            if abs(number) > MAX_NUMBER:
                raise LimitError(
                    f"a number of {number.bit_length()} bits", where=where, accepted=f"at most {MAX_NUMBER}"
                )
            return number
    raise DiagramError(
        f"{value!r} is not a whole number", where=where, accepted="whole numbers such as 3 or -2"
    )


def items(values: object, what: str, accepted: str, most: int) -> list[object]:
    """The entries of a list-like value; not more than `most` are looked at."""
    if isinstance(values, (str, bytes, dict, set, frozenset)) or not isinstance(values, Iterable):
        raise DiagramError(f"{what} is a {type(values).__name__}, not a list", where=what, accepted=accepted)
    entries = list(islice(values, most + 1))
    if len(entries) > most:
        raise LimitError(f"more than {most} entries", where=what, accepted=f"at most {most}")
    return entries


def size(count: int, most: int, what: str) -> None:
    """Refuse a number of things beyond its limit."""
    if count > most:
        raise LimitError(f"{count} {what} are too many", where=what, accepted=f"at most {most}")


def circle_count(value: object) -> int:
    """A number of crossingless components."""
    circles = whole(value, "circles")
    if circles < 0:
        raise DiagramError(f"{circles} crossingless components", where="circles", accepted="0 or more")
    size(circles, MAX_CIRCLES, "crossingless components")
    return circles


def sign_list(signs: object, crossings: int) -> tuple[int, ...]:
    """The signs of crossings 1, 2, ..., each +1 or -1."""
    read = []
    for number, value in enumerate(items(signs, "the signs", "a list of +1 and -1", MAX_CROSSINGS), start=1):
        sign = whole(value, f"sign {number}")
        if sign not in (1, -1):
            raise DiagramError(f"{sign} is not a sign", where=f"sign {number}", accepted="+1 or -1")
        read.append(sign)
    if len(read) != crossings:
        raise DiagramError(
            f"{len(read)} signs for {crossings} crossings",
            where="signs",
            accepted="one sign for each crossing",
        )
    return tuple(read)


def check_planar(slots: Sequence[Slots], signs: Sequence[int]) -> None:
    """Refuse a code whose map is not planar, by Euler's formula for each connected piece."""
    plane = PlanarMap.from_ends(*ends_of_edges(slots, signs))
    for piece, genus in zip(plane.pieces, plane.genera, strict=True):
        if genus:
            raise DiagramError(
                f"not planar: the connected piece with crossings {listed(c + 1 for c in piece)} "
                f"fills a closed surface of genus {genus}",
                where=f"crossing {piece[0] + 1}",
                accepted="a code whose every piece of n crossings has n + 2 faces",
            )


def check_components(slots: Sequence[Slots], circles: int) -> None:
    """Refuse the diagram without components, and too many crossingless ones."""
    size(circles, MAX_CIRCLES, "crossingless components")
    if not slots and not circles:
        raise DiagramError(
            "a diagram needs at least one component", where="the code", accepted="a crossing or a circle"
        )


def listed(values: Iterable[int], most: int = 8) -> str:
    """Numbers for a message, a long tail cut."""
    shown = list(values)
    tail = f", ... ({len(shown)} in all)" if len(shown) > most else ""
    return ", ".join(map(str, shown[:most])) + tail
