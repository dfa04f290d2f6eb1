"""The log beside the pictures: JSON lines of what was done, when, by which machine and how fast. Never read back."""

from __future__ import annotations

import json
import os
import platform
import time
from contextlib import suppress
from dataclasses import asdict
from pathlib import Path

from renderer.frames.events import Event, Progress, RowsDone


def logged(progress: Progress, path: Path, threads: int) -> Progress:
    """`progress`, and a line a step into the log; a log that cannot be written stops no work."""
    where = {"machine": platform.node(), "process": os.getpid(), "threads": threads}

    def tell(event: Event) -> None:
        if not isinstance(event, RowsDone):
            line = {"time": round(time.time(), 3), "event": type(event).__name__, **asdict(event), **where}
            append(path, json.dumps(line, default=str) + "\n")
        progress(event)

    return tell


def append(path: Path, line: str) -> None:
    """Add one line in one write, so that several machines may share a log."""
    with suppress(OSError):
        path.parent.mkdir(parents=True, exist_ok=True)
        with path.open("ab", buffering=0) as file:
            file.write(line.encode("utf-8"))
