"""antisolar merge: portions that a farm rendered, to finished pictures."""

from __future__ import annotations

from pathlib import Path

import click

from renderer.base.errors import Fault, InputError, Interrupted
from renderer.cli import exit_codes
from renderer.cli.options import (
    FILE,
    chosen_frames,
    machine_options,
    open_shot,
    shot_options,
    talk_of,
    talk_options,
    use_machine,
)
from renderer.cli.results import Results, frame_row


@click.command("merge")
@shot_options
@click.option("--out", metavar="DIR", type=FILE, default=Path("out"), show_default=True, help="Where the portions are.")
@click.option("--rounds", metavar="N", type=int, help="Rounds of each frame, as they were rendered.")
@click.option("--seed", metavar="N", type=int, help="The seed that they were rendered with.")
@click.option("--half", is_flag=True, help="Colours as half floats; the other layers stay floats.")
@click.option("--mix", is_flag=True, help="Allow portions of different processor levels or library versions.")
@click.option("--json", "json_file", metavar="FILE|-", help="Write the results as JSON; - for standard output.")
@machine_options
@talk_options
def merge(
    shot: Path,
    frames: str | None,
    variant: str | None,
    overrides: tuple[str, ...],
    roots: tuple[Path, ...],
    out: Path,
    rounds: int | None,
    seed: int | None,
    half: bool,
    mix: bool,
    json_file: str | None,
    threads: int | None,
    cpu_level: str | None,
    quiet: bool,
    log: str,
) -> int:
    """Merge the portions of SHOT's frames, rendered with --portion K/N, to finished pictures.

    The picture is the same, bit for bit, as from one machine. A frame with missing rounds is told and left alone, and
    the command ends with 3.
    """
    use_machine(threads, cpu_level)
    from renderer.cli.progress import Follow
    from renderer.frames.merging import merge_frame
    from renderer.frames.options import RenderOptions

    options = RenderOptions(rounds=rounds, seed=seed, half=half, threads=threads)
    loaded = open_shot(shot, variant, overrides, roots)
    numbers = chosen_frames(loaded, frames)
    results = Results(json_file, talk_of(quiet, log))
    follow = Follow(results.talk, len(numbers))
    faults: list[Fault] = []
    incomplete: list[str] = []
    for number in numbers:
        try:
            results.add(frame_row(merge_frame(loaded.at(number), out, options, mix=mix, progress=follow), None))
        except InputError as error:
            faults += error.faults
        except Interrupted as gap:
            incomplete.append(str(gap))
    results.finish()
    if faults:
        raise InputError(*faults)
    if incomplete:
        raise Interrupted("\n".join(incomplete))
    return exit_codes.DONE
