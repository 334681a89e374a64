"""Free derivatives: the fundamental identity in the group ring, and visits against the derivative."""

from __future__ import annotations

from collections import Counter

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.errors import AlgebraError, LimitError
from kt_widgets.groups.fox import Visit, fox_derivative, visits
from kt_widgets.groups.words import Word
from kt_widgets.places import Place

NAMES = ("a", "b", "c")
few = settings(deadline=None, max_examples=50)
letters = st.tuples(st.sampled_from(NAMES), st.sampled_from([1, -1]))
words = st.lists(letters, max_size=10).map(lambda chosen: Word(tuple(chosen)))
weights = st.fixed_dictionaries({name: st.integers(-3, 3) for name in NAMES})


def cancel(letters):
    result = []
    for name, sign in letters:
        if result and result[-1] == (name, -sign):
            result.pop()
        else:
            result.append((name, sign))
    return tuple(result)


def collect(terms):
    """An element of the group ring: reduced letters to nonzero coefficients."""
    total = Counter()
    for sign, letters in terms:
        total[cancel(letters)] += sign
    return {word: c for word, c in total.items() if c}


def naive_derivative(letters, name):
    """d(uv) = du + u dv on the first letter, with d(a^-1) = -a^-1."""
    if not letters:
        return []
    (first, sign), rest = letters[0], letters[1:]
    terms = [(s, (letters[0], *word)) for s, word in naive_derivative(rest, name)]
    if first == name:
        terms.append((1, ()) if sign > 0 else (-1, (letters[0],)))
    return terms


@few
@given(words)
def test_fundamental_identity(r):
    """sum of (dr/da)(a - 1) is r - 1 (R. H. Fox, Free differential calculus I, Ann. of Math. 57 (1953))."""
    terms = []
    for name in NAMES:
        for sign, prefix in fox_derivative(r, name):
            terms += [(sign, (*prefix.letters, (name, 1))), (-sign, prefix.letters)]
    assert collect(terms) == collect([(1, r.letters), (-1, ())])


@few
@given(words, words)
def test_the_derivative_is_the_naive_one_and_obeys_the_product_rule(u, v):
    for name in NAMES:
        derivative = collect((s, w.letters) for s, w in fox_derivative(u, name))
        assert derivative == collect(naive_derivative(u.letters, name))
        product = collect((s, w.letters) for s, w in fox_derivative(Word(u.letters + v.letters), name))
        right = [(s, u.letters + w.letters) for s, w in fox_derivative(v, name)]
        left = [(s, w.letters) for s, w in fox_derivative(u, name)]
        assert product == collect(left + right)


@few
@given(words, weights, st.integers(-5, 5))
def test_visits_are_the_abelianised_derivative(r, weights, start):
    seen = {name: Counter() for name in NAMES}
    for v in visits(r, weights, start=start):
        seen[v.generator][v.exponent] += v.sign
    for name in NAMES:
        expected = Counter()
        for sign, prefix in naive_derivative(r.letters, name):
            expected[start + sum(s * weights[n] for n, s in prefix)] += sign
        assert {k: c for k, c in seen[name].items() if c} == {k: c for k, c in expected.items() if c}


@few
@given(words, weights, st.integers(-5, 5))
def test_visits_trace_a_path_along_edges(r, weights, start):
    here = start
    for number, ((name, sign), v) in enumerate(
        zip(r, visits(r, weights, relator=3, start=start), strict=True), 1
    ):
        assert (v.relator, v.position, v.generator, v.sign, v.start, v.lift) == (
            3,
            number,
            name,
            sign,
            here,
            start,
        )
        assert v.end == here + sign * weights[name]
        # The edge t^k a runs from k to k + w(a), so its own end is the lower one of a forward step.
        assert v.exponent == (v.start if sign > 0 else v.end)
        assert v.edge == Place("edge", (name, v.exponent))
        assert v.cell == Place("cell", (3, start))
        assert v.letter == Place("letter", (3, number))
        here = v.end


def test_visits_are_values():
    first, again = (visits(Word.parse("a b"), {"a": 1, "b": 0}) for _ in range(2))
    assert first == again
    assert hash(first) == hash(again)
    assert first[0] == Visit(1, 1, "a", 1, 0, 0, 1, 0)


def test_refusals():
    with pytest.raises(AlgebraError, match="b has no weight") as caught:
        visits(Word.parse("a b"), {"a": 1}, relator=2)
    assert caught.value.where == "letter:2:2"
    with pytest.raises(LimitError):
        fox_derivative(Word.parse("a^10000"), "a")
