"""The runner of this process: frames in order, one frame's fault does not cost the others."""

from __future__ import annotations

from pathlib import Path
from types import SimpleNamespace
from typing import Any

import pytest

from renderer.base.errors import Fault, InputError, Interrupted
from renderer.farm.here import Here
from renderer.frames.options import RenderOptions


class Frames:
    """A shot whose frame 1002 misses a mesh."""

    def at(self, frame: int) -> Any:
        if frame == 1002:
            raise InputError(Fault("the mesh does not exist", "tank.1002.ply"))
        return SimpleNamespace(frame=frame)


def test_a_frames_fault_does_not_cost_the_others(tmp_path: Path) -> None:
    done: list[int] = []
    runner = Here(lambda shot, out, options, **rest: done.append(shot.frame))  # type: ignore[arg-type,return-value]
    with pytest.raises(InputError, match="the mesh does not exist"):
        runner.run(Frames(), [1001, 1002, 1003], tmp_path, RenderOptions())
    assert done == [1001, 1003]


def test_an_interruption_ends_the_run(tmp_path: Path) -> None:
    done: list[int] = []

    def render(shot: Any, out: Path, options: RenderOptions, **rest: Any) -> Any:
        done.append(shot.frame)
        raise Interrupted("stopped")

    with pytest.raises(Interrupted):
        Here(render).run(Frames(), [1001, 1003], tmp_path, RenderOptions())
    assert done == [1001]
