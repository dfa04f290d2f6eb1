"""How long a person waits: the command's help, a small render with all compiled, a thousand frames checked.

    python tools/bench/waits.py

Each is the median of five runs of the command in a process of its own, after one that is not counted. The figures are
for an idle machine; on a busy one they say little.
"""

from __future__ import annotations

import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

RUNS = 5
BOWS = """
[frames]
range = "1001-2000"
[sun]
elevation = { 1001 = 10.0, 2000 = 30.0 }
azimuth = { 1001 = 200.0, 2000 = 220.0 }
[[bows_to_check]]
name = "first"
centre = { azimuth = 25.0, elevation = -20.0 }
radius = 42.0
[[bows_to_check]]
name = "second"
order = 2
centre = { azimuth = 25.0, elevation = -20.0 }
radius = 51.0
"""
CAMERA = """
[camera]
position = [0.0, 1.7, 0.0]
target = [0.0, 1.9, -10.0]
focal_length = 18.0
pixels = [640, 360]
"""


def antisolar(*arguments: str, codes: tuple[int, ...] = (0,)) -> None:
    """Run the command; its code must be one of these."""
    run = subprocess.run([sys.executable, "-m", "renderer", *arguments], capture_output=True, text=True, check=False)
    if run.returncode not in codes:
        sys.exit(run.stderr)


def measure(title: str, *arguments: str, codes: tuple[int, ...] = (0,)) -> None:
    """Print the median time of a command."""
    times = []
    for _ in range(RUNS + 1):
        started = time.perf_counter()
        antisolar(*arguments, codes=codes)
        times.append(time.perf_counter() - started)
    print(f"{title:40s} {statistics.median(times[1:]):6.2f} s   (from {min(times[1:]):.2f} to {max(times[1:]):.2f})")


def main() -> None:
    """All of them."""
    with tempfile.TemporaryDirectory() as made:
        folder = Path(made)
        bows = folder / "bows.shot.toml"
        bows.write_text("format = 1\n" + CAMERA + BOWS, encoding="utf-8")
        small = folder / "small"
        antisolar("new", str(small))
        shot = next(small.rglob("*.shot.toml")) if small.is_dir() else next(folder.glob("small*.shot.toml"))
        small_frame = ("--frames", "1001", "--override", "camera.pixels=[64,36]", "--rounds", "1")
        size = (*small_frame, "--overwrite", "--out", str(folder / "out"))
        measure("antisolar --help", "--help")
        measure("render, 64 x 36, one round, compiled", "render", str(shot), *size)
        measure("check, 1,000 frames with two bows", "check", str(bows), codes=(0, 1))


if __name__ == "__main__":
    main()
