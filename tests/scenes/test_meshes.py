"""The meshes of the shipped shots: the script makes the files that are there, to the byte; clear solids are closed."""

from __future__ import annotations

import runpy
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

ROOT = Path(__file__).resolve().parents[2]
SCENES = ROOT / "scenes"
SUFFIXES = (".ply", ".obj", ".glb")
MOST_BYTES = 3_000_000


@pytest.fixture(scope="module")
def made(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder with every mesh made afresh, by the script as a user runs it."""
    folder = tmp_path_factory.mktemp("made")
    command = [sys.executable, str(ROOT / "tools" / "make_meshes.py"), "--out", str(folder)]
    subprocess.run(command, check=True, capture_output=True)
    return folder


def meshes_in(folder: Path) -> list[str]:
    """The paths of the mesh files below a folder, sorted."""
    return sorted(path.relative_to(folder).as_posix() for path in folder.rglob("*") if path.suffix in SUFFIXES)


def test_the_script_makes_every_shipped_mesh_and_no_other(made: Path) -> None:
    """No mesh without its maker, and none that was forgotten."""
    assert meshes_in(made) == meshes_in(SCENES)


def test_every_mesh_is_the_same_to_the_byte(made: Path) -> None:
    """A changed form must come with its changed file."""
    changed = [name for name in meshes_in(SCENES) if (made / name).read_bytes() != (SCENES / name).read_bytes()]
    assert changed == []


def test_meshes_stay_small() -> None:
    """All of them together, in the repository."""
    assert sum((SCENES / name).stat().st_size for name in meshes_in(SCENES)) < MOST_BYTES


@pytest.fixture(scope="module")
def forms(monkeypatch_module: pytest.MonkeyPatch) -> dict[str, object]:
    """The script's own table, read as a module."""
    monkeypatch_module.syspath_prepend(str(ROOT / "tools"))
    return runpy.run_path(str(ROOT / "tools" / "make_meshes.py"), run_name="make_meshes")


@pytest.fixture(scope="module")
def monkeypatch_module() -> object:
    """A monkeypatch that lasts for the module."""
    with pytest.MonkeyPatch.context() as patch:
        yield patch


CLEAR = (
    "tank_on_sill/tank.ply",
    "tank_on_sill/water.ply",
    "stick_in_bowl/bowl.ply",
    "stick_in_bowl/glycerine.ply",
    "stick_in_bowl/rod.ply",
    "rod_of_light/rod.ply",
)


@pytest.mark.parametrize("name", CLEAR)
def test_clear_solids_are_closed_and_face_outward(forms: dict[str, object], name: str) -> None:
    """Each edge of the welded mesh is shared by two faces that run along it in opposite ways; volume is positive."""
    solid = forms["MESHES"][name]()  # type: ignore[index]
    points, welded = np.unique(np.round(solid.vertices, 7), axis=0, return_inverse=True)
    faces = welded.reshape(-1)[solid.faces]
    edges = np.concatenate([faces[:, [0, 1]], faces[:, [1, 2]], faces[:, [2, 0]]])
    there = {tuple(edge) for edge in edges.tolist()}
    assert len(there) == len(edges)
    assert all((b, a) in there for a, b in there)
    a, b, c = (points[faces[:, k]] for k in range(3))
    assert np.sum(a * np.cross(b, c)) > 0.0


@pytest.mark.parametrize("name", ["stick_in_bowl/bowl.ply", "stick_in_bowl/glycerine.ply", "rod_of_light/rod.ply"])
def test_stored_normals_lie_with_their_faces(forms: dict[str, object], name: str) -> None:
    """Every corner's normal is of unit length and within 15 degrees of its face's (the forms' own coarsest step)."""
    solid = forms["MESHES"][name]()  # type: ignore[index]
    a, b, c = (solid.vertices[solid.faces[:, k]] for k in range(3))
    across = np.cross(b - a, c - a)
    across /= np.linalg.norm(across, axis=1, keepdims=True)
    corners = solid.normals[solid.faces]
    assert np.abs(np.linalg.norm(corners, axis=2) - 1.0).max() < 1e-9
    assert np.einsum("ij,ikj->ik", across, corners).min() > np.cos(np.radians(15.0))


def test_the_bowl_has_the_volume_of_its_spheres(forms: dict[str, object]) -> None:
    """What the glycerine fills up to its level is a spherical segment: V = pi (R^2 h - (z^3 difference) / 3).

    96 segments and 44 steps lose about 0.1 %.
    """
    glycerine = forms["MESHES"]["stick_in_bowl/glycerine.ply"]()  # type: ignore[index]
    radius, low, high = 0.106, glycerine.vertices[:, 1].min(), glycerine.vertices[:, 1].max()
    top = high - (low + radius)
    exact = np.pi * (radius**2 * (top + radius) - (top**3 + radius**3) / 3.0)
    a, b, c = (glycerine.vertices[glycerine.faces[:, k]] for k in range(3))
    found = np.sum(a * np.cross(b, c)) / 6.0
    assert found == pytest.approx(exact, rel=3e-3)
