"""Directions on the sphere, as plain tuples: bows are compared there, never on the flat picture."""

from __future__ import annotations

import math

from renderer.shot.model import Axes, Vector


def dot(a: Vector, b: Vector) -> float:
    """Scalar product."""
    return a[0] * b[0] + a[1] * b[1] + a[2] * b[2]


def cross(a: Vector, b: Vector) -> Vector:
    """Vector product a x b."""
    return a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]


def combine(p: float, a: Vector, q: float, b: Vector) -> Vector:
    """p a + q b."""
    return p * a[0] + q * b[0], p * a[1] + q * b[1], p * a[2] + q * b[2]


def unit(a: Vector) -> Vector:
    """`a` scaled to length one; `a` must not be zero."""
    length = math.sqrt(dot(a, a))
    return a[0] / length, a[1] / length, a[2] / length


def opposite(a: Vector) -> Vector:
    """The direction straight the other way."""
    return -a[0], -a[1], -a[2]


def angle_deg(a: Vector, b: Vector) -> float:
    """Angle between two directions, exact near 0 and 180 as well. [degrees]"""
    c = cross(a, b)
    return math.degrees(math.atan2(math.sqrt(dot(c, c)), dot(a, b)))


def elevation_deg(direction: Vector, axes: Axes) -> float:
    """Height of a unit direction over the horizon. [degrees]"""
    return math.degrees(math.asin(max(-1.0, min(1.0, dot(direction, axes.up)))))


def azimuth_deg(direction: Vector, axes: Axes) -> float:
    """Compass bearing of a direction, clockwise from north, in [0, 360). [degrees]"""
    bearing = math.degrees(math.atan2(dot(direction, axes.east), dot(direction, axes.north)))
    return bearing % 360.0 % 360.0  # twice: a hair below 0 is 360.0 after the first


def direction_at(elevation: float, azimuth: float, axes: Axes) -> Vector:
    """The unit direction at an elevation and azimuth. [degrees]"""
    e, a = math.radians(elevation), math.radians(azimuth)
    level = combine(math.cos(e) * math.cos(a), axes.north, math.cos(e) * math.sin(a), axes.east)
    return combine(1.0, level, math.sin(e), axes.up)


def mirrored(direction: Vector, axes: Axes) -> Vector:
    """The direction mirrored in level water."""
    return combine(1.0, direction, -2.0 * dot(direction, axes.up), axes.up)


def on_circle(centre: Vector, radius: float, clock: float, axes: Axes) -> Vector:
    """The direction `radius` from `centre`, at `clock` degrees from its top, clockwise as seen. [degrees]"""
    top = combine(1.0, axes.up, -dot(axes.up, centre), centre)
    top = unit(top) if dot(top, top) > 1e-18 else axes.north  # straight up or down there is no top: north stands for it
    right = cross(centre, top)
    r, c = math.radians(radius), math.radians(clock)
    outward = combine(math.cos(c), top, math.sin(c), right)
    return combine(math.cos(r), centre, math.sin(r), outward)
