"""Fox's free derivatives as lists of visits: the one source of the cover's pictures and of its formulas.

Reading a relator letter by letter traces the boundary of a lifted 2-cell: each letter crosses one edge of
the cover and adds one signed power of t to one entry of the boundary matrix. That is a `Visit`.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import NamedTuple

from kt_widgets.errors import AlgebraError, LimitError
from kt_widgets.groups.words import Letter, Word
from kt_widgets.places import Place
from kt_widgets.text.parsing import MAX_LETTERS
from kt_widgets.text.printing import Style, lift_text, name_text, polynomial_text, word_text

__all__ = ["Visit", "fox_derivative", "visits"]


class Visit(NamedTuple):
    """One letter of a relator, read in the lift of its 2-cell that starts at t^lift e.

    The letter a read at weight p crosses the edge t^p a and adds +t^p to the coefficient of a; the letter
    a^-1 crosses the edge t^(p - w(a)) a backwards and adds -t^(p - w(a)). `start` and `end` are the weights
    before and after the letter, `exponent` the power of t that it adds, `sign` the sign.
    """

    relator: int
    position: int
    generator: str
    sign: int
    exponent: int
    start: int
    end: int
    lift: int

    @property
    def edge(self) -> Place:
        """The edge of the cover that is crossed."""
        return Place("edge", (self.generator, self.exponent))

    @property
    def cell(self) -> Place:
        """The lifted 2-cell whose boundary is read."""
        return Place("cell", (self.relator, self.lift))

    @property
    def letter(self) -> Place:
        """The letter of the relator."""
        return Place("letter", (self.relator, self.position))

    def text(self, style: Style = "plain") -> str:
        """The letter, its way in the cover, and what it adds to the boundary.

        Examples
        --------
        >>> print(visits(Word.parse("a b^-1"), {"a": 1, "b": 1})[1])
        b^-1 from t e to e: -1 in the entry of b
        """
        letter = word_text([(self.generator, self.sign)], style)
        way = f"from {lift_text(self.start, 'e', style)} to {lift_text(self.end, 'e', style)}"
        sign = "+" if self.sign > 0 else "−" if style == "unicode" else "-"
        added = sign + polynomial_text({self.exponent: 1}, style)
        return f"{letter} {way}: {added} in the entry of {name_text(self.generator, style)}"

    def __str__(self) -> str:
        return self.text()


def visits(
    word: Iterable[Letter], weights: Mapping[str, int], relator: int = 1, start: int = 0
) -> tuple[Visit, ...]:
    """Trace the lift of a word that starts at t^start e.

    The sum of the visits of a generator a, each as sign * t^exponent, is t^start times the image of the
    derivative d(word)/da in Z[t,1/t] (R. H. Fox, Free differential calculus I, Ann. of Math. 57 (1953);
    left derivatives, d(uv) = du + u dv).

    Parameters
    ----------
    word : Word
        Read literally: letters that cancel are visited too.
    weights : mapping
        The weight of each generator.
    relator : int
        The number that the visits carry.
    start : int

    Raises
    ------
    AlgebraError
        If a generator has no weight.

    Examples
    --------
    >>> for v in visits(Word.parse("t x t^-1 x^-2"), {"t": 1, "x": 0}):
    ...     print(v.generator, v.sign, v.exponent, v.letter, v.edge)
    t 1 0 letter:1:1 edge:t:0
    x 1 1 letter:1:2 edge:x:1
    t -1 0 letter:1:3 edge:t:0
    x -1 0 letter:1:4 edge:x:0
    x -1 0 letter:1:5 edge:x:0
    """
    make = tuple.__new__
    result = []
    before = start
    position = 0
    try:
        for name, sign in word:
            position += 1
            if sign > 0:
                after = before + weights[name]
                visit = (relator, position, name, 1, before, before, after, start)
            else:
                after = before - weights[name]
                visit = (relator, position, name, -1, after, before, after, start)
            result.append(make(Visit, visit))
            before = after
    except KeyError:
        raise AlgebraError(
            f"the generator {name} has no weight",
            where=str(Place("letter", (relator, position))),
            accepted="an integer for each generator",
        ) from None
    return tuple(result)


def fox_derivative(word: Word, generator: str) -> list[tuple[int, Word]]:
    """The derivative of a word by a generator in the group ring of the free group, term by term.

    Each letter a gives (+1, the word before it), each a^-1 gives (-1, the word before it and itself); the
    words are freely reduced, equal terms are not collected.

    Raises
    ------
    LimitError
        If the terms have more than `kt_widgets.text.parsing.MAX_LETTERS` letters altogether.

    Examples
    --------
    >>> fox_derivative(Word.parse("a b a^-1"), "a")
    [(1, Word('1')), (-1, Word('a b a^-1'))]
    """
    terms: list[tuple[int, Word]] = []
    prefix: list[Letter] = []
    total = 0
    for name, sign in word:
        if name == generator and sign > 0:
            terms.append((1, Word(tuple(prefix))))
        if prefix and prefix[-1] == (name, -sign):
            prefix.pop()
        else:
            prefix.append((name, sign))
        if name == generator and sign < 0:
            terms.append((-1, Word(tuple(prefix))))
        total += len(prefix) if name == generator else 0
        if total > MAX_LETTERS:
            raise LimitError("the derivative is too long", accepted=f"at most {MAX_LETTERS} letters in all")
    return terms
