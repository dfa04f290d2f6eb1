"""Fit the light of large drops' edges to the full series: writes renderer/optics/data/drop_edges.csv (minutes).

python tools/drop_edges.py
"""

from __future__ import annotations

import itertools
import math
from pathlib import Path

import numpy as np

from renderer.optics import large_drops
from renderer.optics.mie_kernels import add_intensities

RADII_UM = (25.0, 35.0, 50.0, 70.0, 100.0, 140.0, 200.0, 300.0, 500.0)
NM = 550.0
SPREAD, SIZES = 0.12, 240  # wide enough to wash out the fringes, which are no edge light
STEP_DEG = 0.1
EDGES_DEG = np.concatenate([[0.0, 0.3, 0.6, 1.0, 1.5, 2.0, 3.0, 4.0, 5.0, 7.0], np.arange(10.0, 175.1, 2.5),
                            [176.0, 177.0, 178.0, 178.6, 179.0, 179.4, 179.7, 180.0]])  # fmt: skip


def main() -> None:
    """Print nothing; write the table."""
    edges = np.linspace(0.0, 180.0, round(180.0 / STEP_DEG) + 1)
    angles = 0.5 * (edges[1:] + edges[:-1])
    sines = np.sin(np.radians(angles))
    rng = np.random.default_rng(1)
    rows = [[0.0, 0.0, 0.0, *(0.5 * (EDGES_DEG[1:] + EDGES_DEG[:-1]))]]
    for index, radius in itertools.product(large_drops.EDGE_INDICES, RADII_UM):
        rays = large_drops.ray_table(index, angles)
        bins = np.searchsorted(EDGES_DEG, rays.warped_deg) - 1
        middle = 2000.0 * math.pi * radius / NM
        at = np.linspace(-2.5, 2.5, SIZES) + rng.uniform(-0.5, 0.5, SIZES) * 5.0 / SIZES
        x, weights = middle * (1.0 + SPREAD * at), np.exp(-0.5 * at * at)
        weights /= weights.sum()
        series = np.zeros((4, len(angles)))
        add_intensities(x, weights, complex(index), np.cos(np.radians(angles)), series)
        waves, scale = np.zeros_like(series), np.zeros(len(angles))
        for size, share in zip(x.tolist(), weights.tolist(), strict=True):
            found = large_drops.intensities_of(rays, size, False)
            found[(0, 2), :] += large_drops.airy_disc(rays.angles_rad, size)
            waves += share * found
            scale += share * large_drops.edge_weight(rays.angles_rad, size)
        left = series - waves
        for k, row in enumerate((left[0] - left[1], left[0] + left[1], left[2], left[3])):
            rows.append([index, middle, float(k), *(np.bincount(bins, row * sines) / np.bincount(bins, scale * sines))])
    head = (
        "Source: fitted to this package's own full series by tools/drop_edges.py.\n"
        "Edge light of large drops over its weight: index, x, element (|S1|^2, |S2|^2, Re, Im of S2 S1*), then "
    )
    path = Path(large_drops.__file__).parent / "data" / large_drops.EDGE_FILE
    np.savetxt(path, np.array(rows), fmt="%.5g", delimiter=",", header=head + "by angle; angles [deg] first")


if __name__ == "__main__":
    main()
