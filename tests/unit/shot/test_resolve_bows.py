"""Bows to check: their centre as a direction in the world."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
import shot_writing as shots

from renderer.base.errors import InputError
from renderer.geometry import camera as projection
from renderer.shot.lens import pixel_direction


def bow(keys: str) -> str:
    return f'[[bows_to_check]]\nname = "comp bow"\n{keys}\n'


def test_by_bearing(tmp_path: Path) -> None:
    (found,) = shots.frame(tmp_path, bow("centre = { azimuth = 90, elevation = -30 }\nradius = 42\norder = 2")).bows
    assert found.centre == pytest.approx((np.sqrt(0.75), -0.5, 0.0), abs=1e-15)
    assert (found.anchored, found.order, found.radius_deg, found.width_deg, found.outer_colour) == (
        "direction",
        2,
        42.0,
        None,
        None,
    )


LENS = "distortion = { k1 = -0.08, k2 = 0.01, p1 = 0.002, p2 = -0.001 }\n"


@pytest.mark.parametrize("lens", ["", LENS])
@pytest.mark.parametrize("pixel", [(640.0, 360.0), (3.0, 5.0), (1290.0, 800.0)])
def test_by_pixel_as_projection_has_it(tmp_path: Path, lens: str, pixel: tuple[float, float]) -> None:
    """This room inverts the lens for itself, since it may not know the room that projects; the two must agree."""
    found = shots.frame(tmp_path, lens + bow(f"centre = {{ pixel = [{pixel[0]}, {pixel[1]}] }}"))
    (one,) = found.bows
    assert (one.anchored, one.centre_pixel) == ("pixel", pixel)
    assert one.centre == pytest.approx(tuple(projection.pixel_direction(found.camera, pixel)), abs=1e-12)


def test_a_pixel_behind_the_fold_of_the_lens_has_no_direction(tmp_path: Path) -> None:
    folded = "distortion = { k1 = -0.9 }\n"
    found = shots.frame(tmp_path, folded)
    assert pixel_direction(found.camera, 640.0, 360.0) is not None
    assert pixel_direction(found.camera, -2000.0, 360.0) is None
    with pytest.raises(InputError, match="no direction through this lens in frame 1001"):
        shots.frame(tmp_path, folded + bow("centre = { pixel = [-2000, 360] }"))


def test_by_a_point_of_the_world_from_a_moving_camera(tmp_path: Path) -> None:
    text = shots.BASE.replace("position = [0, 1, 5]", "position = { 1001 = [0, 1, 5], 1003 = [4, 1, 5] }")
    shot = shots.read(tmp_path, text + bow("centre = { point = [0, 1, -5] }"), whole=True)
    assert shot.at(1000).bows[0].centre == pytest.approx((0.0, 0.0, -1.0), abs=1e-15)
    away = np.array([-2.0, 0.0, -10.0])
    assert shot.at(1002).bows[0].centre == pytest.approx(tuple(away / np.linalg.norm(away)), abs=1e-12)
    assert shot.at(1002).bows[0].anchored == "world"


def test_without_a_centre(tmp_path: Path) -> None:
    (found,) = shots.frame(tmp_path, bow('outer_colour = "violet"')).bows
    assert (found.centre, found.centre_pixel, found.outer_colour) == (None, None, "violet")


def test_sign_offs_and_the_line_that_fails(tmp_path: Path) -> None:
    item = '{ rule = "bow.radius", why = "wide", until = 2027-03-01, frames = "1001-1005" }'
    text = f'[checks]\nfail_on = "advice"\nsign_off = [{item}]\n'
    shot = shots.read(tmp_path, text)
    (found,) = shot.at(1001).sign_offs
    assert (found.rule, found.why, found.until, found.bow, found.frames) == (
        "bow.radius",
        "wide",
        "2027-03-01",
        None,
        "1001-1005",
    )
    assert shot.fail_on == shot.at(1001).fail_on == "advice"
