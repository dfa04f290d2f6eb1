"""Binary PLY files whose faces have different numbers of corners, which trimesh does not read."""

from __future__ import annotations

from pathlib import Path
from typing import Any, Literal

import numpy as np
import numpy.typing as npt

from renderer.geometry.mesh_headers import ply_elements, ply_header, refuse

TYPES = {
    **dict.fromkeys(("char", "int8"), "i1"),
    **dict.fromkeys(("uchar", "uint8"), "u1"),
    **dict.fromkeys(("short", "int16"), "i2"),
    **dict.fromkeys(("ushort", "uint16"), "u2"),
    **dict.fromkeys(("int", "int32"), "i4"),
    **dict.fromkeys(("uint", "uint32"), "u4"),
    **dict.fromkeys(("float", "float32"), "f4"),
    **dict.fromkeys(("double", "float64"), "f8"),
}
INDEX_NAMES = ("vertex_indices", "vertex_index")
UV_NAMES = (("s", "t"), ("u", "v"), ("texture_u", "texture_v"))
Integers = npt.NDArray[np.int64]


def read_polygons(path: Path) -> dict[str, Any]:
    """Vertices, faces (as triangles, each polygon a fan), and normals and texture coordinates of vertices."""
    with path.open("rb") as stream:
        lines = ply_header(path, stream)
        content = np.frombuffer(stream.read(), dtype=np.uint8)
    order = ">" if any("big_endian" in line for line in lines) else "<"
    at, raw = 0, {}
    for name, (count, properties) in ply_elements(path, lines).items():
        lists = [words for words in properties if words[0] == "list"]
        if name == "face":
            raw["faces"], at = read_faces(path, content, at, count, properties, order)
        elif lists:
            raise refuse(path, f'the PLY element "{name}" has lists, which are not read', "lists in faces alone")
        else:
            dtype = np.dtype([(words[-1], order + TYPES[words[0]]) for words in properties])
            end = at + count * dtype.itemsize
            if end > len(content):
                raise refuse(path, "the PLY file is cut short", f'{count:,} entries of "{name}"')
            if name == "vertex":
                raw.update(vertex_arrays(content[at:end].view(dtype)))
            at = end
    return raw


def vertex_arrays(rows: npt.NDArray[Any]) -> dict[str, Any]:
    """Positions, normals and texture coordinates, those that are there."""
    names = set(rows.dtype.names or ())
    arrays = {"vertices": np.column_stack([rows[axis] for axis in "xyz"])}
    if {"nx", "ny", "nz"} <= names:
        arrays["vertex_normals"] = np.column_stack([rows[axis] for axis in ("nx", "ny", "nz")])
    for u, v in UV_NAMES:
        if {u, v} <= names:
            arrays["uvs"] = np.column_stack([rows[u], rows[v]])
            break
    return arrays


def read_faces(
    path: Path, content: npt.NDArray[np.uint8], at: int, count: int, properties: list[list[str]], order: str
) -> tuple[Integers, int]:
    """Triangles of `count` faces from the byte `at` on, and the byte after them."""
    lists = [k for k, words in enumerate(properties) if words[0] == "list"]
    if len(lists) != 1 or properties[lists[0]][-1] not in INDEX_NAMES:
        raise refuse(path, "the PLY faces have other lists than their vertices", "one list, vertex_indices")
    before = sum(np.dtype(TYPES[words[0]]).itemsize for words in properties[: lists[0]])
    after = sum(np.dtype(TYPES[words[0]]).itemsize for words in properties[lists[0] + 1 :])
    length_type, index_type = (np.dtype(order + TYPES[kind]) for kind in properties[lists[0]][1:3])
    if length_type.kind == "f" or index_type.kind == "f":
        raise refuse(path, "the PLY faces count or name vertices in fractions", "whole numbers")
    starts, sizes = np.empty(count, dtype=np.int64), np.empty(count, dtype=np.int64)
    bytes_of_length, blob = length_type.itemsize, content.tobytes()
    signed = length_type.kind == "i"
    endian: Literal["big", "little"] = "big" if order == ">" else "little"
    for face in range(count):
        at += before
        size = int.from_bytes(blob[at : at + bytes_of_length], endian, signed=signed)
        at += bytes_of_length
        starts[face], sizes[face] = at, size
        at += size * index_type.itemsize + after
        if size < 0 or at > len(blob):
            raise refuse(path, f"the PLY file is cut short, or broken at face {face:,}", f"{count:,} faces")
    fans = [fan(content, starts[sizes == size], int(size), index_type) for size in np.unique(sizes[sizes > 2])]
    return np.concatenate([np.zeros((0, 3), np.int64), *fans]), at


def fan(content: npt.NDArray[np.uint8], starts: Integers, size: int, index_type: np.dtype[Any]) -> Integers:
    """Triangles of all polygons with `size` corners."""
    at = starts[:, None] + np.arange(size * index_type.itemsize)
    corners = np.ascontiguousarray(content[at]).view(index_type).astype(np.int64)
    return np.stack(
        [np.stack([corners[:, 0], corners[:, k], corners[:, k + 1]], axis=1) for k in range(1, size - 1)], 1
    ).reshape(-1, 3)
