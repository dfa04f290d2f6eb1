"""What clear air does to sunlight: optical depths by wavelength, air mass, refraction of the sun's place.

Every depth is for one vertical crossing; a slanted one multiplies it by the air mass.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from renderer.base.errors import Fault, InputError
from renderer.base.exact_functions import exponential, power, sine_cosine_deg
from renderer.optics.tables import between_lines, table_column

Floats = npt.NDArray[np.float64]

STANDARD_PRESSURE_HPA = 1013.25  # ISO 2533:1975
OZONE_ATM_CM = 0.30  # mean column, 300 DU (from memory); ASTM G173 has 0.344
WATER_CM = 1.42  # precipitable water of ASTM G173, a mean mid-latitude column
ANGSTROM_EXPONENT = 1.3  # A. Angstrom 1929; M. Iqbal, An Introduction to Solar Radiation, 1983, his typical value
SINGLE_SCATTERING_ALBEDO = 0.945  # of aerosol at 400 nm: R. Bird and C. Riordan, J. Clim. Appl. Meteorol. 25, 87 (1986)
LOWEST_VISIBILITY_KM, HIGHEST_VISIBILITY_KM = 1.0, 330.0  # fog below; above, air without aerosol


@dataclass(frozen=True)
class Air:
    """The air over a place. `aerosol_depth_550` is the vertical optical depth of aerosol at 550 nm."""

    aerosol_depth_550: float
    pressure_hpa: float = STANDARD_PRESSURE_HPA
    ozone_atm_cm: float = OZONE_ATM_CM
    water_cm: float = WATER_CM
    angstrom_exponent: float = ANGSTROM_EXPONENT


def pressure_hpa(height_m: float) -> float:
    """Standard pressure at a height, -500 to 11000 m (ISO 2533:1975); InputError outside."""
    if not -500.0 <= height_m <= 11000.0:
        raise InputError(Fault(f"a height of {height_m:g} m is outside its range", expected="-500 to 11000 m"))
    return float(STANDARD_PRESSURE_HPA * power(1.0 - 2.25577e-5 * height_m, 5.25588))


def aerosol_depth_550(visibility_km: float) -> float:
    """Vertical aerosol depth at 550 nm for a meteorological visibility [km], 1 to 330 km; InputError outside.

    McClatchey and Selby 1972 as in Iqbal 1983, eq. 6.6.3 (from memory): beta = 0.55^1.3 (3.912/V - 0.01162)
    [0.02472 (V - 5) + 1.132] in tau = beta L^-1.3. Published for V > 5 km; below, the same line goes on.
    """
    if not LOWEST_VISIBILITY_KM <= visibility_km <= HIGHEST_VISIBILITY_KM:
        raise InputError(
            Fault(f"a visibility of {visibility_km:g} km is outside the range of clear air", expected="1 to 330 km")
        )
    layer = 0.02472 * (visibility_km - 5.0) + 1.132
    return max(0.0, (3.912 / visibility_km - 0.01162) * layer)


def air_over(visibility_km: float, height_m: float = 0.0) -> Air:
    """The air over a place at `height_m` where objects can be seen as far as `visibility_km`."""
    return Air(aerosol_depth_550=aerosol_depth_550(visibility_km), pressure_hpa=pressure_hpa(height_m))


def rayleigh_depth(wavelength_nm: npt.ArrayLike, pressure: float = STANDARD_PRESSURE_HPA) -> Floats:
    """Depth of dry air's own scattering, 250 to 1000 nm; B. A. Bodhaine et al., J. Atmos. Oceanic Technol. 16, 1854
    (1999), eq. 30, for 1013.25 hPa, 45 degrees of latitude and 360 ppm CO2, scaled by pressure [hPa]."""
    square = np.asarray(wavelength_nm, dtype=np.float64) / 1000.0
    square = square * square
    over = 1.0455996 - 341.29061 / square - 0.90230850 * square
    under = 1.0 + 0.0027059889 / square - 85.968563 * square
    return np.asarray(0.0021520 * over / under * (pressure / STANDARD_PRESSURE_HPA))


def ozone_depth(wavelength_nm: npt.ArrayLike, column_atm_cm: float = OZONE_ATM_CM) -> Floats:
    """Depth of ozone, 370 to 800 nm; cross sections of JPL Publication 06-2 (2006)."""
    at = table_column("ozone.csv", "wavelength_nm")
    return column_atm_cm * between_lines(wavelength_nm, at, table_column("ozone.csv", "k_per_atm_cm"))


def aerosol_depth(wavelength_nm: npt.ArrayLike, depth_550: float, exponent: float = ANGSTROM_EXPONENT) -> Floats:
    """Depth of aerosol by Angstrom's law: depth at 550 nm times (wavelength / 550 nm)^-exponent."""
    return depth_550 * power(np.asarray(wavelength_nm, dtype=np.float64) / 550.0, -exponent)


def gas_transmittance(wavelength_nm: npt.ArrayLike, air: Air, air_mass: float) -> Floats:
    """Transmittance of water vapour and mixed gases (oxygen), whose unresolved lines do not follow Beer's law.

    R. Bird and C. Riordan, J. Clim. Appl. Meteorol. 25, 87 (1986), between its 37 bands by straight lines; oxygen's A
    band, 757 to 780 nm, from its lines (`tools/oxygen_band.py`).
    """
    at = table_column("gas_bands.csv", "wavelength_nm")
    water = between_lines(wavelength_nm, at, table_column("gas_bands.csv", "water")) * air.water_cm * air_mass
    mixed = between_lines(wavelength_nm, at, table_column("gas_bands.csv", "mixed"))
    band_nm = table_column("oxygen_a_band.csv", "wavelength_nm")
    band = between_lines(wavelength_nm, band_nm, table_column("oxygen_a_band.csv", "mixed"))
    within = (np.asarray(wavelength_nm) >= band_nm[0]) & (np.asarray(wavelength_nm) <= band_nm[-1])
    mixed = np.where(within, band, mixed)
    mixed = mixed * air_mass * (air.pressure_hpa / STANDARD_PRESSURE_HPA)
    vapour = exponential(-0.2385 * water / power(1.0 + 20.07 * water, 0.45))
    return np.asarray(vapour * exponential(-1.41 * mixed / power(1.0 + 118.93 * mixed, 0.45)))


def beam_transmittance(wavelength_nm: npt.ArrayLike, air: Air, elevation_deg: float) -> Floats:
    """Share of the sun's beam that comes straight through the air, for an apparent elevation of 0 to 90 degrees."""
    air_mass = relative_air_mass(elevation_deg)
    scattering = rayleigh_depth(wavelength_nm, air.pressure_hpa) + aerosol_depth(
        wavelength_nm, air.aerosol_depth_550, air.angstrom_exponent
    )
    depth = scattering * air_mass + ozone_depth(wavelength_nm, air.ozone_atm_cm) * ozone_air_mass(elevation_deg)
    return np.asarray(exponential(-depth) * gas_transmittance(wavelength_nm, air, air_mass))


def relative_air_mass(elevation_deg: float) -> float:
    """Air mass for an apparent elevation; below the horizon that of the horizon.

    F. Kasten and A. T. Young, Appl. Opt. 28, 4735 (1989).
    """
    height = min(max(elevation_deg, 0.0), 90.0)
    sine, _ = sine_cosine_deg(height)
    return float(1.0 / (sine + 0.50572 * power(height + 6.07995, -1.6364)))


def ozone_air_mass(elevation_deg: float) -> float:
    """The same for the ozone layer at 22 km, whose slant is less; N. Robinson 1966 as in Bird & Riordan 1986."""
    sine, _ = sine_cosine_deg(min(max(elevation_deg, 0.0), 90.0))
    return float((1.0 + 22.0 / 6370.0) / np.sqrt(sine * sine + 2.0 * 22.0 / 6370.0))


def refraction_deg(apparent_elevation_deg: npt.ArrayLike) -> Floats:
    """How much the air lifts what is seen at an apparent elevation, -1 to 90 degrees, at 1010 hPa and 10 C.

    G. G. Bennett, J. Navigation 35, 255 (1982) (from memory): cot(h + 7.31 / (h + 4.4)) minutes of arc; good to 0.07'.
    """
    h = np.asarray(apparent_elevation_deg, dtype=np.float64)
    return np.asarray(np.maximum(0.0, 1.0 / np.tan(np.radians(h + 7.31 / (h + 4.4)))) / 60.0)


def apparent_elevation_deg(true_elevation_deg: npt.ArrayLike) -> Floats:
    """Where a body stands in the sky whose true elevation is -1 to 90 degrees, at 1010 hPa and 10 C.

    T. Saemundsson, Sky and Telescope 72, 70 (1986) (from memory): R = 1.02 cot(h + 10.3 / (h + 5.11)) minutes of arc.
    """
    h = np.asarray(true_elevation_deg, dtype=np.float64)
    lift = 1.02 / np.tan(np.radians(h + 10.3 / (h + 5.11))) / 60.0
    return np.asarray(h + np.maximum(0.0, lift))
