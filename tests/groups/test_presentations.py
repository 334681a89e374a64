"""Presentations: reading, weight maps against linear algebra, moves against homomorphisms to S_3."""

from __future__ import annotations

import pickle
from itertools import permutations, product

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.errors import AlgebraError, KtError, LimitError, ParseError
from kt_widgets.groups import presentations as presentations_file
from kt_widgets.groups.presentations import Presentation
from kt_widgets.groups.words import Word
from kt_widgets.places import Place
from kt_widgets.text.portable import read

NAMES = ("a", "b", "c")
S3 = tuple(permutations(range(3)))
few = settings(deadline=None, max_examples=50)


@st.composite
def presentations(draw, generators=NAMES):
    letters = st.tuples(st.sampled_from(generators), st.sampled_from([1, -1]))
    words = st.lists(letters, max_size=7).map(lambda chosen: Word(tuple(chosen)))
    return Presentation(generators, draw(st.lists(words, max_size=3)))


def value(word, images):
    result = (0, 1, 2)
    for name, sign in word:
        p = images[name] if sign > 0 else tuple(sorted(range(3), key=images[name].__getitem__))
        result = tuple(p[i] for i in result)
    return result


def homomorphisms(p):
    """All homomorphisms of the group to S_3, by trying every choice of images."""
    for chosen in product(S3, repeat=len(p.generators)):
        images = dict(zip(p.generators, chosen, strict=True))
        if all(value(word, images) == (0, 1, 2) for word in p.boundary_words):
            yield images


@few
@given(presentations())
def test_presentations_travel(p):
    assert Presentation.parse(str(p)) == p
    assert Presentation.parse(p.latex()) == p
    assert Presentation.parse(p.text("unicode")) == p
    assert read(p.to_json()) == p
    assert pickle.loads(pickle.dumps(p)) == p
    assert hash(Presentation.parse(str(p))) == hash(p)


def test_relations_are_kept_as_written():
    p = Presentation.parse("< a, b | a b = b a = b b^-1, 1 >")
    assert [str(w) for w in p.boundary_words] == ["a b a^-1 b^-1", "b a b b^-1", "1"]
    assert [str(w) for w in p.relators] == ["a b a^-1 b^-1", "b a", "1"]


def test_places_and_marks_take_no_part_in_equality():
    p = Presentation(["a"], [], {"generator:a": Place("arc", (1,))}, {"meridian": Word.parse("a")})
    assert p == Presentation(["a"])
    assert hash(p) == hash(Presentation(["a"]))
    again = read(p.to_json())
    assert again.places == p.places
    assert again.marks == p.marks
    assert p.place_of("generator", "a") == Place("arc", (1,))
    assert p.place_of("relator", 1) is None


@few
@given(presentations())
def test_weights_are_a_basis_of_the_integer_kernel(p):
    basis = p.weights()
    for weights in basis:
        assert all(word.weight(weights) == 0 for word in p.boundary_words)
        assert next(w for w in weights.values() if w) > 0
    exponents = sympy.Matrix(len(NAMES), len(p.relators), lambda i, j: p.exponent_matrix()[i][j])
    assert len(basis) == len(NAMES) - exponents.rank()
    if basis:
        # Every integer weight map is an integer combination: the maximal minors have gcd 1.
        rows = sympy.Matrix([[w[name] for name in NAMES] for w in basis])
        minors = [
            rows.extract(list(range(len(basis))), list(columns)).det()
            for columns in permutations(range(3), len(basis))
        ]
        assert sympy.gcd(minors) == 1


def test_exponent_matrix_is_naive_count():
    p = Presentation.parse("< a, b | a b a = b a b, a^5 b^-2 >")
    assert p.exponent_matrix() == ((1, 5), (-1, -2))


@few
@given(presentations())
def test_simplified_presents_the_same_group(p):
    q, log = p.simplified()
    assert set(q.generators) <= set(p.generators)
    old, new = list(homomorphisms(p)), list(homomorphisms(q))
    # Restriction to the generators left is a bijection, and `image` is its inverse.
    restricted = [{name: images[name] for name in q.generators} for images in old]
    assert sorted(map(str, restricted)) == sorted(map(str, new))
    for images in old:
        kept = {name: images[name] for name in q.generators}
        assert all(value(log.images[name], kept) == images[name] for name in p.generators)


def test_simplified_carries_places_and_marks():
    places = {f"generator:{name}": Place("arc", (i,)) for i, name in enumerate("abc", 1)}
    places.update({f"relator:{j}": Place("crossing", (j,)) for j in (1, 2, 3)})
    p = Presentation.parse("< a, b, c | c a = a b, a b = b c, b c = c a >")
    p = Presentation(p.generators, p.boundary_words, places, {"meridian": Word.parse("c")})
    q, log = p.simplified()
    assert q.generators == ("a", "b")
    assert len(q.relators) == 1
    assert q.place_of("generator", "b") == Place("arc", (2,))
    kept = {step.relator for step in log.steps} ^ {1, 2, 3}
    assert q.place_of("relator", 1) == Place("crossing", (kept.pop(),))
    assert dict(q.marks)["meridian"] == log.image(Word.parse("c"))


def test_simplified_drops_what_is_redundant():
    p = Presentation.parse("< a, b | a b a = b a b, 1, a a^-1, b a b = a b a, b a b^-1 a^-1 b^-1 a >")
    q, log = p.simplified()
    assert str(q) == "< a, b | a b a b^-1 a^-1 b^-1 >"
    assert [str(step) for step in log.steps] == [f"r{j}: dropped, trivial or repeated" for j in (2, 3, 4, 5)]
    assert str(Presentation.parse("< a, b | a^2 >").simplified()[1]) == "nothing to do"


def test_simplified_handles_trivial_generators():
    q, log = Presentation.parse("< a, b, c | a, a b, c^2 >").simplified()
    assert str(q) == "< c | c^2 >"
    assert log.image(Word.parse("a b c")) == Word.parse("c")


def test_simplified_does_not_let_words_explode():
    # Each x_i is a square of the one before, so full elimination would double the length every time.
    relations = ", ".join(f"x{i + 1} = x{i} y x{i}" for i in range(1, 30))
    p = Presentation.parse(
        "< y, " + ", ".join(f"x{i}" for i in range(1, 31)) + f" | {relations}, [x30, y] x30 >"
    )
    q, _ = p.simplified()
    limit = presentations_file.MAX_GROWTH * sum(map(len, p.relators))
    assert sum(map(len, q.relators)) <= limit


@few
@given(st.integers(1, 3))
def test_without_relator(gone):
    p = Presentation.parse("< a, b | a b, a^2, b^3 >")
    p = Presentation(
        p.generators, p.boundary_words, {f"relator:{j}": Place("crossing", (j,)) for j in (1, 2, 3)}
    )
    q = p.without_relator(gone)
    kept = [j for j in (1, 2, 3) if j != gone]
    assert q.boundary_words == tuple(p.boundary_words[j - 1] for j in kept)
    assert [q.place_of("relator", new).indices[0] for new in (1, 2)] == kept
    assert p.without_relator(f"r{gone}") == q


@pytest.mark.parametrize("relator", [0, 4, -1, "r0", "r4", "x", "", "r", True + 3, 2.5, "r²"])
def test_relators_that_do_not_exist(relator):
    with pytest.raises(AlgebraError) as caught:
        Presentation.parse("< a, b | a b, a^2, b^3 >").relator_number(relator)
    assert "r1 to r3" in caught.value.accepted


@pytest.mark.parametrize(
    "arguments",
    [
        (["ab"],),
        (["a", "a"],),
        (["x1", "x_1"],),
        (["a"], [Word.parse("b")]),
        (["a"], ["a"]),
        (["a"], [], {"relator:1": Place("crossing", (1,))}),
        (["a"], [], {}, {"meridian": Word.parse("b")}),
    ],
)
def test_inconsistent_data_are_refused(arguments):
    with pytest.raises(KtError) as caught:
        Presentation(*arguments)
    assert caught.value.accepted


def test_the_place_of_a_strange_letter_is_named():
    with pytest.raises(AlgebraError) as caught:
        Presentation(["a"], [Word.parse("a"), Word.parse("a b")])
    assert caught.value.where == "relator 2, letter 2"


def test_too_many_generators(monkeypatch):
    monkeypatch.setattr(presentations_file, "MAX_GENERATORS", 1)
    with pytest.raises(LimitError):
        Presentation(["a", "b"])


def test_malformed_data():
    text = Presentation.parse("< a | a^2 >").to_json()
    for old, new in (('"a", 1', '"a", 2'), ('"relators"', '"relations"'), ('["a"]', '["a", "a"]')):
        assert old in text
        with pytest.raises((ParseError, AlgebraError)):
            read(text.replace(old, new))
