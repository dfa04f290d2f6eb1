"""Where a frame's files lie below the output folder.

    OUT/SHOT.VARIANT.1001.exr        the picture; without `.VARIANT` for the shot as it stands
    OUT/SHOT.VARIANT.1001.png        its preview
    OUT/SHOT.VARIANT.log             JSON lines: what was done, when, where, how fast; never read back
    OUT/portions/SHOT.VARIANT.1001/  finished rounds, to go on from; may be deleted at any time

A frame number has at least four digits. Portions are named by their rounds and a hash of what their bits depend on:
`000000-000063.3f9a01c2.portion`.
"""

from __future__ import annotations

import hashlib
from pathlib import Path

from renderer.frames.round_ranges import Ranges
from renderer.shot.model import FrameShot

PORTION_KIND = ".portion"
MOST_RANGES_IN_NAME = 4


def shot_name(source: Path, variant: str) -> str:
    """`SHOT.VARIANT`, from the shot file's name."""
    stem = source.name.removesuffix(".toml").removesuffix(".shot")
    return f"{stem}.{variant}" if variant else stem


def frame_number(frame: int) -> str:
    """The frame in at least four digits."""
    return f"{'-' if frame < 0 else ''}{abs(frame):04d}"


def frame_name(shot: FrameShot) -> str:
    """`SHOT.VARIANT.1001`."""
    return f"{shot_name(shot.source, shot.variant)}.{frame_number(shot.frame)}"


def picture_path(out: Path, shot: FrameShot) -> Path:
    """Where the picture goes."""
    return out / f"{frame_name(shot)}.exr"


def preview_path(out: Path, shot: FrameShot) -> Path:
    """Where the preview goes."""
    return out / f"{frame_name(shot)}.png"


def log_path(out: Path, shot: FrameShot) -> Path:
    """Where the log of all frames goes."""
    return out / f"{shot_name(shot.source, shot.variant)}.log"


def portion_folder(out: Path, shot: FrameShot) -> Path:
    """Where finished rounds go."""
    return out / "portions" / frame_name(shot)


def portion_path(out: Path, shot: FrameShot, ranges: Ranges, mark: str) -> Path:
    """Where these rounds go."""
    if len(ranges) <= MOST_RANGES_IN_NAME:
        rounds = "+".join(f"{first:06d}-{stop - 1:06d}" for first, stop in ranges)
    else:
        rounds = f"{ranges[0][0]:06d}-{ranges[-1][1] - 1:06d}.{hashlib.sha256(repr(ranges).encode()).hexdigest()[:8]}"
    return portion_folder(out, shot) / f"{rounds}.{mark}{PORTION_KIND}"
