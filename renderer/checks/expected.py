"""Where the bows of this sun stand in a frame, or why none can be seen there."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from renderer.checks import sphere
from renderer.checks.bow_limits import limits_of
from renderer.checks.bow_sun import SUN_SET_DEG
from renderer.checks.view import FrameView
from renderer.shot.model import Vector

Floats = npt.NDArray[np.float64]
Pixel = tuple[float, float]

ORDERS = (1, 2)
STEP_DEG = 0.5
CLOCKS_DEG = np.arange(-180.0, 180.0, STEP_DEG)  # from the circle's foot, up the left, over the top, down the right

FINE_STEPS = 65

HORIZON = "horizon"
FRAME_EDGE = "frame edge"


@dataclass(frozen=True)
class Crossing:
    """Where a bow's visible arc ends: the pixel, and what ends it."""

    pixel: Pixel
    ends_at: str


@dataclass(frozen=True)
class ExpectedBow:
    """One bow of this sun in one frame. Pixels are from the top left of the full frame, None where behind the lens.

    `top` is the highest point of the circle, wherever that lies; `left` and `right` end the longest stretch that is in
    the frame and above the horizon; `arc_deg` is how much of the circle that is, by clock angle. `why_not` says why
    none can be seen, and is empty when some can.
    """

    order: int
    name: str
    radius_deg: float
    top: Pixel | None
    top_in_frame: bool
    left: Crossing | None
    right: Crossing | None
    arc_deg: float
    why_not: str


@dataclass(frozen=True)
class FrameBows:
    """`antisolar` is the bows' common centre. `why_not` says why there are no bows at all, and is empty else."""

    frame: int
    antisolar: Pixel | None
    antisolar_in_frame: bool
    antisolar_elevation_deg: float | None
    antisolar_azimuth_deg: float | None
    bows: tuple[ExpectedBow, ...]
    why_not: str = ""


def bows_of_frame(view: FrameView) -> FrameBows:
    """Where the primary and secondary bow of the shot's sun stand in one frame."""
    if view.antisolar is None:
        return FrameBows(view.frame, None, False, None, None, (), "There is no sun in the shot.")
    centre = view.antisolar
    elevation = sphere.elevation_deg(centre, view.axes)
    why_not = "The sun has set; no direct light is left to make a bow." if -elevation < SUN_SET_DEG else ""
    return FrameBows(
        frame=view.frame,
        antisolar=view.pixel(centre),
        antisolar_in_frame=view.in_frame(centre),
        antisolar_elevation_deg=elevation,
        antisolar_azimuth_deg=sphere.azimuth_deg(centre, view.axes),
        bows=() if why_not else tuple(_expected(view, centre, order) for order in ORDERS),
        why_not=why_not,
    )


def _expected(view: FrameView, centre: Vector, order: int) -> ExpectedBow:
    limits = limits_of(order)
    circle = view.circle(centre, limits.typical_deg, CLOCKS_DEG)
    pixels = view.pixels(circle)
    heights = circle @ np.array(view.axes.up)
    above = heights >= 0.0
    seen = above & view.inside(pixels)
    start, stop = _longest_stretch(seen)
    top = pixels[len(CLOCKS_DEG) // 2]
    return ExpectedBow(
        order=order,
        name=limits.name,
        radius_deg=limits.typical_deg,
        top=(float(top[0]), float(top[1])) if np.isfinite(top).all() else None,
        top_in_frame=bool(view.inside(top[None])[0]),
        left=_crossing(view, centre, order, start, start - 1, above) if stop > start else None,
        right=_crossing(view, centre, order, stop - 1, stop, above) if stop > start else None,
        arc_deg=STEP_DEG * float(seen.sum()),
        why_not="" if stop > start else _why_not(view, circle, above, heights),
    )


def _longest_stretch(seen: npt.NDArray[np.bool_]) -> tuple[int, int]:
    """The longest run of True, as (first, one past the last); (0, 0) for none. The circle's foot is not joined up."""
    edges = np.flatnonzero(np.diff(np.concatenate(([False], seen, [False])).astype(np.int8)))
    if not len(edges):
        return 0, 0
    starts, stops = edges[::2], edges[1::2]
    longest = int(np.argmax(stops - starts))
    return int(starts[longest]), int(stops[longest])


def _crossing(
    view: FrameView, centre: Vector, order: int, inside: int, outside: int, above: npt.NDArray[np.bool_]
) -> Crossing | None:
    """The end of an arc, between the sample `inside` and its neighbour `outside`, by finer steps."""
    if not 0 <= outside < len(CLOCKS_DEG):
        return None  # the arc runs on through the circle's foot
    clocks = np.linspace(CLOCKS_DEG[inside], CLOCKS_DEG[outside], FINE_STEPS)
    circle = view.circle(centre, limits_of(order).typical_deg, clocks)
    pixels = view.pixels(circle)
    seen = view.inside(pixels) & (circle @ np.array(view.axes.up) >= 0.0)
    x, y = pixels[int(np.flatnonzero(seen)[-1])]
    return Crossing((float(x), float(y)), FRAME_EDGE if above[outside] else HORIZON)


def _why_not(view: FrameView, circle: Floats, above: npt.NDArray[np.bool_], heights: Floats) -> str:
    """Why nothing of a circle is in the frame and above the horizon."""
    if not above.any():
        below_deg = -float(np.degrees(np.arcsin(heights.max())))
        return (
            f"The sun is too high: the top of the bow is {below_deg:.1f}° below the horizon "
            "(drops near by, or seen from a height, could still show it)."
        )
    visible = circle[above]
    nearest = visible[int(np.argmax(visible @ np.array(view.forward)))]
    target = (float(nearest[0]), float(nearest[1]), float(nearest[2]))
    pan = sphere.azimuth_deg(target, view.axes) - sphere.azimuth_deg(view.forward, view.axes)
    pan = (pan + 180.0) % 360.0 - 180.0
    tilt = sphere.elevation_deg(target, view.axes) - sphere.elevation_deg(view.forward, view.axes)
    sideways = f"{abs(pan):.0f}° to the {'right' if pan > 0 else 'left'}"
    upright = f"{abs(tilt):.0f}° {'up' if tilt > 0 else 'down'}"
    return f"Outside the frame: its nearest point is {sideways} and {upright} from the camera's axis."
