"""Words of the group whose lifts are given cycles of the cover, kept compressed."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import groupby
from typing import TYPE_CHECKING

from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.errors import AlgebraError
from kt_widgets.groups.powers import PowerWord
from kt_widgets.groups.words import Word

if TYPE_CHECKING:
    from kt_widgets.covers.cover import Cover

__all__ = ["chain_of_powers", "word_of_cycle"]


def chain_of_powers(cover: Cover, word: PowerWord) -> LaurentMatrix:
    """The 1-chain of the lift that starts at e, without writing the word out.

    The lift of u^n adds up to (1 + t^w + ... + t^(w (n - 1))) times that of u, w the weight of u.

    Examples
    --------
    >>> from kt_widgets.covers.cover import Cover
    >>> from kt_widgets.groups.presentations import Presentation
    >>> x = Cover(Presentation.parse("< a, b | a b a = b a b >"))
    >>> print(chain_of_powers(x, PowerWord(((Word.parse("b a^-1"), 10**20), (Word.parse("a"), 2)))))
    [[-99999999999999999999 + t],
     [100000000000000000000    ]]
    """
    multiples: dict[Word, LaurentPolynomial] = {}
    at = 0
    for base, exponent in word.factors:
        piece, count = (base, exponent) if exponent >= 0 else (base.inverse(), -exponent)
        weight = piece.weight(cover.weights)
        steps = LaurentPolynomial.monomial(at, count)
        if weight:
            t_to_weight = LaurentPolynomial.monomial(weight)
            steps = LaurentPolynomial.monomial(at) * (t_to_weight**count - 1).exact_division(t_to_weight - 1)
        multiples[piece] = multiples.get(piece, LaurentPolynomial()) + steps
        at += weight * count
    chains = (cover.chain(piece) * steps for piece, steps in multiples.items())
    return sum(chains, LaurentMatrix.zero(len(cover.presentation.generators), 1))


def word_of_cycle(cover: Cover, cycle: Sequence[LaurentPolynomial]) -> PowerWord:
    """See `kt_widgets.covers.cover.Cover.word_of_cycle`.

    With s of weight 1, the word s^k a s^-(k + w) for a generator a of weight w lifts to t^k a and a part of
    the lifts of s; in the product over all terms of a cycle these parts add up to 0. Terms c t^k a of one
    generator make s^k (a s^-w)^c s^-k, and neighbouring powers of s are joined.
    """
    names = cover.presentation.generators
    if len(cycle) != len(names):
        raise AlgebraError(
            f"{len(cycle)} coefficients for {len(names)} generators", accepted="one for each generator"
        )
    if cover.sheets != 1:
        raise AlgebraError(
            "the cover is not connected, so a cycle need not be the lift of one word",
            accepted="weights whose greatest common divisor is 1",
        )
    step = _weight_one(cover)
    factors: list[tuple[Word, int]] = []
    at = 0
    for name, f in zip(names, cycle, strict=True):
        loop = Word(((name, 1),)) * step ** -cover.weights[name]
        if not len(loop):
            continue
        for exponent, value in sorted(f.terms().items()):
            if value.denominator != 1:
                raise AlgebraError(
                    f"the coefficient {f} of {name} is not whole",
                    where=str(f"generator {name}"),
                    accepted="whole coefficients: a multiple of the cycle",
                )
            factors += [(step, exponent - at), (loop, int(value))]
            at = exponent
    factors.append((step, -at))
    joined = [(base, sum(e for _, e in run)) for base, run in groupby(factors, key=lambda pair: pair[0])]
    word = PowerWord(tuple((base, exponent) for base, exponent in joined if exponent))
    over = cycle[0].over if cycle else "Z"
    if chain_of_powers(cover, word).change_ring(over).column(0) != tuple(cycle):
        raise AlgebraError("the chain is no cycle", accepted="a chain that boundary(1) sends to 0")
    return word


def _weight_one(cover: Cover) -> Word:
    """A word of weight 1: a generator if there is one, else by Euclid's algorithm on the weights."""
    words = [(weight, Word(((name, 1),))) for name, weight in cover.weights.items() if weight]
    words = [(weight, word) if weight > 0 else (-weight, word.inverse()) for weight, word in words]
    while (least := min(words, key=lambda pair: pair[0]))[0] > 1:
        least_weight, least_word = least
        words = [
            (rest, word * least_word ** -(weight // least_weight))
            for weight, word in words
            if (rest := weight % least_weight)
        ]
        words.append(least)
    return least[1]
