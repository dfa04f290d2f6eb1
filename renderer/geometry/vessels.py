"""Open glass vessels and what stands in them: tank and bowl.

The filling reaches half the wall's thickness into the glass, so that there is no air gap; where they overlap the
glass, with the higher overlap priority, wins. Its top is flat, at the fill height.
"""

from __future__ import annotations

import math

import numpy as np

from renderer.arrays.assets import TriangleAsset
from renderer.base.exact_functions import DEGREE, arccosine
from renderer.geometry.circles import arc
from renderer.geometry.flat_solids import box_between
from renderer.geometry.round_solids import Lathe
from renderer.geometry.sheets import asset

Vector = tuple[float, float, float]


def tank(size_m: Vector, wall_m: float) -> TriangleAsset:
    """Four walls and a bottom about the origin, open at the top (+y), one watertight mesh of 28 triangles."""
    x, y, z = (s / 2.0 for s in size_m)
    ring = np.array([(-1.0, 1.0), (1.0, 1.0), (1.0, -1.0), (-1.0, -1.0)])  # x and z, counter-clockwise from above
    levels = [(x, z, -y), (x, z, y), (x - wall_m, z - wall_m, y), (x - wall_m, z - wall_m, -y + wall_m)]
    vertices = np.array([[a * px, height, b * pz] for a, b, height in levels for px, pz in ring])
    faces = [[0, 2, 1], [0, 3, 2], [12, 13, 14], [12, 14, 15]]
    for lower in (0, 4, 8):  # outer walls, rim, inner walls
        for k in range(4):
            a, b = lower + k, lower + (k + 1) % 4
            faces += [[a, b, b + 4], [a, b + 4, a + 4]]
    return asset(vertices, np.array(faces))


def tank_filling(size_m: Vector, wall_m: float, fill: float) -> TriangleAsset:
    """The box of liquid in a tank, up to `fill` of its inner height."""
    x, y, z = (s / 2.0 - wall_m / 2.0 for s in size_m)
    top = -size_m[1] / 2.0 + wall_m + fill * (size_m[1] - wall_m)
    return box_between((-x, -y, -z), (x, top, z))


def bowl_segments(radius_m: float, wall_m: float) -> int:
    """How many segments keep the facets of a bowl's filling well inside its wall: their sag is under a tenth of it."""
    n = math.pi / math.sqrt(0.2 * wall_m / radius_m)
    return 4 * max(32, min(1024, math.ceil(n / 4.0)))


def bowl(radius_m: float, wall_m: float) -> TriangleAsset:
    """Half a spherical shell, open at the top: rim level at y = 0, centre at the origin, `radius_m` outside."""
    segments = bowl_segments(radius_m, wall_m)
    lathe, inner = Lathe(segments), radius_m - wall_m
    lathe.band(*arc(radius_m, -90.0, 0.0, segments // 4))
    lathe.level(inner, radius_m, 0.0, up=True)
    points, normals = arc(inner, 0.0, -90.0, segments // 4)
    lathe.band(points, -normals)
    return lathe.mesh()


def bowl_filling(radius_m: float, wall_m: float, fill: float) -> TriangleAsset:
    """The liquid in a bowl, up to `fill` of its inner depth."""
    segments = bowl_segments(radius_m, wall_m)
    inner, reach = radius_m - wall_m, radius_m - wall_m / 2.0
    top = -inner * (1.0 - fill)
    lathe = Lathe(segments)
    rim_deg = 90.0 - float(arccosine(top / reach)) / DEGREE
    points, normals = arc(reach, -90.0, rim_deg, segments // 4)
    points[-1, 1] = top
    lathe.band(points, normals)
    lathe.level(0.0, float(points[-1, 0]), top, up=True)
    return lathe.mesh()
