"""Spectra of named white lights: daylight of any temperature, D65, black bodies, A and E. Relative unless stated."""

from __future__ import annotations

from functools import cache

import numpy as np

from renderer.base.errors import Fault, InputError
from renderer.base.exact_functions import exponential
from renderer.colour.tables import Floats, frozen, resampled, shipped_table, wavelengths_nm

PLANCK_J_S = 6.62607015e-34  # exact, SI 2019
LIGHT_SPEED_M_PER_S = 299792458.0  # exact, SI
BOLTZMANN_J_PER_K = 1.380649e-23  # exact, SI 2019
SECOND_RADIATION_M_K = PLANCK_J_S * LIGHT_SPEED_M_PER_S / BOLTZMANN_J_PER_K  # c2 = 0.014387769 m K

D65_K = 6500.0 * 1.4388 / 1.4380  # the scale of temperature moved after 6500 K was named: CIE 015:2018, 4.1.2
ACES_WHITE_K = 6000.0 * 1.4388 / 1.4380  # AMPAS TB-2018-001: the ACES white is daylight of nominally 6000 K
DAYLIGHT_LOW_K, DAYLIGHT_HIGH_K = 4000.0, 25000.0  # range of the daylight formula, CIE 015:2018
PLANCK_LOW_K, PLANCK_HIGH_K = 500.0, 100000.0  # below, no visible light to speak of; above, no change of colour


@cache
def d65() -> Floats:
    """CIE standard illuminant D65, (401,), 100 at 560 nm. ISO/CIE 11664-2:2022."""
    return frozen(resampled(shipped_table("cie_d65_5nm.csv"))[:, 0])


@cache
def illuminant_a() -> Floats:
    """CIE standard illuminant A, (401,), 100 at 560 nm. ISO/CIE 11664-2:2022: Planck, 2848 K, c2 = 0.01435 m K."""
    nm = wavelengths_nm()
    at_560_nm = exponential(1.435e7 / (2848.0 * 560.0)) - 1.0
    return frozen(100.0 * fifth_power(560.0 / nm) * at_560_nm / (exponential(1.435e7 / (2848.0 * nm)) - 1.0))


@cache
def illuminant_e() -> Floats:
    """Equal-energy illuminant E, (401,), 100 everywhere."""
    return frozen(np.full(wavelengths_nm().shape, 100.0))


def daylight_xy(temperature_k: float) -> tuple[float, float]:
    """Chromaticity of CIE daylight of so many kelvin (correlated), 4000-25,000. CIE 015:2018, equations 4.6-4.8."""
    require_range("daylight", temperature_k, DAYLIGHT_LOW_K, DAYLIGHT_HIGH_K)
    t = 1000.0 / temperature_k
    if temperature_k <= 7000.0:
        x = ((-4.6070 * t + 2.9678) * t + 0.09911) * t + 0.244063
    else:
        x = ((-2.0064 * t + 1.9018) * t + 0.24748) * t + 0.237040
    return x, (-3.000 * x + 2.870) * x - 0.275


def daylight(temperature_k: float) -> Floats:
    """CIE daylight spectrum, (401,), 100 at 560 nm, from S0, S1 and S2. CIE 015:2018, equations 4.9-4.11.

    The factors are rounded to three decimals as CIE asks, so that `D65_K` gives D65's own table. InputError outside
    4000-25,000 K.
    """
    x, y = daylight_xy(temperature_k)
    below = 0.0241 + 0.2562 * x - 0.7341 * y
    m1 = round((-1.3515 - 1.7703 * x + 5.9114 * y) / below, 3)
    m2 = round((0.0300 - 31.4424 * x + 30.0717 * y) / below, 3)
    s = resampled(shipped_table("cie_daylight_5nm.csv"))
    return s[:, 0] + m1 * s[:, 1] + m2 * s[:, 2]


def blackbody(temperature_k: float) -> Floats:
    """Spectral radiance of a black body, (401,) [W m^-2 sr^-1 nm^-1], by Planck's law in a vacuum; 500 to 100,000 K."""
    require_range("a black body", temperature_k, PLANCK_LOW_K, PLANCK_HIGH_K)
    first = 2.0 * PLANCK_J_S * LIGHT_SPEED_M_PER_S**2 * 1e-9  # the last factor: a metre of wavelength to a nanometre
    metres = wavelengths_nm() * 1e-9
    return np.asarray(
        first / (fifth_power(metres) * (exponential(SECOND_RADIATION_M_K / (metres * temperature_k)) - 1.0))
    )


def fifth_power(x: Floats) -> Floats:
    """x^5 by multiplication."""
    return x * x * x * x * x


def white_light(temperature_k: float) -> Floats:
    """The light that a white balance of so many kelvin makes white, (401,): daylight from 4000 K, a black body below.

    6504 K, which is how people write D65's temperature of 6503.6 K, is D65 itself.
    """
    if abs(temperature_k - D65_K) < 0.5:
        return d65()
    if temperature_k >= DAYLIGHT_LOW_K:
        return daylight(temperature_k)
    return blackbody(temperature_k)


def require_range(what: str, temperature_k: float, low_k: float, high_k: float) -> None:
    """InputError unless low <= temperature <= high."""
    if not low_k <= temperature_k <= high_k:
        raise InputError(
            Fault(f"{what} cannot be {temperature_k:g} kelvin", expected=f"kelvin, {low_k:g} to {high_k:g}")
        )
