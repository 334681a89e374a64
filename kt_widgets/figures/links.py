"""`links`: which places of a diagram, its relators, its cover and its matrices belong together."""

from __future__ import annotations

from kt_widgets.covers.cover import Cover
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.errors import LimitError
from kt_widgets.places import Place

__all__ = ["MAX_LETTERS", "check_size", "links"]

MAX_LETTERS = 2000
"""Linked views hold relators of at most this many letters altogether."""


def check_size(cover: Cover) -> None:
    """Refuse a cover whose relators are too long to be shown letter by letter.

    Raises
    ------
    LimitError
        Beyond `MAX_LETTERS`.
    """
    letters = sum(map(len, cover.presentation.boundary_words))
    if letters > MAX_LETTERS:
        raise LimitError(
            f"relators of {letters} letters are too long to be linked letter by letter",
            accepted=f"at most {MAX_LETTERS} letters altogether",
        )


def links(cover: Cover, diagram: Diagram | None = None) -> dict[str, list[str]]:
    """For each place, by its text form, the places that belong to it, in a fixed order.

    Whatever one letter of a relator touches belongs together: the letter, its relator and crossing, its
    generator and arc, the edge of the cover that it crosses, its 2-cell, and its entry of boundary(2). The
    relation is symmetric. A generator's entry of boundary(1) belongs to the ends of its edge at e.

    Parameters
    ----------
    cover : Cover
    diagram : Diagram, optional
        If given, components belong to their arcs.

    Raises
    ------
    LimitError
        Beyond `MAX_LETTERS`.

    Examples
    --------
    >>> from kt_widgets.groups.presentations import Presentation
    >>> found = links(Cover(Presentation.parse("< t, x | t x t^-1 x^-2 >")))
    >>> found["entry:2:2:1"]
    ['letter:1:2', 'letter:1:4', 'letter:1:5', 'edge:x:0', 'edge:x:1', 'cell:1:0', 'relator:1', 'generator:x']
    """
    check_size(cover)
    presentation, weights = cover.presentation, cover.weights
    together: set[tuple[str, ...]] = set()
    rows = {g: i for i, g in enumerate(presentation.generators, 1)}
    for g, i in rows.items():
        arc = presentation.place_of("generator", g)
        ends = [f"vertex:{k}" for k in {0, weights[g]}]
        entry = f"entry:1:1:{i}"
        together.add(("generator:" + g, entry, *([str(arc)] if arc else [])))
        together.update((entry, other) for other in (f"edge:{g}:0", *ends))
        together.update((f"edge:{g}:0", end) for end in ends)
    for r in range(1, len(presentation.boundary_words) + 1):
        crossing = presentation.place_of("relator", r)
        for v in cover.visits(r):
            arc = presentation.place_of("generator", v.generator)
            names = (f"entry:2:{rows[v.generator]}:{r}", f"relator:{r}", f"generator:{v.generator}")
            places = (v.letter, v.edge, v.cell, crossing, arc)
            together.add((*names, *(str(place) for place in places if place)))
            together.update((str(v.edge), f"vertex:{k}") for k in {v.start, v.end})
    if diagram is not None:
        together.update((f"component:{c.number}", f"arc:{arc}") for c in diagram.components for arc in c.arcs)
    found: dict[str, set[str]] = {}
    for group in together:
        for place in group:
            found.setdefault(place, set()).update(group)
    return {place: sorted(found[place] - {place}, key=_order) for place in sorted(found, key=_order)}


_KINDS = (
    "entry",
    "letter",
    "edge",
    "vertex",
    "cell",
    "relator",
    "generator",
    "arc",
    "crossing",
    "component",
)


def _order(place: str) -> tuple[int, list[tuple[str, int]]]:
    """By kind, then by indices: names in alphabetical, numbers in numerical order."""
    parsed = Place.parse(place)
    return _KINDS.index(parsed.kind), [(i, 0) if isinstance(i, str) else ("", i) for i in parsed.indices]
