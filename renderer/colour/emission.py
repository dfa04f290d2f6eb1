"""Spectra of lights: from an RGB colour, a temperature, a table, or spectral lines, scaled to an exact luminance.

A light is no reflectance: nothing bounds it from above, so every colour that a light can have is met exactly.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import cache

import numpy as np

from renderer.base.constants import LUMINOUS_EFFICACY, WAVELENGTH_HIGH_NM, WAVELENGTH_LOW_NM
from renderer.base.errors import Fault, InputError
from renderer.colour.illuminants import blackbody
from renderer.colour.observer import luminance as luminance_of
from renderer.colour.observer import observer_at, spectrum_to_xyz
from renderer.colour.sigmoid_cells import cells_of
from renderer.colour.sigmoid_fit import fitted
from renderer.colour.spaces import applied, reference_light, reflected_matrix, solved
from renderer.colour.tables import Floats, frozen, shipped_table, wavelengths_nm
from renderer.colour.upsampling import START_MARGIN, coefficients_to_reflectance, flat

Pairs = Sequence[tuple[float, float]]
EXACT_UV = 1e-9  # difference in u', v' that is only rounding
LEVELS = 8  # how often a colour of light is halved in the search for a reflectance that has its chromaticity


def light_spectrum(
    luminance: float,
    *,
    colour: Sequence[float] | None = None,
    temperature_k: float | None = None,
    spectrum: Pairs | None = None,
) -> Floats:
    """Spectral radiance (401,) [W m^-2 sr^-1 nm^-1] of a light of that luminance [cd/m2]; exactly one keyword is given.

    colour: linear Rec.709, scaled to the luminance; temperature_k: a black body's; spectrum: (nm, relative radiance)
    pairs in rising order, linear between and nothing beyond them. InputError where there is no light to scale.
    """
    if colour is not None:
        shape = spectrum_of_colour(colour)
    elif temperature_k is not None:
        shape = blackbody(temperature_k)
    elif spectrum is not None:
        shape = spectrum_of_table(spectrum)
    else:
        raise ValueError("one of colour, temperature_k and spectrum is needed")
    return np.asarray(shape * (luminance / float(luminance_of(shape))))


def light_radiance(
    luminance: float,
    *,
    colour: Sequence[float] | None = None,
    temperature_k: float | None = None,
    spectrum: Pairs | None = None,
    lines: Pairs = (),
) -> tuple[Floats, Floats]:
    """A light with lines: spectral radiance (401,) and the radiance in each line (n_lines,) [W m^-2 sr^-1].

    `lines`: (nm, share of the luminance). Lines alone share all of the luminance, whatever their shares add up to;
    beside a colour, temperature or spectrum they take their shares of it and the other has the rest.
    """
    if colour is None and temperature_k is None and spectrum is None:
        total = sum(share for _, share in lines)
        if not total > 0.0:
            raise InputError("a light has neither a colour, nor a temperature, nor a spectrum, nor lines")
        return np.zeros(wavelengths_nm().shape), line_radiance([(nm, share / total) for nm, share in lines], luminance)
    rest = 1.0 - sum(share for _, share in lines)
    if rest < 0.0:
        raise InputError(
            Fault("the lines of a light have more than all of its luminance", expected="shares that add up to 0..1")
        )
    smooth = light_spectrum(luminance, colour=colour, temperature_k=temperature_k, spectrum=spectrum)
    return smooth * rest, line_radiance(lines, luminance)


def line_radiance(lines: Pairs, luminance: float) -> Floats:
    """Radiance (n_lines,) [W m^-2 sr^-1] in spectral lines (nm, share of the luminance [cd/m2]).

    InputError for a line outside 380-780 nm, or a share below 0.
    """
    return np.array([share * luminance / (LUMINOUS_EFFICACY * checked_line(nm, share)) for nm, share in lines])


def checked_line(wavelength_nm: float, share: float) -> float:
    """The observer's luminous value at a line, after the line has been looked over."""
    if not WAVELENGTH_LOW_NM <= wavelength_nm <= WAVELENGTH_HIGH_NM:
        raise InputError(
            Fault(f"a spectral line at {wavelength_nm:g} nm cannot be rendered", expected="nanometres, 380 to 780")
        )
    if not share >= 0.0:
        raise InputError(
            Fault(f"a spectral line has {share:g} of its light's luminance", expected="a share, 0 or more")
        )
    return observer_at(wavelength_nm)[1]


@cache
def sky_basis_from_rgb() -> Floats:
    """(3, 401) [W m^-2 sr^-1 nm^-1 for each cd/m2]: what red, green and blue of a picture sky are worth.

    Coefficients are linear Rec.709 in cd/m2, so that (L, L, L) is D65 of luminance L. None is below 0 anywhere, and
    each has the chromaticity of its primary.
    """
    white = reference_light("rec709") / LUMINOUS_EFFICACY
    return frozen(light_shares().T * white)


@cache
def light_shares() -> Floats:
    """(401, 3): shares of D65 that have the chromaticities of Rec.709's primaries and add up to 1."""
    return frozen(shipped_table("rec709_light_shares_1nm.csv")[:, 1:])


def spectrum_of_colour(rgb: Sequence[float]) -> Floats:
    """A smooth spectrum (401,), nowhere below 0, of the chromaticity of linear Rec.709 values; white gives D65.

    Values below 0 are colours beyond Rec.709. Beyond what any light can be, the nearest that was found.
    """
    colour = np.asarray(rgb, dtype=np.float64)
    target = applied(reflected_matrix("rec709"), colour)
    if not np.isfinite(colour).all() or not target[1] > 0.0:
        raise InputError(
            Fault("the colour of a light has no luminance", expected="three numbers, linear Rec.709, not all 0")
        )
    if (colour >= 0.0).all():
        return np.asarray(reference_light("rec709") * applied(light_shares(), colour))
    return vivid_spectrum(target)


def vivid_spectrum(target: Floats) -> Floats:
    """A spectrum (401,) of the chromaticity of XYZ (3,) that lies beyond Rec.709: the smoothest found, or the nearest.

    D65 times the sigmoid reflectance of the colour, at full strength and dimmed by halves, each then leaned by a
    quadratic in wavelength until the chromaticity is exact.
    """
    levels = target[:, None] / target.max() * 0.5 ** np.arange(1.0, LEVELS + 1.0)
    coefficients, _ = fitted(levels, flat(levels[1], START_MARGIN), cells_of("rec709", 1))
    spectra = reference_light("rec709") * coefficients_to_reflectance(coefficients.T)
    spectra = np.array([leaned(spectrum, target) for spectrum in spectra])
    misses = chromaticity_miss(spectra, target)
    roughness = (np.diff(spectra, axis=1) ** 2).sum(axis=1) / luminance_of(spectra) ** 2
    exact = misses < EXACT_UV
    return np.asarray(spectra[np.argmin(np.where(exact, roughness, np.inf)) if exact.any() else np.argmin(misses)])


def leaned(spectrum: Floats, target: Floats) -> Floats:
    """The spectrum times 1 + a x + b x^2, its chromaticity exact; the spectrum itself where that would be below 0."""
    x = (wavelengths_nm() - 580.0) / 200.0
    plain, first, second = (spectrum_to_xyz(spectrum * x**power) for power in range(3))
    step = solved(np.stack([first, second, -target], axis=1), -plain)
    factor = 1.0 + step[0] * x + step[1] * x * x
    return np.asarray(spectrum * factor) if factor.min() >= 0.0 else spectrum


def chromaticity_miss(spectra: Floats, target: Floats) -> Floats:
    """Distance (n,) in CIE 1976 u', v' between spectra (n, 401) and XYZ (3,)."""
    return np.asarray(np.hypot(*(chromaticity_uv(spectrum_to_xyz(spectra)) - chromaticity_uv(target)).T))


def chromaticity_uv(xyz: Floats) -> Floats:
    """CIE 1976 u', v' (..., 2) of XYZ (..., 3). CIE 015:2018, section 8.1."""
    x, y, z = np.moveaxis(np.asarray(xyz), -1, 0)
    return np.asarray(np.stack([4.0 * x, 9.0 * y], axis=-1) / (x + 15.0 * y + 3.0 * z)[..., None])


def spectrum_of_table(pairs: Pairs) -> Floats:
    """(nm, value) pairs at the 401 wavelengths: linear between, nothing beyond. InputError if no light is left."""
    table = np.asarray(pairs, dtype=np.float64).reshape(-1, 2)
    if (
        len(table) == 0
        or not np.isfinite(table).all()
        or (table[:, 1] < 0.0).any()
        or (np.diff(table[:, 0]) <= 0).any()
    ):
        raise InputError(
            Fault("the spectrum of a light cannot be read", expected="(nm, value) in rising order, values 0 or more")
        )
    values = np.asarray(np.interp(wavelengths_nm(), table[:, 0], table[:, 1], left=0.0, right=0.0), dtype=np.float64)
    if not luminance_of(values) > 0.0:
        raise InputError(
            Fault("the spectrum of a light has nothing visible in it", expected="values above 0 within 380 to 780 nm")
        )
    return values
