"""antisolar warm-up: what the first render would compile, compiled ahead of time."""

from __future__ import annotations

import tempfile
import time
from pathlib import Path
from typing import TYPE_CHECKING

import click

from renderer.cli.options import machine_options, talk_of, talk_options, use_machine
from renderer.cli.stopping import STOP

if TYPE_CHECKING:
    from renderer.frames.events import Progress

SHOT = Path(__file__).with_name("warm_up.shot.toml")


@click.command("warm-up")
@machine_options
@talk_options
def warm_up(threads: int | None, cpu_level: str | None, quiet: bool, log: str) -> None:
    """Do the first-run set-up ahead of time: compile all that a first render needs.

    For the build step of a farm's image, or once after an installation. A second call has nothing left to do. Prints
    the folder that must be kept.
    """
    use_machine(threads, cpu_level)
    from renderer.base.cache import kernel_folder
    from renderer.cli.progress import Follow, span

    talk = talk_of(quiet, log)
    started = time.monotonic()
    talk.step("compiling", "compiling, once per install: about a minute", folder=str(kernel_folder()))
    with tempfile.TemporaryDirectory(prefix="antisolar-") as folder:
        render_everything(Path(folder), Follow(talk_of(True, "text"), 1), threads)
    talk.step("ready", f"ready, after {span(time.monotonic() - started)}", seconds=round(time.monotonic() - started, 3))
    click.echo(kernel_folder())


def render_everything(folder: Path, follow: Progress, threads: int | None) -> None:
    """Render two rounds of a tiny shot that has one of everything, in two portions, and merge them."""
    from renderer.frames.merging import merge_frame
    from renderer.frames.options import RenderOptions
    from renderer.frames.render import render_frame
    from renderer.shot import load_shot

    shot = load_shot(SHOT)
    frame = shot.at(shot.frames[0])
    for k in (1, 2):
        options = RenderOptions(rounds=2, portion=(k, 2), threads=threads)
        render_frame(frame, folder, options, progress=follow, should_stop=STOP.was_asked)
    merge_frame(frame, folder, RenderOptions(rounds=2, threads=threads), progress=follow)
