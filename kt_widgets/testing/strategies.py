"""Hypothesis strategies: braid words, diagrams of links and knots, presentations with weights."""

from __future__ import annotations

from collections.abc import Sequence

from hypothesis import strategies as st

from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.groups.presentations import Presentation
from kt_widgets.groups.words import Letter, Word

__all__ = ["braids", "diagrams", "knot_braids", "knots", "presentations", "weighted_presentations", "words"]


@st.composite
def braids(draw: st.DrawFn, max_strands: int = 4, max_letters: int = 9) -> tuple[list[int], int]:
    """A braid word and its number of strands, some of which may be unused."""
    strands = draw(st.integers(1, max_strands))
    if strands == 1:
        return [], 1
    letter = st.integers(1, strands - 1).flatmap(lambda i: st.sampled_from([i, -i]))
    return draw(st.lists(letter, max_size=max_letters)), strands


@st.composite
def knot_braids(draw: st.DrawFn, max_strands: int = 4, max_letters: int = 9) -> tuple[list[int], int]:
    """A braid word whose closure is a knot with at least one crossing, and its number of strands."""
    word, strands = draw(braids(max_strands, max_letters))
    if strands == 1:
        word, strands = [draw(st.sampled_from([1, -1]))], 2
    for left in range(1, strands):
        # a further letter joins two components into one
        cycles = _cycles(word, strands)
        if cycles[left - 1] != cycles[left]:
            word = [*word, draw(st.sampled_from([left, -left]))]
    return word, strands


def _cycles(word: Sequence[int], strands: int) -> list[int]:
    """The component of the closure at each position at the bottom."""
    at_top = list(range(strands))
    for letter in word:
        left = abs(letter) - 1
        at_top[left], at_top[left + 1] = at_top[left + 1], at_top[left]
    component = [-1] * strands
    for start in range(strands):
        position = start
        while component[position] < 0:
            component[position] = start
            position = at_top.index(position)
    return component


@st.composite
def diagrams(draw: st.DrawFn, max_strands: int = 4, max_letters: int = 9) -> Diagram:
    """The closure of a braid, perhaps mirrored or reversed."""
    diagram = Diagram.from_braid(*draw(braids(max_strands, max_letters)))
    return _varied(draw, diagram)


@st.composite
def knots(draw: st.DrawFn, max_strands: int = 4, max_letters: int = 9) -> Diagram:
    """A diagram of a knot with at least one crossing."""
    return _varied(draw, Diagram.from_braid(*draw(knot_braids(max_strands, max_letters))))


def _varied(draw: st.DrawFn, diagram: Diagram) -> Diagram:
    if draw(st.booleans()):
        diagram = diagram.mirror()
    if draw(st.booleans()):
        diagram = diagram.reverse()
    return diagram


@st.composite
def words(draw: st.DrawFn, generators: Sequence[str], max_letters: int = 8) -> Word:
    """A literal word in the generators."""
    letter = st.tuples(st.sampled_from(list(generators)), st.sampled_from([1, -1]))
    return Word(tuple(draw(st.lists(letter, max_size=max_letters))))


@st.composite
def presentations(draw: st.DrawFn, max_generators: int = 4, max_relators: int = 4) -> Presentation:
    """A presentation with any relators."""
    generators = "abcdefghij"[: draw(st.integers(1, max_generators))]
    return Presentation(tuple(generators), draw(st.lists(words(generators), max_size=max_relators)))


@st.composite
def weighted_presentations(
    draw: st.DrawFn, max_generators: int = 4, max_relators: int = 4
) -> tuple[Presentation, dict[str, int]]:
    """A presentation and weights, the first of them 1, under which each relator has weight 0."""
    generators = "abcdefghij"[: draw(st.integers(1, max_generators))]
    weights = {name: draw(st.integers(-3, 3)) for name in generators} | {generators[0]: 1}
    relators = []
    for word in draw(st.lists(words(generators, 6), max_size=max_relators)):
        excess = word.weight(weights)
        back: Letter = (generators[0], -1 if excess > 0 else 1)
        relators.append(Word((*word.letters, *[back] * abs(excess))))
    return Presentation(tuple(generators), relators), weights
