"""Options that read the same in every command."""

from __future__ import annotations

import os
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

import click

from renderer.cli.talk import Talk

if TYPE_CHECKING:
    from renderer.shot.load import Shot

Command = TypeVar("Command", bound=Callable[..., Any])

FILE = click.Path(path_type=Path)


def shot_options(command: Command) -> Command:
    """SHOT and what chooses its frames and values."""
    for option in reversed(
        (
            click.argument("shot", type=FILE),
            click.option("--frames", metavar="RANGE", help='Frames, as in "1001-1100x2"; the shot\'s own by default.'),
            click.option("--variant", metavar="NAME", help="A variant of the shot."),
            click.option(
                "--override",
                "overrides",
                metavar="KEY=VALUE",
                multiple=True,
                help="Another value for one key; repeatable.",
            ),
            click.option(
                "--root", "roots", metavar="DIR", type=FILE, multiple=True, help="A folder that paths may lead into."
            ),
        )
    ):
        command = option(command)
    return command


def talk_options(command: Command) -> Command:
    """How the command talks of its progress."""
    command = click.option("--log", type=click.Choice(["text", "json"]), default="text", help="Form of the talk.")(
        command
    )
    return click.option("--quiet", is_flag=True, help="Say nothing but results and errors.")(command)


def machine_options(command: Command) -> Command:
    """What the machine may do; never changes a bit of a picture."""
    command = click.option(
        "--cpu-level", metavar="LEVEL", help="Processor level to compile for, such as x86-64-v3, or native."
    )(command)
    return click.option("--threads", metavar="N", type=click.IntRange(1, 4096), help="Threads; all cores by default.")(
        command
    )


def use_machine(threads: int | None, cpu_level: str | None) -> None:
    """Apply the machine's options. Must run before anything imports numba."""
    if cpu_level:
        os.environ["ANTISOLAR_CPU_LEVEL"] = cpu_level
    if threads:
        os.environ["NUMBA_NUM_THREADS"] = str(threads)


def talk_of(quiet: bool, log: str) -> Talk:
    """How to talk, from the options."""
    return Talk(quiet=quiet, as_json=log == "json")


def open_shot(shot: Path, variant: str | None, overrides: Sequence[str], roots: Sequence[Path]) -> Shot:
    """The shot that the options choose."""
    from renderer.shot import load_shot

    return load_shot(shot, variant=variant, overrides=tuple(overrides), roots=tuple(roots))


def chosen_frames(shot: Shot, frames: str | None) -> tuple[int, ...]:
    """The frames to work on: those asked for, which the shot need not list, else the shot's own."""
    if frames is None:
        return tuple(shot.frames)
    from renderer.shot.frame_range import parse_frames

    return parse_frames(frames)
