"""Braid words: the closure of a braid as a diagram."""

from __future__ import annotations

from kt_widgets.diagrams.entries import MAX_CIRCLES, MAX_CROSSINGS, items, size, whole
from kt_widgets.diagrams.planar_map import Code, Slots
from kt_widgets.errors import DiagramError

__all__ = ["read_braid"]

ACCEPTED = "non-zero whole numbers, +i or -i for the crossing of strands i and i + 1"


def read_braid(word: object, strands: object = None) -> tuple[Code, str]:
    """The closure of a braid, and the line it is written in: its crossings in the order of the letters.

    Strands run upwards and letter +i is a positive crossing of strands i and i + 1: the strand that comes
    from the left passes over. The components are numbered by their lowest strand at the bottom, where their
    base edges are; strands that no letter uses are crossingless components.

    Examples
    --------
    >>> read_braid([1, 1, 1])
    ((((4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 3)), (1, 1, 1), 0), 'braid 1 1 1')
    >>> read_braid([], strands=2)
    (((), (), 2), 'braid strands 2')
    """
    read = []
    for number, value in enumerate(items(word, "the braid word", ACCEPTED, MAX_CROSSINGS), start=1):
        letter = whole(value, f"letter {number}")
        if not letter:
            raise DiagramError("0 is not a letter of a braid", where=f"letter {number}", accepted=ACCEPTED)
        read.append(letter)
    width = _width(read, strands)
    line = " ".join(["braid", *map(str, read)])
    return _closure(read, width), line if strands is None else f"{line} strands {width}"


def _width(word: list[int], strands: object) -> int:
    """The number of strands: as stated, otherwise the least that the letters need."""
    needed = max(map(abs, word), default=0) + 1
    if strands is None:
        if not word:
            raise DiagramError(
                "an empty braid word does not say how many strands it has",
                where="braid word",
                accepted="a letter, or the number of strands",
            )
        width = needed
    else:
        width = whole(strands, "strands")
        if width < 1:
            raise DiagramError(f"{width} strands", where="strands", accepted="1 or more")
        if word and width < needed:
            at = next(number for number, letter in enumerate(word, start=1) if abs(letter) >= width)
            raise DiagramError(
                f"letter {word[at - 1]} needs {abs(word[at - 1]) + 1} strands, there are {width}",
                where=f"letter {at}",
                accepted=f"letters from 1 to {width - 1} with either sign, or strands {needed}"
                if width > 1
                else f"strands {needed}",
            )
    size(width, MAX_CIRCLES, "strands")
    return width


def _closure(word: list[int], width: int) -> Code:
    """The code of the closure of a checked word."""
    # Provisional edges: p < width is the edge at position p at the bottom, width + 2k and width + 2k + 1 are
    # those above letter k. At the top, position p is glued to the bottom edge p.
    last = [-1] * width
    for k, letter in enumerate(word):
        left = abs(letter) - 1
        last[left] = last[left + 1] = k
    follower = [0] * (width + 2 * len(word))
    current = list(range(width))
    ends = []
    made = width
    for k, letter in enumerate(word):
        left = abs(letter) - 1
        below_left, below_right = current[left], current[left + 1]
        above_left = made if last[left] != k else left
        above_right = made + 1 if last[left + 1] != k else left + 1
        made += 2
        follower[below_left] = above_right
        follower[below_right] = above_left
        current[left], current[left + 1] = above_left, above_right
        ends.append((below_left, below_right, above_left, above_right))
    number = [0] * len(follower)
    count = circles = 0
    for start in range(width):
        if last[start] < 0:
            circles += 1
            continue
        edge = start
        while not number[edge]:
            count += 1
            number[edge] = count
            edge = follower[edge]
    slots: list[Slots] = []
    for letter, (below_left, below_right, above_left, above_right) in zip(word, ends, strict=True):
        lower_left, lower_right = number[below_left], number[below_right]
        upper_left, upper_right = number[above_left], number[above_right]
        if letter > 0:
            slots.append((lower_right, upper_right, upper_left, lower_left))
        else:
            slots.append((lower_left, lower_right, upper_right, upper_left))
    return tuple(slots), tuple(1 if letter > 0 else -1 for letter in word), circles
