"""The same work by general-purpose libraries: sympy, python-flint, PARI when cypari2 is installed."""

from __future__ import annotations

import io
from collections.abc import Callable

import flint
import sympy
from sympy.polys.matrices import DomainMatrix

import kt_widgets as kt
from tests.benchmarks.subjects import Minor

try:
    import cypari2
except ImportError:
    cypari2 = None

__all__ = [
    "as_sympy",
    "by_interpolation",
    "integer_smith",
    "pari_determinant",
    "pari_smith",
    "plain_graph_picture",
    "sympy_smith",
]


def cleared_columns(minor: Minor) -> Minor:
    """Multiply each column by a power of t so that no exponent is negative."""
    shifts = [max(0, -min(f.lowest for f in column)) for column in zip(*minor, strict=True)]
    return [[f * kt.LaurentPolynomial.monomial(s) for f, s in zip(row, shifts, strict=True)] for row in minor]


def as_sympy(minor: Minor, domain: object = sympy.ZZ) -> DomainMatrix:
    """The same matrix with its columns cleared of negative exponents, over ZZ[t] or QQ[t]."""
    t = sympy.Symbol("t")
    ring = domain[t]  # type: ignore[index]

    def entry(f: kt.LaurentPolynomial) -> object:
        return ring.from_sympy(sum((c * t**e for e, c in f.terms().items()), sympy.Integer(0)))

    rows = [[entry(f) for f in line] for line in cleared_columns(minor)]
    return DomainMatrix(rows, (len(rows), len(rows)), ring)


def sympy_smith(minor: Minor) -> Callable[[], object]:
    """sympy's invariant factors over QQ[t], without transforms."""
    from sympy.polys.matrices.normalforms import invariant_factors

    matrix = as_sympy(minor, sympy.QQ)
    return lambda: invariant_factors(matrix)


def by_interpolation(minor: Minor) -> object:
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


def _pari(minor: Minor) -> object:
    pari = cypari2.Pari()
    pari.allocatemem(2**31, silent=True)
    lines = [
        ", ".join(" + ".join(f"{c}*t^{e}" for e, c in f.terms().items()) or "0" for f in line)
        for line in cleared_columns(minor)
    ]
    return pari("[" + "; ".join(lines) + "]")


def pari_determinant(minor: Minor) -> Callable[[], object] | None:
    """PARI's determinant, when cypari2 is installed."""
    if cypari2 is None:
        return None
    matrix = _pari(minor)
    return lambda: matrix.matdet()  # type: ignore[attr-defined]


def pari_smith(minor: Minor) -> Callable[[], object] | None:
    """PARI's Smith form over Q[t] with transforms, when cypari2 is installed."""
    if cypari2 is None:
        return None
    matrix = _pari(minor)
    return lambda: matrix.matsnf(3)  # type: ignore[attr-defined]


def integer_smith(minor: Minor) -> object:
    """python-flint's Smith form of the whole matrix at t = -1."""
    return flint.fmpz_mat([[int(f(-1)) if f else 0 for f in line] for line in minor]).snf()


def plain_graph_picture(word: list[int]) -> None:
    """What a user has with general-purpose libraries: the 4-valent graph, laid out and drawn."""
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
