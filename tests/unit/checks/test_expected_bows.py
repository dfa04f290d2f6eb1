"""Where the bows of the sun stand in a frame: against the closed form of a circle over a level horizon."""

from __future__ import annotations

import io
import math

import frame_builder as build
import numpy as np
import pytest

from renderer.checks import sphere
from renderer.checks.expected import FRAME_EDGE, HORIZON, bows_of_frame
from renderer.checks.view import FrameView
from renderer.geometry.camera import pixel_direction

SUN = build.sun(20.0, 180.0)


def test_top_and_feet_follow_the_closed_form() -> None:
    """Top at R - h over the horizon, feet at cos(azimuth) = cos R / cos h from the centre's."""
    camera = build.camera(elevation=8.0, focal=16.0)
    found = bows_of_frame(FrameView(build.frame(sun=SUN, camera=camera)))
    primary = found.bows[0]
    top = tuple(pixel_direction(camera, primary.top))
    assert sphere.elevation_deg(top, build.AXES) == pytest.approx(primary.radius_deg - 20.0, abs=1e-6)
    feet = math.degrees(math.acos(math.cos(math.radians(primary.radius_deg)) / math.cos(math.radians(20.0))))
    for crossing, azimuth in ((primary.left, 360.0 - feet), (primary.right, feet)):
        assert crossing.ends_at == HORIZON
        direction = tuple(pixel_direction(camera, crossing.pixel))
        assert sphere.azimuth_deg(direction, build.AXES) == pytest.approx(azimuth, abs=0.01)  # steps of 0.008 degree
        assert sphere.elevation_deg(direction, build.AXES) == pytest.approx(0.0, abs=0.01)


def test_the_antisolar_point_is_the_centre() -> None:
    found = bows_of_frame(FrameView(build.frame(sun=SUN, camera=build.camera(elevation=-10.0))))
    assert found.antisolar_in_frame
    assert (found.antisolar_elevation_deg, found.antisolar_azimuth_deg) == pytest.approx((-20.0, 0.0))
    direction = tuple(pixel_direction(build.camera(elevation=-10.0), found.antisolar))
    assert sphere.angle_deg(direction, sphere.opposite(SUN.direction)) < 1e-9


def test_an_arc_ends_at_the_edge_of_a_narrow_frame() -> None:
    found = bows_of_frame(FrameView(build.frame(sun=SUN, camera=build.camera(elevation=15.0, focal=30.0))))
    primary = found.bows[0]
    assert (primary.left.ends_at, primary.right.ends_at) == (FRAME_EDGE, FRAME_EDGE)
    assert primary.left.pixel[0] == pytest.approx(0.0, abs=2.0)
    assert primary.right.pixel[0] == pytest.approx(1280.0, abs=2.0)


@pytest.mark.parametrize(
    ("sun", "words"),
    [
        (None, "no sun"),
        (build.sun(-2.0, 180.0), "has set"),
        (build.sun(60.0, 180.0), "too high: the top of the bow is 18.4° below"),
        (build.sun(20.0, 0.0), "Outside the frame"),
        (build.sun(10.0, 90.0), "to the left"),
        (build.sun(10.0, 270.0), "to the right"),
    ],
)
def test_why_no_bow_can_be_seen(sun: object, words: str) -> None:
    found = bows_of_frame(FrameView(build.frame(sun=sun)))
    reasons = found.why_not + "".join(bow.why_not for bow in found.bows)
    assert words in reasons


def test_turning_by_what_the_reason_says_brings_the_bow_into_the_frame() -> None:
    sun = build.sun(10.0, 90.0)
    away = bows_of_frame(FrameView(build.frame(sun=sun, camera=build.camera(0.0)))).bows[0]
    turn = float(away.why_not.split("nearest point is ")[1].split("°")[0])
    assert bows_of_frame(FrameView(build.frame(sun=sun, camera=build.camera(-turn)))).bows[0].why_not == ""


@pytest.mark.parametrize("width", [800, 1440])
def test_the_overlay_draws_the_primary_where_it_stands(width: int) -> None:
    from PIL import Image

    from renderer.reports.overlay import MARGIN, overlay_png

    view = FrameView(build.frame(sun=SUN, camera=build.camera(elevation=8.0, focal=16.0)))
    picture = np.asarray(Image.open(io.BytesIO(overlay_png(view, width=width))).convert("RGB")).astype(int)
    assert picture.shape[1] == width
    scale = width * (1.0 - 2.0 * MARGIN) / 1280.0
    top = bows_of_frame(view).bows[0].top
    x, y = MARGIN * width + top[0] * scale, 0.6 * MARGIN * width + top[1] * scale
    colours = picture[round(y) - 2 : round(y) + 3, round(x)]
    saturation = colours.max(axis=1) - colours.min(axis=1)
    assert saturation.max() > 100  # a bright band of colour
    far = picture[round(y + 60 * scale), round(x)]
    assert far.max() - far.min() < 30  # and plain ground below it
