"""`DiagramView`: the diagram, its arcs and crossings linked to what comes from them."""

from __future__ import annotations

from kt_widgets.figures import bodies
from kt_widgets.figures.diagram_figure import diagram
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.tables import lines_scene
from kt_widgets.widgets.subject import Subject
from kt_widgets.widgets.view import View, drawn_or_said

__all__ = ["DiagramView"]


class DiagramView(View):
    """The diagram drawn; a subject that was given as a presentation has none.

    Examples
    --------
    >>> from kt_widgets.diagrams.diagram import Diagram
    >>> DiagramView(Diagram.from_braid([1, 1, 1]))
    DiagramView(Diagram(3 crossings, 1 component, 'braid 1 1 1'))
    """

    def make_body(self, subject: Subject) -> str:
        if subject.diagram is None:
            return '<h3>Diagram</h3><p class="kt-quiet">Given as a presentation: there is no diagram.</p>'
        python = f"kt.figures.diagram(kt.Diagram.parse({subject.text!r}))"
        return "<h3>Diagram</h3>" + bodies.picture(self.make_drawing(subject), "diagram", python)

    def make_drawing(self, subject: Subject) -> Drawing:
        d = subject.diagram
        if d is None:
            return Drawing(lines_scene(["given as a presentation"], "no diagram"))
        return drawn_or_said(lambda: diagram(d, preset="screen"))
