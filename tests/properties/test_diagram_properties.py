"""Properties of random diagrams: round trips, invariance, chain complexes, certificates."""

from __future__ import annotations

from hypothesis import given
from hypothesis import strategies as st

from kt_widgets.covers.cover import Cover
from kt_widgets.diagrams import Diagram
from kt_widgets.diagrams.entries import check_planar
from kt_widgets.groups.presentations import Presentation
from kt_widgets.testing.strategies import braids, diagrams, knot_braids, knots, weighted_presentations

Braid = tuple[list[int], int]


def generators_of(strands: int) -> st.SearchStrategy[int]:
    return st.integers(1, strands - 1).flatmap(lambda i: st.sampled_from([i, -i]))


def invariants(d: Diagram) -> tuple[object, ...]:
    return d.alexander_polynomial(), d.cover().alexander_ideal(1), d.cover().alexander_ideal(2)


# notations


@given(diagrams(max_strands=6, max_letters=14))
def test_round_trips(d: Diagram) -> None:
    check_planar(d.slots, d.signs)
    assert Diagram.parse(str(d)) == d
    assert Diagram.parse(d.source) == d
    assert Diagram(d.slots, d.signs, d.circles) == d
    assert Diagram.from_gauss(*d.to_gauss()) == d


@given(diagrams(max_strands=6, max_letters=14))
def test_dowker_round_trip_up_to_mirrored_summands(d: Diagram) -> None:
    again = Diagram.from_dowker(d.to_dowker())
    assert again.to_dowker() == d.to_dowker()
    assert Diagram.from_dowker(again.to_dowker()) == again
    assert len(again.pieces) == len(d.pieces)
    if is_prime(d):
        assert again.same_diagram(d) or again.same_diagram(reflected(d))


def is_prime(d: Diagram) -> bool:
    """Connected, and no two edges border the same two faces."""
    sides: dict[int, set[int]] = {}
    for face in d.faces:
        for edge in face.edges:
            sides.setdefault(edge, set()).add(face.number)
    return len(d.pieces) == 1 and len(set(map(frozenset, sides.values()))) == len(sides)


def reflected(d: Diagram) -> Diagram:
    """The diagram seen in a mirror that stands on the plane: crossings keep over and under, signs change."""
    slots = [(under_in, left, under_out, right) for under_in, right, under_out, left in d.slots]
    return Diagram(slots, [-sign for sign in d.signs], d.circles)


@given(braids(max_strands=6, max_letters=14))
def test_braids_keep_letters_and_strands(braid: Braid) -> None:
    word, strands = braid
    d = Diagram.from_braid(word, strands)
    check_planar(d.slots, d.signs)
    assert d.signs == tuple(1 if letter > 0 else -1 for letter in word)
    # a strand at the bottom starts a component or belongs to an earlier one
    position = list(range(strands))
    for letter in word:
        i = abs(letter)
        position[i - 1], position[i] = position[i], position[i - 1]
    seen: set[int] = set()
    cycles = 0
    for start in range(strands):
        cycles += start not in seen
        while start not in seen:
            seen.add(start)
            start = position[start]
    assert len(d.components) == cycles


@given(diagrams(max_strands=5, max_letters=10), st.randoms())
def test_renumbered_crossings_are_the_same_diagram(d: Diagram, chance: object) -> None:
    order = list(range(len(d.slots)))
    chance.shuffle(order)  # type: ignore[attr-defined]
    shuffled = Diagram([d.slots[c] for c in order], [d.signs[c] for c in order], d.circles)
    found = d.same_diagram(shuffled)
    assert found is not None
    for row, target in zip(d.slots, found.crossings, strict=True):
        assert tuple(found.edges[edge - 1] for edge in row) == shuffled.slots[target - 1]


# invariance


@given(st.data(), braids())
def test_conjugate_braids_have_the_same_invariants(data: st.DataObject, braid: Braid) -> None:
    word, strands = braid
    if strands > 1:
        g = data.draw(generators_of(strands))
        conjugate = Diagram.from_braid([g, *word, -g], strands)
        assert invariants(conjugate) == invariants(Diagram.from_braid(word, strands))


@given(braids(), st.sampled_from([1, -1]))
def test_stabilised_braids_have_the_same_invariants(braid: Braid, sign: int) -> None:
    word, strands = braid
    stabilised = Diagram.from_braid([*word, sign * strands], strands + 1)
    assert invariants(stabilised) == invariants(Diagram.from_braid(word, strands))


@given(st.data(), braids(max_letters=6))
def test_braid_relations_keep_the_invariants(data: st.DataObject, braid: Braid) -> None:
    word, strands = braid
    if strands > 2:
        i = data.draw(st.integers(1, strands - 2))
        one = Diagram.from_braid([*word, i, i + 1, i], strands)
        other = Diagram.from_braid([*word, i + 1, i, i + 1], strands)
        assert invariants(one) == invariants(other)


@given(knots())
def test_knots_mirror_and_reverse(d: Diagram) -> None:
    delta = d.alexander_polynomial()
    assert delta(1) == 1
    assert delta.conjugate() == delta
    for other in (d.mirror(), d.reverse()):
        assert other.alexander_polynomial() == delta
        for k in (1, 2):
            assert other.cover().alexander_ideal(k) == d.cover().alexander_ideal(k).conjugate()


@given(diagrams())
def test_links_mirror_and_reverse(d: Diagram) -> None:
    ideal = d.cover().alexander_ideal(1)
    for other in (d.mirror(), d.reverse()):
        assert other.cover().alexander_ideal(1) == ideal.conjugate()
        assert other.cover().order() == d.cover().order().conjugate().normal_form()


@given(knots(max_letters=7))
def test_any_relator_is_redundant(d: Diagram) -> None:
    presentation = d.wirtinger()
    for number in range(1, len(presentation.relators) + 1):
        cover = Cover(presentation.without_relator(number))
        assert cover.alexander_ideal(2) == d.cover().alexander_ideal(2)


# chains, homology, certificates


@given(diagrams())
def test_boundary_of_boundary_is_zero(d: Diagram) -> None:
    chains = d.cover().chains()
    assert (chains.boundary(1) @ chains.boundary(2)).is_zero()
    assert chains.boundary(2).shape == (len(d.arcs), len(d.crossings))


@given(weighted_presentations())
def test_boundary_of_boundary_is_zero_for_presentations(data: tuple[Presentation, dict[str, int]]) -> None:
    chains = Cover(*data).chains()
    assert (chains.boundary(1) @ chains.boundary(2)).is_zero()
    basis = chains.kernel()
    assert (chains.boundary(1) @ basis.V).is_zero() is False
    assert all(not entry for entry in (chains.boundary(1) @ basis.V).rows[0][1:])


@given(knots(), st.sampled_from(["Q", 2, 3, 5]))
def test_certificates_verify(d: Diagram, ring: str | int) -> None:
    module = d.cover().chains().homology(1).over(ring)
    certificate = module.certificate()
    assert certificate.verify()
    product = 1
    for factor in module.invariant_factors():
        product = factor * product
    delta = d.alexander_polynomial().change_ring(ring)
    assert delta.unit_to(product) is not None


@given(knot_braids(max_strands=5, max_letters=12))
def test_strategy_of_knots_gives_knots(braid: Braid) -> None:
    d = Diagram.from_braid(*braid)
    assert len(d.components) == 1
    assert d.crossings
