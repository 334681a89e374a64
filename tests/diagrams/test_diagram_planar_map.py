"""The planar map: faces, pieces and genus, against small maps done by hand."""

from __future__ import annotations

from kt_widgets.diagrams.planar_map import PlanarMap, ends_of_edges


def map_of(slots: list[tuple[int, int, int, int]], signs: list[int]) -> PlanarMap:
    return PlanarMap.from_ends(*ends_of_edges(slots, signs))


def test_trefoil_has_two_triangles_and_three_bigons() -> None:
    plane = map_of([(4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 3)], [1, 1, 1])
    assert sorted(map(len, plane.faces)) == [2, 2, 2, 3, 3]
    assert plane.genera == (0,)


def test_each_dart_lies_on_one_face() -> None:
    plane = map_of([(4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 3)], [1, 1, 1])
    assert sorted(dart for walk in plane.faces for dart in walk) == list(range(12))
    assert all(dart in plane.faces[plane.face_of_dart[dart]] for dart in range(12))


def test_face_is_on_the_left() -> None:
    # Around a positive crossing the face between the outgoing strands (over to the right, under ahead) lies
    # on the left of the over-strand's outgoing edge and on the right of the under-strand's.
    plane = map_of([(4, 2, 5, 1), (2, 6, 3, 5), (6, 4, 1, 3)], [1, 1, 1])
    over_out, under_out = 1, 2
    assert plane.face_of_dart[over_out] == plane.face_of_dart[plane.mate[under_out]]


def test_one_wrong_sign_gives_a_torus() -> None:
    # The passes 1 2 3 1 2 3 with one crossing turned round.
    plane = map_of([(4, 2, 5, 1), (2, 6, 3, 5), (6, 3, 1, 4)], [1, 1, -1])
    assert plane.genera == (1,)


def test_pieces_have_their_own_genus() -> None:
    kink = [(1, 1, 2, 2)]
    torus = [(5, 4, 6, 3), (6, 5, 3, 4)]  # the passes 1 2 1 2, both crossings positive
    plane = map_of([*kink, *torus], [1, 1, 1])
    assert plane.pieces == ((0,), (1, 2))
    assert plane.genera == (0, 1)
