"""`steps`: the relators read letter by letter, each letter with its caption and the sum so far."""

from __future__ import annotations

from typing import TypedDict

from kt_widgets.covers.cover import Cover
from kt_widgets.figures.links import check_size
from kt_widgets.places import Place
from kt_widgets.text.printing import chain_text, name_text, polynomial_text, word_text

__all__ = ["Step", "steps"]


class Step(TypedDict):
    """One position of the slider; `letter`, `edge` and `entry` are empty where nothing has been read yet."""

    cell: str
    letter: str
    edge: str
    entry: str
    caption: str
    sum: dict[str, str]
    sum_text: str


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
            ordered = [(g, sums[g]) for g in presentation.generators if g in sums]
            start = f"{cell} =" if v.position == len(visits) else "so far:"
            found.append(
                Step(
                    cell=str(v.cell),
                    letter=str(v.letter),
                    edge=str(v.edge),
                    entry=str(Place("entry", (2, rows[v.generator], r))),
                    caption=v.text("unicode"),
                    sum={g: polynomial_text(terms) for g, terms in ordered},
                    sum_text=f"{start} {chain_text(ordered, 'unicode')}",
                )
            )
    return found
