"""`View`: the base of every linked view, a body of HTML with its links and steps, and static fallbacks."""

from __future__ import annotations

import logging
from base64 import b64encode
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from importlib.resources import files
from textwrap import wrap
from typing import Any

import anywidget
import ipywidgets
import traitlets

from kt_widgets.errors import KtError
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.tables import lines_scene
from kt_widgets.widgets.subject import Subject, Viewable

__all__ = ["SHARED", "View", "bundle", "drawn_or_said", "linked", "reporting"]

SHARED = ("focus", "selected", "step")
"""The traits that linked views have in common; the browser keeps them equal, without the kernel."""

_STATIC = files("kt_widgets.figures") / "static"
_ERROR = '<p class="kt-error" role="alert" data-bind="error" hidden></p>'


def unexpected(error: Exception) -> str:
    """What is shown under a widget for an error that is not the user's; the traceback goes to the log."""
    logging.getLogger("kt_widgets").exception("error in a widget")
    return f"{type(error).__name__}: {error}"


@contextmanager
def reporting(view: View) -> Iterator[None]:
    """Show an error raised in a callback under the view instead of losing it; clear it if there is none.

    Either way the view has `answered`: the browser waits for it after a line was sent.
    """
    try:
        yield
    except KtError as error:
        view.error = str(error)
    except Exception as error:
        view.error = unexpected(error)
    else:
        view.error = ""
    view.answered += 1


def bundle(
    widget: ipywidgets.DOMWidget, drawing: Drawing, latex: str
) -> tuple[dict[str, Any], dict[str, Any]]:
    """The live view beside fallbacks for viewers that run no scripts: PNG, SVG, LaTeX if any, and text."""
    data: dict[str, Any] = {
        "text/plain": repr(widget),
        "image/svg+xml": drawing.svg(),
        # Saved with every output, so no finer than a screen needs; black ink wants a light ground.
        "image/png": b64encode(drawing.png(dpi=120)).decode(),
        "application/vnd.jupyter.widget-view+json": {
            "version_major": 2,
            "version_minor": 0,
            "model_id": widget.model_id,
        },
    }
    if latex:
        data["text/latex"] = latex
    return data, {"image/png": {"width": round(drawing.scene.width * 4 / 3), "needs_background": "light"}}


def drawn_or_said(draw: Callable[[], Drawing]) -> Drawing:
    """The picture, or the words that say why there is none: the other views are worth having without it."""
    try:
        return draw()
    except KtError as error:
        return Drawing(lines_scene(wrap(str(error).replace("$", ""), 70), "no picture"))


class View(anywidget.AnyWidget):
    """A linked view of a subject: a diagram, a presentation or a cover.

    Pointing at a part sets `focus` in the browser and lights up what belongs to it; a click or Enter sets
    `selected`, which Python may observe. `step` is a position among `steps`. Subclasses say how a subject is
    shown: `make_body`, `make_drawing` and, for formulas, `make_latex`.

    Parameters
    ----------
    value : Diagram, Presentation, Cover or str

    Raises
    ------
    KtError
        If the value cannot be shown.
    """

    # Strings: a path would make anywidget watch the file and keep every closed widget alive.
    _esm = (_STATIC / "view.js").read_text("utf-8")
    _css = (_STATIC / "view.css").read_text("utf-8")

    body = traitlets.Unicode().tag(sync=True)
    links: Any = traitlets.Dict().tag(sync=True)
    steps: Any = traitlets.List().tag(sync=True)
    focus = traitlets.Unicode().tag(sync=True)
    selected = traitlets.Unicode().tag(sync=True)
    step = traitlets.Int(0).tag(sync=True)
    error = traitlets.Unicode().tag(sync=True)
    answered = traitlets.Int(0).tag(sync=True)

    def __init__(self, value: Viewable, **traits: Any) -> None:
        # First of all: observers of traits given here look at it.
        self.subject = Subject.of(value)
        super().__init__(**traits)
        self.show(self.subject)

    def show(self, value: Viewable) -> None:
        """Show another subject; nothing changes if that fails."""
        subject = Subject.of(value)
        self.take(subject, self.make_body(subject))

    def take(self, subject: Subject, body: str) -> None:
        """Show a subject whose body has been made."""
        links, steps = subject.links, subject.steps
        self.subject = subject
        with self.hold_sync():
            self.body = self.whole(body)
            self.links, self.steps = links, steps
            self.step, self.focus, self.selected, self.error = 0, "", "", ""

    @staticmethod
    def whole(body: str) -> str:
        """A body with the place for an error under it."""
        return body + _ERROR

    def make_body(self, subject: Subject) -> str:
        """The HTML of a subject."""
        raise NotImplementedError

    def make_drawing(self, subject: Subject) -> Drawing:
        """The picture that stands for the view where no script runs."""
        raise NotImplementedError

    def make_latex(self, subject: Subject) -> str:
        """The LaTeX that stands for the view, with its dollars; empty for pictures.

        Viewers prefer LaTeX to an image, so a view that is a picture must not give any.
        """
        return ""

    def snapshot(self) -> Drawing:
        """A plain picture of the view, for viewers that run no scripts."""
        return self.make_drawing(self.subject)

    def __repr__(self) -> str:
        # No address: saved notebooks are compared.
        return f"{type(self).__name__}({self.subject.diagram or self.subject.cover.presentation!r})"

    def _repr_mimebundle_(self, **kwargs: Any) -> tuple[dict[str, Any], dict[str, Any]]:
        return bundle(self, self.snapshot(), self.make_latex(self.subject))

    def close(self) -> None:
        """Close the view, its layout too, and let go of all that observes it."""
        self.layout.close()
        super().close()
        self.unobserve_all()


def linked(views: Sequence[View]) -> list[ipywidgets.Widget]:
    """Link views of one subject: what is lit, selected and read in one is so in all, without the kernel.

    Returns
    -------
    list of ipywidgets.Widget
        The links; closing them takes the views apart again.
    """
    first, *others = views
    return [ipywidgets.jslink((first, name), (other, name)) for name in SHARED for other in others]
