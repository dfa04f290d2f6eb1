"""How much of a render is ray search: path segments a second over the bare search's rays a second, in one run.

    python tools/bench/segments.py                    the glass tank and the basin
    python tools/bench/segments.py SHOT [SHOT ...]    other shots

The rays searched bare are those of the paths themselves: origins and directions of every segment of some pixels. Both
sides run on one thread, in turns; the figure is the median of the turns' ratios.
"""

from __future__ import annotations

import statistics
import sys
import time
from pathlib import Path

import numpy as np

from renderer.base.jit import kernel
from renderer.base.reference import refer
from renderer.frames.assemble import assemble
from renderer.pictures.sums import empty_sums, quantum_of
from renderer.ray_search.search import closest_hit
from renderer.shot import load_shot
from renderer.transport.path import camera_set, start_path, step, surroundings
from renderer.transport.points import pair, stream
from renderer.transport.render import frame_of, render_piece
from renderer.transport.wavelengths import draw_lanes
from renderer.transport.work import new_work

ROOT = Path(__file__).resolve().parents[2]
SHOTS = [ROOT / f"scenes/{name}/{name}.shot.toml" for name in ("tank_on_sill", "basin_looking_up")]
TURNS = 7
ROWS = 24
MOST = 4_000_000


@kernel
def record(frame, work, row_from, row_to, rays):
    """Write down the rays of all paths of some rows; gives how many."""
    matrices, window = frame.camera.matrices, frame.camera.window
    low, high, _ = surroundings(frame, matrices[0, 0, 3], matrices[0, 1, 3], matrices[0, 2, 3], 0.0)
    n = 0
    for row in range(row_from, row_to):
        for column in range(window[2]):
            key = stream(0, ((window[1] + row) << 32) | (window[0] + column), 0)
            work.sample[0], work.sample[1] = key, 0
            shutter, u_pixel = pair(key, 0, 2)
            draw_lanes(frame.spectrum, u_pixel, 0.5, work.lanes)
            start_path(frame, work, float(window[0] + column), float(window[1] + row), shutter)
            camera_set(frame, work, low, high, True)
            k = work.whole[0, 4]
            while k >= 0 and n < rays.shape[0]:
                for i in range(6):
                    rays[n, i] = work.reals[k, i]
                n += 1
                k = step(frame, work, k)
    return n


@kernel
def record_rows(frame, work, row_from, row_to, rays):
    """The door: `record` by address."""
    return record(refer(frame), refer(work), row_from, row_to, rays)


@kernel
def search_all(world, rays, n):
    """Search every ray; the sum of the distances keeps the compiler from dropping the work."""
    total = 0.0
    for k in range(n):
        t, instance, _, _, _, _ = closest_hit(
            world, rays[k, 0], rays[k, 1], rays[k, 2], rays[k, 3], rays[k, 4], rays[k, 5], 0.0, np.inf, -1, -1, 0.0,
            -1, -1,
        )  # fmt: skip
        if instance >= 0:
            total += t
    return total


@kernel
def search_rows(world, rays, n):
    """The door: `search_all` by address."""
    return search_all(refer(world), rays, n)


def seconds(do) -> float:
    """How long a call takes."""
    started = time.perf_counter()
    do()
    return time.perf_counter() - started


def measure(path: Path) -> None:
    """Print one line about a shot."""
    shot = load_shot(path)
    scene = assemble(shot.at(shot.frames[0]))
    columns, rows = int(scene.camera.window[2]), int(scene.camera.window[3])
    first, last = (rows - ROWS) // 2, (rows + ROWS) // 2
    sums, quantum = empty_sums(rows, columns, 4), quantum_of(scene.reference_radiance)
    frame, work = frame_of(scene), new_work(0)
    rays = np.empty((MOST, 6))
    n = record_rows(frame, new_work(0), first, last, rays)

    def render() -> None:
        render_piece(frame, work, first, last, quantum, False, sums.xyz, sums.replicate_y, sums.kinds, sums.bins)

    def search() -> None:
        search_rows(scene.world, rays, n)

    render()
    search()
    ratios, segment_rates, ray_rates = [], [], []
    for _ in range(TURNS):
        before = int(work.tally[0])
        rendering, searching = seconds(render), seconds(search)
        segment_rates.append((int(work.tally[0]) - before) / rendering)
        ray_rates.append(n / searching)
        ratios.append(segment_rates[-1] / ray_rates[-1])
    print(
        f"{path.parent.name}: {statistics.median(segment_rates) / 1e6:.2f} M path segments/s, bare search "
        f"{statistics.median(ray_rates) / 1e6:.2f} M rays/s, ratio {statistics.median(ratios):.2f} "
        f"({n / ((last - first) * columns):.1f} segments a sample)"
    )


if __name__ == "__main__":
    for shot_path in [Path(name) for name in sys.argv[1:]] or SHOTS:
        measure(shot_path)
