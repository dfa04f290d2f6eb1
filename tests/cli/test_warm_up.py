"""antisolar warm-up, and a first render after it: with the real transport, from a shell's side."""

from __future__ import annotations

import os
from pathlib import Path

from command_line import SHOT, antisolar, write_shot

from renderer.cli.warm_up import SHOT as WARM_UP
from renderer.shot import load_shot


def test_the_shot_of_warm_up_has_one_of_everything() -> None:
    shot = load_shot(WARM_UP)
    frame = shot.at(shot.frames[0])
    assert {item.role for item in frame.objects} == {"solid", "pane", "sheet", "opaque", "light"}
    assert frame.sun is not None
    assert frame.camera.f_number > 0.0
    assert frame.camera.polariser_deg is not None
    assert len(frame.camera.matrices) > 1
    assert any(len(item.matrices) > 1 for item in frame.objects)
    assert {item.surface.finish for item in frame.objects if item.surface} == {"matt", "metal"}


def test_after_warm_up_a_render_compiles_nothing(tmp_path: Path) -> None:
    first = antisolar("warm-up")
    assert first.returncode == 0, first.stderr
    folder = Path(first.stdout.strip())
    assert folder.is_dir()
    compiled = {path: path.stat().st_mtime_ns for path in folder.rglob("*.nbc")}
    assert compiled
    shot = write_shot(tmp_path, SHOT)
    run = antisolar("render", shot, "--frames", 1001, "--rounds", 1, "--out", tmp_path / "out")
    assert run.returncode == 0, run.stderr
    assert "compiling" not in run.stderr
    assert (tmp_path / "out" / "test.1001.exr").stat().st_size > 0
    assert {path: path.stat().st_mtime_ns for path in folder.rglob("*.nbc")} == compiled


def test_a_cache_that_cannot_be_written_is_no_obstacle(tmp_path: Path) -> None:
    """With a home folder that is read-only, kernels go to the temporary folder."""
    from renderer.base import cache

    blocked = tmp_path / "home"
    blocked.write_text("a file where a folder should be", encoding="utf-8")
    code = "from renderer.base.cache import cache_folder; print(cache_folder())"
    import subprocess
    import sys

    environment = {**os.environ, "XDG_CACHE_HOME": str(blocked), "TMPDIR": str(tmp_path)}
    environment.pop("ANTISOLAR_CACHE", None)
    run = subprocess.run([sys.executable, "-c", code], env=environment, capture_output=True, text=True, check=True)
    assert Path(run.stdout.strip()).parent == tmp_path
    assert cache.writable(Path(run.stdout.strip()))
