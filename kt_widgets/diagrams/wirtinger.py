"""Wirtinger's presentation of a link group, meridians and longitudes, from the arcs at the crossings."""

from __future__ import annotations

from collections.abc import Sequence

from kt_widgets.diagrams.planar_map import Slots
from kt_widgets.groups.presentations import Presentation
from kt_widgets.groups.words import Letter, Word
from kt_widgets.places import Place

__all__ = ["arc_names", "longitude", "relator", "wirtinger"]

_LETTERS = "abcdefghijklmnopqrs"  # t is the variable of the cover


def arc_names(arcs: int) -> tuple[str, ...]:
    """The generators' names in the order of the arcs: a to s, beyond 19 arcs a1, a2, ...

    Examples
    --------
    >>> arc_names(3), arc_names(20)[-1]
    (('a', 'b', 'c'), 'a20')
    """
    if arcs <= len(_LETTERS):
        return tuple(_LETTERS[:arcs])
    return tuple(f"a{number}" for number in range(1, arcs + 1))


def relator(over: str, enters: str, leaves: str, sign: int) -> Word:
    """The relator c v^-1 of the relation c = v at a crossing, as a literal word.

    The under-strand enters as b and leaves as c under the arc a: c = a^-1 b a at a positive crossing,
    c = a b a^-1 at a negative one (base point above the plane; an arc's generator passes under it from its
    right to its left; loops compose from left to right).

    Examples
    --------
    >>> print(relator("a", "b", "c", 1), "|", relator("a", "b", "c", -1))
    c a^-1 b^-1 a | c a b^-1 a^-1
    """
    return Word(((leaves, 1), (over, -sign), (enters, -1), (over, sign)))


def wirtinger(
    slots: Sequence[Slots],
    signs: Sequence[int],
    arc_of_edge: Sequence[int],
    names: Sequence[str],
    marks: dict[str, Word],
) -> Presentation:
    """All relators, in the order of the crossings, with the arc and the crossing that each thing comes from.

    Any one relator per connected piece follows from the others. W. Wirtinger, in K. Reidemeister,
    Knotentheorie (1932), from memory.
    """
    relators = [
        relator(
            names[arc_of_edge[right] - 1],
            names[arc_of_edge[under_in] - 1],
            names[arc_of_edge[under_out] - 1],
            sign,
        )
        for (under_in, right, under_out, _), sign in zip(slots, signs, strict=True)
    ]
    places = {f"generator:{name}": Place("arc", (arc,)) for arc, name in enumerate(names, start=1)}
    for crossing in range(1, len(slots) + 1):
        places[f"relator:{crossing}"] = Place("crossing", (crossing,))
    return Presentation(names, relators, places, marks)


def longitude(passes: Sequence[Letter], meridian: str, own: frozenset[str]) -> Word:
    """The longitude of a component as a literal word, from the arcs it passes under.

    `passes` are the over-arcs and signs in order of travel from the base edge, `own` the names of the
    component's arcs. After the arc a with sign e the generator x has become a^-e x a^e, so that the product
    w of all a^e commutes with the meridian x of the base edge; w x^-k has linking number 0 with the
    component.

    Examples
    --------
    The right-handed trefoil, read at its three under-crossings:

    >>> print(longitude([("c", 1), ("a", 1), ("b", 1)], "a", frozenset("abc")))
    c a b a^-3
    """
    turns = sum(sign for name, sign in passes if name in own)
    closing: Letter = (meridian, -1 if turns > 0 else 1)
    return Word((*passes, *[closing] * abs(turns)))
