"""Seifert circles and spanning trees of the checkerboard graph, against counting and exact determinants."""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise

from hypothesis import given, settings
from hypothesis import strategies as st

from kt_widgets.diagrams import Diagram
from kt_widgets.diagrams.checkerboard import checkerboard_edges, seifert_circles, spanning_trees_at_most
from kt_widgets.testing.strategies import braids


def spanning_trees(edges: list[tuple[int, int]]) -> int:
    """Kirchhoff's theorem: the determinant of the Laplacian less a row and column, by exact elimination."""
    vertices = sorted({v for edge in edges for v in edge})
    place = {v: i for i, v in enumerate(vertices)}
    size = len(vertices)
    rows = [[Fraction(0)] * size for _ in range(size)]
    for a, b in edges:
        if a != b:
            i, j = place[a], place[b]
            rows[i][i] += 1
            rows[j][j] += 1
            rows[i][j] -= 1
            rows[j][i] -= 1
    product = Fraction(1)
    for k in range(size - 1):
        product *= rows[k][k]
        if not product:
            return 0
        for i in range(k + 1, size - 1):
            factor = rows[i][k] / rows[k][k]
            for j in range(k, size - 1):
                rows[i][j] -= factor * rows[k][j]
    return int(product)


edge = st.tuples(st.integers(0, 7), st.integers(0, 7))


@given(st.lists(edge, max_size=20), st.permutations(range(8)))
@settings(deadline=None)
def test_a_power_of_two_just_above(extra: list[tuple[int, int]], order: list[int]) -> None:
    edges = extra + list(pairwise(order))
    trees, bound = spanning_trees(edges), spanning_trees_at_most(edges)
    assert trees <= bound <= 2 * trees


def test_a_large_graph() -> None:
    # A wheel with n spokes has L_2n - 2 spanning trees, L the Lucas numbers (J. Sedlacek 1970, from memory).
    n = 2000
    wheel = [(i, (i + 1) % n) for i in range(n)] + [(i, n) for i in range(n)]
    previous, lucas = 2, 1
    for _ in range(2 * n - 1):
        previous, lucas = lucas, previous + lucas
    assert lucas - 2 <= spanning_trees_at_most(wheel) <= 2 * (lucas - 2)


@given(braids(4, 10))
@settings(deadline=None)
def test_both_checkerboard_graphs_of_a_connected_braid(braid: tuple[list[int], int]) -> None:
    word, strands = braid
    word = [*range(1, strands), *word] or [1]
    d = Diagram.from_braid(word)
    edges = checkerboard_edges(d.planar_map)
    faces = d.planar_map.face_of_dart
    corners = [faces[4 * c : 4 * c + 4] for c in range(len(d.slots))]
    ours = {v for e in edges for v in e}
    dual = [(c[0], c[2]) if c[1] in ours else (c[1], c[3]) for c in corners]
    assert ours.isdisjoint({v for e in dual for v in e})
    assert len(ours) <= len(d.faces) - len(ours)
    assert spanning_trees(edges) == spanning_trees(dual)
    # The Seifert circles of a closed braid are its strands.
    assert seifert_circles(d.slots, d.signs) == max(strands, 2)


def test_the_determinant_of_an_alternating_diagram_counts_the_trees() -> None:
    # R. H. Crowell, Genus of alternating link types, Ann. of Math. 69 (1959), from memory.
    for word in ([1, 1, 1], [1, -2, 1, -2], [1, 1, -2, 1, -2, -2, 3, -2, 3]):
        d = Diagram.from_braid(word)
        assert abs(d.alexander_polynomial()(-1)) == spanning_trees(checkerboard_edges(d.planar_map))
