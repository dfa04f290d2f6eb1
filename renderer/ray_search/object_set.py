"""A small set of objects in two whole numbers: up to eight, each in 16 bits, an object as often as it was put in.

An object that is entered twice (two of its parts overlap) must be left twice. Object ids up to 65,534 fit.
"""

from __future__ import annotations

import numpy as np

from renderer.base.jit import kernel

LARGEST = 65534
ONES = np.uint64(0xFFFF)


@kernel
def slot(word, k):
    """The 16 bits in slot k, 0 to 3, of a word."""
    return (np.uint64(word) >> np.uint64(16 * k)) & ONES


@kernel
def written(word, k, value):
    """The word with 16 bits in slot k replaced."""
    shift = np.uint64(16 * k)
    return (np.uint64(word) & ~(ONES << shift)) | (np.uint64(value) << shift)


@kernel
def set_item(low, high, k):
    """The object in slot k, 0 to 7; -1 where there is none."""
    word = np.uint64(high) if k >= 4 else np.uint64(low)
    return np.int64(slot(word, k & 3)) - 1


@kernel
def replaced(low, high, old, new):
    """The set with the first slot that holds `old` (object + 1, 0 for an empty one) set to `new`, and whether found."""
    for k in range(4):
        if slot(low, k) == old:
            return written(low, k, new), np.uint64(high), True
    for k in range(4):
        if slot(high, k) == old:
            return np.uint64(low), written(high, k, new), True
    return np.uint64(low), np.uint64(high), False


@kernel
def set_with(low, high, item):
    """The set with an object more, and whether it fitted; unchanged where it did not."""
    if item < 0 or item > LARGEST:
        return np.uint64(low), np.uint64(high), False
    return replaced(low, high, np.uint64(0), np.uint64(item + 1))


@kernel
def set_without(low, high, item):
    """The set with an object less, and whether it was there; unchanged where it was not."""
    if item < 0 or item > LARGEST:
        return np.uint64(low), np.uint64(high), False
    return replaced(low, high, np.uint64(item + 1), np.uint64(0))
