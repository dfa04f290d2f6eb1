"""bow.sun-behind and bow.sun-height: a bow stands opposite the sun, and only while the sun is low."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from renderer.checks import sphere
from renderer.checks.bow_limits import KNOWN_ORDERS, BowLimits, limits_of
from renderer.checks.findings import IMPLAUSIBLE, IMPOSSIBLE, Finding, Fix
from renderer.checks.places import sun_values
from renderer.checks.view import AROUND_SUN, FrameView
from renderer.shot.model import BowToCheck, Vector

SOURCE_BEHIND = "Descartes 1637, Les Météores VIII: no light of the bow leaves a drop nearer to the sun than this"
SOURCE_HEIGHT = "Descartes 1637, Les Météores VIII; limits from full scattering series for fresh water of 0 to 30 °C"
SUN_SET_DEG = -0.27  # apparent height of the centre of the disc when its upper edge is on the horizon
CLOCKS_DEG = np.arange(0.0, 360.0, 3.0)


def check_sun_behind(view: FrameView, facts: object) -> Iterator[Finding]:
    """Findings for bows seen in one frame with the sun, or with the sun in front of the viewer."""
    if view.sun is None:
        return
    for bow in view.bows:
        if bow.order not in KNOWN_ORDERS or bow.order in AROUND_SUN:
            continue
        limits = limits_of(bow.order)
        nearest_deg = _nearest_to_sun_deg(view, view.sun, bow, limits)
        if nearest_deg < 90.0 or (view.in_frame(view.sun) and nearest_deg < limits.no_light_within_deg):
            yield _sun_in_front(view, view.sun, bow, limits, nearest_deg)


def _nearest_to_sun_deg(view: FrameView, sun: Vector, bow: BowToCheck, limits: BowLimits) -> float:
    """Smallest angle between the sun and what the frame shows of the bow; of the frame's axis for a bow without centre.

    A bow with nothing in the frame stands for itself by its centre: the far side of its circle is what can be seen.
    """
    if bow.centre is None:
        return min(180.0, sphere.angle_deg(sun, view.forward) + view.half_diagonal_deg)
    radius_deg = bow.radius_deg if bow.radius_deg is not None else limits.typical_deg
    circle = view.circle(bow.centre, radius_deg, CLOCKS_DEG)
    seen = circle[view.inside(view.pixels(circle))]
    if not len(seen):
        return sphere.angle_deg(sun, bow.centre)
    return float(np.degrees(np.arccos(np.clip(seen @ np.array(sun), -1.0, 1.0))).min())


def _sun_in_front(view: FrameView, sun: Vector, bow: BowToCheck, limits: BowLimits, nearest_deg: float) -> Finding:
    together = view.in_frame(sun)
    why = "The sun is in the frame with the bow." if together else "The sun is in front of the viewer."
    return Finding(
        rule="bow.sun-behind",
        title="Sun behind the viewer",
        severity=IMPOSSIBLE,
        subject=bow.name,
        measured=round(nearest_deg, 2),
        expected=(limits.no_light_within_deg, 180.0),
        unit="degrees from the sun",
        why=f"{why} Drops send the light of a {limits.name} back towards the sun, so its viewer has the sun behind.",
        source=SOURCE_BEHIND,
        fix=_behind_fix(view, sun, bow),
        excess=limits.no_light_within_deg - nearest_deg,
    )


def _behind_fix(view: FrameView, sun: Vector, bow: BowToCheck) -> Fix:
    """The sun opposite the bow's centre; behind the camera where that is below the horizon, or no centre is stated."""
    if bow.centre is not None and sphere.elevation_deg(bow.centre, view.axes) < 0.0:
        values = sun_values(view, sphere.opposite(bow.centre))
        where = "opposite the centre of the bow"
    else:
        ahead = bow.centre if bow.centre is not None else view.forward
        height = max(1.0, min(sphere.elevation_deg(sun, view.axes), 20.0))
        azimuth = (sphere.azimuth_deg(ahead, view.axes) + 180.0) % 360.0
        values = sun_values(view, sphere.direction_at(height, azimuth, view.axes))
        where = "behind the camera"
    return Fix(
        f"Put the sun {where}: elevation {values['sun.elevation']}°, azimuth {values['sun.azimuth']}°.",
        values,
    )


def check_sun_height(view: FrameView, facts: object) -> Iterator[Finding]:
    """Findings for bows under a sun that is too high for any of the bow to stand above a level horizon, or has set."""
    if view.sun is None:
        return
    height_deg = sphere.elevation_deg(view.sun, view.axes)
    for bow in view.bows:
        if bow.order not in KNOWN_ORDERS:
            continue
        limits = limits_of(bow.order)
        if height_deg < SUN_SET_DEG:
            yield _sun_has_set(bow, height_deg)
        elif limits.highest_sun_deg is not None and height_deg > limits.highest_sun_deg:
            yield _sun_too_high(bow, limits, limits.highest_sun_deg, height_deg)


def _sun_too_high(bow: BowToCheck, limits: BowLimits, highest_deg: float, height_deg: float) -> Finding:
    what = "all of its light" if height_deg > (limits.last_light_deg or highest_deg) else "its brightest ring"
    return Finding(
        rule="bow.sun-height",
        title="Sun too high for a bow",
        severity=IMPLAUSIBLE,
        subject=bow.name,
        measured=round(height_deg, 2),
        expected=(SUN_SET_DEG, highest_deg),
        unit="degrees above the horizon",
        why=(
            f"With the sun this high the {limits.name} lies below a level horizon, {what} included; only drops near by "
            "(spray) or seen from a height can show it. The camera's own height is not counted yet."
        ),
        source=SOURCE_HEIGHT,
        fix=Fix(f"Lower the sun to {highest_deg}° or less.", {"sun.elevation": highest_deg}),
        excess=height_deg - highest_deg,
    )


def _sun_has_set(bow: BowToCheck, height_deg: float) -> Finding:
    return Finding(
        rule="bow.sun-height",
        title="Sun below the horizon",
        severity=IMPOSSIBLE,
        subject=bow.name,
        measured=round(height_deg, 2),
        expected=(SUN_SET_DEG, None),
        unit="degrees above the horizon",
        why="A bow is made by direct light, and the sun has set.",
        source="The sun's apparent half-diameter, 0.27°: IAU 2015 resolution B3",
        fix=Fix("Raise the sun above the horizon.", {"sun.elevation": 1.0}),
        excess=SUN_SET_DEG - height_deg,
    )
