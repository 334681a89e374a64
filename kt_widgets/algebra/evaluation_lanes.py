"""Straight-line programs run on arrays of points modulo one prime, with numpy. Loaded when first needed."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from itertools import accumulate
from typing import NamedTuple, TypeAlias

import numpy as np
import numpy.typing as npt

from kt_widgets.algebra.evaluation_program import Program
from kt_widgets.algebra.laurent import LaurentPolynomial

__all__ = ["Lanes", "Points", "Runner", "Terms", "powers", "runner"]

Lanes = npt.NDArray[np.uint64]
"""A residue for each point."""

Points = npt.NDArray[np.int64]
"""Exponents of a root of unity."""

Runner: TypeAlias = "Callable[[Lanes, Points, int], tuple[Lanes, npt.NDArray[np.bool_]]]"
"""Takes the powers of a root of unity, which of them to put for t, and the prime, which is below 2^30.

Gives the determinants there, up to the program's sign, and where they could not be found.
"""


class Terms(NamedTuple):
    """The starting values of slots 0, 1, ... as sums of coefficient * t^exponent with exponents 0 or more.

    The terms of slot s are numbers ``ends[s]`` to ``ends[s + 1] - 1``, at least one.
    """

    coefficients: tuple[int, ...]
    exponents: npt.NDArray[np.int64]
    ends: npt.NDArray[np.int64]

    @classmethod
    def of(cls, polynomials: Iterable[LaurentPolynomial]) -> Terms:
        """The terms of nonzero polynomials, one for each slot."""
        listed = [f.terms() for f in polynomials]
        ends = np.array([0, *accumulate(map(len, listed))], np.int64)
        exponents = np.array([e for terms in listed for e in terms], np.int64)
        return cls(tuple(c for terms in listed for c in terms.values()), exponents, ends)

    def residues(self, prime: int) -> Lanes:
        """The coefficients modulo a prime."""
        return np.array([c % prime for c in self.coefficients], np.uint64)


def powers(root: int, order: int, p: int) -> Lanes:
    """root^0, root^1, ..., root^(order - 1) modulo p, by doubling."""
    found = np.ones(1, np.uint64)
    while len(found) < order:
        found = np.concatenate((found, found * np.uint64(pow(root, len(found), p)) % np.uint64(p)))
    return found[:order]


def _reduced(values: Lanes, p: np.uint64) -> Lanes:
    # Division by one number is vectorised in numpy, the remainder is not.
    quotients = values // p
    quotients *= p
    return values - quotients


def _inverses(values: Lanes, p: np.uint64) -> Lanes:
    """The inverses of nonzero residues, by multiplication of pairs down to a few and back up."""
    levels = []
    while len(values) > 16:
        half = len(values) // 2
        levels.append(values)
        odd = values[2 * half :]
        values = np.concatenate((_reduced(values[:half] * values[half : 2 * half], p), odd))
    inverses = np.array([pow(int(v), -1, int(p)) for v in values], np.uint64)
    for level in reversed(levels):
        half = len(level) // 2
        products = inverses[:half]
        first = _reduced(products * level[half : 2 * half], p)
        second = _reduced(products * level[:half], p)
        inverses = np.concatenate((first, second, inverses[half:]))
    return inverses


def runner(program: Program, terms: Terms) -> Runner:
    """The program with its starting values, ready to be run modulo one prime after another."""
    exponents, which = np.unique(terms.exponents, return_inverse=True)

    def run(table: Lanes, points: Points, prime: int) -> tuple[Lanes, npt.NDArray[np.bool_]]:
        p = np.uint64(prime)
        slots = np.zeros((program.slots, len(points)), np.uint64)
        at = table[exponents[:, None] * points % len(table)]
        products = at[which] * terms.residues(prime)[:, None]
        starts = terms.ends[:-1]
        slots[: len(starts)] = _reduced(np.add.reduceat(_reduced(products, p), starts, axis=0), p)
        determinant = np.ones(len(points), np.uint64)
        failed = np.zeros(len(points), bool)
        for step in program.steps:
            pivot = _reduced(slots[step.pivot], p)
            vanishes = pivot == 0
            if vanishes.any():
                failed |= vanishes
                pivot[vanishes] = 1
            determinant = _reduced(determinant * pivot, p)
            if not step.targets:
                continue
            if step.crowded:
                crowded = list(step.crowded)
                slots[crowded] = _reduced(slots[crowded], p)
            if step.fresh:
                slots[list(step.fresh)] = 0
            negative = p - _inverses(pivot, p)
            factors = _reduced(_reduced(slots[list(step.column)], p) * negative, p)
            row = _reduced(slots[list(step.row)], p)
            products = factors[:, None, :] * row[None, :, :]
            slots[list(step.targets)] += products.reshape(len(step.targets), len(points))
        if program.rest is not None:
            rest = _reduced(slots[list(program.rest)], p)
            failed |= rest.any(axis=0)
            determinant[:] = 0
        return determinant, failed

    return run
