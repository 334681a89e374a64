"""Straight-line programs compiled by numba: the same answers as `evaluation_lanes`, several times faster.

Residues are multiplied by Montgomery's method (P. L. Montgomery, Modular multiplication without trial
division, Math. Comp. 44 (1985)) with R = 2^32: a factor x is kept as x R, an unreduced sum of products as
x R^2. Loaded only where numba is installed.
"""

from __future__ import annotations

from itertools import accumulate, chain
from typing import Any

import numba
import numpy as np
import numpy.typing as npt

from kt_widgets.algebra.evaluation_lanes import Lanes, Points, Runner, Terms
from kt_widgets.algebra.evaluation_program import Program

__all__ = ["runner"]

_BLOCK = 128
"""Points treated at a time, so that the slots in use stay in the processor's cache."""


def _compiled(function: Any) -> Any:
    try:
        return numba.njit(cache=True, nogil=True)(function)
    except RuntimeError:
        # No folder to keep the compiled code in.
        return numba.njit(nogil=True)(function)


def _joined(parts: Any) -> tuple[npt.NDArray[np.int64], npt.NDArray[np.int64]]:
    """Sequences one after another, and where each begins and ends."""
    parts = list(parts)
    ends = np.array([0, *accumulate(map(len, parts))], np.int64)
    return np.fromiter(chain.from_iterable(parts), np.int64, int(ends[-1])), ends


@_compiled
def _reduce(x: Any, p: Any, minus_inverse: Any) -> Any:  # pragma: no cover
    """x / R modulo p in [0, p), for x below 2^63."""
    mask = np.uint64(0xFFFFFFFF)
    m = ((x & mask) * minus_inverse) & mask
    x = (x + m * p) >> np.uint64(32)
    two = p + p
    x = x - two if x >= two else x
    return x - p if x >= p else x


@_compiled
def _run(  # pragma: no cover
    slots: Any,
    coefficients: Any,
    exponents: Any,
    ends: Any,
    table: Any,
    points: Any,
    p: Any,
    minus_inverse: Any,
    pivots: Any,
    columns: Any,
    column_ends: Any,
    rows: Any,
    row_ends: Any,
    targets: Any,
    target_ends: Any,
    fresh: Any,
    fresh_ends: Any,
    crowded: Any,
    crowded_ends: Any,
    rest: Any,
    determinant: Any,
    failed: Any,
) -> None:
    order = len(table)
    one = np.uint64(1)
    top = np.uint64(63)
    # A multiple of p just below 2^63, which keeps sums of products from overflowing.
    full = (one << top) // p * p
    square = np.uint64(0xFFFFFFFFFFFFFFFF) % p + one  # R^2
    unit = (one << np.uint64(32)) % p  # R
    values = np.zeros((slots, _BLOCK), np.uint64)
    widest = 1
    for k in range(len(pivots)):
        widest = max(widest, row_ends[k + 1] - row_ends[k])
    row = np.zeros((widest, _BLOCK), np.uint32)
    factor = np.zeros(_BLOCK, np.uint32)
    pivot = np.zeros(_BLOCK, np.uint64)
    prefix = np.zeros(_BLOCK, np.uint64)
    minus = np.zeros(_BLOCK, np.uint64)
    total = np.zeros(_BLOCK, np.uint64)
    scaled = np.empty(order, np.uint64)
    for i in range(order):
        scaled[i] = table[i] * square % p
    for begin in range(0, len(points), _BLOCK):
        size = min(_BLOCK, len(points) - begin)
        for s in range(len(ends) - 1):
            values[s, :size] = 0
            for k in range(ends[s], ends[s + 1]):
                for x in range(size):
                    power = scaled[exponents[k] * points[begin + x] % order]
                    v = values[s, x] + coefficients[k] * power
                    values[s, x] = v - (v >> top) * full
        total[:size] = unit
        for k in range(len(pivots)):
            for x in range(size):
                v = values[pivots[k], x]
                v = _reduce(v - (v >> top) * full, p, minus_inverse)
                if v == 0:
                    failed[begin + x] = True
                    v = unit
                pivot[x] = v
                total[x] = _reduce(total[x] * v, p, minus_inverse)
            if target_ends[k] == target_ends[k + 1]:
                continue
            # -1/pivot at all points with one inversion: products from the left, then back from the right.
            running = unit
            for x in range(size):
                prefix[x] = running
                running = _reduce(running * pivot[x], p, minus_inverse)
            # The inversion itself is a power, by Fermat's theorem.
            inverse = unit
            exponent = p - np.uint64(2)
            while exponent:
                if exponent & one:
                    inverse = _reduce(inverse * running, p, minus_inverse)
                running = _reduce(running * running, p, minus_inverse)
                exponent >>= one
            for x in range(size - 1, -1, -1):
                minus[x] = p - _reduce(inverse * prefix[x], p, minus_inverse)
                inverse = _reduce(inverse * pivot[x], p, minus_inverse)
            for s in crowded[crowded_ends[k] : crowded_ends[k + 1]]:
                place = values[s]
                for x in range(size):
                    place[x] -= (place[x] >> top) * full
            for s in fresh[fresh_ends[k] : fresh_ends[k + 1]]:
                values[s, :size] = 0
            width = row_ends[k + 1] - row_ends[k]
            for c in range(width):
                place = values[rows[row_ends[k] + c]]
                entry = row[c]
                for x in range(size):
                    v = place[x] - (place[x] >> top) * full
                    entry[x] = np.uint32(_reduce(v, p, minus_inverse))
            at_target = target_ends[k]
            for s in columns[column_ends[k] : column_ends[k + 1]]:
                place = values[s]
                for x in range(size):
                    v = place[x] - (place[x] >> top) * full
                    v = _reduce(v, p, minus_inverse)
                    factor[x] = np.uint32(_reduce(v * minus[x], p, minus_inverse))
                for c in range(width):
                    place = values[targets[at_target]]
                    entry = row[c]
                    at_target += 1
                    for x in range(size):
                        place[x] += np.uint64(factor[x]) * np.uint64(entry[x])
        for s in rest:
            for x in range(size):
                v = values[s, x]
                if _reduce(v - (v >> top) * full, p, minus_inverse):
                    failed[begin + x] = True
        for x in range(size):
            determinant[begin + x] = _reduce(total[x], p, minus_inverse)


def runner(program: Program, terms: Terms) -> Runner:
    """As `evaluation_lanes.runner`."""
    steps = program.steps
    parts = ("column", "row", "targets", "fresh", "crowded")
    arrays = [array for part in parts for array in _joined(getattr(step, part) for step in steps)]
    pivots = np.array([step.pivot for step in steps], np.int64)
    rest = np.array(program.rest or (), np.int64)

    def run(table: Lanes, points: Points, prime: int) -> tuple[Lanes, npt.NDArray[np.bool_]]:
        determinant = np.zeros(len(points), np.uint64)
        failed = np.zeros(len(points), np.bool_)
        minus_inverse = np.uint64(-pow(prime, -1, 2**32) % 2**32)
        _run(
            program.slots,
            terms.residues(prime),
            terms.exponents,
            terms.ends,
            table,
            points,
            np.uint64(prime),
            minus_inverse,
            pivots,
            *arrays,
            rest,
            determinant,
            failed,
        )
        if program.rest is not None:
            determinant[:] = 0
        return determinant, failed

    return run
