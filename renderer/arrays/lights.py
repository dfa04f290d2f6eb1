"""Where light comes from, as kernels see it."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt


class Sun(NamedTuple):
    """The sun's disc. `numbers` (9,): 1 when there is a sun else 0; unit direction to it x, y, z in world axes;
    cosine of its angular radius; solid angle [sr]; limb-darkening coefficients u1, u2 of
    I(mu)/I(1) = 1 - u1 (1 - mu) - u2 (1 - mu)^2; mean of that over the disc.
    `radiance` (401,): mean over the disc at the ground, [W m^-2 sr^-1 nm^-1].
    """

    numbers: npt.NDArray[np.float64]
    radiance: npt.NDArray[np.float64]


class Sky(NamedTuple):
    """Radiance by direction: a map of coefficients on basis spectra.

    Rows run from straight up (row 0, elevation +90 degrees) to straight down, columns with azimuth clockwise from
    north, both ends of the rows and the seam included as nodes: entry [i, j] is at elevation 90 - 180 i / (n_rows-1)
    degrees and azimuth 360 j / n_columns degrees; evaluation is bilinear (the seam wraps). A uniform sky has
    n_rows = 2, n_columns = 1.
    """

    axes: npt.NDArray[np.float64]  # (3, 3): east, up, north in world axes
    coefficients: npt.NDArray[np.float64]  # (n_rows, n_columns, n_basis)
    basis: npt.NDArray[np.float64]  # (n_basis, 401) [W m^-2 sr^-1 nm^-1] a unit coefficient
    row_cdf: npt.NDArray[np.float64]  # (n_rows,): cumulative share of the rows of cells, from 0 to 1
    column_cdf: npt.NDArray[np.float64]  # (n_rows - 1, n_columns + 1): the same of the cells in each row


class AreaLights(NamedTuple):
    """Emitting triangles and the spectra of their lights. Empty arrays where there are none."""

    instance: npt.NDArray[np.int32]  # (n_triangles,) as ray search numbers instances
    primitive: npt.NDArray[np.int32]  # (n_triangles,) as ray search numbers primitives
    light: npt.NDArray[np.int32]  # (n_triangles,): row of radiance below
    cdf: npt.NDArray[np.float64]  # (n_triangles + 1,): cumulative chance of being picked; (1,) where there are none
    of_primitive: npt.NDArray[np.int32]  # (n_primitives of the world or 1,): row above, or -1
    radiance: npt.NDArray[np.float64]  # (n_lights or 1, 401) [W m^-2 sr^-1 nm^-1]
    line_radiance: npt.NDArray[np.float64]  # (n_lights or 1, n_lines) [W m^-2 sr^-1] in each spectral line
    two_sided: npt.NDArray[np.bool_]  # (n_lights or 1,)
    small: npt.NDArray[np.bool_]  # (n_lights or 1,): its light through smooth interfaces is left to photon rounds
