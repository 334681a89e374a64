"""Pictures in IPython: registered by type name, so that no room below knows of pictures, and made when shown.

`kt_widgets.__init__` calls `register` when IPython is loaded; nothing else is loaded by that.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from kt_widgets import figures

__all__ = ["PICTURES", "picture_of", "register"]

PICTURES: dict[tuple[str, str], Callable[[Any], Any]] = {
    ("kt_widgets.diagrams.diagram", "Diagram"): lambda d: figures.diagram(d, preset="screen"),
    ("kt_widgets.covers.cover", "Cover"): lambda x: figures.cover(x, preset="screen"),
}
"""By module and name of a type, the figure that shows its values."""


def picture_of(value: Any, include: Any = None, exclude: Any = None) -> tuple[dict[str, Any], dict[str, Any]]:
    """A value's picture as SVG and PNG; its text stays its own.

    Examples
    --------
    >>> from kt_widgets.diagrams.diagram import Diagram
    >>> data, _ = picture_of(Diagram.from_braid([1, 1, 1]))
    >>> sorted(data)
    ['image/png', 'image/svg+xml']
    """
    draw = PICTURES[type(value).__module__, type(value).__name__]
    data, metadata = draw(value)._repr_mimebundle_()
    return {kind: content for kind, content in data.items() if kind != "text/plain"}, metadata


def register() -> None:
    """Tell the running IPython shell, if there is one, how values are shown."""
    from IPython import get_ipython

    shell = get_ipython()
    if shell is not None:
        formatter = shell.display_formatter.mimebundle_formatter
        for module, name in PICTURES:
            formatter.for_type_by_name(module, name, picture_of)
