"""Sets of rounds, as ranges: (first, stop) pairs in rising order that do not touch."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
import numpy.typing as npt

from renderer.base.constants import N_REPLICATES

Ranges = tuple[tuple[int, int], ...]


def joined(ranges: Iterable[tuple[int, int]]) -> Ranges:
    """Ranges that do not overlap, in order, with those that touch made one. Raises ValueError where any overlap."""
    found: list[tuple[int, int]] = []
    for first, stop in sorted(pair for pair in ranges if pair[0] < pair[1]):
        if found and first < found[-1][1]:
            raise ValueError(f"rounds {first} to {min(stop, found[-1][1]) - 1} stand twice")
        if found and first == found[-1][1]:
            found[-1] = (found[-1][0], stop)
        else:
            found.append((first, stop))
    return tuple(found)


def overlap(a: Ranges, b: Ranges) -> bool:
    """Whether any round is in both."""
    return any(first < other_stop and other_first < stop for first, stop in a for other_first, other_stop in b)


def missing(done: Ranges, wanted: Ranges) -> Ranges:
    """What of `wanted` is not in `done`."""
    left: list[tuple[int, int]] = []
    for first, stop in wanted:
        for done_first, done_stop in done:
            if done_stop <= first or done_first >= stop:
                continue
            if first < done_first:
                left.append((first, done_first))
            first = max(first, done_stop)
        if first < stop:
            left.append((first, stop))
    return joined(left)


def within(inner: Ranges, outer: Ranges) -> bool:
    """Whether all of `inner` is in `outer`."""
    return not missing(outer, inner)


def count(ranges: Ranges) -> int:
    """How many rounds."""
    return sum(stop - first for first, stop in ranges)


def by_replicate(ranges: Ranges) -> npt.NDArray[np.int64]:
    """(8,): how many rounds of each replicate; round r belongs to replicate r mod 8."""
    counts = np.zeros(N_REPLICATES, dtype=np.int64)
    for first, stop in ranges:
        whole, rest = divmod(stop - first, N_REPLICATES)
        counts += whole
        for k in range(rest):
            counts[(first + k) % N_REPLICATES] += 1
    return counts


def group(rounds: int, k: int, n: int) -> tuple[int, int]:
    """The rounds of portion k of n (from 1): a contiguous share of `rounds`, as even as can be."""
    return (k - 1) * rounds // n, k * rounds // n


def text(ranges: Ranges) -> str:
    """The ranges as a person reads them, last rounds included."""
    return ", ".join(f"{first}-{stop - 1}" if stop - first > 1 else f"{first}" for first, stop in ranges)
