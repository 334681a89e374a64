"""A scene as TikZ text, written from the scene itself: no TeX is needed to make it."""

from __future__ import annotations

from collections.abc import Iterable

from kt_widgets.figures.lettering import extent
from kt_widgets.figures.presets import (
    Preset,
    arrow_outline,
    badge_radius,
    colour,
    dot_radius,
    label_size,
    preset_named,
    style,
)
from kt_widgets.figures.render import number
from kt_widgets.figures.scene import Arrow, Badge, Dot, Item, Label, Point, Region, Scene, Stroke

__all__ = ["to_tikz"]


def to_tikz(scene: Scene) -> str:
    r"""The scene as a ``tikzpicture`` that needs only ``\usepackage{tikz}``; sizes are in points.

    Examples
    --------
    >>> from kt_widgets.figures.scene import Scene, Stroke
    >>> print(to_tikz(Scene((Stroke("arc:1", ((0, 0), (10, 5)), "strand"),), 10, 5)))
    % scene of 10 by 5 points
    \begin{tikzpicture}[x=1bp, y=1bp, line join=round]
    \useasboundingbox (0,0) rectangle (10,5);
    \draw[line width=2.2bp] (0,0) -- (10,5); % arc:1
    \end{tikzpicture}
    <BLANKLINE>
    """
    preset = preset_named(scene.preset)
    indices = sorted({i.colour_index for i in scene.items if colour(i.colour_index) is not None} - {None})  # type: ignore[type-var]
    names = {colour(index): f"scenecolour{'ABCDEF'[position % 6]}" for position, index in enumerate(indices)}
    lines = [f"% scene of {number(scene.width)} by {number(scene.height)} points"]
    lines += [rf"\definecolor{{{name}}}{{HTML}}{{{(code or '#')[1:]}}}" for code, name in names.items()]
    lines.append(r"\begin{tikzpicture}[x=1bp, y=1bp, line join=round]")
    lines.append(rf"\useasboundingbox (0,0) rectangle ({number(scene.width)},{number(scene.height)});")
    for item in scene.in_order():
        lines += [f"{command} % {item.id}" for command in _tikz_commands(item, preset, names)]
    lines.append(r"\end{tikzpicture}")
    return "\n".join(lines) + "\n"


def _tikz_commands(item: Item, preset: Preset, names: dict[str | None, str]) -> list[str]:
    look = style(item.role)
    ink = names.get(colour(item.colour_index), "")
    fade = f"opacity={number(1 - look.grey)}" if look.grey else ""
    width = f"line width={number(look.line * preset.line)}bp"

    def options(*parts: str) -> str:
        return "[" + ", ".join(part for part in parts if part) + "]"

    def place(point: Point) -> str:
        return f"({number(point[0])},{number(point[1])})"

    def circle(centre: Point, radius: float) -> str:
        return f"{place(centre)} circle[radius={number(radius)}bp]"

    def outline(points: Iterable[Point], closed: bool) -> str:
        return " -- ".join(map(place, points)) + (" -- cycle" if closed else "")

    def node(item: Label | Badge, anchor: str) -> str:
        size = label_size(item.role, preset)
        x, y = item.position
        base = place((x, y - extent(item.text, size).middle))
        letters = names.get(colour(item.colour_index, letters=True), "")
        font = rf"font=\fontsize{{{number(size)}bp}}{{{number(1.2 * size)}bp}}\selectfont"
        look_of_it = options(letters, fade, "inner sep=0", f"anchor={anchor}", font)
        return rf"\node{look_of_it} at {base} {{{_tex(item.text)}}};"

    match item:
        case Stroke():
            dash = ""
            if look.dash:
                on, off = (number(d * look.line * preset.line) for d in look.dash)
                dash = f"dash pattern=on {on}bp off {off}bp"
            cap = "line cap=round" if look.cap == "round" else ""
            return [rf"\draw{options(ink, width, cap, dash, fade)} {outline(item.points, item.closed)};"]
        case Region():
            return [
                rf"\fill{options(ink, f'fill opacity={number(look.fill)}')} {outline(item.points, True)};"
            ]
        case Arrow():
            return [rf"\fill{options(ink, fade)} {outline(arrow_outline(item, preset), True)};"]
        case Dot():
            if item.role == "handle":
                return []
            return [rf"\fill{options(ink, fade)} {circle(item.position, dot_radius(item, preset))};"]
        case Badge():
            ring = rf"\draw{options(ink, width)} {circle(item.position, badge_radius(item, preset))};"
            return [ring, node(item, "base")]
        case Label():
            return [node(item, {"left": "base west", "centre": "base", "right": "base east"}[item.anchor])]


def _tex(text: str) -> str:
    """A label's text for TeX: signs that TeX reads as commands are escaped outside mathematics."""
    parts = text.replace("−", "$-$" if "$" not in text else "-").split("$")
    for position in range(0, len(parts), 2):
        for sign in "\\{}%#&_^~":
            parts[position] = parts[position].replace(sign, "\\" + sign if sign in "{}%#&_" else " ")
    return "$".join(parts)
