"""Liquid water, fresh and salt: index relative to air, absorption, density."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from renderer.base.errors import Fault, InputError
from renderer.optics.dispersion import relative_to_air
from renderer.optics.tables import between_lines, table_column

Floats = npt.NDArray[np.float64]

HIGHEST_SALINITY = 42.0  # per mille; Quan & Fry fitted 0 to 35, and their law is a straight line in salinity

# IAPWS R9-97, table of coefficients; A. H. Harvey et al., J. Phys. Chem. Ref. Data 27, 761 (1998)
A = (
    0.244257733,
    9.74634476e-3,
    -3.73234996e-3,
    2.68678472e-4,
    1.58920570e-3,
    2.45934259e-3,
    0.900704920,
    -1.66626219e-2,
)
RESONANCE_UV, RESONANCE_IR = 0.2292020, 5.432937


def water_density_kg_m3(temperature_c: float) -> float:
    """Density of pure water at 101325 Pa, 0 to 60 C (computed with IAPWS-95); InputError outside."""
    check_temperature(temperature_c, 0.0)
    at = table_column("water_density.csv", "temperature_c")
    return float(between_lines(temperature_c, at, table_column("water_density.csv", "density_kg_m3")))


def check_temperature(temperature_c: float, salinity: float) -> None:
    """InputError unless water of this salinity has published data at this temperature."""
    if not 0.0 <= salinity <= HIGHEST_SALINITY:
        raise InputError(Fault(f"a salinity of {salinity:g} is outside its range", expected="0 to 42 per mille"))
    highest = 60.0 if salinity == 0.0 else 30.0
    if not 0.0 <= temperature_c <= highest:
        kind = "sea water" if salinity else "water"
        raise InputError(
            Fault(f"{kind} has no published index at {temperature_c:g} C", expected=f"0 to {highest:g} degrees C")
        )


def iapws_index(wavelength_nm: npt.ArrayLike, temperature_k: float, density_kg_m3: float) -> Floats:
    """Absolute index by IAPWS R9-97 at vacuum wavelengths, 200 to 1100 nm; -12 to 500 C, 0 to 1060 kg/m3."""
    r, t = density_kg_m3 / 1000.0, temperature_k / 273.15
    w = np.asarray(wavelength_nm, dtype=np.float64) / 589.0
    w2 = w * w
    uv, ir = RESONANCE_UV * RESONANCE_UV, RESONANCE_IR * RESONANCE_IR
    lorentz = (
        A[0] + A[1] * r + A[2] * t + A[3] * w2 * t + A[4] / w2 + A[5] / (w2 - uv) + A[6] / (w2 - ir) + A[7] * r * r
    )
    x = lorentz * r
    return np.sqrt((2.0 * x + 1.0) / (1.0 - x))


def salt_increment(wavelength_nm: npt.ArrayLike, temperature_c: float, salinity: float) -> Floats:
    """What salt adds to the index relative to air; X. Quan and E. S. Fry, Appl. Opt. 34, 3477 (1995), its terms in S.

    Fitted for 400 to 700 nm, 0 to 30 C, 0 to 35 per mille; used to 380 and 780 nm and to 42 per mille (it is a smooth
    1 / wavelength and a straight line in salinity).
    """
    t, wavelength = temperature_c, np.asarray(wavelength_nm, dtype=np.float64)
    return np.asarray(salinity * ((1.779e-4 - 1.05e-6 * t + 1.6e-8 * t * t) + 0.01155 / wavelength))


def water_index(wavelength_nm: npt.ArrayLike, temperature_c: float = 20.0, salinity: float = 0.0) -> Floats:
    """Index of water relative to air at wavelengths in air: IAPWS R9-97, and for salt water Quan & Fry's increment.

    Quan & Fry's law is not used whole, because it is relative to air while IAPWS is absolute, and its pure-water part
    is the weaker. 0 to 60 C fresh, 0 to 30 C salt; InputError outside.
    """
    check_temperature(temperature_c, salinity)
    density = water_density_kg_m3(temperature_c)
    fresh = relative_to_air(lambda nm: iapws_index(nm, temperature_c + 273.15, density), wavelength_nm)
    return fresh if salinity == 0.0 else np.asarray(fresh + salt_increment(wavelength_nm, temperature_c, salinity))


def water_absorption_per_m(wavelength_nm: npt.ArrayLike, temperature_c: float = 20.0, salinity: float = 0.0) -> Floats:
    """Absorption of pure or pure salt water, base e, 370 to 790 nm: a + (T - 20) psi_T + S psi_S, never below 0.

    Water Optical Properties Processor v3 (2016); up to 510 nm Mason, Cone & Fry, Appl. Opt. 55, 7163 (2016). Natural
    waters hold other things too: state an absorption of your own for those.
    """
    check_temperature(temperature_c, salinity)
    at = table_column("water_absorption.csv", "wavelength_nm")
    value, per_psu, per_c = (
        between_lines(wavelength_nm, at, table_column("water_absorption.csv", column))
        for column in ("a_per_m", "per_psu", "per_c")
    )
    return np.maximum(0.0, value + (temperature_c - 20.0) * per_c + salinity * per_psu)
