"""Plain forms: boxes, turned forms, tubes, gables, pebbles. Metres, y up, faces outward."""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence

import numpy as np

from mesh_making.mesh import Floats, Mesh, Vector, mesh

BOX_FACES = [(0, 3, 2, 1), (4, 5, 6, 7), (0, 1, 5, 4), (2, 3, 7, 6), (1, 2, 6, 5), (3, 0, 4, 7)]


def box(low: Vector, high: Vector) -> Mesh:
    """A box between two corners."""
    (x0, y0, z0), (x1, y1, z1) = low, high
    corners = [(x0, y0, z0), (x1, y0, z0), (x1, y1, z0), (x0, y1, z0)]
    corners += [(x0, y0, z1), (x1, y0, z1), (x1, y1, z1), (x0, y1, z1)]
    return mesh(corners, BOX_FACES)


def block(size: Vector, bevel_m: float, crown_m: float = 0.0) -> Mesh:
    """A paving block, centred in x and z, with its top at y = 0: the upper edges cut by `bevel_m`, the top raised by
    `crown_m` in its middle. The underside is open ground and left closed."""
    hx, hz = size[0] / 2.0, size[2] / 2.0
    rings = [(0.0, -size[1]), (0.0, -bevel_m), (bevel_m, 0.0), (2.4 * bevel_m, 0.35 * crown_m)]
    corners: list[Vector] = []
    for inset, height in rings:
        x, z = hx - inset, hz - inset
        corners += [(-x, height, z), (x, height, z), (x, height, -z), (-x, height, -z)]
    faces: list[Sequence[int]] = [(3, 2, 1, 0)]
    for ring in range(len(rings) - 1):
        low, high = 4 * ring, 4 * ring + 4
        faces += [(low + k, low + (k + 1) % 4, high + (k + 1) % 4, high + k) for k in range(4)]
    top = 4 * (len(rings) - 1)
    corners.append((0.0, crown_m, 0.0))
    faces += [(top + k, top + (k + 1) % 4, len(corners) - 1) for k in range(4)]
    return mesh(corners, faces)


def turned_form(profile_m: Sequence[tuple[float, float]], segments: int) -> Mesh:
    """A solid of revolution about y. The profile, (radius, height), runs from a point on the axis up the outside and
    back to the axis: seen with the axis at the left, anticlockwise."""
    rings: list[list[int]] = []
    corners: list[Vector] = []
    for radius, height in profile_m:
        first = len(corners)
        if radius == 0.0:
            corners.append((0.0, height, 0.0))
            rings.append([first] * segments)
            continue
        angles = [2.0 * math.pi * k / segments for k in range(segments)]
        corners += [(radius * math.cos(a), height, -radius * math.sin(a)) for a in angles]
        rings.append(list(range(first, first + segments)))
    faces = []
    for low, high in itertools.pairwise(rings):
        for k in range(segments):
            after = (k + 1) % segments
            corners_of_face = [low[k], low[after], high[after], high[k]]
            faces.append(list(dict.fromkeys(corners_of_face)))
    return mesh(corners, faces)


def with_radial_normals(solid: Mesh, centres: Floats) -> Mesh:
    """The mesh with normals that point away from `centres` (n, 3), one a vertex."""
    away = solid.vertices - centres
    return Mesh(solid.vertices, solid.faces, away / np.linalg.norm(away, axis=1, keepdims=True), solid.uvs)


def tube(path_m: Floats, radius_m: float, segments: int) -> Mesh:
    """A round bar along a path (n, 3), closed by flat ends; normals are smooth along it and sharp at the ends.

    Frames are carried along the path without twist (double reflection, Wang et al. 2008, ACM Trans. Graph. 27(1)).
    """
    tangents = np.gradient(path_m, axis=0)
    tangents /= np.linalg.norm(tangents, axis=1, keepdims=True)
    across = carried_frames(path_m, tangents)
    angles = 2.0 * np.pi * np.arange(segments) / segments
    other = np.cross(tangents, across)
    ring = across[:, None, :] * np.cos(angles)[None, :, None] + other[:, None, :] * np.sin(angles)[None, :, None]
    side = (path_m[:, None, :] + radius_m * ring).reshape(-1, 3)
    n = len(path_m)
    faces: list[Sequence[int]] = []
    for i in range(n - 1):
        for k in range(segments):
            a, b = i * segments + k, i * segments + (k + 1) % segments
            faces.append((a, b, b + segments, a + segments))
    start, end = len(side), len(side) + segments
    first, last = side[:segments], side[-segments:]
    corners = np.concatenate([side, first, last])
    faces += [(start, start + k + 1, start + k) for k in range(1, segments - 1)]
    faces += [(end, end + k, end + k + 1) for k in range(1, segments - 1)]
    normals = np.concatenate(
        [ring.reshape(-1, 3), np.tile(-tangents[0], (segments, 1)), np.tile(tangents[-1], (segments, 1))]
    )
    plain = mesh(corners, faces)
    return Mesh(plain.vertices, plain.faces, normals)


def carried_frames(path_m: Floats, tangents: Floats) -> Floats:
    """Unit vectors across the path that turn as little as they can, (n, 3)."""
    helper = np.array([0.0, 1.0, 0.0]) if abs(tangents[0, 1]) < 0.9 else np.array([1.0, 0.0, 0.0])
    across = np.empty_like(path_m)
    first = np.cross(tangents[0], helper)
    across[0] = first / np.linalg.norm(first)
    for i in range(len(path_m) - 1):
        v1 = path_m[i + 1] - path_m[i]
        c1 = float(v1 @ v1)
        r_left = across[i] - (2.0 / c1) * float(v1 @ across[i]) * v1
        t_left = tangents[i] - (2.0 / c1) * float(v1 @ tangents[i]) * v1
        v2 = tangents[i + 1] - t_left
        c2 = float(v2 @ v2)
        across[i + 1] = r_left if c2 == 0.0 else r_left - (2.0 / c2) * float(v2 @ r_left) * v2
    return across


def gabled(width_m: float, depth_m: float, eaves_m: float, ridge_m: float) -> Mesh:
    """A house's body with a pitched roof, its gable to +z, standing on y = 0 and centred in x; depth runs to -z."""
    x, z = width_m / 2.0, -depth_m
    front = [(-x, 0.0, 0.0), (x, 0.0, 0.0), (x, eaves_m, 0.0), (0.0, ridge_m, 0.0), (-x, eaves_m, 0.0)]
    back = [(a, b, z) for a, b, _ in front]
    faces: list[Sequence[int]] = [(0, 1, 2, 3, 4), (9, 8, 7, 6, 5)]
    faces += [(k, k + 5, (k + 1) % 5 + 5, (k + 1) % 5) for k in range(5)]
    return mesh(front + back, faces)


def roof(width_m: float, depth_m: float, eaves_m: float, ridge_m: float, thickness_m: float) -> Mesh:
    """Two slopes of roof that lie on a gabled body and overhang it a little."""
    over = 0.15
    slope = (ridge_m - eaves_m) / (width_m / 2.0)
    x = width_m / 2.0 + over
    low = eaves_m - slope * over
    outline = [(-x, low), (0.0, ridge_m), (x, low), (x, low + thickness_m), (0.0, ridge_m + thickness_m * 1.3)]
    outline.append((-x, low + thickness_m))
    front = [(a, b, over) for a, b in outline]
    back = [(a, b, -depth_m - over) for a, b in outline]
    faces: list[Sequence[int]] = [(0, 1, 4, 5), (1, 2, 3, 4), (11, 10, 7, 6), (10, 9, 8, 7)]
    faces += [(k, k + 6, (k + 1) % 6 + 6, (k + 1) % 6) for k in range(6)]
    return mesh(front + back, faces)


def ball(radius_m: float, rings: int, segments: int) -> Mesh:
    """A sphere of latitude rings about the origin, with normals."""
    profile = [
        (radius_m * math.sin(math.pi * k / rings), -radius_m * math.cos(math.pi * k / rings)) for k in range(rings)
    ]
    profile[0] = (0.0, -radius_m)
    solid = turned_form([*profile, (0.0, radius_m)], segments)
    return with_radial_normals(solid, np.zeros_like(solid.vertices))
