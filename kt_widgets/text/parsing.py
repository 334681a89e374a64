"""Reading typed text: words, presentations, polynomials, matrices and lists of integers, to plain data.

The grammar is `grammar.lark`; its parser is built when the first text is read. Sizes are checked before that,
and the work of expanding powers and products is bounded, so that no text, however hostile, takes long.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Sequence
from fractions import Fraction
from functools import cache
from importlib.resources import files
from itertools import pairwise
from typing import Any, NoReturn

from kt_widgets.errors import KtError, LimitError, ParseError

__all__ = [
    "MAX_DIGITS",
    "MAX_EXPONENT",
    "MAX_LETTERS",
    "MAX_NESTING",
    "MAX_SPAN",
    "MAX_TEXT",
    "MAX_WORK",
    "parse_integer_list",
    "parse_matrix",
    "parse_polynomial",
    "parse_polynomial_list",
    "parse_presentation",
    "parse_word",
]

MAX_TEXT = 100_000
"""Longest text that is read, in characters (a sign takes 10 to 30 microseconds)."""
MAX_NESTING = 100
"""Deepest nesting of brackets."""
MAX_LETTERS = 1_000_000
"""Most letters that the words of one text expand to, those of inner powers counted too."""
MAX_EXPONENT = 1_000_000
"""Largest exponent of t, and largest exponent written, in absolute value."""
MAX_DIGITS = 4_000
"""Longest number, and longest numerator or denominator of a coefficient (Python prints no longer ones)."""
MAX_SPAN = 4_000_000
"""Largest sum of (highest - lowest exponent) over the polynomials of one text."""
MAX_WORK = 1_000_000
"""Most products of 64-bit terms done to expand the polynomials of one text."""

_MAX_BITS = int(MAX_DIGITS * 3.3219)

Letters = tuple[tuple[str, int], ...]
Terms = dict[int, Fraction]

# What a person may type for each terminal of the grammar, in the order in which it is listed to them.
_TERMINALS = {
    "NAME": "",  # a generator's name or t, as the entry point says
    "RATIONAL": "a number",
    "INT": "a number",
    "SIGNED": "an integer",
    "SIGN": "+ or -",
    "_CARET": "an exponent (^2, ^-1, ^{-3}, ²)",
    "SUPERSCRIPT": "an exponent (^2, ^-1, ^{-3}, ²)",
    "_TIMES": "*",
    "_PERIOD": "*",
    "_SLASH": "/",
    "_FRACTION": r"\frac",
    "LPAR": "(",
    "RPAR": ")",
    "LSQB": "[",
    "RSQB": "]",
    "LBRACE": "{",
    "RBRACE": "}",
    "_COMMA": "a comma",
    "_SEMICOLON": "; or a new line",
    "_EQUALS": "=",
    "_OPEN": "<",
    "_BAR": "|",
    "_CLOSE": ">",
    "_AMPERSAND": "&",
    "_NEW_ROW": r"\\",
    "_BEGIN": r"\begin{pmatrix}",
    "_END": r"\end{pmatrix}",
    "$END": "the end of the text",
}
_A_GENERATOR = "a generator (one letter, or a letter and a number: a, x1, x_12)"
_THE_VARIABLE = "t"

_CONTROL = re.compile(r"[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f]|\r(?!\n)")
_ESCAPES = {"\x07": r"\a", "\x08": r"\b", "\x0b": r"\v", "\x0c": r"\f", "\r": r"\r"}
_BRACKET = re.compile(r"[(\[{]|[)\]}]")
_INDICES = str.maketrans("₀₁₂₃₄₅₆₇₈₉", "0123456789", "_{}")
_SUPERSCRIPTS = str.maketrans("⁺⁻⁰¹²³⁴⁵⁶⁷⁸⁹−", "+-0123456789-")


def _where(text: str, position: int) -> str:
    line = text.count("\n", 0, position) + 1
    start = text.rfind("\n", 0, position) + 1
    rest = "".join(sign for sign in text[position : position + 20].split("\n")[0] if sign.isprintable())
    return f"line {line}, column {position - start + 1}" + (f', "{rest.rstrip()}"' if rest.strip() else "")


def _refuse(
    text: str, position: int, what: str, accepted: str = "", kind: type[KtError] = ParseError
) -> NoReturn:
    raise kind(what, where=_where(text, position), accepted=accepted)


@cache
def _parser() -> Any:
    # lark takes longer to load than the rest of this room: only when a text is read.
    from lark import Lark

    grammar = files("kt_widgets.text").joinpath("grammar.lark").read_text(encoding="utf-8")
    starts = ["word", "presentation", "polynomial", "polynomial_list", "matrix", "integer_list"]
    return Lark(
        grammar, parser="lalr", start=starts, maybe_placeholders=False, propagate_positions=True, cache=False
    )


def _check_text(text: str, example: str) -> None:
    if not isinstance(text, str):
        raise ParseError(f"a value of type {type(text).__name__} is no text", accepted=example)
    if len(text) > MAX_TEXT:
        raise LimitError(f"the text has {len(text)} characters", accepted=f"at most {MAX_TEXT}")
    if not text.strip():
        raise ParseError("the text is empty", accepted=example)
    if found := _CONTROL.search(text):
        sign = found.group()
        escape = f', which {_ESCAPES[sign]} gives in a plain string "..."' if sign in _ESCAPES else ""
        what = f"a control character (code {ord(sign)}){escape}"
        accepted = 'LaTeX in a raw string r"""..."""' if escape else "visible characters"
        _refuse(text, found.start(), what, accepted)
    depth = 0
    for found in _BRACKET.finditer(text):
        depth += 1 if found.group() in "([{" else -1
        if depth > MAX_NESTING:
            what = f"brackets nested more than {MAX_NESTING} deep"
            _refuse(text, found.start(), what, f"at most {MAX_NESTING} levels", LimitError)


def _tree(text: str, start: str, name: str, example: str) -> Any:
    """Check and parse a text; `name` says what a letter stands for, `example` what the text may look like."""
    from lark import UnexpectedInput

    _check_text(text, example)
    try:
        return _parser().parse(text, start=start)
    except UnexpectedInput as error:
        token = getattr(error, "token", None)
        ended = token is not None and token.type == "$END"
        position = len(text.rstrip()) if ended else error.pos_in_stream or 0
    what = "the text ends too early" if ended else f"{text[position]!r} does not fit here"
    # Read once more up to there: the parser itself then says what it would have taken.
    steps = _parser().parse_interactive(text, start=start)
    try:
        for token in steps.iter_parse():
            if token.start_pos >= position:
                break
    except UnexpectedInput:
        pass
    possible = steps.accepts()
    kinds = dict.fromkeys(said or name for terminal, said in _TERMINALS.items() if terminal in possible)
    _refuse(text, position, what, ", ".join(kinds))


def _evaluate(tree: Any, reader: _Reader) -> Any:
    """Call the reader's method of each rule on the values of its parts, innermost first (no recursion)."""
    order: list[Any] = []
    stack = [tree]
    while stack:
        node = stack.pop()
        if hasattr(node, "data"):
            order.append(node)
            stack.extend(node.children)
    values: dict[int, Any] = {}
    actions: dict[str, Callable[..., Any]] = {}
    for node in reversed(order):
        rule = str(node.data)
        action = actions.get(rule) or actions.setdefault(rule, getattr(reader, rule))
        parts = [values.pop(id(part)) if hasattr(part, "data") else part for part in node.children]
        values[id(node)] = action(node, *parts)
    return values[id(tree)]


class _Reader:
    """What the rules mean, for one text: words and polynomials share exponents and positions."""

    def __init__(self, text: str) -> None:
        self.text = text

    def refuse(self, node: Any, what: str, accepted: str = "", kind: type[KtError] = ParseError) -> NoReturn:
        position = node.start_pos if hasattr(node, "start_pos") else getattr(node.meta, "start_pos", 0)
        _refuse(self.text, position, what, accepted, kind)

    def exponent(self, node: Any, *tokens: Any) -> int:
        digits = "".join(tokens).translate(_SUPERSCRIPTS)
        if len(digits.lstrip("+-0")) > len(str(MAX_EXPONENT)) or abs(int(digits)) > MAX_EXPONENT:
            accepted = f"at most {MAX_EXPONENT} in absolute value"
            self.refuse(tokens[0], "the exponent is too large", accepted, LimitError)
        return int(digits)


class _Words(_Reader):
    """Words as lists of (name as typed, with its position; sign)."""

    def __init__(self, text: str, generators: Sequence[str] | None) -> None:
        super().__init__(text)
        self.letters = 0
        # x1, x_1 and x_{1} are one name: spelled as in `generators`, or as typed first (typeset forms as x1).
        self.spelling = {name.translate(_INDICES): name for name in generators or ()}
        self.closed = generators is not None

    def spend(self, node: Any, letters: int) -> None:
        self.letters += letters
        if self.letters > MAX_LETTERS:
            what = f"the words expand to more than {MAX_LETTERS} letters"
            self.refuse(node, what, f"at most {MAX_LETTERS} letters in one text", LimitError)

    def spell(self, letters: Iterable[tuple[Any, int]]) -> Letters:
        spelling = self.spelling
        names: dict[str, str] = {}
        result = []
        for token, sign in letters:
            name = names.get(token)
            if name is None:
                plain = token.translate(_INDICES)
                if self.closed and plain not in spelling:
                    known = ", ".join(list(spelling.values())[:30]) or "none"
                    self.refuse(token, f"{plain} is not a generator", known)
                typed = plain if token.endswith("}") or not token.isascii() else str(token)
                name = names[str(token)] = spelling.setdefault(plain, typed)
            result.append((name, sign))
        return tuple(result)

    def letter(self, node: Any, token: Any) -> list[tuple[Any, int]]:
        return [(token, 1)]

    def identity(self, node: Any, token: Any) -> list[tuple[Any, int]]:
        if token != "1":
            self.refuse(token, f"{token[:20]} is not a word", "1, the empty word")
        return []

    def word(self, node: Any, *parts: list[tuple[Any, int]]) -> list[tuple[Any, int]]:
        return parts[0] if len(parts) == 1 else [letter for part in parts for letter in part]

    def commutator(self, node: Any, u: list[tuple[Any, int]], v: list[tuple[Any, int]]) -> Any:
        self.spend(node, 2 * (len(u) + len(v)))
        return u + v + _inverse(u) + _inverse(v)

    def raised(self, node: Any, word: list[tuple[Any, int]], exponent: int) -> list[tuple[Any, int]]:
        self.spend(node, len(word) * abs(exponent))
        return word * exponent if exponent >= 0 else _inverse(word) * -exponent

    def generators(self, node: Any, *tokens: Any) -> tuple[str, ...]:
        self.closed = False
        for token in tokens:
            if token.translate(_INDICES) in self.spelling:
                self.refuse(token, f"the generator {token} is listed twice", "each generator once")
            self.spell([(token, 1)])
        self.closed = True
        return tuple(self.spelling.values())

    def relation(self, node: Any, *words: list[tuple[Any, int]]) -> list[list[tuple[Any, int]]]:
        if len(words) == 1:
            return [words[0]]
        self.spend(node, 2 * sum(map(len, words)))
        return [u + _inverse(v) for u, v in pairwise(words)]

    def relations(self, node: Any, *relations: list[Any]) -> list[Any]:
        return [word for relation in relations for word in relation]

    def presentation(self, node: Any, generators: tuple[str, ...], words: list[Any]) -> Any:
        return generators, tuple(self.spell(word) for word in words)


def _inverse(word: list[tuple[Any, int]]) -> list[tuple[Any, int]]:
    return [(token, -sign) for token, sign in reversed(word)]


_Sparse = dict[int, int | Fraction]


class _Polynomials(_Reader):
    """Polynomials as dicts of exponent to non-zero coefficient."""

    def __init__(self, text: str) -> None:
        super().__init__(text)
        self.work = 0
        self.span = 0

    def spend(self, node: Any, work: int) -> None:
        self.work += work
        if self.work > MAX_WORK:
            what = "expanding the products and powers takes too many steps"
            self.refuse(node, what, f"at most {MAX_WORK} products of terms in one text", LimitError)

    def checked(self, node: Any, terms: _Sparse) -> _Sparse:
        if terms and max(map(abs, terms)) > MAX_EXPONENT:
            accepted = f"exponents of at most {MAX_EXPONENT} in absolute value"
            self.refuse(node, "the exponent of t is too large", accepted, LimitError)
        if terms and max(map(_bits, terms.values())) > _MAX_BITS:
            accepted = f"coefficients of at most {MAX_DIGITS} digits"
            self.refuse(node, "a coefficient is too large", accepted, LimitError)
        return terms

    def times(self, node: Any, f: _Sparse, g: _Sparse) -> _Sparse:
        if not f or not g:
            return {}
        words = 1 + (max(map(_bits, f.values())) + max(map(_bits, g.values()))) // 64
        self.spend(node, len(f) * len(g) * words)
        result: _Sparse = {}
        for i, a in f.items():
            for j, b in g.items():
                result[i + j] = result.get(i + j, 0) + a * b
        return self.checked(node, {exponent: c for exponent, c in result.items() if c})

    def inverse(self, node: Any, f: _Sparse) -> _Sparse:
        if len(f) != 1:
            what = "division by 0" if not f else "division by a sum"
            self.refuse(node, what, "division by numbers and monomials, such as (t^2 - 1)/(2t)")
        ((exponent, coefficient),) = f.items()
        return {-exponent: 1 / Fraction(coefficient)}

    def integer(self, token: Any) -> int:
        if len(token) > MAX_DIGITS:
            what = f"a number of {len(token)} digits"
            self.refuse(token, what, f"at most {MAX_DIGITS} digits", LimitError)
        return int(token)

    def number(self, node: Any, token: Any) -> _Sparse:
        value = self.integer(token)
        return {0: value} if value else {}

    def rational(self, node: Any, token: Any) -> _Sparse:
        if len(token) > MAX_DIGITS:
            self.refuse(token, "a number that is too long", f"at most {MAX_DIGITS} digits", LimitError)
        numerator, denominator = map(int, token.split("/"))
        if not denominator:
            self.refuse(token, "division by 0", "division by numbers and monomials")
        return {0: Fraction(numerator, denominator)} if numerator else {}

    def variable(self, node: Any, token: Any) -> _Sparse:
        if token != "t":
            self.refuse(token, f"{token} is not the variable", _THE_VARIABLE)
        return {1: 1}

    def fraction(self, node: Any, f: _Sparse, g: _Sparse) -> _Sparse:
        return self.times(node, f, self.inverse(node, g))

    def power(self, node: Any, f: _Sparse, exponent: int) -> _Sparse:
        if exponent < 0:
            f, exponent = self.inverse(node, f), -exponent
        if len(f) <= 1:
            for e, c in f.items():
                if abs(c) != 1 and _bits(c) * exponent > 2 * _MAX_BITS:
                    accepted = f"coefficients of at most {MAX_DIGITS} digits"
                    self.refuse(node, "a coefficient is too large", accepted, LimitError)
                return self.checked(node, {e * exponent: c**exponent})
            return {} if exponent else {0: 1}
        result: _Sparse = {0: 1}
        while exponent:
            if exponent & 1:
                result = self.times(node, result, f)
            exponent >>= 1
            if exponent:
                f = self.times(node, f, f)
        return result

    def product(self, node: Any, *factors: _Sparse) -> _Sparse:
        result = factors[0]
        for factor in factors[1:]:
            result = self.times(node, result, factor)
        return result

    def divisor(self, node: Any, f: _Sparse) -> _Sparse:
        return self.inverse(node, f)

    term = product

    def sum(self, node: Any, *parts: Any) -> _Sparse:
        result: _Sparse = {}
        sign = 1
        for part in parts:
            if isinstance(part, str):
                sign = 1 if part == "+" else -1
                continue
            for exponent, coefficient in part.items():
                result[exponent] = result.get(exponent, 0) + sign * coefficient
        self.spend(node, sum(len(part) for part in parts))
        return {exponent: c for exponent, c in result.items() if c}

    def finished(self, node: Any, f: _Sparse) -> Terms:
        self.span += max(f, default=0) - min(f, default=0)
        if self.span > MAX_SPAN:
            what = "the exponents of the polynomials lie too far apart"
            self.refuse(node, what, f"spans that add up to at most {MAX_SPAN}", LimitError)
        return {exponent: Fraction(f[exponent]) for exponent in sorted(f)}

    def polynomial(self, node: Any, f: _Sparse) -> Terms:
        return self.finished(node, f)

    def polynomial_list(self, node: Any, *polynomials: _Sparse) -> list[Terms]:
        return [self.finished(node, f) for f in polynomials]

    def row(self, node: Any, *entries: _Sparse) -> list[Terms]:
        return [self.finished(node, f) for f in entries]

    def matrix(self, node: Any, *rows: list[Terms]) -> list[list[Terms]]:
        for i, row in enumerate(rows, start=1):
            if len(row) != len(rows[0]):
                what = f"row {i} has {len(row)} entries, row 1 has {len(rows[0])}"
                self.refuse(node.children[i - 1], what, "rows of one length")
        return list(rows)


def _bits(value: int | Fraction) -> int:
    return max(value.numerator.bit_length(), value.denominator.bit_length())


def parse_word(text: str, generators: Sequence[str] | None = None) -> Letters:
    """Read a word: its letters as typed, with powers, parentheses and commutators written out, not reduced.

    A name is a letter, or a letter and a number (``x1``, ``x_1``, ``x_{1}`` are one name); "aba" is a b a.
    A product is written by juxtaposition, a space, ``*``, ``.`` or ``·``; ``[u, v]`` is u v u^-1 v^-1;
    ``1`` is the empty word.

    Parameters
    ----------
    text : str
    generators : sequence of str, optional
        The names that may occur; any name may if it is not given.

    Returns
    -------
    tuple of (name, +1 or -1)

    Raises
    ------
    ParseError
        If the text is no word, or a name is not a generator.
    LimitError
        If the text is longer than `MAX_TEXT`, nested deeper than `MAX_NESTING`, or expands to more than
        `MAX_LETTERS` letters.

    Examples
    --------
    >>> parse_word("ab^-2")
    (('a', 1), ('b', -1), ('b', -1))
    >>> parse_word("a c", ["a", "b"])
    Traceback (most recent call last):
    kt_widgets.errors.ParseError: c is not a generator (at line 1, column 3, "c"); accepted: a, b
    """
    tree = _tree(text, "word", _A_GENERATOR, "a word such as a b^-1 a or [a, b]")
    reader = _Words(text, generators)
    return reader.spell(_evaluate(tree, reader))


def parse_presentation(text: str) -> tuple[tuple[str, ...], tuple[Letters, ...]]:
    """Read a presentation: its generators, and its relators with powers written out, not reduced.

    A relation u = v gives the relator u v^-1; u = v = w gives u v^-1 and v w^-1.

    Raises
    ------
    ParseError, LimitError
        As `parse_word`; also if a generator is listed twice.

    Examples
    --------
    >>> parse_presentation("< a, b | a b = b a >")
    (('a', 'b'), ((('a', 1), ('b', 1), ('a', -1), ('b', -1)),))
    >>> parse_presentation(r"\\langle a \\mid \\rangle")
    (('a',), ())
    """
    example = "a presentation such as < a, b | a b a = b a b >"
    tree = _tree(text, "presentation", _A_GENERATOR, example)
    generators, relators = _evaluate(tree, _Words(text, None))
    return generators, relators


def parse_polynomial(text: str) -> Terms:
    """Read a Laurent polynomial in t with rational coefficients: exponent to coefficient, zero left out.

    Sums, products, powers, parentheses, and division by numbers and monomials are carried out. Nothing may be
    juxtaposed to a divisor, since "1/2t" has two readings: write "1/2 t" or "1/(2t)".

    Raises
    ------
    ParseError
        If the text is no polynomial in t.
    LimitError
        Beyond `MAX_TEXT`, `MAX_NESTING`, `MAX_EXPONENT`, `MAX_DIGITS`, `MAX_SPAN` or `MAX_WORK`.

    Examples
    --------
    >>> parse_polynomial("(t - 1)^2/t")
    {-1: Fraction(1, 1), 0: Fraction(-2, 1), 1: Fraction(1, 1)}
    >>> parse_polynomial("t^2 - 3x")
    Traceback (most recent call last):
    kt_widgets.errors.ParseError: x is not the variable (at line 1, column 8, "x"); accepted: t
    """
    tree = _tree(text, "polynomial", _THE_VARIABLE, "a polynomial such as t^2 - 3t + 1")
    terms: Terms = _evaluate(tree, _Polynomials(text))
    return terms


def parse_polynomial_list(text: str) -> list[Terms]:
    """Read polynomials set off by commas, in parentheses or not: the generators of an ideal.

    Raises
    ------
    ParseError, LimitError
        As `parse_polynomial`.

    Examples
    --------
    >>> parse_polynomial_list("(3, 1 + t)")
    [{0: Fraction(3, 1)}, {0: Fraction(1, 1), 1: Fraction(1, 1)}]
    """
    tree = _tree(text, "polynomial_list", _THE_VARIABLE, "polynomials such as 3, 1 + t")
    polynomials: list[Terms] = _evaluate(tree, _Polynomials(text))
    return polynomials


def parse_matrix(text: str) -> list[list[Terms]]:
    """Read a matrix of Laurent polynomials: bracketed rows, rows set off by ";" or new lines, or LaTeX.

    Raises
    ------
    ParseError
        As `parse_polynomial`; also if the rows have different lengths.
    LimitError
        As `parse_polynomial`.

    Examples
    --------
    >>> parse_matrix("[[1, 0], [0, 2]]") == parse_matrix("1, 0; 0, 2")
    True
    >>> parse_matrix(r"\\begin{pmatrix} 1 & t \\\\ 3 & 4 \\end{pmatrix}")[0]
    [{0: Fraction(1, 1)}, {1: Fraction(1, 1)}]
    >>> parse_matrix("1, t; 3")
    Traceback (most recent call last):
    kt_widgets.errors.ParseError: row 2 has 1 entries, row 1 has 2 (at line 1, column 7, "3");
    accepted: rows of one length
    """
    example = "a matrix such as [[1, t], [0, 1 - t]]"
    _check_text(text, example)
    inner = text.strip()
    if inner and not inner.startswith("[") and "\\begin" not in inner:
        # A new line sets off rows; positions stay what they are.
        before, _, after = text.partition(inner)
        rows = before + inner.replace("\n", ";") + after
    else:
        rows = text
    tree = _tree(rows, "matrix", _THE_VARIABLE, example)
    matrix: list[list[Terms]] = _evaluate(tree, _Polynomials(text))
    return matrix


def parse_integer_list(text: str) -> list[int]:
    """Read integers set off by spaces or commas.

    Raises
    ------
    ParseError
        If something else occurs.
    LimitError
        Beyond `MAX_TEXT`, or if a number has more than 18 digits.

    Examples
    --------
    >>> parse_integer_list("1 -2, 1 −2")
    [1, -2, 1, -2]
    """
    tree = _tree(text, "integer_list", "", "integers such as 1 -2 1 -2")
    reader = _Reader(text)
    for token in tree.children:
        if len(token) > 18:
            reader.refuse(token, f"a number of {len(token)} digits", "at most 18 digits", LimitError)
    return [int(token.translate(_SUPERSCRIPTS)) for token in tree.children]
