"""Objects that shine: their triangles, the chance of each, and their spectra and lines."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt

from renderer.arrays.assets import TriangleAsset
from renderer.arrays.lights import AreaLights
from renderer.arrays.packing import pack
from renderer.arrays.world import World
from renderer.base.constants import N_WAVELENGTHS
from renderer.frames.scene_shapes import Placing, bounds
from renderer.frames.scene_sky import cumulative
from renderer.geometry.normals import face_normals
from renderer.geometry.parts import moved
from renderer.shot.model import Emission, Object

Floats = npt.NDArray[np.float64]
Indices = npt.NDArray[np.int32]

SMALL = 1e-4  # share of the squared diagonal of the scene's bounds below which a light's area is small


def lines_of(items: Sequence[Object]) -> list[float]:
    """All spectral lines of a shot's lights, rising, each once. [nm]"""
    return sorted(
        {nm for item in items if item.emission is not None for nm, share in item.emission.lines if share > 0.0}
    )


def light_arrays(items: Sequence[Object], placing: Placing, world: World) -> AreaLights:
    """Every shining triangle, drawn in proportion to its area times its light's luminance.

    A light is `small` when its area, at the opening of the shutter, is below SMALL of the squared diagonal of the
    bounding box of everything in the shot: through smooth interfaces, camera paths would hardly ever find it.
    """
    from renderer.ray_search.build import object_primitives

    lines = lines_of(items)
    shining = [(object_id, item) for object_id, item in enumerate(items) if item.role == "light"]
    low, high = bounds(placing)
    square_m2 = float(np.square(high - low).sum())
    instances, primitives, powers, small = [], [], [], []
    for object_id, item in shining:
        instance, primitive = object_primitives(world, object_id)
        areas = areas_m2(placing, object_id, instance, primitive)
        instances.append(instance)
        primitives.append(primitive)
        powers.append(areas * sides(item) * luminance_of(item))
        small.append(float(areas.sum()) < SMALL * square_m2)
    primitive = np.concatenate([np.zeros(0, np.int32), *primitives])
    spectra = [radiance_of(item.emission, lines) for _, item in shining if item.emission is not None]
    spectra = spectra or [(np.zeros(N_WAVELENGTHS), np.zeros(len(lines)))]
    return AreaLights(
        instance=pack(np.concatenate([np.zeros(0, np.int32), *instances]), np.int32),
        primitive=pack(primitive, np.int32),
        light=pack([row for row, own in enumerate(powers) for _ in range(len(own))], np.int32),
        cdf=pack(draw_table(np.concatenate([np.zeros(0), *powers]))),
        of_primitive=pack(rows_of(primitive, placing.count()), np.int32),
        radiance=pack([radiance for radiance, _ in spectra]),
        line_radiance=pack([row for _, row in spectra], shape=(len(spectra), len(lines))),
        two_sided=pack([sides(item) == 2.0 for _, item in shining] or [False], np.bool_),
        small=pack(small or [False], np.bool_),
    )


def draw_table(powers: Floats) -> Floats:
    """(n + 1,) cumulative chances; equal ones when nothing shines."""
    if not len(powers):
        return np.zeros(1)
    table: Floats = cumulative((powers if powers.sum() > 0.0 else np.ones_like(powers))[None, :])[0]
    return table


def rows_of(primitive: Indices, n_primitives: int) -> Indices:
    """The row of each of the world's primitives, -1 for those that do not shine; one -1 where none does."""
    rows = np.full(n_primitives if len(primitive) else 1, -1, dtype=np.int32)
    rows[primitive] = np.arange(len(primitive), dtype=np.int32)
    return rows


def areas_m2(placing: Placing, object_id: int, instance: Indices, primitive: Indices) -> Floats:
    """Areas of an object's triangles where the shutter opens, in the order of `primitive`."""
    starts = np.cumsum([0] + [len(a.faces) if isinstance(a, TriangleAsset) else 0 for a in placing.assets])
    areas = np.full(int(primitive.max()) + 1 if len(primitive) else 1, np.nan)
    for place in placing.placements:
        asset = placing.assets[place.asset]
        if place.object_id != object_id or not isinstance(asset, TriangleAsset):
            continue
        normals = face_normals(moved(asset.vertices_m, place.matrices[0]), asset.faces)
        first = starts[place.asset]
        areas[first : first + len(asset.faces)] = 0.5 * np.sqrt(np.square(normals).sum(axis=1))
    found: Floats = areas[primitive]
    return found


def sides(item: Object) -> float:
    """How many sides of its triangles shine."""
    return 2.0 if item.emission is not None and item.emission.two_sided else 1.0


def luminance_of(item: Object) -> float:
    """Luminance of a light seen straight on. [cd/m2]"""
    return 0.0 if item.emission is None else item.emission.luminance


def radiance_of(emission: Emission, lines: list[float]) -> tuple[Floats, Floats]:
    """A light's continuous radiance (401,) [W m^-2 sr^-1 nm^-1] and that in each of the shot's lines [W m^-2 sr^-1]."""
    from renderer.colour.emission import light_radiance

    radiance, own = light_radiance(
        emission.luminance,
        colour=emission.colour,
        temperature_k=emission.temperature_k,
        spectrum=emission.spectrum,
        lines=emission.lines,
    )
    row = np.zeros(len(lines))
    for (nm, share), value in zip(emission.lines, own, strict=True):
        if share > 0.0:
            row[lines.index(nm)] += value
    return radiance, row
