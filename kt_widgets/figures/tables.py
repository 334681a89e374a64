"""Formulas as pictures: lines of mathematics, and tables with their headings, as scenes."""

from __future__ import annotations

import re
from collections.abc import Sequence

from kt_widgets.figures.lettering import extent
from kt_widgets.figures.presets import label_size, preset_named
from kt_widgets.figures.scene import Item, Label, Scene, Stroke

__all__ = ["LOWERED", "RAISED", "lines_scene", "table_scene", "typeset"]

RAISED, LOWERED = "⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "₋₀₁₂₃₄₅₆₇₈₉"
"""The signs of unicode's exponents and indices."""
_LINE = str.maketrans(RAISED + LOWERED, "-0123456789" * 2)


def typeset(text: str) -> str:
    """Unicode mathematics, and words between it, as the text of a label.

    Signs are taken one by one between spaces, so that spaces stay; more than one plain letter is a word.

    Examples
    --------
    >>> typeset("order: 1 − t⁻¹ x₁₂")
    'order: 1 − $t^{-1}$ $x_{12}$'
    """
    return " ".join(_typeset(piece) for piece in text.split(" "))


def _typeset(piece: str) -> str:
    letters = piece.rstrip(":,")
    if not any(sign.isalpha() for sign in piece) or (letters.isalpha() and len(letters) > 1):
        return piece
    raised = re.sub(f"[{RAISED}]+", lambda m: f"^{{{m[0].translate(_LINE)}}}", piece)
    return f"${re.sub(f'[{LOWERED}]+', lambda m: f'_{{{m[0].translate(_LINE)}}}', raised)}$"


def lines_scene(lines: Sequence[str], title: str, preset: str = "screen") -> Scene:
    """Lines of label text, one below the other.

    Examples
    --------
    >>> lines_scene(["$a b$", "$b$"], "relators")
    Scene(2 items, 47.45 x 68.4 pt, 'relators')
    """
    look = preset_named(preset)
    size, step = label_size("formula", look), 1.6 * look.formula
    height = (len(lines) + 0.85) * step
    labels = tuple(
        Label("line", line, (look.label, height - (i + 0.9) * step), "formula", anchor="left")
        for i, line in enumerate(lines)
    )
    width = max((extent(line, size).width for line in lines), default=0.0) + 2 * look.label
    return Scene(labels, width, height, title, "; ".join(line.replace("$", "") for line in lines), preset)


def table_scene(
    rows: Sequence[Sequence[str]],
    left: Sequence[str],
    above: Sequence[str],
    title: str,
    preset: str = "screen",
) -> Scene:
    """Entries between bars, with a heading for each row and column; all are label texts.

    Examples
    --------
    >>> table_scene([["$1 - t$"], ["$t$"]], ["$a$", "$b$"], ["$r_1$"], "boundary 2").at("entry")[0].text
    '$1 - t$'
    """
    look = preset_named(preset)
    size, step = label_size("formula", look), 1.7 * look.formula
    heads = [extent(text, size).width for text in left]
    widths = [
        max(extent(text, size).width for text in (head, *(row[j] for row in rows)))
        for j, head in enumerate(above)
    ]
    margin = look.label
    edge = margin + max(heads, default=0.0) + 0.6 * size
    height = (len(rows) + 1) * step + 2 * margin
    items: list[Item] = []
    starts = [edge + 0.8 * size + sum(widths[:j]) + 1.1 * size * j for j in range(len(widths))]
    end = (starts[-1] + widths[-1] if widths else edge) + 0.8 * size
    middles = [start + width / 2 for start, width in zip(starts, widths, strict=True)]
    first = height - margin - step / 2
    items += [Label("column", text, (x, first), "formula") for x, text in zip(middles, above, strict=True)]
    for i, (text, row) in enumerate(zip(left, rows, strict=True), 1):
        y = first - i * step
        items.append(Label("row", text, (edge - 0.6 * size, y), "formula", anchor="right"))
        items += [Label("entry", cell, (x, y), "formula") for x, cell in zip(middles, row, strict=True)]
    for x in (edge, end):
        items.append(Stroke("bar", ((x, first - 0.5 * step), (x, margin)), "rail"))
    return Scene(tuple(items), end + margin, height, title, "", preset)
