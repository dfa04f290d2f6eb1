"""tools/oxygen_band.py makes the shipped table, and its lines stand where oxygen's are."""

from __future__ import annotations

import runpy
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

ROOT = Path(__file__).resolve().parents[2]
SCRIPT = ROOT / "tools" / "oxygen_band.py"
SHIPPED = ROOT / "renderer" / "optics" / "data" / "oxygen_a_band.csv"


def numbers(path: Path) -> np.ndarray:
    lines = [line for line in path.read_text(encoding="utf-8").splitlines() if line[0].isdigit()]
    return np.array([[float(entry) for entry in line.split(",")] for line in lines])


def test_the_shipped_table_is_what_the_script_makes(tmp_path: Path) -> None:
    made = tmp_path / "made.csv"
    subprocess.run([sys.executable, str(SCRIPT), "--out", str(made)], check=True, capture_output=True)
    np.testing.assert_allclose(numbers(made), numbers(SHIPPED), rtol=1e-4)


def test_head_of_the_band() -> None:
    """The band ends towards the violet at 759.4 nm in air, Fraunhofer's A (759.37, from memory)."""
    tool = runpy.run_path(str(SCRIPT))
    assert 1e7 / tool["lines"]()[:, 0].max() / tool["INDEX_OF_AIR"] == pytest.approx(759.4, abs=0.3)


@pytest.mark.parametrize("air_mass", [1.0, 1.5, 5.0, 10.0, 38.0])
def test_the_band_model_follows_the_lines(air_mass: float) -> None:
    """Light taken from the whole band: within 2 % of the sum over lines from the zenith down to the horizon."""
    tool = runpy.run_path(str(SCRIPT))
    taken = (1.0 - tool["transmittance"](air_mass)).sum()
    assert (1.0 - tool["band_model"](numbers(SHIPPED)[:, 1], air_mass)).sum() == pytest.approx(taken, rel=0.02)
