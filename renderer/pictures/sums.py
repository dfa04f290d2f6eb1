"""Exact sums of rounds: every value is a whole number of quanta, so that any order of addition gives the same bits."""

from __future__ import annotations

import math
from dataclasses import dataclass, fields

import numpy as np
import numpy.typing as npt

from renderer.base.constants import N_REPLICATES

Counts = npt.NDArray[np.int64]

QUANTUM_BITS = 46  # a value as bright as the brightest light takes 46 bits; 16 are left for the number of rounds
ROWS_AT_ONCE = 64  # rows added at a time, so that checking for overflow needs little memory


class SumsFull(Exception):
    """A sum would not fit 63 bits."""


@dataclass(frozen=True)
class Sums:
    """Sums over rounds, in quanta, of the camera's window. All int64, C order.

    `xyz` (rows, columns, 3): CIE XYZ; `replicate_y` (8, rows, columns): Y of the rounds of each replicate; `kinds`
    (rows, columns, n_kinds, 3): XYZ by kind of light; `bins` (n_bins, rows, columns): spectral radiance at the
    wavelengths that the shot asks for.
    """

    xyz: Counts
    replicate_y: Counts
    kinds: Counts
    bins: Counts

    @property
    def size(self) -> tuple[int, int]:
        """Rows and columns."""
        rows, columns = self.xyz.shape[:2]
        return rows, columns

    @property
    def nbytes(self) -> int:
        """Memory of the arrays. [bytes]"""
        return sum(array.nbytes for array in self.arrays().values())

    def arrays(self) -> dict[str, Counts]:
        """The arrays by name, in a fixed order."""
        return {field.name: getattr(self, field.name) for field in fields(self)}


def empty_sums(rows: int, columns: int, n_kinds: int, n_bins: int = 0) -> Sums:
    """Sums of no round."""
    return Sums(
        xyz=np.zeros((rows, columns, 3), dtype=np.int64),
        replicate_y=np.zeros((N_REPLICATES, rows, columns), dtype=np.int64),
        kinds=np.zeros((rows, columns, n_kinds, 3), dtype=np.int64),
        bins=np.zeros((n_bins, rows, columns), dtype=np.int64),
    )


def quantum_of(reference_radiance: float) -> float:
    """The grid of the sums: 2^floor(log2(reference 2^-46)), a function of the shot's brightest light [cd/m2] alone.

    Raises ValueError unless the reference is finite and above 0.
    """
    if not 0.0 < reference_radiance < math.inf:
        raise ValueError(f"the brightest light has {reference_radiance} cd/m2")
    exponent = math.frexp(reference_radiance)[1] - 1  # floor(log2), exactly
    return math.ldexp(1.0, exponent - QUANTUM_BITS)


def add(into: Sums, other: Sums) -> None:
    """Add `other` to `into`, exactly. Raises `SumsFull` where a sum would not fit, with `into` partly added to."""
    for name, total in into.arrays().items():
        part = other.arrays()[name]
        if total.shape != part.shape:
            raise ValueError(f"sums of {name} differ in shape: {total.shape} and {part.shape}")
        for first in range(0, len(total), ROWS_AT_ONCE):
            _add_rows(total[first : first + ROWS_AT_ONCE], part[first : first + ROWS_AT_ONCE])


def _add_rows(total: Counts, part: Counts) -> None:
    """total += part; a sum overflows when its sign differs from that of both."""
    result = total + part
    if (((total ^ result) & (part ^ result)) < 0).any():
        raise SumsFull("a pixel's sum does not fit 63 bits")
    total[...] = result


def clear(sums: Sums) -> None:
    """Set everything to 0."""
    for array in sums.arrays().values():
        array[...] = 0


def same(a: Sums, b: Sums) -> bool:
    """Whether two sums agree in every bit."""
    return all(np.array_equal(array, b.arrays()[name]) for name, array in a.arrays().items())
