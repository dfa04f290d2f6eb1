"""What objects are made of, as kernels see it: clear materials, opaque surfaces, textures, and who has which."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt

# kinds of object
CLEAR = 0  # a solid of a material; light crosses it
OPAQUE = 1  # has a surface
LIGHT = 2  # an emitting, otherwise black surface
PANE = 3  # a single sheet that stands for a plane-parallel plate of a material with a thickness
SHEET = 4  # an open sheet with a material below it (an ocean grid); "below" is the side away from its normals

# kinds of finish
MATT = 0
METAL = 1

# kinds of reflectance
SIGMOID = 0  # three coefficients of the sigmoid of a quadratic in wavelength (Jakob & Hanika 2019)
TABLE = 1  # a row of reflectance_table
PICTURE = 2  # a picture of such coefficients


class Objects(NamedTuple):
    """One row an object of the shot, (n_objects,) each."""

    kind: npt.NDArray[np.int32]
    material: npt.NDArray[np.int32]  # row of Materials; 0 is air
    priority: npt.NDArray[np.int32]  # where objects overlap, the higher wins; ties go to the later object
    surface: npt.NDArray[np.int32]  # row of Surfaces, or -1
    light: npt.NDArray[np.int32]  # row of AreaLights' spectra, or -1
    roughness: npt.NDArray[np.float64]  # of a clear object's interface, in [0, 1]; the microfacet alpha is its square
    thickness_m: npt.NDArray[np.float64]  # of a pane


class Materials(NamedTuple):
    """One row a clear material; row 0 is air, whose index is 1: every index is relative to air."""

    # (n_materials, 401), 380 to 780 nm, one entry a nanometre; hides a tuple's own method
    index: npt.NDArray[np.float64]  # type: ignore[assignment]
    absorption_per_m: npt.NDArray[np.float64]  # (n_materials, 401), base e
    dispersive: npt.NDArray[np.bool_]  # (n_materials,)


class Surfaces(NamedTuple):
    """One row an opaque surface."""

    finish: npt.NDArray[np.int32]
    reflectance_kind: npt.NDArray[np.int32]
    coefficients: npt.NDArray[np.float64]  # (n_surfaces, 3), for SIGMOID
    reflectance_table: npt.NDArray[np.float64]  # (n_surfaces or 1, 401), for TABLE
    picture: npt.NDArray[np.int32]  # (n_surfaces, 3): offset into texels, width, height; for PICTURE
    texels: npt.NDArray[np.float32]  # (n_texels, 3): coefficients, row by row from the top; v = 1 is the top
    roughness: npt.NDArray[np.float64]  # in [0, 1]; 0 is a mirror for METAL; 1 has no gloss for MATT
    wetness: npt.NDArray[np.float64]  # share of the surface under a film of water, in [0, 1]
    film_roughness: npt.NDArray[np.float64]  # of the film's top
