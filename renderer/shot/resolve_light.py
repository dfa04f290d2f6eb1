"""Sun and sky at a frame."""

from __future__ import annotations

import math

from renderer.base.exact_functions import sine_cosine_deg
from renderer.shot.model import Axes, Sky, Sun, Vector
from renderer.shot.moment import Moment
from renderer.shot.schema.flaws import Flaw
from renderer.shot.schema.sun_and_sky import LOW_SUN_EXPECTED, LOWEST_SUN_DEG, SKIES_BY_SUN
from renderer.shot.transforms import dot, unit


def direction_of(elevation_deg: float, azimuth_deg: float, axes: Axes) -> Vector:
    """Unit world direction by elevation and azimuth, clockwise from north."""
    (up, east), (level, north) = (part.tolist() for part in sine_cosine_deg([elevation_deg, azimuth_deg]))
    x, y, z = (level * north * axes.north[i] + level * east * axes.east[i] + up * axes.up[i] + 0.0 for i in range(3))
    return unit((x, y, z))


def angles_of(direction: Vector, axes: Axes) -> tuple[float, float]:
    """Elevation and azimuth of a unit direction [degrees]; azimuth from 0 up to 360."""
    up, north, east = (dot(direction, axis) for axis in (axes.up, axes.north, axes.east))
    azimuth = math.degrees(math.atan2(east, north)) % 360.0
    return math.degrees(math.atan2(up, math.hypot(east, north))), azimuth


def resolve_sun(moment: Moment, axes: Axes) -> Sun | None:
    """The sun at a frame, if there is one."""
    keys = moment.shot.sun
    if keys is None:
        return None
    visibility = moment.number(keys.visibility)
    if keys.direction is not None:
        stated = moment.values(keys.direction)
        if not any(stated):
            what = f"`sun.direction` has no length in frame {moment.frame}"
            moment.flaws.append(Flaw(("sun", "direction"), what, "3 numbers that are not all 0"))
            stated = axes.up
        direction = unit(stated)
        elevation, azimuth = angles_of(direction, axes)
        _note_sunk_sun(moment, elevation)
        return Sun(direction, elevation, azimuth, visibility)
    assert keys.azimuth is not None
    assert keys.elevation is not None
    elevation, azimuth = moment.number(keys.elevation), moment.number(keys.azimuth)
    return Sun(direction_of(elevation, azimuth, axes), elevation, azimuth, visibility)


def _note_sunk_sun(moment: Moment, elevation_deg: float) -> None:
    """A flaw where `sun.direction` leads so far down that no sky is known for it; a stated elevation was checked."""
    kind = moment.shot.sky.kind
    if kind in SKIES_BY_SUN and elevation_deg < LOWEST_SUN_DEG:
        where = f"{elevation_deg:.4g} degrees high in frame {moment.frame}"
        what = f"`sun.direction` is {where}, and no {kind} sky is known for so low a sun"
        moment.flaws.append(Flaw(("sun", "direction"), what, LOW_SUN_EXPECTED))


def resolve_sky(moment: Moment) -> Sky:
    """The sky at a frame."""
    keys = moment.shot.sky
    return Sky(
        kind=keys.kind,
        luminance=moment.number(keys.luminance),
        colour=moment.vector(keys.colour),
        picture=None if keys.picture is None else moment.path(keys.picture, ("sky", "picture")),
        encoding=keys.encoding,
        scale=moment.number(keys.scale),
        turn_deg=moment.number(keys.turn),
    )
