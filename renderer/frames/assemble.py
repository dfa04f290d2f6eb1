"""One frame of a shot, assembled: files read, shapes built, colours made spectra, everything frozen into arrays."""

from __future__ import annotations

import numpy as np

from renderer.arrays.lights import Sky, Sun
from renderer.arrays.packing import pack
from renderer.arrays.spectrum import Spectrum
from renderer.frames.scene import Scene
from renderer.frames.scene_lights import light_arrays, lines_of, luminance_of
from renderer.frames.scene_looks import Looks, material_arrays, object_arrays, surface_arrays
from renderer.frames.scene_shapes import Placing
from renderer.frames.scene_sky import node_luminance, sky_arrays, sun_arrays
from renderer.geometry.camera import camera_arrays
from renderer.shot.model import FrameShot


def assemble(shot: FrameShot) -> Scene:
    """The arrays of one frame. Raises `InputError` for whatever a user can get wrong.

    A mesh file or shape that several objects use is loaded once and placed many times; equal materials, surfaces and
    pictures share a row. A sphere is analytic, unless it shines (then 2,208 triangles), is stretched, or carries a
    picture (then a fine mesh with exact normals).
    """
    from renderer.colour.wavelengths import spectrum_for
    from renderer.ray_search.build import build_world

    table, placing = Looks(), Placing(shot.objects)
    camera = camera_arrays(shot.camera)
    objects = object_arrays(shot.objects, table)
    surfaces = surface_arrays(table)
    for object_id in range(len(shot.objects)):
        placing.add(object_id)
    world = build_world(placing.assets, placing.placements, objects)
    sun, sky = sun_arrays(shot.sun, shot.sky.kind, table.notes), sky_arrays(shot)
    spectrum = spectrum_for(lines_of(shot.objects), shot.settings.wavelengths_nm)
    return Scene(
        world=world,
        objects=objects,
        materials=material_arrays(table),
        surfaces=surfaces,
        sun=sun,
        sky=sky,
        lights=light_arrays(shot.objects, placing, world),
        camera=camera,
        spectrum=Spectrum(*(pack(part, part.dtype) for part in spectrum)),
        notes=tuple(table.notes),
        reference_radiance=brightest(shot, sun, sky),
        splits=shot.settings.splits,
        max_interfaces=shot.settings.max_interfaces,
        object_names=tuple(item.name for item in shot.objects),
        material_names=tuple(table.material_names),
    )


def brightest(shot: FrameShot, sun: Sun, sky: Sky) -> float:
    """Luminance of the brightest light of a shot [cd/m2]; 1 where nothing shines.

    The sun counts by the middle of its disc.
    """
    from renderer.colour.observer import luminance

    numbers = sun.numbers
    disc = float(luminance(sun.radiance)) / float(numbers[8]) if numbers[0] > 0.0 else 0.0
    nodes = float(node_luminance(np.asarray(sky.coefficients), np.asarray(sky.basis)).max())
    found = max([disc, nodes, *(luminance_of(item) for item in shot.objects if item.role == "light")])
    return found if found > 0.0 else 1.0
