"""The bodies of linked views: pieces of HTML whose parts carry the place that they show.

The same strings stand in live widgets and in pages without kernel; `static/view.js` brings them to life.
Every text from outside is escaped here.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from html import escape
from typing import NamedTuple

from kt_widgets.algebra.flint_rings import RingName, ring
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.covers.chains import ChainComplex
from kt_widgets.covers.cover import Cover
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.tables import LOWERED
from kt_widgets.groups.presentations import Presentation
from kt_widgets.places import Place
from kt_widgets.text.printing import chain_text, matrix_too_large, name_text, word_text

__all__ = [
    "MAX_CELLS",
    "MAX_TEXT",
    "MAX_WORKED",
    "Fact",
    "facts",
    "facts_latex",
    "homology",
    "maths",
    "matrix",
    "picture",
    "presentation",
    "ring_text",
    "stepper",
]

MAX_CELLS = 10_000
"""The largest matrix shown as a table of cells that can be pointed at."""

MAX_WORKED = 30
"""Ideals over Z[t,1/t] and generating cycles are worked out for at most this many generators of the group."""

MAX_TEXT = 600
"""The longest cycle, in signs, that is written out."""


_INDICES = str.maketrans(LOWERED, "-0123456789")


def maths(text: str, italic: bool = True) -> str:
    """Unicode mathematics as HTML: lowered digits as indices, small letters in italics.

    Few fonts have lowered digits of the right size, and x12 is read where x₁₂ is copied from. Exponents stay
    unicode, since x−1 would be something else. Words are kept upright by `italic=False`.

    Examples
    --------
    >>> maths("Z[t] < ab"), maths("x₁₂⁻¹")
    ('Z[<i>t</i>] &lt; <i>ab</i>', '<i>x</i><sub>12</sub>⁻¹')
    >>> maths("order of H₁", italic=False)
    'order of H<sub>1</sub>'
    """

    def marked(match: re.Match[str]) -> str:
        piece = match[0]
        if piece[0] in LOWERED:
            return f"<sub>{piece.translate(_INDICES)}</sub>"
        return f"<i>{piece}</i>" if italic and piece.isalpha() else escape(piece)

    return re.sub(rf"[a-z]+|[{LOWERED}]+|[<>&]", marked, text)


def _attributes(**values: object) -> str:
    return "".join(f' {k.replace("_", "-")}="{escape(str(v))}"' for k, v in values.items())


def _part(tag: str, place: object, inner: str, **values: object) -> str:
    return f"<{tag}{_attributes(data_place=place, **values)}>{inner}</{tag}>"


def _tools(*buttons: tuple[str, str, dict[str, str]]) -> str:
    made = "".join(
        f'<button type="button"{_attributes(data_act=act, **more)}>{escape(label)}</button>'
        for act, label, more in buttons
    )
    return f'<div class="kt-tools">{made}</div>'


def picture(drawing: Drawing, name: str, python: str = "", traces: bool = False) -> str:
    """A picture with buttons that save it as SVG or PNG.

    Parameters
    ----------
    drawing : Drawing
    name : str
        The name of the saved file, without its ending.
    python : str
        The Python that makes the same figure; a button copies it.
    traces : bool
        Whether the picture holds the traces of several relators, of which one is to be seen at a time.

    Examples
    --------
    >>> from kt_widgets.figures.scene import Scene, Stroke
    >>> body = picture(Drawing(Scene((Stroke("arc:1", ((0, 0), (9, 5)), "strand"),), 10, 5)), "line")
    >>> 'data-place="arc:1"' in body and 'data-act="svg"' in body
    True
    """
    buttons = [("svg", "SVG", {"data_name": name}), ("png", "PNG", {"data_name": name})]
    if python:
        buttons.append(("copy", "copy Python", {"data_text": python}))
    # A strip keeps its width where there is little room, and is scrolled.
    held = _attributes(data_traces="", style=f"--kt-width: {drawing.scene.width:g}pt") if traces else ""
    return f'<figure class="kt-figure"{held}>{drawing.svg()}{_tools(*buttons)}</figure>'


def stepper() -> str:
    """Where the slider, the caption and the running sum of the letters go."""
    return '<div class="kt-stepper" data-stepper></div>'


def presentation(p: Presentation) -> str:
    """The generators and the relators, as written, letter by letter.

    Examples
    --------
    >>> 'data-place="letter:1:2"' in presentation(Presentation.parse("< a, b | a b^-1 >"))
    True
    """
    names = ", ".join(
        _part("span", Place("generator", (g,)), maths(name_text(g, "unicode"))) for g in p.generators
    )
    lines = []
    for r, word in enumerate(p.boundary_words, 1):
        letters = " ".join(
            _part("span", Place("letter", (r, j)), maths(word_text([letter], "unicode")))
            for j, letter in enumerate(word, 1)
        )
        head = _part("span", Place("relator", (r,)), f"<i>r</i><sub>{r}</sub>")
        lines.append(f"<li>{head} = {letters or '1'}</li>")
    return (
        f"<h3>Generators and relators</h3>"
        f'<div class="kt-math"><p class="kt-words">{names or "none"}</p>'
        f'<ol class="kt-words">{"".join(lines)}</ol></div>'
        + _tools(
            ("copy", "copy LaTeX", {"data_text": p.latex()}), ("copy", "copy text", {"data_text": str(p)})
        )
    )


def matrix(c: ChainComplex, n: int) -> str:
    """boundary(n) as a table whose cells can be pointed at.

    Examples
    --------
    >>> c = ChainComplex.from_matrices("t - 1, t - 1", "1 - t; t - 1")
    >>> 'data-place="entry:2:2:1"' in matrix(c, 2)
    True
    """
    boundary = c.boundary(n)
    rows, columns = boundary.shape
    head = f"<h3>∂<sub>{n}</sub>: <i>C</i><sub>{n}</sub> → <i>C</i><sub>{n - 1}</sub></h3>"
    if rows * columns > MAX_CELLS:
        return (
            f"{head}<p>{rows} × {columns}: too large for a table; in Python it is "
            f"<code>cover.chains().boundary({n})</code>.</p>"
        )

    def edges(scope: str) -> list[str]:
        names = ((g, maths(name_text(g, "unicode"))) for g in c.generators)
        return [_part("th", Place("generator", (g,)), text, scope=scope) for g, text in names]

    if n == 2:
        tops = [
            _part("th", Place("relator", (j,)), f"<i>r</i><sub>{j}</sub>", scope="col")
            for j in range(1, columns + 1)
        ]
        sides = edges("row")
    else:
        sides, tops = ['<th scope="row"><i>e</i></th>'] * rows, edges("col")
    names = [name_text(g, "unicode") for g in c.generators]
    across = names if n == 1 else [f"r{j}" for j in range(1, columns + 1)]
    down = ["e"] * rows if n == 1 else names
    lines = []
    for i, side in enumerate(sides):
        line = []
        for j in range(columns):
            f = boundary[i, j]
            text = f.text("unicode")
            more = {} if f else {"class": "kt-zero"}
            line.append(
                _part(
                    "td",
                    Place("entry", (n, i + 1, j + 1)),
                    maths(text),
                    role="gridcell",
                    data_name=f"({down[i]}, {across[j]}) of ∂{n}",
                    data_value=text,
                    **more,
                )
            )
        lines.append(f"<tr>{side}{''.join(line)}</tr>")
    table = (
        f'<div class="kt-scroll"><table class="kt-matrix kt-math" role="grid" aria-label="boundary {n}">'
        f"<thead><tr><td></td>{''.join(tops)}</tr></thead><tbody>{''.join(lines)}</tbody></table></div>"
    )
    if matrix_too_large(rows, columns):
        return head + table + _tools(("copy", "copy text", {"data_text": str(boundary)}))
    buttons = [
        ("copy", "copy LaTeX", {"data_text": boundary.latex()}),
        ("copy", "copy text", {"data_text": str(boundary)}),
    ]
    return head + table + _tools(*buttons)


# Homology ------------------------------------------------------------------------------------------


class Fact(NamedTuple):
    """One thing said about the homology: name and value in unicode, both in LaTeX, and a note in words."""

    name: str
    value: str
    latex: str
    note: str = ""


def ring_text(over: RingName) -> str:
    """The ring of Laurent polynomials, in unicode.

    Examples
    --------
    >>> ring_text("Q"), ring_text(5)
    ('Q[t, 1/t]', 'F₅[t, 1/t]')
    """
    return f"{over}[t, 1/t]" if isinstance(over, str) else f"{name_text(f'F{over}', 'unicode')}[t, 1/t]"


def facts(cover: Cover, over: RingName = "Z") -> list[Fact]:
    """What there is to say about the homology of a cover with coefficients in one ring.

    Over Z[t,1/t]: the order of H_1, its rank where there is one, and the Alexander ideals up to the first
    that is (1). Over a field: the cyclic summands of H_1, each with a cycle that generates it.

    Examples
    --------
    >>> from kt_widgets.groups.presentations import Presentation
    >>> x = Cover(Presentation.parse("< a, b | a b a = b a b >"))
    >>> for fact in facts(x):
    ...     print(fact.name, "|", fact.value, fact.note)
    H₀ | Z[t, 1/t]/(−1 + t)
    order of H₁ | 1 − t + t² up to units
    ideal E₁ | (1 − t + t²)
    ideal E₂ | (1)
    H₂ | 0
    >>> print(facts(x, "Q")[1].value)
    Q[t, 1/t]/(1 − t + t²)
    """
    c = cover.chains() if over == "Z" else cover.chains().over(over)
    found = [_sum_of_quotients("H₀", "H_0", [c.homology(0).order()], over)]
    found += _orders_and_ideals(cover) if over == "Z" else _summands(c)
    free = [LaurentPolynomial(over=over)] * c.rank(2)
    note = "of the presentation complex: each redundant relator adds one summand" if free else ""
    return [*found, _sum_of_quotients("H₂", "H_2", free, over)._replace(note=note)]


def _orders_and_ideals(cover: Cover) -> list[Fact]:
    """What is said of H_1 over Z[t,1/t]."""
    c = cover.chains()
    order = c.homology(1).order()
    note = "up to units" if order else f"H₁ has rank {c.rank(1)}"
    latex = rf"\operatorname{{ord}} H_1 \doteq {order.latex()}"
    found = [Fact("order of H₁", order.text("unicode"), latex, note)]
    if len(c.generators) > MAX_WORKED:
        note = f"for more than {MAX_WORKED} generators only in Python: cover.alexander_ideal(k)"
        return [*found, Fact("ideals Eₖ", "", "", note)]
    for k in range(1, len(c.generators) + 1):
        ideal = cover.alexander_ideal(k)
        name, latex = name_text(f"E{k}", "unicode"), f"E_{{{k}}} = {ideal.latex()}"
        if not ideal.is_zero():
            found.append(Fact(f"ideal {name}", ideal.text("unicode"), latex))
        if ideal.is_unit():
            break
    return found


def _summands(c: ChainComplex) -> list[Fact]:
    """What is said of H_1 over a field."""
    h = c.homology(1)
    if len(c.generators) > MAX_WORKED:
        note = f"cycles for more than {MAX_WORKED} generators only in Python: .over(ring).summands()"
        return [
            _sum_of_quotients("H₁", "H_1", h.invariant_factors(), c.ring),
            Fact("generators", "", "", note),
        ]
    summands = h.summands()
    found = [_sum_of_quotients("H₁", "H_1", [s.factor for s in summands], c.ring)]
    for i, s in enumerate(summands, 1):
        parts = [(name, f.terms()) for name, f in zip(s.names, s.cycle, strict=True)]
        name = f"generator {i}" if len(summands) > 1 else "generator"
        text, latex = chain_text(parts, "unicode"), f"z_{{{i}}} = {chain_text(parts, 'latex')}"
        if len(text) > MAX_TEXT:
            text, latex = "", ""
        note = "" if text else "a long cycle, in Python: .over(ring).summands()"
        found.append(Fact(name, text, latex, note))
    return found


def _sum_of_quotients(name: str, symbol: str, factors: Sequence[LaurentPolynomial], over: RingName) -> Fact:
    text, latex = ring_text(over), ring(over).latex
    value = " ⊕ ".join(f"{text}/({f.text('unicode')})" if f else text for f in factors)
    formula = r" \oplus ".join(f"{latex}/({f.latex()})" if f else latex for f in factors)
    return Fact(name, value or "0", rf"{symbol} \cong {formula or '0'}")


def facts_latex(found: Sequence[Fact]) -> str:
    """Facts in LaTeX, one below the other, for use between dollars."""
    return r"\begin{gathered} " + r" \\ ".join(f.latex for f in found if f.latex) + r" \end{gathered}"


def homology(cover: Cover, rings: Sequence[RingName] = ("Z", "Q", 2, 3, 5), more: str = "") -> str:
    """The homology of the cover, with a choice of coefficients; all choices are worked out here.

    Parameters
    ----------
    cover : Cover
    rings : sequence
        "Z", "Q" or prime numbers.
    more : str
        HTML to stand beside the choice.
    """
    options = "".join(f'<option value="{name}">{escape(ring_text(name))}</option>' for name in rings)
    parts = []
    for name in rings:
        found = facts(cover, name)
        rows = "".join(
            f"<dt>{maths(f.name, italic=False)}</dt>"
            f"<dd><span>{maths(f.value)}</span> <small>{escape(f.note)}</small></dd>"
            for f in found
        )
        parts.append(
            f'<section{_attributes(data_when=f"ring={name}")}><dl class="kt-facts kt-math">{rows}</dl>'
            + _tools(("copy", "copy LaTeX", {"data_text": facts_latex(found)}))
            + "</section>"
        )
    return (
        "<h3>Homology of the cover</h3>"
        f'<div class="kt-controls"><label>over <select data-set="ring">{options}</select></label>{more}</div>'
        + "".join(parts)
    )
