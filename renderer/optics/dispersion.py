"""Laws of refractive index by wavelength, and the index of air that joins two conventions.

Every index of this project is relative to air of 20 degrees C and 101325 Pa, and every wavelength is that in air, as
makers' catalogues have it. A law referred to vacuum is read at the vacuum wavelength and divided by the index of air.
Only additions, multiplications, divisions and square roots are used, so the tables are the same bits everywhere.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
import numpy.typing as npt

from renderer.base.constants import FRAUNHOFER_C_NM, FRAUNHOFER_D_NM, FRAUNHOFER_F_NM
from renderer.base.errors import Fault, InputError

Floats = npt.NDArray[np.float64]

FRAUNHOFER_G_NM = 435.8343  # mercury g, ISO 7944:1998
LOWEST_INDEX, HIGHEST_INDEX = 0.5, 5.0  # what a clear material may have in the visible (a limit of ours)


def as_um(wavelength_nm: npt.ArrayLike) -> Floats:
    """Wavelengths in micrometres."""
    return np.asarray(wavelength_nm, dtype=np.float64) / 1000.0


def air_index(wavelength_nm: npt.ArrayLike) -> Floats:
    """Absolute index of dry air of 20 C, 101325 Pa, 450 ppm CO2, at wavelengths in air, 300 to 1690 nm.

    P. E. Ciddor, Appl. Opt. 35, 1566 (1996): standard air of 15 C, scaled by density (ideal gas; compressibility
    changes n - 1 by 5e-5 of itself). Taking the wavelength in air instead of vacuum here changes it by 1e-9.
    """
    wavenumber2 = 1.0 / (as_um(wavelength_nm) * as_um(wavelength_nm))
    standard = 1e-8 * (5792105.0 / (238.0185 - wavenumber2) + 167917.0 / (57.362 - wavenumber2))
    return np.asarray(1.0 + standard * (288.15 / 293.15))


def relative_to_air(law: Callable[[Floats], Floats], wavelength_nm: npt.ArrayLike) -> Floats:
    """A vacuum-referred `law` of the vacuum wavelength [nm], as an index relative to air at wavelengths in air."""
    air = air_index(wavelength_nm)
    return np.asarray(law(np.asarray(wavelength_nm, dtype=np.float64) * air) / air)


def sellmeier(wavelength_nm: npt.ArrayLike, terms: Sequence[tuple[float, float]], offset: float = 0.0) -> Floats:
    """n^2 = 1 + offset + sum of B L^2 / (L^2 - C), L in um and C in um^2 (W. Sellmeier, Ann. Phys. 219, 272 (1871)).

    Not-a-number where n^2 is not positive, which is beyond a resonance.
    """
    square = as_um(wavelength_nm) * as_um(wavelength_nm)
    total = np.full_like(square, 1.0 + offset)
    for strength, resonance in terms:
        total = total + strength * square / (square - resonance)
    return np.sqrt(np.where(total > 0.0, total, np.nan))


def power_series(wavelength_nm: npt.ArrayLike, terms: Sequence[tuple[float, int]]) -> Floats:
    """n = sum of a L^p with even whole p, L in um."""
    square = as_um(wavelength_nm) * as_um(wavelength_nm)
    total = np.zeros_like(square)
    for factor, power in terms:
        step = square if power > 0 else 1.0 / square
        term = np.full_like(square, factor)
        for _ in range(abs(power) // 2):
            term = term * step
        total = total + term
    return np.asarray(total)


def cauchy(wavelength_nm: npt.ArrayLike, coefficients: Sequence[float]) -> Floats:
    """n = A + B / L^2 + C / L^4 + ..., L in um (A.-L. Cauchy 1836)."""
    return power_series(wavelength_nm, [(value, -2 * k) for k, value in enumerate(coefficients)])


def abbe_coefficients(nd: float, vd: float) -> tuple[float, float, float]:
    """Cauchy's A, B, C of a medium with index nd and Abbe number vd = (nd - 1) / (nF - nC).

    The third condition is the normal line of optical glasses, (ng - nF) / (nF - nC) = 0.6438 - 0.001682 vd (SCHOTT
    technical information TIE-29, from memory), with vd held within 20 to 95 in it, so that n falls with wavelength.
    """
    if not (LOWEST_INDEX <= nd <= HIGHEST_INDEX and np.isfinite(vd) and vd > 0.0 and nd != 1.0):
        raise InputError(
            Fault(
                "the pair of index and Abbe number is outside its range", expected="nd 0.5 to 5, not 1, and Vd above 0"
            )
        )
    inverse = [1e6 / (nm * nm) for nm in (FRAUNHOFER_G_NM, FRAUNHOFER_F_NM, FRAUNHOFER_D_NM, FRAUNHOFER_C_NM)]
    g, f, d, c = inverse
    partial = 0.6438 - 0.001682 * min(max(vd, 20.0), 95.0)
    ratio = (partial * (f - c) - (g - f)) / ((g * g - f * f) - partial * (f * f - c * c))  # C / B
    b = (nd - 1.0) / vd / ((f - c) + ratio * (f * f - c * c))
    third = ratio * b
    return nd - b * d - third * d * d, b, third


def index_table(wavelength_nm: npt.ArrayLike, pairs: Sequence[tuple[float, float]]) -> Floats:
    """Index between the (nm, n) of a table: straight lines over 1 / L^2, where indices run nearly straight.

    Beyond its ends the nearest of its lines goes on, which a table must allow by reaching from 480 nm or less to
    600 nm or more; one pair alone is a constant index. InputError for a table that falls short or does not rise in nm.
    """
    if len(pairs) == 1:
        return np.full_like(np.asarray(wavelength_nm, dtype=np.float64), pairs[0][1])
    at_nm = rising_wavelengths(pairs, "refractive index")
    if at_nm[0] > 480.0 or at_nm[-1] < 600.0:
        raise InputError(
            Fault(
                f"the table of refractive indices covers {at_nm[0]:g} to {at_nm[-1]:g} nm only",
                expected="a table that reaches from 480 nm or less to 600 nm or more",
            )
        )
    position = 1e6 / (at_nm * at_nm)
    values = np.array([value for _, value in pairs], dtype=np.float64)
    wanted = 1.0 / (as_um(wavelength_nm) * as_um(wavelength_nm))
    line = np.clip(np.searchsorted(-position, -wanted) - 1, 0, len(pairs) - 2)
    slope = (values[line + 1] - values[line]) / (position[line + 1] - position[line])
    return np.asarray(values[line] + slope * (wanted - position[line]))


def rising_wavelengths(pairs: Sequence[tuple[float, float]], of_what: str) -> Floats:
    """The wavelengths [nm] of a user's table; InputError unless they are positive, finite and rise."""
    at_nm = np.array([nm for nm, _ in pairs], dtype=np.float64)
    if len(at_nm) == 0 or not np.all(np.isfinite(at_nm) & (at_nm > 0.0)) or not np.all(np.diff(at_nm) > 0.0):
        raise InputError(
            Fault(
                f"the wavelengths in a table of {of_what} do not rise",
                expected="pairs [nm, value] in rising order of nm",
            )
        )
    return at_nm


def checked_index(wavelength_nm: npt.ArrayLike, index: Floats) -> Floats:
    """The index itself; InputError, naming the wavelength, where it is not within what a clear material may have."""
    bad = ~(np.isfinite(index) & (index >= LOWEST_INDEX) & (index <= HIGHEST_INDEX))
    if np.any(bad):
        where = np.broadcast_to(np.asarray(wavelength_nm, dtype=np.float64), bad.shape)[bad][0]
        value = index[bad][0] if index.ndim else float(index)
        raise InputError(
            Fault(
                f"the refractive index is {value:.4g} at {where:g} nm",
                expected=f"{LOWEST_INDEX:g} to {HIGHEST_INDEX:g} everywhere from 380 to 780 nm",
            )
        )
    return index


def abbe_number(nd: float, nf: float, nc: float) -> float:
    """Vd = (nd - 1) / (nF - nC); infinite without dispersion (ISO 7944:1998)."""
    return (nd - 1.0) / (nf - nc) if nf != nc else float("inf")
