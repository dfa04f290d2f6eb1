"""Radiance of clear and overcast skies by direction and wavelength, absolute: maps of coefficients on basis spectra.

Where the light stands: luminance by ISO 15469:2004 (CIE S 011/E:2003). How much there is: Bird & Riordan 1986 for clear
skies, Krochmann & Seidl 1974 for overcast ones. Its colour in a clear sky: once-scattered sunlight of air and aerosol
with a term for the rest, scaled so that the spectrum on level ground is Bird & Riordan's and the luminance in every
direction ISO's; in air without aerosol, as it is. Below the horizon the map holds level ground of one grey
reflectance, lit by this sun and sky. Unpolarised. Rows and columns are those of `renderer.arrays.lights.Sky`.
"""

from __future__ import annotations

from functools import cache

import numpy as np
import numpy.typing as npt

from renderer.base.constants import LUMINOUS_EFFICACY
from renderer.base.errors import Fault, InputError
from renderer.base.exact_functions import DEGREE, arccosine, exponential, sine_cosine_deg
from renderer.optics.atmosphere import (
    ANGSTROM_EXPONENT,
    Air,
    aerosol_depth,
    air_over,
    gas_transmittance,
    ozone_air_mass,
    ozone_depth,
    rayleigh_depth,
    relative_air_mass,
)
from renderer.optics.skylight import (
    ASYMMETRY,
    GROUND_REFLECTANCE,
    aerosol_albedo,
    diffuse_irradiance,
    overcast_zenith_luminance,
    twilight_factor,
)
from renderer.optics.sun import beam_irradiance, irradiance_above_air
from renderer.optics.tables import between_lines, render_wavelengths_nm, table_column

Floats = npt.NDArray[np.float64]

N_ROWS, N_COLUMNS = 181, 360  # one a degree
NODES_NM = np.array([380.0, 430.0, 490.0, 560.0, 650.0, 780.0])  # between them a sky's tint is a straight line
AEROSOL_OF_ISO = 0.05  # optical depth at 550 nm from which ISO's patterns hold; the cleanest air over land, our choice
LOWEST_SUN_DEG = -12.0  # nautical twilight; below it no published luminance is carried

# ISO 15469:2004 table 1: a, b of the gradation and c, d, e of the indicatrix, types 1, 12 and 13 (from memory)
OVERCAST = (4.0, -0.7, 0.0, -1.0, 0.0)
CLEAR = (-1.0, -0.32, 10.0, -3.0, 0.45)
CLEAR_POLLUTED = (-1.0, -0.32, 16.0, -3.0, 0.30)


def checked_sun(elevation_deg: float, ground_reflectance: float) -> None:
    """InputError for a sun below nautical twilight or a ground that reflects more than all."""
    if not LOWEST_SUN_DEG <= elevation_deg <= 90.0:
        raise InputError(
            Fault(
                f"no sky is known for a sun at {elevation_deg:g} degrees",
                expected="a sun elevation of -12 to 90 degrees",
            )
        )
    if not 0.0 <= ground_reflectance <= 1.0:
        raise InputError(Fault("the ground's reflectance lies outside its range", expected="0 to 1"))


@cache
def rows_deg() -> Floats:
    """Elevation of each row [deg], (N_ROWS,), from 90 down to -90."""
    return 90.0 - 180.0 * np.arange(N_ROWS) / (N_ROWS - 1)


def luminance_of(spectra: Floats) -> Floats:
    """Luminance [cd/m2] of spectral radiances (..., 401), or illuminance [lx] of irradiances."""
    return LUMINOUS_EFFICACY * np.asarray((spectra * table_column("photopic.csv", "v")).sum(axis=-1))


def gradation(sine_elevation: Floats, a: float, b: float) -> Floats:
    """ISO 15469's phi(Z) = 1 + a exp(b / cos Z), and 1 at the horizon; for elevations of 0 to 90 degrees."""
    above = np.maximum(sine_elevation, 1e-3)
    return np.asarray(1.0 + a * exponential(b / above))


def indicatrix(chi_rad: Floats, cos_chi: Floats, c: float, d: float, e: float) -> Floats:
    """ISO 15469's f(chi) = 1 + c [exp(d chi) - exp(d pi / 2)] + e cos^2 chi."""
    return np.asarray(1.0 + c * (exponential(d * chi_rad) - exponential(d * np.pi / 2.0)) + e * cos_chi * cos_chi)


def level_irradiance_weights(sine: Floats, cosine: Floats) -> Floats:
    """What a row's mean radiance is multiplied by to be summed to the irradiance of level ground [sr]; 0 below it."""
    weights = np.where(sine >= 0.0, sine * cosine, 0.0)
    return np.asarray(2.0 * np.pi * weights * DEGREE)  # trapezoids: both end rows weigh nothing


def from_level_irradiance(maps: Floats, weights: Floats) -> Floats:
    """Sum over the upper half of each map (n_rows, n_columns, n): (n,)."""
    return np.asarray((maps.mean(axis=1) * weights[:, None]).sum(axis=0))


def hats(wavelength_nm: Floats) -> Floats:
    """Straight lines between NODES_NM that sum to 1: (n_nodes, n_wavelengths)."""
    return np.stack([between_lines(wavelength_nm, NODES_NM, row) for row in np.eye(len(NODES_NM))])


def haze_share(air: Air) -> float:
    """How far the sky is from ISO's clear type 12 to its polluted type 13, by the turbidity at 550 nm: 2.5 to 4.5.

    Turbidity is the air's depth over that of clean dry air (Linke). Where each type belongs is our choice.
    """
    clean = float(rayleigh_depth(550.0, air.pressure_hpa))
    turbidity = 1.0 + (air.aerosol_depth_550 + float(ozone_depth(550.0, air.ozone_atm_cm))) / clean
    return min(max((turbidity - 2.5) / 2.0, 0.0), 1.0)


def once_scattered(air: Air, sun_deg: float, cos_chi: Floats, masses: Floats, diffuse: Floats) -> Floats:
    """Radiance of a clear sky over the sunlight above the air, (n_rows, n_columns, n_nodes) [sr^-1]; no absorption.

    Sunlight that air and aerosol scatter once in plane-parallel layers, air after Rayleigh and aerosol after Henyey and
    Greenstein (Astrophys. J. 93, 70 (1941)), and what is scattered again, as of an even glow of `diffuse` irradiance
    over sunlight at the nodes (n_nodes,). `masses` (n_rows,): air mass along the view.
    """
    sun_mass = relative_air_mass(sun_deg)
    air_phase = 0.75 * (1.0 + cos_chi * cos_chi)
    square = 1.0 + ASYMMETRY * ASYMMETRY - 2.0 * ASYMMETRY * cos_chi
    aerosol_phase = (1.0 - ASYMMETRY * ASYMMETRY) / (square * np.sqrt(square))
    by_air = rayleigh_depth(NODES_NM, air.pressure_hpa)
    by_aerosol = aerosol_depth(NODES_NM, air.aerosol_depth_550, ANGSTROM_EXPONENT)
    albedo = aerosol_albedo(NODES_NM)
    tint = np.empty((*cos_chi.shape, len(NODES_NM)))
    for k in range(len(NODES_NM)):
        depth = by_air[k] + by_aerosol[k]
        apart = np.maximum(np.abs(masses - sun_mass) * depth, 1e-6)
        nearer = np.minimum(masses, sun_mass)
        lit = masses * depth * exponential(-depth * nearer) * (1.0 - exponential(-apart)) / apart
        phase = (by_air[k] * air_phase + albedo[k] * by_aerosol[k] * aerosol_phase) / (4.0 * np.pi * depth)
        again = (1.0 - exponential(-depth * masses)) * diffuse[k] / (2.0 * np.pi)
        tint[..., k] = phase * lit[:, None] + again[:, None]
    return tint


def balanced(tint: Floats, pattern: Floats, lumens: Floats, weights: Floats, steps: int = 8) -> Floats:
    """`tint` scaled by direction and by node until each node's level irradiance is 1 and the luminance is `pattern`.

    lumens (n_nodes,): illuminance of each node's basis spectrum. Alternate scaling (Deming and Stephan 1940), which
    converges because both sides have the same total; the luminance is met exactly.
    """
    for _ in range(steps):
        tint = tint / from_level_irradiance(tint, weights)
        tint = tint * (pattern / (tint * lumens).sum(axis=2))[:, :, None]
    return tint


def clear_sky(
    sun_elevation_deg: float,
    sun_azimuth_deg: float,
    visibility_km: float = 23.0,
    height_m: float = 0.0,
    ground_reflectance: float = GROUND_REFLECTANCE,
) -> tuple[Floats, Floats]:
    """A clear sky: coefficients (181, 360, 6) [sr^-1] and basis (6, 401) [W m^-2 nm^-1]; radiance is their product.

    Sun elevation apparent, -12 to 90 degrees, azimuth clockwise from north; visibility 1 to 330 km. InputError outside.
    Below the horizon the sun leaves its sunset's pattern, dimmed by Seidelmann 1992. Between 0 and 90 degrees the sun's
    own disc is not in here; see `sun.sun_radiance`.
    """
    checked_sun(sun_elevation_deg, ground_reflectance)
    air, sun_deg = air_over(visibility_km, height_m), max(sun_elevation_deg, 0.0)
    coefficients, basis = clear_sky_through(air, sun_deg, sun_azimuth_deg, ground_reflectance)
    return coefficients * twilight_factor(sun_elevation_deg), basis


def clear_sky_through(
    air: Air, sun_deg: float, sun_azimuth_deg: float, ground_reflectance: float
) -> tuple[Floats, Floats]:
    """`clear_sky` for any air and an apparent sun elevation of 0 to 90 degrees.

    ISO's patterns were measured in air with aerosol. With less of it than AEROSOL_OF_ISO the sky goes over into what
    scattering alone makes, which is the whole of it in pure air.
    """
    grid = render_wavelengths_nm()
    beam = beam_irradiance(grid, sun_deg, air)
    diffuse = diffuse_irradiance(grid, sun_deg, air, beam, ground_reflectance)
    basis = hats(grid) * diffuse
    sine, cosine = sine_cosine_deg(rows_deg())
    weights = level_irradiance_weights(sine, cosine)
    sun_sine, sun_cosine = sine_cosine_deg(sun_deg)
    turn = sine_cosine_deg(360.0 * np.arange(N_COLUMNS) / N_COLUMNS - sun_azimuth_deg)[1]
    cos_chi = np.clip(sine[:, None] * sun_sine + cosine[:, None] * sun_cosine * turn, -1.0, 1.0)
    lumens = luminance_of(basis)
    pattern = clear_pattern(air, sine, cos_chi)
    pattern = pattern * lumens.sum() / from_level_irradiance(pattern[:, :, None], weights)[0]
    masses = np.array([relative_air_mass(max(row, 0.0)) for row in rows_deg()])
    at_nodes = between_lines(NODES_NM, grid, diffuse / irradiance_above_air(grid))
    scattered = once_scattered(air, sun_deg, cos_chi, masses, at_nodes)
    coefficients = balanced(scattered, pattern, lumens, weights)
    level: Floats | float = 1.0
    share = min(air.aerosol_depth_550 / AEROSOL_OF_ISO, 1.0)
    if share < 1.0:
        physical = scattered * absorbed(air, sun_deg) / at_nodes
        level = share + (1.0 - share) * from_level_irradiance(physical, weights)
        coefficients = share * coefficients + (1.0 - share) * physical
    ground = ground_reflectance / np.pi * (level + between_lines(NODES_NM, grid, beam * sun_sine / diffuse))
    coefficients[sine < 0.0] = ground
    return coefficients, basis


def absorbed(air: Air, sun_deg: float) -> Floats:
    """What ozone and gases leave of sunlight on its way down, at the nodes (n_nodes,)."""
    ozone = exponential(-ozone_depth(NODES_NM, air.ozone_atm_cm) * ozone_air_mass(sun_deg))
    return np.asarray(ozone * gas_transmittance(NODES_NM, air, relative_air_mass(sun_deg)))


def clear_pattern(air: Air, sine: Floats, cos_chi: Floats) -> Floats:
    """ISO's luminance of a clear sky, any scale, from sines of elevation (n_rows,) and cosines to the sun (2-d)."""
    share = haze_share(air)
    a, b, c, d, e = (first + share * (second - first) for first, second in zip(CLEAR, CLEAR_POLLUTED, strict=True))
    return np.asarray(gradation(sine, a, b)[:, None] * indicatrix(arccosine(cos_chi), cos_chi, c, d, e))


def daylight_basis(temperature_k: float = 6504.0) -> Floats:
    """Daylight of a correlated colour temperature, 4000 to 7000 K, as the radiance (401,) of a luminance of 1 cd/m2.

    CIE 015:2018, section 4.1.2, from the daylight components S0, S1, S2.
    """
    t = temperature_k
    x = -4.6070e9 / (t * t * t) + 2.9678e6 / (t * t) + 0.09911e3 / t + 0.244063
    y = -3.0 * x * x + 2.870 * x - 0.275
    under = 0.0241 + 0.2562 * x - 0.7341 * y
    m1, m2 = (-1.3515 - 1.7703 * x + 5.9114 * y) / under, (0.0300 - 31.4424 * x + 30.0717 * y) / under
    s0, s1, s2 = (table_column("daylight.csv", name) for name in ("s0", "s1", "s2"))
    at = table_column("daylight.csv", "wavelength_nm")
    spectrum = between_lines(render_wavelengths_nm(), at, s0 + m1 * s1 + m2 * s2)
    return np.asarray(spectrum / luminance_of(spectrum))


def overcast_sky(sun_elevation_deg: float, ground_reflectance: float = GROUND_REFLECTANCE) -> tuple[Floats, Floats]:
    """An overcast sky, the same all round: coefficients (181, 1, 1) [cd/m2] and basis (1, 401) [W m^-2 sr^-1 nm^-1].

    ISO 15469 type 1 with the zenith luminance of Krochmann & Seidl 1974, the spectrum of daylight at 6504 K (common
    practice for overcast skies). Sun elevation -12 to 90 degrees. The sun's disc cannot be seen through such a sky.
    """
    checked_sun(sun_elevation_deg, ground_reflectance)
    sine, cosine = sine_cosine_deg(rows_deg())
    shape = gradation(sine, OVERCAST[0], OVERCAST[1])
    luminance = overcast_zenith_luminance(sun_elevation_deg) * shape / shape[0]
    level = float((luminance * level_irradiance_weights(sine, cosine)).sum())
    luminance = np.where(sine >= 0.0, luminance, ground_reflectance * level / np.pi)
    return np.ascontiguousarray(luminance[:, None, None]), daylight_basis()[None, :]
