"""One frame as transport receives it: named tuples of arrays, and what a picture's metadata and warnings need."""

from __future__ import annotations

from dataclasses import dataclass

from renderer.arrays.camera import Camera
from renderer.arrays.lights import AreaLights, Sky, Sun
from renderer.arrays.looks import Materials, Objects, Surfaces
from renderer.arrays.spectrum import Spectrum
from renderer.arrays.world import World


@dataclass(frozen=True)
class Scene:
    """Everything that kernels read for one frame.

    `notes` are warnings for a person, one sentence each. `reference_radiance` is the luminance of the brightest light
    [cd/m2], from the shot alone; it sets the grid of exact sums. `object_names` by object id, `material_names` by row
    of `materials` (row 0 is air). `splits` interfaces are followed both ways; paths are cut after `max_interfaces`.
    """

    world: World
    objects: Objects
    materials: Materials
    surfaces: Surfaces
    sun: Sun
    sky: Sky
    lights: AreaLights
    camera: Camera
    spectrum: Spectrum
    notes: tuple[str, ...]
    reference_radiance: float
    splits: int
    max_interfaces: int
    object_names: tuple[str, ...]
    material_names: tuple[str, ...]
