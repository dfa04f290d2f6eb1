"""How a path's wavelengths are drawn, as kernels see it.

A path's four wavelengths come from one number u in [0, 1) and its three rotations by a quarter. The map from u to
wavelength is the inverse of a mixed distribution: a density over 380-780 nm, and discrete masses for spectral lines
(or for the wavelengths that a shot asks for), so that a rotation can hit a line.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt


class Spectrum(NamedTuple):
    """Segments of u in rising order, (n_segments,) each; within one the density is constant, or all one wavelength.

    `u_low` (n_segments + 1,) from 0 to 1; `low_nm`, `high_nm` the ends (equal for a mass); `weight`: what an emitter's
    value is multiplied by, that is 1/density [nm] for a stretch, 1/mass [1] for a line, and share of the range over
    mass [nm] for a wavelength that the shot asks for; `line` the column of line_radiance, or -1 where the continuous
    spectrum is read. `observer` (401, 3): CIE 1931 colour-matching functions, 380 to 780 nm. `bin_of` (n_segments,):
    which spectral bin a segment's light is added to, or -1.
    """

    u_low: npt.NDArray[np.float64]
    low_nm: npt.NDArray[np.float64]
    high_nm: npt.NDArray[np.float64]
    weight: npt.NDArray[np.float64]
    line: npt.NDArray[np.int32]
    bin_of: npt.NDArray[np.int32]
    observer: npt.NDArray[np.float64]
