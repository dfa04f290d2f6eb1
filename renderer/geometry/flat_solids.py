"""Built-in solids with flat sides: box and prism. Exact in size, watertight, outward, flat-shaded."""

from __future__ import annotations

import numpy as np

from renderer.arrays.assets import TriangleAsset
from renderer.base.exact_functions import sine_cosine_deg
from renderer.geometry.sheets import asset

Vector = tuple[float, float, float]

# corners of each side, counter-clockwise from outside, as signs of (x, y, z); and so that u and v run level and up
BOX_SIDES = np.array(
    [
        [(1, -1, 1), (1, -1, -1), (1, 1, -1), (1, 1, 1)],
        [(-1, -1, -1), (-1, -1, 1), (-1, 1, 1), (-1, 1, -1)],
        [(-1, 1, 1), (1, 1, 1), (1, 1, -1), (-1, 1, -1)],
        [(-1, -1, -1), (1, -1, -1), (1, -1, 1), (-1, -1, 1)],
        [(-1, -1, 1), (1, -1, 1), (1, 1, 1), (-1, 1, 1)],
        [(1, -1, -1), (-1, -1, -1), (-1, 1, -1), (1, 1, -1)],
    ],
    dtype=np.float64,
)


def box(size_m: Vector) -> TriangleAsset:
    """A box about the origin; each side carries the whole of a texture."""
    return box_between((-size_m[0] / 2, -size_m[1] / 2, -size_m[2] / 2), (size_m[0] / 2, size_m[1] / 2, size_m[2] / 2))


def box_between(low_m: Vector, high_m: Vector) -> TriangleAsset:
    """A box from one corner to the other."""
    vertices = np.where(BOX_SIDES > 0.0, np.array(high_m), np.array(low_m)).reshape(-1, 3)
    k = 4 * np.arange(6)[:, None]
    faces = (k + np.array([[0, 1, 2, 0, 2, 3]])).reshape(-1, 3)
    uvs = np.tile([[0.0, 0.0], [1.0, 0.0], [1.0, 1.0], [0.0, 1.0]], (6, 1))
    return asset(vertices, faces, uvs=uvs)


def prism(apex_deg: float, side_m: float, length_m: float) -> TriangleAsset:
    """An isosceles prism: ridge along z at the top, base level below, bounding box about the origin.

    The two sides that meet at the ridge are `side_m` long, and `apex_deg` apart.
    """
    sine, cosine = (float(v) for v in sine_cosine_deg(apex_deg / 2.0))
    x, y, z = side_m * sine, side_m * cosine / 2.0, length_m / 2.0
    front = [[0.0, y, z], [-x, -y, z], [x, -y, z]]
    vertices = np.array(front + [[a, b, -c] for a, b, c in front])
    faces = np.array([[0, 1, 2], [3, 5, 4], [0, 3, 1], [1, 3, 4], [0, 2, 3], [2, 5, 3], [1, 4, 2], [2, 4, 5]])
    return asset(vertices, faces)
