"""The sun's disc as it is seen from the ground: size, radiance by wavelength, darkening towards its edge."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from renderer.base.errors import Fault, InputError
from renderer.base.exact_functions import sine_cosine_deg
from renderer.optics.atmosphere import Air, air_over, beam_transmittance
from renderer.optics.tables import between_lines, render_wavelengths_nm, table_column

Floats = npt.NDArray[np.float64]

ANGULAR_RADIUS_DEG = 0.266453  # at 1 au: IAU 2015 Resolution B3 nominal radius 695700 km, IAU 2012 au
# I(mu)/I(1) = 1 - u1 (1 - mu) - u2 (1 - mu)^2 at 550 nm: 0.30 + 0.93 mu - 0.23 mu^2 in A. N. Cox (ed.), Allen's
# Astrophysical Quantities, 4th ed. 2000, section 14.7 (from memory), which is u1 = 0.47 and u2 = 0.23
LIMB_DARKENING = (0.47, 0.23)


def solid_angle_sr(angular_radius_deg: float = ANGULAR_RADIUS_DEG) -> float:
    """Solid angle of a disc: 4 pi sin^2(radius / 2); 6.794e-5 sr for the sun at 1 au."""
    half, _ = sine_cosine_deg(0.5 * angular_radius_deg)
    return float(4.0 * math.pi * half * half)


def limb_brightness(mu: npt.ArrayLike) -> Floats:
    """Radiance over that of the disc's middle, at mu = sqrt(1 - (distance from the middle / radius)^2)."""
    from_edge = 1.0 - np.asarray(mu, dtype=np.float64)
    u1, u2 = LIMB_DARKENING
    return np.asarray(1.0 - u1 * from_edge - u2 * from_edge * from_edge)


def limb_mean() -> float:
    """Mean of `limb_brightness` over the disc: 1 - u1 / 3 - u2 / 6."""
    u1, u2 = LIMB_DARKENING
    return 1.0 - u1 / 3.0 - u2 / 6.0


def irradiance_above_air(wavelength_nm: npt.ArrayLike) -> Floats:
    """Sunlight above the air at 1 au [W m^-2 nm^-1], 371 to 789 nm; ASTM E490-00a (2000)."""
    at = table_column("sun_e490.csv", "wavelength_nm")
    return between_lines(wavelength_nm, at, table_column("sun_e490.csv", "irradiance_w_m2_nm"))


def beam_irradiance(wavelength_nm: npt.ArrayLike, elevation_deg: float, air: Air) -> Floats:
    """Direct sunlight on a plane that faces the sun [W m^-2 nm^-1], for an apparent elevation of 0 to 90 degrees."""
    return np.asarray(irradiance_above_air(wavelength_nm) * beam_transmittance(wavelength_nm, air, elevation_deg))


def sun_radiance(elevation_deg: float, visibility_km: float = 23.0, height_m: float = 0.0) -> Floats:
    """Mean radiance of the sun's disc at the ground, (401,) [W m^-2 sr^-1 nm^-1], 380 to 780 nm.

    elevation_deg: apparent, of the disc's middle, -90 to 90; with the whole disc under the horizon it is 0, and while
    some of it is up, its light is that of the horizon's air mass. visibility_km: meteorological, 1 to 330. The sun is
    at 1 au. InputError outside. ASTM E490 through air after Bodhaine 1999, JPL 2006, McClatchey & Selby 1972 and Bird &
    Riordan 1986 (see `atmosphere`).
    """
    if not -90.0 <= elevation_deg <= 90.0:
        raise InputError(
            Fault(f"a sun elevation of {elevation_deg:g} is outside its range", expected="-90 to 90 degrees")
        )
    grid = render_wavelengths_nm()
    air = air_over(visibility_km, height_m)
    if elevation_deg < -ANGULAR_RADIUS_DEG:
        return np.zeros_like(grid)
    return np.asarray(beam_irradiance(grid, elevation_deg, air) / solid_angle_sr())
