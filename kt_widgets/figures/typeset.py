"""The formulas of a diagram, from relators to homology, as a LaTeX document that compiles as it stands."""

from __future__ import annotations

import re
from collections.abc import Iterable

from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.covers.cover import Cover
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.figures.bodies import facts
from kt_widgets.text.printing import matrix_too_large

__all__ = ["latex_document"]

_DOCUMENT = r"""% Formulas of a dossier: compile this file, or copy from it (needs amsmath and amssymb).
\documentclass{article}
\usepackage{amsmath, amssymb, graphicx}
\setlength{\parindent}{0pt}
\setlength{\parskip}{1.5ex}
% A formula, made smaller where it is wider than the line.
\newsavebox{\formula}
\newcommand{\fit}[1]{\sbox{\formula}{$\displaystyle #1$}%
  \ifdim\wd\formula>\linewidth\resizebox{\linewidth}{!}{\usebox{\formula}}\else\usebox{\formula}\fi\par}
\begin{document}
"""


def latex_document(d: Diagram, rings: Iterable[str | int] = ("Z", "Q", 2, 3, 5)) -> str:
    """Wirtinger presentation, peripheral words, boundary matrices and homology in LaTeX.

    Matrices with more than 400 entries are left out, which the text says.

    Examples
    --------
    >>> text = latex_document(Diagram.from_braid([1, 1, 1]))
    >>> r"\\fit{\\langle a, b, c \\mid" in text, text.count(r"\\begin{pmatrix}")
    (True, 2)
    """
    x = d.cover()
    lines = [_DOCUMENT, rf"\section*{{\raggedright\ttfamily {d.source}}}", _fit(x.presentation.latex())]
    for component in d.components:
        number = component.number
        meridian, longitude = d.meridian(number), d.longitude(number).reduced()
        lines.append(
            _fit(rf"\mu_{{{number}}} = {meridian.latex()}, \qquad \lambda_{{{number}}} = {longitude.latex()}")
        )
    lines.append(r"\section*{Chain complex of the infinite cyclic cover}")
    lines += [_fit(rf"\partial_{n} = {_matrix(x.chains().boundary(n))}") for n in (1, 2)]
    lines.append(r"\section*{Homology}")
    ending = "" if len(d.components) == 1 else r"\quad\text{up to units}"
    lines.append(_fit(rf"\Delta(t) = {d.alexander_polynomial().latex()}{ending}"))
    for ring in rings:
        lines += _homology(x, ring)
    return "\n".join([*lines, r"\end{document}", ""])


def _fit(formula: str) -> str:
    return rf"\fit{{{formula}}}"


def _matrix(matrix: LaurentMatrix) -> str:
    rows, columns = matrix.shape
    if matrix_too_large(rows, columns):
        return rf"\text{{a matrix of {rows} rows and {columns} columns, left out here}}"
    return matrix.latex() if rows and columns else "0"


def _homology(x: Cover, ring: str | int) -> Iterable[str]:
    name = rf"\mathbb{{{ring}}}" if isinstance(ring, str) else rf"\mathbb{{F}}_{{{ring}}}"
    yield rf"\subsection*{{Over ${name}[t^{{\pm 1}}]$}}"
    for fact in facts(x, ring):
        yield _fit(fact.latex + (rf" \quad\text{{({_words(fact.note)})}}" if fact.note else ""))


def _words(note: str) -> str:
    """A note with the symbols in it, such as a letter with an index, in LaTeX."""
    return re.sub("([A-Z])([₀-₉]+)", lambda m: f"${m[1]}_{{{m[2].translate(_DIGITS)}}}$", note)


_DIGITS = str.maketrans("₀₁₂₃₄₅₆₇₈₉", "0123456789")
