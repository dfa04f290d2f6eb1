"""A clear sky in thin air against a slow sum over spherical shells that shares no code with it: sunlight scattered once
by Rayleigh's law, S. Chandrasekhar, Radiative Transfer, 1950, chapters 1 and 7, in air that thins out exponentially."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.optics import atmosphere, sky, sun

EARTH_KM, SCALE_KM, TOP_KM = 6371.0, 8.0, 100.0
PRESSURE_HPA = 25.0  # depth 0.011 at 380 nm: what is scattered twice is near 1 % of what is scattered once
WAVELENGTHS_NM = np.array([380.0, 405.0, 450.0, 520.0, 610.0, 690.0, 780.0])  # at the map's nodes and between them
DIRECTIONS = [(elevation, azimuth) for elevation in (10, 25, 45, 70) for azimuth in (20, 95, 180)]
NODES, WEIGHTS = np.polynomial.legendre.leggauss(200)


def unit(elevation_deg, azimuth_deg):
    elevation, azimuth = np.radians(elevation_deg), np.radians(azimuth_deg)
    level = np.cos(elevation)
    return np.array([level * np.sin(azimuth), level * np.cos(azimuth), np.sin(elevation)])


def points_along(start, direction):
    """Points (200, 3) from `start` to the top of the air, dense at the start, and their lengths of path [km]."""
    along = start @ direction
    length = -along + np.sqrt(along**2 - start @ start + (EARTH_KM + TOP_KM) ** 2)
    share = 0.5 * (NODES + 1.0)
    return start + (length * share**2)[:, None] * direction, length * share * WEIGHTS


def density(points):
    """Share of a vertical column in each km."""
    return np.exp(-(np.linalg.norm(points, axis=-1) - EARTH_KM) / SCALE_KM) / SCALE_KM


def column(start, direction):
    """Air on the way out, over a vertical column from the ground."""
    points, lengths = points_along(start, direction)
    return density(points) @ lengths


def scattered_once(depths, view, to_sun):
    """Radiance over the sunlight above the air, for vertical depths (n,)."""
    eye = np.array([0.0, 0.0, EARTH_KM])
    points, lengths = points_along(eye, view)
    whole = column(eye, view)
    air = np.array([column(point, to_sun) + whole - column(point, view) for point in points])
    phase = 3.0 / (16.0 * np.pi) * (1.0 + (view @ to_sun) ** 2)
    return depths * phase * (np.exp(-np.outer(depths, air)) @ (density(points) * lengths))


@pytest.mark.parametrize("sun_deg", [10, 30, 60])
def test_thin_rayleigh_sky_in_twelve_directions(sun_deg):
    """Absolute, at seven wavelengths, within 5 %: what is scattered twice, and straight lines between nodes."""
    air = atmosphere.Air(aerosol_depth_550=0.0, pressure_hpa=PRESSURE_HPA, ozone_atm_cm=0.0, water_cm=0.0)
    coefficients, basis = sky.clear_sky_through(air, sun_deg, 0.0, 0.0)
    picked = (WAVELENGTHS_NM - 380.0).astype(int)
    for elevation, azimuth in DIRECTIONS:
        radiance = (coefficients[90 - elevation, azimuth] @ basis)[picked]
        depths = atmosphere.rayleigh_depth(WAVELENGTHS_NM, PRESSURE_HPA)
        wanted = scattered_once(depths, unit(elevation, azimuth), unit(sun_deg, 0.0))
        assert radiance == pytest.approx(wanted * sun.irradiance_above_air(WAVELENGTHS_NM), rel=0.05)


def test_the_sum_over_shells_knows_the_air_mass():
    """Kasten and Young 1989: 1 overhead, 2.0 at 30 degrees, 5.6 at 10 (without their refraction)."""
    eye = np.array([0.0, 0.0, EARTH_KM])
    masses = [column(eye, unit(elevation, 0.0)) for elevation in (90, 30, 10)]
    assert masses == pytest.approx([1.0, 1.995, 5.59], rel=0.01)


def test_a_sky_loses_its_haze_without_a_step():
    """On both sides of the aerosol from which the standard's patterns hold; the sums are ours."""
    limit = sky.AEROSOL_OF_ISO
    below, above = (
        sky.clear_sky_through(atmosphere.Air(aerosol_depth_550=depth), 30.0, 0.0, 0.2)[0]
        for depth in (limit * (1.0 - 1e-6), limit)
    )
    np.testing.assert_allclose(below, above, rtol=1e-4)
