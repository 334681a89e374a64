"""The scene: what a picture consists of, as plain data in points, before anything is drawn."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from typing import TypeAlias

from kt_widgets.errors import KtError

__all__ = ["Arrow", "Badge", "Dot", "Item", "Label", "Point", "Region", "Scene", "Stroke", "path"]

Point: TypeAlias = tuple[float, float]


def _rounded(point: Iterable[float], where: str) -> Point:
    x, y = (float(c) for c in point)
    if not (math.isfinite(x) and math.isfinite(y)):
        raise KtError(
            "a coordinate of the scene is not finite", where=where, accepted="finite numbers of points"
        )
    # Adding 0.0 turns -0.0 into 0.0, which prints the same everywhere.
    return round(x, 2) + 0.0, round(y, 2) + 0.0


def path(points: Iterable[Iterable[float]], where: str = "", least: int = 2) -> tuple[Point, ...]:
    """Points given in any form (pairs, rows of an array) as a tuple of pairs, rounded to 0.01.

    Raises
    ------
    KtError
        If there are fewer than `least` points, or one is not finite.

    Examples
    --------
    >>> path([[0, 0.001], [1, 2]])
    ((0.0, 0.0), (1.0, 2.0))
    """
    found = tuple(_rounded(point, where) for point in points)
    if len(found) < least:
        raise KtError(
            f"a path of {len(found)} points is too short", where=where, accepted=f"{least} or more points"
        )
    return found


@dataclass(frozen=True, slots=True)
class Stroke:
    """A line along `points`; `id` is the text form of the place shown, such as ``arc:3``.

    The role says how it is drawn (see `kt_widgets.figures.presets.style`), `colour_index` counts from 0 in
    the palette, where None means ink. Coordinates are points (1/72 inch), y upwards; every item rounds them
    to 0.01.

    Examples
    --------
    >>> Stroke("arc:1", ((0, 0), (10, 0.004)), "strand").points
    ((0.0, 0.0), (10.0, 0.0))
    """

    id: str
    points: tuple[Point, ...]
    role: str
    z: int = 0
    closed: bool = False
    colour_index: int | None = None

    def __post_init__(self) -> None:
        object.__setattr__(self, "points", path(self.points, self.id))


@dataclass(frozen=True, slots=True)
class Region:
    """A filled area bounded by `points`."""

    id: str
    points: tuple[Point, ...]
    role: str
    z: int = 0
    colour_index: int | None = None

    def __post_init__(self) -> None:
        object.__setattr__(self, "points", path(self.points, self.id, least=3))


@dataclass(frozen=True, slots=True)
class Arrow:
    """An arrow head with its tip at `tip`, pointing along `direction`; its size comes from its role."""

    id: str
    tip: Point
    direction: Point
    role: str
    z: int = 0
    colour_index: int | None = None

    def __post_init__(self) -> None:
        dx, dy = self.direction
        length = math.hypot(dx, dy)
        if not (math.isfinite(length) and length > 0):
            raise KtError("an arrow has no direction", where=self.id, accepted="a finite vector other than 0")
        # Unit vectors need more digits than points do: at a head of 10 points 0.0001 is far below 0.01.
        object.__setattr__(self, "direction", (round(dx / length, 4) + 0.0, round(dy / length, 4) + 0.0))
        object.__setattr__(self, "tip", _rounded(self.tip, self.id))


@dataclass(frozen=True, slots=True)
class Label:
    """A line of text at `position`: plain, or with mathematics between dollars, such as ``$t^{-1} e$``.

    `anchor` says which point of the text stands at `position`: ``"left"``, ``"centre"`` or ``"right"``; in
    height it is always the middle of the letters.
    """

    id: str
    text: str
    position: Point
    role: str = "label"
    anchor: str = "centre"
    z: int = 0
    colour_index: int | None = None

    def __post_init__(self) -> None:
        if self.anchor not in ("left", "centre", "right"):
            raise KtError(
                f"a label has no anchor {self.anchor!r}",
                where=self.id,
                accepted="'left', 'centre' or 'right'",
            )
        object.__setattr__(self, "position", _rounded(self.position, self.id))


@dataclass(frozen=True, slots=True)
class Dot:
    """A filled disc at `position`; its radius is given, or comes from its role where it is 0."""

    id: str
    position: Point
    role: str
    radius: float = 0.0
    z: int = 0
    colour_index: int | None = None

    def __post_init__(self) -> None:
        object.__setattr__(self, "position", _rounded(self.position, self.id))
        object.__setattr__(self, "radius", round(float(self.radius), 2))


@dataclass(frozen=True, slots=True)
class Badge:
    """A short text in a disc at `position`, such as the number of a step."""

    id: str
    text: str
    position: Point
    role: str = "badge"
    z: int = 0
    colour_index: int | None = None

    def __post_init__(self) -> None:
        object.__setattr__(self, "position", _rounded(self.position, self.id))


Item: TypeAlias = Stroke | Region | Arrow | Label | Dot | Badge


@dataclass(frozen=True)
class Scene:
    """A picture as data: its items, its size in points, the preset that it was laid out for, and its words.

    Parameters
    ----------
    items : tuple of Item
        Drawn by ascending `z`; items of equal `z` in the order given.
    width, height : float
        The size in points; (0, 0) is the lower left corner.
    title, description : str
        What a screen reader says.
    preset : str
        The name of the preset whose line widths and letter sizes the layout reckoned with.

    Raises
    ------
    KtError
        If the size is not positive and finite.

    Examples
    --------
    >>> scene = Scene((Stroke("arc:1", ((0, 0), (10, 5)), "strand"),), 10, 5, title="a line")
    >>> scene
    Scene(1 item, 10 x 5 pt, 'a line')
    >>> [item.role for item in scene.at("arc:1")]
    ['strand']
    """

    items: tuple[Item, ...]
    width: float
    height: float
    title: str = ""
    description: str = ""
    preset: str = "screen"

    def __post_init__(self) -> None:
        size = _rounded((self.width, self.height), "the size of the scene")
        if min(size) <= 0:
            raise KtError(
                f"a scene cannot be {self.width} by {self.height} points",
                accepted="a positive width and height",
            )
        object.__setattr__(self, "width", size[0])
        object.__setattr__(self, "height", size[1])
        object.__setattr__(self, "items", tuple(self.items))

    def __repr__(self) -> str:
        count = f"{len(self.items)} item" + ("" if len(self.items) == 1 else "s")
        return f"Scene({count}, {self.width:g} x {self.height:g} pt, {self.title!r})"

    def in_order(self) -> Iterator[Item]:
        """The items from the lowest to the topmost."""
        return iter(sorted(self.items, key=lambda item: item.z))

    def at(self, place: str) -> tuple[Item, ...]:
        """The items that show one place, given by its text form such as ``arc:3``."""
        return tuple(item for item in self.items if item.id == place)
