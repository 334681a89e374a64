"""Scenes, lettering and renderers: what is refused, what is drawn, and that it is the same each time."""

from __future__ import annotations

import re
import xml.etree.ElementTree as ElementTree
from io import BytesIO
from pathlib import Path

import pytest

from kt_widgets.errors import KtError
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.lettering import extent, runs
from kt_widgets.figures.presets import STYLES, colour, label_box, preset_named
from kt_widgets.figures.render import to_png, to_svg
from kt_widgets.figures.scene import Arrow, Badge, Dot, Label, Region, Scene, Stroke
from kt_widgets.figures.tikz import to_tikz

SVG = "{http://www.w3.org/2000/svg}"

SCENE = Scene(
    (
        Stroke("arc:1", ((10, 10), (90, 40)), "strand", colour_index=0),
        Stroke("arc:2", ((10, 50), (30, 60), (20, 70)), "dropline", closed=True),
        Region("cell:1:0", ((0, 0), (50, 0), (50, 50)), "cell", z=-1, colour_index=2),
        Arrow("arc:1", (50, 25), (80, 30), "strand", colour_index=0),
        Dot("vertex:0", (100, 60), "vertex"),
        Dot("crossing:1", (100, 60), "handle", radius=8),
        Badge("letter:1:2", "12", (150, 60), colour_index=1),
        Label("arc:1", "$a_{12}$ < $t^{-1} e$ & 1", (60, 90), anchor="left", colour_index=4),
    ),
    200,
    120,
    title="a < b",
    description="two & two",
    preset="screen",
)


def test_coordinates_are_rounded_and_have_no_negative_zero() -> None:
    stroke = Stroke("arc:1", ((-0.001, 1.23456), (2, 3)), "strand")
    assert repr(stroke.points) == "((0.0, 1.23), (2.0, 3.0))"


@pytest.mark.parametrize(
    ("make", "message"),
    [
        (lambda: Stroke("arc:3", ((0, 0), (float("nan"), 1)), "strand"), "not finite .*arc:3"),
        (lambda: Stroke("arc:3", ((0, 0),), "strand"), "path of 1 points.*arc:3.*2 or more"),
        (lambda: Arrow("arc:3", (0, 0), (0, 0), "strand"), "no direction .*arc:3"),
        (lambda: Label("arc:3", "a", (0, 0), anchor="top"), "anchor 'top'.*'left', 'centre' or 'right'"),
        (lambda: Scene((), 0, 10), "0 by 10"),
        (lambda: to_svg(Scene((Dot("x", (0, 0), "blob"),), 9, 9)), "role 'blob'.*vertex"),
        (lambda: to_svg(Scene((Label("x", "$a", (0, 0)),), 9, 9)), "dollar sign"),
        (lambda: to_svg(Scene((Label("x", "$a_{1$", (0, 0)),), 9, 9)), "brace"),
        (lambda: to_svg(Scene((), 9, 9, preset="poster")), "preset 'poster'.*paper, talk, screen"),
        (lambda: to_png(SCENE, dpi=1), "dots per inch"),
        (
            lambda: Drawing(SCENE).save("picture.gif"),
            "saved as .gif .*picture.gif.*.svg, .pdf, .png or .tikz",
        ),
        (lambda: Drawing(SCENE).save("picture"), "name has no ending.*picture.*.svg, .pdf, .png or .tikz"),
    ],
)
def test_refusals_name_the_place(make: object, message: str) -> None:
    with pytest.raises(KtError, match=message):
        make()  # type: ignore[operator]


def test_svg_is_well_formed_with_unique_ids_and_places() -> None:
    root = ElementTree.fromstring(to_svg(SCENE, prefix="one-"))
    groups = root.findall(f"{SVG}g")
    ids = [g.get("id") for g in groups]
    assert len(set(ids)) == len(ids) == len(SCENE.items)
    assert all(str(name).startswith("one-") for name in ids)
    assert [g.get("data-place") for g in groups] == [item.id for item in SCENE.in_order()]
    assert {str(g.get("class")) for g in groups} <= set(STYLES)
    assert root.findtext(f"{SVG}title") == "a < b"
    assert root.findtext(f"{SVG}desc") == "two & two"
    text = "".join(groups[-1].itertext())
    assert text == "a12 < t−1 e & 1"


def test_svg_turns_the_y_axis() -> None:
    root = ElementTree.fromstring(to_svg(Scene((Dot("x", (3, 4), "vertex"),), 10, 10)))
    circle = root.find(f".//{SVG}circle")
    assert circle is not None
    assert (circle.get("cx"), circle.get("cy")) == ("3", "6")


def test_pale_colours_are_not_used_for_letters() -> None:
    assert colour(4) == "#E69F00"
    assert colour(4, letters=True) is None
    text = to_svg(Scene((Label("arc:1", "$a$", (5, 5), colour_index=5),), 10, 10))
    assert "#56B4E9" not in text


def test_runs_split_mathematics() -> None:
    assert [(r.text, r.italic, r.level) for r in runs("$x_{10}^2$ and $y$")] == [
        ("x", True, 0),
        ("10", False, -1),
        ("2", False, 1),
        (" and ", False, 0),
        ("y", True, 0),
    ]
    assert extent("$ab$", 10).width == 2 * extent("$a$", 10).width


@pytest.mark.parametrize("text", ["$a$", "$g$", "$a_{12}$", "$m$", "$t^{-1} e$", "12", "crossing"])
def test_reckoned_letters_cover_the_drawn_ones(text: str) -> None:
    """Draw the label alone, and look where the ink is: within the reckoned box, a pixel aside."""
    import matplotlib.image

    scene = Scene((Label("arc:1", text, (40, 20)),), 80, 40, preset="paper")
    pixels = matplotlib.image.imread(BytesIO(to_png(scene, dpi=720)))[..., :3].min(axis=2)
    rows, columns = (pixels < 0.5).nonzero()
    left, low, right, high = label_box(scene.items[0], preset_named("paper"))  # type: ignore[arg-type]
    assert left * 10 - 5 <= columns.min()
    assert columns.max() <= right * 10 + 5
    assert (40 - high) * 10 - 5 <= rows.min()
    assert rows.max() <= (40 - low) * 10 + 5


def test_tikz_has_no_unescaped_text() -> None:
    text = to_tikz(SCENE)
    assert r"{$a_{12}$ < $t^{-1} e$ \& 1}" in text
    assert text.count(r"\begin") == text.count(r"\end") == 1
    # a handle is only for pointing at
    assert "% crossing:1" not in text


def test_saved_files_and_bytes(tmp_path: Path) -> None:
    drawing = Drawing(SCENE)
    for ending, start in ((".svg", b"<svg"), (".pdf", b"%PDF"), (".png", b"\x89PNG"), (".tikz", b"% scene")):
        one = drawing.save(tmp_path / f"one{ending}").read_bytes()
        other = drawing.save(tmp_path / f"other{ending}").read_bytes()
        assert one.startswith(start)
        assert one == other
        assert b"Date" not in one


def test_settings_of_matplotlib_do_not_change_the_picture() -> None:
    from matplotlib import rc_context

    drawing = Drawing(SCENE)
    plain = drawing.png(), drawing.pdf()
    with rc_context({"figure.facecolor": "black", "savefig.bbox": "tight", "lines.scale_dashes": False}):
        assert (drawing.png(), drawing.pdf()) == plain


def test_a_notebook_gets_svg_png_and_text() -> None:
    data, metadata = Drawing(SCENE)._repr_mimebundle_()
    assert set(data) == {"text/plain", "image/svg+xml", "image/png"}
    assert re.fullmatch(r"[A-Za-z0-9+/=]+", data["image/png"])
    assert metadata["image/png"]["width"] == 267
