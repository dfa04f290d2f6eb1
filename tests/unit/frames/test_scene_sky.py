"""Sun and sky: orientation, absolute values, and chances that sum to one and leave nothing out."""

from __future__ import annotations

import dataclasses
import math
from pathlib import Path

import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.colour.observer import luminance
from renderer.frames import scene_sky
from renderer.frames.scene_sky import chances, node_luminance, picture_map, sky_arrays, sun_arrays
from renderer.shot.model import Sky, Sun
from tests.unit.frames.shot_values import shot

SUN = Sun((0.0, math.sin(math.radians(30.0)), -math.cos(math.radians(30.0))), 30.0, 0.0, 23.0)


def sky_of(kind: str, **values) -> Sky:
    return dataclasses.replace(Sky(kind, 1000.0, (1.0, 1.0, 1.0), None, "rec709", 1.0, 0.0), **values)


def test_uniform_sky_has_its_luminance():
    arrays = sky_arrays(shot(sky=sky_of("uniform", luminance=500.0, colour=(0.2, 0.4, 1.0), scale=3.0)))
    assert arrays.coefficients.shape == (2, 1, 1)
    assert node_luminance(arrays.coefficients, arrays.basis) == pytest.approx(1500.0, rel=1e-9)
    assert arrays.row_cdf.tolist() == [0.0, 1.0]
    assert arrays.column_cdf.tolist() == [[0.0, 1.0]]
    assert arrays.axes.tolist() == [[1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, -1.0]]


def test_no_sky_is_black_and_can_still_be_drawn_from():
    arrays = sky_arrays(shot(sky=sky_of("none")))
    assert not arrays.coefficients.any()
    assert arrays.row_cdf.tolist() == [0.0, 1.0]


def test_clear_sky_is_brightest_round_the_sun():
    arrays = sky_arrays(shot(sky=sky_of("clear"), sun=SUN))
    bright = node_luminance(arrays.coefficients, arrays.basis)
    row, column = np.unravel_index(bright.argmax(), bright.shape)
    assert abs(row * 180.0 / (len(bright) - 1) - 60.0) < 3.0
    assert min(column, bright.shape[1] - column) * 360.0 / bright.shape[1] < 3.0


def test_a_clear_sky_needs_a_sun_and_an_overcast_one_hides_it():
    with pytest.raises(InputError, match="needs a sun"):
        sky_arrays(shot(sky=sky_of("clear")))
    assert sky_arrays(shot(sky=sky_of("overcast"))).coefficients.max() > 0.0
    notes: list[str] = []
    assert sun_arrays(SUN, "overcast", notes).numbers[0] == 0.0
    assert len(notes) == 1


def test_sun_numbers():
    arrays = sun_arrays(SUN, "clear", [])
    assert arrays.numbers[:4].tolist() == [1.0, *SUN.direction]
    angle = math.radians(0.266453)
    assert arrays.numbers[4] == pytest.approx(math.cos(angle), rel=1e-15)
    assert arrays.numbers[5] == pytest.approx(2.0 * math.pi * (1.0 - math.cos(angle)), rel=1e-5)
    mu = (np.arange(20_000) + 0.5) / 20_000
    u1, u2 = arrays.numbers[6], arrays.numbers[7]
    limb = 1.0 - u1 * (1.0 - mu) - u2 * (1.0 - mu) ** 2
    assert arrays.numbers[8] == pytest.approx((limb * 2.0 * mu).mean(), rel=1e-6)
    assert 5e8 < luminance(arrays.radiance) < 2e9  # the sun's disc has 1.6e9 cd/m2 high up (from memory)
    assert not sun_arrays(None, "clear", []).numbers.any()
    down = dataclasses.replace(SUN, elevation_deg=-5.0)
    assert sun_arrays(down, "clear", []).numbers[0] == 0.0


def painted(monkeypatch, pixels):
    """A sky picture of these pixels."""
    monkeypatch.setattr("renderer.pictures.reading.read_sky_picture", lambda path: np.asarray(pixels, dtype=np.float64))


def azimuth_of_light(coefficients) -> float:
    """Where the light of a map is, degrees clockwise from north, by its vector mean."""
    weight = coefficients.sum(axis=(0, 2))
    angles = 2.0 * np.pi * np.arange(len(weight)) / len(weight)
    return math.degrees(math.atan2((weight * np.sin(angles)).sum(), (weight * np.cos(angles)).sum())) % 360.0


@pytest.mark.parametrize(
    ("column", "turn", "azimuth"), [(64, 0.0, 1.40625), (96, 0.0, 91.40625), (64, 90.0, 91.40625), (0, 10.3, 191.70625)]
)
def test_picture_has_north_in_the_middle_and_turns_clockwise(monkeypatch, column, turn, azimuth):
    """128 columns: the middle of column 64 is half a pixel, 1.40625 degrees, east of the middle."""
    pixels = np.zeros((64, 128, 3))
    pixels[30, column] = 1.0
    painted(monkeypatch, pixels)
    coefficients, _ = picture_map(Path("sky.exr"), sky_of("picture", turn_deg=turn))
    assert azimuth_of_light(coefficients) == pytest.approx(
        azimuth, abs=1e-3
    )  # light that falls between two columns is a chord, not an arc
    rows = coefficients.sum(axis=(1, 2))
    assert np.flatnonzero(rows).tolist() == [30, 31]  # the nodes above and below the middle of pixel row 30


def test_picture_keeps_its_light(monkeypatch):
    rng = np.random.default_rng(7)
    pixels = rng.random((32, 64, 3))
    painted(monkeypatch, pixels)
    coefficients, basis = picture_map(Path("sky.exr"), sky_of("picture", turn_deg=33.0))
    assert coefficients.shape == (33, 64, 3)
    weights = np.cos(np.radians(90.0 - 180.0 * (np.arange(32) + 0.5) / 32))
    nodes = np.abs(np.cos(np.radians(90.0 - 180.0 * np.arange(33) / 32)))
    picture = (pixels * weights[:, None, None]).sum(axis=(0, 1))
    assert (coefficients * nodes[:, None, None]).sum(axis=(0, 1)) == pytest.approx(
        picture, rel=0.01
    )  # cos of half a pixel
    grey = luminance(np.ones(3) @ basis)
    assert grey == pytest.approx(1.0, rel=1e-6)  # a value of 1 is 1 cd/m2


def test_chances_follow_luminance_and_leave_nothing_out():
    bright = np.zeros((7, 12, 1))
    bright[2, 5] = 1.0
    basis = np.ones((1, 401))
    rows, columns = chances(bright, basis)
    assert (rows[0], rows[-1]) == (0.0, 1.0)
    assert (columns[:, 0] == 0.0).all()
    assert (columns[:, -1] == 1.0).all()
    chance = np.diff(rows)[:, None] * np.diff(columns, axis=1)
    assert chance.sum() == pytest.approx(1.0, rel=1e-12)
    assert chance.min() > 0.0
    near = chance[1:3, 4:6].sum()
    assert near > 0.99
    sine = np.sin(np.radians(90.0 - 30.0 * np.arange(7)))
    solid = (sine[:-1] - sine[1:]) / 24.0
    assert chance[4, 0] == pytest.approx(scene_sky.EVEN_SHARE * solid[4], rel=1e-9)
    assert chance[1, 4] / chance[2, 4] == pytest.approx(solid[1] / solid[2], rel=1e-3)


def test_chances_wrap_round_the_seam():
    bright = np.zeros((3, 8, 1))
    bright[1, 0] = 1.0
    _, columns = chances(bright, np.ones((1, 401)))
    shares = np.diff(columns[0])
    assert shares[7] == pytest.approx(shares[0], rel=1e-12)
    assert shares[7] > 0.45
