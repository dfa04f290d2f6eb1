"""A camera of a glTF 2.0 file (.glb or .gltf): the matrix of its node in the world and its field of view.

Only the JSON is read: nodes and cameras. Khronos Group, glTF 2.0 Specification, 2021, sections 3.10 and 4.4.
"""

from __future__ import annotations

import json
import math
import re
import struct
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path
from typing import Any

from renderer.shot.schema.flaws import KEY, Flaw, clean, nearest
from renderer.shot.schema.numbers import is_number
from renderer.shot.transforms import IDENTITY, Matrix, combine, determinant, joined, of_quaternion, square

LARGEST_JSON = 64 * 1024 * 1024  # bytes
DEEPEST = 1000  # nodes inside nodes
_NODE = re.compile(r"(.*[^#])#([^#.][^#]*)", re.DOTALL)

MAGIC, VERSION, JSON_CHUNK = 0x46546C67, 2, 0x4E4F534A  # specification, section 4.4


@dataclass(frozen=True)
class ImportedCamera:
    """Camera to world in metres, rigid, and the vertical field of view [radians]."""

    matrix: Matrix
    yfov_rad: float

    def focal_length_mm(self, sensor_height_mm: float) -> float:
        """The focal length that sees this field of view on a sensor of this height."""
        return sensor_height_mm / 2.0 / math.tan(self.yfov_rad / 2.0)


def split_node(name: str) -> tuple[str, str]:
    """``file.glb#Node`` as file and node; the node is empty where none is named. A run of ``#`` is a frame number."""
    match = _NODE.fullmatch(name)
    return (match[1], match[2]) if match else (name, "")


def read_camera(path: Path, node_name: str) -> ImportedCamera | Flaw:
    """The camera of that node, or the file's only camera where none is named; or what is wrong."""
    try:
        state = path.stat()
        return _read(path, node_name, state.st_mtime_ns, state.st_size)
    except _Refused as error:
        return error.flaw
    except (OSError, UnicodeDecodeError, json.JSONDecodeError, RecursionError):
        return Flaw((), f"`{KEY}` names a file that is not glTF", "a .glb or .gltf file, version 2")


@lru_cache(maxsize=64)
def _read(path: Path, node_name: str, changed: int, size: int) -> ImportedCamera:
    """The camera of a file in one state, so that a thousand frames read it once."""
    return _camera(json.loads(_json_text(path)), node_name)


class _Refused(Exception):
    def __init__(self, what: str, expected: str, nearest: str = "") -> None:
        super().__init__(what)
        self.flaw = Flaw((), what, expected, nearest)


def _json_text(path: Path) -> str:
    """The JSON of a .glb or .gltf file."""
    with path.open("rb") as file:
        head = file.read(20)
        if len(head) == 20 and struct.unpack("<I", head[:4])[0] == MAGIC:
            _, version, _, length, kind = struct.unpack("<5I", head)
            if version != VERSION or kind != JSON_CHUNK:
                raise _Refused(f"`{KEY}` names a file that is not glTF 2.0", "a .glb or .gltf file, version 2")
            data = file.read(min(length, LARGEST_JSON + 1))
        else:
            data = head + file.read(LARGEST_JSON + 1)
    if len(data) > LARGEST_JSON:
        raise _Refused(f"`{KEY}` names too large a file", f"at most {LARGEST_JSON // 2**20} MiB of JSON")
    return data.decode("utf-8")


def _rows(document: Any, name: str) -> list[dict[str, Any]]:
    value = document.get(name, []) if isinstance(document, dict) else None
    if not isinstance(value, list) or not all(isinstance(row, dict) for row in value):
        raise _Refused(f"`{KEY}` names a broken glTF file: its {name} are no list", "a glTF 2.0 file")
    return value


def _camera(document: Any, node_name: str) -> ImportedCamera:
    nodes, cameras = _rows(document, "nodes"), _rows(document, "cameras")
    held = [index for index, node in enumerate(nodes) if _index(node.get("camera"), cameras) is not None]
    names = [str(nodes[index].get("name", "")) for index in held]
    if not held:
        raise _Refused(f"`{KEY}` names a file without a camera", "a glTF file with a perspective camera")
    chosen = [index for index, name in zip(held, names, strict=True) if name == node_name] if node_name else held
    listing = f"one of {', '.join(clean(name) for name in names[:8])}"
    if not chosen:
        raise _Refused(f'`{KEY}` names no camera: "{clean(node_name)}"', listing, nearest(node_name, names))
    if len(chosen) > 1:
        what = f'"{clean(node_name)}" twice' if node_name else f"a file with {len(chosen)} cameras and does not choose"
        raise _Refused(f"`{KEY}` names {what}", listing)
    camera = cameras[_index(nodes[chosen[0]]["camera"], cameras) or 0]
    view = camera.get("perspective")
    yfov = view.get("yfov") if isinstance(view, dict) else None
    if yfov is None or not is_number(yfov) or not 0.0 < float(yfov) < math.pi:
        raise _Refused(f"`{KEY}` names a camera without perspective", "a perspective camera with a yfov")
    return ImportedCamera(_rigid(_world(nodes, chosen[0])), float(yfov))


def _index(value: Any, rows: list[Any]) -> int | None:
    """A reference into a list of the file, or None where there is none."""
    return value if isinstance(value, int) and not isinstance(value, bool) and 0 <= value < len(rows) else None


def _world(nodes: list[dict[str, Any]], index: int) -> Matrix:
    """The product of a node's matrix and those of the nodes above it."""
    parents: dict[int, int] = {}
    for above, node in enumerate(nodes):
        children = node.get("children", [])
        for child in children if isinstance(children, list) else []:
            found = _index(child, nodes)
            if found is not None:
                parents[found] = above
    matrix, steps, current = IDENTITY, 0, index
    while True:
        matrix = combine(_local(nodes[current]), matrix)
        steps += 1
        if current not in parents:
            return matrix
        if steps > min(DEEPEST, len(nodes)):
            raise _Refused(
                f"`{KEY}` names a node that hangs below itself", f"at most {DEEPEST} nodes above it, and no ring"
            )
        current = parents[current]


def _local(node: dict[str, Any]) -> Matrix:
    """A node's own matrix: stated column by column, or as translation, rotation (x, y, z, w) and scale."""
    if "matrix" in node:
        m = _numbers(node["matrix"], 16)
        return tuple(m[4 * column + row] for row in range(3) for column in range(4))
    moved = _numbers(node.get("translation", [0, 0, 0]), 3)
    x, y, z, w = _numbers(node.get("rotation", [0, 0, 0, 1]), 4)
    scale = _numbers(node.get("scale", [1, 1, 1]), 3)
    if not any((x, y, z, w)):
        raise _Refused(f"`{KEY}` names a camera whose rotation is no quaternion", "4 numbers that are not all 0")
    turned = of_quaternion((w, x, y, z))
    return joined(tuple(value * scale[index % 3] for index, value in enumerate(turned)), moved)


def _numbers(value: Any, count: int) -> tuple[float, ...]:
    if not isinstance(value, list) or len(value) != count or not all(is_number(entry) for entry in value):
        raise _Refused(f"`{KEY}` names a node with a broken transform", f"{count} finite numbers")
    return tuple(float(entry) for entry in value)


def _rigid(m: Matrix) -> Matrix:
    """The camera's place and turn; a camera takes no part in the scale of its node (specification, section 3.10)."""
    from renderer.shot.resolve_camera import without_scale

    if determinant(square(m)) == 0.0:
        raise _Refused(f"`{KEY}` names a camera that its nodes flatten", "a transform that can be undone")
    return without_scale(m)
