"""A mesh as numbers, and what is done with one: move, join, measure."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

Floats = npt.NDArray[np.float64]
Ints = npt.NDArray[np.int32]
Vector = tuple[float, float, float]


@dataclass(frozen=True)
class Mesh:
    """Triangles in metres, counter-clockwise seen from outside; normals and uvs are by vertex, or None."""

    vertices: Floats  # (n, 3)
    faces: Ints  # (m, 3)
    normals: Floats | None = None  # (n, 3), unit
    uvs: Floats | None = None  # (n, 2)

    def moved(self, x_m: float = 0.0, y_m: float = 0.0, z_m: float = 0.0) -> Mesh:
        """The mesh shifted."""
        return replace(self, vertices=self.vertices + np.array([x_m, y_m, z_m]))

    def turned(self, axis: str, angle_deg: float) -> Mesh:
        """The mesh turned about an axis through the origin, right-handed."""
        turn = rotation(axis, angle_deg)
        normals = None if self.normals is None else self.normals @ turn.T
        return replace(self, vertices=self.vertices @ turn.T, normals=normals)

    def stretched(self, x: float, y: float, z: float) -> Mesh:
        """The mesh scaled along the axes (all factors above 0); normals follow."""
        scale = np.array([x, y, z])
        normals = self.normals
        if normals is not None:
            normals = normals / scale
            normals = normals / np.linalg.norm(normals, axis=1, keepdims=True)
        return replace(self, vertices=self.vertices * scale, normals=normals)


def rotation(axis: str, angle_deg: float) -> Floats:
    """The (3, 3) matrix of a right-handed turn about x, y or z."""
    c, s = math.cos(math.radians(angle_deg)), math.sin(math.radians(angle_deg))
    rows = {
        "x": [[1, 0, 0], [0, c, -s], [0, s, c]],
        "y": [[c, 0, s], [0, 1, 0], [-s, 0, c]],
        "z": [[c, -s, 0], [s, c, 0], [0, 0, 1]],
    }
    return np.array(rows[axis], dtype=np.float64)


def mesh(vertices: Sequence[Sequence[float]] | Floats, faces: Sequence[Sequence[int]] | Ints) -> Mesh:
    """A mesh from plain lists; faces of four corners are split along their first diagonal."""
    triangles: list[Sequence[int]] = []
    for face in faces:
        triangles += [(face[0], face[k], face[k + 1]) for k in range(1, len(face) - 1)]
    return Mesh(np.asarray(vertices, dtype=np.float64), np.asarray(triangles, dtype=np.int32))


def joined(meshes: Sequence[Mesh]) -> Mesh:
    """Several meshes as one; normals and uvs stay only where every part has them."""
    starts = np.cumsum([0] + [len(part.vertices) for part in meshes])
    faces = [part.faces + np.int32(start) for part, start in zip(meshes, starts, strict=False)]
    normals = [part.normals for part in meshes if part.normals is not None]
    uvs = [part.uvs for part in meshes if part.uvs is not None]
    return Mesh(
        np.concatenate([part.vertices for part in meshes]),
        np.concatenate(faces).astype(np.int32),
        np.concatenate(normals) if len(normals) == len(meshes) else None,
        np.concatenate(uvs) if len(uvs) == len(meshes) else None,
    )


def volume_m3(solid: Mesh) -> float:
    """The enclosed volume [m3]; negative for a mesh that is inside out."""
    a, b, c = (solid.vertices[solid.faces[:, k]] for k in range(3))
    return float(np.sum(a * np.cross(b, c)) / 6.0)
