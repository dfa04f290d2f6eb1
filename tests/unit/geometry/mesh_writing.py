"""Small mesh files, written byte by byte, so that tests know what is in them."""

from __future__ import annotations

import json
import struct
from pathlib import Path

import numpy as np

CUBE_POINTS = np.array([[x, y, z] for x in (0.0, 1.0) for y in (0.0, 1.0) for z in (0.0, 1.0)])
CUBE_FACES = np.array(
    [
        [0, 1, 3],
        [0, 3, 2],
        [4, 6, 7],
        [4, 7, 5],
        [0, 4, 5],
        [0, 5, 1],
        [2, 3, 7],
        [2, 7, 6],
        [0, 2, 6],
        [0, 6, 4],
        [1, 5, 7],
        [1, 7, 3],
    ]
)


def ply(path: Path, points, faces, normals=None, uvs=None) -> Path:
    """A binary PLY file."""
    columns = [np.asarray(points, dtype="<f4")]
    names = ["x", "y", "z"]
    for extra, titles in ((normals, ["nx", "ny", "nz"]), (uvs, ["s", "t"])):
        if extra is not None:
            columns.append(np.asarray(extra, dtype="<f4"))
            names += titles
    rows = np.empty(len(faces), dtype=[("n", "u1"), ("v", "<i4", (3,))])
    rows["n"], rows["v"] = 3, faces
    head = "ply\nformat binary_little_endian 1.0\n" + f"element vertex {len(points)}\n"
    head += "".join(f"property float {name}\n" for name in names)
    head += f"element face {len(faces)}\nproperty list uchar int vertex_indices\nend_header\n"
    path.write_bytes(head.encode() + np.hstack(columns).astype("<f4").tobytes() + rows.tobytes())
    return path


def stl(path: Path, points, faces) -> Path:
    """A binary STL file."""
    rows = np.zeros(len(faces), dtype=[("n", "<f4", (3,)), ("v", "<f4", (3, 3)), ("a", "<u2")])
    rows["v"] = np.asarray(points)[np.asarray(faces)]
    path.write_bytes(b"\0" * 80 + struct.pack("<I", len(faces)) + rows.tobytes())
    return path


def obj(path: Path, points, faces, extra: str = "") -> Path:
    """An OBJ file."""
    lines = [f"v {x!r} {y!r} {z!r}" for x, y, z in np.asarray(points).tolist()]
    lines += ["f " + " ".join(str(int(i) + 1) for i in face) for face in faces]
    path.write_text("\n".join(lines) + "\n" + extra, encoding="utf-8")
    return path


def gltf_header(points, faces, nodes: list[dict], normals=None, uvs=None) -> tuple[dict, bytes]:
    """JSON and buffer of one mesh that `nodes` place; nodes name the mesh themselves."""
    arrays = [
        (np.asarray(faces, dtype="<u4").reshape(-1), "SCALAR", 5125),
        (np.asarray(points, dtype="<f4"), "VEC3", 5126),
    ]
    attributes = {"POSITION": 1}
    if normals is not None:
        attributes["NORMAL"] = len(arrays)
        arrays.append((np.asarray(normals, dtype="<f4"), "VEC3", 5126))
    if uvs is not None:
        attributes["TEXCOORD_0"] = len(arrays)
        arrays.append((np.asarray(uvs, dtype="<f4"), "VEC2", 5126))
    views, accessors, blob = [], [], b""
    for k, (array, kind, component) in enumerate(arrays):
        views.append({"buffer": 0, "byteOffset": len(blob), "byteLength": array.nbytes})
        accessors.append({"bufferView": k, "componentType": component, "count": len(array), "type": kind})
        blob += array.tobytes()
    inner = {child for node in nodes for child in node.get("children", [])}
    header = {
        "asset": {"version": "2.0"},
        "scene": 0,
        "scenes": [{"nodes": [k for k in range(len(nodes)) if k not in inner]}],
        "nodes": nodes,
        "meshes": [{"name": "cube", "primitives": [{"attributes": attributes, "indices": 0}]}],
        "accessors": accessors,
        "bufferViews": views,
        "buffers": [{"byteLength": len(blob)}],
    }
    return header, blob


def glb(path: Path, header: dict, blob: bytes) -> Path:
    """A GLB file."""
    text = json.dumps(header).encode()
    text += b" " * (-len(text) & 3)
    blob += b"\0" * (-len(blob) & 3)
    total = 12 + 8 + len(text) + 8 + len(blob)
    head = struct.pack("<4sII", b"glTF", 2, total) + struct.pack("<I4s", len(text), b"JSON") + text
    path.write_bytes(head + struct.pack("<I4s", len(blob), b"BIN\0") + blob)
    return path
