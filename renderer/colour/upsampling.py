"""RGB to reflectance: the smooth spectrum that looks like a given colour under its space's white.

W. Jakob and J. Hanika, "A Low-Dimensional Function Space for Efficient Spectral Upsampling", Computer Graphics Forum
38(2), 2019, solved afresh for every colour instead of read from a table. Lights are not reflectances: see `emission`.
"""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor

import numpy as np
import numpy.typing as npt

from renderer.base.errors import InputError
from renderer.colour.differences import ciede2000, cielab
from renderer.colour.sigmoid_cells import cells_of, colours_and_slopes
from renderer.colour.sigmoid_fit import fitted
from renderer.colour.spaces import applied, reflected_matrix
from renderer.colour.tables import Floats, wavelengths_nm

Flags = npt.NDArray[np.bool_]

BLOCK = 1 << 16  # colours that one thread solves at a time
WIDE_NM, NARROW_NM = 10, 2  # cells for smooth and for steep reflectances
STEEP = 30.0  # largest coefficient above which a reflectance is fitted again by narrow cells
FIRST_PROGRESS = 1e-2  # the first fit may end early where it creeps: what is steep is fitted again
GREY_MARGIN = 1e-6  # greys reach from this reflectance to 1 minus it, where the sigmoid is still finite
START_MARGIN = 0.01  # the fit starts from a grey this far from black and white, where the sigmoid still has a slope
OUTSIDE_CIEDE2000 = 0.5  # a colour that its nearest reflectance misses by more is outside the object-colour solid


def reflectance_coefficients(rgb: Floats, space: str, n_threads: int = 1) -> tuple[Floats, Flags]:
    """Sigmoid coefficients of the reflectances that look like linear RGB, and which colours no reflectance can have.

    Parameters
    ----------
    rgb : (n, 3) array
        Linear values in `space`; (1, 1, 1) is a reflectance of 1.
    space : str
        rec709, rec2020 or acescg. The colours are those under the space's white, 380-780 nm: D65, and for ACEScg
        daylight of its white.

    n_threads : int
        How many threads share the work; the result is the same for any.

    Returns
    -------
    coefficients : (n, 3) float64
        For `sigmoid_reflectance` and `coefficients_to_reflectance`. Outside the object-colour solid, those of the
        reflectance nearest in CIELAB.
    outside : (n,) bool
        True where that nearest reflectance differs by more than 0.5 CIEDE2000. The caller warns, once a picture.

    Raises
    ------
    InputError
        A value is not a finite number, or there is no such space.

    Notes
    -----
    Depends on each colour alone: not on the others, their order or their number. Equal colours are solved once.
    """
    values = np.asarray(rgb, dtype=np.float64).reshape(-1, 3)
    if not np.isfinite(values).all():
        raise InputError("a reflectance is not a finite number")
    colours, place = distinct(values)
    targets = np.ascontiguousarray(applied(reflected_matrix(space), colours).T)
    coefficients, errors = solved_colours(targets, space, n_threads)
    grey = (colours[:, 0] == colours[:, 1]) & (colours[:, 1] == colours[:, 2])
    coefficients[:, grey] = flat(colours[grey, 0], GREY_MARGIN)
    errors[grey & (colours[:, 0] >= 0.0) & (colours[:, 0] <= 1.0)] = 0.0
    outside = out_of_reach(coefficients, errors, targets, space)
    return np.ascontiguousarray(coefficients.T[place]), outside[place]


def coefficients_to_reflectance(coefficients: Floats, wavelength_nm: Floats | None = None) -> Floats:
    """Reflectances (..., n_wavelengths) of coefficients (..., 3); by default at the 401 wavelengths of all tables."""
    nm = wavelengths_nm() if wavelength_nm is None else np.asarray(wavelength_nm, dtype=np.float64)
    c = np.asarray(coefficients, dtype=np.float64)[..., None]
    x = (nm - 580.0) * 0.005
    q = (c[..., 0, :] * x + c[..., 1, :]) * x + c[..., 2, :]
    return np.asarray(0.5 + 0.5 * q / np.sqrt(1.0 + q * q))


def distinct(colours: Floats) -> tuple[Floats, npt.NDArray[np.int64]]:
    """The different colours among (n, 3), and for each of the n its row among them."""
    order = np.lexsort(colours.T)
    ordered = colours[order]
    first = np.ones(len(colours), dtype=bool)
    first[1:] = (ordered[1:] != ordered[:-1]).any(axis=1)
    place = np.empty(len(colours), dtype=np.int64)
    place[order] = np.cumsum(first) - 1
    return ordered[first], place


def solved_colours(targets: Floats, space: str, n_threads: int = 1) -> tuple[Floats, Floats]:
    """Coefficients (3, n) of XYZ (3, n), and the squared CIELAB differences (n,) that are left."""
    blocks = [targets[:, start : start + BLOCK] for start in range(0, targets.shape[1], BLOCK)]
    with ThreadPoolExecutor(max_workers=max(1, n_threads)) as pool:
        solved = list(pool.map(lambda block: solved_block(block, space), blocks))
    if not solved:
        return np.empty((3, 0)), np.empty(0)
    return np.concatenate([c for c, _ in solved], axis=1), np.concatenate([e for _, e in solved])


def solved_block(targets: Floats, space: str) -> tuple[Floats, Floats]:
    """`solved_colours` of one block: by wide cells first, then by narrow ones where the reflectance is steep."""
    n = targets.shape[1]
    if n == 1:  # two columns at least, so that sums run over the cells in the same order as for many
        coefficients, errors = solved_block(np.repeat(targets, 2, axis=1), space)
        return coefficients[:, :1], errors[:1]
    coefficients, errors = fitted(targets, flat(targets[1], START_MARGIN), cells_of(space, WIDE_NM), FIRST_PROGRESS)
    steep = np.flatnonzero(np.abs(coefficients).max(axis=0) > STEEP)
    if steep.size:
        some = np.repeat(steep, 2) if steep.size == 1 else steep
        coefficients[:, some], errors[some] = fitted(
            targets[:, some], coefficients[:, some], cells_of(space, NARROW_NM)
        )
    return coefficients, errors


def flat(reflectance: Floats, margin: float) -> Floats:
    """Coefficients (3, n) of reflectances that are the same at every wavelength, kept `margin` away from 0 and 1."""
    s = 2.0 * np.clip(reflectance, margin, 1.0 - margin) - 1.0
    coefficients = np.zeros((3, len(s)))
    coefficients[2] = s / np.sqrt(1.0 - s * s)
    return coefficients


def out_of_reach(coefficients: Floats, errors: Floats, targets: Floats, space: str) -> Flags:
    """Where (n,) the colours of coefficients (3, n) differ from XYZ (3, n) by more than 0.5 CIEDE2000."""
    outside = np.zeros(len(errors), dtype=bool)
    doubtful = np.flatnonzero(errors > (0.2 * OUTSIDE_CIEDE2000) ** 2)  # CIEDE2000 is nowhere 5 times CIELAB
    if doubtful.size:
        cells = cells_of(space, NARROW_NM)
        seen, _ = colours_and_slopes(coefficients[:, doubtful], cells)
        wanted = targets[:, doubtful]
        difference = ciede2000(cielab(seen.T, cells.white), cielab(wanted.T, cells.white))
        outside[doubtful] = difference > OUTSIDE_CIEDE2000
    return outside
