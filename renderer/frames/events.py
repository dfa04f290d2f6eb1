"""What happens while frames are rendered, for whoever tells a person or a log."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path


@dataclass(frozen=True)
class FrameStarted:
    """Work on a frame begins. `kept_rounds` are on disk already."""

    frame: int
    kept_rounds: int
    wanted_rounds: int


@dataclass(frozen=True)
class Compiling:
    """No compiled kernels were found: the first call compiles them, once for each version."""

    frame: int


@dataclass(frozen=True)
class SceneReady:
    """Files are read and search trees built. `notes` are warnings about the shot, a sentence each."""

    frame: int
    seconds: float
    notes: tuple[str, ...]


@dataclass(frozen=True)
class RowsDone:
    """Some rows of the round in hand are done. Comes several times a second: for live bars alone."""

    frame: int
    round_number: int
    done_rows: int
    rows: int


@dataclass(frozen=True)
class RoundDone:
    """A round is done. `standard_error` is the frame's, where a target asks for it (1 round in 8)."""

    frame: int
    done_rounds: int
    wanted_rounds: int
    seconds: float
    standard_error: float | None


@dataclass(frozen=True)
class PortionSaved:
    """Finished rounds are on disk."""

    frame: int
    path: Path
    rounds: str


@dataclass(frozen=True)
class Warned:
    """Something that a person should know, in one sentence; work goes on."""

    frame: int
    text: str


@dataclass(frozen=True)
class FrameSkipped:
    """The frame is there already, and as wanted."""

    frame: int
    path: Path
    rounds: int


@dataclass(frozen=True)
class PictureSaved:
    """A picture and its preview are on disk. `stopped_by`: rounds, standard error or time."""

    frame: int
    path: Path
    preview: Path
    rounds: int
    stopped_by: str
    seconds: float


Event = (
    FrameStarted | Compiling | SceneReady | RowsDone | RoundDone | PortionSaved | Warned | FrameSkipped | PictureSaved
)
Progress = Callable[[Event], None]


def no_progress(event: Event) -> None:
    """Tell nobody."""
