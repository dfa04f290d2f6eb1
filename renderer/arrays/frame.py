"""Everything that transport reads of one frame, as one argument: many kernels take it, and none changes it."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from renderer.arrays.camera import Camera
from renderer.arrays.lights import AreaLights, Sky, Sun
from renderer.arrays.looks import Materials, Objects, Surfaces
from renderer.arrays.spectrum import Spectrum
from renderer.arrays.world import World


class Frame(NamedTuple):
    """The parts of a frame, and `settings`, the whole numbers that a round is rendered with (transport/layout.py)."""

    world: World
    objects: Objects
    materials: Materials
    surfaces: Surfaces
    sun: Sun
    sky: Sky
    lights: AreaLights
    camera: Camera
    spectrum: Spectrum
    settings: npt.NDArray[np.int64]
