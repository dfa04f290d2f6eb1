"""Which vertices stand in the same place: files split vertices where normals or texture coordinates change."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

Floats = npt.NDArray[np.float64]
Indices = npt.NDArray[np.int32]
Ids = npt.NDArray[np.int64]

# odd 64-bit multipliers, fractional parts of square roots of 2, 3 and 5; any would do, since the result is verified
MIX = np.array([0x6A09E667F3BCC909, 0xBB67AE8584CAA73B, 0x3C6EF372FE94F82B], dtype=np.uint64)


def position_groups(vertices_m: Floats) -> tuple[Indices, Ids]:
    """(n,) int32 group of each vertex, equal where positions agree to the bit; and the first vertex of each group.

    Groups are numbered in the order of their hashes, which depends on the positions alone. Minus zero equals zero.
    """
    bits = np.ascontiguousarray(vertices_m + 0.0).view(np.uint64).reshape(-1, 3)
    hashed = bits[:, 0] * MIX[0]
    for axis in (1, 2):
        hashed ^= hashed >> np.uint64(29)
        hashed = (hashed + bits[:, axis]) * MIX[axis]
    hashed ^= hashed >> np.uint64(32)
    _, first, group = np.unique(hashed, return_index=True, return_inverse=True)
    if not all(np.array_equal(bits[first[group], axis], bits[:, axis]) for axis in range(3)):
        group, first = groups_by_sorting(bits)  # two positions share a hash: never met, but then slow and right
    return group.astype(np.int32), first.astype(np.int64)


def groups_by_sorting(bits: npt.NDArray[np.uint64]) -> tuple[Ids, Ids]:
    """As `position_groups`, by sorting all three numbers: (group of each row, first row of each group)."""
    order = np.lexsort((bits[:, 2], bits[:, 1], bits[:, 0]))
    ordered = bits[order]
    new = np.ones(len(bits), dtype=bool)
    new[1:] = (ordered[1:] != ordered[:-1]).any(axis=1)
    group = np.empty(len(bits), dtype=np.int64)
    group[order] = np.cumsum(new) - 1
    return group, order[new]


def rounded_groups(vertices_m: Floats, grid_m: float) -> Indices:
    """(n,) int32 group of each vertex, equal where positions round to the same point of a grid."""
    return position_groups(np.rint(vertices_m / grid_m))[0]


def groups_of(key: Ids) -> Ids:
    """The keys renumbered from 0 without gaps, in rising order."""
    return np.unique(key, return_inverse=True)[1].astype(np.int64)
