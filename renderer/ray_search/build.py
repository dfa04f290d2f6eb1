"""From meshes and places to a world that rays can search."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np
import numpy.typing as npt

from renderer.arrays.assets import Placement, SphereAsset, TriangleAsset
from renderer.arrays.looks import SHEET, Objects
from renderer.arrays.world import COUNT, FIRST, NONE, OBJECT, World
from renderer.ray_search.hits import POINT_ERROR
from renderer.ray_search.places import inverse
from renderer.ray_search.tree import BINS, DEEP, grow_tree

Floats = npt.NDArray[np.float64]
Indices = npt.NDArray[np.int32]
Asset = TriangleAsset | SphereAsset

SLACK = 1e-9  # share of its largest number by which a box is widened
TOUCH = 16e3  # error bounds along a ray, at a grazing cosine of 1e-3, within which boundaries may count as one


@dataclass
class Trees:
    """Nodes and items of all trees, as they are grown one by one."""

    boxes: list[Floats] = field(default_factory=list)
    links: list[Indices] = field(default_factory=list)
    items: list[Indices] = field(default_factory=list)
    corners: list[Floats] = field(default_factory=list)
    n_nodes: int = 0
    n_items: int = 0

    def add(self, boxes: Floats, items: Indices, corners: Floats) -> int:
        """Grow a tree over boxes (n, 6); returns its root, or -1 when there is nothing in it."""
        n = len(boxes)
        if n == 0:
            return -1
        order = np.arange(n, dtype=np.int64)
        node_boxes, links = np.empty((2 * n, 6)), np.zeros((2 * n, 2), dtype=np.int32)
        work = np.empty((DEEP + 64, 4), dtype=np.int64)
        bins, counts = np.empty((BINS + 2, 7)), np.empty(BINS, dtype=np.int64)
        used = grow_tree(boxes, order, self.n_items, node_boxes, links, 0, work, bins, counts)
        slack = SLACK * np.abs(node_boxes[0]).max()
        node_boxes[:used, :3] -= slack
        node_boxes[:used, 3:] += slack
        links[:used, 0][links[:used, 1] == 0] += self.n_nodes
        root = self.n_nodes
        self.boxes.append(node_boxes[:used].copy())
        self.links.append(links[:used].copy())
        self.items.append(items[order])
        self.corners.append(corners[order])
        self.n_nodes += used
        self.n_items += n
        return root


def build_world(assets: Sequence[Asset], placements: Sequence[Placement], objects: Objects) -> World:
    """Search trees over all that is placed.

    What stands still and is alone of its asset is carried into the world and shares one tree; other assets get a tree
    of their own, however often they are placed.
    """
    sizes = [len(a.faces) if isinstance(a, TriangleAsset) else len(a.radii_m) for a in assets]
    firsts = np.concatenate([[0], np.cumsum(sizes)]).astype(np.int64)
    times = np.bincount([place.asset for place in placements], minlength=len(assets))
    tables = asset_tables(assets)
    matrices, matrix_rows = matrix_table(placements)
    trees, roots = Trees(), np.full(len(assets), -1, dtype=np.int64)
    baked: list[tuple[Floats, Indices, Floats]] = []
    boxes = np.zeros((len(placements), 6))
    alone = [times[p.asset] == 1 and len(p.matrices) == 1 for p in placements]
    for k, place in enumerate(placements):
        asset, first = assets[place.asset], int(firsts[place.asset])
        if alone[k]:
            baked.append(primitives(asset, first, k, place.matrices[0]))
        elif roots[place.asset] < 0 and sizes[place.asset]:
            roots[place.asset] = trees.add(*primitives(asset, first, -1, np.eye(3, 4)))
        boxes[k] = placed_box(asset, place.matrices)
    instanced = [k for k in range(len(placements)) if not alone[k] and sizes[placements[k].asset]]
    world_root = trees.add(*(np.concatenate(part) for part in zip(*baked, strict=True))) if baked else -1
    items = np.array([[k, -1] for k in instanced], dtype=np.int32).reshape(-1, 2)
    top_root = trees.add(boxes[instanced], items, np.zeros((len(instanced), 9)))
    rows = np.zeros((len(placements), 8), dtype=np.int32)
    for k, place in enumerate(placements):
        shifts = tables.shifts[place.asset]
        first, n = int(firsts[place.asset]), sizes[place.asset]
        rows[k] = (place.object_id, roots[place.asset], matrix_rows[k], len(place.matrices), *shifts, first, n)
    largest = float(np.abs(boxes).max()) if len(boxes) else 0.0
    has_sheets = bool((np.asarray(objects.kind)[rows[:, OBJECT]] == SHEET).any())
    return World(
        boxes=joined(trees.boxes, (0, 6), np.float64),
        links=joined(trees.links, (0, 2), np.int32),
        items=joined(trees.items, (0, 2), np.int32),
        corners=joined(trees.corners, (0, 9), np.float64),
        vertices=tables.vertices,
        faces=tables.faces,
        normals=tables.normals,
        uvs=tables.uvs,
        spheres=tables.spheres,
        instances=frozen(rows),
        matrices=frozen(matrices),
        roots=frozen(np.array([world_root, top_root, has_sheets], dtype=np.int32)),
        kinds=frozen(np.array(objects.kind, dtype=np.int32)),
        touch_m=frozen(np.array([TOUCH * POINT_ERROR * 12.0 * largest])),
    )


def object_primitives(world: World, object_id: int) -> tuple[Indices, Indices]:
    """All elements of surface of an object: instance and primitive of each, (n,) int32."""
    found = [k for k, row in enumerate(world.instances) if row[OBJECT] == object_id]
    instances = [np.full(world.instances[k, COUNT], k, dtype=np.int32) for k in found]
    numbers = [world.instances[k, FIRST] + np.arange(world.instances[k, COUNT], dtype=np.int32) for k in found]
    none = np.zeros(0, dtype=np.int32)
    return np.concatenate([none, *instances]), np.concatenate([none, *numbers])


@dataclass(frozen=True)
class Tables:
    """What hits are looked up in, all assets behind each other. `shifts`: an asset's NORMALS and UVS columns."""

    vertices: Floats
    faces: Indices
    normals: Floats
    uvs: Floats
    spheres: Floats
    shifts: list[tuple[int, int]]


def asset_tables(assets: Sequence[Asset]) -> Tables:
    """The arrays of all assets behind each other."""
    vertices: list[Floats] = []
    faces: list[Indices] = []
    normals: list[Floats] = []
    uvs: list[Floats] = []
    spheres: list[Floats] = []
    shifts = []
    for asset in assets:
        if isinstance(asset, SphereAsset):
            numbers = np.full((len(asset.radii_m), 3), -1, dtype=np.int32)
            numbers[:, 0] = count(spheres) + np.arange(len(numbers))
            faces.append(numbers)
            spheres.append(np.column_stack([asset.centres_m, asset.radii_m]))
            shifts.append((NONE, NONE))
            continue
        base = count(vertices)
        faces.append(asset.faces + np.int32(base))
        vertices.append(asset.vertices_m)
        has_normals, has_uvs = len(asset.vertex_normals) > 0, len(asset.uvs) > 0
        shifts.append((count(normals) - base if has_normals else NONE, count(uvs) - base if has_uvs else NONE))
        normals.append(asset.vertex_normals)
        uvs.append(asset.uvs)
    return Tables(
        joined(vertices, (0, 3), np.float64),
        joined(faces, (0, 3), np.int32),
        joined(normals, (0, 3), np.float64),
        joined(uvs, (0, 2), np.float64),
        joined(spheres, (0, 4), np.float64),
        shifts,
    )


def count(parts: Sequence[npt.NDArray[np.generic]]) -> int:
    """Rows in all parts."""
    return sum(len(part) for part in parts)


def joined(parts: Sequence[npt.NDArray[np.generic]], empty: tuple[int, ...], dtype: npt.DTypeLike) -> npt.NDArray[Any]:
    """The parts behind each other, read-only; an array of shape `empty` where there are none."""
    return frozen(np.ascontiguousarray(np.concatenate([np.zeros(empty, dtype), *parts]), dtype=dtype))


def frozen(array: npt.NDArray[Any]) -> npt.NDArray[Any]:
    """The array itself, from now on read-only: it is this module's own and too large to copy."""
    array.flags.writeable = False
    return array


def matrix_table(placements: Sequence[Placement]) -> tuple[Floats, list[int]]:
    """All matrices with their inverses (n, 25), and the first row of each placement."""
    rows: list[tuple[float, ...]] = []
    firsts = []
    for place in placements:
        firsts.append(len(rows))
        for matrix in np.asarray(place.matrices, dtype=np.float64):
            there = tuple(float(x) for x in matrix.ravel())
            back, det = inverse(there)
            rows.append((*there, *back, 1.0 if det > 0.0 else -1.0))
    return np.array(rows, dtype=np.float64).reshape(-1, 25), firsts


def carried(matrix: Floats, points: Floats) -> Floats:
    """Points (..., 3) through a matrix (3, 4), rounded as the kernel `carry` rounds."""
    x, y, z = points[..., 0], points[..., 1], points[..., 2]
    return np.stack([m[0] * x + m[1] * y + m[2] * z + m[3] for m in matrix], axis=-1)


def primitives(asset: Asset, first: int, instance: int, matrix: Floats) -> tuple[Floats, Indices, Floats]:
    """Boxes (n, 6), (instance, primitive) (n, 2) and corners (n, 9) of an asset's primitives, through a matrix."""
    if isinstance(asset, SphereAsset):
        centres = carried(matrix, asset.centres_m)
        radii = asset.radii_m * np.cbrt(abs(np.linalg.det(matrix[:, :3])))
        n = len(radii)
        boxes = np.hstack([centres - radii[:, None], centres + radii[:, None]])
        corners = np.hstack([centres, radii[:, None], np.zeros((n, 5))])
    else:
        points = carried(matrix, asset.vertices_m)[asset.faces]
        n = len(points)
        boxes = np.hstack([points.min(axis=1), points.max(axis=1)]) if n else np.zeros((0, 6))
        corners = points.reshape(n, 9)
    numbers = np.column_stack([np.full(n, instance, dtype=np.int32), first + np.arange(n, dtype=np.int32)])
    return np.ascontiguousarray(boxes), numbers.astype(np.int32), np.ascontiguousarray(corners)


def placed_box(asset: Asset, matrices: Floats) -> Floats:
    """The box (6,) that an asset keeps to over the whole shutter."""
    if isinstance(asset, SphereAsset):
        reach = asset.radii_m[:, None]
        points = np.vstack([asset.centres_m - reach, asset.centres_m + reach])
    else:
        points = asset.vertices_m
    if not len(points):
        return np.zeros(6)
    low, high = points.min(axis=0), points.max(axis=0)
    corners = np.array([[(low, high)[i >> k & 1][k] for k in range(3)] for i in range(8)])
    # Corners move in straight lines between the steps, so the boxes of the steps hold all that lies between.
    moved = np.concatenate([carried(matrix, corners) for matrix in matrices])
    return np.concatenate([moved.min(axis=0), moved.max(axis=0)])
