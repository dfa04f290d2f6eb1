"""antisolar render and merge: what they print, what they leave on disk, and how they end. Light is a stand-in here."""

from __future__ import annotations

import json
import os
import signal
from pathlib import Path
from typing import Any

import pytest
from command_line import SHOT, write_shot
from grey_engine import GreyEngine

from renderer.cli.running import run

SMALL = SHOT.replace("pixels = [64, 36]", "pixels = [16, 9]")


@pytest.fixture
def plain(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> GreyEngine:
    """A stand-in for transport, and a folder to work in."""
    from renderer.frames import merging, render

    plain = GreyEngine()
    for module in (render, merging):
        monkeypatch.setattr(module, "transport_engine", plain.engine)
    monkeypatch.chdir(tmp_path)
    write_shot(tmp_path, SMALL)
    return plain


def rendered(capsys: pytest.CaptureFixture[str], *arguments: object, code: int = 0) -> tuple[str, str]:
    """The two outputs of a render of the test's shot."""
    assert run(["render", "test.shot.toml", *(str(part) for part in arguments)]) == code
    said = capsys.readouterr()
    return said.out, said.err


def test_pictures_are_listed_on_standard_output_alone(plain: GreyEngine, capsys: pytest.CaptureFixture[str]) -> None:
    out, err = rendered(capsys, "--rounds", 3)
    assert out.splitlines() == [f"out/test.{frame}.exr" for frame in (1001, 1002, 1003)]
    for frame in (1001, 1002, 1003):
        assert Path(f"out/test.{frame}.exr").stat().st_size > 0
        assert Path(f"out/test.{frame}.png").stat().st_size > 0
        assert f"frame {frame}: 3 rounds in " in err
    assert "frame 1002 (2 of 3): 3 rounds" in err
    assert "the sky is plain" in err


def test_a_check_report_lies_beside_the_pictures(plain: GreyEngine, capsys: pytest.CaptureFixture[str]) -> None:
    _, err = rendered(capsys, "--rounds", 1, "--frames", 1001, "--variant", "wrong")
    page = Path("out/test.wrong.check.html").read_text(encoding="utf-8")
    assert page.count("data:image/png;base64,") == 2
    assert "Bow centre: comp bow" in page
    assert "check: flagged: " in err


def test_json_carries_the_results(plain: GreyEngine, capsys: pytest.CaptureFixture[str]) -> None:
    out, _ = rendered(capsys, "--rounds", 8, "--frames", 1001, "--json", "-", "--quiet")
    (row,) = json.loads(out)["frames"]
    assert (row["frame"], row["path"], row["rounds"], row["rendered_rounds"]) == (1001, "out/test.1001.exr", 8, 8)
    assert (row["stopped_by"], row["complete"], row["notes"]) == ("rounds", True, ["the sky is plain"])
    assert row["standard_error"] > 0.0


def test_quiet_is_quiet(plain: GreyEngine, capsys: pytest.CaptureFixture[str]) -> None:
    assert rendered(capsys, "--rounds", 1, "--frames", 1001, "--quiet")[1] == ""


def test_what_is_there_is_not_rendered_again(plain: GreyEngine, capsys: pytest.CaptureFixture[str]) -> None:
    rendered(capsys, "--rounds", 2, "--frames", 1001)
    calls: list[int] = []
    plain.during = calls.append
    out, err = rendered(capsys, "--rounds", 2, "--frames", 1001)
    assert (out, calls) == ("out/test.1001.exr\n", [])
    assert "there already" in err
    rendered(capsys, "--rounds", 2, "--frames", 1001, "--overwrite")
    assert calls != []


def test_dry_run_renders_nothing(plain: GreyEngine, capsys: pytest.CaptureFixture[str]) -> None:
    out, _ = rendered(capsys, "--dry-run", "--rounds", 5)
    assert out.splitlines()[0] == "frame 1001: 5 rounds of 16 x 9 to out/test.1001.exr"
    assert not Path("out").exists()
    planned = json.loads(rendered(capsys, "--dry-run", "--json", "-")[0])["frames"]
    assert [row["frame"] for row in planned] == [1001, 1002, 1003]


def test_portions_merge_to_the_same_bytes(plain: GreyEngine, capsys: pytest.CaptureFixture[str]) -> None:
    rendered(capsys, "--rounds", 5, "--frames", 1001, "--out", "whole")
    for k in (2, 1):
        out, _ = rendered(capsys, "--rounds", 5, "--frames", 1001, "--out", "parts", "--portion", f"{k}/2")
        assert out.endswith(".portion\n")
        assert not Path("parts/test.1001.exr").exists()
    assert run(["merge", "test.shot.toml", "--frames", "1001", "--rounds", "5", "--out", "parts"]) == 0
    assert capsys.readouterr().out == "parts/test.1001.exr\n"
    assert Path("parts/test.1001.exr").read_bytes() == Path("whole/test.1001.exr").read_bytes()


def test_a_frame_with_missing_rounds_is_incomplete(plain: GreyEngine, capsys: pytest.CaptureFixture[str]) -> None:
    rendered(capsys, "--rounds", 4, "--frames", 1001, "--portion", "1/2")
    assert run(["merge", "test.shot.toml", "--frames", "1001", "--rounds", "4"]) == 3
    said = capsys.readouterr()
    assert said.out == ""
    assert "frame 1001 is incomplete" in said.err


def test_merging_nothing_is_bad_input(plain: GreyEngine, capsys: pytest.CaptureFixture[str]) -> None:
    assert run(["merge", "test.shot.toml"]) == 2
    said = capsys.readouterr().err
    assert said.count("error: ") == 3  # one for each frame
    assert "Traceback" not in said


@pytest.mark.parametrize("number", [signal.SIGINT, signal.SIGTERM])
def test_a_signal_keeps_what_is_done_and_the_next_run_goes_on(
    number: signal.Signals, plain: GreyEngine, capsys: pytest.CaptureFixture[str]
) -> None:
    plain.during = lambda done: os.kill(os.getpid(), number) if done == 3 else None
    out, err = rendered(capsys, "--rounds", 6, "--frames", 1001, code=3)
    assert out == ""
    assert "frame 1001: stopped; " in err
    assert "Traceback" not in err
    kept = int(err.split("stopped; ")[1].split(" of 6")[0])
    assert kept in (3, 4)
    plain.during = lambda done: None
    out, err = rendered(capsys, "--rounds", 6, "--frames", 1001)
    assert f"{kept} kept from before" in err
    rendered(capsys, "--rounds", 6, "--frames", 1001, "--out", "whole")
    assert Path("out/test.1001.exr").read_bytes() == Path("whole/test.1001.exr").read_bytes()


def test_a_target_that_was_not_reached_is_incomplete(plain: GreyEngine, capsys: pytest.CaptureFixture[str]) -> None:
    arguments: tuple[Any, ...] = ("--frames", 1001, "--rounds", 8)
    rendered(capsys, *arguments, "--standard-error", 0.9)
    rendered(capsys, *arguments, "--standard-error", 0.000001, "--overwrite", code=3)


def test_a_frame_with_a_fault_leaves_the_others(
    plain: GreyEngine, capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    text = SMALL + '\n[[objects]]\nname = "splash"\nmesh = "splash.####.ply"\nmaterial = "water"\n'
    write_shot(tmp_path, text)
    box = "ply\nformat ascii 1.0\nelement vertex 4\nproperty float x\nproperty float y\nproperty float z\n"
    box += "element face 4\nproperty list uchar int vertex_indices\nend_header\n0 0 0\n1 0 0\n0 1 0\n0 0 1\n"
    box += "3 0 2 1\n3 0 1 3\n3 1 2 3\n3 0 3 2\n"
    for frame in (1001, 1003):
        (tmp_path / f"splash.{frame}.ply").write_text(box, encoding="utf-8")
    out, err = rendered(capsys, "--rounds", 1, code=2)
    assert out.splitlines() == ["out/test.1001.exr", "out/test.1003.exr"]
    assert "splash.1002.ply" in err


@pytest.mark.parametrize(
    ("arguments", "where"),
    [
        (["--rounds", "0"], "--rounds"),
        (["--portion", "3/2"], "antisolar render"),
        (["--stop-after", "soon"], "antisolar render"),
        (["--standard-error", "2"], "--standard-error"),
        (["--threads", "0"], "antisolar render"),
        (["--frames", "9-1"], "--frames"),
        (["--variant", "none"], "test.shot.toml"),
        (["--override", "sun.height=3"], "--override sun.height=3"),
    ],
)
def test_bad_options_are_said_and_end_with_2(
    arguments: list[str], where: str, plain: GreyEngine, capsys: pytest.CaptureFixture[str]
) -> None:
    _, err = rendered(capsys, *arguments, code=2)
    assert f"  where:    {where}" in err
    assert "Traceback" not in err
