"""Benchmarks: `python -m tests.benchmarks` prints ours, each peer and the ratio, measured in one run.

Nothing here asserts a time: machines are noisy, so only ratios within one run count. Peers are
general-purpose libraries doing the same work on the same diagrams; cypari2 takes part when it is installed.
"""

from __future__ import annotations

import random
import subprocess
import sys
import time
from collections.abc import Callable
from functools import partial

import flint
import sympy
from sympy.polys.matrices import DomainMatrix

import kt_widgets as kt

try:
    import cypari2
except ImportError:
    cypari2 = None

SEED = 20_250_101


def seconds(work: Callable[[], object], least: float = 0.3) -> float:
    """Best of several runs, in seconds: at least three, and until `least` seconds have been spent."""
    best, spent, runs = float("inf"), 0.0, 0
    while runs < 3 or spent < least:
        start = time.perf_counter()
        work()
        taken = time.perf_counter() - start
        best, spent, runs = min(best, taken), spent + taken, runs + 1
    return best


def import_seconds(module: str) -> float:
    """Time of an import in a fresh process, best of five, without starting Python itself."""
    code = f"import time; s = time.perf_counter(); import {module}; print(time.perf_counter() - s)"
    command = [sys.executable, "-c", code]
    runs = [subprocess.run(command, capture_output=True, text=True, check=True) for _ in range(5)]
    return min(float(run.stdout) for run in runs)


def random_knot_braid(crossings: int, strands: int, rng: random.Random) -> list[int]:
    """A braid word of the given length that uses every strand and closes to a knot.

    A cycle of all strands has the parity of strands - 1, so the length must have it too.
    """
    assert (crossings - strands) % 2, "such a braid never closes to a knot"
    while True:
        word = [rng.choice((1, -1)) * rng.randint(1, strands - 1) for _ in range(crossings)]
        ends = list(range(strands))
        for letter in word:
            i = abs(letter) - 1
            ends[i], ends[i + 1] = ends[i + 1], ends[i]
        position, length = ends[0], 1
        while position != 0:
            position, length = ends[position], length + 1
        if length == strands and len({abs(letter) for letter in word}) == strands - 1:
            return word


def refresh(word: list[int]) -> None:
    """Diagram -> relators -> boundary matrices -> polynomial -> invariant factors over Q; no display."""
    d = kt.Diagram.from_braid(word)
    h = d.cover().chains().homology(1)
    d.alexander_polynomial()
    h.over("Q").invariant_factors()


def minor_of(word: list[int]) -> list[list[kt.LaurentPolynomial]]:
    """The Alexander matrix of the closed braid less its last row and column."""
    matrix = kt.Diagram.from_braid(word).cover().chains().boundary(2)
    return [list(row[:-1]) for row in matrix.rows[:-1]]


def as_sympy(minor: list[list[kt.LaurentPolynomial]]) -> DomainMatrix:
    """The same matrix with its columns cleared of negative exponents, over ZZ[t]."""
    t = sympy.Symbol("t")
    ring = sympy.ZZ[t]

    def entry(f: kt.LaurentPolynomial) -> object:
        return ring.from_sympy(sum((c * t**e for e, c in f.terms().items()), sympy.Integer(0)))

    rows = [[entry(f) for f in line] for line in cleared_columns(minor)]
    return DomainMatrix(rows, (len(rows), len(rows)), ring)


def cleared_columns(minor: list[list[kt.LaurentPolynomial]]) -> list[list[kt.LaurentPolynomial]]:
    """Multiply each column by a power of t so that no exponent is negative."""
    shifts = [max(0, -min(f.lowest for f in column)) for column in zip(*minor, strict=True)]
    return [[f * kt.LaurentPolynomial.monomial(s) for f, s in zip(row, shifts, strict=True)] for row in minor]


def by_interpolation(minor: list[list[kt.LaurentPolynomial]]) -> object:
    """The determinant by python-flint alone: integer determinants at enough points, then interpolation."""
    cleared = cleared_columns(minor)
    n = len(cleared)
    degree = sum(max(f.highest for f in column) for column in zip(*cleared, strict=True))
    points = [k - degree // 2 for k in range(degree + 1)]
    values = [flint.fmpz_mat([[int(f(x)) if f else 0 for f in row] for row in cleared]).det() for x in points]
    # Newton's divided differences over Q.
    table = [flint.fmpq(v) for v in values]
    for level in range(1, n and degree + 1):
        for i in range(degree, level - 1, -1):
            table[i] = (table[i] - table[i - 1]) / (points[i] - points[i - level])
    result = flint.fmpq_poly([table[-1]])
    for i in range(degree - 1, -1, -1):
        result = result * flint.fmpq_poly([-points[i], 1]) + flint.fmpq_poly([table[i]])
    return result


def by_pari(minor: list[list[kt.LaurentPolynomial]]) -> Callable[[], object] | None:
    """PARI's determinant of the same matrix, when cypari2 is installed."""
    if cypari2 is None:
        return None
    lines = [
        ", ".join(" + ".join(f"{c}*t^{e}" for e, c in f.terms().items()) or "0" for f in line)
        for line in cleared_columns(minor)
    ]
    matrix = cypari2.Pari()("[" + "; ".join(lines) + "]")
    return lambda: matrix.matdet()


def row(work: str, ours: float, peers: dict[str, float | None]) -> None:
    """Print one line of the table for each peer; None is a peer that is not installed."""
    for name, other in peers.items():
        shown = "not installed" if other is None else f"{other * 1e3:10.2f} ms"
        ratio = "" if other is None else f"{other / ours:8.1f} x"
        print(f"{work:44} {ours * 1e3:10.2f} ms   {name:28} {shown:>13} {ratio}", flush=True)
        work = ""


def main() -> None:
    """Print the table."""
    rng = random.Random(SEED)
    kt.show_versions()
    print(f"\n{'work':44} {'ours':>13}   {'peer':28} {'peer time':>13}    ratio")
    row("import kt_widgets", import_seconds("kt_widgets"), {"import sympy": import_seconds("sympy")})

    word = random_knot_braid(12, 5, rng)
    cleared = as_sympy(minor_of(word))
    row(
        "12 crossings: diagram to invariant factors",
        seconds(lambda: refresh(word)),
        {"sympy, the determinant alone": seconds(cleared.det)},
    )
    row(
        "12 crossings: first picture (layout and SVG)",
        first_picture_seconds(word),
        {"networkx layout + matplotlib": seconds(lambda: plain_graph_picture(word))},
    )
    for crossings, strands in ((50, 7), (100, 9)):
        word = random_knot_braid(crossings, strands, rng)
        minor = minor_of(word)
        pari = by_pari(minor)
        peers: dict[str, float | None] = {"PARI matdet": seconds(pari) if pari else None}
        if crossings <= 50:
            peers["python-flint interpolation"] = seconds(partial(by_interpolation, minor))
            peers["sympy DomainMatrix"] = seconds(as_sympy(minor).det, least=0.0)
        ours = seconds(lambda w=word: kt.Diagram.from_braid(w).alexander_polynomial())
        row(f"{crossings} crossings: Alexander polynomial", ours, peers)


def first_picture_seconds(word: list[int]) -> float:
    """Diagram to SVG text, a different diagram each time so that nothing is cached."""
    turns = [word[i:] + word[:i] for i in range(len(word))]
    state = iter(turns * 50)
    return seconds(lambda: kt.figures.diagram(kt.Diagram.from_braid(next(state))).svg())


def plain_graph_picture(word: list[int]) -> None:
    """What a user has with general-purpose libraries: the 4-valent graph, laid out and drawn."""
    import io

    import networkx
    from matplotlib.backends.backend_svg import FigureCanvasSVG
    from matplotlib.figure import Figure

    graph: networkx.Graph = networkx.Graph()
    for c in kt.Diagram.from_braid(word).crossings:
        graph.add_edges_from((("crossing", c.number), ("edge", e)) for e in c.edges)
    figure = Figure()
    FigureCanvasSVG(figure)
    networkx.draw(graph, networkx.kamada_kawai_layout(graph), ax=figure.add_subplot())
    figure.savefig(io.BytesIO(), format="svg")


if __name__ == "__main__":
    main()
