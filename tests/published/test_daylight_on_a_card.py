"""Absolute light and exposure, in rendered pictures: a white card in the sun, and ISO 12232 by a worked example."""

from __future__ import annotations

import math

import numpy as np
import pytest

from renderer.optics import sky
from renderer.optics.atmosphere import air_over
from renderer.optics.sun import beam_irradiance
from renderer.optics.tables import render_wavelengths_nm
from renderer.pictures.developing import developed, development_of
from renderer.shot import load_shot
from tests.rendering import rendered

REFLECTANCE = 0.9
# The sun stands in the south, which is +z, and the card's front faces it; the camera looks along the sun's rays.
CARD = f"""
title = "white card"
[camera]
position = [0, 2.5, 1.5]
target = [0, 1, 0]
focal_length = 200
sensor = [36, 36]
pixels = [8, 8]
[sun]
elevation = 45
azimuth = 180
[sky]
kind = "clear"
[[objects]]
name = "card"
shape = {{ box = [0.6, 0.6, 0.002] }}
surface = {{ reflectance = {REFLECTANCE} }}
transform = {{ rotation = [-45, 0, 0], translation = [0, 1, 0] }}
[[objects]]
name = "ground"
shape = {{ box = [60, 0.1, 60] }}
surface = {{ reflectance = 0.2 }}
transform = {{ translation = [0, -0.05, 0] }}
"""


def card_lux(visibility_km, elevation_deg=45.0):
    """Light on a card that faces the sun: of the sun, and of the sky and ground before it. [lx]"""
    coefficients, basis = sky.clear_sky(elevation_deg, 0.0, visibility_km)
    luminance = sky.luminance_of(coefficients @ basis)
    row, turn, high = np.radians(sky.rows_deg())[:, None], np.radians(np.arange(360)), math.radians(elevation_deg)
    facing = np.cos(row) * np.cos(turn) * math.cos(high) + np.sin(row) * math.sin(high)
    around = (luminance * np.maximum(facing, 0.0) * np.cos(row)).sum() * math.radians(1.0) ** 2
    beam = beam_irradiance(render_wavelengths_nm(), elevation_deg, air_over(visibility_km))
    return float(sky.luminance_of(beam)), float(around)


@pytest.mark.parametrize("visibility_km", [10.0, 23.0, 60.0, 150.0])
def test_white_card_in_sun_and_clear_sky(visibility_km):
    """80 to 120 klx at a sun of 45 degrees (common practice, no source), the most of it from the sun itself.

    In air without any haze, which that range was not meant for, it is 121 klx.
    """
    sun, around = card_lux(visibility_km)
    assert 80e3 < sun + around < 120e3
    assert sun > around


def test_white_card_in_a_picture():
    """The same, from the luminance of a rendered matt card: E = pi L / reflectance."""
    picture = rendered(CARD, 32)
    lux = math.pi / REFLECTANCE * picture.mean
    assert 80e3 < lux < 120e3
    within = 4.0 * math.pi / REFLECTANCE * picture.mean_error
    assert within < 0.03 * lux
    assert lux == pytest.approx(sum(card_lux(23.0)), abs=within + 0.02 * lux)  # the ground there is not all before it


def test_exposure_by_iso_of_a_picture(tmp_path):
    """Worked by hand: at ISO 400 mid grey is 10 / 400 = 0.025 lx s. f/8 and 180 degrees at 24 frames a second, 1/48 s,
    give the sensor 0.65 L / 48 / 64 lx s (ISO 12232:2006, from memory), so that 118.15 cd/m2 come out as 0.18."""
    path = tmp_path / "even.shot.toml"
    path.write_text("""format = 1
title = "even field"
[camera]
position = [0, 0, 0]
target = [0, 0, -1]
focal_length = 50
sensor = [36, 36]
pixels = [4, 4]
f_number = 8
focus_distance = 5
shutter = 180
exposure = { iso = 400 }
[sky]
kind = "uniform"
luminance = 118.1538
""")
    shot = load_shot(path).at(1001)
    picture = rendered(shot, 64)
    how = development_of(shot.camera, shot.fps, "rec709", picture.luminance)
    assert shot.fps == 24.0
    assert developed(picture.xyz, how).mean(axis=(0, 1)) == pytest.approx([0.18, 0.18, 0.18], rel=0.01)
