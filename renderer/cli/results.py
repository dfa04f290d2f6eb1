"""What rendering and merging hand to standard output: a path a line, or JSON."""

from __future__ import annotations

import json
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from renderer.cli import exit_codes
from renderer.cli.talk import Talk, counted

if TYPE_CHECKING:
    from renderer.frames.options import RenderOptions
    from renderer.frames.render import FrameResult
    from renderer.shot.model import FrameShot


class Results:
    """Rows of results: each is printed at once as text, and all at the end as JSON where that is asked for."""

    def __init__(self, json_file: str | None, talk: Talk) -> None:
        self.json_file = json_file
        self.talk = talk
        self.rows: list[dict[str, Any]] = []

    def add(self, row: dict[str, Any]) -> None:
        """Take a row; its ``path`` is printed."""
        self.rows.append(row)
        if self.json_file != "-":
            click.echo(row.get("line", row["path"]))

    def finish(self) -> int:
        """Write the JSON."""
        if self.json_file is not None:
            rows = [{key: value for key, value in row.items() if key != "line"} for row in self.rows]
            text = json.dumps({"format": 1, "frames": rows}, indent=1)
            if self.json_file == "-":
                click.echo(text)
            else:
                Path(self.json_file).write_text(text + "\n", encoding="utf-8")
        return exit_codes.DONE


def frame_row(result: FrameResult, options: RenderOptions | None) -> dict[str, Any]:
    """A rendered frame. It is complete unless it was to reach a standard error and did not."""
    target = options.standard_error if options else None
    error = result.standard_error
    return {
        "frame": result.frame,
        "path": str(result.path),
        "preview": None if result.preview is None else str(result.preview),
        "rounds": result.rounds,
        "rendered_rounds": result.rendered_rounds,
        "stopped_by": result.stopped_by,
        "standard_error": error,
        "complete": target is None or (error is not None and error <= target),
        "counts": result.tally,
        "notes": list(result.notes),
        "seconds": round(result.seconds, 3),
    }


def plan_row(shot: FrameShot, out: Path, options: RenderOptions) -> dict[str, Any]:
    """A frame that would be rendered."""
    from renderer.frames.names import picture_path

    rounds = options.wanted_rounds(shot.settings.rounds)
    path = picture_path(out, shot)
    there = path.exists()
    portion = f", portion {options.portion[0]}/{options.portion[1]}" if options.portion else ""
    columns, rows = shot.camera.window[2:]
    return {
        "frame": shot.frame,
        "path": str(path),
        "there": there,
        "rounds": rounds,
        "pixels": [columns, rows],
        "fingerprint": shot.fingerprint,
        "line": f"frame {shot.frame}: {counted(rounds, 'round')} of {columns} x {rows}{portion} to {path}"
        + (" (a picture is there)" if there else ""),
    }
