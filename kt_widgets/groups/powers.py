"""`PowerWord`: a product of powers of short words, for words too long to be written letter by letter."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from operator import index
from typing import Any

from kt_widgets.errors import LimitError
from kt_widgets.groups.words import Word
from kt_widgets.text.portable import Portable
from kt_widgets.text.printing import MAX_LATEX_ENTRIES, Style, integer_text, name_text, power_text

__all__ = ["MAX_EXPANDED", "PowerWord"]

MAX_EXPANDED = 10_000
"""Most letters of a word that `PowerWord.expanded` writes out."""


@dataclass(frozen=True, repr=False)
class PowerWord(Portable, kind="power word"):
    """A product of powers of words, kept compressed.

    Attributes
    ----------
    factors : tuple of (Word, int)

    Examples
    --------
    >>> w = PowerWord(((Word.parse("b a^-1"), 3), (Word.parse("a"), -2)))
    >>> print(w, "|", w.length(), "|", w.expanded())
    (b a^-1)^3 a^-2 | 8 | b a^-1 b a^-1 b a^-3
    """

    factors: tuple[tuple[Word, int], ...] = ()

    def length(self) -> int:
        """The number of letters, before any reduction; it may have many digits.

        Examples
        --------
        >>> PowerWord(((Word.parse("a b"), -10),)).length()
        20
        """
        return sum(len(word) * abs(exponent) for word, exponent in self.factors)

    def weight(self, weights: Mapping[str, int]) -> int:
        """The sum of the weights of its letters.

        Raises
        ------
        AlgebraError
            If a generator has no weight.
        """
        return sum(word.weight(weights) * exponent for word, exponent in self.factors)

    def expanded(self) -> Word:
        """The freely reduced word.

        Raises
        ------
        LimitError
            If it has more than `MAX_EXPANDED` letters before reduction.

        Examples
        --------
        >>> PowerWord(((Word.parse("a"), 10**9),)).expanded()
        Traceback (most recent call last):
        kt_widgets.errors.LimitError: a word of 1000000000 letters; accepted: at most 10000
        """
        if self.length() > MAX_EXPANDED:
            raise LimitError(
                f"a word of {integer_text(self.length())} letters", accepted=f"at most {MAX_EXPANDED}"
            )
        result = Word()
        for word, exponent in self.factors:
            result = result * word**exponent
        return result

    def text(self, style: Style = "plain") -> str:
        """Print it as "plain", "unicode" or "latex"."""
        return " ".join(_power(word, exponent, style) for word, exponent in self.factors) or "1"

    def latex(self) -> str:
        """Its LaTeX, without dollar signs."""
        return self.text("latex")

    def __str__(self) -> str:
        return self.text()

    def __repr__(self) -> str:
        shown = f"{str(self)!r}" if len(self.factors) <= 10 else f"{len(self.factors)} factors"
        return f"PowerWord({shown}, {integer_text(self.length())} letters)"

    def _repr_latex_(self) -> str | None:
        letters = sum(len(word) for word, _ in self.factors)
        return f"${self.latex()}$" if letters <= MAX_LATEX_ENTRIES else None

    def to_data(self) -> dict[str, Any]:
        """``{"factors": [[letters, exponent], ...]}``."""
        return {"factors": [[word.to_data()["letters"], exponent] for word, exponent in self.factors]}

    @classmethod
    def from_data(cls, data: Any) -> PowerWord:
        """Read `to_data` back."""
        return cls(tuple((Word.from_data({"letters": letters}), index(e)) for letters, e in data["factors"]))


def _power(word: Word, exponent: int, style: Style) -> str:
    if len(word) == 1:
        ((name, sign),) = word
        return power_text(name_text(name, style), sign * exponent, style)
    return power_text(f"({word.text(style)})", exponent, style)
