"""`ExplanationView`: the entry of boundary(2) that is selected, explained by its letters and edges."""

from __future__ import annotations

from typing import Any

import traitlets

from kt_widgets.errors import KtError
from kt_widgets.figures import bodies
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.explain_figure import explain
from kt_widgets.figures.tables import lines_scene
from kt_widgets.places import Place
from kt_widgets.widgets.subject import Subject
from kt_widgets.widgets.view import View, reporting

__all__ = ["ExplanationView"]

_HINT = "Click an entry of ∂₂ (or press Enter on it) to see the letters that it adds up."


class ExplanationView(View):
    """The figure `kt_widgets.figures.explain` of the entry, or of the letter's entry, that is selected.

    Examples
    --------
    >>> view = ExplanationView("< t, x | t x t^-1 = x^2 >")
    >>> view.selected = "entry:2:2:1"
    >>> view.snapshot()
    Drawing('entry of boundary 2 in row x and column r1', 440.7 x 156 pt)
    """

    def make_body(self, subject: Subject) -> str:
        # Another subject starts with nothing selected.
        return f'<h3>One entry</h3><p class="kt-quiet">{_HINT}</p>'

    def make_drawing(self, subject: Subject) -> Drawing:
        entry = _entry(subject, self.selected)
        if entry is None:
            return Drawing(lines_scene(["no entry of $∂_2$ is selected"], "no entry is selected"))
        return explain(subject.cover.chains(), entry, preset="screen")

    @traitlets.observe("selected")
    def _another_selected(self, change: Any) -> None:
        with reporting(self):
            entry = _entry(self.subject, change["new"])
            if entry:
                drawing = self.make_drawing(self.subject)
                python = f"kt.figures.explain({self.subject.python}.chains(), entry={entry!r})"
                picture = bodies.picture(drawing, "entry", python)
                self.body = self.whole(f"<h3>The {drawing.scene.title}</h3>{picture}")
            elif not change["new"]:
                self.body = self.whole(self.make_body(self.subject))


def _entry(subject: Subject, selected: str) -> tuple[str, str] | None:
    """The generator and the relator of the entry of boundary(2) or of the letter that is selected, if one is.

    Raises
    ------
    KtError
        If there is no such entry or letter.
    """
    place = Place.parse(selected)
    names, words = subject.cover.presentation.generators, subject.cover.presentation.boundary_words
    match place.kind, place.indices:
        case "entry", (2, int(i), int(r)) if 1 <= i <= len(names) and 1 <= r <= len(words):
            return names[i - 1], f"r{r}"
        case "letter", (int(r), int(j)) if 1 <= r <= len(words) and 1 <= j <= len(words[r - 1]):
            return words[r - 1].letters[j - 1][0], f"r{r}"
        case ("entry", (2, *_)) | ("letter", _):
            raise KtError(f"there is no {selected}", where="selected", accepted="a place shown in the views")
    return None
