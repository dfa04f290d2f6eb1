"""Rows of a picture shared out over threads. Kernels release the interpreter, so plain threads run side by side."""

from __future__ import annotations

import itertools
import os
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor

PIECES = 8  # a thread, so that dear rows do not keep one thread busy after the others are done
_threads = 1


def most_threads() -> int:
    """How many threads this process may run on."""
    if hasattr(os, "sched_getaffinity"):
        return len(os.sched_getaffinity(0))
    return os.cpu_count() or 1


def set_threads(threads: int | None) -> int:
    """Use so many threads, or all that this process may run on; gives how many. Never changes a bit of a picture."""
    global _threads
    _threads = most_threads() if threads is None else max(1, threads)
    return _threads


def over_rows(row_from: int, row_to: int, do: Callable[[int, int], None]) -> None:
    """Call `do(first, stop)` on pieces that make up the rows, at once on as many threads as are set.

    The first exception is raised once all pieces have ended.
    """
    rows = row_to - row_from
    pieces = min(rows, _threads * PIECES) if _threads > 1 else 1
    edges = [row_from + rows * piece // pieces for piece in range(pieces + 1)]
    if pieces == 1:
        do(row_from, row_to)
        return
    with ThreadPoolExecutor(_threads) as pool:
        waiting = [pool.submit(do, first, stop) for first, stop in itertools.pairwise(edges)]
    for one in waiting:
        one.result()
