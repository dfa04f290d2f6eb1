"""Objects and lights at a frame."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from renderer.shot.keyed import Keys
from renderer.shot.model import Floats, Object, Shape
from renderer.shot.moment import Moment, stack
from renderer.shot.resolve_looks import resolve_emission, resolve_material, resolve_surface
from renderer.shot.schema import objects as schema
from renderer.shot.schema import shapes as shape_schema
from renderer.shot.schema.flaws import Path as KeyPath
from renderer.shot.schema.units import METRES
from renderer.shot.transforms import combine, transform_at

ANGLES = {"apex": "apex_deg"}  # sizes of shapes that are no lengths, by their names here and in the model
PURE = ("fill", "segments")


def resolve_object(moment: Moment, keys: schema.Object, at: KeyPath) -> tuple[Object, ...]:
    """One entry of the shot's objects: an object for each placement, each followed by its filling."""
    surface = None if keys.surface is None else resolve_surface(moment, keys.surface, (*at, "surface"))
    emission = None if keys.emission is None else resolve_emission(moment, keys.emission)
    substance = keys.material or keys.below
    first = replace(
        _placed(moment, keys, at),
        role=_role(keys),
        material=None if substance is None else resolve_material(moment, substance),
        surface=surface,
        emission=emission,
        priority=keys.overlap_priority,
        roughness=moment.number(keys.roughness),
        thickness_m=0.0 if keys.thickness is None else moment.length(keys.thickness),
        smooth=_smooth(keys) if keys.smooth is None else keys.smooth,
    )
    return tuple(item for one in _each_place(moment, keys, first) for item in (one, *_filling(moment, keys, one)))


def resolve_light(moment: Moment, keys: schema.Light, at: KeyPath) -> tuple[Object, ...]:
    """One entry of the shot's lights."""
    first = replace(_placed(moment, keys, at), role="light", emission=resolve_emission(moment, keys))
    return _each_place(moment, keys, first)


def _role(keys: schema.Object) -> str:
    if keys.surface is not None:
        return "opaque"
    if keys.emission is not None:
        return "light"
    if keys.below is not None:
        return "sheet"
    return "pane" if keys.thickness is not None else "solid"


def _smooth(keys: schema.Object) -> bool:
    return keys.shape is not None and keys.shape.round


def _placed(moment: Moment, keys: schema.Placed, at: KeyPath) -> Object:
    """What objects and lights share, at the first of its places."""
    own_metres = keys.mesh is not None and str(keys.mesh).lower().endswith((".glb", ".gltf"))
    unit = METRES[keys.mesh_unit] if keys.mesh_unit else 1.0 if own_metres else moment.metres
    return Object(
        name=keys.name,
        mesh=None if keys.mesh is None else moment.path(keys.mesh, (*at, "mesh")),
        mesh_nodes=keys.nodes,
        shape=None if keys.shape is None else resolve_shape(moment, keys.shape),
        metres_per_unit=1.0 if keys.shape is not None else unit,
        matrices=_matrices(moment, [keys.transform]),
        role="solid",
        material=None,
        surface=None,
        emission=None,
        priority=0,
        roughness=0.0,
        thickness_m=0.0,
        smooth=False,
    )


def _each_place(moment: Moment, keys: schema.Placed, first: Object) -> tuple[Object, ...]:
    """The object at each of its placements."""
    if keys.placements is None:
        return (first,)
    return tuple(
        replace(first, name=f"{keys.name}[{index}]", matrices=_matrices(moment, [keys.transform, placement]))
        for index, placement in enumerate(keys.placements)
    )


def _matrices(moment: Moment, chain: list[schema.Transform]) -> Floats:
    """Object to world over the shutter; the last of the chain comes first."""
    times = moment.times if any(moves(transform) for transform in chain) else moment.times[:1]
    found = []
    for time in times:
        matrix = transform_at(chain[0], time, moment.metres)
        for transform in chain[1:]:
            matrix = combine(matrix, transform_at(transform, time, moment.metres))
        found.append(matrix)
    return stack(found)


def moves(transform: schema.Transform) -> bool:
    """Whether anything of a transform is keyed."""
    values = (transform.translation, transform.rotation, transform.scale, transform.matrix)
    return any(isinstance(value, Keys) for value in values)


def _filling(moment: Moment, keys: schema.Object, vessel: Object) -> tuple[Object, ...]:
    """What stands in a tank or bowl; the glass wins where they overlap, as they do by half a wall."""
    shape = keys.shape.vessel if keys.shape is not None else None
    if shape is None or shape.filling is None or vessel.shape is None or moment.number(shape.fill) == 0.0:
        return ()
    filling = replace(
        vessel,
        name=f"{vessel.name} filling",
        shape=Shape(f"{vessel.shape.kind}_filling", vessel.shape.sizes),
        material=resolve_material(moment, shape.filling),
        priority=vessel.priority - 1,
        roughness=0.0,
    )
    return (filling,)


def resolve_shape(moment: Moment, keys: shape_schema.Shape) -> Shape:
    """A built-in shape with its sizes in metres."""
    kind, table = keys.kind, keys.table
    if isinstance(table, shape_schema.WaterSurface):
        return Shape(kind, _water(moment, table))
    if table is None:
        return Shape(kind, {"radius" if kind == "sphere" else "size": _lengths(moment, getattr(keys, kind))})
    sizes: dict[str, Any] = {}
    for name, value in table:
        if name == "filling":
            continue
        if name in ANGLES:
            sizes[ANGLES[name]] = moment.number(value)
        elif name in PURE:
            sizes[name] = value if isinstance(value, int) else moment.number(value)
        else:
            sizes[name] = _lengths(moment, value)
    return Shape(kind, sizes)


def _lengths(moment: Moment, value: Any) -> float | tuple[float, ...]:
    """One length, or a vector of them [m]."""
    if isinstance(value, Keys):
        found = value.at(moment.frame)
        return found[0] * moment.metres if len(found) == 1 else tuple(one * moment.metres for one in found)
    if isinstance(value, tuple):
        return tuple(one * moment.metres for one in value)
    return float(value) * moment.metres


def _water(moment: Moment, keys: shape_schema.WaterSurface) -> dict[str, Any]:
    waves = tuple(
        (moment.length(w.amplitude), moment.length(w.wavelength), moment.number(w.direction), moment.number(w.phase))
        for w in keys.waves
    )
    size = tuple(value * moment.metres for value in moment.values(keys.size))
    return {"size": size, "cells": keys.cells, "waves": waves, "depth": moment.length(keys.depth)}
