"""Reading is cheap to import, and takes a thousand frames of one shot."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import shot_writing as shots


def test_the_package_imports_nothing_heavy() -> None:
    code = (
        "import sys, renderer.shot, renderer.shot.model; "
        "print([name for name in ('pydantic', 'numba', 'tree_sitter', 'fileseq', 'trimesh') if name in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_reading_a_good_shot_needs_no_parser_of_positions(tmp_path: Path) -> None:
    path = shots.write(tmp_path)
    code = (
        f"import sys; from renderer.shot import load_shot; load_shot({str(path)!r}).at(1001); "
        "print([name for name in ('numba', 'tree_sitter', 'trimesh') if name in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_a_thousand_frames_with_bows_have_a_thousand_fingerprints(tmp_path: Path) -> None:
    bows = "".join(
        f'[[bows_to_check]]\nname = "bow {number}"\ncentre = {centre}\nradius = {{ 1001 = 40, 2000 = 42 }}\n'
        for number, centre in enumerate(
            ("{ azimuth = 25, elevation = -24 }", "{ pixel = [640, 900] }", "{ point = [0, 1, 0] }")
        )
    )
    text = (
        '[frames]\nrange = "1001-2000"\n[sun]\nelevation = { 1001 = 10, 2000 = 30 }\nazimuth = 205\n'
        + shots.ball()
        + bows
    )
    shot = shots.read(
        tmp_path, text.replace("[frames]", "distortion = { k1 = -0.05 }\nroll = { 1001 = 0, 2000 = 9 }\n[frames]", 1)
    )
    found = [shot.at(number) for number in shot.frames]
    assert len({one.fingerprint for one in found}) == 1000
