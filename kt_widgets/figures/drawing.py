"""`Drawing`: what every figure function returns, a scene that can be shown and saved."""

from __future__ import annotations

from base64 import b64encode
from dataclasses import dataclass
from os import PathLike
from pathlib import Path
from typing import Any

from kt_widgets.errors import KtError
from kt_widgets.figures.render import to_pdf, to_png, to_svg
from kt_widgets.figures.scene import Scene
from kt_widgets.figures.tikz import to_tikz

__all__ = ["Drawing"]


@dataclass(frozen=True, repr=False)
class Drawing:
    """A picture: its `scene`, shown in a notebook as SVG and PNG, saved by the ending of a file's name.

    The same scene always gives the same bytes.

    Examples
    --------
    >>> from kt_widgets.figures.scene import Scene, Stroke
    >>> picture = Drawing(Scene((Stroke("arc:1", ((0, 0), (10, 5)), "strand"),), 10, 5, title="a line"))
    >>> picture
    Drawing('a line', 10 x 5 pt)
    >>> picture.svg() == picture.svg()
    True
    """

    scene: Scene

    def __repr__(self) -> str:
        return f"Drawing({self.scene.title!r}, {self.scene.width:g} x {self.scene.height:g} pt)"

    def svg(self, prefix: str = "") -> str:
        """The picture as SVG text; `prefix` is put before every id."""
        return to_svg(self.scene, prefix)

    def pdf(self) -> bytes:
        """The picture as a PDF."""
        return to_pdf(self.scene)

    def png(self, dpi: float = 200) -> bytes:
        """The picture as a PNG on white."""
        return to_png(self.scene, dpi)

    def tikz(self) -> str:
        """The picture as a ``tikzpicture``."""
        return to_tikz(self.scene)

    def save(self, path: str | PathLike[str]) -> Path:
        """Write the picture to a file whose name ends in ``.svg``, ``.pdf``, ``.png`` or ``.tikz``.

        Raises
        ------
        KtError
            If the name has another ending.
        """
        target = Path(path)
        match target.suffix.lower():
            case ".svg":
                data = self.svg().encode()
            case ".tikz":
                data = self.tikz().encode()
            case ".pdf":
                data = self.pdf()
            case ".png":
                data = self.png()
            case other:
                raise KtError(
                    f"a picture cannot be saved as {other}" if other else "the file's name has no ending",
                    where=str(path),
                    accepted=".svg, .pdf, .png or .tikz",
                )
        target.write_bytes(data)
        return target

    def _repr_mimebundle_(
        self, include: Any = None, exclude: Any = None
    ) -> tuple[dict[str, str], dict[str, Any]]:
        data = {
            "text/plain": repr(self),
            "image/svg+xml": self.svg(),
            "image/png": b64encode(self.png()).decode(),
        }
        # A browser's pixel is 1/96 inch; ink is black, so a dark page must lend the PNG a light ground.
        size = {"width": round(self.scene.width * 96 / 72), "height": round(self.scene.height * 96 / 72)}
        return data, {"image/png": {**size, "needs_background": "light"}}
