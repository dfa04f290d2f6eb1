"""What can be measured on a mesh: is it closed, wound one way, outward, clean. Facts only; the checks judge them.

A mesh is inspected as light sees it: vertices at one place count as one, since files split them where normals or
texture coordinates change. All parts of an object are inspected together, since files split them by material too.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import numpy.typing as npt

from renderer.arrays.assets import SphereAsset, TriangleAsset
from renderer.geometry.normals import BLOCK, face_normals
from renderer.geometry.positions import Floats, Ids, Indices, position_groups, rounded_groups

Vector = tuple[float, float, float]
Mask = npt.NDArray[np.bool_]

DEGENERATE = 1e-8  # height over longest edge below which a triangle counts as degenerate
WELD = 1e-5  # share of the mesh's diagonal within which vertices are tried as one when the mesh is open


@dataclass(frozen=True)
class MeshReport:
    """Facts of a mesh, in its own space.

    `watertight`: every edge is shared by an even number of triangles. `consistent`: every edge is run through as often
    one way as the other, open edges apart. `outward`: watertight, consistent, and of positive signed volume.
    `n_inside_out`: closed shells that are wound inward and do not lie inside the bounds of a closed outward one (those
    are hollows).
    `n_open_edges`, edges with an odd number of triangles; `n_crowded_edges`, with more than two; `n_flipped_edges`,
    with two or more triangles that do not balance. `n_normals_against`: triangles' corners whose stored normal
    points to the other side of its triangle. `n_non_finite`: vertices that are not numbers; the other facts leave out
    triangles that use them. `welds_within_m`: an open mesh is closed when vertices within this distance are
    joined; None when it is not, or when it is closed as it stands.
    """

    n_vertices: int
    n_faces: int
    n_positions: int
    watertight: bool
    consistent: bool
    outward: bool
    volume_m3: float
    area_m2: float
    n_open_edges: int
    n_crowded_edges: int
    n_flipped_edges: int
    n_degenerate: int
    n_duplicate: int
    n_non_finite: int
    n_normals_against: int
    n_components: int
    n_inside_out: int
    low_m: Vector
    high_m: Vector
    welds_within_m: float | None

    @property
    def diagonal_m(self) -> float:
        """Length of the diagonal of the bounding box [m]."""
        return float(np.linalg.norm(np.subtract(self.high_m, self.low_m)))


def inspect_mesh(
    mesh: TriangleAsset | SphereAsset | Sequence[TriangleAsset | SphereAsset] | Path,
    nodes: tuple[str, ...] = (),
    metres_per_unit: float = 1.0,
) -> MeshReport:
    """Measure one mesh, several as one, or a file. A file that cannot be read at all is an `InputError`."""
    if isinstance(mesh, Path):
        from renderer.geometry.mesh_files import read_parts  # reads more than rendering would accept
        from renderer.geometry.parts import placed

        return inspect_mesh([placed(part) for part in read_parts(mesh, nodes, metres_per_unit, smooth=False)])
    if isinstance(mesh, (TriangleAsset, SphereAsset)):
        mesh = [mesh]
    return report(joined([item if isinstance(item, TriangleAsset) else as_triangles(item) for item in mesh]))


def as_triangles(spheres: SphereAsset) -> TriangleAsset:
    """Analytic spheres as coarse ones, exact in bounds."""
    from renderer.geometry.round_solids import sphere_mesh

    parts = []
    for centre, radius in zip(spheres.centres_m, spheres.radii_m, strict=True):
        part = sphere_mesh(float(radius), 32)
        parts.append(TriangleAsset(part.vertices_m + centre, part.faces, part.vertex_normals, part.uvs))
    return joined(parts)


def joined(assets: Sequence[TriangleAsset]) -> TriangleAsset:
    """Several meshes as one; normals are kept where all have them."""
    if len(assets) == 1:
        return assets[0]
    offsets = np.cumsum([0] + [len(asset.vertices_m) for asset in assets])
    shaded = all(len(asset.vertex_normals) for asset in assets)
    return TriangleAsset(
        np.concatenate([asset.vertices_m for asset in assets]),
        np.concatenate([asset.faces + np.int32(offset) for asset, offset in zip(assets, offsets, strict=False)]),
        np.concatenate([asset.vertex_normals for asset in assets]) if shaded else np.zeros((0, 3)),
        np.zeros((0, 2)),
    )


def report(mesh: TriangleAsset) -> MeshReport:
    """All the facts of one mesh."""
    finite: Mask = np.asarray(np.isfinite(mesh.vertices_m).all(axis=1))
    faces = mesh.faces if finite.all() else mesh.faces[finite[mesh.faces].all(axis=1)]
    vertices = np.where(finite[:, None], mesh.vertices_m, 0.0) if not finite.all() else mesh.vertices_m
    group, first = position_groups(vertices)
    corners = group[faces]
    open_at, crowded, flipped = edge_faults(corners, len(first))
    label = component_labels(corners, len(first))
    names, volumes, low, high, area, degenerate = shells(vertices, faces, label[corners[:, 0]])
    watertight = len(faces) > 0 and len(open_at) == 0
    closed = np.isin(names, label[open_at], invert=True)
    return MeshReport(
        n_vertices=len(mesh.vertices_m),
        n_faces=len(mesh.faces),
        n_positions=len(first),
        watertight=watertight,
        consistent=flipped == 0,
        outward=watertight and flipped == 0 and float(volumes.sum()) > 0.0,
        volume_m3=float(volumes.sum()),
        area_m2=area,
        n_open_edges=len(open_at),
        n_crowded_edges=crowded,
        n_flipped_edges=flipped,
        n_degenerate=degenerate,
        n_duplicate=duplicates(corners),
        n_non_finite=int((~finite).sum()),
        n_normals_against=normals_against(vertices, faces, mesh.vertex_normals),
        n_components=len(volumes),
        n_inside_out=inside_out(volumes[closed], low[closed], high[closed]),
        low_m=vector(low.min(axis=0)) if len(low) else (0.0, 0.0, 0.0),
        high_m=vector(high.max(axis=0)) if len(high) else (0.0, 0.0, 0.0),
        welds_within_m=None if watertight or not len(faces) else weld_distance(vertices, faces, low, high),
    )


def vector(row: Floats) -> Vector:
    """Three plain numbers."""
    return float(row[0]), float(row[1]), float(row[2])


def edge_faults(corners: Indices, n_positions: int) -> tuple[Ids, int, int]:
    """A position of each open edge, and the numbers of crowded and flipped edges, of triangles of positions (m, 3)."""
    a = corners.reshape(-1).astype(np.int64)
    b = corners[:, [1, 2, 0]].reshape(-1).astype(np.int64)
    real = a != b
    forward = a < b
    key = (np.where(forward, a, b) * n_positions + np.where(forward, b, a))[real] * 2 + forward[real]
    key.sort()
    edge = key >> 1
    start = np.flatnonzero(np.r_[True, edge[1:] != edge[:-1]]) if len(edge) else np.zeros(0, np.int64)
    count = np.diff(np.r_[start, len(edge)])
    ahead = np.add.reduceat(key & 1, start) if len(start) else np.zeros(0, np.int64)
    flipped = (count >= 2) & (2 * ahead != count) & (count % 2 == 0)
    open_at = edge[start[count % 2 == 1]] // max(n_positions, 1)
    return open_at, int((count > 2).sum()), int(flipped.sum())


def duplicates(corners: Indices) -> int:
    """Triangles that repeat another one's three positions, in any order."""
    if not len(corners):
        return 0
    low, high = corners.min(axis=1), corners.max(axis=1)
    middle = corners.sum(axis=1, dtype=np.int64) - low - high
    key = (low.astype(np.int64) << 32) | high
    order = np.argsort(key, kind="stable")
    key, middle = key[order], middle[order]
    start = np.flatnonzero(np.diff(key, prepend=-1))
    for at in start[np.diff(np.append(start, len(key))) > 2]:  # rare: more than two triangles on one pair of positions
        end = at + np.searchsorted(key[at:], key[at], side="right")
        middle[at:end].sort()
    return int(((key[1:] == key[:-1]) & (middle[1:] == middle[:-1])).sum())


def component_labels(corners: Indices, n_positions: int) -> Ids:
    """(n_positions,) the lowest position that each is joined to through triangles: minima passed along, then halved."""
    label = np.arange(n_positions, dtype=np.int64)
    a = np.concatenate([corners[:, 0], corners[:, 1]])
    b = np.concatenate([corners[:, 1], corners[:, 2]])
    while len(a):
        high, low = np.maximum(label[a], label[b]), np.minimum(label[a], label[b])
        np.minimum.at(label, high, low)
        while True:
            shorter = label[label]
            if np.array_equal(shorter, label):
                break
            label = shorter
        live = label[a] != label[b]
        a, b = a[live], b[live]
    return label


def shells(vertices: Floats, faces: Indices, label: Ids) -> tuple[Ids, Floats, Floats, Floats, float, int]:
    """Labels and signed volumes (k,), low and high corners (k, 3) of the components, area of all, number of degenerate
    faces."""
    names, which = np.unique(label, return_inverse=True)
    volumes, area, degenerate = np.zeros(len(names)), 0.0, 0
    low, high = np.full((len(names), 3), np.inf), np.full((len(names), 3), -np.inf)
    middle = vertices[faces[0]].mean(axis=0) if len(faces) else np.zeros(3)
    for start in range(0, len(faces), BLOCK):
        block, part = faces[start : start + BLOCK], which[start : start + BLOCK]
        normal = face_normals(vertices, block)
        double_area = np.sqrt(np.square(normal).sum(axis=1))
        points = vertices[block]
        longest = np.square(points[:, [1, 2, 0]] - points).sum(axis=2).max(axis=1)
        volumes += np.bincount(part, (normal * (points[:, 0] - middle)).sum(axis=1) / 6.0, minlength=len(names))
        area += float(double_area.sum()) / 2.0
        degenerate += int((double_area <= DEGENERATE * longest).sum())
        order = np.argsort(part, kind="stable")
        begin = np.flatnonzero(np.diff(part[order], prepend=-1))
        here = part[order[begin]]
        low[here] = np.minimum(low[here], np.minimum.reduceat(points.min(axis=1)[order], begin))
        high[here] = np.maximum(high[here], np.maximum.reduceat(points.max(axis=1)[order], begin))
    return names, volumes, low, high, area, degenerate


def inside_out(volumes: Floats, low: Floats, high: Floats) -> int:
    """Components of negative volume that no outward component's bounds hold."""
    outward = np.flatnonzero(volumes > 0.0)
    count = 0
    for k in np.flatnonzero(volumes < 0.0):
        holds = (low[outward] <= low[k]).all(axis=1) & (high[outward] >= high[k]).all(axis=1)
        count += not holds.any()
    return count


def normals_against(vertices: Floats, faces: Indices, normals: Floats) -> int:
    """Corners whose normal points to the back of their triangle."""
    if not len(normals):
        return 0
    count = 0
    for start in range(0, len(faces), BLOCK):
        block = faces[start : start + BLOCK]
        facing = face_normals(vertices, block)
        count += int(((normals[block] * facing[:, None, :]).sum(axis=2) < 0.0).sum())
    return count


def weld_distance(vertices: Floats, faces: Indices, low: Floats, high: Floats) -> float | None:
    """The first distance, up to WELD of the diagonal, at which joining near vertices closes the mesh."""
    diagonal = float(np.linalg.norm(high.max(axis=0) - low.min(axis=0)))
    for share in (WELD / 100.0, WELD):
        for shift in (0.0, 0.5):  # two grids, since a pair of vertices may stand on either side of a line of one
            group = rounded_groups(vertices + shift * share * diagonal, share * diagonal)
            if diagonal > 0.0 and not len(edge_faults(group[faces], int(group.max()) + 1)[0]):
                return share * diagonal
    return None
