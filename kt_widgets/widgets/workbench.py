"""`Workbench`: diagram, relators, cover, matrices and homology of one subject together, all linked."""

from __future__ import annotations

from typing import Any

import ipywidgets
import traitlets

from kt_widgets.figures.arrange import stacked
from kt_widgets.figures.drawing import Drawing
from kt_widgets.widgets.cover_view import CoverView
from kt_widgets.widgets.diagram_view import DiagramView
from kt_widgets.widgets.explanation_view import ExplanationView
from kt_widgets.widgets.homology_view import HomologyView
from kt_widgets.widgets.line_view import LineView
from kt_widgets.widgets.matrix_view import MatrixView
from kt_widgets.widgets.relator_view import RelatorView
from kt_widgets.widgets.subject import Subject, Viewable
from kt_widgets.widgets.view import View, bundle, linked, reporting

__all__ = ["Workbench"]

_WIDE_MATRIX = 6  # matrices with more columns than this take the whole width


class Workbench(ipywidgets.Box):  # type: ignore[misc]  # ipywidgets has no types
    """The linked views of a diagram or a presentation, with a line of text to enter another one.

    Pointing at an arc, a crossing, a letter, an edge or an entry lights up all that belongs to it in every
    view. A click or Enter selects: the entry selected is explained below, and Python may observe `selected`.

    Parameters
    ----------
    value : Diagram, Presentation, Cover or str
        A text is a diagram in any notation of `kt_widgets.Diagram.parse`, or a presentation.

    Attributes
    ----------
    subject : Subject
        What is shown: its `cover` and `diagram`.
    selected : str
        The text form of the place selected, such as "entry:2:1:3", or ""; may be set, too.

    Raises
    ------
    KtError
        If the value cannot be shown.

    Examples
    --------
    >>> bench = Workbench("braid 1 1 1")
    >>> bench.line.text = "braid 1 2 x"
    >>> bench.line.error
    "'x' is not known after braid (at line 1, column 11); accepted: strands"
    >>> bench
    Workbench(Diagram(3 crossings, 1 component, 'braid 1 1 1'))
    >>> bench.close()
    """

    selected = traitlets.Unicode()

    # Everything that closes with the workbench; nothing yet, should the value be refused.
    _parts: tuple[ipywidgets.Widget, ...] = ()

    def __init__(self, value: Viewable, **traits: Any) -> None:
        subject = Subject.of(value)
        self.line = LineView(subject)
        self.diagram = DiagramView(subject)
        self.relators = RelatorView(subject)
        self.cover = CoverView(subject)
        self.boundary2 = MatrixView(subject)
        self.boundary1 = MatrixView(subject, 1)
        self.homology = HomologyView(subject)
        self.explanation = ExplanationView(subject)
        self.views: tuple[View, ...] = (
            self.line,
            self.diagram,
            self.relators,
            self.cover,
            self.boundary2,
            self.explanation,
            self.homology,
            self.boundary1,
        )
        self._words, self._results = _stack(), _stack()
        stacks = (self._words, self._results)
        self._parts = (*linked(self.views), *self.views, *stacks, *(stack.layout for stack in stacks))
        super().__init__(**traits)
        self.add_class("kt-workbench")
        for view in (self.line, self.cover):
            view.add_class("kt-wide")
        self._lay_out(subject)
        self.line.observe(self._entered, "text")
        self.line.observe(self._picked, "selected")

    @property
    def subject(self) -> Subject:
        """What is shown."""
        return self.line.subject

    def show(self, value: Viewable) -> None:
        """Show another diagram or presentation in all views; nothing changes if that fails.

        Raises
        ------
        KtError
            If the value cannot be shown.
        """
        subject = Subject.of(value)
        made = [(view, view.make_body(subject)) for view in self.views]
        self.line.unobserve(self._entered, "text")
        try:
            for view, body in made:
                view.take(subject, body)
        finally:
            self.line.observe(self._entered, "text")
        self._lay_out(subject)

    def _entered(self, change: Any) -> None:
        typed = change["new"]
        with reporting(self.line):
            self.show(typed)

    def _picked(self, change: Any) -> None:
        self.selected = change["new"]

    @traitlets.observe("selected")
    def _select(self, change: Any) -> None:
        # Set in Python; what is picked in the browser has reached all views already.
        for view in self.views:
            view.selected = change["new"]

    def _lay_out(self, subject: Subject) -> None:
        """Beside the diagram there is room for the relators and narrow matrices."""
        p = subject.cover.presentation
        wide = max(len(p.boundary_words), len(p.generators)) > _WIDE_MATRIX
        matrices = (self.boundary2, self.boundary1)
        for view in matrices:
            view.add_class("kt-wide") if wide else view.remove_class("kt-wide")
        drawn, below = (self.diagram,) if subject.diagram else (), matrices if wide else ()
        self._words.children = (self.relators,) if wide else (self.relators, *matrices)
        self._results.children = (self.homology,)
        parts = (self.line, *drawn, self._words, self.cover, *below, self.explanation, self._results)
        self.children = parts

    def snapshot(self) -> Drawing:
        """A plain picture of the views, one below the other, for viewers that run no scripts."""
        shown = (self.diagram, self.relators, self.cover, self.boundary2, self.homology)
        scenes = [view.snapshot().scene for view in shown if self.subject.diagram or view is not self.diagram]
        return Drawing(stacked(scenes, "diagram, relators, cover, boundary matrix and homology"))

    def __repr__(self) -> str:
        return repr(self.diagram).replace("DiagramView", "Workbench", 1)

    def _repr_mimebundle_(self, **kwargs: Any) -> tuple[dict[str, Any], dict[str, Any]]:
        return bundle(self, self.snapshot(), "")

    def close(self) -> None:
        """Close all views and the links between them."""
        for part in self._parts:
            part.close()
        self.layout.close()
        super().close()


def _stack() -> ipywidgets.Box:
    box = ipywidgets.Box()
    box.add_class("kt-stack")
    return box
