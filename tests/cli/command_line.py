"""Running the command line in a process of its own, as a shell does."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]

SHOT = """\
format = 1
title = "Lock Nine: a test of the command line"

[frames]
range = "1001-1003"

[camera]
position = [0.0, 1.7, 0.0]
target = [0.0, 3.0, -10.0]
focal_length = 18.0
pixels = [64, 36]

[sun]
elevation = 20.0
azimuth = 180.0

[sky]
kind = "clear"

[[objects]]
name = "ground"
shape = { box = [60.0, 0.1, 60.0] }
surface = { reflectance = 0.3 }

[[bows_to_check]]
name = "comp bow"
centre = { azimuth = 0.0, elevation = -20.0 }
radius = 41.6
outer_colour = "red"

[variants.wrong]
"sun.azimuth" = 40.0
"""


def antisolar(*arguments: object, folder: Path | None = None, **environment: str) -> subprocess.CompletedProcess[str]:
    """The command line with these arguments, its output as text. `environment` is laid over this process's own."""
    return subprocess.run(
        [sys.executable, "-W", "error", "-m", "renderer", *(str(argument) for argument in arguments)],
        cwd=folder or ROOT,
        env={**os.environ, "PYTHONPATH": str(ROOT), **environment},
        capture_output=True,
        text=True,
        encoding="utf-8",
        timeout=300,
        check=False,
    )


def write_shot(folder: Path, text: str = SHOT, name: str = "test.shot.toml") -> Path:
    """A shot file in a folder."""
    path = folder / name
    path.write_text(text, encoding="utf-8")
    return path
