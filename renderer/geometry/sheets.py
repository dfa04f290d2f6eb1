"""Open built-in shapes: rectangle, disc, water surface (which a depth closes to a block)."""

from __future__ import annotations

import math

import numpy as np

from renderer.arrays.assets import TriangleAsset
from renderer.arrays.packing import pack
from renderer.base.exact_functions import sine_cosine_deg
from renderer.geometry.circles import circle
from renderer.geometry.positions import Floats, Indices

Wave = tuple[float, float, float, float]


def asset(
    vertices_m: Floats, faces: Indices, normals: Floats | None = None, uvs: Floats | None = None
) -> TriangleAsset:
    """Frozen arrays of a built mesh."""
    return TriangleAsset(
        pack(vertices_m),
        pack(faces, np.int32),
        pack(np.zeros((0, 3)) if normals is None else normals),
        pack(np.zeros((0, 2)) if uvs is None else uvs),
    )


def rectangle(width_m: float, height_m: float) -> TriangleAsset:
    """Two triangles about the origin, facing +z; u runs along x, v along y."""
    x, y = width_m / 2.0, height_m / 2.0
    vertices = np.array([[-x, -y, 0.0], [x, -y, 0.0], [x, y, 0.0], [-x, y, 0.0]])
    uvs = np.array([[0.0, 0.0], [1.0, 0.0], [1.0, 1.0], [0.0, 1.0]])
    return asset(vertices, np.array([[0, 1, 2], [0, 2, 3]]), uvs=uvs)


def disc(radius_m: float, segments: int) -> TriangleAsset:
    """A fan about the origin, facing +z."""
    cosine, sine = circle(segments)
    rim = np.column_stack([radius_m * cosine, radius_m * sine, np.zeros(segments)])
    vertices = np.vstack([np.zeros((1, 3)), rim])
    k = np.arange(segments)
    uvs = np.vstack([[[0.5, 0.5]], np.column_stack([0.5 + 0.5 * cosine, 0.5 + 0.5 * sine])])
    return asset(vertices, np.column_stack([np.zeros(segments, int), 1 + k, 1 + (k + 1) % segments]), uvs=uvs)


def grid_faces(columns: int, rows: int) -> Indices:
    """Two triangles a cell of a grid of (rows + 1) x (columns + 1) vertices, row by row; wound so that rows going to +z
    and columns to +x face +y."""
    i, j = np.meshgrid(np.arange(columns), np.arange(rows))
    a = (j * (columns + 1) + i).reshape(-1)
    b, c = a + 1, a + columns + 1
    even = np.column_stack([a, c, b]), np.column_stack([b, c, c + 1])
    return np.stack(even, axis=1).reshape(-1, 3).astype(np.int32)


def wave_height(x: Floats, z: Floats, waves: tuple[Wave, ...]) -> tuple[Floats, Floats, Floats]:
    """Height of a sum of sine waves [m] and its slopes along x and z.

    Each wave is (amplitude m, wavelength m, direction deg, phase deg). It runs to `direction`, clockwise from -z seen
    from above (so 90 runs to +x); its height is amplitude sin(k s + phase), s the distance along its way.
    """
    height, slope_x, slope_z = np.zeros_like(x), np.zeros_like(x), np.zeros_like(x)
    for amplitude, wavelength, direction, phase in waves:
        sine_d, cosine_d = (float(v) for v in sine_cosine_deg(direction))
        k = 2.0 * math.pi / wavelength
        sine, cosine = sine_cosine_deg(360.0 / wavelength * (sine_d * x - cosine_d * z) + phase)
        height += amplitude * sine
        slope_x += amplitude * k * sine_d * cosine
        slope_z -= amplitude * k * cosine_d * cosine
    return height, slope_x, slope_z


def water_surface(
    size_m: tuple[float, float], cells: tuple[int, int], waves: tuple[Wave, ...], depth_m: float
) -> TriangleAsset:
    """A grid in x and z about the origin, facing +y, with exact normals; a depth above 0 closes it to a block.

    The block has upright sides and a flat bottom at y = -depth, and is watertight.
    """
    columns, rows = cells
    x = (np.arange(columns + 1) / columns - 0.5) * size_m[0]
    z = (np.arange(rows + 1) / rows - 0.5) * size_m[1]
    x, z = (part.reshape(-1) for part in np.meshgrid(x, z))
    height, slope_x, slope_z = wave_height(x, z, waves)
    top = np.column_stack([x, height, z])
    normals = np.column_stack([-slope_x, np.ones_like(x), -slope_z])
    normals /= np.sqrt(np.square(normals).sum(axis=1, keepdims=True))
    uvs = np.column_stack([x / size_m[0] + 0.5, 0.5 - z / size_m[1]])
    faces = grid_faces(columns, rows)
    if depth_m <= 0.0:
        return asset(top, faces, normals, uvs)
    sides, side_faces, side_normals = block_below(top, columns, rows, depth_m)
    vertices = np.vstack([top, sides])
    faces = np.vstack([faces, side_faces + len(top)])
    return asset(vertices, faces, np.vstack([normals, side_normals]), np.vstack([uvs, np.zeros((len(sides), 2))]))


def block_below(top: Floats, columns: int, rows: int, depth_m: float) -> tuple[Floats, Indices, Floats]:
    """Sides and bottom that close a grid: vertices, faces, normals. Their rims repeat the grid's edge to the bit."""
    grid = np.arange(len(top)).reshape(rows + 1, columns + 1)
    edges = [  # along each edge so that the outside is on the right, seen from above; and the way it faces
        (grid[-1, :], (0.0, 0.0, 1.0)),
        (grid[::-1, -1], (1.0, 0.0, 0.0)),
        (grid[0, ::-1], (0.0, 0.0, -1.0)),
        (grid[:, 0], (-1.0, 0.0, 0.0)),
    ]
    vertices, faces, normals, count = [], [], [], 0
    for line, facing in edges:
        upper = top[line]
        lower = np.column_stack([upper[:, 0], np.full(len(line), -depth_m), upper[:, 2]])
        k, n = np.arange(len(line) - 1) + count, len(line)
        faces += [np.column_stack([k, k + n, k + n + 1]), np.column_stack([k, k + n + 1, k + 1])]
        vertices += [upper, lower]
        normals.append(np.tile(facing, (2 * n, 1)))
        count += 2 * n
    rim = np.concatenate([line[:-1] for line, _ in edges])
    low = np.column_stack([top[rim, 0], np.full(len(rim), -depth_m), top[rim, 2]])
    k = np.arange(len(rim))
    faces.append(np.column_stack([np.zeros_like(k), 1 + (k + 1) % len(rim), 1 + k]) + count)
    vertices += [np.array([[0.0, -depth_m, 0.0]]), low]
    normals.append(np.tile((0.0, -1.0, 0.0), (len(rim) + 1, 1)))
    return np.vstack(vertices), np.vstack(faces).astype(np.int32), np.vstack(normals)
