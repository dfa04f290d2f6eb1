"""The fingerprint of a frame: what changes it, and what does not."""

from __future__ import annotations

import json
import shutil
from pathlib import Path

import pytest
import shot_writing as shots

SHOT = """\
format = 1
title = "Lock Nine"
[units]
length = "m"
[frames]
range = "1001-1010"
[camera]
position = { 1001 = [0, 1, 5], 1010 = [0, 2, 5] }
target = [0, 1, 0]
focal_length = 35
[sun]
elevation = 24
azimuth = 205
[sky]
kind = "clear"
[materials.bottle]
refractive_index = 1.5
[materials.unused]
refractive_index = 1.6
[[objects]]
name = "tank"
mesh = "tank.ply"
material = "bottle"
[[objects]]
name = "spray"
mesh = "spray.####.ply"
material = "water"
[[lights]]
name = "lamp"
shape = { disc = 0.1 }
luminance = 100
[render]
rounds = 64
[[bows_to_check]]
name = "bow"
radius = 42
[checks]
sign_off = [{ rule = "bow.radius", why = "wide" }]
[variants.noon]
"sun.elevation" = 60
"""


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    place = tmp_path / "lock nine"
    place.mkdir()
    for name in ("tank.ply", "spray.1001.ply", "spray.1002.ply"):
        (place / name).write_text(name, encoding="utf-8")
    return place


def fingerprint(folder: Path, text: str = SHOT, number: int = 1001, **given: object) -> str:
    return shots.frame(folder, text, number, whole=True, **given).fingerprint  # type: ignore[arg-type]


def changed(old: str, new: str) -> str:
    assert old in SHOT
    return SHOT.replace(old, new)


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ('title = "Lock Nine"', 'title = "Lock Ten"'),
        ('name = "tank"', 'name = "vat"'),
        ('name = "lamp"', 'name = "lantern"'),
        ("radius = 42", "radius = 30"),
        ('why = "wide"', 'why = "wider"'),
        ("rounds = 64", "rounds = 128"),
        ("rounds = 64", "seed = 1"),
        ('range = "1001-1010"', 'range = "1001-1020"'),
        ("refractive_index = 1.6", "refractive_index = 1.7"),
        ('"sun.elevation" = 60', '"sun.elevation" = 65'),
        ("elevation = 24", "elevation = 24.0"),
        ("elevation = 24", "elevation = { 1001 = 24, 1020 = 24 }"),
        ("[sun]", "# later\n\n[sun]"),
        ("azimuth = 205", "azimuth = 205\nvisibility = 23.0"),
        ('length = "m"', 'up = "+y"\nlength = "m"'),
        ("bottle", "flask"),
    ],
)
def test_kept(folder: Path, old: str, new: str) -> None:
    assert fingerprint(folder, changed(old, new)) == fingerprint(folder)


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ("elevation = 24", "elevation = 24.000001"),
        ("1010 = [0, 2, 5]", "1010 = [0, 3, 5]"),
        ("refractive_index = 1.5", "refractive_index = 1.51"),
        ('material = "water"', 'material = "sea water"'),
        ("luminance = 100", "luminance = 101"),
        ('length = "m"', 'length = "ft"'),
        ('length = "m"', 'north = "+x"'),
        ("focal_length = 35", "focal_length = 35\nshutter = 90"),
        ("focal_length = 35", "focal_length = 35\ncrop = [0, 0, 10, 10]"),
        ("rounds = 64", 'space = "rec709"'),
        ("rounds = 64", "wavelengths = [500]"),
        ('kind = "clear"', 'kind = "overcast"'),
        ('mesh = "tank.ply"', 'mesh = "tank.ply"\ntransform = { scale = 2 }'),
    ],
)
def test_changed(folder: Path, old: str, new: str) -> None:
    assert fingerprint(folder, changed(old, new)) != fingerprint(folder)


def test_a_new_export_under_the_same_name_changes_it(folder: Path) -> None:
    before = fingerprint(folder)
    (folder / "tank.ply").write_text("another mesh", encoding="utf-8")
    assert fingerprint(folder) != before


def test_a_mesh_under_another_name_keeps_it(folder: Path) -> None:
    before = fingerprint(folder)
    (folder / "meshes").mkdir()
    (folder / "tank.ply").rename(folder / "meshes" / "vat.ply")
    assert fingerprint(folder, changed("tank.ply", "meshes/vat.ply")) == before


def test_another_folder_keeps_it(folder: Path) -> None:
    other = folder.parent / "elsewhere"
    shutil.copytree(folder, other)
    assert fingerprint(other) == fingerprint(folder)


def test_frames_differ_by_their_files_and_keys(folder: Path) -> None:
    assert fingerprint(folder, number=1001) != fingerprint(folder, number=1002)
    still = changed("position = { 1001 = [0, 1, 5], 1010 = [0, 2, 5] }", "position = [0, 1, 5]")
    (folder / "spray.1002.ply").write_text("spray.1001.ply", encoding="utf-8")
    assert fingerprint(folder, still, 1001) == fingerprint(folder, still, 1002)


def test_a_variant_and_an_override_count_by_what_they_change(folder: Path) -> None:
    noon = fingerprint(folder, variant="noon")
    assert noon != fingerprint(folder)
    assert noon == fingerprint(folder, overrides=["sun.elevation=60"])


def test_motion_counts_by_what_the_shutter_sees(folder: Path) -> None:
    """Two ways of moving that meet at the frame are two pictures."""
    slow = changed(
        "position = { 1001 = [0, 1, 5], 1010 = [0, 2, 5] }", "position = { 1000 = [0, 1, 5], 1002 = [0, 1.2, 5] }"
    )
    fast = changed(
        "position = { 1001 = [0, 1, 5], 1010 = [0, 2, 5] }", "position = { 1000 = [0, 0.1, 5], 1002 = [0, 2.1, 5] }"
    )
    assert shots.frame(folder, slow, whole=True).camera.matrices[2, 1, 3] == pytest.approx(1.1)
    assert fingerprint(folder, slow) != fingerprint(folder, fast)


def test_a_material_may_have_the_name_of_the_one_it_is_like(folder: Path) -> None:
    """`like` means the library even then: it neither leads to itself nor to another of the shot's own."""
    own = changed("[materials.unused]", '[materials.water]\nlike = "water"\ntemperature = 5\n[materials.unused]')
    assert fingerprint(folder, own) != fingerprint(folder)
    other = own.replace("[materials.bottle]\nrefractive_index = 1.5", '[materials.bottle]\nlike = "water"')
    colder = other.replace("temperature = 5", "temperature = 4").replace('material = "water"', 'material = "ice"')
    assert fingerprint(folder, colder) == fingerprint(folder, other.replace('material = "water"', 'material = "ice"'))


def test_the_buffers_of_a_gltf_file_count(folder: Path) -> None:
    text = changed("tank.ply", "tank.gltf")
    (folder / "tank.gltf").write_text(json.dumps({"buffers": [{"uri": "tank%201.bin"}]}), encoding="utf-8")
    (folder / "tank 1.bin").write_bytes(b"1")
    before = fingerprint(folder, text)
    (folder / "tank 1.bin").write_bytes(b"2")
    assert fingerprint(folder, text) != before


def test_pinned(tmp_path: Path) -> None:
    """The same on every machine and Python: this number was made on one, and holds on all."""
    found = fingerprint(tmp_path, shots.BASE + "[sun]\nelevation = { 1001 = 10, 1004 = 11 }\nazimuth = 0\n", 1002)
    assert found == "53b68c9feef5de78606ee1372168a600792214a8ed5ea6cea8710948d62cb88e"
