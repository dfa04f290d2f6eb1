"""How time and memory grow with the number of triangles: ``python tools/bench/growth.py``.

A water surface, random rays, one thread to trace and all to build; each size in a process of its own, for its peak.
"""

from __future__ import annotations

import math
import resource
import subprocess
import sys

import numpy as np
from traversal import asset_of, random_rays, seconds, water, world_of

from renderer.ray_search.trace import trace_block

SIDES = (71, 317, 708, 1001)
N_RAYS = 200_000
REPEATS = 5


def measure(side: int) -> None:
    """Build and trace one surface, and print a line."""
    asset = asset_of(water(side))
    world = world_of(asset)
    build_s = min(seconds(lambda: world_of(asset)) for _ in range(REPEATS))
    rays = random_rays(np.array([-50.0, -1.0, -50.0]), np.array([50.0, 1.0, 50.0]), N_RAYS)
    t, ids, uv = np.empty(N_RAYS), np.empty((N_RAYS, 3), dtype=np.int32), np.empty((N_RAYS, 2))
    trace_s = min(
        seconds(lambda: trace_block(world, rays.origins, rays.directions, 0.0, math.inf, t, ids, uv))
        for _ in range(REPEATS)
    )
    peak_gib = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 2**20
    print(f"{len(asset.faces):10d} {build_s:8.3f} {trace_s / N_RAYS * 1e9:8.0f} {peak_gib:10.2f}", flush=True)


def main() -> None:
    """One process a size."""
    if len(sys.argv) > 1:
        measure(int(sys.argv[1]))
        return
    print(f"{'triangles':>10s} {'build s':>8s} {'ns a ray':>8s} {'peak GiB':>10s}", flush=True)
    for side in SIDES:
        subprocess.run([sys.executable, __file__, str(side)], check=True)


if __name__ == "__main__":
    main()
