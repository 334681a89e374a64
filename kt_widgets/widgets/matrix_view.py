"""`MatrixView`: a boundary matrix whose entries are linked to their letters, edges and crossings."""

from __future__ import annotations

from typing import Any

from kt_widgets.figures import bodies
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.tables import lines_scene, table_scene, typeset
from kt_widgets.text.printing import matrix_too_large, name_text
from kt_widgets.widgets.subject import Subject, Viewable
from kt_widgets.widgets.view import View

__all__ = ["MatrixView"]


class MatrixView(View):
    """boundary(n) of the chain complex of the cover, n = 1 or 2.

    Examples
    --------
    >>> view = MatrixView("< t, x | t x t^-1 = x^2 >")
    >>> view.links["entry:2:1:1"]
    ['letter:1:1', 'letter:1:3', 'edge:t:0', 'cell:1:0', 'relator:1', 'generator:t']
    """

    def __init__(self, value: Viewable, n: int = 2, **traits: Any) -> None:
        self.n = n
        super().__init__(value, **traits)

    def make_body(self, subject: Subject) -> str:
        return bodies.matrix(subject.cover.chains(), self.n)

    def make_drawing(self, subject: Subject) -> Drawing:
        c = subject.cover.chains()
        matrix = c.boundary(self.n)
        title = f"boundary {self.n}"
        if matrix_too_large(*matrix.shape):
            rows, columns = matrix.shape
            return Drawing(lines_scene([f"{title}: {rows} by {columns}, too large for a picture"], title))
        entries = [[typeset(f.text("unicode")) for f in row] for row in matrix.rows]
        edges = [typeset(name_text(g, "unicode")) for g in c.generators]
        cells = [f"$r_{{{j}}}$" for j in range(1, len(c.relators) + 1)]
        left, above = (["$e$"], edges) if self.n == 1 else (edges, cells)
        return Drawing(table_scene(entries, left, above, title))

    def make_latex(self, subject: Subject) -> str:
        matrix = subject.cover.chains().boundary(self.n)
        return "" if matrix_too_large(*matrix.shape) else rf"$\partial_{self.n} = {matrix.latex()}$"
