"""From a scene's XYZ to the linear values of a picture: white balance, exposure, output space."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from renderer.shot.model import Camera

Floats = npt.NDArray[np.float64]


@dataclass(frozen=True)
class Development:
    """How a picture is made of light: `exposure` is the factor from cd/m2 to picture values."""

    space: str  # rec709, rec2020, acescg or xyz
    white_balance_k: float
    exposure: float


def development_of(camera: Camera, fps: float, space: str, luminance: Floats) -> Development:
    """The development that a shot's camera states; an automatic exposure is that of `luminance` (rows, columns)."""
    from renderer.colour.exposure import exposure_auto, exposure_factor

    if camera.exposure_auto:
        return Development(space, camera.white_balance_k, exposure_auto(luminance))
    factor = exposure_factor(
        stops=camera.exposure_stops,
        iso=camera.iso,
        shutter_s=shutter_s(camera, fps),
        f_number=camera.f_number,
    )
    return Development(space, camera.white_balance_k, factor)


def shutter_s(camera: Camera, fps: float) -> float:
    """How long the shutter is open. [s]"""
    return camera.shutter_deg / 360.0 / fps


def developed(xyz: Floats, how: Development) -> Floats:
    """Linear picture values (..., 3) of a scene's XYZ (..., 3) [cd/m2]."""
    from renderer.colour.spaces import xyz_to_rgb

    return np.asarray(xyz_to_rgb(xyz, how.space, how.white_balance_k) * how.exposure)
