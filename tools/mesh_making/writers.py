"""Writers of the three mesh formats that the shots use: PLY (binary), OBJ (text) and GLB (glTF 2.0, binary).

Every number is rounded to a micrometre first, so that a file is the same where sines differ in their last bit.
"""

from __future__ import annotations

import json
import struct
from collections.abc import Mapping
from pathlib import Path

import numpy as np

from mesh_making.mesh import Mesh

DIGITS = 6
GLTF_FLOAT, GLTF_UINT = 5126, 5125
GLTF_ARRAY, GLTF_ELEMENTS = 34962, 34963


def rounded(values: np.ndarray) -> np.ndarray:
    """float32 after rounding; a negative zero becomes zero."""
    return (np.round(values, DIGITS) + 0.0).astype("<f4")


def write_ply(path: Path, solid: Mesh) -> None:
    """Binary little-endian PLY with float32 positions, normals and uvs where there are any, and int32 triangles."""
    names = ["x", "y", "z"]
    columns = [rounded(solid.vertices)]
    if solid.normals is not None:
        names += ["nx", "ny", "nz"]
        columns.append(rounded(solid.normals))
    if solid.uvs is not None:
        names += ["s", "t"]
        columns.append(rounded(solid.uvs))
    header = ["ply", "format binary_little_endian 1.0", f"element vertex {len(solid.vertices)}"]
    header += [f"property float {name}" for name in names]
    header += [f"element face {len(solid.faces)}", "property list uchar int vertex_indices", "end_header", ""]
    rows = np.empty(len(solid.faces), dtype=[("count", "u1"), ("corners", "<i4", (3,))])
    rows["count"] = 3
    rows["corners"] = solid.faces
    table = np.ascontiguousarray(np.concatenate(columns, axis=1))
    path.write_bytes("\n".join(header).encode("ascii") + table.tobytes() + rows.tobytes())


def write_obj(path: Path, solid: Mesh) -> None:
    """Text OBJ with positions, uvs where there are any, and triangles."""
    lines = [f"v {x:.6f} {y:.6f} {z:.6f}" for x, y, z in rounded(solid.vertices).tolist()]
    if solid.uvs is not None:
        lines += [f"vt {u:.6f} {v:.6f}" for u, v in rounded(solid.uvs).tolist()]
        lines += [f"f {a}/{a} {b}/{b} {c}/{c}" for a, b, c in (solid.faces + 1).tolist()]
    else:
        lines += [f"f {a} {b} {c}" for a, b, c in (solid.faces + 1).tolist()]
    path.write_text("\n".join(lines) + "\n", encoding="utf-8", newline="\n")


def write_glb(path: Path, parts: Mapping[str, Mesh]) -> None:
    """glTF 2.0 in one binary file: one node and one mesh a part, named after it; positions and indices only."""
    views: list[dict[str, int]] = []
    accessors: list[dict[str, object]] = []
    body = b""
    for solid in parts.values():
        vertices = rounded(solid.vertices)
        for data, target in ((vertices, GLTF_ARRAY), (solid.faces.astype("<u4"), GLTF_ELEMENTS)):
            views.append({"buffer": 0, "byteOffset": len(body), "byteLength": data.nbytes, "target": target})
            body += np.ascontiguousarray(data).tobytes()
        low, high = vertices.min(axis=0).tolist(), vertices.max(axis=0).tolist()
        where = len(views) - 2
        accessors.append(
            {
                "bufferView": where,
                "componentType": GLTF_FLOAT,
                "count": len(vertices),
                "type": "VEC3",
                "min": low,
                "max": high,
            }
        )
        accessors.append(
            {"bufferView": where + 1, "componentType": GLTF_UINT, "count": solid.faces.size, "type": "SCALAR"}
        )
    meshes = [
        {"name": name, "primitives": [{"attributes": {"POSITION": 2 * k}, "indices": 2 * k + 1, "mode": 4}]}
        for k, name in enumerate(parts)
    ]
    document = {
        "asset": {"version": "2.0"},
        "scene": 0,
        "scenes": [{"nodes": list(range(len(parts)))}],
        "nodes": [{"name": name, "mesh": k} for k, name in enumerate(parts)],
        "meshes": meshes,
        "buffers": [{"byteLength": len(body)}],
        "bufferViews": views,
        "accessors": accessors,
    }
    text = json.dumps(document, separators=(",", ":")).encode("ascii")
    text += b" " * (-len(text) % 4)
    body += b"\0" * (-len(body) % 4)
    chunks = struct.pack("<I4s", len(text), b"JSON") + text + struct.pack("<I4s", len(body), b"BIN\0") + body
    path.write_bytes(struct.pack("<4sII", b"glTF", 2, 12 + len(chunks)) + chunks)


def write(path: Path, solid: Mesh | Mapping[str, Mesh]) -> None:
    """Write by the suffix of the path: .ply or .obj take one mesh, .glb takes parts by name."""
    if isinstance(solid, Mesh):
        {".ply": write_ply, ".obj": write_obj}[path.suffix](path, solid)
    else:
        write_glb(path, solid)
