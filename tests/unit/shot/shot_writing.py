"""Shot files written for a test."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from renderer.shot import load_shot
from renderer.shot.model import FrameShot
from renderer.shot.shot import Shot

BASE = """\
format = 1
[camera]
position = [0, 1, 5]
target = [0, 1, 0]
focal_length = 35
"""


def write(folder: Path, text: str = "", whole: bool = False, name: str = "lock.shot.toml") -> Path:
    """A shot file in `folder`: `text` behind the base, or alone."""
    path = folder / name
    path.write_text(text if whole else BASE + text, encoding="utf-8")
    return path


def read(
    folder: Path, text: str = "", whole: bool = False, variant: str | None = None, overrides: Sequence[str] = ()
) -> Shot:
    """The shot of such a file."""
    return load_shot(write(folder, text, whole), variant, overrides)


def frame(
    folder: Path,
    text: str = "",
    number: int = 1001,
    whole: bool = False,
    variant: str | None = None,
    overrides: Sequence[str] = (),
) -> FrameShot:
    """One frame of it."""
    return read(folder, text, whole, variant, overrides).at(number)


def ball(more: str = "", name: str = "ball") -> str:
    """A ball of water, and more of its keys."""
    return f'[[objects]]\nname = "{name}"\nshape = {{ sphere = 0.1 }}\nmaterial = "water"\n{more}\n'
