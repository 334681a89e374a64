"""Arranging: items moved, and scenes stacked into one."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from kt_widgets.errors import KtError
from kt_widgets.figures.presets import preset_named
from kt_widgets.figures.scene import Arrow, Item, Region, Scene, Stroke

__all__ = ["moved", "stacked"]


def moved(item: Item, right: float, up: float) -> Item:
    """The item at another position.

    Examples
    --------
    >>> from kt_widgets.figures.scene import Dot
    >>> moved(Dot("vertex:0", (1, 2), "vertex"), 10, 20).position
    (11.0, 22.0)
    """
    match item:
        case Stroke() | Region():
            return replace(item, points=tuple((x + right, y + up) for x, y in item.points))
        case Arrow():
            return replace(item, tip=(item.tip[0] + right, item.tip[1] + up))
        case _:
            return replace(item, position=(item.position[0] + right, item.position[1] + up))


def stacked(scenes: Sequence[Scene], title: str = "") -> Scene:
    """Scenes of one preset, the first uppermost, their left sides in line.

    Raises
    ------
    KtError
        If there is no scene, or their presets differ.
    """
    presets = {scene.preset for scene in scenes}
    if len(presets) != 1:
        raise KtError(
            "scenes of different presets cannot be stacked", accepted="at least one scene, all of one preset"
        )
    gap = preset_named(scenes[0].preset).label
    height = sum(scene.height for scene in scenes) + gap * (len(scenes) - 1)
    items: list[Item] = []
    top = height
    for scene in scenes:
        items += [moved(item, 0, top - scene.height) for item in scene.items]
        top -= scene.height + gap
    words = " ".join(scene.description for scene in scenes if scene.description)
    return Scene(
        tuple(items), max(s.width for s in scenes), height, title or scenes[0].title, words, scenes[0].preset
    )
