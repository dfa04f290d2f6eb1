"""The search as plain NumPy over every primitive: the common formulas (Moeller & Trumbore 1997; the quadratic of a
sphere), not the ones that the kernels use."""

from __future__ import annotations

import numpy as np

from renderer.arrays.assets import Placement, SphereAsset, TriangleAsset
from renderer.arrays.looks import Objects


def objects_of(kinds):
    """Objects of these kinds, nothing else set."""
    n = len(kinds)
    whole, real = np.zeros(n, np.int32), np.zeros(n)
    return Objects(np.array(kinds, np.int32), whole, whole, whole, whole, real, real)


def mesh_asset(vertices, faces):
    """A mesh without normals and texture coordinates."""
    return TriangleAsset(
        np.ascontiguousarray(vertices, dtype=np.float64),
        np.ascontiguousarray(faces, dtype=np.int32),
        np.zeros((0, 3)),
        np.zeros((0, 2)),
    )


def placed(asset, object_id, *matrices):
    """A placement by these matrices (3, 4); where none is given, as it is."""
    return Placement(asset, object_id, np.array(matrices or [np.eye(3, 4)]))


def matrix_at(place, time):
    """The matrix of a placement at a time."""
    n = len(place.matrices)
    if n == 1:
        return place.matrices[0]
    i = min(int(time * (n - 1)), n - 2)
    f = time * (n - 1) - i
    return (1.0 - f) * place.matrices[i] + f * place.matrices[i + 1]


def triangle_distances(points, o, d):
    """Distances (m,) of a ray's hits in triangles (m, 3, 3); infinity for a miss."""
    a, e1, e2 = points[:, 0], points[:, 1] - points[:, 0], points[:, 2] - points[:, 0]
    p = np.cross(d, e2)
    det = (e1 * p).sum(axis=1)
    with np.errstate(all="ignore"):
        u = ((o - a) * p).sum(axis=1) / det
        q = np.cross(o - a, e1)
        v = (q @ d) / det
        t = (e2 * q).sum(axis=1) / det
        hit = (u >= 0.0) & (v >= 0.0) & (u + v <= 1.0) & (t >= 0.0)
    return np.where(hit, t, np.inf)


def sphere_distances(centres, radii, o, d):
    """Both distances (m, 2) at which a ray meets spheres; infinity for a miss or what lies behind."""
    f = o - centres
    a, b, c = d @ d, f @ d, (f * f).sum(axis=1) - radii**2
    with np.errstate(all="ignore"):
        root = np.sqrt(b * b - a * c)
        both = np.stack([(-b - root) / a, (-b + root) / a], axis=1)
    return np.where(both >= 0.0, both, np.inf)


def all_hits(assets, placements, o, d, time=0.0):
    """Every hit of a ray, in order: a list of (t, instance, primitive)."""
    firsts = np.cumsum([0] + [len(a.faces) if isinstance(a, TriangleAsset) else len(a.radii_m) for a in assets])
    found = []
    for instance, place in enumerate(placements):
        asset, matrix = assets[place.asset], matrix_at(place, time)
        if isinstance(asset, SphereAsset):
            scale = np.linalg.norm(matrix[:, 0])
            t = sphere_distances(asset.centres_m @ matrix[:, :3].T + matrix[:, 3], asset.radii_m * scale, o, d)
        else:
            t = triangle_distances((asset.vertices_m @ matrix[:, :3].T + matrix[:, 3])[asset.faces], o, d)[:, None]
        for k, j in zip(*np.nonzero(np.isfinite(t)), strict=True):
            found.append((float(t[k, j]), instance, int(firsts[place.asset] + k)))
    return sorted(found)
