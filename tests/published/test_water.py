"""Water: index by the IAPWS release's own check values and other laboratories, absorption by its tables."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.optics.dispersion import air_index
from renderer.optics.fresnel import beer_lambert, critical_angle_deg
from renderer.optics.materials import material_tables, nd_and_vd
from renderer.optics.water import iapws_index, water_absorption_per_m, water_index


# IAPWS R9-97, table of check values: T [K], density, vacuum wavelength [um], n
@pytest.mark.parametrize(
    ("temperature_k", "density", "um", "n"),
    [(298.15, 997.047435, 0.2265, 1.39277824), (773.15, 30.4758534, 0.5893, 1.00949307)],
)
def test_the_release_check_values(temperature_k, density, um, n):
    assert float(iapws_index(um * 1000, temperature_k, density)) == pytest.approx(n, abs=5e-9)


# M. Daimon and A. Masumura, Appl. Opt. 46, 3811 (2007): absolute Sellmeier terms (B, C um^2) by temperature
DAIMON = {
    20.0: (
        (0.5684027565, 0.005101829712),
        (0.1726177391, 0.01821153936),
        (0.02086189578, 0.02620722293),
        (0.1130748688, 10.69792721),
    ),
    24.0: (
        (0.566695982, 0.005084151894),
        (0.1731900098, 0.01818488474),
        (0.02095951857, 0.02625439472),
        (0.1125228406, 10.73842352),
    ),
}


@pytest.mark.parametrize("temperature_c", [20.0, 24.0])
def test_index_meets_another_laboratory(temperature_c):
    """Within 1.5e-5 from 420 nm up and 5e-5 at 380 nm, which is what the two published laws differ by."""
    nm = np.array([380.0, 420.0, 486.13, 589.3, 656.27, 700.0])
    air = air_index(nm)
    square = (nm * air / 1000.0) ** 2
    other = np.sqrt(1 + sum(b * square / (square - c) for b, c in DAIMON[temperature_c])) / air
    difference = np.abs(water_index(nm, temperature_c) - other)
    assert difference[0] < 5e-5
    assert np.max(difference[1:]) < 1.5e-5


def test_air_index_of_20_degrees():
    """n - 1 = 2.72e-4 at 587.6 nm, 101325 Pa: 1.000277 of dry air at 15 C (Ciddor 1996) times 288.15/293.15."""
    assert float(air_index(587.5618)) - 1.0 == pytest.approx(2.72e-4, abs=1e-6)


def test_fresh_and_sea_water_at_the_sodium_line():
    """Quan & Fry, Appl. Opt. 34, 3477 (1995), whole law at 20 C, relative to air: 1.33300 for fresh water."""
    n = (1.31405, 1.779e-4, -1.05e-6, 1.6e-8, -2.02e-6, 15.868, 0.01155, -0.00423, -4382.0, 1.1455e6)
    t, s, wavelength = 20, 35, 589.3
    whole = (
        n[0] + (n[1] + n[2] * t + n[3] * t * t) * s + n[4] * t * t
        + (n[5] + n[6] * s + n[7] * t) / wavelength + n[8] / wavelength**2 + n[9] / wavelength**3
    )  # fmt: skip
    assert float(water_index(589.3, 20.0, 35.0)) == pytest.approx(whole, abs=3e-5)
    assert float(water_index(589.3, 20.0)) == pytest.approx(1.33300, abs=2.5e-5)


def test_index_and_abbe_number_of_water():
    """Daimon & Masumura 2007 at 20 C: 1.333403 absolute and Vd 55.76 at the lines' wavelengths read as vacuum ones.

    Read at the vacuum wavelength, 0.16 nm longer, nd falls by 5e-6; relative to air, Vd grows by nearly 0.1.
    """
    nd, vd = nd_and_vd("water")
    assert nd == pytest.approx(1.333403 / 1.0002719 - 5e-6, abs=2e-6)
    assert vd == pytest.approx(55.76, abs=0.1)


def test_snells_window_half_angle():
    """48.6 degrees (common textbook value): arcsin(1 / 1.333)."""
    assert float(critical_angle_deg(water_index(589.3))) == pytest.approx(48.61, abs=0.01)


# Mason, Cone & Fry, Appl. Opt. 55, 7163 (2016), table 2: 380, 400, 420, 450 nm; Pope & Fry, Appl. Opt. 36, 8710 (1997),
# table 3: 550, 600, 650 nm, from which the harmonised table differs by up to 6 %
@pytest.mark.parametrize(
    ("nm", "per_m", "relative"),
    [
        (380, 0.00143, 0.005),
        (400, 0.00222, 0.005),
        (420, 0.00312, 0.005),
        (450, 0.00808, 0.005),
        (550, 0.0565, 0.06),
        (600, 0.2224, 0.06),
        (650, 0.340, 0.06),
    ],
)
def test_absorption_of_pure_water(nm, per_m, relative):
    assert float(water_absorption_per_m(nm)) == pytest.approx(per_m, rel=relative)


def test_warm_water_absorbs_more_in_the_far_red():
    """psi_T is +0.0106 per metre and kelvin near 740 nm (Pegau et al., Appl. Opt. 36, 6035 (1997), from memory)."""
    change = float(water_absorption_per_m(740.0, 30.0) - water_absorption_per_m(740.0, 20.0)) / 10.0
    assert change == pytest.approx(0.0106, abs=0.004)


@pytest.mark.parametrize(("nm", "share"), [(450, 0.8508), (550, 0.3231), (650, 0.00085)])
def test_transmission_of_twenty_metres(nm, share):
    """exp(-20 a) with the published a of 450 nm (Mason 2016), and within the sources' 6 % at 550 and 650 nm."""
    _, absorption = material_tables("water")
    got = float(beer_lambert(absorption[nm - 380], 20.0))
    assert -np.log(got) == pytest.approx(-np.log(share), rel=0.06)
