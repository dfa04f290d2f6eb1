"""Wet over dry: how a film of water darkens a rough absorbing surface (the Python door of `wet_kernels`).

Model: J. Lekner and M. C. Dorf, Appl. Opt. 27, 1278 (1988). Range: albedo 0 to 1, a smooth continuous film, grains of
index about 1.5. It meets measured soils to about 0.01 (tests/published/test_wet.py); it knows nothing of puddles.
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from renderer.base.errors import Fault, InputError

Floats = npt.NDArray[np.float64]

FILM_INDEX = 1.333  # water at the d line and 20 C, relative to air, IAPWS R9-97
GRAIN_INDEX = 1.5  # mineral grains, Lekner & Dorf 1988


def diffuse_fresnel(n: npt.ArrayLike) -> Floats:
    """Reflected share of diffuse light at a smooth interface to relative index n > 0, total reflection included."""
    from renderer.optics import wet_kernels

    ratio = np.asarray(n, dtype=np.float64)
    if not np.all(np.isfinite(ratio) & (ratio > 0.0)):
        raise InputError(Fault("a relative refractive index is not positive", expected="a real number above 0"))
    return np.asarray(np.vectorize(wet_kernels.diffuse_fresnel, otypes=[np.float64])(ratio))


def wet_body_reflectance(
    dry: npt.ArrayLike, film_index: float = FILM_INDEX, grain_index: float = GRAIN_INDEX
) -> Floats:
    """Share of diffuse light that a wet surface's body reflects, without the film's gloss; the shape of `dry`."""
    from renderer.optics import wet_kernels

    albedo = np.asarray(dry, dtype=np.float64)
    if not np.all((albedo >= 0.0) & (albedo <= 1.0)):
        raise InputError(Fault("a reflectance lies outside its range", expected="0 to 1"))
    body = np.vectorize(wet_kernels.wet_body_reflectance, otypes=[np.float64])
    return np.asarray(body(albedo, film_index, grain_index))


def wet_reflectance(dry: npt.ArrayLike, wetness: float = 1.0) -> Floats:
    """Whole diffuse albedo of a surface of which the share `wetness` is under a film: body and gloss together."""
    wet = wet_body_reflectance(dry) + diffuse_fresnel(FILM_INDEX)
    return np.asarray(wetness * wet + (1.0 - wetness) * np.asarray(dry, dtype=np.float64))
