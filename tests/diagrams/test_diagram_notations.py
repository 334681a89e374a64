"""The four notations: what they give, and how each kind of bad input is refused with its place."""

from __future__ import annotations

import random
import time
from itertools import permutations, product
from typing import Any

import numpy
import pytest

from kt_widgets.diagrams import Diagram
from kt_widgets.errors import DiagramError, KtError, LimitError, ParseError

TREFOIL = [(4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 3)]  # by hand: the closure of 1 1 1


def refused(make: Any, *said: str, kind: type[KtError] = DiagramError) -> None:
    """The error is of the kind, says these things, and says where and what would be accepted."""
    with pytest.raises(kind) as caught:
        make()
    for part in said:
        assert part in str(caught.value)
    assert caught.value.accepted
    assert caught.value.where or kind is not DiagramError


# chirality and order, by hand


def test_positive_letter_is_a_right_handed_crossing() -> None:
    # Both strands run upwards; in the letter +1 the strand from the left passes over, to the upper right. The
    # code from the incoming under-edge (below right), counter-clockwise: above right, above left, below left.
    d = Diagram.from_braid([1])
    (crossing,) = d.crossings
    below_left, below_right = 1, 2
    assert crossing.edges == (below_right, 2, 1, below_left)
    assert crossing.sign == 1
    assert Diagram.from_braid([1, 1, 1]).slots == tuple(TREFOIL)


def test_all_notations_give_the_right_handed_trefoil() -> None:
    braid = Diagram.from_braid([1, 1, 1])
    assert Diagram.from_gauss([[1, -2, 3, -1, 2, -3]], [1, 1, 1]) == braid
    assert Diagram.from_planar_diagram(TREFOIL) == braid
    assert Diagram.from_dowker([4, 6, 2]).same_diagram(braid)
    assert not Diagram.from_dowker([4, 6, 2]).same_diagram(braid.mirror())


def test_order_of_crossings_is_that_of_the_code() -> None:
    assert Diagram.from_braid([2, -1, 2, -1]).signs == (1, -1, 1, -1)
    d = Diagram.from_planar_diagram(TREFOIL[::-1])
    assert d.slots == tuple(TREFOIL[::-1])
    odd = [min(label for label in (row[0], d_over_in(row)) if label % 2) for row in d.slots]
    assert odd == [3, 5, 1]
    dowker = Diagram.from_dowker([4, 6, 2])
    assert [min(label for label in (row[0], d_over_in(row)) if label % 2) for row in dowker.slots] == [
        1,
        3,
        5,
    ]


def d_over_in(row: tuple[int, ...]) -> int:
    """Where the over-strand of a positive crossing comes from."""
    return row[3]


def test_numpy_integers_are_whole_numbers() -> None:
    assert Diagram.from_braid(numpy.array([1, 1, 1])) == Diagram.from_braid([1, 1, 1])
    assert Diagram.from_planar_diagram(numpy.array(TREFOIL)) == Diagram(TREFOIL)
    assert Diagram.from_dowker(numpy.array([4, 6, 2])) == Diagram.from_dowker([4, 6, 2])


# braids


@pytest.mark.parametrize(
    ("word", "strands", "said"),
    [
        ([1, 0], None, ["0 is not a letter", "letter 2", "non-zero"]),
        ([1, 2.0], None, ["2.0", "letter 2"]),
        ([True], None, ["True", "letter 1"]),
        (["1"], None, ["'1'", "letter 1"]),
        ("1 2", None, ["str", "braid word"]),
        (7, None, ["int", "braid word"]),
        ([], None, ["how many strands", "number of strands"]),
        ([1, -3], 3, ["letter -3 needs 4 strands, there are 3", "letter 2", "strands 4"]),
        ([1], 1, ["strands 2"]),
        ([1], 0, ["0 strands"]),
        ([], -2, ["-2 strands"]),
        ([1], "2", ["'2'", "strands"]),
        ([1], 2.5, ["2.5", "strands"]),
    ],
)
def test_bad_braids(word: Any, strands: Any, said: list[str]) -> None:
    refused(lambda: Diagram.from_braid(word, strands), *said)


def test_huge_braids_are_refused_at_once() -> None:
    start = time.perf_counter()
    refused(lambda: Diagram.from_braid([1] * 10**6), "at most 100000", kind=LimitError)
    refused(lambda: Diagram.from_braid([10**9]), "at most 10000", kind=LimitError)
    refused(lambda: Diagram.from_braid([], 10**9), "at most 10000", kind=LimitError)
    assert time.perf_counter() - start < 5


def test_unused_strands_are_circles() -> None:
    d = Diagram.from_braid([1, 4], 6)
    assert d.circles == 2
    assert [len(c.edges) for c in d.components] == [2, 2, 0, 0]
    assert Diagram.from_braid([], 3) == Diagram.from_planar_diagram([], circles=3)


# Gauss codes


@pytest.mark.parametrize(
    ("components", "signs", "said"),
    [
        ([[1, -2, 3, -1, 2]], [1, 1, 1], ["crossing 3 is passed over only", "position 3", "-3"]),
        ([[1, -2, 1, 2]], [1, 1], ["crossing 1 is passed over twice", "position 3", "-1"]),
        ([[1, -2, -1, -2]], [1, 1], ["crossing 2 is passed under twice", "position 4"]),
        ([[1, -1, 1, -1]], [1], ["crossing 1 is passed over twice"]),
        ([[1, -3, 3, -1]], [1, 1], ["crossing 2 is missing", "numbered 1 to 2"]),
        ([[2, -2]], [1], ["crossing 1 is missing", "numbered 1 to 1"]),
        ([[1, 0]], [1], ["0 names no crossing", "position 2"]),
        ([[1, -1.0]], [1], ["-1.0", "position 2"]),
        ([[True, -1]], [1], ["True", "position 1"]),
        ([["1", -1]], [1], ["'1'", "position 1"]),
        ([1, -1], [1], ["component 1"]),
        ("1 -1", [1], ["str"]),
        ([[1, -1]], [], ["0 signs for 1 crossing"]),
        ([[1, -1]], [1, 1], ["2 signs for 1 crossing"]),
        ([[1, -1]], [2], ["2 is not a sign", "sign 1"]),
        ([[1, -1]], [0.5], ["0.5", "sign 1"]),
        ([[1, -1]], [True], ["True", "sign 1"]),
        ([[1, -1]], None, ["signs"]),
        ([], [], ["at least one component"]),
        ([[1, 2, -1, -2]], [1, 1], ["not planar", "genus 1", "crossings 1, 2"]),
        ([[1, -2, 3, -1, 2, -3]], [1, 1, -1], ["not planar", "genus 1", "crossings 1, 2, 3"]),
        ([[1], [-1]], [1], ["not planar", "genus 1"]),
        ([[1, -1], [2, 3, -2, -3]], [1, 1, 1], ["genus 1", "crossings 2, 3", "at crossing 2"]),
    ],
)
def test_bad_gauss_codes(components: Any, signs: Any, said: list[str]) -> None:
    refused(lambda: Diagram.from_gauss(components, signs), *said)


def test_gauss_circles() -> None:
    d = Diagram.from_gauss([[], [1, -1], []], [1])
    assert d.circles == 2
    assert d.to_gauss() == (((1, -1), (), ()), (1,))


# Dowker-Thistlethwaite codes


@pytest.mark.parametrize(
    ("code", "said"),
    [
        ([], ["empty"]),
        ([4, 5, 2], ["5 is not a partner of pass 3", "entry 2", "even numbers from 2 to 6"]),
        ([4, 8, 2], ["8 is not a partner", "entry 2"]),
        ([4, 0, 2], ["0 is not a partner", "entry 2"]),
        ([4, 2, -4], ["4 occurs twice (first as entry 1)", "entry 3"]),
        ([4, 6.0, 2], ["6.0", "entry 2"]),
        ([4, True, 2], ["True", "entry 2"]),
        ([4, "6", 2], ["'6'", "entry 2"]),
        ("4 6 2", ["str"]),
        ([[4], 2], ["entry 2 is not a list", "component 2"]),
        ([[4], [3]], ["3 is not a partner of pass 3", "entry 2"]),
        ([[], []], []),
    ],
)
def test_bad_dowker_codes(code: Any, said: list[str]) -> None:
    if said:
        refused(lambda: Diagram.from_dowker(code), *said)
    else:
        assert Diagram.from_dowker(code).circles == 2


def unrealisable(crossings: int) -> list[tuple[int, ...]]:
    """The permutations of the even numbers for which no choice of signs is planar, by trying them all."""
    found = []
    for code in permutations(range(2, 2 * crossings + 1, 2)):
        label = {2 * i + 1: i + 1 for i in range(crossings)} | {even: -i - 1 for i, even in enumerate(code)}
        gauss = [label[k] for k in range(1, 2 * crossings + 1)]
        if not any(is_planar(gauss, signs) for signs in product([1, -1], repeat=crossings)):
            found.append(code)
    return found


def is_planar(gauss: list[int], signs: tuple[int, ...]) -> bool:
    try:
        Diagram.from_gauss([gauss], signs)
    except DiagramError:
        return False
    return True


@pytest.mark.parametrize("crossings", [1, 2, 3, 4, 5])
def test_small_dowker_codes_against_all_signs(crossings: int) -> None:
    bad = unrealisable(crossings)
    # there are unrealisable codes from five crossings on
    assert bool(bad) == (crossings == 5)
    for code in permutations(range(2, 2 * crossings + 1, 2)):
        if code in bad:
            refused(
                lambda code=code: Diagram.from_dowker(code),
                "not realisable in the plane",
                "the stretch from pass",
                "(at crossing",
            )
        else:
            assert Diagram.from_dowker(code).to_dowker() == (code,)


def test_unrealisable_code_names_the_first_stretch_that_does_not_fit() -> None:
    # By hand: the passes 1 to 10 are at crossings 1 5 2 1 3 2 4 3 5 4. Passes 1 to 4 draw a loop based at
    # crossing 1; the curve leaves it, meets itself nowhere up to crossing 3 outside, enters the loop at
    # crossing 2, and from crossing 4 inside it cannot get back to crossing 3.
    refused(
        lambda: Diagram.from_dowker([4, 6, 8, 10, 2]),
        "from pass 7 (at crossing 4) to pass 8 (at crossing 3)",
        "(at pass 8)",
    )


def test_dowker_limit() -> None:
    start = time.perf_counter()
    refused(lambda: Diagram.from_dowker(range(2, 6000, 2)), "at most 2000", kind=LimitError)
    refused(lambda: Diagram.from_dowker(range(2, 10**7, 2)), "at most 12000", kind=LimitError)
    assert Diagram.parse("dowker circles 10000").circles == 10_000
    assert time.perf_counter() - start < 5


def test_summands_are_mirrored_so_that_their_first_crossing_is_positive() -> None:
    # Square and granny knot: whatever the summands' chirality, the choice makes both right-handed.
    granny = Diagram.from_braid([1, 1, 1, 2, 2, 2])
    square = Diagram.from_braid([1, 1, 1, -2, -2, -2])
    again = Diagram.from_dowker(granny.to_dowker())
    assert again.same_diagram(granny)
    assert again.signs == (1,) * 6
    assert Diagram.from_dowker(square.to_dowker()).signs == (1,) * 6
    # two kinks, of either sign, on an unknot
    assert Diagram.from_dowker(Diagram.from_braid([-1, 2]).to_dowker()).signs == (1, 1)


def test_dowker_links() -> None:
    torus = Diagram.from_braid([1, 1, 1, 1])
    # by hand: the second component meets crossings 2, 3, 4, 1 at its passes 5 to 8
    assert torus.to_dowker() == ((8, 6), (2, 4))
    assert Diagram.from_dowker(torus.to_dowker()).linking_matrix() == ((0, 2), (2, 0))
    rings = Diagram.from_braid([1, -2] * 3)
    again = Diagram.from_dowker(rings.to_dowker())
    assert len(again.components) == 3
    assert again.linking_matrix() == ((0, 0, 0),) * 3
    split = Diagram.from_dowker([[2], [4]])
    assert len(split.pieces) == 2


# planar diagram codes


@pytest.mark.parametrize(
    ("tuples", "options", "said"),
    [
        ([], {}, ["at least one component"]),
        ([(4, 2, 5)], {}, ["3 labels at one crossing", "crossing 1"]),
        ([(4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 7)], {}, ["label 7 is out of range", "crossing 3, label 4"]),
        ([(4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 0)], {}, ["label 0 is out of range", "1 to 6"]),
        (
            [(4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 4)],
            {},
            ["label 4 occurs a third time", "crossing 3, label 4"],
        ),
        ([(1, 2, 3, 4), (1, 2, 3, 3)], {}, ["label 3 occurs a third time", "crossing 2, label 4"]),
        ([(4, 2, 5, 1.0), (2, 6, 3, 5), (6, 4, 1, 3)], {}, ["1.0", "crossing 1, label 4"]),
        ([(4, 2, 5, True), (2, 6, 3, 5), (6, 4, 1, 3)], {}, ["True", "crossing 1, label 4"]),
        (["4251"], {}, ["str", "crossing 1"]),
        ("4,2,5,1", {}, ["str"]),
        (5, {}, ["int"]),
        ([5], {}, ["int", "crossing 1"]),
        (TREFOIL, {"signs": [1, 1, -1]}, ["the sign -1 disagrees", "crossing 3", "+1"]),
        (TREFOIL, {"signs": [1, 1]}, ["2 signs for 3 crossings"]),
        (TREFOIL, {"circles": -1}, ["-1 crossingless"]),
        (TREFOIL, {"circles": 1.0}, ["1.0", "circles"]),
        # edges 2 and 3 exchanged: the component is not numbered in order
        ([(4, 3, 5, 1), (3, 6, 2, 5), (6, 4, 1, 2)], {}, ["not consecutive", "labels 1 to 6"]),
        # the first under-strand against the direction of the labels
        ([(5, 1, 4, 2), (2, 6, 3, 5), (6, 4, 1, 3)], {}, ["against the labels", "crossing 1"]),
        # two components whose edges are not consecutive: {1, 3} and {2, 4}
        ([(1, 2, 3, 4), (4, 3, 2, 1)], {}, ["not consecutive"]),
        # an over-strand laid the other way round than in the plane
        ([(4, 1, 5, 2), (2, 6, 3, 5), (6, 4, 1, 3)], {}, ["not planar", "genus 1", "crossings 1, 2, 3"]),
        ([(1, 2, 1, 2)], {}, ["single pass", "label 1"]),
        # a circle under both times, entering twice by edge 1
        ([(1, 3, 2, 4), (1, 4, 2, 3)], {}, ["edge 1", "crossing 2"]),
        # a circle that lies over another: no direction
        ([(1, 3, 2, 4), (2, 3, 1, 4)], {}, ["over at both its crossings", "crossing 1", "signs"]),
        ([(1, 3, 2, 4), (2, 3, 1, 4)], {"signs": [1, 1]}, ["edge 4 ends twice", "crossing 2", "-1"]),
    ],
)
def test_bad_planar_codes(tuples: Any, options: dict[str, Any], said: list[str]) -> None:
    refused(lambda: Diagram.from_planar_diagram(tuples, **options), *said)


def test_circle_over_another_with_its_direction() -> None:
    tuples = [(1, 3, 2, 4), (2, 3, 1, 4)]
    one = Diagram(tuples, [1, -1])
    other = Diagram(tuples, [-1, 1])
    assert one != other
    assert one.linking_matrix() == other.linking_matrix() == ((0, 0), (0, 0))
    for d in (one, other):
        assert "signs" in str(d)
        assert Diagram.parse(str(d)) == d
    assert one.reverse().mirror().reverse().mirror() == one


def test_two_edge_component_that_goes_under_once_has_a_direction() -> None:
    hopf = Diagram.from_braid([1, 1])
    assert "signs" not in str(hopf)
    assert Diagram(hopf.slots) == hopf
    assert Diagram(hopf.mirror().slots) == hopf.mirror()


def test_huge_planar_codes_are_refused_at_once() -> None:
    start = time.perf_counter()
    refused(lambda: Diagram([(1, 1, 2, 2)] * 200_000), "at most", kind=LimitError)
    refused(lambda: Diagram([], circles=10**12), "at most 10000", kind=LimitError)
    assert time.perf_counter() - start < 5


# one line of text


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("", ["empty", "braid", "gauss", "dowker", "planar"]),
        ("  \n ", ["empty"]),
        ("1 2 1", ["'1' is not the name of a notation", "line 1, column 1"]),
        ("braids 1 1", ["'braids'", "the nearest is braid", "'gauss 1 -2 3", "'dowker 4 6 2'"]),
        ("conway 3", ["'conway'", "'planar 1,4,2,5"]),
        ("braid 1 x 2", ["'x' is not known after braid", "line 1, column 9", "strands"]),
        ("braid 1 - 2", ["'-' is out of place", "line 1, column 9"]),
        ("braid 1; 2", ["';' is out of place", "line 1, column 8"]),
        ("braid 1.5", ["'.' is not read", "line 1, column 8"]),
        ("braid 1 strands", ["strands with 0 numbers"]),
        ("braid 1 strands 2 3", ["strands with 2 numbers"]),
        ("braid 1 strands 2 strands 2", ["strands is given twice", "column 19"]),
        ("braid", ["missing", "column 6"]),
        ("gauss 1 -2 /\n/ 2 -1 signs + +", ["nothing stands before '/'", "line 2, column 1"]),
        ("gauss 1 -1 / signs +", ["nothing stands after"]),
        ("gauss 1 -1 strands 2", ["'strands' is not known after gauss", "signs or circles"]),
        ("dowker 4 6 2 signs + + +", ["'signs' is not known after dowker", "circles"]),
        ("planar 1,4,2,5; 5,2,6,3;", ["nothing stands after"]),
        ("planar 1,4,2,5/ 5,2,6,3", ["'/' is out of place"]),
        ("braid " + "9" * 50, ["50 digits", "at most 12"]),
        (None, ["NoneType"]),
        (b"braid 1", ["bytes"]),
    ],
)
def test_bad_lines(text: Any, said: list[str]) -> None:
    refused(lambda: Diagram.parse(text), *said, kind=ParseError)


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("braid 1 0 1", ["letter 2"]),
        ("gauss 1 -1", ["0 signs for 1 crossing"]),
        ("dowker 4 6 3", ["entry 3"]),
        ("planar 1,4,2; 5,2,6,3", ["crossing 1"]),
        ("planar 1,1,2,2 circles -1", ["-1 crossingless"]),
    ],
)
def test_bad_codes_in_lines(text: str, said: list[str]) -> None:
    refused(lambda: Diagram.parse(text), *said)


def test_lines_are_read_generously() -> None:
    trefoil = Diagram.from_braid([-1, -1, -1])
    for text in ("braid -1 -1 -1", " Braid −1, −1,\n −1 ", "BRAID -1,-1,-1 strands 2"):
        assert Diagram.parse(text) == trefoil
    assert Diagram.parse("gauss 1 -2 / -1 2 signs ++") == Diagram.parse("gauss 1,-2/-1,2 signs +1 1")
    assert Diagram.parse("dowker 4 6 2 circles 2").circles == 2
    assert (
        Diagram.parse("gauss circles 1")
        == Diagram.parse("planar circles 1")
        == Diagram.parse("braid strands 1")
    )


def test_huge_lines_are_refused_at_once() -> None:
    start = time.perf_counter()
    refused(lambda: Diagram.parse("braid " + "1 " * 3_000_000), "too long", kind=LimitError)
    refused(lambda: Diagram.parse("gauss circles 999999999"), "at most 10000", kind=LimitError)
    assert time.perf_counter() - start < 5


def test_random_damage_never_gives_a_foreign_error() -> None:
    chance = random.Random(5)
    lines = [
        "braid 1 -2 1 -2 strands 4",
        "gauss 1 -2 3 -1 2 -3 signs + + +",
        "dowker 4 6 2",
        "planar 1,4,2,5; 5,2,6,3; 3,6,4,1",
    ]
    for _ in range(3000):
        line = list(chance.choice(lines))
        for _ in range(chance.randint(1, 3)):
            line[chance.randrange(len(line))] = chance.choice("0123456789-+,;/ abgs\n(é\x00")
        try:
            d = Diagram.parse("".join(line))
        except KtError:
            continue
        assert Diagram.parse(str(d)) == d


def test_numbers_too_long_to_print_are_refused():
    # Python refuses str() of integers with more than 4300 digits: the message must not hold them.
    for make in (
        lambda: Diagram.from_braid([10**5000]),
        lambda: Diagram.from_gauss([[10**5000, -1]], [1]),
        lambda: Diagram([], circles=10**5000),
        lambda: Diagram.from_braid([1]).longitude(10**5000),
    ):
        with pytest.raises(LimitError, match="a number of 16610 bits"):
            make()


@pytest.mark.parametrize(
    ("pasted", "line"),
    [
        ("planar [(1, 4, 2, 5), (5, 2, 6, 3), (3, 6, 4, 1)]", "planar 1,4,2,5; 5,2,6,3; 3,6,4,1"),
        ("braid [1, -2, 1, -2]", "braid 1 -2 1 -2"),
        ("gauss [[1, -2], [-1, 2]] signs [1, 1]", "gauss 1 -2 / -1 2 signs + +"),
        ("dowker ([4], [2])", "dowker 4 / 2"),
    ],
)
def test_pasted_python_lists_are_read(pasted: str, line: str):
    assert Diagram.parse(pasted) == Diagram.parse(line)


@pytest.mark.parametrize("text", ["braid (1", "braid 1)", "braid (1]", "planar [(1, 4, 2, 5)"])
def test_brackets_must_match(text: str):
    with pytest.raises(ParseError, match="line 1, column"):
        Diagram.parse(text)
