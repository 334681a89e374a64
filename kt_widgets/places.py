"""`Place`: the one way to say which arc, crossing, relator, letter, cell or entry is meant."""

from __future__ import annotations

from dataclasses import dataclass

__all__ = ["Place"]


@dataclass(frozen=True, order=True, slots=True)
class Place:
    """A kind of thing and its indices; the text form is the id used in pictures.

    Numbers of arcs, crossings, edges, faces, components, relators, letters, rows and columns count from 1.
    Kinds in use: ``arc:i``, ``crossing:i``, ``edge:g:k`` (the lift of generator g that starts at t^k e),
    ``vertex:k``, ``cell:r:k`` (the lift of relator r's 2-cell at t^k e), ``relator:r``, ``letter:r:j``
    (letter j of relator r), ``generator:g`` (g is the generator's name), ``entry:d:i:j`` (row i, column j of
    boundary(d)), ``face:i``, ``component:i``, ``strand:i`` (an edge of the diagram's planar map).

    Examples
    --------
    >>> str(Place("letter", (1, 4)))
    'letter:1:4'
    >>> Place.parse("edge:b:-2")
    Place(kind='edge', indices=('b', -2))
    """

    kind: str
    indices: tuple[int | str, ...] = ()

    def __str__(self) -> str:
        return ":".join([self.kind, *map(str, self.indices)])

    @classmethod
    def parse(cls, text: str) -> Place:
        """Read the text form back."""
        kind, *rest = text.split(":")
        return cls(kind, tuple(int(r) if r.lstrip("-").isdigit() else r for r in rest))
