"""Seifert matrices of closed braids."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.errors import DiagramError

__all__ = ["seifert_matrix"]


def seifert_matrix(word: Sequence[int], strands: int | None = None) -> LaurentMatrix:
    """The Seifert matrix V of the closure of a braid, on the surface of a disc per strand, a band per letter.

    The discs stand behind their strands, parallel to each other, and letter +-i is a band with half a twist
    between the discs i and i + 1. Two letters with the same i, next to each other among those, give a loop:
    to the right through the lower band, up in disc i + 1, back through the upper band, down in disc i. V has
    lk(a, b pushed off) as its entry (a, b), pushed to the side that a positive meridian reaches, here to the
    left of the discs. Loops are ordered by i and then upwards. Seen from the front, with linking numbers
    counted at crossings (own derivation; after H. Seifert, Über das Geschlecht von Knoten, Math. Ann. 110
    (1935)):

    - a loop between letters of signs d and e has the entry -(d + e)/2 with itself;
    - for loops a below b with a common band of sign e, V(b, a) = 1 if e = 1, V(a, b) = -1 if e = -1;
    - for loops a of letters p < q in column i and b of r < s in column i + 1, V(a, b) = 1 if p < r < q < s
      and -1 if r < p < s < q;
    - all other entries are 0.

    Parameters
    ----------
    word : sequence of int
        As in `kt_widgets.diagrams.diagram.Diagram.from_braid`.
    strands : int, optional

    Raises
    ------
    DiagramError
        If this is no braid word, or the surface is not connected: every i has to occur.

    Examples
    --------
    >>> print(seifert_matrix([1, 1, 1]))
    [[-1, 0 ],
     [1,  -1]]
    >>> from kt_widgets.modules.module import Module
    >>> print(Module.from_seifert_matrix(seifert_matrix([1, -2, 1, -2])).order())
    1 - 3t + t^2
    """
    Diagram.from_braid(word, strands)
    width = max(map(abs, word), default=0) + 1 if strands is None else strands
    columns = [[k for k, letter in enumerate(word) if abs(letter) == i] for i in range(1, width)]
    for i, column in enumerate(columns, 1):
        if not column:
            raise DiagramError(
                f"no letter joins the strands {i} and {i + 1}: the surface is not connected",
                where="braid word",
                accepted=f"a word with the letter {i} or {-i}",
            )
    loops = [(i, low, high) for i, column in enumerate(columns) for low, high in pairwise(column)]
    signs = [1 if letter > 0 else -1 for letter in word]
    entries: dict[tuple[int, int], int] = {}
    for x, (i, p, q) in enumerate(loops):
        entries[x, x] = -(signs[p] + signs[q]) // 2
        for y, (j, r, s) in enumerate(loops):
            if i == j and q == r:
                entries[(y, x) if signs[q] > 0 else (x, y)] = signs[q]
            elif j == i + 1 and p < r < q < s:
                entries[x, y] = 1
            elif j == i + 1 and r < p < s < q:
                entries[x, y] = -1
    return LaurentMatrix.from_entries(entries, (len(loops), len(loops)))
