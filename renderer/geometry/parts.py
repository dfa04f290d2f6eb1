"""A mesh as a file or a shape places it: triangles that may be shared, and the matrix of each place."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from renderer.arrays.assets import TriangleAsset
from renderer.geometry.normals import unit_rows
from renderer.geometry.positions import Floats


@dataclass(frozen=True)
class Part:
    """One placed mesh of a file. `asset` is the same object for every placing of the same triangles.

    `matrix` (3, 4) takes the asset's metres to the file's metres. `names` are those it can be asked for by: its node's,
    its mesh's, and those of the nodes above it.
    """

    name: str
    asset: TriangleAsset
    matrix: Floats
    names: tuple[str, ...] = ()


def identity() -> Floats:
    """The (3, 4) matrix that leaves a point where it is."""
    return np.eye(3, 4)


def composed(outer: Floats, inner: Floats) -> Floats:
    """(..., 3, 4) matrices that apply `inner` (3, 4) first and then `outer` (..., 3, 4); sums in a fixed order."""
    result = np.zeros((*outer.shape[:-2], 3, 4))
    for k in range(3):
        result += outer[..., :, k, None] * inner[k, :]
    result[..., 3] += outer[..., 3]
    return result


def moved(points: Floats, matrix: Floats) -> Floats:
    """(n, 3) points through a (3, 4) matrix."""
    result = points[:, :1] * matrix[:, 0] + points[:, 1:2] * matrix[:, 1]
    result += points[:, 2:] * matrix[:, 2]
    result += matrix[:, 3]
    return result


def determinant(matrix: Floats) -> float:
    """Of the left three columns: negative when the matrix mirrors."""
    a, b, c = matrix[:, 0], matrix[:, 1], matrix[:, 2]
    return float(np.dot(a, np.cross(b, c)))


def normal_matrix(matrix: Floats) -> Floats:
    """(3, 3) cofactors, with the sign of the determinant taken out: takes normals so that outward stays outward."""
    a, b, c = matrix[:, 0], matrix[:, 1], matrix[:, 2]
    cofactors = np.column_stack([np.cross(b, c), np.cross(c, a), np.cross(a, b)])
    return -cofactors if determinant(matrix) < 0.0 else cofactors


def placed(part: Part) -> TriangleAsset:
    """The part's mesh with its matrix applied; winding turns with a matrix that mirrors, so outward stays outward."""
    asset, matrix = part.asset, part.matrix
    if np.array_equal(matrix, identity()):
        return asset
    faces = np.ascontiguousarray(asset.faces[:, ::-1]) if determinant(matrix) < 0.0 else asset.faces
    normals = asset.vertex_normals
    if len(normals):
        normals = unit_rows(moved(normals, np.column_stack([normal_matrix(matrix), np.zeros(3)])))
    return TriangleAsset(moved(asset.vertices_m, matrix), faces, normals, asset.uvs)
