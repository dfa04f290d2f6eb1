"""Many rays at once, for tests and measurements."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from renderer.arrays.world import World
from renderer.base.jit import kernel, prange
from renderer.base.reference import refer
from renderer.ray_search.search import any_hit, closest_hit

SHIFT = 10  # rays of a block, as a power of two
BLOCK = 1 << SHIFT


@kernel
def trace_block(world, origins, directions, time, t_max, t, ids, uv):
    """The closest hits of rays, one after another."""
    place = refer(world)
    for k in range(origins.shape[0]):
        d, i, p, u, v, crowded = closest_hit(
            place, origins[k, 0], origins[k, 1], origins[k, 2], directions[k, 0], directions[k, 1], directions[k, 2],
            time, t_max, -1, -1, 0.0, -1, -1,
        )  # fmt: skip
        t[k], ids[k, 0], ids[k, 1], ids[k, 2] = d, i, p, 1 if crowded else 0
        uv[k, 0], uv[k, 1] = u, v


@kernel(parallel=True)
def trace_closest(world, origins, directions, time, t_max, t, ids, uv):
    """The closest hits of all rays."""
    n = origins.shape[0]
    for block in prange((n + BLOCK - 1) >> SHIFT):
        i, j = block * BLOCK, min(block * BLOCK + BLOCK, n)
        trace_block(world, origins[i:j], directions[i:j], time, t_max, t[i:j], ids[i:j], uv[i:j])


@kernel
def any_block(world, origins, directions, time, t_max, ids):
    """Some hit of each of the rays, one after another."""
    place = refer(world)
    for k in range(origins.shape[0]):
        ids[k, 0], ids[k, 1] = any_hit(
            place, origins[k, 0], origins[k, 1], origins[k, 2], directions[k, 0], directions[k, 1], directions[k, 2],
            time, t_max, -1, -1,
        )  # fmt: skip


@kernel(parallel=True)
def trace_any(world, origins, directions, time, t_max, ids):
    """Some hit of each ray."""
    n = origins.shape[0]
    for block in prange((n + BLOCK - 1) >> SHIFT):
        i, j = block * BLOCK, min(block * BLOCK + BLOCK, n)
        any_block(world, origins[i:j], directions[i:j], time, t_max, ids[i:j])


def trace_rays(
    world: World,
    origins: npt.NDArray[np.float64],
    directions: npt.NDArray[np.float64],
    time: float = 0.0,
    t_max: float = math.inf,
) -> tuple[npt.NDArray[np.float64], npt.NDArray[np.int32], npt.NDArray[np.int32], npt.NDArray[np.float64]]:
    """Closest hits of rays (n, 3), (n, 3): distances (n,), instances (n,), primitives (n,), barycentrics (n, 2).

    A miss is infinity and -1.
    """
    n = len(origins)
    t, ids, uv = np.empty(n), np.empty((n, 3), dtype=np.int32), np.empty((n, 2))
    trace_closest(world, np.ascontiguousarray(origins), np.ascontiguousarray(directions), time, t_max, t, ids, uv)
    return t, ids[:, 0], ids[:, 1], uv
