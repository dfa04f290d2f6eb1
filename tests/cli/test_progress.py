"""How rendering is told: a bar on a terminal, few lines elsewhere, JSON lines for a farm."""

from __future__ import annotations

import json
from pathlib import Path

import click
import pytest

from renderer.cli import progress
from renderer.cli.progress import Follow, span
from renderer.cli.quantities import duration_s, portion
from renderer.cli.talk import Talk
from renderer.frames import events

PICTURE = events.PictureSaved(1001, Path("out/a.1001.exr"), Path("out/a.1001.png"), 8, "rounds", 2.0)


class Terminal(Talk):
    """A talk that has a terminal."""

    @property
    def live(self) -> bool:
        return True


def run_of_a_frame(follow: Follow, rounds: int = 8) -> None:
    follow(events.FrameStarted(1001, 0, rounds))
    follow(events.Compiling(1001))
    follow(events.SceneReady(1001, 0.1, ("the picture of the sky is small",)))
    for done in range(1, rounds + 1):
        follow(events.RowsDone(1001, done - 1, 18, 36))
        follow(events.RoundDone(1001, done, rounds, 0.2, None))
    follow(PICTURE)


def test_a_log_file_gets_a_line_a_step_and_no_control_codes(capsys: pytest.CaptureFixture[str]) -> None:
    run_of_a_frame(Follow(Talk(), 3))
    said = capsys.readouterr()
    assert said.out == ""
    assert said.err.splitlines() == [
        "frame 1001 (1 of 3): 8 rounds",
        "compiling, once per install: about a minute",
        "frame 1001: the picture of the sky is small",
        "frame 1001: 8 rounds in 2.0 s",
    ]


def test_a_long_frame_gets_a_line_every_few_seconds(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    clock = iter(float(tick) for tick in range(10_000))
    monkeypatch.setattr(progress.time, "monotonic", lambda: next(clock))
    run_of_a_frame(Follow(Talk(), 1), rounds=64)
    lines = [line for line in capsys.readouterr().err.splitlines() if " of 64" in line]
    assert 8 <= len(lines) <= 32
    assert lines[0].endswith("left")


def test_a_terminal_gets_a_bar_that_is_taken_away(capsys: pytest.CaptureFixture[str]) -> None:
    run_of_a_frame(Follow(Terminal(), 1))
    said = capsys.readouterr().err
    assert "[############################] 8 of 8 rounds" in said
    assert said.splitlines()[-1].endswith("frame 1001: 8 rounds in 2.0 s")
    assert said.rindex("\r") > said.rindex("8 of 8 rounds")


def test_json_lines_carry_every_fact_and_nothing_else_is_said(capsys: pytest.CaptureFixture[str]) -> None:
    run_of_a_frame(Follow(Talk(as_json=True), 1))
    lines = [json.loads(line) for line in capsys.readouterr().err.splitlines()]
    assert [line["event"] for line in lines if line["event"] != "round"] == [
        "frame-started", "compiling", "scene-ready", "picture-saved",
    ]  # fmt: skip
    assert len([line for line in lines if line["event"] == "round"]) == 8
    assert (lines[-1]["path"], lines[-1]["rounds"], lines[-1]["stopped_by"]) == ("out/a.1001.exr", 8, "rounds")


def test_quiet_says_nothing_but_remembers(capsys: pytest.CaptureFixture[str]) -> None:
    follow = Follow(Talk(quiet=True), 1)
    run_of_a_frame(follow)
    assert capsys.readouterr().err == ""
    assert follow.finished == [PICTURE]
    assert follow.warnings == ["the picture of the sky is small"]


@pytest.mark.parametrize(
    ("seconds", "words"), [(4.24, "4.2 s"), (59.9, "59.9 s"), (200.0, "3 min 20 s"), (7500.0, "2 h 5 min")]
)
def test_times_read_at_a_glance(seconds: float, words: str) -> None:
    assert span(seconds) == words


@pytest.mark.parametrize(
    ("text", "seconds"), [("90", 90.0), ("90s", 90.0), ("10m", 600.0), ("1.5h", 5400.0), ("1h30m", 5400.0)]
)
def test_times_are_read(text: str, seconds: float) -> None:
    assert duration_s(text) == seconds


@pytest.mark.parametrize("text", ["", "0", "ten", "10 parsecs", "-5", "m", "1e3"])
def test_what_is_no_time_is_refused(text: str) -> None:
    with pytest.raises(click.BadParameter):
        duration_s(text)


def test_portions_are_read_and_refused() -> None:
    assert portion("2/8") == (2, 8)
    for text in ("0/8", "9/8", "8", "a/b", "1/0"):
        with pytest.raises(click.BadParameter):
            portion(text)
