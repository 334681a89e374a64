"""`HomologyView`: the homology of the cover over a ring that is chosen in the view."""

from __future__ import annotations

from typing import Any

import traitlets

from kt_widgets.algebra.flint_rings import RingName, ring
from kt_widgets.errors import AlgebraError
from kt_widgets.figures import bodies
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.tables import lines_scene, typeset
from kt_widgets.widgets.subject import Subject
from kt_widgets.widgets.view import View, reporting

__all__ = ["HomologyView"]

_OTHER = (
    '<form data-set="prime"><label>or F<sub>p</sub>[t, 1/t] with p = '
    '<input type="text" inputmode="numeric" size="5"></label></form>'
)


class HomologyView(View):
    """H_0, H_1, H_2 and the Alexander ideals; over a field the cyclic summands with their generators.

    `ring` is "Z", "Q" or a prime number as a text. Those of `rings` are there without the kernel.

    Examples
    --------
    >>> view = HomologyView("< a, b | a b a = b a b >")
    >>> view.ring = "11"
    >>> view.rings[-1], view.error
    (11, '')
    """

    ring = traitlets.Unicode("Z").tag(sync=True)
    prime = traitlets.Unicode().tag(sync=True)

    def __init__(self, value: Any, rings: tuple[RingName, ...] = ("Z", "Q", 2, 3, 5), **traits: Any) -> None:
        self.rings = rings
        super().__init__(value, **traits)

    def make_body(self, subject: Subject) -> str:
        return bodies.homology(subject.cover, self.rings, _OTHER)

    def make_drawing(self, subject: Subject) -> Drawing:
        found = bodies.facts(subject.cover, self._chosen())
        lines = [typeset(f"{f.name}: {f.value} {f.note}".rstrip()) for f in found]
        return Drawing(lines_scene(lines, "homology"))

    def make_latex(self, subject: Subject) -> str:
        return f"${bodies.facts_latex(bodies.facts(subject.cover, self._chosen()))}$"

    def _chosen(self) -> RingName:
        return _ring_named(self.ring)

    @traitlets.validate("ring")
    def _ring_chosen(self, proposal: Any) -> str:
        name = _ring_named(proposal["value"])
        if name not in self.rings:
            rings = (*self.rings, name)
            self.rings, self.body = rings, self.whole(bodies.homology(self.subject.cover, rings, _OTHER))
        return str(name)

    @traitlets.observe("prime")
    def _prime_given(self, change: Any) -> None:
        with reporting(self):
            self.ring = change["new"] or self.ring


def _ring_named(text: str) -> RingName:
    """The ring "Z", "Q" or "p", a prime number of at most ten digits; `AlgebraError` if there is none."""
    name = text.strip()
    if name.isascii() and name.isdigit() and len(name) <= 10:
        return ring(int(name)).name
    if name not in ("Z", "Q"):
        raise AlgebraError(f"{name!r} is no ring of coefficients", accepted="Z, Q or a prime number")
    return name
