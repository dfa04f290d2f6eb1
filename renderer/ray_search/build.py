"""From meshes and places to a world that rays can search."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
import numpy.typing as npt

from renderer.arrays.assets import Placement, SphereAsset, TriangleAsset
from renderer.arrays.looks import SHEET, Objects
from renderer.arrays.world import COUNT, FIRST, MATRIX, NONE, NOTHING, OBJECT, ROOT, STEPS, World
from renderer.ray_search.growing import BALLS, PLACED, TRIANGLES, Forest, Part, Tables, aligned
from renderer.ray_search.hits import POINT_ERROR
from renderer.ray_search.places import inverse
from renderer.ray_search.tree import DOWN, TINY

Floats = npt.NDArray[np.float64]
Singles = npt.NDArray[np.float32]
Indices = npt.NDArray[np.int32]
Asset = TriangleAsset | SphereAsset

FEW = 16  # primitives up to which a shared asset is copied into the world: cheaper than a tree of its own
EVEN = 1e-12  # relative difference of a matrix's axes up to which a sphere stays a sphere
SLACK = 1e-12  # share of an instance's size and place by which its box is widened: rounding of rays carried into it
TOUCH = 16e3  # error bounds along a ray, at a grazing cosine of 1e-3, within which boundaries may count as one


def build_world(
    assets: Sequence[Asset], placements: Sequence[Placement], objects: Objects, n_threads: int | None = None
) -> World:
    """Search trees over all that is placed; the same for any number of threads (default: as many as kernels use).

    What stands still, and is alone of its asset or has few primitives, is carried into the world and shares one tree;
    other assets get a tree of their own, however often they are placed.
    """
    sizes = [size_of(asset) for asset in assets]
    firsts = np.concatenate([[0], np.cumsum(sizes)]).astype(np.int64)
    times = np.bincount([place.asset for place in placements], minlength=len(assets))
    matrices, matrix_rows = matrix_table(placements)
    tables = asset_tables(assets, matrices)
    forest = Forest(tables, n_threads or kernel_threads())
    roots = np.full(len(assets), NOTHING, dtype=np.int64)
    world_parts: tuple[list[Part], list[Part]] = ([], [])
    boxes, instanced = np.zeros((len(placements), 6)), []
    for k, place in enumerate(placements):
        asset, size, first = assets[place.asset], sizes[place.asset], int(firsts[place.asset])
        kind = BALLS if isinstance(asset, SphereAsset) else TRIANGLES
        boxes[k] = placed_box(asset, place.matrices)
        if stands_in_world(place, kind, size, int(times[place.asset])):
            world_parts[kind].append(Part(first, size, matrix_rows[k], k))
            continue
        instanced.append(k)
        if roots[place.asset] == NOTHING:
            roots[place.asset], _ = forest.add_parts(kind, [Part(first, size, 0, -1)])
    world_root = forest.join([forest.add_parts(kind, world_parts[kind]) for kind in (TRIANGLES, BALLS)])
    top_root, _ = forest.add(PLACED, instance_records(boxes, instanced), 0)
    rows = np.zeros((len(placements), 8), dtype=np.int32)
    for k, place in enumerate(placements):
        rows[k, OBJECT], rows[k, ROOT] = place.object_id, roots[place.asset]
        rows[k, MATRIX], rows[k, STEPS] = matrix_rows[k], len(place.matrices)
        rows[k, NORMALS_UVS] = tables.shifts[place.asset]
        rows[k, FIRST], rows[k, COUNT] = firsts[place.asset], sizes[place.asset]
    instances = frozen(rows)
    packs, balls = forest.packs(instances)
    largest = float(np.abs(boxes).max()) if len(boxes) else 0.0
    has_sheets = bool((np.asarray(objects.kind)[rows[:, OBJECT]] == SHEET).any())
    return World(
        nodes=frozen(joined_nodes(forest)),
        packs=frozen(packs),
        balls=frozen(balls),
        placed=frozen(forest.placed()),
        vertices=tables.vertices,
        faces=tables.faces,
        normals=tables.normals,
        uvs=tables.uvs,
        spheres=tables.spheres,
        instances=instances,
        matrices=tables.matrices,
        roots=frozen(np.array([world_root, top_root, has_sheets], dtype=np.int32)),
        kinds=frozen(np.array(objects.kind, dtype=np.int32)),
        touch_m=frozen(np.array([TOUCH * POINT_ERROR * 12.0 * largest])),
    )


NORMALS_UVS = slice(4, 6)


def object_primitives(world: World, object_id: int) -> tuple[Indices, Indices]:
    """All elements of surface of an object: instance and primitive of each, (n,) int32."""
    found = np.flatnonzero(world.instances[:, OBJECT] == object_id).tolist()
    instances = [np.full(world.instances[k, COUNT], k, dtype=np.int32) for k in found]
    numbers = [world.instances[k, FIRST] + np.arange(world.instances[k, COUNT], dtype=np.int32) for k in found]
    none = np.zeros(0, dtype=np.int32)
    return np.concatenate([none, *instances]), np.concatenate([none, *numbers])


def kernel_threads() -> int:
    """How many threads kernels use at present."""
    from numba import get_num_threads  # here, for base.jit must be the first to import it

    return int(get_num_threads())


def size_of(asset: Asset) -> int:
    """How many primitives an asset has."""
    return len(asset.radii_m) if isinstance(asset, SphereAsset) else len(asset.faces)


def stands_in_world(place: Placement, kind: int, size: int, times: int) -> bool:
    """Whether a placement's primitives go into the tree of the world."""
    if len(place.matrices) > 1 or (times > 1 and size > FEW):
        return False
    if kind == TRIANGLES:
        return True
    axes = place.matrices[0][:, :3].T @ place.matrices[0][:, :3]
    return bool(np.abs(axes - np.eye(3) * axes[0, 0]).max() <= EVEN * abs(axes[0, 0]))


def asset_tables(assets: Sequence[Asset], matrices: Floats) -> Tables:
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
        faces.append(asset.faces + np.int32(base) if base else asset.faces)
        vertices.append(asset.vertices_m)
        has_normals, has_uvs = len(asset.vertex_normals) > 0, len(asset.uvs) > 0
        shifts.append((count(normals) - base if has_normals else NONE, count(uvs) - base if has_uvs else NONE))
        normals.append(asset.vertex_normals)
        uvs.append(asset.uvs)
    return Tables(
        joined(vertices, 3, np.float64),
        joined(faces, 3, np.int32),
        joined(normals, 3, np.float64),
        joined(uvs, 2, np.float64),
        joined(spheres, 4, np.float64),
        frozen(matrices),
        shifts,
    )


def count(parts: Sequence[npt.NDArray[Any]]) -> int:
    """Rows in all parts."""
    return sum(len(part) for part in parts)


def joined(parts: Sequence[npt.NDArray[Any]], columns: int, dtype: npt.DTypeLike) -> npt.NDArray[Any]:
    """The parts behind each other, read-only, (n, columns)."""
    return frozen(np.ascontiguousarray(np.concatenate([np.zeros((0, columns), dtype), *parts]), dtype=dtype))


def joined_nodes(forest: Forest) -> Singles:
    """The nodes of all trees, (n, 64)."""
    nodes = aligned(forest.n_nodes, 64, np.float32)
    np.concatenate([np.zeros((0, 64), np.float32), *forest.nodes], out=nodes)
    return nodes


def frozen(array: npt.NDArray[Any]) -> npt.NDArray[Any]:
    """The array itself, from now on read-only: it is this module's own and too large to copy."""
    array.flags.writeable = False
    return array


def matrix_table(placements: Sequence[Placement]) -> tuple[Floats, list[int]]:
    """All matrices with their inverses (n, 25), the identity first; and the first row of each placement."""
    still = tuple(np.eye(3, 4).ravel().tolist())
    rows: list[tuple[float, ...]] = [(*still, *still, 1.0)]
    firsts = []
    for place in placements:
        firsts.append(len(rows))
        for matrix in np.asarray(place.matrices, dtype=np.float64):
            there = tuple(matrix.ravel().tolist())
            back, det = inverse(there)
            rows.append((*there, *back, 1.0 if det > 0.0 else -1.0))
    return np.array(rows, dtype=np.float64), firsts


def placed_box(asset: Asset, matrices: Floats) -> Floats:
    """The box (6,) that an asset keeps to over the whole shutter."""
    if not size_of(asset):
        return np.zeros(6)
    if isinstance(asset, SphereAsset):
        reach = asset.radii_m[:, None]
        low, high = (asset.centres_m - reach).min(axis=0), (asset.centres_m + reach).max(axis=0)
    else:
        # Column by column, which is ten times as fast.
        low, high = (np.array([f(asset.vertices_m[:, k]) for k in range(3)]) for f in (np.min, np.max))
    corners = np.array([[(low, high)[i >> k & 1][k] for k in range(3)] for i in range(8)])
    # Corners move in straight lines between the steps, so the boxes of the steps hold all that lies between.
    moved = (matrices[:, None, :, :3] * corners[None, :, None, :]).sum(axis=-1) + matrices[:, None, :, 3]
    moved = moved.reshape(-1, 3)
    slack = SLACK * (np.abs(moved).max() + np.abs(corners).max() * np.abs(matrices[:, :, :3]).max())
    return np.concatenate([moved.min(axis=0) - slack, moved.max(axis=0) + slack])


def instance_records(boxes: Floats, instanced: Sequence[int]) -> Singles:
    """Boxes of instances, rounded outward, as the records that a tree is grown over (n, 8)."""
    records = aligned(len(instanced), 8, np.float32)
    low, high = boxes[instanced, :3], -boxes[instanced, 3:]
    records[:, :3] = low - (np.abs(low) * DOWN + TINY)
    records[:, 4:7] = high - (np.abs(high) * DOWN + TINY)
    words = records.view(np.int32)
    words[:, 3], words[:, 7] = instanced, -1
    return records
