"""A bow as a circle on the sphere: its centre, its points, its visible arc over a level horizon, and fits to it.

Directions are unit vectors in any right-handed axes, `up` among them. A bow is compared as directions on the sphere,
never as pixels. Clock angles are 0 at the circle's top and run clockwise as seen by a viewer who faces its centre.
"""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from renderer.base.errors import Fault, InputError

Floats = npt.NDArray[np.float64]


def unit_rows(vectors: npt.ArrayLike) -> Floats:
    """The vectors (..., 3) scaled to length one; InputError for one of no length."""
    rows = np.asarray(vectors, dtype=np.float64)
    length = np.linalg.norm(rows, axis=-1, keepdims=True)
    if rows.shape[-1:] != (3,) or not np.all(np.isfinite(length) & (length > 0.0)):
        raise InputError(Fault("a direction has no length", expected="three finite numbers, not all 0"))
    return np.asarray(rows / length)


def antisolar_point(sun_direction: npt.ArrayLike) -> Floats:
    """Direction of the antisolar point, (3,): opposite the sun as it is seen, refraction by the air included."""
    return -unit_rows(sun_direction)


def mirrored_sun_centre(sun_direction: npt.ArrayLike, up: npt.ArrayLike) -> Floats:
    """Centre of a reflected-light bow, (3,): opposite the sun's mirror in level water, so as high as the sun is."""
    centre, zenith = antisolar_point(sun_direction), unit_rows(up)
    return np.asarray(centre - 2.0 * (centre @ zenith) * zenith)


def angle_between_deg(first: npt.ArrayLike, second: npt.ArrayLike) -> Floats:
    """Angle between directions (..., 3) [deg]; exact for small angles too (Kahan's half-angle form)."""
    a, b = unit_rows(first), unit_rows(second)
    apart, together = np.linalg.norm(a - b, axis=-1), np.linalg.norm(a + b, axis=-1)
    return np.asarray(np.degrees(2.0 * np.arctan2(apart, together)))


def elevation_deg(direction: npt.ArrayLike, up: npt.ArrayLike) -> Floats:
    """Height of directions (..., 3) over the level horizon [deg]."""
    return np.asarray(90.0 - angle_between_deg(direction, up))


def circle_directions(centre: npt.ArrayLike, radius_deg: float, up: npt.ArrayLike, clock_deg: npt.ArrayLike) -> Floats:
    """Unit directions (n, 3) of a bow's points at clock angles; InputError with the centre straight up or down."""
    middle, zenith = unit_rows(centre), unit_rows(up)
    top = zenith - (zenith @ middle) * middle
    if np.linalg.norm(top) < 1e-9:
        raise InputError(
            Fault("the bow's centre is straight up or down, so it has no top", expected="any other centre")
        )
    top = unit_rows(top)
    right = np.cross(middle, top)
    clock = np.radians(np.atleast_1d(np.asarray(clock_deg, dtype=np.float64)))[:, None]
    radius = math.radians(radius_deg)
    around = np.cos(clock) * top + np.sin(clock) * right
    return np.asarray(math.cos(radius) * middle + math.sin(radius) * around)


class Arc(NamedTuple):
    """What of a bow stands over a level horizon. Angles in degrees; feet are where it meets the horizon."""

    top_elevation_deg: float
    half_arc_clock_deg: float  # from the top to each foot; 180 where the whole circle is up, 0 where none is
    foot_azimuth_deg: float | None  # from the centre's azimuth to each foot; None where it has no feet
    visible_share: float  # of the circle, in [0, 1]


def visible_arc(radius_deg: float, sun_elevation_deg: float, mirrored: bool = False) -> Arc:
    """The arc over a level horizon for a sun at `sun_elevation_deg`, seen from the ground.

    The centre is h below the horizon (h above for a reflected-light bow, `mirrored`): top at R - h; at the feet
    cos clock = tan h / tan R and cos azimuth = cos R / cos h. R must be within 0 to 90 degrees.
    """
    if not 0.0 < radius_deg < 90.0 or not -90.0 <= sun_elevation_deg <= 90.0:
        raise InputError(
            Fault("a bow's radius or the sun's elevation is outside its range", expected="0-90, -90-90 degrees")
        )
    below = -sun_elevation_deg if mirrored else sun_elevation_deg
    if below >= radius_deg:
        return Arc(radius_deg - below, 0.0, None, 0.0)
    if below <= -radius_deg:
        return Arc(radius_deg - below, 180.0, None, 1.0)
    h, radius = math.radians(below), math.radians(radius_deg)
    clock = math.degrees(math.acos(max(-1.0, min(1.0, math.tan(h) / math.tan(radius)))))
    azimuth = math.degrees(math.acos(max(-1.0, min(1.0, math.cos(radius) / math.cos(h)))))
    return Arc(radius_deg - below, clock, azimuth, clock / 180.0)


def highest_sun_deg(radius_deg: float) -> float:
    """Sun height [deg] from which nothing of the ring is over a level horizon: its own radius."""
    return radius_deg


def sun_elevation_for_top_deg(radius_deg: float, top_elevation_deg: float) -> float:
    """The sun's height [deg] that puts the top of a bow of this radius at `top_elevation_deg`."""
    return radius_deg - top_elevation_deg


class CircleFit(NamedTuple):
    """A circle on the sphere through directions: `centre` unit (3,), `radius_deg`, and the residuals' spread."""

    centre: Floats
    radius_deg: float
    rms_deg: float


def fit_circle(directions: npt.ArrayLike) -> CircleFit:
    """The circle that best meets unit directions (n >= 3, 3): the plane of least squares through them.

    Of the two centres the one with a radius of 90 degrees or less. InputError for fewer than 3, or for points that lie
    on one spot. The plane's fit weighs a residual by sin R, which is alike for all points of one circle.
    """
    points = unit_rows(directions)
    if points.ndim != 2 or len(points) < 3:
        raise InputError(Fault("a circle needs three directions or more", expected="an array (n, 3) with n >= 3"))
    middle = points.mean(axis=0)
    _, spread, axes = np.linalg.svd(points - middle, full_matrices=False)
    if spread[1] < 1e-9:
        raise InputError(
            Fault("the directions lie on one spot or in one line", expected="directions spread over an arc")
        )
    centre = axes[2] if axes[2] @ middle >= 0.0 else -axes[2]
    away = angle_between_deg(points, centre)
    return CircleFit(centre, float(away.mean()), float(away.std()))
