"""The CIE 1931 standard observer, and what it makes of a spectrum."""

from __future__ import annotations

from functools import cache

import numpy as np

from renderer.base.constants import LUMINOUS_EFFICACY
from renderer.colour.tables import Floats, frozen, resampled, shipped_table, wavelengths_nm


@cache
def observer() -> Floats:
    """CIE 1931 2-degree colour-matching functions, (401, 3), 380 to 780 nm. CIE 018:2019, ISO/CIE 11664-1:2019."""
    return frozen(resampled(shipped_table("cie_1931_2deg_1nm.csv")))


@cache
def observer_weights() -> Floats:
    """(401, 3) [nm]: a spectrum's 401 entries times these, summed, is its exact XYZ integral over 380-780 nm.

    Exact for spectra and observer that are both linear between their entries, as kernels read them: entry i weighs
    (c[i-1] + 4 c[i] + c[i+1]) / 6.
    """
    c = observer()
    weights = np.zeros_like(c)
    weights[:-1] += (2.0 * c[:-1] + c[1:]) / 6.0
    weights[1:] += (c[:-1] + 2.0 * c[1:]) / 6.0
    return frozen(weights)


def spectrum_to_xyz(spectra: Floats) -> Floats:
    """CIE XYZ of spectra (..., 401): the integrals [of the spectrum's unit times nm], (..., 3)."""
    weights = observer_weights()
    values = np.asarray(spectra, dtype=np.float64)
    return np.stack([(values * weights[:, c]).sum(axis=-1) for c in range(3)], axis=-1)


def luminance(radiance: Floats) -> Floats:
    """Luminance [cd/m2] of spectral radiances (..., 401) [W m^-2 sr^-1 nm^-1]."""
    return np.asarray(LUMINOUS_EFFICACY * (np.asarray(radiance) * observer_weights()[:, 1]).sum(axis=-1))


def observer_at(wavelength_nm: float) -> tuple[float, float, float]:
    """The three colour-matching functions at one wavelength, linear between the nanometres; 0 outside 380-780 nm."""
    nm = wavelengths_nm()
    x, y, z = (float(np.interp(wavelength_nm, nm, column, left=0.0, right=0.0)) for column in observer().T)
    return x, y, z
