"""`CoverView`: the infinite cyclic cover with one boundary traced, stepped through by a slider."""

from __future__ import annotations

from collections.abc import Sequence

from kt_widgets.figures import bodies
from kt_widgets.figures.cover_figure import cover_scene
from kt_widgets.figures.diagram_figure import arc_colours
from kt_widgets.figures.drawing import Drawing
from kt_widgets.widgets.subject import Subject
from kt_widgets.widgets.view import View, drawn_or_said

__all__ = ["CoverView"]


class CoverView(View):
    """The strip of the cover; the slider reads a relator letter by letter, with the sum so far.

    Examples
    --------
    >>> view = CoverView("< a, b | a b a = b a b >")
    >>> view.steps[1]["caption"]
    'a from e to t e: +1 in the entry of a'
    """

    def make_body(self, subject: Subject) -> str:
        count = len(subject.cover.presentation.boundary_words)
        drawing = _drawing(subject, range(1, count + 1))
        return (
            "<h3>Infinite cyclic cover, the boundary of a lifted 2-cell traced</h3>"
            + bodies.stepper()
            + bodies.picture(drawing, "cover", f"kt.figures.cover({subject.python}, trace=1)", traces=True)
        )

    def make_drawing(self, subject: Subject) -> Drawing:
        return _drawing(subject, range(1, 1 + bool(subject.cover.presentation.boundary_words)))


def _drawing(subject: Subject, relators: Sequence[int]) -> Drawing:
    """The strip with these relators traced; edges have the colours of their arcs in the diagram."""
    colours = None
    if subject.diagram:
        colours = dict(zip(subject.cover.presentation.generators, arc_colours(subject.diagram), strict=True))
    return drawn_or_said(
        lambda: Drawing(cover_scene(subject.cover, relators, preset="screen", colours=colours))
    )
