"""Covers: weights, lifted cells, and boundaries that are the sum of the visits."""

from __future__ import annotations

import pickle
from collections import Counter
from math import gcd

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.covers.cover import Cover
from kt_widgets.errors import AlgebraError, LimitError
from kt_widgets.groups.presentations import Presentation
from kt_widgets.groups.words import Word
from kt_widgets.places import Place
from kt_widgets.text.portable import read

NAMES = ("a", "b", "c")
few = settings(deadline=None, max_examples=40)
t = sympy.Symbol("t")

letters = st.tuples(st.sampled_from(NAMES), st.sampled_from([1, -1]))
words = st.lists(letters, max_size=6).map(tuple)


@st.composite
def covers(draw):
    """Random words, completed by powers of a generator c of weight 1 to relators of weight 0."""
    weights = {"a": draw(st.integers(-3, 3)), "b": draw(st.integers(-3, 3)), "c": 1}
    relators = []
    for word in draw(st.lists(words, max_size=3)):
        total = Word(word).weight(weights)
        relators.append(Word((*word, *[("c", -1 if total > 0 else 1)] * abs(total))))
    return Cover(Presentation(NAMES, relators), weights)


def naive_derivative(letters, name, weights, shift=0):
    """The abelianised derivative as a sympy expression, by the product rule on the first letter."""
    if not letters:
        return sympy.Integer(0)
    (first, sign), rest = letters[0], letters[1:]
    step = sign * weights[first]
    here = sympy.Integer(0)
    if first == name:
        here = t**shift if sign > 0 else -(t ** (shift + step))
    return here + naive_derivative(rest, name, weights, shift + step)


@few
@given(covers())
def test_boundaries_are_the_naive_derivatives(x):
    chains = x.chains()
    for i, name in enumerate(NAMES):
        assert sympy.expand(chains.boundary(1)[0, i]._sympy_() - (t ** x.weights[name] - 1)) == 0
        for j, word in enumerate(x.presentation.boundary_words):
            expected = naive_derivative(word.letters, name, x.weights)
            assert sympy.expand(chains.boundary(2)[i, j]._sympy_() - expected) == 0


@few
@given(covers(), st.integers(-4, 4))
def test_boundaries_are_the_sum_of_the_visits(x, start):
    boundary = x.chains().boundary(2)
    for j in range(1, len(x.presentation.boundary_words) + 1):
        sums = {name: Counter() for name in NAMES}
        for v in x.visits(j, start):
            sums[v.generator][v.exponent - start] += v.sign
        for i, name in enumerate(NAMES):
            assert boundary[i, j - 1] == LaurentPolynomial.from_terms(sums[name])


@few
@given(covers())
def test_covers_travel(x):
    assert read(x.to_json()) == x
    assert pickle.loads(pickle.dumps(x)) == x
    assert hash(read(x.to_json())) == hash(x)


def test_default_weights():
    assert Cover(Presentation.parse("< a, b | a b a = b a b >")).weights == {"a": 1, "b": 1}
    assert Cover(Presentation.parse("< x, y | x^3 = y^2 >")).weights == {"x": 2, "y": 3}
    assert Cover(Presentation.parse("< x, y | x^3 y^2 >")).weights == {"x": 2, "y": -3}
    assert Cover(Presentation.parse("< t, x | t x t^-1 = x^2 >")).weights == {"t": 1, "x": 0}
    # All weights 1 is a weight map, though not the only one.
    assert Cover(Presentation.parse("< a, b | [a, b] >")).weights == {"a": 1, "b": 1}


def test_default_weights_that_do_not_exist():
    with pytest.raises(AlgebraError, match="finite abelianisation"):
        Cover(Presentation.parse("< a | a^5 >"))
    with pytest.raises(AlgebraError, match="weights are not determined") as caught:
        Cover(Presentation.parse("< a, b, c | a^2 b >"))
    for weights in Presentation.parse("< a, b, c | a^2 b >").weights():
        assert ", ".join(f"{name}: {w}" for name, w in weights.items()) in caught.value.what


@pytest.mark.parametrize(
    ("weights", "said"),
    [
        ({"x": 1, "y": 1}, "r2, x^3 y^-2, has weight 1"),
        ({"x": 2}, "y has no weight"),
        ({"x": 2, "y": 3, "z": 1}, "'z' has a weight"),
        ({"x": 2.0, "y": 3}, "the weight of x is 2.0"),
        ({"x": True, "y": 3}, "the weight of x is True"),
    ],
)
def test_weights_are_checked(weights, said):
    p = Presentation.parse("< x, y | [x, y], x^3 = y^2 >")
    with pytest.raises(AlgebraError) as caught:
        Cover(p, weights)
    assert said in caught.value.what
    assert caught.value.accepted


def test_large_weights_are_refused():
    with pytest.raises(LimitError):
        Cover(Presentation.parse("< x | >"), {"x": 10**9})


@few
@given(st.integers(-6, 6), st.integers(-6, 6))
def test_sheets_are_the_components_of_the_cover(a, b):
    x = Cover(Presentation.parse("< a, b | [a, b] >"), {"a": a, "b": b})
    assert x.sheets == gcd(a, b)
    if x.sheets:
        # The window is long enough for Euclid's algorithm to run inside it.
        import networkx

        assert networkx.number_weakly_connected_components(x.window(-40, 40)) == x.sheets


@few
@given(st.integers(-4, 4), st.integers(-3, 3), st.integers(0, 8))
def test_windows_hold_the_edges_with_both_ends_inside(weight, lo, length):
    hi = lo + length
    graph = Cover(Presentation.parse("< a | >"), {"a": weight}).window(lo, hi)
    assert sorted(graph.nodes) == list(range(lo, hi + 1))
    expected = {(k, k + weight, ("a", k)) for k in range(lo, hi + 1) if lo <= k + weight <= hi}
    assert set(graph.edges(keys=True)) == expected
    assert all(data["place"] == Place("edge", key) for *_, key, data in graph.edges(keys=True, data=True))
    assert all(data["place"] == Place("vertex", (k,)) for k, data in graph.nodes(data=True))


def test_window_limits():
    x = Cover(Presentation.parse("< a | >"))
    assert len(x.window(3, 2)) == 0
    with pytest.raises(LimitError):
        x.window(0, 10**9)


def test_chains_of_words():
    x = Cover(Presentation.parse("< a, b | a b a = b a b >"))
    boundary = x.chain(x.presentation.boundary_words[0])
    assert boundary == x.chains().boundary(2)
    # The lift of a word u v is the lift of u followed by that of v from where u ends.
    u, v = Word.parse("a b^-1 a"), Word.parse("b b a^-1")
    assert x.chain(Word(u.letters + v.letters), 2) == x.chain(u, 2) + x.chain(v, 2 + u.weight(x.weights))


def test_chains_are_made_once():
    x = Cover(Presentation.parse("< a, b | a b a = b a b >"))
    assert x.chains() is x.chains()
    assert x.chains().cover is x


# Published values


def test_trefoil():
    """R. H. Crowell, R. H. Fox, Introduction to Knot Theory, ch. VIII (recalled from memory)."""
    x = Cover(Presentation.parse("< a, b | a b a = b a b >"))
    assert str(x.order()) == "1 - t + t^2"
    assert str(x.alexander_ideal(1)) == "(1 - t + t^2)"
    assert str(x.alexander_ideal(2)) == "(1)"


def test_baumslag_solitar():
    """< t, x | t x t^-1 = x^2 > has order t - 2: H_1 is Z[1/2], on which t acts as 2 (common practice)."""
    assert str(Cover(Presentation.parse("< t, x | t x t^-1 = x^2 >")).order()) == "-2 + t"


@pytest.mark.parametrize(("p", "q"), [(2, 3), (3, 2), (2, 5), (3, 4), (5, 7), (4, 9)])
def test_torus_knots(p, q):
    """(t^pq - 1)(t - 1)/((t^p - 1)(t^q - 1)), Burde-Zieschang-Heusener, Knots (from memory)."""
    x = Cover(Presentation.parse(f"< x, y | x^{p} = y^{q} >"))
    assert x.weights == {"x": q, "y": p}
    expected = sympy.cancel((t ** (p * q) - 1) * (t - 1) / ((t**p - 1) * (t**q - 1)))
    assert sympy.expand(x.order()._sympy_() - expected) == 0


def test_figure_eight():
    """< x, y | w x = y w >, w = x^-1 y x y^-1, has 1 - 3t + t^2 (R. Riley 1972; recalled from memory)."""
    x = Cover(Presentation.parse("< x, y | x^-1 y x y^-1 x = y x^-1 y x y^-1 >"))
    assert str(x.order()) == "1 - 3t + t^2"


def test_two_unlinked_circles():
    """The free group: H_1 is free of rank one and the order is 0."""
    x = Cover(Presentation.parse("< a, b | >"), {"a": 1, "b": 1})
    assert x.order() == 0
    assert x.chains().rank(1) == 1


# Invariance


@st.composite
def balanced(draw):
    """Presentations whose relators have exponent sum 0, so that all weights 1 is a weight map."""
    relators = []
    for word in draw(st.lists(words, max_size=3)):
        total = sum(sign for _, sign in word)
        relators.append(Word((*word, *[("a", -1 if total > 0 else 1)] * abs(total))))
    return Presentation(NAMES, relators)


@few
@given(balanced())
def test_simplification_keeps_the_cover(p):
    x = Cover(p)
    q, log = p.simplified()
    y = Cover(q, {name: x.weights[name] for name in q.generators})
    assert all(image.weight(y.weights) == x.weights[name] for name, image in log.images.items())
    for k in range(4):
        assert x.alexander_ideal(k) == y.alexander_ideal(k)


def test_ideals_and_weights_refuse_strange_numbers():
    x = Cover(Presentation.parse("< a, b | a b a = b a b >"))
    for k in (1.5, "2", -1, -(10**5000)):
        with pytest.raises(AlgebraError, match="there is no Fitting ideal number"):
            x.alexander_ideal(k)
    with pytest.raises(LimitError, match="the weight of a is 1000"):
        Cover(x.presentation, {"a": 10**5000, "b": 10**5000})


@pytest.mark.parametrize("wrong", ["< a | >", None, Cover(Presentation.parse("< a | >"))])
def test_only_a_presentation_has_a_cover(wrong):
    with pytest.raises(AlgebraError, match="is not a presentation; accepted: a Presentation"):
        Cover(wrong)


@pytest.mark.parametrize("wrong", [1, [1, 1], "a"])
def test_weights_are_a_mapping(wrong):
    with pytest.raises(
        AlgebraError, match=r"\(at weights\); accepted: a weight for each generator by its name"
    ):
        Cover(Presentation.parse("< a, b | a b a = b a b >"), wrong)
