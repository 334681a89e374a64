"""The order in which units are taken out."""

from __future__ import annotations

from kt_widgets.algebra.elimination import eliminate
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix


def test_a_closed_band_keeps_its_units_to_the_end() -> None:
    # As for the torus link T(2, n): each crossing of its braid relates three arcs in a row.
    n = 40
    band = {}
    for i in range(n):
        for shift, entry in enumerate(("1", "t - 1", "-t")):
            band[(i + shift) % n, i] = LaurentPolynomial(entry)
    assert eliminate(LaurentMatrix.from_entries(band, (n, n))).core.shape[0] <= 3
