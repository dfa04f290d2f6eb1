"""Broken meshes and textures: each gives one sentence that names the file and what was expected, and no traceback."""

from __future__ import annotations

import base64
import json
import struct
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from PIL import Image

from renderer.base.errors import InputError
from renderer.frames.textures import load_texture
from renderer.geometry.mesh_files import load_mesh
from tests.unit.geometry.mesh_writing import CUBE_FACES, CUBE_POINTS, glb, gltf_header, obj, ply, stl

PLY_HEAD = "ply\nformat ascii 1.0\nelement vertex {v}\nproperty float x\nproperty float y\nproperty float z\n"
PLY_HEAD += "element face {f}\nproperty list uchar int vertex_indices\nend_header\n"


def text(name: str, content: str | bytes) -> Callable[[Path], Path]:
    """A file with this content."""

    def write(folder: Path) -> Path:
        path = folder / name
        path.write_bytes(content if isinstance(content, bytes) else content.encode())
        return path

    return write


def cut(writer: Callable[[Path], Path], share: float) -> Callable[[Path], Path]:
    """A file that lost its end."""

    def write(folder: Path) -> Path:
        path = writer(folder)
        content = path.read_bytes()
        path.write_bytes(content[: int(len(content) * share)])
        return path

    return write


def cube_ply(folder: Path) -> Path:
    return ply(folder / "cube.ply", CUBE_POINTS, CUBE_FACES)


def changed_ply(folder: Path, old: bytes, new: bytes) -> Path:
    path = cube_ply(folder)
    path.write_bytes(path.read_bytes().replace(old, new))
    return path


def cube_glb(folder: Path) -> Path:
    return glb(folder / "cube.glb", *gltf_header(CUBE_POINTS, CUBE_FACES, [{"mesh": 0}]))


def changed_glb(change: Callable[[dict], None]) -> Callable[[Path], Path]:
    """The cube as a GLB file whose JSON was changed."""

    def write(folder: Path) -> Path:
        header, blob = gltf_header(CUBE_POINTS, CUBE_FACES, [{"mesh": 0}])
        change(header)
        return glb(folder / "cube.glb", header, blob)

    return write


def bad_index_ply(folder: Path) -> Path:
    faces = CUBE_FACES.copy()
    faces[2, 1] = 99
    return ply(folder / "cube.ply", CUBE_POINTS, faces)


def nan_ply(folder: Path) -> Path:
    points = CUBE_POINTS.copy()
    points[3, 1] = np.nan
    return ply(folder / "cube.ply", points, CUBE_FACES)


def infinite_stl(folder: Path) -> Path:
    points = CUBE_POINTS.copy()
    points[3, 1] = np.inf
    return stl(folder / "cube.stl", points, CUBE_FACES)


def huge_stl(folder: Path) -> Path:
    """Says that it has four thousand million faces, and is as long as one with none."""
    return text("huge.stl", b"\0" * 80 + struct.pack("<I", 4_000_000_000))(folder)


def sparse_file(folder: Path) -> Path:
    path = folder / "huge.ply"
    with path.open("wb") as stream:
        stream.truncate(3 * 1024**3)
    return path


def gltf_outside(folder: Path) -> Path:
    header, blob = gltf_header(CUBE_POINTS, CUBE_FACES, [{"mesh": 0}])
    header["buffers"][0]["uri"] = "../secret.bin"
    (folder / "inner").mkdir()
    (folder / "secret.bin").write_bytes(blob)
    return text("inner/cube.gltf", json.dumps(header))(folder)


def gltf_missing_buffer(folder: Path) -> Path:
    header, _ = gltf_header(CUBE_POINTS, CUBE_FACES, [{"mesh": 0}])
    header["buffers"][0]["uri"] = "gone.bin"
    return text("cube.gltf", json.dumps(header))(folder)


def gltf_bad_base64(folder: Path) -> Path:
    header, blob = gltf_header(CUBE_POINTS, CUBE_FACES, [{"mesh": 0}])
    header["buffers"][0]["uri"] = "data:application/octet-stream;base64," + base64.b64encode(blob[:40]).decode()
    return text("cube.gltf", json.dumps(header))(folder)


def set_path(*keys_and_value) -> Callable[[dict], None]:
    *keys, last, value = keys_and_value

    def change(header: dict) -> None:
        for key in keys:
            header = header[key]
        header[last] = value

    return change


def endless_nodes(header: dict) -> None:
    header["nodes"] = [{"children": [1], "mesh": 0}, {"children": [2]}, {"children": [1]}]


DEEP = ('{"asset":{"version":"2.0"},"extras":' + "[" * 200_000).encode()

MESHES: list[tuple[str, Callable[[Path], Path], str]] = [
    ("missing", lambda folder: folder / "gone.ply", "does not exist"),
    ("a folder", lambda folder: (folder / "d.ply").mkdir() or folder / "d.ply", "not a file"),
    ("empty", text("empty.obj", b""), "file is empty"),
    ("unknown kind", text("cube.fbx", b"abc"), 'kind ".fbx" are not read'),
    ("too large a file", sparse_file, "at most 2.1 GB"),
    ("not PLY", text("a.ply", "solid\n"), "not a PLY mesh"),
    ("PLY without an end", text("a.ply", "ply\nformat ascii 1.0\nelement vertex 3\n"), "header has no end"),
    ("PLY with a huge count", text("a.ply", PLY_HEAD.format(v=10**12, f=1)), "1,000,000,000,000 vertices"),
    ("PLY with a negative count", text("a.ply", PLY_HEAD.format(v=-3, f=1)), "element NAME COUNT"),
    (
        "PLY with an unknown type",
        text("a.ply", PLY_HEAD.format(v=3, f=1).replace("float", "quad")),
        "property TYPE NAME",
    ),
    ("PLY without faces", text("a.ply", PLY_HEAD.format(v=3, f=0) + "0 0 0\n" * 3), "0 faces"),
    (
        "PLY without x",
        text("a.ply", (PLY_HEAD.format(v=3, f=1) + "0 0 0\n" * 4).replace("float x", "float q")),
        "no x, y and z",
    ),
    ("PLY cut short", cut(cube_ply, 0.6), "cut short"),
    ("PLY that states much", lambda folder: changed_ply(folder, b"vertex 8", b"vertex 30000000"), "at least 360,000,"),
    (
        "PLY with words for numbers",
        text("a.ply", PLY_HEAD.format(v=3, f=1) + "0 0 one\n0 1 0\n1 0 0\n3 0 1 2\n"),
        "words where",
    ),
    ("PLY with a bad index", bad_index_ply, "1 faces name a vertex that does not exist (99)"),
    ("PLY with not-a-number", nan_ply, "1 of 8 vertices of the mesh are not finite"),
    ("STL with infinity", infinite_stl, "not finite"),
    ("STL cut short", text("a.stl", b"\0" * 50), "cut short"),
    ("STL that states too much", huge_stl, "200,000,000,084 bytes"),
    ("STL without faces", text("a.stl", b"\0" * 84), "no faces"),
    ("STL of text without faces", text("a.stl", "solid a\nendsolid a\n"), "no faces"),
    (
        "STL with words for numbers",
        text("a.stl", "solid a\nvertex 0 0 zero\nvertex 1 0 0\nvertex 0 1 0\nendsolid\n"),
        "words where",
    ),
    ("OBJ without faces", text("a.obj", "v 0 0 0\nv 1 0 0\n"), "0 faces"),
    ("OBJ with not-a-number", text("a.obj", "v 0 0 nan\nv 1 0 0\nv 0 1 0\nf 1 2 3\n"), "not finite"),
    ("OBJ with words for numbers", text("a.obj", "v 0 0 a\nv 1 0 0\nv 0 1 0\nf 1 2 3\n"), "words where"),
    ("OBJ with a bad index", lambda folder: obj(folder / "a.obj", CUBE_POINTS, [[0, 1, 50]]), "cannot be read"),
    ("OBJ with short faces", text("a.obj", "v 0 0 0\nv 1 0 0\nv 0 1 0\nf 1 2\n"), "faces"),
    ("OBJ of rubbish", text("a.obj", bytes(range(256)) * 64), "at least one triangle"),
    ("not GLB", text("a.glb", b"glTX" + b"\0" * 40), "not a GLB mesh"),
    ("GLB of version 1", text("a.glb", struct.pack("<4sIIII", b"glTF", 1, 20, 0, 0x4E4F534A)), "version 1"),
    ("GLB cut short", cut(cube_glb, 0.8), "cut short"),
    ("GLB with broken JSON", text("a.glb", struct.pack("<4sIIII", b"glTF", 2, 24, 4, 0x4E4F534A) + b"{a: "), "JSON"),
    ("glTF too deep to parse", text("a.gltf", DEEP), "JSON"),
    ("glTF 1", changed_glb(set_path("asset", "version", "1.0")), "not glTF 2.0"),
    ("glTF with too much in an accessor", changed_glb(set_path("accessors", 1, "count", 100)), "breaks its own format"),
    ("glTF with a huge accessor", changed_glb(set_path("accessors", 1, "count", 10**12)), "at most 40,000,000"),
    (
        "glTF with a view outside its buffer",
        changed_glb(set_path("bufferViews", 0, "byteLength", 10**9)),
        "outside its buffer",
    ),
    ("glTF with a wrong type", changed_glb(set_path("accessors", 1, "type", "VEC9")), "breaks its own format"),
    ("glTF whose nodes go round", changed_glb(endless_nodes), "round in a circle"),
    ("glTF without meshes", changed_glb(set_path("nodes", [{}])), "no faces"),
    (
        "glTF that is compressed",
        changed_glb(set_path("extensionsRequired", ["KHR_draco_mesh_compression"])),
        "KHR_draco",
    ),
    (
        "glTF with instances",
        changed_glb(set_path("nodes", 0, "extensions", {"EXT_mesh_gpu_instancing": {}})),
        "one node a copy",
    ),
    ("glTF with a broken matrix", changed_glb(set_path("nodes", 0, "matrix", [1.0] * 5)), "cannot be read"),
    ("glTF with an infinite matrix", changed_glb(set_path("nodes", 0, "scale", [1e400, 1, 1])), "not finite"),
    ("glTF with a buffer outside its folder", gltf_outside, "outside its folder"),
    ("glTF without its buffer", gltf_missing_buffer, "missing or cut short"),
    ("glTF with half its buffer", gltf_bad_base64, "cannot be read"),
]


def bomb(folder: Path) -> Path:
    """A PNG that states 60,000 x 60,000 pixels in a few bytes."""
    import zlib

    def chunk(kind: bytes, data: bytes) -> bytes:
        return struct.pack(">I", len(data)) + kind + data + struct.pack(">I", zlib.crc32(kind + data))

    head = struct.pack(">IIBBBBB", 60_000, 60_000, 8, 2, 0, 0, 0)
    return text("bomb.png", b"\x89PNG\r\n\x1a\n" + chunk(b"IHDR", head) + chunk(b"IDAT", zlib.compress(b"\0" * 1000)))(
        folder
    )


def picture(folder: Path) -> Path:
    Image.fromarray(np.random.default_rng(1).integers(0, 256, (64, 64, 3), dtype=np.uint8)).save(folder / "noise.png")
    return folder / "noise.png"


TEXTURES: list[tuple[str, Callable[[Path], Path], str, str]] = [
    ("missing", lambda folder: folder / "gone.png", "srgb", "does not exist"),
    ("unknown kind", text("a.psd", b"8BPS"), "srgb", 'kind ".psd" are not read'),
    ("empty", text("a.png", b""), "srgb", "cannot be read"),
    ("of rubbish", text("a.jpg", b"rubbish" * 100), "srgb", "cannot be read"),
    ("cut short", cut(picture, 0.5), "srgb", "cannot be read"),
    ("far too large", bomb, "srgb", "67,108,864 in all"),
    ("a linear picture called sRGB", text("a.exr", b"abc"), "srgb", "not sRGB"),
    ("a broken EXR", text("a.exr", b"abc" * 50), "linear", "a.exr"),
]


def one_sentence(error: InputError, path: Path, said: str) -> None:
    """What every message must be."""
    assert len(error.faults) == 1
    (fault,) = error.faults
    assert said in str(error)
    assert path.name in fault.where
    assert "\n" not in fault.what
    assert not fault.what.endswith(".")
    assert len(fault.what) < 220
    assert "Traceback" not in str(error)


@pytest.mark.parametrize(("writer", "said"), [row[1:] for row in MESHES], ids=[row[0] for row in MESHES])
def test_broken_meshes_are_one_sentence(tmp_path, writer, said):
    path = writer(tmp_path)
    started = time.process_time()
    with pytest.raises(InputError) as caught:
        load_mesh(path, smooth=True)
    assert time.process_time() - started < 2.0
    one_sentence(caught.value, path, said)


@pytest.mark.parametrize(
    ("writer", "encoding", "said"), [row[1:] for row in TEXTURES], ids=[row[0] for row in TEXTURES]
)
def test_broken_textures_are_one_sentence(tmp_path, writer, encoding, said):
    path = writer(tmp_path)
    with pytest.raises(InputError) as caught:
        load_texture(path, encoding, "rec709")
    one_sentence(caught.value, path, said)
