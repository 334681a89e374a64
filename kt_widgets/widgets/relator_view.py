"""`RelatorView`: the generators and relators, letter by letter."""

from __future__ import annotations

from kt_widgets.figures import bodies
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.tables import lines_scene, typeset
from kt_widgets.text.printing import name_text
from kt_widgets.widgets.subject import Subject
from kt_widgets.widgets.view import View

__all__ = ["RelatorView"]


class RelatorView(View):
    """The presentation; each letter is linked to its edge in the cover and its entry of boundary(2).

    Examples
    --------
    >>> RelatorView("< a, b | a b a = b a b >").snapshot()
    Drawing('presentation', 172.13 x 68.4 pt)
    """

    def make_body(self, subject: Subject) -> str:
        return bodies.presentation(subject.cover.presentation)

    def make_drawing(self, subject: Subject) -> Drawing:
        p = subject.cover.presentation
        names = ", ".join(name_text(g, "unicode") for g in p.generators)
        words = [word.text("unicode") for word in p.boundary_words]
        lines = [typeset(f"generators {names or 'none'}")]
        lines += [typeset(f"{name_text(f'r{r}', 'unicode')} = {word}") for r, word in enumerate(words, 1)]
        return Drawing(lines_scene(lines, "presentation"))

    def make_latex(self, subject: Subject) -> str:
        return f"${subject.cover.presentation.latex()}$"
