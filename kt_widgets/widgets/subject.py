"""`Subject`: what a set of linked views shows, a diagram or a presentation with its cover."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from functools import cached_property
from typing import TypeAlias

from kt_widgets.covers.cover import Cover
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.errors import KtError
from kt_widgets.figures.links import links
from kt_widgets.figures.steps import Step, steps
from kt_widgets.groups.presentations import Presentation

__all__ = ["Subject", "Viewable"]


@dataclass(frozen=True)
class Subject:
    """A cover, the diagram that it comes from if there is one, and the line of text that gives it.

    Examples
    --------
    >>> Subject.of("< a, b | a b a = b a b >").cover.order()
    LaurentPolynomial('1 - t + t^2')
    >>> Subject.of("braid 1 1 1").diagram
    Diagram(3 crossings, 1 component, 'braid 1 1 1')
    """

    cover: Cover
    diagram: Diagram | None = None
    typed: str = field(default="", compare=False)

    @classmethod
    def of(cls, value: Viewable) -> Subject:
        """The subject that a value, or a line of text, stands for.

        Raises
        ------
        KtError
            If the text is neither a diagram nor a presentation, or there is no unique infinite cyclic cover.
        """
        match value:
            case Subject():
                return value
            case Diagram():
                return cls(value.cover(), value)
            case Cover():
                return cls(value)
            case Presentation():
                return cls(Cover(value))
            case str():
                text = value.strip()
                presented = text.startswith(("<", "⟨", "\\langle"))
                read = Presentation.parse(text) if presented else Diagram.parse(text)
                return replace(cls.of(read), typed=text)
        raise KtError(
            f"an object of type {type(value).__name__} cannot be shown in linked views",
            accepted="a Diagram, a Presentation, a Cover, or a line of text",
        )

    @property
    def text(self) -> str:
        """The line that was or could be typed to get this subject, its weights apart."""
        return self.typed or (self.diagram.source if self.diagram else str(self.cover.presentation))

    @property
    def python(self) -> str:
        """The Python that makes the cover."""
        if self.diagram:
            return f"kt.Diagram.parse({self.text!r}).cover()"
        return f"kt.Cover(kt.Presentation.parse({self.text!r}), {self.cover.weights})"

    @cached_property
    def links(self) -> dict[str, list[str]]:
        """What belongs together, see `kt_widgets.figures.links`."""
        return links(self.cover, self.diagram)

    @cached_property
    def steps(self) -> list[Step]:
        """The letters in order, see `kt_widgets.figures.steps`."""
        return steps(self.cover)


Viewable: TypeAlias = Subject | Diagram | Cover | Presentation | str
