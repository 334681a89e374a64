"""Values of a wrong type are refused in words."""

from __future__ import annotations

from collections.abc import Callable

import pytest

import kt_widgets as kt

TREFOIL = kt.Diagram.from_braid([1, 1, 1])


@pytest.mark.parametrize(
    ("call", "message"),
    [
        (lambda: kt.Ideal(3), "3 is no list of generators"),  # type: ignore[arg-type]
        (lambda: kt.Ideal("3, 1 + t"), "Ideal.parse"),
        (lambda: kt.from_json(5), "int is no text"),  # type: ignore[arg-type]
        (lambda: TREFOIL.same_diagram(5), "int is no diagram"),  # type: ignore[arg-type]
        (lambda: kt.compare(5, 6), "int is no module"),  # type: ignore[arg-type]
        (lambda: kt.ChainComplex.from_matrices(5, 5), "5 is no list of rows"),  # type: ignore[arg-type]
        (lambda: kt.ChainComplex.from_matrices([5], [[1]]), "is no list of rows"),  # type: ignore[list-item]
        (lambda: kt.Presentation.parse(5), "int is no text"),  # type: ignore[arg-type]
        (lambda: kt.Cover(TREFOIL), "Diagram"),  # type: ignore[arg-type]
        (lambda: kt.seifert_matrix("abc"), "str, not a list"),  # type: ignore[arg-type]
        (lambda: TREFOIL.cover().cyclic_cover(0), "no 0-fold cover"),
        (lambda: kt.Module.from_matrix([["2"]]).over(4), "not a field"),
    ],
)
def test_wrong_values_are_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(kt.KtError, match=message):
        call()
