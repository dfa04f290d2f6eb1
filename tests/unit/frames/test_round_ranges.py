"""Sets of rounds: joined, missing, counted, split, against sets of whole numbers."""

from __future__ import annotations

import itertools
import random

import numpy as np
import pytest

from renderer.frames.round_ranges import by_replicate, count, group, joined, missing, overlap, text, within


def of_set(numbers: set[int]) -> tuple[tuple[int, int], ...]:
    """Ranges of a set, one number at a time."""
    return joined((n, n + 1) for n in numbers)


def to_set(ranges: tuple[tuple[int, int], ...]) -> set[int]:
    """All numbers in ranges."""
    return {n for first, stop in ranges for n in range(first, stop)}


@pytest.mark.parametrize("seed", range(40))
def test_against_sets(seed: int) -> None:
    draw = random.Random(seed)
    a, b = ({n for n in range(30) if draw.random() < share} for share in (0.6, 0.4))
    ranges_a, ranges_b = of_set(a), of_set(b)
    assert to_set(ranges_a) == a
    assert all(x[1] < y[0] for x, y in itertools.pairwise(ranges_a))
    assert to_set(missing(ranges_a, ranges_b)) == b - a
    assert overlap(ranges_a, ranges_b) == bool(a & b)
    assert within(ranges_a, ranges_b) == (a <= b)
    assert count(ranges_a) == len(a)
    expected = np.bincount([n & 7 for n in a], minlength=8)
    np.testing.assert_array_equal(by_replicate(ranges_a), expected)


def test_a_round_that_stands_twice_is_an_error() -> None:
    with pytest.raises(ValueError, match="rounds 3 to 4 stand twice"):
        joined([(0, 5), (3, 9)])


@pytest.mark.parametrize(("rounds", "n"), [(64, 4), (10, 3), (7, 7), (1, 1), (1000, 17)])
def test_groups_share_all_rounds_evenly(rounds: int, n: int) -> None:
    groups = [group(rounds, k, n) for k in range(1, n + 1)]
    assert joined(groups) == ((0, rounds),)
    sizes = [stop - first for first, stop in groups]
    assert max(sizes) - min(sizes) <= 1


def test_ranges_as_a_person_reads_them() -> None:
    assert text(((0, 16), (20, 21), (30, 32))) == "0-15, 20, 30-31"
