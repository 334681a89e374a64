"""Reading and printing invert each other, values agree with a naive evaluation, hostile text is refused."""

from __future__ import annotations

import subprocess
import sys
from contextlib import suppress
from fractions import Fraction
from itertools import product

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from kt_widgets.errors import KtError, LimitError, ParseError
from kt_widgets.text import parsing, printing
from kt_widgets.text.parsing import (
    parse_integer_list,
    parse_matrix,
    parse_polynomial,
    parse_polynomial_list,
    parse_presentation,
    parse_word,
)
from kt_widgets.text.printing import matrix_text, polynomial_text, presentation_text, word_text

STYLES = ("plain", "unicode", "latex")
lasting = settings(deadline=None, max_examples=60)

coefficients = st.one_of(st.integers(-50, 50), st.fractions(min_value=-9, max_value=9, max_denominator=30))
terms = st.dictionaries(st.integers(-40, 40), coefficients.filter(bool), max_size=6)
names = st.sampled_from(["a", "b", "x1", "x12", "Y"])
letters = st.lists(st.tuples(names, st.sampled_from([1, -1])), max_size=12).map(tuple)


# Printing inverts parsing


@lasting
@given(terms, st.sampled_from(STYLES))
def test_polynomials_are_read_back(f, style):
    assert parse_polynomial(polynomial_text(f, style)) == f


@lasting
@given(st.lists(terms, min_size=1, max_size=4), st.sampled_from(STYLES))
def test_polynomial_lists_are_read_back(fs, style):
    text = ", ".join(polynomial_text(f, style) for f in fs)
    assert parse_polynomial_list(text) == fs
    assert parse_polynomial_list(f"({text})") == fs


@lasting
@given(letters, st.sampled_from(STYLES))
def test_words_are_read_back(word, style):
    assert parse_word(word_text(word, style)) == word


@lasting
@given(st.lists(letters, max_size=3).map(tuple), st.sampled_from(STYLES))
def test_presentations_are_read_back(relators, style):
    generators = ("a", "b", "x1", "x12", "Y")
    assert parse_presentation(presentation_text(generators, relators, style)) == (generators, relators)


@lasting
@given(
    st.integers(1, 12).flatmap(
        lambda n: st.lists(st.lists(terms, min_size=n, max_size=n), min_size=1, max_size=3)
    ),
    st.sampled_from(STYLES),
)
def test_matrices_are_read_back(rows, style):
    assert (
        parse_matrix(matrix_text([[polynomial_text(f, style) for f in row] for row in rows], style)) == rows
    )


def test_names_keep_their_plain_spelling():
    assert parse_word("x_1 y2") == (("x_1", 1), ("y2", 1))
    assert parse_presentation("< x_1 | x_{1} x1 >") == (("x_1",), ((("x_1", 1), ("x_1", 1)),))
    assert parse_word("x_{7} x₇ x7", ["x_7"]) == (("x_7", 1),) * 3


# What texts mean, against a naive evaluation


@st.composite
def expressions(draw, depth=3):
    """A text and its value at t = 3/2, evaluated apart from the package."""
    t = Fraction(3, 2)
    kind = draw(
        st.sampled_from(["number", "t", "power"] + ["sum", "difference", "product", "square"] * (depth > 0))
    )
    if kind == "number":
        n = draw(st.integers(0, 30))
        return str(n), Fraction(n)
    if kind == "t":
        return "t", t
    if kind == "power":
        n = draw(st.integers(-6, 6))
        return draw(st.sampled_from([f"t^{n}", f"t^{{{n}}}", f"t**({n})"])), t**n
    left, a = draw(expressions(depth=depth - 1))
    if kind == "square":
        return f"({left})^2", a * a
    right, b = draw(expressions(depth=depth - 1))
    if kind == "sum":
        return f"{left} + {right}", a + b
    if kind == "difference":
        return f"{left} - ({right})", a - b
    times = draw(st.sampled_from(["", "*", " · ", r"\cdot "]))
    return f"({left}){times}({right})", a * b


@lasting
@given(expressions())
def test_polynomials_have_the_value_of_their_text(case):
    text, value = case
    assert sum((c * Fraction(3, 2) ** k for k, c in parse_polynomial(text).items()), Fraction(0)) == value


def compose(p, q):
    return tuple(q[i] for i in p)


def invert(p):
    return tuple(sorted(range(len(p)), key=p.__getitem__))


PERMUTATIONS = {"a": (1, 2, 3, 4, 0), "b": (1, 0, 2, 3, 4), "c2": (0, 3, 1, 2, 4)}


@st.composite
def word_expressions(draw, depth=3):
    """A text and the permutation that it multiplies to, left to right."""
    kind = draw(
        st.sampled_from(["letter", "one"] + ["product", "product", "power", "commutator"] * (depth > 0))
    )
    if kind == "letter":
        name = draw(st.sampled_from(sorted(PERMUTATIONS)))
        return name, PERMUTATIONS[name]
    if kind == "one":
        return "1", (0, 1, 2, 3, 4)
    u, p = draw(word_expressions(depth=depth - 1))
    if kind == "power":
        n = draw(st.integers(-4, 4))
        result = (0, 1, 2, 3, 4)
        for _ in range(abs(n)):
            result = compose(result, p if n > 0 else invert(p))
        return draw(st.sampled_from([f"({u})^{n}", f"({u})^{{{n}}}", f"({u})^({n})"])), result
    v, q = draw(word_expressions(depth=depth - 1))
    if kind == "commutator":
        return f"[{u}, {v}]", compose(compose(p, q), compose(invert(p), invert(q)))
    return f"{u}{draw(st.sampled_from([' ', '*', ' . ', '·']))}{v}", compose(p, q)


@lasting
@given(word_expressions())
def test_words_multiply_to_what_their_text_says(case):
    text, permutation = case
    result = (0, 1, 2, 3, 4)
    for name, sign in parse_word(text):
        result = compose(result, PERMUTATIONS[name] if sign > 0 else invert(PERMUTATIONS[name]))
    assert result == permutation


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("aba", "a b a"),
        ("ab^2", "a b b"),
        ("a1b2", "a1 b2"),
        ("a a^-1", "a a^-1"),
        ("a^0", "1"),
        ("1", "1"),
        (r"a^{-1} \cdot x_{12}", "a^-1 x12"),
        ("a⁻² b", "a^-1 a^-1 b"),
        (r"\left( a b \right)^{-1}", "b^-1 a^-1"),
    ],
)
def test_words(text, expected):
    assert parse_word(text) == parse_word(expected)


def test_relations_become_relators():
    assert parse_presentation("<a,b|aba=bab>") == parse_presentation("< a, b | a b a b^-1 a^-1 b^-1 >")
    assert parse_presentation("<a,b,c|a=b=c>") == parse_presentation("< a, b, c | a b^-1, b c^-1 >")
    assert parse_presentation("< a | >") == (("a",), ())
    assert parse_presentation("< a | 1, a = 1 >") == (("a",), ((), (("a", 1),)))
    latex = r"\langle a, b \mid a b a = b a b \rangle"
    assert parse_presentation(latex) == parse_presentation("⟨ a, b | a b a = b a b ⟩")


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("0", {}),
        ("t^2 - 3t + 1", {0: 1, 1: -3, 2: 1}),
        ("−3t²", {2: -3}),
        ("t^{-1}", {-1: 1}),
        ("1/2 t", {1: Fraction(1, 2)}),
        ("t/2", {1: Fraction(1, 2)}),
        (r"\frac{1 - t}{2t}", {-1: Fraction(1, 2), 0: Fraction(-1, 2)}),
        ("(t^2 - 1)/t", {-1: -1, 1: 1}),
        ("t/1/2", {1: Fraction(1, 2)}),
        ("1/2^2", {0: Fraction(1, 4)}),
        ("(t - t)(t + 1)", {}),
    ],
)
def test_polynomials(text, expected):
    assert parse_polynomial(text) == expected


@pytest.mark.parametrize(
    "text",
    [
        "[[1, t], [0, 1 - t]]",
        "[[1,   t    ],\n [0,   1 - t]]",
        "1, t; 0, 1 - t",
        "1, t\n0, 1 - t\n",
        "\n  1, t;\n  0, 1 - t;\n",
        r"\begin{pmatrix} 1 & t \\ 0 & 1 - t \end{pmatrix}",
        r"\begin{bmatrix} 1 & t \\ 0 & 1 - t \\ \end{bmatrix}",
        r"\left(\begin{array}{c|c} 1 & t \\ 0 & 1 - t \end{array}\right)",
    ],
)
def test_matrices(text):
    assert parse_matrix(text) == [[{0: 1}, {1: 1}], [{}, {0: 1, 1: -1}]]


def test_matrices_without_entries():
    assert parse_matrix("[]") == []
    assert parse_matrix("[[], []]") == [[], []]
    assert matrix_text([[], []]) == "[[],\n []]"


def test_integers():
    assert parse_integer_list("1 -2 1 -2") == [1, -2, 1, -2]
    assert parse_integer_list("+1, −2,3") == [1, -2, 3]


# Errors say where and what would be accepted


@pytest.mark.parametrize(
    ("parse", "text", "where", "accepted"),
    [
        (parse_word, "a ? b", "line 1, column 3", "a generator"),
        (parse_word, "a\nb\n  )", "line 3, column 3", "the end of the text"),
        (parse_word, "[a, b", "line 1, column 6", "]"),
        (parse_word, "a^", "line 1, column 3", "a number"),
        (parse_word, "a^2^3", "line 1, column 4", "the end of the text"),
        (parse_word, "a 2", "line 1, column 3", "1, the empty word"),
        (parse_presentation, "< a, b | a c >", "line 1, column 12", "a, b"),
        (parse_presentation, "< a, a | >", "line 1, column 6", "each generator once"),
        (parse_presentation, "< a, b | a b", "line 1, column 13", ">"),
        (parse_presentation, "a, b | a b", "line 1, column 1", "<"),
        (parse_polynomial, "1 - x", "line 1, column 5", "t"),
        (parse_polynomial, "1/2t", "line 1, column 4", "*"),
        (parse_polynomial, "t/2t", "line 1, column 4", "*"),
        (parse_polynomial, "0.5", "line 1, column 2", "the end of the text"),
        (parse_polynomial, "t/(1 + t)", "line 1, column 3", "monomials"),
        (parse_polynomial, "1/0", "line 1, column 1", "monomials"),
        (parse_polynomial, "t/(t - t)", "line 1, column 3", "monomials"),
        (parse_polynomial, "0^-1", "line 1, column 1", "monomials"),
        (parse_polynomial_list, "3,", "line 1, column 3", "a number"),
        (parse_matrix, "1, t\n0, x", "line 2, column 4", "t"),
        (parse_matrix, "[[1, t], [0]]", "line 1, column 11", "rows of one length"),
        (parse_integer_list, "1 1.5", "line 1, column 4", "an integer"),
        (parse_integer_list, "1-2", "line 1, column 2", "an integer"),
    ],
)
def test_errors_name_the_place(parse, text, where, accepted):
    with pytest.raises(ParseError) as caught:
        parse(text)
    assert caught.value.where.split(', "')[0] == where
    assert accepted in caught.value.accepted
    assert "\n" not in str(caught.value)


PARSERS = (
    parse_word,
    parse_presentation,
    parse_polynomial,
    parse_polynomial_list,
    parse_matrix,
    parse_integer_list,
)


@pytest.mark.parametrize("parse", PARSERS)
@pytest.mark.parametrize("text", ["", "   ", "\n\n"])
def test_empty_text_is_refused(parse, text):
    with pytest.raises(ParseError, match="the text is empty; accepted: "):
        parse(text)


@pytest.mark.parametrize(
    ("text", "escape"),
    [
        ("\begin{pmatrix} 1 \\end{pmatrix}", r"\\b"),
        ("\frac{1}{2}", r"\\f"),
        ("1 \right)", r"\\r"),
        ("1\v", r"\\v"),
    ],
)
def test_lost_backslashes_are_noticed(text, escape):
    with pytest.raises(ParseError, match=escape) as caught:
        parse_matrix(text)
    assert 'r"""' in caught.value.accepted


@pytest.mark.parametrize("text", ["a\x00b", "a\x1bb", "a\x85b"])
def test_control_characters_are_refused(text):
    with pytest.raises(ParseError, match="control character"):
        parse_word(text)


# Hostile text


@pytest.mark.parametrize(
    ("parse", "text"),
    [
        (parse_word, "a^1000000000"),
        (parse_word, "a^" + "9" * 50_000),
        (parse_word, "((a^1000)^1000)^1000"),
        (parse_word, "[" * 20 + "a" + ", b^100000]" * 20),
        (parse_word, "a" * 1_000_000),
        (parse_word, "(" * 50_000 + "a" + ")" * 50_000),
        (parse_word, "[" * 50_000),
        (parse_presentation, "< a | " + ", ".join(["a^999999"] * 1000) + " >"),
        (parse_presentation, "< a | " + " = ".join(["a^300000"] * 4) + " >"),
        (parse_polynomial, "t^1000000000"),
        (parse_polynomial, "t^1000000 t"),
        (parse_polynomial, "(1 + t)^1000000"),
        (parse_polynomial, "((1 + t)^100)^100"),
        (parse_polynomial, "3^1000000"),
        (parse_polynomial, "((3^1000)^1000)^1000"),
        (parse_polynomial, "9" * 90_000),
        (parse_polynomial, "1/" + "9" * 90_000),
        (parse_polynomial, "(" * 50_000 + "t"),
        (parse_polynomial, "-(" * 50_000 + "t" + ")" * 50_000),
        (parse_polynomial_list, ", ".join(["1 + t^1000000"] * 100)),
        (parse_polynomial_list, ", ".join(["(1 + t)^300"] * 1000)),
        (parse_matrix, "[" * 100_000),
        (parse_integer_list, "9" * 90_000),
        (parse_integer_list, "1 " * 1_000_000),
    ],
)
def test_hostile_text_is_refused(parse, text):
    with pytest.raises(LimitError) as caught:
        parse(text)
    assert caught.value.accepted
    assert len(str(caught.value)) < 300


def test_limits_are_reached():
    assert len(parse_word("a^1000000")) == parsing.MAX_LETTERS
    assert parse_polynomial("t^-1000000 + t^1000000") == {-1_000_000: 1, 1_000_000: 1}
    assert parse_word("(" * 100 + "a" + ")" * 100) == (("a", 1),)
    assert len(parse_polynomial("(1 + t)^200")) == 201
    assert parse_polynomial("9" * 4000) == {0: 10**4000 - 1}


@settings(deadline=None, max_examples=150)
@given(
    st.one_of(
        st.text(max_size=30),
        st.text(alphabet="abt1203^-+*/()[]{},;=<>|\\&_ .\n⁻²½", max_size=30),
        st.lists(st.sampled_from([r"\frac", "{", "}", "t", "^", "-", "2", "(", ")", "/", r"\\", "&"])).map(
            "".join
        ),
    )
)
@example("\\begin{pmatrix}\\end{pmatrix}")
@example("$")
def test_any_text_is_read_or_refused_in_our_words(text):
    for parse in PARSERS:
        # Any other exception fails the test.
        with suppress(KtError):
            parse(text)


def test_the_parser_is_built_when_it_is_used():
    code = "import sys, kt_widgets.text.parsing; assert 'lark' not in sys.modules"
    subprocess.run([sys.executable, "-c", code], check=True)


# Printing


def test_printing_collects_runs_of_one_letter_only():
    assert word_text([("a", 1), ("a", 1), ("a", -1), ("b", -1), ("b", -1)]) == "a^2 a^-1 b^-2"
    assert word_text([]) == "1"


def test_large_matrices_are_told_apart():
    shapes = [(rows, columns) for rows, columns in product((1, 20, 21), (20, 400, 401))]
    assert [shape for shape in shapes if not printing.matrix_too_large(*shape)] == [
        (1, 20),
        (1, 400),
        (20, 20),
    ]


def test_wide_matrices_need_an_array_in_latex():
    assert matrix_text([["1"] * 11], "latex").startswith(r"\left(\begin{array}{ccccccccccc} 1 & 1")


@pytest.mark.parametrize(
    "parse", [parse_word, parse_presentation, parse_polynomial, parse_polynomial_list, parse_matrix]
)
def test_what_is_no_text_is_refused(parse):
    with pytest.raises(ParseError, match="a value of type bytes is no text"):
        parse(b"1")
