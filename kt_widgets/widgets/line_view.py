"""`LineView`: the line of text that gives the subject, and in words what is lit."""

from __future__ import annotations

import traitlets

from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.tables import lines_scene
from kt_widgets.widgets.subject import Subject
from kt_widgets.widgets.view import View

__all__ = ["LineView"]

_FORM = (
    '<form class="kt-line-form" data-set="text"><label for="line">Diagram or presentation</label>'
    '<input id="line" type="text" spellcheck="false" autocomplete="off" aria-describedby="notations">'
    '<button type="submit">Show</button></form>'
    '<p id="notations" class="kt-quiet">braid 1 -2 1 -2 · gauss 1 -2 3 -1 2 -3 signs + + + · dowker 4 6 2 · '
    "planar 1,4,2,5; 5,2,6,3; 3,6,4,1 · &lt; a, b | a b a = b a b &gt;</p>"
)
_SAYS = '<p class="kt-says" data-says="Point at an arc, a crossing, a letter, an edge or an entry."></p>'


class LineView(View):
    """A field for a line of text; what is typed stays when it is wrong, and the error stands under it.

    Examples
    --------
    >>> LineView("braid 1 1 1").text
    'braid 1 1 1'
    """

    text = traitlets.Unicode().tag(sync=True)

    def take(self, subject: Subject, body: str) -> None:
        super().take(subject, body)
        self.text = subject.text

    @staticmethod
    def whole(body: str) -> str:
        """The error stands right under the field."""
        return View.whole(body) + _SAYS

    def make_body(self, subject: Subject) -> str:
        return _FORM

    def make_drawing(self, subject: Subject) -> Drawing:
        return Drawing(lines_scene([subject.text.replace("$", "")], "line of text"))
