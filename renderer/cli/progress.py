"""Telling a person, or a log, how the rendering goes: a live bar on a terminal, a line every few seconds elsewhere."""

from __future__ import annotations

import sys
import time
from dataclasses import asdict
from pathlib import Path
from typing import Any

import click

from renderer.cli.talk import Talk, counted
from renderer.frames import events

LINE_EVERY_S = 5.0  # between plain lines of one frame
REDRAW_EVERY_S = 0.1
BAR = 28  # characters

_CLEAR = "\r\x1b[2K"


class Follow:
    """Takes the events of rendering. `finished` are the pictures, for the results."""

    def __init__(self, talk: Talk, n_frames: int) -> None:
        self.talk = talk
        self.n_frames = n_frames
        self.n_started = 0
        self.finished: list[events.PictureSaved | events.FrameSkipped] = []
        self.warnings: list[str] = []
        self._drawn_at = 0.0
        self._line_at = 0.0
        self._started_at = 0.0
        self._wanted = 0
        self._done = 0
        self._kept = 0
        self._bar = False

    def __call__(self, event: events.Event) -> None:
        """Take one event."""
        if isinstance(event, events.RowsDone):
            self._rows(event)
        elif isinstance(event, events.RoundDone):
            self._round(event)
        else:
            self._step(event)

    def _step(self, event: events.Event) -> None:
        """A step that is always told."""
        if isinstance(event, events.FrameStarted):
            self.n_started += 1
            self._kept, self._started_at, self._line_at = event.kept_rounds, 0.0, time.monotonic()
            self._done, self._wanted = event.kept_rounds, event.wanted_rounds
        elif isinstance(event, events.PictureSaved | events.FrameSkipped):
            self.finished.append(event)
        elif isinstance(event, events.Warned):
            self.warnings.append(event.text)
        elif isinstance(event, events.SceneReady):
            self.warnings.extend(event.notes)
            self._started_at = time.monotonic()
        self.clear()
        for line in self._words(event):
            self.talk.step(_name(event), line, **_facts(event))

    def _words(self, event: events.Event) -> list[str]:
        """An event in plain lines; none for what only a log wants to know."""
        match event:
            case events.FrameStarted():
                place = f" ({self.n_started} of {self.n_frames})" if self.n_frames > 1 else ""
                kept = f", {event.kept_rounds} kept from before" if event.kept_rounds else ""
                return [f"frame {event.frame}{place}: {counted(event.wanted_rounds, 'round')}{kept}"]
            case events.Compiling():
                return ["compiling, once per install: about a minute"]
            case events.SceneReady():
                ready = [f"frame {event.frame}: scene ready in {event.seconds:.1f} s"] if event.seconds > 1.0 else []
                return [*ready, *(f"frame {event.frame}: {note}" for note in event.notes)] or self._only_json()
            case events.Warned():
                return [f"frame {event.frame}: {event.text}"]
            case events.FrameSkipped():
                there = f"there already, with {counted(event.rounds, 'round')} (--overwrite renders it afresh)"
                return [f"frame {event.frame}: {there}"]
            case events.PictureSaved():
                return [
                    f"frame {event.frame}: {counted(event.rounds, 'round')} in {span(event.seconds)}"
                    + (f", stopped by {event.stopped_by}" if event.stopped_by != "rounds" else "")
                ]
            case events.PortionSaved():
                return self._only_json() if self.talk.live else [f"frame {event.frame}: rounds {event.rounds} saved"]
            case _:
                return self._only_json()

    def _only_json(self) -> list[str]:
        return [""] if self.talk.as_json else []

    def _round(self, event: events.RoundDone) -> None:
        if self.talk.as_json:
            self.talk.step("round", "", **_facts(event))
        elif self.talk.live:
            self._draw(event.frame, float(event.done_rounds), event.wanted_rounds, event.standard_error)
        elif time.monotonic() - self._line_at >= LINE_EVERY_S:
            self._line_at = time.monotonic()
            left = self._left(float(event.done_rounds), event.wanted_rounds)
            error = f", standard error {event.standard_error:.2%}" if event.standard_error is not None else ""
            self.talk.step(
                "round", f"frame {event.frame}: round {event.done_rounds} of {event.wanted_rounds}{error}{left}"
            )
        self._done = event.done_rounds

    def _rows(self, event: events.RowsDone) -> None:
        if self.talk.live and self._started_at and time.monotonic() - self._drawn_at >= REDRAW_EVERY_S:
            self._draw(event.frame, self._done + event.done_rows / event.rows, self._wanted, None)

    def _draw(self, frame: int, done: float, wanted: int, error: float | None) -> None:
        """Redraw the bar."""
        self._drawn_at, self._bar = time.monotonic(), True
        share = min(1.0, done / wanted) if wanted else 0.0
        filled = int(share * BAR)
        place = f" ({self.n_started}/{self.n_frames})" if self.n_frames > 1 else ""
        words = f"frame {frame}{place} [{'#' * filled}{'.' * (BAR - filled)}] {int(done)} of {counted(wanted, 'round')}"
        if error is not None:
            words += f", standard error {error:.2%}"
        click.echo(_CLEAR + words + self._left(done, wanted), err=True, nl=False)

    def _left(self, done: float, wanted: int) -> str:
        """How long the frame still takes, from how long its rounds have taken."""
        fresh = done - self._kept
        if fresh <= 0.0 or not self._started_at or wanted <= done:
            return ""
        return f", {span((time.monotonic() - self._started_at) / fresh * (wanted - done))} left"

    def clear(self) -> None:
        """Take the bar away, so that a line can be written."""
        if self._bar:
            click.echo(_CLEAR, err=True, nl=False)
            sys.stderr.flush()
            self._bar = False


def span(seconds: float) -> str:
    """A time in words that fit: ``4.2 s``, ``3 min 20 s``, ``2 h 5 min``."""
    if seconds < 60.0:
        return f"{seconds:.1f} s"
    minutes, rest = divmod(round(seconds), 60)
    return f"{minutes} min {rest} s" if minutes < 60 else f"{minutes // 60} h {minutes % 60} min"


def _name(event: events.Event) -> str:
    """``picture-saved`` of PictureSaved."""
    return "".join(f"-{letter.lower()}" if letter.isupper() else letter for letter in type(event).__name__).lstrip("-")


def _facts(event: events.Event) -> dict[str, Any]:
    """An event's facts, as JSON takes them."""
    return {key: str(value) if isinstance(value, Path) else value for key, value in asdict(event).items()}
