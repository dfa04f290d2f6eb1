"""Bows to check at a frame."""

from __future__ import annotations

import numpy as np

from renderer.shot.lens import pixel_direction
from renderer.shot.model import Axes, BowToCheck, Camera, Vector
from renderer.shot.moment import Moment
from renderer.shot.resolve_light import direction_of
from renderer.shot.schema.checks import Bow, Centre
from renderer.shot.schema.flaws import Flaw
from renderer.shot.transforms import unit


def resolve_bow(moment: Moment, keys: Bow, index: int, camera: Camera, axes: Axes) -> BowToCheck:
    """A bow at a frame, its centre as a direction in the world."""
    centre, pixel, anchored = None, None, "direction"
    if keys.centre is not None:
        centre, pixel, anchored = _centre(moment, keys.centre, index, camera, axes)
    return BowToCheck(
        name=keys.name,
        order=keys.order,
        centre=centre,
        centre_pixel=pixel,
        anchored=anchored,
        radius_deg=moment.maybe(keys.radius),
        width_deg=moment.maybe(keys.width),
        outer_colour=keys.outer_colour,
    )


def _centre(
    moment: Moment, keys: Centre, index: int, camera: Camera, axes: Axes
) -> tuple[Vector | None, tuple[float, float] | None, str]:
    """Direction, pixel where stated, and how the shot states it."""
    if keys.pixel is not None:
        x, y = moment.values(keys.pixel)
        direction = pixel_direction(camera, x, y)
        if direction is None:
            what = f"`pixel` has no direction through this lens in frame {moment.frame}"
            moment.flaws.append(
                Flaw(("bows_to_check", index, "centre", "pixel"), what, "a pixel that the distortion reaches")
            )
        return direction, (x, y), "pixel"
    if keys.point is not None:
        steps = camera.matrices[:, :, 3]
        eye = 0.5 * (steps[(len(steps) - 1) // 2] + steps[len(steps) // 2])
        away = np.array(moment.values(keys.point)) * moment.metres - eye
        if not away.any():
            what = f"`point` is where the camera stands in frame {moment.frame}"
            moment.flaws.append(Flaw(("bows_to_check", index, "centre", "point"), what, "a point away from the camera"))
            return None, None, "world"
        return unit(tuple(float(value) for value in away)), None, "world"
    assert keys.azimuth is not None
    assert keys.elevation is not None
    return direction_of(moment.number(keys.elevation), moment.number(keys.azimuth), axes), None, "direction"
