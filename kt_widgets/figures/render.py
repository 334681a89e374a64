"""Renderers of a scene: our own SVG text, and matplotlib for PDF, PNG and a user's axes."""

from __future__ import annotations

from collections.abc import Iterable
from io import BytesIO
from typing import TYPE_CHECKING, Any, Literal
from xml.sax.saxutils import escape, quoteattr

from kt_widgets.errors import KtError
from kt_widgets.figures.lettering import extent, runs
from kt_widgets.figures.presets import (
    Preset,
    Style,
    arrow_outline,
    badge_radius,
    colour,
    dot_radius,
    label_size,
    preset_named,
    style,
)
from kt_widgets.figures.scene import Arrow, Badge, Dot, Item, Label, Point, Region, Scene, Stroke

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["draw", "number", "to_pdf", "to_png", "to_svg"]

_FONTS = "'STIX Two Text', STIXGeneral, STIX, 'Times New Roman', Tinos, 'Liberation Serif', serif"


def number(value: float) -> str:
    """A coordinate with at most two decimals and no needless zeros."""
    text = f"{value:.2f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text


# What a user's own settings of matplotlib must not change. TrueType letters stay text in a PDF.
_SETTINGS: dict[Any, Any] = {
    "figure.facecolor": "white",
    "savefig.facecolor": "auto",
    "savefig.bbox": None,
    "text.usetex": False,
    "text.hinting": "force_autohint",
    "pdf.fonttype": 42,
    "pdf.compression": 6,
    "path.simplify": False,
    "lines.scale_dashes": True,
}


def to_svg(scene: Scene, prefix: str = "") -> str:
    """The scene as SVG text: the same scene gives the same bytes.

    Each item is a ``<g>`` with its role as class, its place as ``data-place`` and an id that is `prefix`, the
    place, and ``.2``, ``.3``, ... where several items show one place. Ink is ``currentColor``, so that the
    picture follows the colour of the text around it.

    Parameters
    ----------
    scene : Scene
        The picture.
    prefix : str
        Put before every id, for pages that hold several pictures.

    Raises
    ------
    KtError
        If the scene names an unknown preset or role.

    Examples
    --------
    >>> from kt_widgets.figures.scene import Scene, Stroke
    >>> text = to_svg(Scene((Stroke("arc:1", ((0, 0), (10, 5)), "strand"),), 10, 5))
    >>> '<g id="arc:1" class="strand" data-place="arc:1">' in text
    True
    """
    preset = preset_named(scene.preset)
    width, height = number(scene.width), number(scene.height)
    lines = [
        f'<svg xmlns="http://www.w3.org/2000/svg" width="{width}pt" height="{height}pt" '
        f'viewBox="0 0 {width} {height}" role="img" font-family="{_FONTS}" '
        'style="max-width:100%;height:auto">'
    ]
    if scene.title:
        lines.append(f"<title>{escape(scene.title)}</title>")
    if scene.description:
        lines.append(f"<desc>{escape(scene.description)}</desc>")
    count: dict[str, int] = {}
    for item in scene.in_order():
        count[item.id] = count.get(item.id, 0) + 1
        name = prefix + item.id + ("" if count[item.id] == 1 else f".{count[item.id]}")
        lines.append(
            f"<g id={quoteattr(name)} class={quoteattr(item.role)} data-place={quoteattr(item.id)}>"
            f"{_svg_body(item, scene.height, preset)}</g>"
        )
    lines.append("</svg>")
    return "\n".join(lines) + "\n"


def _svg_body(item: Item, height: float, preset: Preset) -> str:
    look = style(item.role)
    match item:
        case Stroke():
            return (
                f'<path d="{_svg_path(item.points, height, item.closed)}" fill="none" '
                f"{_svg_line(look, item.colour_index, preset)}/>"
            )
        case Region():
            return (
                f'<path d="{_svg_path(item.points, height, True)}" stroke="none" '
                f'fill="{_svg_colour(item.colour_index)}" fill-opacity="{number(look.fill)}"/>'
            )
        case Arrow():
            outline = _svg_path(arrow_outline(item, preset), height, True)
            return (
                f'<path d="{outline}" stroke="none" fill="{_svg_colour(item.colour_index)}"{_faded(look)}/>'
            )
        case Dot():
            if item.role == "handle":
                fade, events = ' fill-opacity="0"', ' pointer-events="all"'
            else:
                fade, events = _faded(look), ""
            circle = _svg_circle(item.position, dot_radius(item, preset), height)
            return f'<circle {circle} fill="{_svg_colour(item.colour_index)}"{fade}{events}/>'
        case Badge():
            circle = _svg_circle(item.position, badge_radius(item, preset), height)
            line = _svg_line(look, item.colour_index, preset)
            text = _svg_text(item, "middle", height, preset)
            return f'<circle {circle} fill="none" {line}/>{text}'
        case Label():
            anchor = {"left": "start", "centre": "middle", "right": "end"}[item.anchor]
            return _svg_text(item, anchor, height, preset)


def _svg_path(points: Iterable[Point], height: float, closed: bool) -> str:
    steps = [f"{number(x)} {number(height - y)}" for x, y in points]
    return "M" + "L".join(steps) + ("Z" if closed else "")


def _svg_circle(centre: Point, radius: float, height: float) -> str:
    return f'cx="{number(centre[0])}" cy="{number(height - centre[1])}" r="{number(radius)}"'


def _svg_colour(index: int | None, letters: bool = False) -> str:
    return colour(index, letters) or "currentColor"


def _faded(look: Style) -> str:
    return f' fill-opacity="{number(1 - look.grey)}"' if look.grey else ""


def _svg_line(look: Style, index: int | None, preset: Preset) -> str:
    width = look.line * preset.line
    text = f'stroke="{_svg_colour(index)}" stroke-width="{number(width)}" stroke-linejoin="round"'
    if look.cap != "butt":
        text += f' stroke-linecap="{look.cap}"'
    if look.dash:
        text += f' stroke-dasharray="{" ".join(number(d * width) for d in look.dash)}"'
    if look.grey:
        text += f' stroke-opacity="{number(1 - look.grey)}"'
    return text


def _svg_text(item: Label | Badge, anchor: str, height: float, preset: Preset) -> str:
    look, size = style(item.role), label_size(item.role, preset)
    x, y = item.position
    base = height - y + extent(item.text, size).middle
    spans, line = [], 0.0
    for run in runs(item.text):
        attributes = ""
        if run.italic:
            attributes += ' font-style="italic"'
        if run.level:
            attributes += f' font-size="{number(run.scale * size)}"'
        if run.shift != line:
            attributes += f' dy="{number((line - run.shift) * size)}"'
            line = run.shift
        text = escape(run.text)
        spans.append(f"<tspan{attributes}>{text}</tspan>" if attributes else text)
    return (
        f'<text x="{number(x)}" y="{number(base)}" text-anchor="{anchor}" font-size="{number(size)}" '
        f'fill="{_svg_colour(item.colour_index, letters=True)}"{_faded(look)}>{"".join(spans)}</text>'
    )


def draw(scene: Scene, ax: Axes, scale: float = 1.0) -> None:
    """Draw the scene into matplotlib axes, in points as data coordinates, without frame and ticks.

    Parameters
    ----------
    scene : Scene
        The picture.
    ax : matplotlib.axes.Axes
        Limits are set to the scene's size; each artist's gid is the item's id.
    scale : float
        Points on paper for each point of the scene: line widths and letters are multiplied by it.
    """
    from matplotlib.lines import Line2D
    from matplotlib.patches import Circle, Polygon

    preset = preset_named(scene.preset)

    def letters(item: Label | Badge, anchor: Literal["left", "center", "right"]) -> None:
        size = label_size(item.role, preset)
        x, y = item.position
        ax.text(
            x,
            y - extent(item.text, size).middle,
            item.text,
            fontsize=size * scale,
            ha=anchor,
            va="baseline",
            color=colour(item.colour_index, letters=True) or "black",
            alpha=1 - style(item.role).grey,
            family="STIXGeneral",
            math_fontfamily="stix",
            gid=item.id,
            zorder=item.z + 2,
        )

    for item in scene.in_order():
        look, ink = style(item.role), colour(item.colour_index) or "black"
        width, order = look.line * preset.line * scale, item.z + 2
        match item:
            case Stroke():
                points = [*item.points, item.points[0]] if item.closed else item.points
                line = Line2D(
                    [x for x, _ in points],
                    [y for _, y in points],
                    color=ink,
                    linewidth=width,
                    alpha=1 - look.grey,
                    solid_capstyle="round" if look.cap == "round" else "butt",
                    solid_joinstyle="round",
                    gid=item.id,
                    zorder=order,
                )
                if look.dash:
                    # matplotlib multiplies dashes by the line width, as the presets mean them.
                    line.set_linestyle((0, look.dash))
                ax.add_line(line)
            case Region():
                area = Polygon(
                    item.points, closed=True, facecolor=ink, edgecolor="none", alpha=look.fill, zorder=order
                )
                area.set_gid(item.id)
                ax.add_patch(area)
            case Arrow():
                head = Polygon(
                    arrow_outline(item, preset),
                    closed=True,
                    facecolor=ink,
                    edgecolor="none",
                    alpha=1 - look.grey,
                    zorder=order,
                )
                head.set_gid(item.id)
                ax.add_patch(head)
            case Dot():
                if item.role != "handle":
                    disc = Circle(
                        item.position,
                        dot_radius(item, preset),
                        facecolor=ink,
                        edgecolor="none",
                        alpha=1 - look.grey,
                        zorder=order,
                    )
                    disc.set_gid(item.id)
                    ax.add_patch(disc)
            case Badge():
                ring = Circle(
                    item.position,
                    badge_radius(item, preset),
                    facecolor="none",
                    edgecolor=ink,
                    linewidth=width,
                    zorder=order,
                )
                ring.set_gid(item.id)
                ax.add_patch(ring)
                letters(item, "center")
            case Label():
                letters(item, "center" if item.anchor == "centre" else item.anchor)  # type: ignore[arg-type]
    ax.set_xlim(0, scene.width)
    ax.set_ylim(0, scene.height)
    ax.set_aspect("equal")
    ax.set_axis_off()


def _to_file(scene: Scene, kind: Literal["pdf", "png"], dpi: float, metadata: dict[str, None]) -> bytes:
    from matplotlib import rc_context
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    # Figure() with its own canvas, never pyplot: no global state.
    with rc_context(_SETTINGS):
        figure = Figure(figsize=(scene.width / 72, scene.height / 72))
        FigureCanvasAgg(figure)
        draw(scene, figure.add_axes((0, 0, 1, 1)))
        file = BytesIO()
        figure.savefig(file, format=kind, dpi=dpi, transparent=kind == "pdf", metadata=metadata)
    return file.getvalue()


def to_pdf(scene: Scene) -> bytes:
    """The scene as a PDF of one page of its size; no date is written, so the bytes do not change."""
    return _to_file(scene, "pdf", 72, {"CreationDate": None, "Creator": None, "Producer": None})


def to_png(scene: Scene, dpi: float = 200) -> bytes:
    """The scene as a PNG on white."""
    if not 10 <= dpi <= 2400:
        raise KtError(f"a picture cannot have {dpi} dots per inch", accepted="10 to 2400")
    return _to_file(scene, "png", dpi, {"Software": None})
