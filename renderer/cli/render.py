"""antisolar render: the frames of a shot to pictures, or portions of them for a farm."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

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
from renderer.cli.quantities import duration_s
from renderer.cli.quantities import portion as portion_of
from renderer.cli.results import Results, frame_row, plan_row
from renderer.cli.stopping import STOP

if TYPE_CHECKING:
    from renderer.frames.options import RenderOptions
    from renderer.frames.render import FrameResult
    from renderer.shot.load import Shot


@click.command("render")
@shot_options
@click.option("--out", metavar="DIR", type=FILE, default=Path("out"), show_default=True, help="Where the pictures go.")
@click.option("--rounds", metavar="N", type=int, help="Rounds of each frame; the shot's own by default.")
@click.option(
    "--standard-error", metavar="SHARE", type=float, help="Stop at this standard error of a frame, as in 0.02."
)
@click.option("--stop-after", metavar="TIME", type=duration_s, help="Stop each frame after a time, as in 10m.")
@click.option("--seed", metavar="N", type=int, help="Another draw of the noise; the shot's own by default.")
@click.option(
    "--portion", metavar="K/N", type=portion_of, help="Only the K-th of N groups of rounds, for merging later."
)
@click.option("--half", is_flag=True, help="Colours as half floats; the other layers stay floats.")
@click.option("--overwrite", is_flag=True, help="Render afresh what is there already.")
@click.option("--dry-run", is_flag=True, help="Say what would be rendered, and render nothing.")
@click.option("--json", "json_file", metavar="FILE|-", help="Write the results as JSON; - for standard output.")
@machine_options
@talk_options
def render(
    shot: Path,
    frames: str | None,
    variant: str | None,
    overrides: tuple[str, ...],
    roots: tuple[Path, ...],
    out: Path,
    rounds: int | None,
    standard_error: float | None,
    stop_after: float | None,
    seed: int | None,
    portion: tuple[int, int] | None,
    half: bool,
    overwrite: bool,
    dry_run: bool,
    json_file: str | None,
    threads: int | None,
    cpu_level: str | None,
    quiet: bool,
    log: str,
) -> int:
    """Render the frames of SHOT to pictures: OpenEXR with layers, a PNG to look at, and a check report.

    Ctrl-C and SIGTERM keep the rounds that are done; the same command goes on from there. What is finished already is
    not rendered again. Standard output lists the pictures.
    """
    use_machine(threads, cpu_level)
    from renderer.frames.options import RenderOptions

    options = RenderOptions(
        rounds=rounds,
        seed=seed,
        standard_error=standard_error,
        stop_after_s=stop_after,
        portion=portion,
        overwrite=overwrite,
        half=half,
        threads=threads,
    )
    loaded = open_shot(shot, variant, overrides, roots)
    numbers = chosen_frames(loaded, frames)
    results = Results(json_file, talk_of(quiet, log))
    if dry_run:
        for number in numbers:
            results.add(plan_row(loaded.at(number), out, options))
        return results.finish()
    return _render_all(loaded, numbers, out, options, results)


def _render_all(shot: Shot, numbers: tuple[int, ...], out: Path, options: RenderOptions, results: Results) -> int:
    """Every frame, one after the other; then the check report of all of them."""
    from renderer.cli.progress import Follow
    from renderer.farm.here import Here
    from renderer.frames.render import render_frame

    def and_tell(*given: Any, **more: Any) -> FrameResult:
        result = render_frame(*given, **more)
        results.add(frame_row(result, options))
        return result

    follow = Follow(results.talk, len(numbers))
    STOP.patient = True
    try:
        done = Here(and_tell).run(shot, numbers, out, options, progress=follow, should_stop=STOP.was_asked)
    finally:
        follow.clear()
        STOP.patient = False
        results.finish()
    if options.portion is None:
        _report(shot, numbers, out, done[0].preview, results)
    return exit_codes.DONE if all(row["complete"] for row in results.rows) else exit_codes.INTERRUPTED


def _report(shot: Shot, numbers: tuple[int, ...], out: Path, preview: Path | None, results: Results) -> None:
    """The check report beside the pictures. Its findings are told, and leave the exit code alone."""
    from renderer.cli.check_report import write_check_report

    path, verdict = write_check_report([shot.at(number) for number in numbers], out, preview)
    results.talk.step("check", f"check: {verdict}; see {path}", path=str(path))
