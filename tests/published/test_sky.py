"""Skies against published illuminances, standard patterns and colours."""

from __future__ import annotations

import colour
import numpy as np
import pytest

from renderer.optics import sky, skylight
from renderer.optics.atmosphere import air_over
from renderer.optics.sun import beam_irradiance
from renderer.optics.tables import render_wavelengths_nm

# log10 lx of sun and clear sky on level ground, a cubic in elevation / 90: Explanatory Supplement to the Astronomical
# Almanac, 1992, section 9.34 (from memory)
SEIDELMANN = (
    (20, 90, (3.74, 3.97, -4.07, 1.47)),
    (5, 20, (3.05, 13.28, -45.98, 64.33)),
    (-0.8, 5, (2.88, 22.26, -207.64, 1034.30)),
)


def almanac_lux(elevation_deg):
    x = elevation_deg / 90
    for low, high, terms in SEIDELMANN:
        if low <= elevation_deg <= high:
            return 10 ** sum(term * x**k for k, term in enumerate(terms))
    raise AssertionError


@pytest.mark.parametrize("elevation_deg", [0, 2, 5, 10, 15, 30, 45, 60, 90])
def test_light_on_level_ground(elevation_deg):
    """Within 20 % of the almanac's mean clear day, for 23 km of visibility; the two models share nothing."""
    grid, air = render_wavelengths_nm(), air_over(23.0)
    beam = beam_irradiance(grid, elevation_deg, air)
    level = beam * np.sin(np.radians(elevation_deg)) + skylight.diffuse_irradiance(grid, elevation_deg, air, beam)
    assert float(sky.luminance_of(level)) == pytest.approx(almanac_lux(elevation_deg), rel=0.20)


@pytest.mark.parametrize("elevation_deg", [60, 30, 10])
def test_overcast_light_on_level_ground(elevation_deg):
    """300 + 21000 sin(elevation) lx: Krochmann & Seidl 1974 (from memory), within 1 % of the map's own sum."""
    coefficients, basis = sky.overcast_sky(elevation_deg)
    rows = np.radians(sky.rows_deg()[:91])
    luminance = coefficients[:91, 0, 0] * float(sky.luminance_of(basis[0]))
    level = 2 * np.pi * np.trapezoid(luminance * np.sin(rows) * np.cos(rows), -rows)
    assert level == pytest.approx(300 + 21000 * np.sin(np.radians(elevation_deg)), rel=0.01)
    assert luminance[0] / luminance[90] == pytest.approx(1 + 4 * np.exp(-0.7), rel=1e-9)  # ISO type 1


def test_clear_pattern_is_the_standard():
    """ISO 15469 type 12 (a -1, b -0.32, c 10, d -3, e 0.45) written out, in air clear enough to be that type alone."""
    coefficients, basis = sky.clear_sky(40.0, 0.0, 100.0)
    luminance = sky.luminance_of(coefficients @ basis)

    def standard(row, column):
        elevation, azimuth, sun = np.radians(90 - row), np.radians(column), np.radians(40.0)
        chi = np.arccos(np.sin(elevation) * np.sin(sun) + np.cos(elevation) * np.cos(sun) * np.cos(azimuth))
        phi = 1 - np.exp(-0.32 / np.sin(elevation))
        return phi * (1 + 10 * (np.exp(-3 * chi) - np.exp(-3 * np.pi / 2)) + 0.45 * np.cos(chi) ** 2)

    for row, column in ((20, 0), (49, 10), (60, 180), (80, 90), (85, 300)):
        expected = standard(row, column) / standard(0, 0)
        assert luminance[row, column] / luminance[0, 0] == pytest.approx(expected, rel=1e-9)


def test_blue_zenith_and_warm_sunset(observer):
    """Clear zeniths are 8,000 to 20,000 K (measured skies, common practice); towards a low sun x rises above 0.38."""
    coefficients, basis = sky.clear_sky(30.0, 120.0, 23.0)
    x, y = chromaticity(coefficients[0, 0] @ basis, observer)
    n = (x - 0.3320) / (0.1858 - y)
    kelvin = 449 * n**3 + 3525 * n**2 + 6823.3 * n + 5520.33  # C. S. McCamy, Color Res. Appl. 17, 142 (1992)
    assert 8000 < kelvin < 20000
    coefficients, basis = sky.clear_sky(5.0, 120.0, 23.0)
    assert chromaticity(coefficients[88, 120] @ basis, observer)[0] > 0.38
    assert chromaticity(coefficients[0, 0] @ basis, observer)[0] < 0.28


def test_daylight_is_d65(observer):
    """CIE D65: x 0.31272, y 0.32903."""
    assert chromaticity(sky.daylight_basis(), observer) == pytest.approx((0.31272, 0.32903), abs=1e-4)


def chromaticity(spectrum, observer):
    total = spectrum @ observer
    return total[0] / total.sum(), total[1] / total.sum()


@pytest.fixture(scope="module")
def observer():
    """CIE 1931 observer, (401, 3), from colour-science (CIE 018:2019)."""
    return colour.MSDS_CMFS["CIE 1931 2 Degree Standard Observer"].align(colour.SpectralShape(380, 780, 1)).values


# lux of a clear evening by the same almanac section: civil and nautical twilight end at 3.4 and 0.008 lx (memory)
@pytest.mark.parametrize(
    ("elevation_deg", "lux", "within"), [(-3.0, 79.0, 0.12), (-6.0, 3.4, 0.15), (-12.0, 0.008, 0.25)]
)
def test_twilight(elevation_deg, lux, within):
    coefficients, basis = sky.clear_sky(elevation_deg, 0.0, 23.0)
    weights = sky.level_irradiance_weights(*sky.sine_cosine_deg(sky.rows_deg()))
    level = float(sky.luminance_of(sky.from_level_irradiance(coefficients @ basis, weights)))
    assert level == pytest.approx(lux, rel=within)


@pytest.mark.parametrize("joint_deg", [0.0, -0.8, -5.0])
def test_twilight_joins_without_a_step(joint_deg):
    above, below = skylight.twilight_factor(joint_deg + 1e-9), skylight.twilight_factor(joint_deg - 1e-9)
    assert above == pytest.approx(below, rel=0.05)  # the published pieces meet to 4 %
