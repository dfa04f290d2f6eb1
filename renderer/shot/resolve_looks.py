"""Materials, surfaces and emission at a frame."""

from __future__ import annotations

import numpy as np

from renderer.base.errors import InputError
from renderer.shot.model import Dispersion, Emission, Material, Surface
from renderer.shot.moment import Moment
from renderer.shot.schema import materials as material_schema
from renderer.shot.schema import surfaces as surface_schema
from renderer.shot.schema.flaws import Flaw
from renderer.shot.schema.flaws import Path as KeyPath

LABORATORY_C = 20.0


def resolve_material(moment: Moment, name: str) -> Material:
    """A material by name: the shot's own, else the library's."""
    from renderer.optics.materials import library_entry

    keys = moment.shot.materials.get(name)
    if keys is None:
        return Material(name, name, LABORATORY_C, library_entry(name).salinity, None, None)
    salinity = moment.maybe(keys.salinity)
    if salinity is None:
        salinity = 0.0 if keys.like is None else library_entry(keys.like).salinity
    return Material(
        name=name,
        like=None if keys.like is None else str(keys.like),
        temperature_c=moment.number(keys.temperature),
        salinity=salinity,
        dispersion=None if keys.refractive_index is None else _dispersion(moment, keys.refractive_index),
        absorption_per_m=None if keys.absorption is None else keys.absorption.per_metre,
    )


def material_flaws(moment: Moment, name: str) -> list[Flaw]:
    """What physics has against a material of the shot's own: an index out of all bounds, water that is too hot."""
    from renderer.optics.materials import material_tables

    keys, material = moment.shot.materials[name], resolve_material(moment, name)
    too_hot = _water_flaws(material, name, keys.model_fields_set)
    if too_hot:
        return too_hot
    law = material.dispersion
    model, values = (law.model, law.values) if law is not None else (None, ())
    try:
        like, absorption = material.like, material.absorption_per_m
        with np.errstate(all="ignore"):  # what comes out as not-a-number is refused in words
            material_tables(like, material.temperature_c, material.salinity, model, values, absorption)
    except InputError as error:
        stated = [key for key in ("refractive_index",) if key in keys.model_fields_set]
        return [Flaw(("materials", name, *stated), fault.what, fault.expected) for fault in error.faults]
    return []


def _water_flaws(material: Material, name: str, stated: set[str]) -> list[Flaw]:
    """Water as no table has it: too hot for the salt in it."""
    from renderer.optics.library import library_entry
    from renderer.optics.water import check_temperature

    if material.like is None or not library_entry(material.like).is_water:
        return []
    try:
        check_temperature(material.temperature_c, material.salinity)
    except InputError as error:
        keys = [key for key in ("temperature", "salinity") if key in stated]
        return [Flaw(("materials", name, *keys[:1]), fault.what, fault.expected) for fault in error.faults]
    return []


def _dispersion(moment: Moment, keys: material_schema.RefractiveIndex) -> Dispersion:
    if keys.constant is not None:
        return Dispersion("constant", (moment.number(keys.constant),))
    if keys.abbe is not None:
        return Dispersion("abbe", moment.values(keys.abbe))
    if keys.cauchy is not None:
        return Dispersion("cauchy", keys.cauchy)
    if keys.sellmeier is not None:
        return Dispersion("sellmeier", keys.sellmeier)
    assert keys.table is not None
    return Dispersion("table", keys.table)


def resolve_surface(moment: Moment, keys: surface_schema.Surface, at: KeyPath) -> Surface:
    """A surface at a frame."""
    roughness = moment.maybe(keys.roughness)
    if roughness is None:
        roughness = 1.0 if keys.finish == "matt" else 0.0
    return Surface(
        reflectance=None if keys.reflectance is None else moment.vector(keys.reflectance),
        space=keys.space,
        spectrum=keys.spectrum,
        picture=None if keys.picture is None else moment.path(keys.picture, (*at, "picture")),
        encoding=keys.encoding,
        finish=keys.finish,
        roughness=roughness,
        wetness=moment.number(keys.wetness),
        film_roughness=moment.number(keys.film_roughness),
    )


def resolve_emission(moment: Moment, keys: surface_schema.Emission) -> Emission:
    """The light of a surface at a frame; white where nothing else is stated."""
    colour = None if keys.colour is None else moment.vector(keys.colour)
    plain = keys.temperature is None and keys.spectrum is None and not keys.lines
    return Emission(
        luminance=moment.number(keys.luminance),
        colour=(1.0, 1.0, 1.0) if colour is None and plain else colour,
        temperature_k=moment.maybe(keys.temperature),
        spectrum=keys.spectrum,
        lines=keys.lines,
        two_sided=keys.two_sided,
    )
