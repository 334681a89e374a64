"""`Word`: the elements of a free group, kept as they were written until something reduces them."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import lru_cache
from itertools import chain
from typing import Any

from kt_widgets.errors import AlgebraError, LimitError, ParseError
from kt_widgets.text.parsing import MAX_LETTERS, parse_word
from kt_widgets.text.portable import Portable
from kt_widgets.text.printing import MAX_LATEX_ENTRIES, Style, word_text

__all__ = ["Letter", "Word", "check_name"]

Letter = tuple[str, int]
"""A generator's name and +1 or -1."""

_NAME = re.compile(r"[A-Za-z](?:_?[0-9]+)?")


@lru_cache(maxsize=4096)
def check_name(name: str) -> str:
    """Refuse what is no generator's name.

    Raises
    ------
    ParseError
        Unless it is one letter, or a letter and a number.

    Examples
    --------
    >>> check_name("x_12")
    'x_12'
    """
    if not isinstance(name, str) or not _NAME.fullmatch(name):
        raise ParseError(
            f"{name!r} is no name of a generator", accepted="a letter, or a letter and a number: a, x1"
        )
    return name


@dataclass(frozen=True, slots=True, repr=False)
class Word(Portable, kind="word"):
    """A word in generators and their inverses; literal, so that a a^-1 stays until it is reduced.

    Two words are equal when their letters are; they are equal in the free group when `reduced` makes them so.
    Products and powers are freely reduced.

    Parameters
    ----------
    letters : iterable of (name, +1 or -1)

    Raises
    ------
    ParseError
        If a name or a sign is not one.

    Examples
    --------
    >>> w = Word.parse("[a, b] a a^-1")
    >>> print(w, "|", w.reduced(), "|", w * w.inverse(), "|", Word.parse("a b") ** 2)
    a b a^-1 b^-1 a a^-1 | a b a^-1 b^-1 | 1 | a b a b
    """

    letters: tuple[Letter, ...] = ()

    def __post_init__(self) -> None:
        if isinstance(self.letters, str):
            raise ParseError("a text is no tuple of letters", accepted='Word.parse("a b^-1")')
        letters = tuple((check_name(name), sign) for name, sign in self.letters)
        for name, sign in letters:
            if sign.__class__ is not int or sign not in (1, -1):
                raise ParseError(f"a letter {name} with sign {sign!r}", accepted="1 or -1")
        object.__setattr__(self, "letters", letters)

    @classmethod
    def parse(cls, text: str, generators: Sequence[str] | None = None) -> Word:
        """Read a word, plain, unicode or LaTeX; other names than `generators`, if given, are refused.

        Raises
        ------
        ParseError, LimitError
            As `kt_widgets.text.parsing.parse_word`.

        Examples
        --------
        >>> Word.parse("a⁻¹ b^2")
        Word('a^-1 b^2')
        """
        return _made(parse_word(text, generators))

    def __len__(self) -> int:
        return len(self.letters)

    def __iter__(self) -> Iterator[Letter]:
        return iter(self.letters)

    def __mul__(self, other: Word) -> Word:
        if not isinstance(other, Word):
            return NotImplemented
        return _made(_reduced(chain(self.letters, other.letters)))

    def __pow__(self, exponent: int) -> Word:
        if not isinstance(exponent, int):
            return NotImplemented
        base = self if exponent >= 0 else self.inverse()
        _check_length(len(base) * abs(exponent))
        return _made(_reduced(base.letters * abs(exponent)))

    def inverse(self) -> Word:
        """The letters inverted, from last to first.

        Examples
        --------
        >>> print(Word.parse("a b^-1").inverse())
        b a^-1
        """
        return _made(tuple((name, -sign) for name, sign in reversed(self.letters)))

    def reduced(self) -> Word:
        """The freely reduced word.

        Examples
        --------
        >>> print(Word.parse("a b b^-1 a").reduced())
        a^2
        """
        letters = _reduced(self.letters)
        return self if len(letters) == len(self.letters) else _made(letters)

    def cyclically_reduced(self) -> Word:
        """The freely reduced word without inverse letters at its two ends.

        Examples
        --------
        >>> print(Word.parse("a b c b^-1 a^-1").cyclically_reduced())
        c
        """
        letters = _reduced(self.letters)
        start, stop = 0, len(letters)
        while stop - start > 1 and _inverse_letters(letters[start], letters[stop - 1]):
            start, stop = start + 1, stop - 1
        return _made(letters[start:stop])

    def substitute(self, images: Mapping[str, Word]) -> Word:
        """Put words for generators and reduce; a generator without an image stays.

        Raises
        ------
        LimitError
            If the result would have more than `kt_widgets.text.parsing.MAX_LETTERS` letters before reduction.

        Examples
        --------
        >>> print(Word.parse("a b a^-1").substitute({"b": Word.parse("a^2")}))
        a^2
        """
        pieces: dict[Letter, tuple[Letter, ...]] = {}
        for name, image in images.items():
            pieces[name, 1] = image.letters
            pieces[name, -1] = image.inverse().letters
        _check_length(sum(len(pieces.get(letter, (letter,))) for letter in self.letters))
        spelled = chain.from_iterable(pieces.get(letter, (letter,)) for letter in self.letters)
        return _made(_reduced(spelled))

    def weight(self, weights: Mapping[str, int]) -> int:
        """The sum of the weights of its letters, inverse letters counted negatively.

        Raises
        ------
        AlgebraError
            If a generator has no weight.

        Examples
        --------
        >>> Word.parse("a b^-1 a").weight({"a": 2, "b": 3})
        1
        """
        try:
            return sum(sign * weights[name] for name, sign in self.letters)
        except KeyError as missing:
            raise AlgebraError(
                f"the generator {missing.args[0]} has no weight", accepted="an integer for each generator"
            ) from None

    def text(self, style: Style = "plain") -> str:
        """Print it as "plain", "unicode" or "latex"."""
        return word_text(self.letters, style)

    def latex(self) -> str:
        """Its LaTeX, without dollar signs."""
        return self.text("latex")

    def __str__(self) -> str:
        return self.text()

    def __repr__(self) -> str:
        text = str(self) if len(self) <= 40 else f"{word_text(self.letters[:20])} ... ({len(self)} letters)"
        return f"Word({text!r})"

    def _repr_latex_(self) -> str | None:
        return f"${self.latex()}$" if len(self) <= MAX_LATEX_ENTRIES else None

    def to_data(self) -> dict[str, Any]:
        """``{"letters": [[name, sign], ...]}``."""
        return {"letters": [list(letter) for letter in self.letters]}

    @classmethod
    def from_data(cls, data: Any) -> Word:
        """Read `to_data` back."""
        return cls(tuple((name, sign) for name, sign in data["letters"]))


def _made(letters: tuple[Letter, ...]) -> Word:
    # Trusted: every letter was checked when it came in.
    word = object.__new__(Word)
    object.__setattr__(word, "letters", letters)
    return word


def _inverse_letters(a: Letter, b: Letter) -> bool:
    return a[1] == -b[1] and a[0] == b[0]


def _reduced(letters: Iterable[Letter]) -> tuple[Letter, ...]:
    result: list[Letter] = []
    for letter in letters:
        if result and _inverse_letters(result[-1], letter):
            result.pop()
        else:
            result.append(letter)
    return tuple(result)


def _check_length(letters: int) -> None:
    if letters > MAX_LETTERS:
        raise LimitError(f"a word of {letters} letters", accepted=f"at most {MAX_LETTERS}")
