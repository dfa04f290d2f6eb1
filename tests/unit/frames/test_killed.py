"""A process that is really killed, at any moment, again and again: the picture comes out the same."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import plain_engine as plain
import pytest

from renderer.frames.options import RenderOptions
from renderer.frames.render import render_frame

CHILD = """
import sys, time
sys.path.insert(0, {here!r})
from dataclasses import replace
from pathlib import Path
import plain_engine as plain
from renderer.frames.options import RenderOptions
from renderer.frames.render import render_frame

engine = plain.plain_engine()

def slowly(*arguments):
    time.sleep(0.01)
    return engine.render_rows(*arguments)

options = RenderOptions(rounds=200, save_every_s=0.05)
render_frame(plain.shot(), Path({out!r}), options, engine=replace(engine, render_rows=slowly))
"""


@pytest.mark.skipif(not hasattr(signal, "SIGKILL"), reason="there is no SIGKILL here")
def test_kill_9_costs_no_more_than_the_rounds_since_the_last_save(tmp_path: Path) -> None:
    code = CHILD.format(here=str(Path(__file__).parent), out=str(tmp_path / "killed"))
    environment = {**os.environ, "PYTHONPATH": str(Path(__file__).parents[3])}
    folder = tmp_path / "killed" / "portions" / "lock.1001"
    for wanted in (20, 60):
        child = subprocess.Popen([sys.executable, "-c", code], env=environment)
        try:
            deadline = time.monotonic() + 20.0
            while saved_rounds(folder) < wanted and time.monotonic() < deadline:
                assert child.poll() is None, "the child ended by itself"
                time.sleep(0.01)
        finally:
            child.kill()
            child.wait()
        assert saved_rounds(folder) >= wanted
        assert not (tmp_path / "killed" / "lock.1001.exr").exists()
    calls: list[tuple[int, int]] = []
    options = RenderOptions(rounds=200)
    resumed = render_frame(plain.shot(), tmp_path / "killed", options, engine=plain.plain_engine(calls=calls))
    assert min(number for number, _ in calls) >= 60
    whole = render_frame(plain.shot(), tmp_path / "whole", options, engine=plain.plain_engine())
    assert resumed.path.read_bytes() == whole.path.read_bytes()
    assert [path.name.split(".")[0] for path in folder.glob("*.portion")] == ["000000-000199"]


def saved_rounds(folder: Path) -> int:
    """How many rounds the file names speak of."""
    return max((int(path.name[7:13]) + 1 for path in folder.glob("*.portion")), default=0)
