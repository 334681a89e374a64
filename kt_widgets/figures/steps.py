"""`steps`: the relators read letter by letter, each letter with its caption and the sum so far."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from fractions import Fraction
from typing import TypedDict

from kt_widgets.covers.cover import Cover
from kt_widgets.figures.links import check_size
from kt_widgets.places import Place
from kt_widgets.text.printing import Style, name_text, polynomial_text, word_text

__all__ = ["Step", "chain_text", "lift_name", "steps"]

Terms = Mapping[int, int | Fraction]


class Step(TypedDict):
    """One position of the slider; `letter`, `edge` and `entry` are empty where nothing has been read yet."""

    cell: str
    letter: str
    edge: str
    entry: str
    caption: str
    sum: dict[str, str]
    sum_text: str


def lift_name(power: int, what: str, style: Style = "unicode") -> str:
    """The lift t^power `what` as text.

    Examples
    --------
    >>> lift_name(-1, "e"), lift_name(0, "e"), lift_name(1, "e")
    ('t⁻¹ e', 'e', 't e')
    """
    return f"{polynomial_text({power: 1}, style)} {what}" if power else what


def chain_text(coefficients: Iterable[tuple[str, Terms]], style: Style = "unicode") -> str:
    """A chain as a sum of polynomials times names.

    Examples
    --------
    >>> chain_text([("a", {0: 1, 1: -1}), ("b", {1: -1}), ("c", {}), ("d", {0: 1})], "plain")
    '(1 - t) a - t b + d'
    >>> chain_text([])
    '0'
    """
    pieces: list[str] = []
    for name, given in coefficients:
        terms = {exponent: c for exponent, c in given.items() if c}
        if not terms:
            continue
        negative = len(terms) == 1 and min(terms.values()) < 0
        if len(terms) > 1:
            factor = f"({polynomial_text(terms, style)}) "
        else:
            text = polynomial_text({e: -c if negative else c for e, c in terms.items()}, style)
            factor = "" if text == "1" else f"{text} "
        minus = "−" if style == "unicode" else "-"
        sign = (f" {minus} " if negative else " + ") if pieces else (minus if negative else "")
        pieces.append(sign + factor + name_text(name, style))
    return "".join(pieces) or "0"


def steps(cover: Cover) -> list[Step]:
    """The positions of the slider: for each relator one with nothing read, then one for each letter.

    The sum after a relator's last letter is its column of boundary(2): both add up the same visits.

    Raises
    ------
    LimitError
        If the relators are too long (`kt_widgets.figures.links.MAX_LETTERS`).

    Examples
    --------
    >>> from kt_widgets.groups.presentations import Presentation
    >>> found = steps(Cover(Presentation.parse("< t, x | t x t^-1 x^-2 >")))
    >>> for step in found[1:4]:
    ...     print(step["caption"], "|", step["sum_text"])
    t from e to t e: +1 in the entry of t | so far: t
    x from t e to t e: +t in the entry of x | so far: t + t x
    t⁻¹ from t e to e: −1 in the entry of t | so far: t x
    >>> found[-1]["sum"]
    {'t': '0', 'x': '-2 + t'}
    """
    check_size(cover)
    presentation = cover.presentation
    rows = {g: i for i, g in enumerate(presentation.generators, 1)}
    found: list[Step] = []
    for r, word in enumerate(presentation.boundary_words, 1):
        cell = "∂" + name_text(f"f{r}", "unicode")
        written = f"{name_text(f'r{r}', 'unicode')} = {word_text(word, 'unicode')}, lifted from e"
        sums: dict[str, dict[int, int]] = {}
        found.append(
            Step(
                cell=f"cell:{r}:0",
                letter="",
                edge="",
                entry="",
                caption=written,
                sum={},
                sum_text="nothing read yet",
            )
        )
        visits = cover.visits(r)
        for v in visits:
            terms = sums.setdefault(v.generator, {})
            terms[v.exponent] = terms.get(v.exponent, 0) + v.sign
            added = ("+" if v.sign > 0 else "−") + polynomial_text({v.exponent: 1}, "unicode")
            letter, name = word_text([(v.generator, v.sign)], "unicode"), name_text(v.generator, "unicode")
            way = f"from {lift_name(v.start, 'e')} to {lift_name(v.end, 'e')}"
            ordered = [(g, sums[g]) for g in presentation.generators if g in sums]
            start = f"{cell} =" if v.position == len(visits) else "so far:"
            found.append(
                Step(
                    cell=str(v.cell),
                    letter=str(v.letter),
                    edge=str(v.edge),
                    entry=str(Place("entry", (2, rows[v.generator], r))),
                    caption=f"{letter} {way}: {added} in the entry of {name}",
                    sum={g: polynomial_text(terms) for g, terms in ordered},
                    sum_text=f"{start} {chain_text(ordered)}",
                )
            )
    return found
