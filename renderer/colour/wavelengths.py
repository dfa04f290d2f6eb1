"""How a path's wavelengths are drawn: a density shaped like the observer, with discrete masses for spectral lines.

The value of a picture element is an integral over wavelength of three colour-matching functions at once. Drawing from
a density p leaves, for a grey under even light, a variance of the integral of |g|^2 / p, where g is what a wavelength
adds to CIELAB; it is least where p is proportional to |g|. The colour differences a* and b* count half, since an eye
blurs them more than lightness (common practice, no source), and a floor keeps every wavelength within reach.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt

from renderer.arrays.spectrum import Spectrum
from renderer.base.constants import WAVELENGTH_HIGH_NM, WAVELENGTH_LOW_NM
from renderer.base.errors import Fault, InputError
from renderer.colour.observer import observer
from renderer.colour.tables import Floats

FLOOR = 0.15  # share of the continuous draws that is spread evenly over the range
CHROMA_COUNTS = 0.5  # of a* and b* against L*
MOST_LINE_MASS = 0.5  # lines together never take more of the draws than this


def spectrum_for(lines_nm: Sequence[float] = (), wavelengths_nm: Sequence[float] = ()) -> Spectrum:
    """The draw of wavelengths for a shot whose lights have spectral lines at `lines_nm`, column by column.

    Without lines a path's four wavelengths come from the density alone. `n` lines take a share n / (n + 3) of the
    draws, at most a half, in equal parts: one line is on a quarter of them, that is on one of the four wavelengths of
    every path. With `wavelengths_nm` those alone are drawn, equally often; each stands for an equal share of the range,
    400 nm / n, and the spectral lines of lights are left out, since a line has no width to be shared.

    InputError for a wavelength outside 380-780 nm, or one that is named twice.
    """
    if len(wavelengths_nm):
        return asked_for(checked(wavelengths_nm, "wavelengths"))
    lines = checked(lines_nm, "the spectral lines of lights")
    nodes = np.linspace(WAVELENGTH_LOW_NM, WAVELENGTH_HIGH_NM, observer().shape[0])
    share = min(len(lines) / (len(lines) + 3.0), MOST_LINE_MASS)
    masses = np.concatenate([(1.0 - share) * stretch_shares(), np.full(len(lines), share / max(len(lines), 1))])
    low = np.concatenate([nodes[:-1], lines])
    high = np.concatenate([nodes[1:], lines])
    column = np.concatenate([np.full(len(nodes) - 1, -1), np.arange(len(lines))])
    order = np.lexsort((column, low))  # by wavelength, so that rotations by a quarter stay far apart
    masses, low, high, column = masses[order], low[order], high[order], column[order]
    return spectrum_of(masses, low, high, np.where(column < 0, high - low, 1.0) / masses, column, bins=False)


def asked_for(chosen: Floats) -> Spectrum:
    """A spectrum of nothing but the wavelengths asked for, in the order in which they were."""
    n = len(chosen)
    width = (WAVELENGTH_HIGH_NM - WAVELENGTH_LOW_NM) / n
    masses = np.full(n, 1.0 / n)
    return spectrum_of(masses, chosen, chosen, width / masses, np.full(n, -1), bins=True)


def spectrum_of(
    masses: Floats, low: Floats, high: Floats, weight: Floats, line: npt.NDArray[np.int64], *, bins: bool
) -> Spectrum:
    """Segments of u, of these masses in this order, as `Spectrum` documents them."""
    u_low = np.concatenate([[0.0], np.cumsum(masses)])
    u_low[-1] = 1.0
    n = len(masses)
    return Spectrum(
        u_low=u_low,
        low_nm=np.ascontiguousarray(low),
        high_nm=np.ascontiguousarray(high),
        weight=np.ascontiguousarray(weight),
        line=np.ascontiguousarray(line, dtype=np.int32),
        bin_of=np.arange(n, dtype=np.int32) if bins else np.full(n, -1, dtype=np.int32),
        observer=observer(),
    )


def stretch_shares() -> Floats:
    """Shares (400,) of the continuous draws that fall into each nanometre; they add up to 1."""
    eye = observer() / observer().sum(axis=0)
    lightness = 116.0 * eye[:, 1]
    red_green, yellow_blue = 500.0 * (eye[:, 0] - eye[:, 1]), 200.0 * (eye[:, 1] - eye[:, 2])
    shape = np.sqrt(lightness**2 + CHROMA_COUNTS**2 * (red_green**2 + yellow_blue**2))
    stretches = 0.5 * (shape[1:] + shape[:-1])
    return np.asarray((1.0 - FLOOR) * stretches / stretches.sum() + FLOOR / len(stretches))


def checked(values: Sequence[float], what: str) -> Floats:
    """The wavelengths as an array, all within range and different."""
    result = np.asarray(values, dtype=np.float64).reshape(-1)
    inside = (result >= WAVELENGTH_LOW_NM) & (result <= WAVELENGTH_HIGH_NM)
    if not inside.all():
        first = result[~inside][0]
        raise InputError(Fault(f"{what} cannot hold {first:g} nm", expected="nanometres, 380 to 780"))
    if len(np.unique(result)) != len(result):
        raise InputError(Fault(f"{what} name a wavelength twice", expected="different wavelengths"))
    return result
