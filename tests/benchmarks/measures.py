"""Measuring and printing: best times, times in a fresh process, peers with a limit, memory, growth."""

from __future__ import annotations

import math
import multiprocessing
import subprocess
import sys
import time
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from multiprocessing.connection import Connection

__all__ = ["NOT_INSTALLED", "Missing", "growth", "heading", "in_new_process", "limited", "row", "seconds"]


@dataclass(frozen=True)
class Missing:
    """Why a peer has no time."""

    reason: str


NOT_INSTALLED = Missing("not installed")


def seconds(work: Callable[[], object], least: float = 0.3) -> float:
    """Best of several runs, in seconds: at least three, and until `least` seconds have been spent."""
    best, spent, runs = float("inf"), 0.0, 0
    while runs < 3 or spent < least:
        start = time.perf_counter()
        work()
        taken = time.perf_counter() - start
        best, spent, runs = min(best, taken), spent + taken, runs + 1
    return best


def limited(work: Callable[[], object], limit: float) -> float | Missing:
    """One run in a child process, given up after `limit` seconds."""
    context = multiprocessing.get_context("fork")
    ours, theirs = context.Pipe(duplex=False)
    child = context.Process(target=_report, args=(work, theirs))
    child.start()
    taken: float | Missing = Missing(f"> {limit:.0f} s, stopped")
    if ours.poll(limit):
        taken = ours.recv()
    child.terminate()
    child.join()
    return taken


def _report(work: Callable[[], object], to: Connection) -> None:
    start = time.perf_counter()
    try:
        work()
    except Exception as error:  # a peer may fail as it likes: the table says how
        to.send(Missing(str(error).split("(")[0].strip()))
    else:
        to.send(time.perf_counter() - start)


def in_new_process(code: str, runs: int = 5) -> float:
    """The least number that this code prints in a fresh process."""
    command = [sys.executable, "-c", code]
    results = [subprocess.run(command, capture_output=True, text=True, check=True) for _ in range(runs)]
    return min(float(result.stdout) for result in results)


def growth(times: Mapping[int, float]) -> float:
    """The exponent e for which c n^e fits the times best: the slope of the line through their logarithms."""
    x, y = [math.log(n) for n in times], [math.log(t) for t in times.values()]
    mean_x, mean_y = sum(x) / len(x), sum(y) / len(y)
    slope = sum((a - mean_x) * (b - mean_y) for a, b in zip(x, y, strict=True))
    return slope / sum((a - mean_x) ** 2 for a in x)


def heading() -> None:
    """The names of the columns."""
    print(f"\n{'work':46} {'ours':>11} {'target':>10}   {'peer':30} {'peer time':>16}    ratio  target")


def row(
    work: str,
    ours: float,
    target: str = "",
    peers: Mapping[str, float | Missing] | None = None,
    wanted: Sequence[str] = (),
) -> None:
    """One line of the table for each peer; `wanted` are the ratios aimed at, peer by peer."""
    first = f"{work:46} {_shown(ours):>11} {target:>10}"
    if not peers:
        print(first, flush=True)
    for k, (name, other) in enumerate((peers or {}).items()):
        ratio = f"{other / ours:8.1f} x" if isinstance(other, float) else " " * 10
        aim = wanted[k] if k < len(wanted) else ""
        time_ = _shown(other) if isinstance(other, float) else other.reason
        print(f"{first}   {name:30} {time_:>16} {ratio}  {aim}".rstrip(), flush=True)
        first = " " * len(first)


def _shown(taken: float) -> str:
    return f"{taken * 1e3:.2f} ms" if taken < 1 else f"{taken:.2f} s"
