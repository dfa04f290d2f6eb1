"""antisolar check: what in a shot cannot be, and how to mend it."""

from __future__ import annotations

import json
import sys
from pathlib import Path
from typing import TYPE_CHECKING

import click

from renderer.cli import exit_codes
from renderer.cli.options import FILE, chosen_frames, open_shot, shot_options, talk_of, talk_options
from renderer.cli.talk import coloured

if TYPE_CHECKING:
    from renderer.checks.run import CheckReport
    from renderer.reports.html import Plate
    from renderer.shot.model import FrameShot

STYLES = {"impossible": "red", "implausible": "yellow", "advice": "cyan", "quiet": "bright_black"}


def list_rules(context: click.Context, option: click.Parameter, asked: bool) -> None:
    """Print the names and titles of all rules, a studio's own among them, and end."""
    if asked and not context.resilient_parsing:
        from renderer.checks.registry import rules

        for rule in rules():
            click.echo(f"{rule.name:<22}{rule.title if rule.own else rule.place}")
        context.exit()


@click.command("check")
@shot_options
@click.option(
    "--fail-on",
    type=click.Choice(["impossible", "implausible", "advice"]),
    help="The mildest finding that makes the command exit with 1; the shot's own line, else implausible.",
)
@click.option("--json", "json_file", metavar="FILE|-", help="Write the report as JSON; - for standard output.")
@click.option("--report", "report_file", metavar="FILE", type=FILE, help="Write the report as one HTML page.")
@click.option(
    "--overlay",
    "overlay_file",
    metavar="FILE",
    type=FILE,
    help="Write a PNG of where the bows stand in the first frame.",
)
@click.option("--picture", metavar="FILE", type=FILE, help="A PNG of the first frame, for the report and the overlay.")
@click.option(
    "--rules", is_flag=True, is_eager=True, expose_value=False, callback=list_rules, help="List the rules by name."
)
@talk_options
def check(
    shot: Path,
    frames: str | None,
    variant: str | None,
    overrides: tuple[str, ...],
    roots: tuple[Path, ...],
    fail_on: str | None,
    json_file: str | None,
    report_file: Path | None,
    overlay_file: Path | None,
    picture: Path | None,
    quiet: bool,
    log: str,
) -> int:
    """Say what in SHOT cannot be, and how to mend it.

    Nothing is rendered. The report also says where the bows of the shot's sun would stand in the frame. Exits with 0
    when nothing is flagged, 1 when something is; advice and signed-off findings do not count.
    """
    from renderer.checks.findings import IMPLAUSIBLE
    from renderer.checks.run import check_shot

    talk = talk_of(quiet, log)
    loaded = open_shot(shot, variant, overrides, roots)
    numbers = chosen_frames(loaded, frames)
    talk.step(
        "check", f"checking {len(numbers)} frame{'s' if len(numbers) != 1 else ''} of {shot}", frames=len(numbers)
    )
    shots = [loaded.at(number) for number in numbers]
    report = check_shot(shots)
    fail_on = fail_on or shots[0].fail_on or IMPLAUSIBLE
    _write_results(report, shots[0], fail_on, json_file, report_file, overlay_file, picture)
    for kind, path in (("report", report_file), ("overlay", overlay_file)):
        if path is not None:
            talk.step(kind, f"{kind}: {path}", path=str(path))
    return exit_codes.FLAGGED if report.fails(fail_on) else exit_codes.DONE


def _write_results(
    report: CheckReport,
    first: FrameShot,
    fail_on: str,
    json_file: str | None,
    report_file: Path | None,
    overlay_file: Path | None,
    picture: Path | None,
) -> None:
    """The report in every form that was asked for; text unless JSON goes to standard output."""
    from renderer.reports.check_data import check_data
    from renderer.reports.check_text import check_text

    data = check_data(report, fail_on)
    if json_file == "-":
        click.echo(json.dumps(data, indent=1))
    else:
        click.echo(check_text(data, paint if coloured(sys.stdout) else plain), nl=False)
    if json_file not in (None, "-"):
        Path(str(json_file)).write_text(json.dumps(data, indent=1) + "\n", encoding="utf-8")
    if overlay_file is not None:
        from renderer.checks.view import FrameView
        from renderer.reports.overlay import write_overlay

        write_overlay(FrameView(first), overlay_file, picture)
    if report_file is not None:
        from renderer.reports.html import check_html, write_html

        write_html(check_html(data, _plates(first, picture)), report_file)


def _plates(first: FrameShot, picture: Path | None) -> list[Plate]:
    """The pictures of a report: the frame as rendered, where there is one, and the overlay."""
    from renderer.reports.plates import overlay_plate, picture_plate

    plates = [] if picture is None else [picture_plate(picture, first.frame)]
    return [*plates, overlay_plate(first, picture)]


def paint(text: str, kind: str) -> str:
    """Text for a terminal, by what it is."""
    if kind == "title":
        return click.style(text, bold=True)
    return click.style(text, fg=STYLES[kind], bold=kind == "impossible")


def plain(text: str, kind: str) -> str:
    """Text for a file or a pipe."""
    return text
