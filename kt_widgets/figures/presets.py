"""How scenes look: presets (line widths, letter sizes, page), the palette, and the style of each role."""

from __future__ import annotations

from dataclasses import dataclass

from kt_widgets.errors import KtError
from kt_widgets.figures.lettering import extent
from kt_widgets.figures.scene import Arrow, Badge, Dot, Label, Point

__all__ = [
    "INK",
    "PALETTE",
    "PRESETS",
    "STYLES",
    "Preset",
    "Style",
    "arrow_outline",
    "badge_radius",
    "colour",
    "dot_radius",
    "label_box",
    "label_size",
    "preset_named",
    "style",
]

# M. Okabe and K. Ito, Color Universal Design (2008): they differ for every common kind of colour vision.
PALETTE = ("#0072B2", "#D55E00", "#009E73", "#CC79A7", "#E69F00", "#56B4E9", "#000000")
# Orange and sky blue are too pale for letters.
_STROKES_ONLY = frozenset({4, 5})
INK = "#000000"


@dataclass(frozen=True, slots=True)
class Preset:
    """Sizes for one use, in points: `width` of the whole column, `side` of a diagram, `line`, letters."""

    name: str
    width: float
    side: float
    line: float
    label: float
    formula: float


PRESETS = {
    "paper": Preset("paper", width=241.0, side=170.0, line=1.3, label=8.0, formula=9.0),
    "talk": Preset("talk", width=960.0, side=440.0, line=3.2, label=16.0, formula=26.0),
    "screen": Preset("screen", width=640.0, side=380.0, line=2.2, label=13.0, formula=15.0),
}


def preset_named(name: str) -> Preset:
    """The preset of that name.

    Raises
    ------
    KtError
        If there is none.

    Examples
    --------
    >>> preset_named("paper").label
    8.0
    """
    try:
        return PRESETS[name]
    except (KeyError, TypeError):
        raise KtError(f"there is no preset {name!r}", accepted=", ".join(PRESETS)) from None


@dataclass(frozen=True, slots=True)
class Style:
    """The style of a role: widths in line widths, letters in label sizes; `grey` 0 is ink, 1 the paper."""

    line: float = 1.0
    letters: float = 1.0
    grey: float = 0.0
    fill: float = 0.0
    dash: tuple[float, ...] = ()
    cap: str = "butt"
    formula: bool = False


STYLES = {
    # strokes
    "strand": Style(),
    "edge": Style(line=0.8),
    "trace": Style(line=0.9, cap="round"),
    "meridian": Style(line=0.6),
    "leader": Style(line=0.35, grey=0.45),
    "rail": Style(line=0.45, grey=0.35),
    "dropline": Style(line=0.3, grey=0.65, dash=(3.0, 4.0)),
    # letters
    "label": Style(),
    "number": Style(letters=0.75, grey=0.35),
    "caption": Style(letters=1.0),
    "formula": Style(formula=True),
    "badge": Style(line=0.5, letters=0.75),
    # dots, in line widths across
    "vertex": Style(line=3.2),
    "more": Style(line=1.0, grey=0.45),
    # areas; a handle is not seen until it has the focus, but can always be hit
    "cell": Style(fill=0.16),
    "face": Style(fill=0.10),
    "handle": Style(fill=0.0),
}


def style(role: str) -> Style:
    """The style of a role.

    Raises
    ------
    KtError
        If no role has that name.

    Examples
    --------
    >>> style("dropline").dash
    (3.0, 4.0)
    """
    try:
        return STYLES[role]
    except KeyError:
        raise KtError(f"no item of a scene has the role {role!r}", accepted=", ".join(STYLES)) from None


def colour(index: int | None, letters: bool = False) -> str | None:
    """The palette's colour of that index, counted round; None means ink (pale colours too, for letters).

    Examples
    --------
    >>> colour(1), colour(8), colour(4, letters=True)
    ('#D55E00', '#D55E00', None)
    """
    if index is None or (letters and index % len(PALETTE) in _STROKES_ONLY):
        return None
    chosen = PALETTE[index % len(PALETTE)]
    return None if chosen == INK else chosen


def label_size(role: str, preset: Preset) -> float:
    """The size of the letters of a label or badge, in points."""
    look = style(role)
    return preset.formula if look.formula else round(look.letters * preset.label, 2)


def label_box(label: Label, preset: Preset) -> tuple[float, float, float, float]:
    """The box (left, lower, right, upper) that a label's letters fill.

    Examples
    --------
    >>> label_box(Label("arc:1", "$a$", (100, 50)), preset_named("paper"))
    (97.92, 48.12, 102.08, 51.88)
    """
    size = extent(label.text, label_size(label.role, preset))
    x, y = label.position
    left = x - {"left": 0.0, "centre": 0.5, "right": 1.0}[label.anchor] * size.width
    half = (size.above + size.below) / 2
    return round(left, 2), round(y - half, 2), round(left + size.width, 2), round(y + half, 2)


def dot_radius(dot: Dot, preset: Preset) -> float:
    """The radius of a dot in points."""
    return dot.radius or round(style(dot.role).line * preset.line / 2, 2)


def badge_radius(badge: Badge, preset: Preset) -> float:
    """The radius of a badge's disc in points: round its letters with a little air."""
    size = extent(badge.text, label_size(badge.role, preset))
    return round(max(size.width, size.above + size.below) / 2 + 0.18 * preset.label, 2)


def arrow_outline(arrow: Arrow, preset: Preset) -> tuple[Point, Point, Point, Point]:
    """The four corners of an arrow head: tip, left barb, notch, right barb."""
    line = preset.line * style(arrow.role).line
    length, half, notch = 3.4 * line + 1.6, 1.5 * line + 0.9, 0.28
    (x, y), (dx, dy) = arrow.tip, arrow.direction
    back = (x - length * dx, y - length * dy)
    return (
        (x, y),
        (round(back[0] - half * dy, 2), round(back[1] + half * dx, 2)),
        (round(back[0] + notch * length * dx, 2), round(back[1] + notch * length * dy, 2)),
        (round(back[0] + half * dy, 2), round(back[1] - half * dx, 2)),
    )
