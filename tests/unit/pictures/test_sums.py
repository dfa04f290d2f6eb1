"""Sums of whole quanta are the same in any order, and say so when they are full."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.pictures.sums import Sums, SumsFull, add, clear, empty_sums, quantum_of, same


def random_sums(seed: int) -> Sums:
    """Sums full of noise of all sizes."""
    draw = np.random.default_rng(seed)
    sums = empty_sums(70, 5, 4, 2)
    for array in sums.arrays().values():
        array[...] = draw.integers(-(2**55), 2**55, array.shape) >> draw.integers(0, 50, array.shape)
    return sums


def test_any_order_and_grouping_gives_the_same_bits() -> None:
    parts = [random_sums(seed) for seed in range(12)]
    forward, shuffled, grouped = (empty_sums(70, 5, 4, 2) for _ in range(3))
    for part in parts:
        add(forward, part)
    for k in np.random.default_rng(0).permutation(12):
        add(shuffled, parts[k])
    for group in (parts[:5], parts[5:6], parts[6:]):
        total = empty_sums(70, 5, 4, 2)
        for part in group:
            add(total, part)
        add(grouped, total)
    assert same(forward, shuffled)
    assert same(forward, grouped)
    assert not same(forward, parts[0])


@pytest.mark.parametrize("name", ["xyz", "replicate_y", "kinds", "bins"])
def test_overflow_is_never_silent(name: str) -> None:
    a, b = empty_sums(70, 5, 4, 2), empty_sums(70, 5, 4, 2)
    a.arrays()[name][(-1,) * a.arrays()[name].ndim] = 2**62
    b.arrays()[name][(-1,) * b.arrays()[name].ndim] = 2**62
    with pytest.raises(SumsFull):
        add(a, b)
    a.arrays()[name][(-1,) * a.arrays()[name].ndim] = -(2**62)
    add(a, b)
    assert not a.arrays()[name].any()


def test_sums_of_other_sizes_are_not_added() -> None:
    with pytest.raises(ValueError, match="differ in shape"):
        add(empty_sums(3, 4, 4), empty_sums(4, 3, 4))


def test_clear_leaves_nothing() -> None:
    sums = random_sums(1)
    clear(sums)
    assert same(sums, empty_sums(70, 5, 4, 2))
    assert sums.size == (70, 5)
    assert sums.nbytes == 70 * 5 * 8 * (3 + 8 + 12 + 2)


@pytest.mark.parametrize(
    ("reference", "power"),
    [(1.0, -46), (1.999, -46), (2.0, -45), (1000.0, -37), (0.75, -47), (1.6e9, -16), (1e-300, -1043)],
)
def test_the_quantum_is_a_power_of_two_from_the_lights_alone(reference: float, power: int) -> None:
    assert quantum_of(reference) == 2.0**power


@pytest.mark.parametrize("reference", [0.0, -1.0, float("inf"), float("nan")])
def test_a_quantum_needs_light(reference: float) -> None:
    with pytest.raises(ValueError, match="brightest light"):
        quantum_of(reference)
