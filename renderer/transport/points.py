"""Sample points: Owen-scrambled Sobol pairs that depend on pixel, round and dimension and on nothing else.

B. Burley, "Practical Hash-based Owen Scrambling", JCGT 9(4), 2020; S. Laine and T. Karras, "Stratified Sampling for
Stochastic Transparency", EGSR 2011 (the scramble); I. M. Sobol', USSR Comput. Math. Math. Phys. 7(4), 1967.
"""

from __future__ import annotations

import numpy as np

from renderer.base.jit import kernel

MASK = np.uint64(0xFFFFFFFF)
TO_UNIT = 1.0 / 4294967296.0


@kernel
def mix(value):
    """A 64-bit value well stirred: the finaliser of SplitMix64 (Steele, Lea and Flood, OOPSLA 2014)."""
    x = np.uint64(value) + np.uint64(0x9E3779B97F4A7C15)
    x = (x ^ (x >> np.uint64(30))) * np.uint64(0xBF58476D1CE4E5B9)
    x = (x ^ (x >> np.uint64(27))) * np.uint64(0x94D049BB133111EB)
    return x ^ (x >> np.uint64(31))


@kernel
def reverse_bits(value):
    """The low 32 bits in the opposite order."""
    x = np.uint64(value) & MASK
    x = ((x & np.uint64(0x55555555)) << np.uint64(1)) | ((x >> np.uint64(1)) & np.uint64(0x55555555))
    x = ((x & np.uint64(0x33333333)) << np.uint64(2)) | ((x >> np.uint64(2)) & np.uint64(0x33333333))
    x = ((x & np.uint64(0x0F0F0F0F)) << np.uint64(4)) | ((x >> np.uint64(4)) & np.uint64(0x0F0F0F0F))
    x = ((x & np.uint64(0x00FF00FF)) << np.uint64(8)) | ((x >> np.uint64(8)) & np.uint64(0x00FF00FF))
    return ((x << np.uint64(16)) | (x >> np.uint64(16))) & MASK


@kernel
def scramble_reversed(reversed_bits, seed):
    """Owen scrambling of a number whose bits are reversed (Laine and Karras 2011; constants of Burley 2020)."""
    x = np.uint64(reversed_bits)
    s = np.uint64(seed) & MASK
    x = (x + s) & MASK
    x = x ^ ((x * np.uint64(0x6C50B47C)) & MASK)
    x = x ^ ((x * np.uint64(0xB82F1E52)) & MASK)
    x = x ^ ((x * np.uint64(0xC7AFE638)) & MASK)
    return x ^ ((x * np.uint64(0x8D22F6E6)) & MASK)


@kernel
def second_dimension_reversed(index):
    """The second Sobol coordinate of `index`, bits reversed: Pascal's triangle modulo 2, applied in five halvings."""
    x = np.uint64(index) & MASK
    x = x ^ ((x >> np.uint64(1)) & np.uint64(0x55555555))
    x = x ^ ((x >> np.uint64(2)) & np.uint64(0x33333333))
    x = x ^ ((x >> np.uint64(4)) & np.uint64(0x0F0F0F0F))
    x = x ^ ((x >> np.uint64(8)) & np.uint64(0x00FF00FF))
    return x ^ ((x >> np.uint64(16)) & np.uint64(0x0000FFFF))


@kernel
def stream(seed, pixel, replicate):
    """The key of all the sample points of one pixel in one replicate."""
    return mix(mix(mix(np.uint64(seed)) ^ np.uint64(pixel)) ^ np.uint64(replicate))


@kernel
def pair(key, index, dimension):
    """Two numbers in [0, 1): point `index` of a Sobol pair scrambled by (`key`, `dimension`).

    Over 2^m successive indices the points are stratified in every elementary interval of area 2^-m, and points of
    different dimensions are independent.
    """
    h = mix(np.uint64(key) ^ mix(np.uint64(dimension)))
    shuffled = reverse_bits(scramble_reversed(reverse_bits(np.uint64(index)), h))
    h = mix(h)
    # The first coordinate is the index with its bits reversed, so its own reversal is the index itself.
    first = reverse_bits(scramble_reversed(shuffled, h))
    second = reverse_bits(scramble_reversed(second_dimension_reversed(shuffled), h >> np.uint64(32)))
    return np.float64(first) * TO_UNIT, np.float64(second) * TO_UNIT
