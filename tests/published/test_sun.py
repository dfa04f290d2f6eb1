"""What the air does to sunlight, and the numbers of the sun's disc."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.base.constants import LUMINOUS_EFFICACY
from renderer.optics import atmosphere, sun
from renderer.optics.tables import render_wavelengths_nm, table_column


def test_rayleigh_depth():
    """Bodhaine et al. 1999, eq. 30: 0.446182 at 380 nm, 0.0970652 at 550, 0.0235118 at 780 (public copies agree)."""
    got = atmosphere.rayleigh_depth([380.0, 550.0, 780.0])
    assert got == pytest.approx([0.446182, 0.0970652, 0.0235118], rel=2e-6)


@pytest.mark.parametrize(("elevation_deg", "mass"), [(90, 1.0), (41.81, 1.498), (30, 1.994), (10, 5.58), (0, 37.9)])
def test_air_mass(elevation_deg, mass):
    """Kasten & Young 1989: 37.9 on the horizon, 1.5 at G173's zenith angle (digits from memory)."""
    assert atmosphere.relative_air_mass(elevation_deg) == pytest.approx(mass, rel=3e-3)


def test_refraction_on_the_horizon():
    """Nautical almanacs: about 34' on the apparent horizon, 5.3' at 10 degrees, 1.0' at 45 (from memory)."""
    assert 60 * atmosphere.refraction_deg([0.0, 10.0, 45.0]) == pytest.approx([34.0, 5.35, 0.99], abs=0.6)
    back = atmosphere.apparent_elevation_deg(10.0 - atmosphere.refraction_deg(10.0))
    assert float(back) == pytest.approx(10.0, abs=0.002)


def test_disc():
    """Solid angle 6.7943e-5 sr at 1 au; mean over middle 0.80 at 550 nm (Allen 2000, from memory)."""
    assert sun.solid_angle_sr() == pytest.approx(6.7943e-5, rel=2e-5)
    assert sun.limb_mean() == pytest.approx(0.80, abs=0.01)
    mu = (np.arange(20000) + 0.5) / 20000
    assert float(np.mean(sun.limb_brightness(mu) * 2 * mu)) == pytest.approx(sun.limb_mean(), abs=1e-6)
    assert float(sun.limb_brightness(0.0)) == pytest.approx(0.30)


def test_luminance_of_the_high_sun():
    """About 1.6e9 cd/m2 from the ground (common practice), and near 1e5 lx of direct light in clear air."""
    luminance = LUMINOUS_EFFICACY * (sun.sun_radiance(80.0, 100.0) * table_column("photopic.csv", "v")).sum()
    assert luminance == pytest.approx(1.6e9, rel=0.15)
    assert luminance * sun.solid_angle_sr() == pytest.approx(1.05e5, rel=0.15)


def test_aerosol_by_visibility():
    """23 km is an aerosol depth of 0.25 at 550 nm; rural models of the same visibility have 0.23-0.25 (from memory)."""
    assert atmosphere.aerosol_depth_550(23.0) == pytest.approx(0.245, abs=0.015)


def test_whole_sunlight_of_the_visible():
    """ASTM E490 and the G173 extraterrestrial column agree to 0.5 %: 657.0 W/m2 from 380 to 780 nm by the latter."""
    total = sun.irradiance_above_air(render_wavelengths_nm()).sum()
    assert total == pytest.approx(657.01, rel=0.005)
