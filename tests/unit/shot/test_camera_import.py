"""Cameras of glTF files."""

from __future__ import annotations

import json
import math
import struct
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import shot_writing as shots

from renderer.shot.camera_import import ImportedCamera, read_camera, split_node
from renderer.shot.schema.flaws import Flaw

HALF = math.sqrt(0.5)


def document(**changes: Any) -> dict[str, Any]:
    """A layout: a dolly, turned by 90 degrees about y and twice as large, with a camera on it; and a second camera."""
    nodes = [
        {
            "name": "dolly",
            "children": [1],
            "translation": [10, 0, 0],
            "rotation": [0, HALF, 0, HALF],
            "scale": [2, 2, 2],
        },
        {"name": "ShotCam", "camera": 0, "translation": [0, 1, 3]},
        {"name": "WitnessCam", "camera": 1, "matrix": [1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 7, 8, 9, 1]},
    ]
    cameras = [
        {"type": "perspective", "perspective": {"yfov": 0.5, "aspectRatio": 1.7, "znear": 0.1}},
        {"type": "perspective", "perspective": {"yfov": 0.8, "znear": 0.1}},
    ]
    return {"asset": {"version": "2.0"}, "nodes": nodes, "cameras": cameras} | changes


def glb(data: dict[str, Any], version: int = 2) -> bytes:
    text = json.dumps(data).encode()
    text += b" " * (-len(text) % 4)
    head = struct.pack("<4s2I", b"glTF", version, 20 + len(text))
    return head + struct.pack("<2I", len(text), 0x4E4F534A) + text


def read(folder: Path, content: bytes | dict[str, Any], node: str) -> ImportedCamera | Flaw:
    path = folder / f"layout{len(list(folder.iterdir()))}.glb"
    path.write_bytes(content if isinstance(content, bytes) else json.dumps(content).encode())
    return read_camera(path, node)


@pytest.mark.parametrize("pack", [glb, lambda data: json.dumps(data).encode()])
def test_the_world_transform_of_its_node_without_scale(tmp_path: Path, pack: Any) -> None:
    found = read(tmp_path, pack(document()), "ShotCam")
    assert isinstance(found, ImportedCamera)
    m = np.reshape(found.matrix, (3, 4))
    assert np.allclose(m[:, 3], [10 + 6, 2, 0])  # z of the dolly points along x; its scale doubles the way
    assert np.allclose(m[:, :3], [[0, 0, 1], [0, 1, 0], [-1, 0, 0]])
    assert found.focal_length_mm(20.25) == pytest.approx(10.125 / math.tan(0.25), rel=1e-12)


def test_a_matrix_is_read_column_by_column(tmp_path: Path) -> None:
    found = read(tmp_path, document(), "WitnessCam")
    assert isinstance(found, ImportedCamera)
    assert found.matrix == (1, 0, 0, 7, 0, 1, 0, 8, 0, 0, 1, 9)


def test_the_only_camera_needs_no_name(tmp_path: Path) -> None:
    one = document(nodes=[{"camera": 0}])
    assert isinstance(read(tmp_path, one, ""), ImportedCamera)


def ring() -> dict[str, Any]:
    return document(nodes=[{"name": "ShotCam", "camera": 0, "children": [1]}, {"children": [0]}])


@pytest.mark.parametrize(
    ("content", "what"),
    [
        (document(), "a file with 2 cameras and does not choose"),
        (document(cameras=[]), "without a camera"),
        (document(cameras=[{"type": "orthographic", "orthographic": {}}]), "without perspective"),
        (document(cameras=[{"perspective": {"yfov": "wide"}}]), "without perspective"),
        (document(nodes=[{"name": "ShotCam", "camera": 0, "scale": [0, 1, 1]}]), "flatten"),
        (document(nodes=[{"name": "ShotCam", "camera": 0, "translation": [0, "x", 1]}]), "broken transform"),
        (document(nodes=[{"name": "ShotCam", "camera": 0, "rotation": [0, 0, 0, 0]}]), "no quaternion"),
        (document(nodes="none"), "its nodes are no list"),
        (ring(), "hangs below itself"),
        (glb(document(), version=1), "not glTF 2.0"),
        (glb(document())[:60], "not glTF"),
        (b"solid", "not glTF"),
        (b"[" * 100_000, "not glTF"),
        (b"\xff\xfe", "not glTF"),
        (b"[1, 2]", "its nodes are no list"),
    ],
)
def test_refused(tmp_path: Path, content: Any, what: str) -> None:
    found = read(tmp_path, content, "" if content == document() else "ShotCam")
    assert isinstance(found, Flaw)
    assert what in found.what


def test_nodes_and_frame_numbers_are_told_apart() -> None:
    assert split_node("layout.glb#ShotCam") == ("layout.glb", "ShotCam")
    assert split_node("layout.####.glb#Shot Cam.001") == ("layout.####.glb", "Shot Cam.001")
    assert split_node("layout.####.glb") == ("layout.####.glb", "")
    assert split_node("layout.#.glb") == ("layout.#.glb", "")


def test_in_a_shot(tmp_path: Path) -> None:
    (tmp_path / "layout.glb").write_bytes(glb(document()))
    text = 'format = 1\n[camera]\nimport = "layout.glb#ShotCam"\nsensor = 32.0\npixels = [1000, 500]\n'
    found = shots.frame(tmp_path, text, whole=True).camera
    assert found.focal_length_mm == pytest.approx(8.0 / math.tan(0.25), rel=1e-12)
    assert np.allclose(found.matrices[0, :, 3], [16, 2, 0])
    stated = shots.frame(tmp_path, text + "focal_length = 50\n", whole=True).camera
    assert stated.focal_length_mm == 50.0
