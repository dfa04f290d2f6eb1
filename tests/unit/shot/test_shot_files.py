"""Where a shot's files may lie."""

from __future__ import annotations

from pathlib import Path

import pytest
import shot_writing as shots

from renderer.base.errors import InputError
from renderer.shot import load_shot
from renderer.shot.files import at_frame

OBJECT = '[[objects]]\nname = "a"\nmesh = "{}"\nmaterial = "ice"\n'


@pytest.fixture
def show(tmp_path: Path) -> Path:
    """A show with shared assets beside the shot's folder."""
    for folder in ("shot", "assets", "assets secret"):
        (tmp_path / folder).mkdir()
        (tmp_path / folder / "a.ply").write_text("x", encoding="utf-8")
    (tmp_path / "shot" / "inside.ply").symlink_to(tmp_path / "shot" / "a.ply")
    (tmp_path / "shot" / "outside.ply").symlink_to(tmp_path / "assets" / "a.ply")
    (tmp_path / "shot" / "door").symlink_to(tmp_path / "assets")
    return tmp_path


def mesh(show: Path, name: str, *roots: Path) -> Path | None:
    return load_shot(shots.write(show / "shot", OBJECT.format(name)), roots=roots).at(1001).objects[0].mesh


def test_inside(show: Path) -> None:
    assert mesh(show, "a.ply") == show / "shot" / "a.ply"
    assert mesh(show, "../shot/a.ply") is not None
    assert mesh(show, "inside.ply") is not None
    assert mesh(show, str(show / "shot" / "a.ply")) is not None


@pytest.mark.parametrize("name", ["../assets/a.ply", "outside.ply", "door/a.ply", "door/../assets/a.ply", "../a.ply"])
def test_outside_unless_a_root_allows_it(show: Path, name: str) -> None:
    with pytest.raises(InputError, match="leads out of the shot's folder"):
        mesh(show, name)
    if "assets" in name or name in ("outside.ply", "door/a.ply"):
        assert mesh(show, name, show / "assets") is not None or name == "door/../assets/a.ply"


def test_a_root_is_a_whole_folder_and_no_beginning_of_a_name(show: Path) -> None:
    with pytest.raises(InputError, match="leads out"):
        mesh(show, "../assets secret/a.ply", show / "assets")


def test_a_root_through_a_link(show: Path) -> None:
    (show / "shared").symlink_to(show / "assets")
    assert mesh(show, "../shared/a.ply", show / "shared") is not None


def test_frame_numbers() -> None:
    assert at_frame("a.####.ply", 7) == "a.0007.ply"
    assert at_frame("a.#.ply", 12345) == "a.12345.ply"
    assert at_frame("####/a.##.ply", -3) == "-003/a.-3.ply"


def test_a_file_that_is_missing_names_file_frame_and_neighbour(show: Path) -> None:
    shot = load_shot(shots.write(show / "shot", OBJECT.format("a.##.ply")))
    (show / "shot" / "a.01.ply").write_text("x", encoding="utf-8")
    assert shot.at(1).objects[0].mesh is not None
    with pytest.raises(InputError) as caught:
        shot.at(2)
    assert caught.value.faults[0].what == 'the file "a.02.ply" of frame 2 does not exist'
    assert caught.value.faults[0].nearest == "a.01.ply"
