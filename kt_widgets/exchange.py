"""`from_json`: any value of the package back from the JSON text that its `to_json` gave."""

from __future__ import annotations

from kt_widgets.algebra import ideals, laurent, matrix, smith
from kt_widgets.covers import chains, cover
from kt_widgets.diagrams import diagram
from kt_widgets.figures import evidence
from kt_widgets.groups import presentations, words
from kt_widgets.modules import comparison, module
from kt_widgets.text.portable import Portable, read

__all__ = ["ROOMS", "from_json"]

ROOMS = (
    laurent,
    matrix,
    ideals,
    smith,
    module,
    comparison,
    words,
    presentations,
    cover,
    chains,
    diagram,
    evidence,
)
"""The files whose classes travel as JSON: importing them makes their kinds known."""


def from_json(text: str) -> Portable:
    """Read a value that `to_json` wrote: of a polynomial, matrix, ideal, module, word, presentation, cover,
    chain complex, diagram or certificate, or a dossier.

    A dossier's evidence is verified while it is read; of other certificates call `verify`.

    Raises
    ------
    ParseError
        If the text is not such JSON, or its version or kind is not known, or its data are malformed.
    KtError
        If the data are well formed and wrong: a diagram that is not planar, a complex with d d != 0, evidence
        that does not hold.

    Examples
    --------
    >>> from kt_widgets.diagrams.diagram import Diagram
    >>> d = Diagram.from_braid([1, 1, 1])
    >>> from_json(d.to_json()) == d
    True
    """
    return read(text)
