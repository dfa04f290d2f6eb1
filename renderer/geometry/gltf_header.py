"""The JSON of a glTF 2.0 file, checked before any buffer is read, and stripped of pictures, which are not read here."""

from __future__ import annotations

import io
import json
import struct
from pathlib import Path
from typing import Any
from urllib.parse import unquote

from renderer.base.errors import InputError
from renderer.geometry.limits import MAX_FILE_BYTES, MAX_HEADER_BYTES, MAX_NODE_DEPTH, MAX_PARTS
from renderer.geometry.mesh_headers import check_counts, check_size, refuse

MAGIC = b"glTF"
JSON_CHUNK = 0x4E4F534A
COMPONENT_BYTES = {5120: 1, 5121: 1, 5122: 2, 5123: 2, 5125: 4, 5126: 4}
COMPONENTS = {"SCALAR": 1, "VEC2": 2, "VEC3": 3, "VEC4": 4, "MAT2": 4, "MAT3": 9, "MAT4": 16}
FLOAT = 5126
POINTS_AND_LINES = (0, 1, 2, 3)
TRIANGLES = (4, 5)  # and strips


def read_gltf(path: Path) -> tuple[dict[str, Any], bytes]:
    """The JSON of a .gltf or .glb file, and the bytes after it."""
    with path.open("rb") as stream:
        if path.suffix.lower() == ".gltf":
            if check_size(path) > MAX_HEADER_BYTES:
                raise refuse(
                    path, "the glTF file is too large", f"at most {MAX_HEADER_BYTES // 1024**2} MB beside its buffers"
                )
            return parse(path, stream.read()), b""
        head = stream.read(20)
        if len(head) < 20 or head[:4] != MAGIC:
            raise refuse(path, "the file is not a GLB mesh", "a file that starts with glTF")
        version, length, json_bytes, kind = struct.unpack("<4I", head[4:])
        if version != 2 or kind != JSON_CHUNK:
            raise refuse(path, f"the GLB file is of version {version}", "glTF 2.0")
        if length > path.stat().st_size or json_bytes > min(length, MAX_HEADER_BYTES):
            raise refuse(path, "the GLB file is cut short", f"{length:,} bytes by its header")
        return parse(path, stream.read(json_bytes)), stream.read()


def parse(path: Path, text: bytes) -> dict[str, Any]:
    """The JSON as a dict."""
    try:
        header = json.loads(text.decode("utf-8"))
    except (ValueError, RecursionError) as error:
        raise refuse(path, "the JSON of the glTF file cannot be read", "glTF 2.0") from error
    if not isinstance(header, dict) or not str(header.get("asset", {}).get("version", "")).startswith("2"):
        raise refuse(path, "the file is not glTF 2.0", 'an "asset" of version 2.0')
    return header


def check_gltf(path: Path, header: dict[str, Any], rest: bytes) -> None:
    """Refuse what is broken, too large or not read, in one sentence."""
    try:
        required = sorted(set(header.get("extensionsRequired", [])))
        if any(not name.startswith("KHR_materials_") and name != "KHR_texture_transform" for name in required):
            raise refuse(path, f"the glTF file needs {', '.join(required)}, which is not read", "plain triangles")
        if any("EXT_mesh_gpu_instancing" in node.get("extensions", {}) for node in header.get("nodes", [])):
            raise refuse(
                path, "the glTF file places meshes by EXT_mesh_gpu_instancing, which is not read", "one node a copy"
            )
        check_buffers(path, header, rest)
        check_accessors(path, header)
        check_primitives(path, header)
        check_nodes(path, header)
    except (KeyError, IndexError, TypeError, ValueError, AttributeError) as error:
        raise refuse(
            path, f"the glTF file breaks its own format ({type(error).__name__}: {error})", "glTF 2.0"
        ) from error


def check_buffers(path: Path, header: dict[str, Any], rest: bytes) -> None:
    """Buffers must lie in the file, or beside it."""
    total = 0
    sizes = []
    for index, buffer in enumerate(header.get("buffers", [])):
        uri = buffer.get("uri")
        total += int(buffer["byteLength"])
        sizes.append(int(buffer["byteLength"]))
        if uri is None:
            if index != 0 or len(rest) < sizes[-1]:
                raise refuse(path, "the glTF file is cut short", f"{sizes[-1]:,} bytes of buffer {index}")
        elif not uri.startswith("data:"):
            beside(path, uri, sizes[-1])
    if total > MAX_FILE_BYTES:
        raise refuse(path, f"the glTF buffers have {total / 1e9:.1f} GB", f"at most {MAX_FILE_BYTES / 1e9:.1f} GB")
    for view in header.get("bufferViews", []):
        offset, length = int(view.get("byteOffset", 0)), int(view["byteLength"])
        if offset < 0 or length < 0 or offset + length > sizes[view["buffer"]]:
            raise ValueError("a buffer view lies outside its buffer")


def beside(path: Path, uri: str, size: int) -> None:
    """A buffer's file must lie in the folder of the glTF file, or below it."""
    folder = path.parent.resolve()
    target = (folder / unquote(uri)).resolve()
    if not target.is_relative_to(folder):
        raise refuse(path, f'the glTF file names a buffer outside its folder, "{uri[:80]}"', "a file beside it")
    if not target.is_file() or target.stat().st_size < size:
        raise refuse(path, f'the buffer "{uri[:80]}" of the glTF file is missing or cut short', f"{size:,} bytes")


def check_accessors(path: Path, header: dict[str, Any]) -> None:
    """Accessors must lie inside their views."""
    views = header.get("bufferViews", [])
    for accessor in header.get("accessors", []):
        count = int(accessor["count"])
        check_counts(path, count // 3, count // 3)
        width = COMPONENT_BYTES[accessor["componentType"]] * COMPONENTS[accessor["type"]]
        if "bufferView" not in accessor:
            if count * width > MAX_HEADER_BYTES:
                raise refuse(path, f"the glTF file states {count:,} values that it does not hold", "plain arrays")
            continue
        view = views[accessor["bufferView"]]
        stride = int(view.get("byteStride", width))
        if count < 1 or int(accessor.get("byteOffset", 0)) + (count - 1) * stride + width > int(view["byteLength"]):
            raise ValueError("an accessor lies outside its buffer view")


def check_primitives(path: Path, header: dict[str, Any]) -> None:
    """Triangles in floats; points and lines are left out by the reader."""
    accessors = header.get("accessors", [])
    for mesh in header.get("meshes", []):
        for primitive in mesh["primitives"]:
            mode = primitive.get("mode", 4)
            if mode in POINTS_AND_LINES:
                continue
            if mode not in TRIANGLES:
                raise refuse(path, "the glTF file has triangle fans, which are not read", "triangles or strips")
            for name in ("POSITION", "NORMAL", "TEXCOORD_0"):
                at = primitive["attributes"].get(name)
                if at is not None and accessors[at]["componentType"] != FLOAT:
                    raise refuse(path, f"the glTF file stores {name} as whole numbers, which is not read", "floats")
                if at is not None and "sparse" in accessors[at]:
                    raise refuse(
                        path, f"the glTF file stores {name} as a sparse accessor, which is not read", "plain arrays"
                    )
            if "bufferView" not in accessors[primitive["attributes"]["POSITION"]]:
                raise refuse(path, "the glTF file has compressed meshes, which are not read", "plain arrays")


def check_nodes(path: Path, header: dict[str, Any]) -> None:
    """Nodes must make a forest, not too deep or too many."""
    nodes = header.get("nodes", [])
    if len(nodes) > MAX_PARTS:
        raise refuse(path, f"the glTF file has {len(nodes):,} nodes", f"at most {MAX_PARTS:,}")
    scenes = header.get("scenes", [])
    level = list(scenes[header.get("scene", 0)].get("nodes", [])) if scenes else []
    seen = 0
    for _ in range(MAX_NODE_DEPTH):
        if not level:
            return
        seen += len(level)
        if seen > len(nodes):
            break
        level = [child for at in level for child in nodes[at].get("children", [])]
    raise refuse(
        path, "the nodes of the glTF file go round in a circle, or too deep", f"at most {MAX_NODE_DEPTH} levels"
    )


def without_pictures(header: dict[str, Any]) -> dict[str, Any]:
    """A copy that names no pictures, and one plain material, which texture coordinates hang on in the reader."""
    bare = {key: value for key, value in header.items() if key not in ("images", "textures", "samplers", "materials")}
    bare["materials"] = [{}]
    bare["buffers"] = [
        {**buffer, "uri": unquote(buffer["uri"])} if not buffer.get("uri", "data:").startswith("data:") else buffer
        for buffer in header.get("buffers", [])
    ]
    bare["cameras"] = []
    bare["nodes"] = [{key: value for key, value in node.items() if key != "camera"} for node in header.get("nodes", [])]
    bare["meshes"] = [
        {**mesh, "primitives": [{**primitive, "material": 0} for primitive in mesh["primitives"]]}
        for mesh in header.get("meshes", [])
    ]
    return bare


def packed(header: dict[str, Any], rest: bytes) -> io.BytesIO:
    """The JSON and the bytes after it as a GLB file in memory."""
    text = json.dumps(header).encode()
    text += b" " * (-len(text) & 3)
    head = MAGIC + struct.pack("<4I", 2, 20 + len(text) + len(rest), len(text), JSON_CHUNK)
    return io.BytesIO(head + text + rest)


def open_gltf(path: Path) -> io.BytesIO:
    """A checked glTF file, as something that a reader of GLB or glTF can read without harm."""
    header, rest = read_gltf(path)
    check_gltf(path, header, rest)
    try:
        bare = without_pictures(header)
        return packed(bare, rest) if path.suffix.lower() == ".glb" else io.BytesIO(json.dumps(bare).encode())
    except (TypeError, AttributeError, KeyError, InputError) as error:
        raise refuse(path, "the glTF file breaks its own format", "glTF 2.0") from error
