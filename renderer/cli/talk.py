"""What the command line says: talk on standard error, results on standard output, colour only where it is wanted."""

from __future__ import annotations

import json
import os
import sys
import time
from dataclasses import dataclass
from typing import Any, TextIO

import click


def say(*lines: str) -> None:
    """Lines for the person at the keyboard, on standard error."""
    for line in lines:
        click.echo(line, err=True)


def coloured(stream: TextIO) -> bool:
    """Whether to colour what goes to `stream`: a terminal, and NO_COLOR (no-color.org) is not set."""
    return not os.environ.get("NO_COLOR") and stream.isatty()


@dataclass(frozen=True)
class Talk:
    """How a command talks of its steps: plain lines, or JSON lines for a farm's log; nothing when `quiet`."""

    quiet: bool = False
    as_json: bool = False

    def step(self, event: str, text: str, **facts: Any) -> None:
        """One step of the work: `text` for people, `event` and `facts` for a log that machines read."""
        if self.as_json:
            click.echo(json.dumps({"time": round(time.time(), 3), "event": event, "text": text, **facts}), err=True)
        elif not self.quiet:
            click.echo(text, err=True)

    @property
    def live(self) -> bool:
        """Whether a bar that redraws itself has a terminal to do so on."""
        return not self.quiet and not self.as_json and sys.stderr.isatty() and os.environ.get("TERM") != "dumb"


def counted(n: int, thing: str) -> str:
    """A number of things in words: 1 round, 2 rounds."""
    return f"{n} {thing}" if n == 1 else f"{n} {thing}s"
