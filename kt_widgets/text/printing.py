"""The printers: plain data (terms, letters, rows of strings) to plain text, unicode or LaTeX.

What is printed here is read back by `kt_widgets.text.parsing`, in every style.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from fractions import Fraction
from itertools import groupby
from typing import Literal

__all__ = [
    "MAX_LATEX_ENTRIES",
    "Style",
    "chain_text",
    "integer_text",
    "lift_text",
    "matrix_text",
    "matrix_too_large",
    "name_text",
    "number_text",
    "polynomial_text",
    "power_text",
    "presentation_text",
    "word_text",
]

Style = Literal["plain", "unicode", "latex"]

MAX_LATEX_ENTRIES = 400
"""Matrices with more entries, and words with more letters, stall a page when typeset: show them as text."""

# amsmath's pmatrix stops at ten columns; an array has no such bound.
_PMATRIX_COLUMNS = 10

_SUPERSCRIPTS = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")
_SUBSCRIPTS = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")


def power_text(base: str, exponent: int, style: Style = "plain") -> str:
    """Print a power of something printed already.

    Examples
    --------
    >>> power_text("(a b)", -2), power_text("t", 10, "latex"), power_text("t", 1)
    ('(a b)^-2', 't^{10}', 't')
    """
    if exponent == 1:
        return base
    if style == "unicode":
        return base + integer_text(exponent).translate(_SUPERSCRIPTS)
    if style == "latex" and not 0 <= exponent <= 9:
        return f"{base}^{{{integer_text(exponent)}}}"
    return f"{base}^{integer_text(exponent)}"


_SHORT = 2_000  # bits; Python may be set to refuse to print from 640 digits on, and does from 4300 on


def integer_text(value: int) -> str:
    """Print an integer of any length.

    Examples
    --------
    >>> integer_text(-12), len(integer_text(10**5000))
    ('-12', 5001)
    """
    if value < 0:
        return "-" + integer_text(-value)
    if value.bit_length() <= _SHORT:
        return str(value)
    half = value.bit_length() * 3 // 20  # a digit has 10/3 bits
    high, low = divmod(value, 10**half)
    return integer_text(high) + integer_text(low).zfill(half)


def number_text(value: int | Fraction, style: Style = "plain") -> str:
    """Print an integer or a fraction of any length.

    Examples
    --------
    >>> number_text(Fraction(-1, 2)), number_text(Fraction(1, 2), "latex"), number_text(Fraction(3))
    ('-1/2', '\\\\frac{1}{2}', '3')
    """
    numerator, denominator = integer_text(value.numerator), integer_text(value.denominator)
    if denominator == "1":
        return numerator
    return f"\\frac{{{numerator}}}{{{denominator}}}" if style == "latex" else f"{numerator}/{denominator}"


def polynomial_text(terms: Mapping[int, int | Fraction], style: Style = "plain", variable: str = "t") -> str:
    """Print a Laurent polynomial given by exponent and coefficient, lowest exponent first.

    Parameters
    ----------
    terms : mapping
        Exponent to coefficient; zero coefficients are skipped.
    style : {"plain", "unicode", "latex"}
    variable : str

    Examples
    --------
    >>> polynomial_text({0: 1, 1: -3, 2: 1})
    '1 - 3t + t^2'
    >>> polynomial_text({-1: Fraction(1, 2), 3: -2}, "latex")
    '\\\\frac{1}{2}t^{-1} - 2t^3'
    >>> polynomial_text({-1: Fraction(-1, 2), 12: 1}, "unicode")
    '−1/2 t⁻¹ + t¹²'
    """
    minus = "−" if style == "unicode" else "-"
    pieces: list[str] = []
    for exponent in sorted(terms):
        coefficient = terms[exponent]
        if not coefficient:
            continue
        size = -coefficient if coefficient < 0 else coefficient
        if exponent == 0:
            body = number_text(size, style)
        elif size == 1:
            body = power_text(variable, exponent, style)
        else:
            gap = " " if size.denominator != 1 and style != "latex" else ""
            body = number_text(size, style) + gap + power_text(variable, exponent, style)
        if not pieces:
            pieces.append(minus + body if coefficient < 0 else body)
        else:
            pieces.append(f" {minus if coefficient < 0 else '+'} {body}")
    return "".join(pieces) or "0"


def lift_text(power: int, cell: str, style: Style = "plain") -> str:
    """Print the lift t^power of a cell.

    Examples
    --------
    >>> lift_text(-1, "e"), lift_text(0, "e"), lift_text(1, "e", "unicode")
    ('t^-1 e', 'e', 't e')
    """
    return f"{polynomial_text({power: 1}, style)} {cell}" if power else cell


def chain_text(
    coefficients: Iterable[tuple[str, Mapping[int, int | Fraction]]], style: Style = "plain"
) -> str:
    """Print a chain: a sum of Laurent polynomials, given by exponent and coefficient, times names.

    Examples
    --------
    >>> chain_text([("a", {0: 1, 1: -1}), ("b", {1: -1}), ("c", {}), ("d", {0: 2})])
    '(1 - t) a - t b + 2d'
    >>> chain_text([("x1", {0: Fraction(1, 2)})], "latex"), chain_text([])
    ('\\\\frac{1}{2} x_{1}', '0')
    """
    pieces: list[str] = []
    for name, given in coefficients:
        terms = {exponent: c for exponent, c in given.items() if c}
        if not terms:
            continue
        negative = len(terms) == 1 and min(terms.values()) < 0
        text = polynomial_text({e: -c if negative else c for e, c in terms.items()}, style)
        if len(terms) > 1:
            factor = f"({text}) "
        else:
            factor = "" if text == "1" else text if text.isdecimal() else f"{text} "
        minus = "−" if style == "unicode" else "-"
        sign = (f" {minus} " if negative else " + ") if pieces else (minus if negative else "")
        pieces.append(sign + factor + name_text(name, style))
    return "".join(pieces) or "0"


def name_text(name: str, style: Style = "plain") -> str:
    """Print a generator's name: digits become an index in unicode and LaTeX.

    Examples
    --------
    >>> name_text("x12"), name_text("x_12", "unicode"), name_text("x12", "latex")
    ('x12', 'x₁₂', 'x_{12}')
    """
    index = name[1:].lstrip("_")
    if style == "plain" or not index:
        return name
    return f"{name[0]}_{{{index}}}" if style == "latex" else name[0] + index.translate(_SUBSCRIPTS)


def word_text(letters: Iterable[tuple[str, int]], style: Style = "plain") -> str:
    """Print a word given by its letters (name, +1 or -1), as it stands.

    Only runs of one and the same letter are collected into a power; nothing is cancelled.

    Examples
    --------
    >>> word_text([("a", 1), ("b", 1), ("b", 1), ("b", -1)])
    'a b^2 b^-1'
    >>> word_text([("x1", -1)], "latex"), word_text([("x1", -1)], "unicode"), word_text([])
    ('x_{1}^{-1}', 'x₁⁻¹', '1')
    """
    runs = (
        power_text(name_text(name, style), sign * len(list(run)), style)
        for (name, sign), run in groupby(letters)
    )
    return " ".join(runs) or "1"


def presentation_text(
    generators: Sequence[str], relators: Iterable[Iterable[tuple[str, int]]], style: Style = "plain"
) -> str:
    """Print a presentation given by names and relators.

    Examples
    --------
    >>> presentation_text(["a", "b"], [[("a", 1), ("b", 1)]])
    '< a, b | a b >'
    >>> presentation_text(["a"], [], "latex")
    '\\\\langle a \\\\mid \\\\rangle'
    """
    left, bar, right = {
        "plain": ("<", "|", ">"),
        "unicode": ("⟨", "|", "⟩"),
        "latex": ("\\langle", "\\mid", "\\rangle"),
    }[style]
    names = ", ".join(name_text(name, style) for name in generators)
    words = ", ".join(word_text(relator, style) for relator in relators)
    return " ".join(piece for piece in (left, names, bar, words, right) if piece)


def matrix_too_large(rows: int, columns: int) -> bool:
    """Whether a matrix of this shape has more than `MAX_LATEX_ENTRIES` entries.

    Examples
    --------
    >>> matrix_too_large(20, 20), matrix_too_large(20, 21)
    (False, True)
    """
    return rows * columns > MAX_LATEX_ENTRIES


def matrix_text(rows: Sequence[Sequence[str]], style: Style = "plain") -> str:
    """Print a matrix given by its entries as strings, in aligned columns or as LaTeX.

    Examples
    --------
    >>> print(matrix_text([["1", "1 - t"], ["-t", "0"]]))
    [[1,  1 - t],
     [-t, 0    ]]
    >>> matrix_text([["1", "t"]], "latex")
    '\\\\begin{pmatrix} 1 & t \\\\end{pmatrix}'
    """
    if style == "latex":
        columns = len(rows[0]) if rows else 0
        wide = columns > _PMATRIX_COLUMNS
        begin = f"\\left(\\begin{{array}}{{{'c' * columns}}}" if wide else "\\begin{pmatrix}"
        end = "\\end{array}\\right)" if wide else "\\end{pmatrix}"
        return " ".join(filter(None, [begin, " \\\\ ".join(" & ".join(row) for row in rows), end]))
    widths = [max(map(len, column)) for column in zip(*rows, strict=True)]
    lines = []
    for row in rows:
        cells = [entry + "," for entry in row[:-1]] + list(row[-1:])
        padded = (
            cell.ljust(width + (i < len(cells) - 1))
            for i, (cell, width) in enumerate(zip(cells, widths, strict=True))
        )
        lines.append(f"[{' '.join(padded)}]")
    return f"[{(',' + chr(10) + ' ').join(lines)}]"
