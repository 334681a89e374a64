"""Straight-line programs: the elimination of one sparse matrix, written down once and run at many points.

The schedule is made of the pattern of nonzero entries alone; values at one trial point only keep it from
pivots that vanish identically. Whoever runs it checks each pivot again at each point.
"""

from __future__ import annotations

from collections.abc import Sequence
from heapq import heapify, heappop, heappush
from typing import NamedTuple

from kt_widgets.algebra.sparse import Row, permutation_sign

__all__ = ["MOST_SUMMANDS", "Program", "Step", "straight_line"]

MOST_SUMMANDS = 7
"""How many products a slot may take up before it must be reduced: each is below 2^60, a slot holds 2^64."""

_TRIAL_PRIME = 2**61 - 1
_TRIAL_POINT = 1_234_567_890_123_456_789 % _TRIAL_PRIME


class Step(NamedTuple):
    """One pivot: entry (r, c) loses (entry r of the column) / pivot * (entry c of the row).

    Everything is a slot. ``targets`` are the entries (r, c), row after row; of these ``fresh`` were 0 before,
    and ``crowded`` must be reduced before they are added to.
    """

    pivot: int
    column: tuple[int, ...]
    row: tuple[int, ...]
    targets: tuple[int, ...]
    fresh: tuple[int, ...]
    crowded: tuple[int, ...]


class Program(NamedTuple):
    """The elimination of a square matrix.

    The determinant is ``sign`` times the product of the pivots, at every point where none of them is 0.
    If no pivot was left before the end, ``rest`` names the slots of a row of what is left: the determinant
    is 0 at every point where no pivot before is 0 and all of these are.

    Attributes
    ----------
    slots : int
        How many values have to be kept at a time.
    entries : tuple of (row, column)
        The entry that slot 0, 1, ... starts with.
    steps : tuple of Step
    sign : int
    rest : tuple of int or None
    """

    slots: int
    entries: tuple[tuple[int, int], ...]
    steps: tuple[Step, ...]
    sign: int
    rest: tuple[int, ...] | None


def _trial_values(rows: Sequence[Row]) -> dict[tuple[int, int], int]:
    powers: dict[int, int] = {}
    values = {}
    for i, row in enumerate(rows):
        for j, f in row.items():
            total = 0
            for exponent, coefficient in f.terms().items():
                power = powers.get(exponent)
                if power is None:
                    power = powers[exponent] = pow(_TRIAL_POINT, exponent, _TRIAL_PRIME)
                total += coefficient * power
            values[i, j] = total % _TRIAL_PRIME
    return values


def straight_line(rows: Sequence[Row]) -> Program:
    """The elimination of a square matrix with columns 0, 1, ..., cheapest fill first as in `eliminate_units`.

    Examples
    --------
    >>> from kt_widgets.algebra.matrix import LaurentMatrix
    >>> program = straight_line(LaurentMatrix([["1 - t", 2], [3, "1 + t"]]).sparse_rows())
    >>> for step in program.steps:
    ...     print(step)
    Step(pivot=0, column=(2,), row=(1,), targets=(3,), fresh=(), crowded=())
    Step(pivot=3, column=(), row=(), targets=(), fresh=(), crowded=())
    >>> program.sign, program.rest
    (1, None)
    """
    entries = tuple((i, j) for i, row in enumerate(rows) for j in sorted(row))
    trial_values = _trial_values(rows)
    trial = [trial_values[place] for place in entries]
    summands = [0] * len(entries)
    left: dict[int, dict[int, int]] = {i: {} for i in range(len(rows))}
    columns: dict[int, set[int]] = {}
    for slot, (i, j) in enumerate(entries):
        left[i][j] = slot
        columns.setdefault(j, set()).add(i)
    queue = [
        ((len(left[i]) - 1) * (len(columns[j]) - 1), i, j)
        for slot, (i, j) in enumerate(entries)
        if trial[slot]
    ]
    heapify(queue)
    free: list[int] = []
    images = [0] * len(rows)
    steps = []
    while queue:
        cost, i, j = heappop(queue)
        line = left.get(i)
        if line is None or j not in line or not trial[line[j]]:
            continue
        current = (len(line) - 1) * (len(columns[j]) - 1)
        if current > cost:
            heappush(queue, (current, i, j))
            continue
        del left[i]
        images[i] = j
        pivot = line.pop(j)
        for c in line:
            columns[c].discard(i)
        below = sorted(columns.pop(j) - {i})
        column = tuple(left[k].pop(j) for k in below)
        inverse = pow(trial[pivot], -1, _TRIAL_PRIME)
        targets, fresh, crowded = [], [], []
        for k, slot in zip(below, column, strict=True):
            other = left[k]
            factor = trial[slot] * inverse % _TRIAL_PRIME
            for c, source in line.items():
                target = other.get(c)
                if target is None:
                    if free:
                        target = free.pop()
                    else:
                        target = len(trial)
                        trial.append(0)
                        summands.append(0)
                    trial[target] = summands[target] = 0
                    other[c] = target
                    columns[c].add(k)
                    fresh.append(target)
                elif summands[target] == MOST_SUMMANDS:
                    summands[target] = 0
                    crowded.append(target)
                summands[target] += 1
                trial[target] = (trial[target] - factor * trial[source]) % _TRIAL_PRIME
                targets.append(target)
        for k in below:
            other = left[k]
            width = len(other) - 1
            for c, slot in other.items():
                if trial[slot]:
                    heappush(queue, (width * (len(columns[c]) - 1), k, c))
        row = tuple(line.values())
        steps.append(Step(pivot, column, row, tuple(targets), tuple(fresh), tuple(crowded)))
        free += (pivot, *column, *row)
    shortest = min(left.values(), key=len, default=None)
    rest = None if shortest is None else tuple(shortest.values())
    sign = permutation_sign(images) if rest is None else 1
    return Program(len(trial), entries, tuple(steps), sign, rest)
