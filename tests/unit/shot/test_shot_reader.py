"""Reading: limits, encodings, positions."""

from __future__ import annotations

from pathlib import Path

import pytest
import shot_writing as shots

from renderer.base.errors import InputError
from renderer.shot import load_shot
from renderer.shot.positions import positions
from renderer.shot.reader import DEEPEST, LARGEST_FILE


def fault(path: Path) -> tuple[str, str]:
    with pytest.raises(InputError) as caught:
        load_shot(path)
    (found,) = caught.value.faults
    return found.what, found.where.removeprefix(str(path))


def test_a_byte_order_mark_and_windows_lines_are_read(tmp_path: Path) -> None:
    path = tmp_path / "a.shot.toml"
    path.write_bytes(b"\xef\xbb\xbf" + shots.BASE.replace("\n", "\r\n").encode())
    assert load_shot(path).frames == (1001,)


def test_missing_folder_and_neighbour(tmp_path: Path) -> None:
    shots.write(tmp_path, name="lock.shot.toml")
    with pytest.raises(InputError) as caught:
        load_shot(tmp_path / "lok.shot.toml")
    assert caught.value.faults[0].nearest == str(tmp_path / "lock.shot.toml")
    assert fault(tmp_path)[0] == "this is a folder, not a shot file"
    assert fault(tmp_path / "no" / "such.shot.toml")[0] == "there is no such shot file"


def test_another_encoding_names_the_line(tmp_path: Path) -> None:
    path = tmp_path / "a.shot.toml"
    path.write_bytes(b'format = 1\ntitle = "\xe9"\n')
    assert fault(path) == ("the shot file is not UTF-8 text", ":2")


def test_too_large(tmp_path: Path) -> None:
    path = tmp_path / "a.shot.toml"
    path.write_bytes(b"#" * (LARGEST_FILE + 1))
    assert fault(path)[0] == "the shot file is too large"


@pytest.mark.parametrize(
    "text",
    [
        "a = " + "[" * 100_000,
        "a = " + "{ b = " * 1000,
        "a." * 2_000_000 + "b = 1",
        "a = { " + "b." * 2_000_000 + "c = 1 }",
        "[" + "a." * 100_000 + "b]",
    ],
)
def test_too_deep_is_refused_at_once(tmp_path: Path, text: str) -> None:
    assert fault(shots.write(tmp_path, text, whole=True))[0] == "the shot file is nested too deeply"


def test_brackets_and_dots_in_strings_and_comments_are_no_nesting(tmp_path: Path) -> None:
    many = "[{." * DEEPEST * 2
    text = f"format = 1\ntitle = \"{many}\" # {many}\n[frames]\nrange = '1001' # it's\n" + shots.BASE[11:]
    assert shots.read(tmp_path, text, whole=True).title == many


@pytest.mark.parametrize("text", ["\0", "\x1b[2J = 1", '"\\u001b[2J" = 1', "a" * 1000 + " = 1", '"" = 1'])
def test_hostile_keys_are_not_repeated_as_they_are(tmp_path: Path, text: str) -> None:
    with pytest.raises(InputError) as caught:
        load_shot(shots.write(tmp_path, text + "\n" + shots.BASE, whole=True))
    message = str(caught.value)
    assert all(letter.isprintable() or letter == "\n" for letter in message)
    assert max(len(line.replace(str(tmp_path), "")) for line in message.split("\n")) < 250


def test_fifty_unknown_keys_and_a_count(tmp_path: Path) -> None:
    with pytest.raises(InputError) as caught:
        shots.read(tmp_path, "".join(f"key{number} = 1\n" for number in range(150)))
    assert len(caught.value.faults) == 51
    assert caught.value.faults[-1].what == "and 100 more keys are not known"
    assert caught.value.faults[-1].where.endswith(":56:1  camera.key50")


def test_a_hundred_faults_and_a_count(tmp_path: Path) -> None:
    with pytest.raises(InputError) as caught:
        shots.read(tmp_path, "".join(shots.ball("roughness = 2", f"ball {number}") for number in range(150)))
    assert len(caught.value.faults) == 101
    assert caught.value.faults[-1].what == "and 50 more errors"


def test_fifty_wrong_keys_of_a_value_are_enough(tmp_path: Path) -> None:
    keys = ", ".join(f"{number} = 100" for number in range(1000))
    with pytest.raises(InputError) as caught:
        shots.read(tmp_path, f"[sun]\nazimuth = 0\nelevation = {{ {keys} }}\n")
    assert len(caught.value.faults) == 50


TEXT = """\
top = 1
[camera]
position = [0, 1,
  2]
"lens".k1 = { é = 1, b.c = [ { x = 1 }, { y = 2 } ] }
[[objects]]
name = "é"
[objects.shape]
sphere = 1
[[objects]]
[objects.transform] # note
scale = 2
[[objects.parts]]
a = 1
[[objects.parts]]
b = 2
"""


def test_positions() -> None:
    found = positions(TEXT)
    assert found[("top",)] == (1, 1)
    assert found[("camera",)] == (2, 2)
    assert found[("camera", "position", 2)] == (4, 3)
    assert found[("camera", "lens", "k1")] == (5, 1)
    assert found[("camera", "lens", "k1", "b", "c", 1, "y")] == (5, 43)
    assert found[("objects", 0, "shape", "sphere")] == (9, 1)
    assert found[("objects", 1)] == (10, 3)
    assert found[("objects", 1, "transform", "scale")] == (12, 1)
    assert found[("objects", 1, "parts", 1, "b")] == (16, 1)
