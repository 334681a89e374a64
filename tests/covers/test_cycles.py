"""Words of cycles: their lifts, compressed and written out, are the cycles they were made from."""

from __future__ import annotations

import random

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.covers.cover import Cover
from kt_widgets.diagrams import Diagram
from kt_widgets.errors import AlgebraError, LimitError
from kt_widgets.groups.powers import PowerWord
from kt_widgets.groups.presentations import Presentation
from kt_widgets.groups.words import Word
from kt_widgets.testing.strategies import diagrams, weighted_presentations, words
from kt_widgets.text.portable import read

few = settings(deadline=None, max_examples=60)
WEIGHTS = {"a": 1, "b": -2, "c": 0}
x = Cover(Presentation.parse("< a, b, c | >"), WEIGHTS)


@st.composite
def power_words(draw):
    factor = st.tuples(words("abc", 4), st.integers(-4, 4))
    return PowerWord(tuple(draw(st.lists(factor, max_size=4))))


@few
@given(power_words(), st.integers(-3, 3))
def test_compressed_chains_are_those_of_the_words(w, start):
    assert x.chain(w, start) == x.chain(w.expanded(), start)
    assert w.weight(WEIGHTS) == w.expanded().weight(WEIGHTS)
    assert w.length() >= len(w.expanded())
    assert Word.parse(str(w)).reduced() == w.expanded()
    assert read(w.to_json()) == w
    assert repr(w)
    assert w.latex()


@few
@given(weighted_presentations(), st.data())
def test_words_of_integer_cycles(pair, data):
    cover = Cover(*pair)
    cycles = cover.chains().cycles()
    entry = st.builds(LaurentPolynomial, st.lists(st.integers(-3, 3), max_size=3), st.integers(-2, 2))
    coefficients = [[data.draw(entry)] for _ in range(cycles.shape[1])]
    cycle = cycles @ LaurentMatrix(coefficients, "Z", (cycles.shape[1], 1))
    word = cover.word_of_cycle(cycle.column(0))
    assert word.weight(cover.weights) == 0
    assert cover.chain(word.expanded()) == cycle


@few
@given(diagrams(), st.sampled_from(["Q", 2, 3, 5]))
def test_words_of_summands(d, ring):
    cover = d.cover()
    for summand in cover.chains().homology(1).over(ring).summands():
        word = cover.word_of_cycle(summand.cycle)
        assert word.weight(cover.weights) == 0
        chain = cover.chain(word.expanded())
        assert (cover.chains().boundary(1) @ chain).is_zero()
        assert chain.change_ring(ring).column(0) == summand.cycle


@pytest.mark.parametrize("weights", [{"x": 2, "y": 3}, {"x": -2, "y": 3}, {"x": 6, "y": 10, "z": 15}])
def test_without_a_generator_of_weight_one(weights):
    cover = Cover(Presentation(list(weights)), weights)
    cycles = cover.chains().cycles()
    for j in range(cycles.shape[1]):
        word = cover.word_of_cycle(cycles.column(j))
        assert cover.chain(word.expanded()) == cycles.submatrix(range(len(weights)), [j])


def test_large_coefficients_stay_compressed():
    rng = random.Random(7)
    letters = [rng.choice((1, -1)) * rng.randint(1, 5) for _ in range(49)]
    cover = Diagram.from_braid(letters, 6).cover()
    for summand in cover.chains().homology(1).over("Q").summands():
        word = cover.word_of_cycle(summand.cycle)
        assert cover.chain(word).change_ring("Q").column(0) == summand.cycle
        assert len(word.factors) <= 2 * sum(f.span() + 1 for f in summand.cycle) + 1


def test_refusals():
    y = Cover(Presentation.parse("< a, b | >"), {"a": 1, "b": 1})
    one = LaurentPolynomial([1])
    with pytest.raises(AlgebraError, match="no cycle"):
        y.word_of_cycle([one, one])
    with pytest.raises(AlgebraError, match="coefficients for"):
        y.word_of_cycle([one])
    half = LaurentPolynomial.parse("1/2", "Q")
    with pytest.raises(AlgebraError, match="not whole"):
        y.word_of_cycle([-half, half])
    apart = Cover(Presentation.parse("< a, b | >"), {"a": 2, "b": 2})
    with pytest.raises(AlgebraError, match="not connected"):
        apart.word_of_cycle([one, -one])
    zero = y.word_of_cycle([one - one, one - one])
    assert zero == PowerWord()
    assert str(zero) == "1"
    with pytest.raises(LimitError):
        PowerWord(((Word.parse("a b"), 10**30),)).expanded()
