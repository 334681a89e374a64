"""What is measured: random closed braids, their Alexander matrices, and our own work on them."""

from __future__ import annotations

import random

import kt_widgets as kt

__all__ = [
    "Minor",
    "double_cover",
    "full_matrix",
    "minor_of",
    "polynomial",
    "random_knot_braid",
    "refresh",
    "smith",
]

Minor = list[list[kt.LaurentPolynomial]]


def random_knot_braid(crossings: int, strands: int, rng: random.Random) -> list[int]:
    """A braid word of the given length that uses every strand and closes to a knot.

    A cycle of all strands has the parity of strands - 1, so the length must have it too.
    """
    assert (crossings - strands) % 2, "such a braid never closes to a knot"
    while True:
        word = [rng.choice((1, -1)) * rng.randint(1, strands - 1) for _ in range(crossings)]
        ends = list(range(strands))
        for letter in word:
            i = abs(letter) - 1
            ends[i], ends[i + 1] = ends[i + 1], ends[i]
        position, length = ends[0], 1
        while position != 0:
            position, length = ends[position], length + 1
        if length == strands and len({abs(letter) for letter in word}) == strands - 1:
            return word


def full_matrix(word: list[int]) -> kt.LaurentMatrix:
    """boundary(2) of the closed braid, all relators kept."""
    return kt.Diagram.from_braid(word).cover().chains().boundary(2)


def minor_of(word: list[int]) -> Minor:
    """The Alexander matrix of the closed braid less its last row and column."""
    return [list(line[:-1]) for line in full_matrix(word).rows[:-1]]


def refresh(word: list[int]) -> None:
    """Diagram -> relators -> boundary matrices -> polynomial -> invariant factors over Q; no display."""
    d = kt.Diagram.from_braid(word)
    h = d.cover().chains().homology(1)
    d.alexander_polynomial()
    h.over("Q").invariant_factors()


def polynomial(word: list[int]) -> kt.LaurentPolynomial:
    """From the word to the Alexander polynomial."""
    return kt.Diagram.from_braid(word).alexander_polynomial()


def smith(word: list[int]) -> None:
    """From the word to the Smith form over Q with its transforms."""
    kt.Diagram.from_braid(word).cover().chains().homology(1).over("Q").certificate()


def double_cover(word: list[int]) -> tuple[int, ...]:
    """From the word to H_1 of the double branched cover."""
    return kt.Diagram.from_braid(word).cover().branched_cover(2).invariant_factors()
