"""Vertex normals for meshes that bring none, with creases kept.

The weights are those of N. Max, "Weights for Computing Vertex Normals from Facet Normals", JGT 4(2), 1999: exact for
a mesh inscribed in a sphere, and made of additions, multiplications and divisions alone.
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from renderer.base.exact_functions import sine_cosine_deg
from renderer.geometry.positions import Floats, Ids, Indices, position_groups

CREASE_DEG = 40.0  # faces that meet at a larger angle keep an edge between them; common practice, no source
BLOCK = 262_144  # faces that are worked on at once, so that memory stays small
MAX_RING = 2000  # faces round one vertex up to which creases are looked for; beyond, such a vertex is flat-shaded


def face_normals(vertices_m: Floats, faces: Indices) -> Floats:
    """(m, 3) normals of the faces, twice the area long, outward by winding."""
    a = vertices_m[faces[:, 0]]
    normals: Floats = np.cross(vertices_m[faces[:, 1]] - a, vertices_m[faces[:, 2]] - a)
    return normals


def corner_weights(vertices_m: Floats, faces: Indices) -> Floats:
    """(m, 3) Max's weight of each corner, 1/(|e1|^2 |e2|^2); 0 where an edge has no length."""
    points = vertices_m[faces]
    squares = np.square(points[:, [1, 2, 0]] - points).sum(axis=2)  # of edges 01, 12, 20
    product = squares * squares[:, [2, 0, 1]]
    weights: Floats = np.divide(1.0, product, out=np.zeros_like(product), where=product > 0.0)
    return weights


def unit_rows(rows: Floats) -> Floats:
    """The rows at length one; a row without a length, or not finite, becomes +z."""
    largest = np.abs(rows).max(axis=1, keepdims=True)
    good = np.isfinite(largest) & (largest > 0.0)
    scaled: Floats = np.divide(rows, largest, out=np.zeros_like(rows), where=good)
    scaled[~good[:, 0]] = (0.0, 0.0, 1.0)
    scaled /= np.sqrt(np.square(scaled).sum(axis=1, keepdims=True))
    return scaled


def weighted_sums(vertices_m: Floats, faces: Indices, group: Indices, n_groups: int) -> Floats:
    """(n_groups, 3) sum of the weighted face normals round each position."""
    sums = np.zeros((n_groups, 3))
    for start in range(0, len(faces), BLOCK):
        block = faces[start : start + BLOCK]
        normal, weight = face_normals(vertices_m, block), corner_weights(vertices_m, block)
        for corner in range(3):
            where = group[block[:, corner]]
            for axis in range(3):
                sums[:, axis] += np.bincount(where, normal[:, axis] * weight[:, corner], minlength=n_groups)
    return sums


def creased_groups(vertices_m: Floats, faces: Indices, group: Indices, smooth: Floats) -> npt.NDArray[np.bool_]:
    """(n_groups,) whether faces round a position turn from its normal by more than half the crease angle."""
    creased = np.zeros(len(smooth), dtype=bool)
    limit = float(sine_cosine_deg(CREASE_DEG / 2.0)[1])
    for start in range(0, len(faces), BLOCK):
        block = faces[start : start + BLOCK]
        normal = face_normals(vertices_m, block)
        length = np.sqrt(np.square(normal).sum(axis=1))
        for corner in range(3):
            where = group[block[:, corner]]
            turned = (normal * smooth[where]).sum(axis=1) < limit * length
            creased[where[turned]] = True
    return creased


def corner_normals(vertices_m: Floats, faces: Indices, group: Indices, corners: Ids) -> Floats:
    """(n, 3) normals of corners (3 face + corner), each from the faces at its position within the crease angle.

    `corners` must be rising, and hold every corner of each position it touches.
    """
    corners = corners[np.argsort(group[faces.reshape(-1)[corners]], kind="stable")]
    where = group[faces.reshape(-1)[corners]]
    start = np.flatnonzero(np.r_[True, where[1:] != where[:-1]])
    ring = np.diff(np.r_[start, len(corners)])
    face = corners // 3
    raw = face_normals(vertices_m, faces[face])
    facing = unit_rows(raw)
    weighted = raw * corner_weights(vertices_m, faces[face])[np.arange(len(corners)), corners % 3][:, None]
    sums = np.zeros_like(raw)
    small = ring <= MAX_RING
    sums[np.repeat(~small, ring)] = raw[np.repeat(~small, ring)]
    limit = float(sine_cosine_deg(CREASE_DEG)[1])
    base = np.repeat(start, ring)
    for step in range(
        int(ring[small].max(initial=0))
    ):  # the same order for all of a ring, so that equal sums are equal bits
        mine = np.flatnonzero(np.repeat(small & (ring > step), ring))
        other = base[mine] + step
        near = (facing[mine] * facing[other]).sum(axis=1) >= limit
        near |= other == mine
        sums[mine[near]] += weighted[other[near]]
    found = unit_rows(np.where((np.abs(sums).max(axis=1) > 0.0)[:, None], sums, raw))
    return found[np.argsort(corners, kind="stable")]


def smooth_normals(vertices_m: Floats, faces: Indices) -> tuple[Indices, Indices, Floats]:
    """Vertex normals of a mesh, vertices at one place shaded as one, split where faces meet at more than CREASE_DEG.

    Returns `source` (n_new,) the vertex that each new vertex copies (the first n are the old ones, in order), `faces`
    (m, 3) on the new vertices, and `normals` (n_new, 3), unit.
    """
    group, first = position_groups(vertices_m)
    n_groups = len(first)
    smooth = unit_rows(weighted_sums(vertices_m, faces, group, n_groups))
    creased = creased_groups(vertices_m, faces, group, smooth)
    source = np.arange(len(vertices_m), dtype=np.int32)
    normals = smooth[group]
    if not creased.any():
        return source, faces, normals
    corners = np.flatnonzero(creased[group[faces.reshape(-1)]])
    split = corner_normals(vertices_m, faces, group, corners)
    old = faces.reshape(-1)[corners]
    same, kept = position_groups(split)  # equal normals
    _, pick, inverse = np.unique(old.astype(np.int64) * len(kept) + same, return_index=True, return_inverse=True)
    new_faces = faces.reshape(-1).copy()
    new_faces[corners] = len(vertices_m) + inverse
    source = np.concatenate([source, old[pick]]).astype(np.int32)
    return source, new_faces.reshape(-1, 3).astype(np.int32), np.concatenate([normals, split[pick]])
