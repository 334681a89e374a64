"""Words against permutations and a naive reduction."""

from __future__ import annotations

import copy
import pickle

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.errors import AlgebraError, LimitError, ParseError
from kt_widgets.groups.words import Word
from kt_widgets.text.portable import read

few = settings(deadline=None, max_examples=50)
letters = st.tuples(st.sampled_from(["a", "b", "x1"]), st.sampled_from([1, -1]))
words = st.lists(letters, max_size=10).map(lambda chosen: Word(tuple(chosen)))

PERMUTATIONS = {"a": (1, 2, 3, 4, 0), "b": (1, 0, 2, 3, 4), "x1": (0, 3, 1, 2, 4)}


def permutation(word, images=PERMUTATIONS):
    """What the word multiplies to, left to right."""
    result = tuple(range(5))
    for name, sign in word:
        p = images[name]
        p = p if sign > 0 else tuple(sorted(range(5), key=p.__getitem__))
        result = tuple(p[i] for i in result)
    return result


def cancel(letters):
    """Free reduction by deleting one pair at a time."""
    letters = list(letters)
    for i in range(len(letters) - 1):
        if letters[i] == (letters[i + 1][0], -letters[i + 1][1]):
            return cancel(letters[:i] + letters[i + 2 :])
    return tuple(letters)


@few
@given(words, words)
def test_the_operations_are_those_of_the_free_group(u, v):
    assert u.reduced().letters == cancel(u.letters)
    assert (u * v).letters == cancel(u.letters + v.letters)
    assert (u * u.inverse()).letters == ()
    assert permutation(u * v) == permutation((*u.letters, *v.letters))
    assert permutation(u**-3) == permutation(u.inverse().letters * 3)
    assert u**0 == Word()


@few
@given(words)
def test_cyclic_reduction_is_a_conjugate_without_inverse_ends(w):
    core = w.cyclically_reduced()
    assert core == core.reduced()
    assert len(core) < 2 or core.letters[0] != (core.letters[-1][0], -core.letters[-1][1])
    reduced = w.reduced().letters
    ends = (len(reduced) - len(core)) // 2
    assert Word(reduced[:ends]) * core * Word(reduced[:ends]).inverse() == w.reduced()


@few
@given(words, st.fixed_dictionaries({"a": words, "b": words}))
def test_substitution_is_a_homomorphism(w, images):
    values = {**PERMUTATIONS, **{name: permutation(image) for name, image in images.items()}}
    assert permutation(w.substitute(images)) == permutation(w, values)


@few
@given(words)
def test_words_travel(w):
    assert Word.parse(str(w)) == w
    assert Word.parse(w.latex()) == w
    assert read(w.to_json()) == w
    assert pickle.loads(pickle.dumps(w)) == w
    assert copy.deepcopy(w) == w
    assert hash(copy.copy(w)) == hash(w)


def test_words_are_literal():
    w = Word.parse("a a^-1")
    assert len(w) == 2
    assert list(w) == [("a", 1), ("a", -1)]
    assert w != Word()
    assert str(w) == "a a^-1"
    assert w.weight({"a": 3}) == 0


def test_short_repr():
    assert repr(Word.parse("a b^-1")) == "Word('a b^-1')"
    assert repr(Word.parse("a") ** 1000) == "Word('a^20 ... (1000 letters)')"


@pytest.mark.parametrize(
    "letters", [[("ab", 1)], [("", 1)], [("a", 2)], [("a", 0)], [("a", True)], [("é", 1)]]
)
def test_letters_are_checked(letters):
    with pytest.raises(ParseError) as caught:
        Word(tuple(letters))
    assert caught.value.accepted


def test_long_words_are_not_typeset():
    assert Word.parse("a^400")._repr_latex_() == "$a^{400}$"
    assert Word.parse("a^401")._repr_latex_() is None


def test_limits_and_missing_weights():
    long = Word.parse("a^1000 b")
    with pytest.raises(LimitError):
        long**1000
    with pytest.raises(LimitError):
        long.substitute({"a": long})
    with pytest.raises(AlgebraError, match="b has no weight"):
        long.weight({"a": 1})
