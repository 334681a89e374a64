"""Irreducible factors of Laurent polynomials."""

from __future__ import annotations

from kt_widgets.algebra.flint_rings import ring
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.errors import AlgebraError

__all__ = ["irreducible_factors"]


def irreducible_factors(f: LaurentPolynomial) -> tuple[tuple[LaurentPolynomial, int], ...]:
    """The irreducible factors in normal form with their multiplicities, short ones first.

    Up to a unit the polynomial is their product. Over Z a content that is not 1 comes first, as one constant
    with multiplicity 1: it is not factored into primes.

    Raises
    ------
    AlgebraError
        For 0.

    Examples
    --------
    >>> f = LaurentPolynomial.parse("6t (1 - t)^2 (2 - t)")
    >>> [(str(p), e) for p, e in irreducible_factors(f)]
    [('6', 1), ('-2 + t', 1), ('-1 + t', 2)]
    >>> [(str(p), e) for p, e in irreducible_factors(f.change_ring(5))]
    [('3 + t', 1), ('4 + t', 2)]
    """
    if not f:
        raise AlgebraError("0 has no irreducible factors", accepted="a nonzero polynomial")
    base = ring(f.over)
    content, found = f.shifted(-f.lowest).factor()
    factors = [(LaurentPolynomial.from_flint(p, 0, base).normal_form(), int(e)) for p, e in found]
    factors.sort(key=lambda item: (item[0].span(), item[0].coefficients))
    constant = LaurentPolynomial.constant(base.value(content), f.over)
    return tuple([] if constant.is_unit() else [(constant.normal_form(), 1)]) + tuple(factors)
