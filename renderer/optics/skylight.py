"""How much light the sky sends down, by wavelength, for a clear sky, and in all for an overcast or a twilight one."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from renderer.base.exact_functions import exponential, logarithm, power, sine_cosine_deg
from renderer.optics.atmosphere import (
    SINGLE_SCATTERING_ALBEDO,
    Air,
    aerosol_depth,
    gas_transmittance,
    ozone_air_mass,
    ozone_depth,
    rayleigh_depth,
    relative_air_mass,
)
from renderer.optics.sun import irradiance_above_air

Floats = npt.NDArray[np.float64]

ASYMMETRY = 0.65  # mean cosine of aerosol scattering, Bird & Riordan 1986 (rural)
MEAN_PATH = 1.8  # air mass of diffuse light, Bird & Riordan 1986
GROUND_REFLECTANCE = 0.2  # mean of open country (common practice)

# log10 of illuminance [lx] on level ground by sun and clear sky is a cubic in elevation / 90: P. K. Seidelmann (ed.),
# Explanatory Supplement to the Astronomical Almanac, 1992, section 9.34 (from memory); (from, to, coefficients)
TWILIGHT = (
    (-0.8, 5.0, (2.88, 22.26, -207.64, 1034.30)),
    (-5.0, -0.8, (2.88, 21.81, -258.11, -858.36)),
    (-12.0, -5.0, (2.70, 12.17, -431.69, -1899.83)),
)


def aerosol_albedo(wavelength_nm: npt.ArrayLike) -> Floats:
    """Single-scattering albedo of aerosol; Bird & Riordan 1986: 0.945 exp(-0.095 ln^2(L / 0.4 um))."""
    log = logarithm(np.asarray(wavelength_nm, dtype=np.float64) / 400.0)
    return SINGLE_SCATTERING_ALBEDO * exponential(-0.095 * log * log)


def forward_share(sine_elevation: float) -> float:
    """Share of aerosol scattering that goes down; Bird & Riordan 1986."""
    log = float(logarithm(1.0 - ASYMMETRY))
    a = log * (1.459 + log * (0.1595 + log * 0.4129))
    b = log * (0.0783 + log * (-0.3824 - log * 0.5874))
    return float(1.0 - 0.5 * exponential((a + b * sine_elevation) * sine_elevation))


def air_albedo(wavelength_nm: Floats, air: Air) -> Floats:
    """Share of light from below that the air sends back down; Bird & Riordan 1986."""
    rayleigh = exponential(-rayleigh_depth(wavelength_nm, air.pressure_hpa) * MEAN_PATH)
    depth = aerosol_depth(wavelength_nm, air.aerosol_depth_550, air.angstrom_exponent) * MEAN_PATH
    albedo = aerosol_albedo(wavelength_nm)
    kept, scattered = exponential(-(1.0 - albedo) * depth), 1.0 - exponential(-albedo * depth)
    ozone = exponential(-ozone_depth(wavelength_nm, air.ozone_atm_cm) * MEAN_PATH)
    back = 0.5 * (1.0 - rayleigh) + (1.0 - forward_share(1.0 / MEAN_PATH)) * rayleigh * scattered
    return np.asarray(ozone * gas_transmittance(wavelength_nm, air, MEAN_PATH) * kept * back)


def diffuse_irradiance(
    wavelength_nm: npt.ArrayLike,
    elevation_deg: float,
    air: Air,
    beam: Floats,
    ground_reflectance: float = GROUND_REFLECTANCE,
) -> Floats:
    """Light of a clear sky on level ground [W m^-2 nm^-1], for a sun at an apparent elevation of 0 to 90 degrees.

    R. Bird and C. Riordan, J. Clim. Appl. Meteorol. 25, 87 (1986), with one departure: the cosine of the zenith angle
    that spreads sunlight over the layers of air is 1 / air mass, which is the same above 15 degrees and stays right
    down to the horizon. `beam` is the direct sunlight on a plane that faces the sun.
    """
    wavelength = np.asarray(wavelength_nm, dtype=np.float64)
    mass = relative_air_mass(elevation_deg)
    falling = min(1.0, 1.0 / mass)
    rayleigh = exponential(-rayleigh_depth(wavelength, air.pressure_hpa) * mass)
    depth = aerosol_depth(wavelength, air.aerosol_depth_550, air.angstrom_exponent) * mass
    albedo = aerosol_albedo(wavelength)
    kept, scattered = exponential(-(1.0 - albedo) * depth), 1.0 - exponential(-albedo * depth)
    ozone = exponential(-ozone_depth(wavelength, air.ozone_atm_cm) * ozone_air_mass(elevation_deg))
    lit = irradiance_above_air(wavelength) * falling * ozone * gas_transmittance(wavelength, air, mass) * kept
    by_air = lit * 0.5 * (1.0 - power(rayleigh, 0.95))
    by_aerosol = lit * power(rayleigh, 1.5) * scattered * forward_share(falling)
    bounced = ground_reflectance * air_albedo(wavelength, air)
    from_ground = (beam * falling + by_air + by_aerosol) * bounced / (1.0 - bounced)
    violet = power(np.minimum(wavelength, 450.0) / 1000.0 + 0.55, 1.8)  # their mending of too much light below 450 nm
    return np.asarray((by_air + by_aerosol + from_ground) * violet)


def twilight_factor(elevation_deg: float) -> float:
    """Illuminance over that of a sun on the horizon, for elevations of -12 to 0 degrees (1 above)."""
    if elevation_deg >= 0.0:
        return 1.0
    x = elevation_deg / 90.0
    for low, high, terms in TWILIGHT:
        if low <= elevation_deg <= high:
            log10 = terms[0] + x * (terms[1] + x * (terms[2] + x * terms[3])) - TWILIGHT[0][2][0]
            return float(exponential(2.302585092994046 * log10))
    raise ValueError("below the range of twilight")


def overcast_zenith_luminance(elevation_deg: float) -> float:
    """Zenith luminance of an overcast sky [cd/m2]: 123 + 8600 sin(elevation), dimmed in twilight.

    J. Krochmann and M. Seidl, "Quantitative data on daylight for illuminating engineering", Lighting Res. Technol. 6,
    165 (1974) (from memory).
    """
    sine, _ = sine_cosine_deg(max(elevation_deg, 0.0))
    return float(123.0 + 8600.0 * sine) * twilight_factor(elevation_deg)
