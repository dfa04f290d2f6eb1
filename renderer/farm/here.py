"""The runner that uses this process: one frame after the other, through the same doors as any other runner."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from pathlib import Path
from typing import Protocol

from renderer.base.errors import Fault, InputError
from renderer.frames.events import Progress, no_progress
from renderer.frames.options import RenderOptions
from renderer.frames.render import FrameResult, never, render_frame
from renderer.shot.model import FrameShot

ShouldStop = Callable[[], bool]


class FrameSource(Protocol):
    """Whatever resolves a frame: a `Shot`."""

    def at(self, frame: int) -> FrameShot:
        """The shot at a frame."""


class Runner(Protocol):
    """Whoever renders frames. Every runner gives the same bits."""

    def run(
        self,
        shot: FrameSource,
        frames: Iterable[int],
        out: Path,
        options: RenderOptions,
        *,
        progress: Progress = no_progress,
        should_stop: ShouldStop = never,
    ) -> list[FrameResult]:
        """Render frames, or a portion of each."""


class Here:
    """Renders in this process. `render` is the door to one frame."""

    def __init__(self, render: Callable[..., FrameResult] = render_frame) -> None:
        self.render = render

    def run(
        self,
        shot: FrameSource,
        frames: Iterable[int],
        out: Path,
        options: RenderOptions,
        *,
        progress: Progress = no_progress,
        should_stop: ShouldStop = never,
    ) -> list[FrameResult]:
        """Render frames in their order.

        A frame with a fault, such as a missing mesh, does not keep the others from being rendered; all faults are
        raised together at the end. `Interrupted` ends the run at once.
        """
        results: list[FrameResult] = []
        faults: list[Fault] = []
        for frame in frames:
            try:
                results.append(self.render(shot.at(frame), out, options, progress=progress, should_stop=should_stop))
            except InputError as error:
                faults += [fault for fault in error.faults if fault not in faults]
        if faults:
            raise InputError(*faults)
        return results
