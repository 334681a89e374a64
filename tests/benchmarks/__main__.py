"""Benchmarks: `python -m tests.benchmarks` prints ours, each peer and the ratio, measured in one run.

Nothing here asserts a time: machines are noisy, so only ratios within one run count. Peers are
general-purpose libraries doing the same work on the same diagrams; cypari2 takes part when it is installed,
and numba, the extra `fast`, serves us when it is. A peer is stopped after `LIMIT` seconds, and not started
where it would take minutes; the table says so.
"""

from __future__ import annotations

import random
from collections.abc import Callable
from functools import partial
from importlib.util import find_spec
from pathlib import Path

import kt_widgets as kt
from tests.benchmarks import peers, subjects
from tests.benchmarks.measures import (
    NOT_INSTALLED,
    Missing,
    growth,
    heading,
    in_new_process,
    limited,
    row,
    seconds,
)

SEED = 20_250_101
LIMIT = 20.0
SIZES = ((100, 9), (200, 15), (400, 21), (1000, 31), (2000, 45))
"""Crossings and strands, about as many as the square root of the crossings."""

TIMED_IMPORT = "import time; s = time.perf_counter(); import {}; print(time.perf_counter() - s)"
MEMORY = r"""
import random, re
from pathlib import Path
from tests.benchmarks.subjects import polynomial, random_knot_braid
polynomial(random_knot_braid({}, {}, random.Random({})))
print(int(re.search(r"VmHWM:\s*([0-9]+)", Path("/proc/self/status").read_text())[1]) / 1024)
"""


def main() -> None:
    """Print the table."""
    rng = random.Random(SEED)
    kt.show_versions()
    print("numba, the extra `fast`:", "used where it pays" if find_spec("numba") else "not installed")
    heading()
    imports(rng)
    small(rng)
    polynomials(rng)
    homology(rng)


def imports(rng: random.Random) -> None:
    """Starting up, and the first picture."""
    ours, theirs = (in_new_process(TIMED_IMPORT.format(name)) for name in ("kt_widgets", "sympy"))
    row("import kt_widgets", ours, "<= 0.3 s", {"import sympy": theirs})
    word = subjects.random_knot_braid(12, 5, rng)
    row(
        "12 crossings: first picture (layout and SVG)",
        first_picture_seconds(word),
        "< 0.3 s",
        {"networkx layout + matplotlib": seconds(lambda: peers.plain_graph_picture(word))},
    )


def small(rng: random.Random) -> None:
    """The whole chain at 12 crossings."""
    word = subjects.random_knot_braid(12, 5, rng)
    minor = subjects.minor_of(word)
    row(
        "12 crossings: diagram to invariant factors",
        seconds(lambda: subjects.refresh(word)),
        "<= 2 ms",
        {
            "sympy DomainMatrix, determinant": seconds(peers.as_sympy(minor).det),
            "sympy, invariant factors": seconds(peers.sympy_smith(minor)),
        },
    )


def polynomials(rng: random.Random) -> None:
    """The Alexander polynomial from 50 crossings on."""
    word = subjects.random_knot_braid(50, 7, rng)
    compared(50, word, ("8 x the fastest",) * 3)
    times = {}
    for crossings, strands in SIZES:
        word = subjects.random_knot_braid(crossings, strands, rng)
        if crossings == 100:
            times[crossings] = compared(crossings, word, (">= 30 x", "", ">= 500 x"))
            continue
        times[crossings] = seconds(partial(subjects.polynomial, word))
        target = {1000: "< 1 s", 2000: "< 5 s"}.get(crossings, "")
        row(f"{crossings} crossings: Alexander polynomial", times[crossings], target)
    print(f"  growth from 100 to 2000 crossings: n^{growth(times):.2f} (target: less than n^3)")
    print("  peers beyond 100 crossings: not started, they take minutes")
    if Path("/proc/self/status").exists():
        least, most = (in_new_process(MEMORY.format(*size, SEED), runs=1) for size in ((12, 5), SIZES[-1]))
        print(
            f"  memory of the whole process: {most:.0f} MB at {SIZES[-1][0]} crossings, {least:.0f} MB at 12"
        )
    else:
        print("  memory: measured on Linux only")


def compared(crossings: int, word: list[int], wanted: tuple[str, ...]) -> float:
    """The polynomial beside that of all peers; gives our time."""
    minor = subjects.minor_of(word)
    ours = seconds(partial(subjects.polynomial, word))
    times: dict[str, float | Missing] = {
        "PARI matdet": in_time(peers.pari_determinant(minor)),
        "python-flint interpolation": in_time(partial(peers.by_interpolation, minor)),
        "sympy DomainMatrix": in_time(peers.as_sympy(minor).det),
    }
    row(f"{crossings} crossings: Alexander polynomial", ours, "", times, wanted)
    return ours


def homology(rng: random.Random) -> None:
    """Smith form and branched cover."""
    word = subjects.random_knot_braid(50, 7, rng)
    minor = subjects.minor_of(word)
    row(
        "50 crossings: Smith form over Q, certificate",
        seconds(partial(subjects.smith, word)),
        "< 50 ms",
        {
            "PARI matsnf with transforms": in_time(peers.pari_smith(minor)),
            "sympy, invariant factors": in_time(peers.sympy_smith(minor)),
        },
    )
    word = subjects.random_knot_braid(400, 21, rng)
    minor = subjects.minor_of(word)
    row(
        "400 crossings: H_1 of the double branched cover",
        seconds(partial(subjects.double_cover, word)),
        "",
        {"fmpz_mat.snf, the matrix at -1": in_time(partial(peers.integer_smith, minor))},
        (">= 20 x",),
    )


def in_time(work: Callable[[], object] | None) -> float | Missing:
    """A peer's time: the best of several runs if it is quick, one run otherwise, at most `LIMIT` seconds."""
    if work is None:
        return NOT_INSTALLED
    once = limited(work, LIMIT)
    return seconds(work) if isinstance(once, float) and once < 1 else once


def first_picture_seconds(word: list[int]) -> float:
    """Diagram to SVG text, a different diagram each time so that nothing is cached."""
    turns = [word[i:] + word[:i] for i in range(len(word))]
    state = iter(turns * 50)
    return seconds(lambda: kt.figures.diagram(kt.Diagram.from_braid(next(state))).svg())


if __name__ == "__main__":
    main()
