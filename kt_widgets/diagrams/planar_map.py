"""The map that a diagram draws on the sphere: ends of edges at crossings, faces, connected pieces, genus."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

__all__ = ["Code", "PlanarMap", "Slots", "ends_of_edges"]

Slots = tuple[int, int, int, int]
"""The edges round one crossing: incoming under-edge first, then counter-clockwise."""

Code = tuple[tuple[Slots, ...], tuple[int, ...], int]
"""What every notation is read into: edges round each crossing, signs, number of crossingless components."""


def ends_of_edges(slots: Sequence[Slots], signs: Sequence[int]) -> tuple[list[int], list[int]]:
    """The dart where each edge starts and the dart where it ends.

    Dart 4c + s is slot s of the c-th crossing (c from 0); both lists are indexed by edge, entry 0 is unused.

    Examples
    --------
    >>> ends_of_edges([(1, 1, 2, 2)], [1])
    ([-1, 1, 2], [-1, 0, 3])
    """
    tails = [-1] * (2 * len(slots) + 1)
    heads = tails.copy()
    dart = 0
    for (under_in, right, under_out, left), sign in zip(slots, signs, strict=True):
        heads[under_in] = dart
        tails[under_out] = dart + 2
        # the over-strand of a positive crossing comes from the left of the under-strand
        if sign > 0:
            tails[right] = dart + 1
            heads[left] = dart + 3
        else:
            heads[right] = dart + 1
            tails[left] = dart + 3
        dart += 4
    return tails, heads


@dataclass(frozen=True)
class PlanarMap:
    """A 4-valent map as a rotation system.

    Dart 4c + s is the end of an edge in slot s of crossing c (both from 0, slots counter-clockwise), and
    ``mate[dart]`` is the other end of the same edge. Loops and parallel edges are normal. A map of several
    connected pieces has each piece on its own sphere: a code does not say in which face of one another lies.

    Parameters
    ----------
    mate : tuple of int
        A fixed-point-free involution of the darts.

    Examples
    --------
    One crossing with two loops has three faces; the walk of a face keeps it on the left.

    >>> kink = PlanarMap((1, 0, 3, 2))
    >>> kink.faces
    ((0,), (1, 3), (2,))
    >>> kink.pieces, kink.genera
    (((0,),), (0,))
    """

    mate: tuple[int, ...]

    @classmethod
    def from_ends(cls, tails: Sequence[int], heads: Sequence[int]) -> PlanarMap:
        """The map whose edges run from `tails` to `heads` (as made by `ends_of_edges`)."""
        mate = [0] * (2 * (len(tails) - 1))
        for tail, head in zip(tails[1:], heads[1:], strict=True):
            mate[tail] = head
            mate[head] = tail
        return cls(tuple(mate))

    @cached_property
    def faces(self) -> tuple[tuple[int, ...], ...]:
        """Each face as the darts leaving a crossing along its boundary, face on the left; by lowest dart."""
        mate = self.mate
        seen = bytearray(len(mate))
        faces = []
        for first in range(len(mate)):
            if seen[first]:
                continue
            walk = []
            dart = first
            while not seen[dart]:
                seen[dart] = 1
                walk.append(dart)
                arrival = mate[dart]
                # the sharpest left turn is the slot clockwise of the one we came by
                dart = (arrival & ~3) | ((arrival - 1) & 3)
            faces.append(tuple(walk))
        return tuple(faces)

    @cached_property
    def face_of_dart(self) -> tuple[int, ...]:
        """The index in `faces` of the face on the left of each dart."""
        owner = [0] * len(self.mate)
        for index, walk in enumerate(self.faces):
            for dart in walk:
                owner[dart] = index
        return tuple(owner)

    @cached_property
    def pieces(self) -> tuple[tuple[int, ...], ...]:
        """The crossings (from 0) of each connected piece, by lowest crossing."""
        mate = self.mate
        seen = bytearray(len(mate) // 4)
        pieces = []
        for first in range(len(seen)):
            if seen[first]:
                continue
            seen[first] = 1
            found = [first]
            for crossing in found:
                for dart in range(4 * crossing, 4 * crossing + 4):
                    other = mate[dart] // 4
                    if not seen[other]:
                        seen[other] = 1
                        found.append(other)
            pieces.append(tuple(sorted(found)))
        return tuple(pieces)

    @cached_property
    def genera(self) -> tuple[int, ...]:
        """The genus of the closed surface that each piece fills: all 0 exactly when the map is planar.

        A piece of n crossings has 2n edges, so Euler's formula reads n - 2n + faces = 2 - 2 genus.
        """
        pieces = self.pieces
        if len(pieces) == 1:
            return ((2 + len(pieces[0]) - len(self.faces)) // 2,)
        owner = [0] * (len(self.mate) // 4)
        for index, piece in enumerate(pieces):
            for crossing in piece:
                owner[crossing] = index
        faces = [0] * len(pieces)
        for walk in self.faces:
            faces[owner[walk[0] // 4]] += 1
        return tuple((2 + len(piece) - count) // 2 for piece, count in zip(pieces, faces, strict=True))
