"""Sun and sky at a frame."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
import shot_writing as shots

from renderer.shot.resolve_light import angles_of, direction_of


def test_bearings_run_clockwise_from_north(tmp_path: Path) -> None:
    found = shots.frame(tmp_path)
    assert found.axes.east == (1.0, 0.0, 0.0)
    for azimuth, expected in ((0, (0, 0, -1)), (90, (1, 0, 0)), (180, (0, 0, 1)), (270, (-1, 0, 0))):
        assert direction_of(0.0, azimuth, found.axes) == expected
    assert direction_of(90.0, 77.0, found.axes) == (0.0, 1.0, 0.0)


@pytest.mark.parametrize("units", ['up = "+z"', 'up = "+y"\nnorth = "+x"', 'up = "+z"\nnorth = "-x"'])
def test_axes_are_square_and_angles_come_back(tmp_path: Path, units: str) -> None:
    axes = shots.frame(tmp_path, f"[units]\n{units}\n").axes
    frame = np.array([axes.east, axes.north, axes.up])
    assert np.array_equal(frame @ frame.T, np.eye(3))
    assert np.linalg.det(frame) == pytest.approx(1.0)
    assert angles_of(direction_of(20.0, 250.0, axes), axes) == pytest.approx((20.0, 250.0), abs=1e-12)


def test_sun_by_angles_and_by_direction(tmp_path: Path) -> None:
    keyed = shots.frame(
        tmp_path, "[sun]\nelevation = { 1001 = 10, 1003 = 20 }\nazimuth = 205\nvisibility = 12\n", 1002
    ).sun
    assert keyed is not None
    assert (keyed.elevation_deg, keyed.azimuth_deg, keyed.visibility_km) == (15.0, 205.0, 12.0)
    pointed = shots.frame(tmp_path, f"[sun]\ndirection = {[3.0 * x for x in keyed.direction]}\n").sun
    assert pointed is not None
    assert (pointed.elevation_deg, pointed.azimuth_deg) == pytest.approx((15.0, 205.0), abs=1e-10)
    assert pointed.direction == pytest.approx(keyed.direction, abs=1e-15)


def test_without_tables_there_is_neither_sun_nor_sky(tmp_path: Path) -> None:
    found = shots.frame(tmp_path)
    assert found.sun is None
    assert found.sky.kind == "none"


def test_sky_of_each_kind(tmp_path: Path) -> None:
    (tmp_path / "sky.exr").write_bytes(b"x")
    picture = shots.frame(
        tmp_path, '[sky]\nkind = "picture"\npicture = "sky.exr"\nencoding = "acescg"\nturn = 90\n'
    ).sky
    assert (picture.picture, picture.encoding, picture.turn_deg) == (tmp_path / "sky.exr", "acescg", 90.0)
    even = shots.frame(tmp_path, '[sky]\nkind = "uniform"\nluminance = 500\ncolour = [1, 0, 0]\nscale = 2\n').sky
    assert (even.luminance, even.colour, even.scale) == (500.0, (1.0, 0.0, 0.0), 2.0)
    assert shots.frame(tmp_path, '[sky]\nkind = "overcast"\n').sky.kind == "overcast"
