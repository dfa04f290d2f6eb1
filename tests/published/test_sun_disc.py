"""The sun's disc: darkening towards its edge, its place through the air, its colour when low."""

from __future__ import annotations

import colour
import numpy as np
import pandas
import pytest
from pvlib import solarposition

from renderer.colour.observer import luminance
from renderer.optics import atmosphere, sun
from renderer.optics.tables import render_wavelengths_nm
from tests.rendering import rendered

# The camera looks 24 degrees up at the sun: 36 pixels of 1 minute of arc each way, so that the disc is 32 across.
PIXELS, MINUTE = 36, np.tan(np.radians(1.0 / 60.0))
DISC = f"""
title = "disc"
[camera]
position = [0, 0, 0]
target = [0, {np.sin(np.radians(24.0)):.15f}, {-np.cos(np.radians(24.0)):.15f}]
focal_length = {36.0 / (PIXELS * MINUTE)}
sensor = [36, 36]
pixels = [{PIXELS}, {PIXELS}]
[sun]
elevation = 24
azimuth = 0
[sky]
kind = "none"
"""


def power_law(mu, wavelength_um):
    """D. Hestroffer and C. Magnan, Astron. Astrophys. 333, 338 (1998) (from memory): mu^(-0.023 + 0.292 / um)."""
    return mu ** (-0.023 + 0.292 / wavelength_um)


def test_limb_darkening_by_another_fit():
    """Within 1 % of a fit to later measurements, at 550 nm, out to 0.9 of the radius, and 9 % out to 0.98."""
    for edge, within in ((0.9, 0.01), (0.98, 0.09)):
        mu = np.sqrt(1.0 - np.linspace(0.0, edge, 99) ** 2)
        assert sun.limb_brightness(mu) == pytest.approx(power_law(mu, 0.55), rel=within)
    assert sun.limb_mean() == pytest.approx(2.0 / (2.0 + 0.508), rel=0.01)


def test_one_law_serves_the_colours_that_are_seen():
    """Light at 450 and 650 nm falls off faster and slower than at 550; at three quarters of the radius by under 7 %."""
    mu = np.sqrt(1.0 - 0.75**2)
    for wavelength_um in (0.45, 0.65):
        assert float(sun.limb_brightness(mu)) == pytest.approx(power_law(mu, wavelength_um), rel=0.07)


def test_disc_in_a_picture():
    """All light of a rendered disc is that of `sun_radiance`; its middle and its edge are as the power law has them."""
    picture = rendered(DISC, 64)
    rows, columns = np.indices((PIXELS, PIXELS)) - (PIXELS - 1) / 2.0
    radius = np.hypot(rows, columns) / 60.0 / sun.ANGULAR_RADIUS_DEG
    beam = float(luminance(sun.sun_radiance(24.0)[None, :])[0]) * sun.solid_angle_sr()
    assert picture.luminance.sum() * np.radians(1.0 / 60.0) ** 2 == pytest.approx(beam, rel=0.02)
    middle = picture.luminance[radius < 0.15].mean()
    for low, high in ((0.4, 0.6), (0.6, 0.75), (0.75, 0.88)):
        ring = (radius > low) & (radius < high)
        wanted = power_law(np.sqrt(1.0 - radius[ring] ** 2), 0.555).mean()
        assert picture.luminance[ring].mean() / middle == pytest.approx(wanted, rel=0.03)
    assert picture.luminance[radius > 1.1].max() == 0.0


def test_lift_by_the_air():
    """NREL's solar position algorithm, as pvlib has it, at 1010 hPa and 10 C: within 0.001 degree from 0.5 to 85."""
    times = pandas.date_range("2026-06-21 03:00", "2026-06-21 12:00", freq="7min", tz="UTC")
    table = solarposition.spa_python(times, 35.0, 20.0, pressure=101000.0, temperature=10.0)
    table = table[(table["elevation"] > 0.5) & (table["elevation"] < 85.0)]
    assert len(table) > 50
    ours = atmosphere.apparent_elevation_deg(table["elevation"].to_numpy())
    assert ours == pytest.approx(table["apparent_elevation"].to_numpy(), abs=1e-3)


def test_low_sun_is_red():
    """Dominant wavelength by colour-science, from D65: near white high up, yellow at 10, orange at 4, red at 0.5."""
    observer = colour.MSDS_CMFS["CIE 1931 2 Degree Standard Observer"].align(colour.SpectralShape(380, 780, 1)).values
    air = atmosphere.air_over(23.0)
    found = []
    for elevation in (10.0, 4.0, 0.5):
        xyz = sun.beam_irradiance(render_wavelengths_nm(), elevation, air) @ observer
        found.append(float(colour.dominant_wavelength(xyz[:2] / xyz.sum(), (0.31272, 0.32903))[0]))
    assert 575.0 < found[0] < 585.0 < found[1] < 600.0 < found[2]
