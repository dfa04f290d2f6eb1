"""Every broken shot gives one sentence a fault, with line, what was expected, and the nearest name: pinned whole."""

from __future__ import annotations

import json
from dataclasses import dataclass
from pathlib import Path

import pytest

from renderer.base.errors import InputError
from renderer.shot import load_shot

TABLE = Path(__file__).with_name("broken_shots.txt")
NAME = "lock.shot.toml"

BASE = """\
format = 1
[camera]
position = [0, 1, 5]
target = [0, 1, 0]
focal_length = 35
"""

CAMERA_FILE = {
    "asset": {"version": "2.0"},
    "nodes": [{"name": "ShotCam", "camera": 0}],
    "cameras": [{"type": "perspective", "perspective": {"yfov": 0.5, "znear": 0.1}}],
}


@dataclass(frozen=True)
class Case:
    """A broken shot: its text, how it is read, and the message."""

    title: str
    text: str
    variant: str | None
    overrides: tuple[str, ...]
    frame: int | None
    message: str


def read_cases() -> list[Case]:
    """The table's cases."""
    blocks = TABLE.read_text(encoding="utf-8").split("\n=== ")[1:]
    return [read_case(block) for block in blocks]


def read_case(block: str) -> Case:
    """One case of the table."""
    body, _, message = block.partition("\n---\n")
    title, *lines = body.strip("\n").split("\n")
    chosen: dict[str, list[str]] = {"variant": [], "override": [], "frame": []}
    while lines and lines[0].split(" ")[0] in chosen:
        word, _, value = lines.pop(0).partition(" ")
        chosen[word].append(value)
    whole = bool(lines) and lines[0] == "whole file"
    text = "\n".join(lines[1:] if whole else lines) + "\n"
    return Case(
        title,
        (text if whole else BASE + text).replace("{DIGITS}", "9" * 5000),
        chosen["variant"][0] if chosen["variant"] else None,
        tuple(chosen["override"]),
        int(chosen["frame"][0]) if chosen["frame"] else None,
        message.strip("\n"),
    )


def message_of(case: Case, folder: Path) -> str:
    """What reading the case's shot in `folder`, the current one, says."""
    shot_folder = folder / "shot"
    shot_folder.mkdir()
    (shot_folder / "meshes").mkdir()
    (shot_folder / NAME).write_text(case.text, encoding="utf-8")
    (shot_folder / "spray.1001.ply").write_text("ply\n", encoding="utf-8")
    (shot_folder / "layout.gltf").write_text(json.dumps(CAMERA_FILE), encoding="utf-8")
    (folder / "secret.ply").write_text("ply\n", encoding="utf-8")
    (shot_folder / "link.ply").symlink_to(folder / "secret.ply")
    with pytest.MonkeyPatch.context() as patch:
        patch.chdir(shot_folder)
        with pytest.raises(InputError) as caught:
            read(case)
    return str(caught.value)


def read(case: Case) -> None:
    """Read the case's shot, and resolve a frame of it where the case says so."""
    shot = load_shot(NAME, case.variant, case.overrides)
    if case.frame is not None:
        shot.at(case.frame)


CASES = read_cases()


def test_enough_cases_with_titles_of_their_own() -> None:
    assert len(CASES) >= 100
    assert len({case.title for case in CASES}) == len(CASES)
    assert all(case.message for case in CASES)


@pytest.mark.parametrize("case", CASES, ids=[case.title for case in CASES])
def test_message(case: Case, tmp_path: Path) -> None:
    assert message_of(case, tmp_path) == case.message


@pytest.mark.parametrize("case", CASES, ids=[case.title for case in CASES])
def test_each_message_says_what_and_where(case: Case) -> None:
    starts = [line for line in case.message.split("\n") if line.startswith("error: ")]
    wheres = [line for line in case.message.split("\n") if line.startswith("  where:    ")]
    assert starts
    assert len(starts) == len(wheres)
    assert all(not start.endswith(".") for start in starts)
