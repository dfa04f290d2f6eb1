"""Every shipped shot: it loads, it says what it shows, it is flagged or not as it should be, and it renders."""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest

ROOT = Path(__file__).resolve().parents[2]
SHOTS = sorted((ROOT / "scenes").glob("*/*.shot.toml"))
FLAGGED = {"bow_beside_sun": {"bow.centre", "bow.sun-behind"}}
TINY = ("--rounds", "1", "--override", "camera.pixels=[48,27]")


def name_of(path: Path) -> str:
    """The shot's short name."""
    return path.name.removesuffix(".shot.toml")


every_shot = pytest.mark.parametrize("path", SHOTS, ids=name_of)


def run(*arguments: str) -> int:
    """One command line of ours, in this process; its exit code."""
    from renderer.cli.running import run as run_command

    return run_command([str(argument) for argument in arguments])


def test_the_shipped_shots_are_the_known_ones() -> None:
    """None is lost by a change of folders; each stands in a folder of its own name."""
    assert {name_of(path) for path in SHOTS} == {
        "tank_on_sill",
        "basin_looking_up",
        "stick_in_bowl",
        "prism_and_slit",
        "rod_of_light",
        "wet_setts",
        "bow_beside_sun",
        "bow_over_lock",
    }
    assert all(path.parent.name == name_of(path) for path in SHOTS)


@every_shot
def test_it_opens_with_what_it_shows_and_what_to_look_for(path: Path) -> None:
    """The comment at the top of the file."""
    lines = path.read_text(encoding="utf-8").splitlines()
    opening = " ".join(line.removeprefix("# ") for line in lines[: lines.index("format = 1")]).strip()
    assert "Look for" in opening
    assert 80 < len(opening) < 500


@every_shot
def test_it_loads_and_every_mesh_is_its_own(path: Path) -> None:
    """The shot at its first frame; meshes stand beside the file."""
    from renderer.shot import load_shot

    shot = load_shot(path)
    frame = shot.at(shot.frames[0])
    assert frame.title.startswith("Lock Nine: ")
    meshes = [item.mesh for item in frame.objects if item.mesh is not None]
    assert all(mesh.resolve().parent == path.parent.resolve() for mesh in meshes)
    used = {mesh.name for mesh in meshes}
    assert used == {file.name for file in path.parent.iterdir() if file.suffix in (".ply", ".obj", ".glb")}


@every_shot
def test_check_flags_what_it_should_and_nothing_else(path: Path, tmp_path: Path) -> None:
    """Exit 1 with the right rules for the bow beside the sun, exit 0 for all others."""
    report = tmp_path / "report.json"
    code = run("check", path, "--json", report, "--quiet")
    data = json.loads(report.read_text(encoding="utf-8"))
    rules = {finding["rule"] for finding in data["findings"] if finding["severity"] != "advice"}
    expected = FLAGGED.get(name_of(path), set())
    assert code == (1 if expected else 0)
    assert rules >= expected
    assert bool(rules) == bool(expected)


def test_the_fix_of_the_flagged_shot_mends_it(tmp_path: Path) -> None:
    """The sun where the report would put it, and the radius that it names: nothing is flagged any more."""
    path = ROOT / "scenes" / "bow_beside_sun" / "bow_beside_sun.shot.toml"
    report = tmp_path / "report.json"
    assert run("check", path, "--json", report, "--quiet") == 1
    findings = json.loads(report.read_text(encoding="utf-8"))["findings"]
    values = {key: value for finding in findings for key, value in finding["fix"]["values"].items()}
    changes = [f"{key}={values[key]}" for key in ("sun.elevation", "sun.azimuth")]
    changes.append("bows_to_check[0].radius=41.6")
    options = [word for change in changes for word in ("--override", change)]
    assert run("check", path, *options, "--quiet") == 0


def pictures(folder: Path) -> dict[str, np.ndarray]:
    """The one EXR of a folder: each channel of each part as (rows, columns) float64, by name."""
    import OpenEXR

    (path,) = folder.rglob("*.exr")
    with OpenEXR.File(str(path), separate_channels=True) as file:
        return {
            f"{part.name()}.{name}": np.asarray(channel.pixels, dtype=np.float64)
            for part in file.parts
            for name, channel in part.channels.items()
        }


@every_shot
def test_it_renders(path: Path, tmp_path: Path) -> None:
    """One round at 48 x 27: exit 0, a PNG and an EXR of that size; colour is finite, and the picture is not black.

    A sample that is not finite fails the frame by itself; depth may be infinite where there is nothing.
    """
    assert run("render", path, *TINY, "--out", tmp_path, "--quiet") == 0
    assert len(list(tmp_path.rglob("*.png"))) == 1
    channels = pictures(tmp_path)
    colour = [pixels for name, pixels in channels.items() if name.rpartition(".")[2] in ("R", "G", "B")]
    assert len(colour) >= 3
    assert all(pixels.shape == (27, 48) for pixels in channels.values())
    assert all(np.isfinite(pixels).all() for pixels in colour)
    assert max(float(pixels.mean()) for pixels in colour) > 0.0
