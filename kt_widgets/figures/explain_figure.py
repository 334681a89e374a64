"""The figure that explains one entry of boundary(2): its letters, the edges they cross, and their sum."""

from __future__ import annotations

from kt_widgets.covers.chains import ChainComplex
from kt_widgets.errors import AlgebraError
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.lettering import extent
from kt_widgets.figures.presets import Preset, label_size, preset_named
from kt_widgets.figures.scene import Arrow, Dot, Item, Label, Point, Scene, Stroke
from kt_widgets.groups.fox import Visit
from kt_widgets.places import Place
from kt_widgets.text.printing import lift_text, name_text, polynomial_text, word_text

__all__ = ["explain", "explain_scene"]

_SAMPLES = 24


def _arc(start: Point, end: Point, push: Point) -> tuple[Point, ...]:
    """The segment from start to end, its middle pushed aside."""
    parts = [i / _SAMPLES for i in range(_SAMPLES + 1)]
    return tuple(
        tuple(a + (b - a) * u + 4 * u * (1 - u) * p for a, b, p in zip(start, end, push, strict=True))  # type: ignore[misc]
        for u in parts
    )


def explain_scene(c: ChainComplex, entry: tuple[str | int, str | int], preset: str = "paper") -> Scene:
    """The scene of `explain`."""
    if not isinstance(c, ChainComplex):
        raise AlgebraError(
            f"an object of type {type(c).__name__} is not a chain complex",
            accepted="the chain complex of a cover, such as d.cover().chains() of a diagram d",
        )
    if c.cover is None:
        raise AlgebraError(
            "this complex was entered as matrices, so no letters stand behind its entries",
            accepted="the chain complex of a cover, such as kt.Cover(presentation).chains()",
        )
    if not isinstance(entry, tuple | list) or len(entry) != 2:
        raise AlgebraError(
            f"{entry!r} is not the place of an entry",
            where="entry",
            accepted=f"a generator and a relator, such as {(c.generators or ('a',))[0], 'r1'}",
        )
    row, column = (int(i) for i in c.place(2, *entry).indices[1:])
    return _Explanation(
        c.cover.visits(column), c.generators[row - 1], column, row, preset_named(preset)
    ).scene()


class _Explanation:
    """The layout: a column for each letter of the relator, a level for each vertex t^k e."""

    def __init__(
        self, visits: tuple[Visit, ...], generator: str, relator: int, row: int, preset: Preset
    ) -> None:
        self.visits, self.generator, self.relator, self.preset = visits, generator, relator, preset
        self.entry = str(Place("entry", (2, row, relator)))
        self.terms = [v for v in visits if v.generator == generator]
        self.tints = {k: i for i, k in enumerate(sorted({v.exponent for v in self.terms}))}
        size = preset.label
        self.levels = range(
            min((min(v.start, v.end) for v in visits), default=0),
            max((max(v.start, v.end) for v in visits), default=0) + 1,
        )
        self.left, self.right = 5.5 * size, 3.4 * size
        count = max(len(visits), 1)
        self.column = min(max((preset.width - self.left - self.right) / count, 2.2 * size), 5 * size)
        self.rise = 3.2 * size if len(self.levels) < 8 else 1.6 * size
        self.floor = (5.2 if self.terms else 3.2) * size
        self.ceiling = self.floor + (len(self.levels) - 1) * self.rise
        name, value = name_text(generator, "latex"), polynomial_text(self.total(), "latex")
        self.sum = f"$∂_2({name}, r_{{{relator}}}) = {value}$"
        if not self.terms:
            self.sum = f"no letter ${name}$ in $r_{{{relator}}}$: {self.sum}"
        lettering = extent(self.sum, label_size("formula", preset)).width + 2 * size
        self.width = max(self.left + count * self.column + self.right, lettering)

    def point(self, columns: float, power: int) -> Point:
        return self.left + columns * self.column, self.floor + (power - self.levels[0]) * self.rise

    def scene(self) -> Scene:
        size = self.preset.label
        items = [*self.level_items(), *self.strip_items(), *self.path_items(), *self.sum_items()]
        word = word_text((v.generator, v.sign) for v in self.visits)
        letters = ", ".join(str(v.position) for v in self.terms) or "none"
        return Scene(
            tuple(items),
            self.width,
            self.ceiling + 3.6 * size,
            f"entry of boundary 2 in row {self.generator} and column r{self.relator}",
            f"r{self.relator} = {word} is lifted from e; letters with {self.generator}: {letters}; "
            f"the entry is {polynomial_text(self.total())}.",
            self.preset.name,
        )

    def total(self) -> dict[int, int]:
        found: dict[int, int] = {}
        for v in self.terms:
            found[v.exponent] = found.get(v.exponent, 0) + v.sign
        return found

    def level_items(self) -> list[Item]:
        items: list[Item] = []
        for k in self.levels:
            name, (x, y) = str(Place("vertex", (k,))), self.point(0, k)
            end = self.left + max(len(self.visits), 1) * self.column + 0.6 * self.preset.label
            items += [
                Stroke(name, ((x, y), (end, y)), "dropline"),
                Dot(name, (x, y), "vertex", z=3),
                Label(
                    name, f"${lift_text(k, 'e', 'latex')}$", (end + 0.4 * self.preset.label, y), anchor="left"
                ),
            ]
        return items

    def strip_items(self) -> list[Item]:
        """The edges in the cover that the entry counts, on the line of vertices at the left."""
        size, items = self.preset.label, list[Item]()
        for k, tint in self.tints.items():
            v = next(v for v in self.terms if v.exponent == k)
            ends = sorted((v.start, v.end))
            weight = (v.end - v.start) * v.sign
            rank = tint % 3 if abs(weight) > 1 else 0
            push = -(0.7 + 0.9 * rank) * size
            if weight:
                start, end = (self.point(0, ends[0]), self.point(0, ends[1]))
                path = _arc(start, end, (push, 0)) if weight > 0 else _arc(end, start, (push, 0))
            else:
                x, y = self.point(0, k)
                path = (*_arc((x, y), (x - 1.3 * size, y), (0, -0.5 * size)),)
                path += _arc((x - 1.3 * size, y), (x, y), (0, 0.5 * size))[1:]
                push = -1.3 * size
            name = str(v.edge)
            middle, after = path[len(path) // 2], path[len(path) // 2 + 2]
            direction = (after[0] - middle[0], after[1] - middle[1])
            items += [
                Stroke(name, path, "strand", z=1, colour_index=tint),
                Arrow(name, after, direction, "strand", z=1, colour_index=tint),
                Label(
                    name,
                    f"${lift_text(k, name_text(self.generator, 'latex'), 'latex')}$",
                    (middle[0] - 0.6 * size, middle[1]),
                    anchor="right",
                    colour_index=tint,
                ),
            ]
        return items

    def path_items(self) -> list[Item]:
        """The relator above, its lift below it: each letter right over the edge that it runs along."""
        size = self.preset.label
        top = self.ceiling + 2.2 * size
        items: list[Item] = [
            Label(
                f"relator:{self.relator}",
                f"$r_{{{self.relator}}} =$",
                (self.left - 0.8 * size, top),
                anchor="right",
            )
        ]
        for v in self.visits:
            name, i = str(v.letter), v.position - 1
            start, end = self.point(i, v.start), self.point(i + 1, v.end)
            path = _arc(start, end, (0.0, 0.0 if v.start != v.end else 0.5 * size))
            middle = path[_SAMPLES // 2]
            counted = v.generator == self.generator
            tint = self.tints.get(v.exponent) if counted else None
            text = f"${word_text([(v.generator, v.sign)], 'latex')}$"
            items += [
                Stroke(name, path, "strand" if counted else "rail", z=1, colour_index=tint),
                Dot(name, end, "more"),
                Label(name, text, (middle[0], top), "label" if counted else "number", colour_index=tint),
            ]
            if not counted:
                continue
            tip, before = path[_SAMPLES * 3 // 4], path[_SAMPLES * 3 // 4 - 2]
            direction = (tip[0] - before[0], tip[1] - before[1])
            sign = "+" if v.sign > 0 else "-"
            low, high = self.floor - 1.5 * size, top - 0.9 * size
            items += [
                Arrow(name, tip, direction, "strand", z=1, colour_index=tint),
                Stroke(name, ((middle[0], high), (middle[0], middle[1] + 0.35 * size)), "leader"),
                Stroke(name, ((middle[0], middle[1] - 0.35 * size), (middle[0], low)), "leader"),
                Label(
                    name, f"${sign}{_power(v.exponent)}$", (middle[0], low - 0.8 * size), colour_index=tint
                ),
            ]
        return items

    def sum_items(self) -> list[Item]:
        return [Label(self.entry, self.sum, (self.width / 2, 1.1 * self.preset.label), "formula")]


def _power(exponent: int) -> str:
    return polynomial_text({exponent: 1}, "latex")


def explain(c: ChainComplex, entry: tuple[str | int, str | int], preset: str = "paper") -> Drawing:
    """Explain one entry of boundary(2): the letters that it counts, the edges that they cross, and the sum.

    Each letter of the relator stands right over its edge in the lift that starts at e, drawn as a path
    from level to level, so the leaders that join letter, edge and term are parallel and never cross.
    Letters that cross the same edge share its colour.

    Parameters
    ----------
    c : ChainComplex
        The chain complex of a cover.
    entry : pair
        The generator (its name, or the number of the row) and the relator (its number, or "r2").
    preset : {"paper", "screen", "talk"}

    Raises
    ------
    AlgebraError
        If there is no such row or column, or `c` is no chain complex of a cover.

    Examples
    --------
    >>> from kt_widgets.covers.cover import Cover
    >>> from kt_widgets.groups.presentations import Presentation
    >>> c = Cover(Presentation.parse("< a, b | a b a = b a b >")).chains()
    >>> drawing = explain(c, entry=("a", "r1"))
    >>> drawing.scene.at("entry:2:1:1")[0].text
    '$∂_2(a, r_{1}) = 1 - t + t^2$'
    """
    return Drawing(explain_scene(c, entry, preset))
