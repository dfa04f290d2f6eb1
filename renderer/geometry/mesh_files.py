"""Meshes from PLY, OBJ, STL, GLB and glTF files, through trimesh, as they stand in the file: nothing repaired."""

from __future__ import annotations

import warnings
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import numpy as np

from renderer.arrays.assets import TriangleAsset
from renderer.arrays.packing import pack
from renderer.base.errors import Fault, InputError, nearest_name
from renderer.geometry.gltf_header import open_gltf
from renderer.geometry.mesh_headers import check_counts, check_ply, check_size, check_stl, obj_faces, refuse
from renderer.geometry.normals import smooth_normals, unit_rows
from renderer.geometry.parts import Part, composed, identity, placed
from renderer.geometry.ply_polygons import read_polygons
from renderer.geometry.positions import Floats, position_groups

Raw = dict[str, Any]

NUMBERS_END = "could not be read to its end"  # NumPy's words, as a warning or an error by version
UNEVEN = "unexpected length"  # trimesh's words for a binary PLY whose faces are not all alike
FARTHEST_M = 1e9  # beyond, squares of squares of distances leave few digits


def load_mesh(
    path: Path, nodes: tuple[str, ...] = (), metres_per_unit: float = 1.0, smooth: bool = False
) -> list[TriangleAsset]:
    """The triangles of a file, in metres, one asset for each mesh in it, transforms of its nodes applied.

    `nodes` takes only the named nodes (and what hangs below them); empty takes all. With `smooth`, vertex normals
    are the file's, or computed where it has none; without, there are none. Raises `InputError` where the file is
    missing, broken, empty, too large or not finite.
    """
    return [placed(part) for part in load_parts(path, nodes, metres_per_unit, smooth)]


def load_parts(
    path: Path, nodes: tuple[str, ...] = (), metres_per_unit: float = 1.0, smooth: bool = False
) -> list[Part]:
    """As `load_mesh`, but what a file places many times is one asset with many matrices."""
    return read_parts(path, nodes, metres_per_unit, smooth, refuse_holes=True)


def read_parts(
    path: Path, nodes: tuple[str, ...], metres_per_unit: float, smooth: bool, refuse_holes: bool = False
) -> list[Part]:
    """The parts of a file; vertices without a place are not-a-number, unless they are to be refused."""
    entries = scene_of(path)
    named = [entry for entry in entries if is_named(entry[1], nodes)]
    check_names(path, nodes, {name for _, names, _ in entries for name in names})
    assets: dict[int, TriangleAsset] = {}
    parts = []
    for raw, names, matrix in named:
        if id(raw) not in assets:
            assets[id(raw)] = asset_from(path, raw, metres_per_unit, smooth, refuse_holes)
        matrix = matrix.copy()
        matrix[:, 3] *= metres_per_unit
        parts.append(Part(names[0], assets[id(raw)], matrix, names))
    for raw, _, _ in named:
        raw.clear()
    return parts


def is_named(names: tuple[str, ...], nodes: tuple[str, ...]) -> bool:
    """Whether a part is asked for, by its own name or that of a node above it; no names ask for all."""
    return not nodes or not set(nodes).isdisjoint(names)


def check_names(path: Path, nodes: tuple[str, ...], known: set[str]) -> None:
    """Refuse names that no part of a file has."""
    for name in nodes:
        if name not in known:
            expected = "one of " + ", ".join(sorted(known)[:8])
            what = f'the mesh file has no part named "{name}"'
            raise InputError(Fault(what, str(path), expected, nearest_name(name, known)))


def scene_of(path: Path) -> list[tuple[Raw, tuple[str, ...], Floats]]:
    """Each placed mesh of the file: its raw arrays, its names (own first, then those above it), its matrix (3, 4)."""
    kind = path.suffix.lower()
    if kind not in READERS:
        expected = "a file that ends in " + ", ".join(sorted(READERS))
        raise InputError(
            Fault(f'meshes of kind "{kind}" are not read', str(path), expected, nearest_name(kind, READERS))
        )
    check_size(path)
    with warnings.catch_warnings():
        warnings.simplefilter("error", DeprecationWarning)  # of numbers that end too soon
        warnings.simplefilter("ignore", RuntimeWarning)
        try:
            raw = READERS[kind](path)
        except InputError:
            raise
        except MemoryError as error:
            raise refuse(path, "the mesh is too large for this machine's memory") from error
        except Exception as error:  # whatever the reader trips over, a person gets one sentence
            raise refuse(
                path, f"the mesh cannot be read ({reason(error)})", f"a whole {kind[1:].upper()} file"
            ) from error
    entries = list(placements(path, raw))
    if not entries:
        raise refuse(path, "the mesh has no faces", "at least one triangle")
    return entries


def reason(error: Exception) -> str:
    """What a library's error says, short."""
    text = str(error).strip().splitlines()
    if text and NUMBERS_END in text[0]:
        return "it has words where numbers belong"
    return (text[0] if text else type(error).__name__)[:120]


def read_ply(path: Path) -> Raw:
    """The raw arrays of a PLY file."""
    from trimesh.exchange.ply import load_ply

    check_ply(path, path.stat().st_size)
    try:
        with path.open("rb") as stream:
            raw: Raw = load_ply(stream, skip_materials=True)
    except ValueError as error:
        if UNEVEN not in str(error):
            raise
        return read_polygons(path)
    raw.pop("metadata", None)
    return raw


def read_stl(path: Path) -> Raw:
    """The raw arrays of an STL file; every triangle brings its own corners, so equal ones are joined."""
    from trimesh.exchange.stl import load_stl_ascii, load_stl_binary

    reader = load_stl_binary if check_stl(path, path.stat().st_size) else load_stl_ascii
    with path.open("rb") as stream:
        raw: Raw = reader(stream)
    for mesh in raw.get("geometry", {"": raw}).values():
        if "vertices" not in mesh:
            continue
        group, first = position_groups(np.asarray(mesh["vertices"], dtype=np.float64))
        mesh["vertices"], mesh["faces"] = mesh["vertices"][first], group.reshape(-1, 3)
    return raw


def read_obj(path: Path) -> Raw:
    """The raw arrays of an OBJ file; its material file is not opened."""
    from trimesh.exchange.obj import load_obj

    n_lines = obj_faces(path)
    with path.open("rb") as stream:
        raw: Raw = load_obj(stream, group_material=False, skip_materials=True, split_objects=True)
    n_faces = sum(len(mesh["faces"]) for mesh in raw.get("geometry", {}).values())
    if n_faces < n_lines:
        raise refuse(
            path,
            f"only {n_faces:,} of {n_lines:,} faces of the OBJ file could be read",
            "numbers in every v and f line",
        )
    return raw


def read_gltf_file(path: Path) -> Raw:
    """The raw arrays and nodes of a GLB or glTF file."""
    from trimesh.exchange.gltf import load_glb, load_gltf
    from trimesh.resolvers import FilePathResolver

    stream = open_gltf(path)
    raw: Raw = (load_glb if path.suffix.lower() == ".glb" else load_gltf)(stream, resolver=FilePathResolver(str(path)))
    return raw


READERS: dict[str, Callable[[Path], Raw]] = {
    ".ply": read_ply,
    ".stl": read_stl,
    ".obj": read_obj,
    ".glb": read_gltf_file,
    ".gltf": read_gltf_file,
}


def placements(path: Path, raw: Raw) -> Iterator[tuple[Raw, tuple[str, ...], Floats]]:
    """What a reader returned, as placed meshes of triangles."""
    if "geometry" not in raw:
        if "faces" in raw and raw["faces"] is not None and len(raw["faces"]):
            yield raw, (path.stem,), identity()
        return
    meshes = {name: mesh for name, mesh in raw["geometry"].items() if len(mesh.get("faces", ()))}
    edges = {edge["frame_to"]: edge for edge in raw.get("graph", [])}
    if not edges:
        yield from ((mesh, (name,), identity()) for name, mesh in meshes.items())
    for edge in edges.values():
        name = edge.get("geometry")
        if name not in meshes:
            continue
        names, matrix, above = [edge["frame_to"], name], matrix_of(edge), edge.get("frame_from")
        while above in edges and above not in names[2:]:
            names.append(above)
            matrix = composed(matrix_of(edges[above]), matrix)
            above = edges[above].get("frame_from")
        if not np.isfinite(matrix).all():
            raise refuse(path, f'the matrix of node "{names[0]}" is not finite', "finite numbers")
        yield meshes[name], tuple(map(str, names)), matrix


def matrix_of(edge: Raw) -> Floats:
    """A node's own matrix, (3, 4)."""
    matrix = np.asarray(edge.get("matrix", np.eye(4)), dtype=np.float64)
    return np.array(matrix[:3, :4])


def asset_from(path: Path, raw: Raw, metres_per_unit: float, smooth: bool, refuse_holes: bool) -> TriangleAsset:
    """Checked arrays of one mesh."""
    vertices = np.array(raw["vertices"], dtype=np.float64).reshape(-1, 3)
    faces = triangles(raw["faces"])
    check_counts(path, len(vertices), len(faces))
    if len(faces) == 0 or len(vertices) == 0:
        raise refuse(path, "the mesh has no faces", "at least one triangle")
    low, high = int(faces.min()), int(faces.max())
    if low < 0 or high >= len(vertices):
        bad = int(((faces < 0) | (faces >= len(vertices))).any(axis=1).sum())
        raise refuse(
            path,
            f"{bad:,} faces name a vertex that does not exist ({low if low < 0 else high})",
            f"0 to {len(vertices) - 1}",
        )
    faces = faces.astype(np.int32)
    vertices *= metres_per_unit
    whole = settle(path, vertices, faces, refuse_holes)
    uvs = rows_or_none(getattr(raw.get("visual"), "uv", raw.get("uvs")), len(vertices), 2)
    normals = rows_or_none(raw.get("vertex_normals"), len(vertices), 3)
    if not smooth or not whole:
        normals = np.zeros((0, 3))
    elif not len(normals) or not usable(normals):
        source, faces, normals = smooth_normals(vertices, faces)
        vertices, uvs = vertices[source], uvs[source] if len(uvs) else uvs
    else:
        normals = unit_rows(normals)
    return TriangleAsset(pack(vertices), pack(faces, np.int32), pack(normals), pack(np.nan_to_num(uvs)))


def triangles(faces: Any) -> Any:
    """Faces as (m, 3) whole numbers; polygons are cut into triangles."""
    if getattr(faces, "ndim", 0) != 2 or faces.shape[1] != 3:
        from trimesh.geometry import triangulate_quads

        faces = triangulate_quads(faces)
    return np.asarray(faces).reshape(-1, 3)


def settle(path: Path, vertices: Floats, faces: Any, refuse_holes: bool) -> bool:
    """Whether all vertices have a place, nearer than FARTHEST_M.

    Those without one become not-a-number, or an `InputError`; unless no triangle uses them: they go where one is used.
    """
    good = (np.abs(vertices) < FARTHEST_M).all(axis=1)
    if good.all():
        return True
    used = np.zeros(len(vertices), dtype=bool)
    used[faces.reshape(-1)] = True
    bad = int((used & ~good).sum())
    if bad and refuse_holes:
        what = f"{bad:,} of {len(vertices):,} vertices of the mesh are not finite numbers, or too far away"
        raise refuse(path, what, f"finite numbers, within {FARTHEST_M:g} m")
    vertices[~good] = np.nan
    if used[good].any():
        vertices[~used] = vertices[np.flatnonzero(used & good)[0]]
    return bad == 0


def rows_or_none(values: Any, n: int, width: int) -> Floats:
    """(n, width) floats, or (0, width) where there are none, or not as many."""
    rows = np.zeros((0, width)) if values is None else np.asarray(values, dtype=np.float64)
    return rows if rows.shape == (n, width) else np.zeros((0, width))


def usable(normals: Floats) -> bool:
    """Whether every normal of a file is finite and has a length."""
    return bool(np.isfinite(normals).all() and (np.abs(normals).max(axis=1) > 0.0).all())
