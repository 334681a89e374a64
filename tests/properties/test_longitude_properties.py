"""Longitudes of random diagrams: they bound in the cover, their exponents are linking numbers."""

from __future__ import annotations

from itertools import islice

from hypothesis import given
from hypothesis import strategies as st

from kt_widgets.algebra.flint_rings import RingName
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.smith import smith_form
from kt_widgets.diagrams import Diagram
from kt_widgets.groups.words import Word
from kt_widgets.testing.quotients import commute, quotients
from kt_widgets.testing.strategies import diagrams, knots


def divides(divisor: LaurentPolynomial, f: LaurentPolynomial) -> bool:
    if not divisor:
        return not f
    return not divmod(f, divisor)[1]


def is_zero_in_first_homology(d: Diagram, word: Word, ring: RingName) -> bool:
    """Whether the lift of a word of weight 0 bounds in the cover, over a field, by its Smith form."""
    chains = d.cover().chains().over(ring)
    cycle = d.cover().chain(word).change_ring(ring)
    assert (chains.boundary(1) @ cycle).is_zero()
    form = smith_form(chains.boundary(2))
    target: LaurentMatrix = form.U @ cycle
    diagonal = min(form.D.shape)
    return all(
        divides(form.D[i, i], target[i, 0]) if i < diagonal else not target[i, 0]
        for i in range(target.shape[0])
    )


@given(knots(), st.sampled_from(["Q", 2, 3]))
def test_longitude_of_a_knot_bounds_in_the_cover(d: Diagram, ring: RingName) -> None:
    assert sum(sign for _, sign in d.longitude()) == 0
    assert is_zero_in_first_homology(d, d.longitude(), ring)


def test_words_that_do_not_bound_are_told_apart() -> None:
    d = Diagram.from_braid([1, 1, 1])
    for ring in ("Q", 2, 3):
        assert not is_zero_in_first_homology(d, Word.parse("a b^-1"), ring)
        assert is_zero_in_first_homology(d, Word.parse("a b c a^-3"), ring) == (
            is_zero_in_first_homology(d, Word.parse("b c a^-2"), ring)
        )


@given(knots(max_strands=3, max_letters=7))
def test_longitude_of_a_knot_commutes_with_its_meridian_in_finite_quotients(d: Diagram) -> None:
    for images in islice(quotients(d.wirtinger()), 200):
        assert commute(d.meridian(), d.longitude(), images)


@given(diagrams(max_strands=3, max_letters=7))
def test_longitudes_of_links_commute_with_their_meridians_in_finite_quotients(d: Diagram) -> None:
    for images in islice(quotients(d.wirtinger()), 200):
        for component in range(1, len(d.components) + 1):
            assert commute(d.meridian(component), d.longitude(component), images)


@given(diagrams())
def test_exponents_of_longitudes_are_linking_numbers(d: Diagram) -> None:
    component = dict(zip(d.wirtinger().generators, (arc.component for arc in d.arcs), strict=True))
    for i, row in enumerate(d.linking_matrix(), start=1):
        sums = [0] * len(d.components)
        for name, sign in d.longitude(i):
            sums[component[name] - 1] += sign
        assert tuple(sums) == row
        assert component[str(d.meridian(i))] == i
