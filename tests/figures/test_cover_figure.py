"""The scene of the cover: ids, translates, lanes on the right, windows, labels that do not collide."""

from __future__ import annotations

import math
import subprocess
import sys
from itertools import pairwise
from typing import Any

import pytest

from kt_widgets.covers.cover import Cover
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.errors import KtError
from kt_widgets.figures.cover_figure import MAX_EDGES, cover, cover_scene
from kt_widgets.figures.presets import PRESETS, label_box, preset_named
from kt_widgets.figures.scene import Arrow, Label, Region, Scene, Stroke
from kt_widgets.groups.presentations import Presentation

TREFOIL = "< a, b | a b a = b a b >"
COVERS = [
    Cover(Presentation.parse(TREFOIL)),
    Cover(Presentation.parse("< x, y | x^3 = y^2 >")),
    Cover(Presentation.parse("< t, x | t x t^-1 = x^2 >")),
    Cover(
        Presentation.parse("< t, x, y, z | t x y t^-1 x^-2 z t^-2 z z^-1 >"), {"t": 1, "x": 0, "y": 0, "z": 2}
    ),
    Cover(Presentation.parse("< a, b, c | a a^-1 c b^-1 a^2 a^-2 c^-1 b >")),
    Cover(Presentation.parse("< a, b | a^2 b >"), {"a": -1, "b": 2}),
]


def scene(x: Cover, preset: str = "screen") -> Scene:
    return cover_scene(x, range(1, len(x.presentation.boundary_words) + 1), preset=preset)


def twelve() -> Cover:
    return Diagram.from_braid([1, -2, 1, -2, 1, -2, 1, -2, 1, -2, 1, -2]).cover()


@pytest.mark.parametrize("x", COVERS, ids=str)
@pytest.mark.parametrize("preset", PRESETS)
def test_every_letter_and_vertex_has_its_place(x: Cover, preset: str) -> None:
    found = scene(x, preset)
    ids = {item.id for item in found.items}
    for v in x.visits(1):
        assert {str(v.letter), str(v.edge), str(v.cell), f"vertex:{v.start}"} <= ids


@pytest.mark.parametrize("x", COVERS, ids=str)
@pytest.mark.parametrize("preset", PRESETS)
def test_all_is_inside_the_picture(x: Cover, preset: str) -> None:
    found = scene(x, preset)
    for item in found.items:
        if isinstance(item, Label):
            left, low, right, high = label_box(item, preset_named(preset))
            points = [(left, low), (right, high)]
        else:
            points = list(getattr(item, "points", ()))
        for u, v in points:
            assert 0 <= u <= found.width, item
            assert 0 <= v <= found.height, item


def test_deck_translation_moves_every_edge_alike() -> None:
    found = scene(COVERS[0])
    (x0, _), (x1, _) = (found.at(f"vertex:{k}")[2].position for k in (0, 1))  # type: ignore[union-attr]
    first, second = (
        [item.points for item in found.at(f"edge:a:{k}") if isinstance(item, Stroke)] for k in (0, 1)
    )
    for one, other in zip(first, second, strict=True):
        for (u, v), (p, q) in zip(one, other, strict=True):
            assert math.isclose(u + (x1 - x0), p, abs_tol=0.03)
            assert math.isclose(v, q, abs_tol=0.03)


def signed_area(points: list[tuple[float, float]]) -> float:
    pairs = zip(points, [*points[1:], points[0]], strict=True)
    return sum(x * v - u * y for (x, y), (u, v) in pairs) / 2


def test_the_trace_runs_on_the_right_of_its_edge() -> None:
    # In a fan the right of an edge run through from left to right is below it.
    x = Cover(Presentation.parse(TREFOIL))
    found = cover_scene(x, [1])
    for v in x.visits(1):
        edge = [p for s in found.at(str(v.edge)) if isinstance(s, Stroke) for p in s.points]
        lane = [p for s in found.at(str(v.letter)) if isinstance(s, Stroke) for p in s.points]
        left, right = min(p[0] for p in edge), max(p[0] for p in edge)
        middle = [p for p in lane if left + 0.35 * (right - left) < p[0] < right - 0.35 * (right - left)]
        assert middle
        for x0, y0 in middle:
            nearest = min(edge, key=lambda p: abs(p[0] - x0))
            assert (nearest[1] - y0) * v.sign > 0


def distance(one: list[tuple[float, float]], other: list[tuple[float, float]]) -> float:
    return min(math.dist(p, q) for p in one for q in other)


@pytest.mark.parametrize("preset", PRESETS)
def test_twelve_generators_are_readable(preset: str) -> None:
    x = twelve()
    assert len(x.presentation.generators) == 12
    found = cover_scene(x, [1], preset=preset)
    look = preset_named(preset)
    labels = [item for item in found.items if isinstance(item, Label)]
    boxes = [label_box(item, look) for item in labels]
    names = {item.text for item in labels}
    assert {f"${g}$" for g in x.presentation.generators} <= names
    for i, (a, b, c, d) in enumerate(boxes):
        for e, f, g, h in boxes[:i]:
            assert c <= e or g <= a or d <= f or h <= b, "two labels collide"
    # In the middle third of a fan arcs stay apart by more than their line's width.
    middles = {}
    for g in x.presentation.generators:
        points = [p for s in found.at(f"edge:{g}:0") if isinstance(s, Stroke) for p in s.points]
        left, right = min(p[0] for p in points), max(p[0] for p in points)
        middles[g] = [p for p in points if left + (right - left) / 3 < p[0] < right - (right - left) / 3]
    for g, h in pairwise(middles):
        assert distance(middles[g], middles[h]) > 0.8 * look.line * 2


def others(found: Scene, edge: str) -> list[tuple[float, float]]:
    """Points along the lines of all other edges, close together."""
    strokes = [s for s in found.items if isinstance(s, Stroke) and s.id.startswith("edge:") and s.id != edge]
    pairs = [pair for s in strokes for pair in pairwise(s.points)]
    return [(x + (u - x) * i / 8, y + (v - y) * i / 8) for (x, y), (u, v) in pairs for i in range(9)]


@pytest.mark.parametrize("preset", PRESETS)
@pytest.mark.parametrize("text", ["x^3 = y^2", "x^2 = y^5", "x^3 = y^4"])
def test_names_and_heads_of_arches_stand_clear_of_other_arches(text: str, preset: str) -> None:
    # Lifts of one arch cross each other: their names and heads must not stand at these crossings.
    found = cover_scene(Cover(Presentation.parse(f"< x, y | {text} >")), [1], preset=preset)
    size = preset_named(preset).label
    for item in found.items:
        if item.id.startswith("edge:") and isinstance(item, Label | Arrow):
            spot = item.position if isinstance(item, Label) else item.tip
            room = 0.55 if isinstance(item, Label) else 0.4
            assert distance([spot], others(found, item.id)) > room * size, item


def test_arches_pass_over_loops() -> None:
    x = Cover(Presentation.parse("< a, b, c | [a, b] [a, c] >"), {"a": 1, "b": 0, "c": 2})
    found = cover_scene(x, [1])
    loop = [p for s in found.at("edge:b:1") if isinstance(s, Stroke) for p in s.points]
    arch = [p for s in found.at("edge:c:0") if isinstance(s, Stroke) for p in s.points]
    assert distance(loop, arch) > preset_named("screen").label


@pytest.mark.parametrize("preset", PRESETS)
def test_many_lanes_have_numbers_that_can_be_told_apart(preset: str) -> None:
    x = Cover(Presentation.parse("< a, b | a b^-1 a^-1 b a b^-1 a b a^-1 b^-1 >"))
    found = cover_scene(x, [1], preset=preset)
    look = preset_named(preset)
    spots = [item.position for item in found.items if isinstance(item, Label) and item.role == "number"]
    assert len(spots) == 10
    for i, spot in enumerate(spots):
        assert all(math.dist(spot, other) > 0.5 * look.label for other in spots[:i])


def test_a_long_strip_is_wider_than_the_column_but_legible() -> None:
    found = cover(Cover(Presentation.parse("< x, y | x^3 = y^2 >")), lo=0, hi=30).scene
    (x0, _), (x1, _) = (found.at(f"vertex:{k}")[2].position for k in (0, 1))  # type: ignore[union-attr]
    assert x1 - x0 > 3 * preset_named("paper").label
    assert found.width > preset_named("paper").width


def test_two_traversals_of_one_edge_keep_apart() -> None:
    found = scene(Cover(Presentation.parse("< a, b, c | a b^-1 a b^-1 >")))
    first, second = (
        [p for s in found.at(f"letter:1:{j}") if isinstance(s, Stroke) for p in s.points] for j in (1, 3)
    )
    left, right = (found.at(f"vertex:{k}")[2].position[0] for k in (0, 1))  # type: ignore[union-attr]
    third = (right - left) / 3
    one, other = ([p for p in lane if left + third < p[0] < right - third] for lane in (first, second))
    assert distance(one, other) > 1.5


def test_the_window_grows_with_the_trace_and_can_be_given() -> None:
    x = Cover(Presentation.parse("< x, y | x^3 = y^2 >"))
    assert cover(x).scene.at("vertex:6")
    assert cover(x, lo=-2, hi=8).scene.at("vertex:-2")
    assert not cover(x, trace=None, lo=0, hi=1).scene.at("letter:1:1")


@pytest.mark.parametrize(("lo", "hi"), [(0, 3), (3, 3), (5, 2), (0, 1000)])
def test_a_window_that_cannot_be_drawn_is_refused(lo: int, hi: int) -> None:
    with pytest.raises(KtError, match="accepted"):
        cover(Cover(Presentation.parse("< x, y | x^3 = y^2 >")), lo=lo, hi=hi)


@pytest.mark.parametrize("wrong", [{"lo": "a"}, {"hi": 2.5}, {"lo": True}])
def test_ends_of_the_window_are_whole_numbers(wrong: dict[str, Any]) -> None:
    with pytest.raises(KtError, match=r"not a power of t \(at (lo|hi)\); accepted: a whole number"):
        cover(COVERS[0], **wrong)


@pytest.mark.parametrize("wrong", [Diagram.from_braid([1, 1]), "< a | >", None])
def test_what_is_no_cover_is_refused(wrong: Any) -> None:
    with pytest.raises(KtError, match="is not a cover; accepted: a Cover"):
        cover(wrong)


def test_a_relator_is_named_by_number_or_by_name() -> None:
    x = Diagram.from_braid([1, 1, 1]).cover()
    assert cover(x, trace="r2").scene == cover(x, trace=2).scene


def test_an_unknown_relator_is_refused() -> None:
    with pytest.raises(KtError, match="r1"):
        cover(Cover(Presentation.parse(TREFOIL)), trace=2)


def test_a_free_group_and_an_empty_relator_have_a_strip_without_trace() -> None:
    for text in ("< a | >", "< a, b | 1 >"):
        x = Cover(Presentation.parse(text), dict.fromkeys(Presentation.parse(text).generators, 1))
        assert not any(isinstance(item, Region) for item in cover(x).scene.items)


def test_with_many_generators_only_those_traced_are_drawn() -> None:
    x = Diagram.from_braid([1, -2] * (MAX_EDGES // 2 + 1)).cover()
    drawn = {item.id.split(":")[1] for item in cover(x).scene.items if item.id.startswith("edge:")}
    assert drawn == {v.generator for v in x.visits(1)}
    assert "left out" in cover(x).scene.description


def test_the_same_bytes_under_any_hash_seed() -> None:
    code = (
        "from kt_widgets.diagrams.diagram import Diagram; from kt_widgets.figures.cover_figure import cover;"
        "from kt_widgets.figures.links import links; x = Diagram.from_braid([1, -2, 1, -2]).cover();"
        "print(cover(x).svg(), links(x))"
    )
    texts = {
        subprocess.run(
            [sys.executable, "-c", code],
            env={"PYTHONHASHSEED": seed, "PYTHONPATH": ":".join(sys.path)},
            capture_output=True,
            check=True,
        ).stdout
        for seed in ("1", "2")
    }
    assert len(texts) == 1
