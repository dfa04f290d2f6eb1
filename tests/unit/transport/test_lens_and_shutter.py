"""Lens and shutter in whole pictures: how far a point spreads, and how far a moving thing smears."""

from __future__ import annotations

import numpy as np
import pytest

from tests.rendering import guides_of, rendered

STILL = """
[camera]
position = [0, 0, 0]
target = [0, 0, -1]
focal_length = 50
sensor = [36, 36]
pixels = [48, 48]
[render]
wavelengths = [550]
"""


def spot(at, radius, value=1e6, more=""):
    return f"""
[[lights]]
name = "spot"
shape = {{ disc = {radius} }}
luminance = {value}
transform = {{ translation = {at} }}
{more}
"""


def spread(luminance):
    """Centre (column, row) and root mean square distance from it along both, of a picture's light. [pixels]"""
    rows, columns = np.indices(luminance.shape) + 0.5
    total = luminance.sum()
    x, y = (luminance * columns).sum() / total, (luminance * rows).sum() / total
    return (
        x,
        y,
        np.sqrt((luminance * (columns - x) ** 2).sum() / total),
        np.sqrt((luminance * (rows - y) ** 2).sum() / total),
    )


# A tent one pixel wide to each side has the variance 1/6.
FILTER = 1.0 / 6.0


@pytest.mark.parametrize(("f_number", "focus", "distance"), [(0.1, 2.0, 4.0), (0.1, 3.0, 1.5), (0.2, 1.0, 1e4)])
def test_the_circle_of_confusion_has_the_size_of_the_thin_lens_formula(f_number, focus, distance):
    # Pictures stand in focal lengths, so that a field point at `distance` spreads over A |1/distance - 1/focus| of them
    # (A the opening's diameter): the thin lens of the textbooks, with its sensor where infinity is sharp.
    camera = STILL.replace("focal_length", f"f_number = {f_number}\nfocus_distance = {focus}\nfocal_length")
    radius = 0.03 * distance
    picture = rendered(camera + spot([0, 0, -distance], radius), 256)
    opening = 0.050 / f_number
    pixels_a_focal_length = 50.0 / 36.0 * 48.0
    diameter = opening * abs(1.0 / distance - 1.0 / focus) * pixels_a_focal_length
    # The variance of a disc along an axis is diameter^2 / 16; spot, opening and filter add theirs.
    own = 2.0 * radius / distance * pixels_a_focal_length
    expected = np.sqrt(diameter**2 / 16.0 + own**2 / 16.0 + FILTER)
    x, y, sx, sy = spread(picture.luminance)
    assert (x, y) == pytest.approx((24.0, 24.0), abs=0.1)
    assert (sx, sy) == pytest.approx((expected, expected), rel=0.03)
    assert expected > 2.0 * np.sqrt(FILTER)
    # The lens spreads light and loses none: power is that of a pinhole.
    pinhole = rendered(STILL + spot([0, 0, -distance], radius), 256)
    assert picture.mean == pytest.approx(pinhole.mean, rel=0.05)


def test_what_is_in_focus_is_sharp():
    camera = STILL.replace("focal_length", "f_number = 0.5\nfocus_distance = 3\nfocal_length")
    sharp, pinhole = (spread(rendered(view + spot([0, 0, -3], 0.05), 64).luminance) for view in (camera, STILL))
    assert sharp == pytest.approx(pinhole, abs=0.03)


MOVING = "{ 1001 = [-0.48, 0, -2], 1002 = [0.48, 0, -2] }"


@pytest.mark.parametrize(("shutter", "offset"), [(180.0, 0.0), (90.0, 90.0), (360.0, 0.0)])
def test_a_streak_is_as_long_as_the_way_in_the_open_shutter(shutter, offset):
    camera = STILL.replace("focal_length", f"shutter = {shutter}\nshutter_offset = {offset}\nfocal_length")
    picture = rendered(camera + spot(MOVING, 0.06), 256)
    pixels_a_metre = 50.0 / 36.0 * 48.0 / 2.0
    way = 0.96 * shutter / 360.0 * pixels_a_metre
    start = -0.48 + 0.96 * offset / 360.0
    expected = np.sqrt(way**2 / 12.0 + (0.12 * pixels_a_metre) ** 2 / 16.0 + FILTER)
    x, y, sx, sy = spread(picture.luminance)
    assert x == pytest.approx(24.0 + start * pixels_a_metre + 0.5 * way, abs=0.2)
    assert y == pytest.approx(24.0, abs=0.1)
    assert sx == pytest.approx(expected, rel=0.06)
    assert sy == pytest.approx(np.sqrt((0.12 * pixels_a_metre) ** 2 / 16.0 + FILTER), rel=0.05)


def test_a_closed_shutter_smears_nothing():
    camera = STILL.replace("focal_length", "shutter = 0\nfocal_length")
    moving = rendered(camera + spot(MOVING, 0.05), 64)
    still = rendered(camera + spot([-0.48, 0, -2], 0.05), 64)
    assert moving.mean == pytest.approx(still.mean, rel=0.06)
    assert spread(moving.luminance) == pytest.approx(spread(still.luminance), abs=0.05)


def test_spheres_and_meshes_that_move_smear_alike():
    # The analytic sphere and triangles take their matrices by different ways. Black on a sky, seen by what they hide.
    camera = (
        STILL.replace("focal_length", "shutter = 360\nshutter_offset = 0\nfocal_length") + '[sky]\nkind = "uniform"\n'
    )
    ball = '[[objects]]\nname = "ball"\nshape = {{ sphere = 0.15 }}\nsurface = {{ reflectance = 0 }}\n{}'
    moves = f"transform = {{ translation = {MOVING} }}\n"
    of_triangles = moves.replace("translation", "scale = [1, 1, 1.000001], translation")
    pictures = [rendered(camera + ball.format(how), 128) for how in (moves, of_triangles)]
    sky = pictures[0].luminance.max()
    hidden = [spread(sky - picture.luminance) for picture in pictures]
    assert hidden[0] == pytest.approx(hidden[1], abs=0.05)
    # A disc of radius r seen over a way w, in pixels: variances add.
    scale = 50.0 / 36.0 * 48.0 / 2.0
    assert hidden[0][2] == pytest.approx(
        np.sqrt((0.96 * scale) ** 2 / 12.0 + (0.15 * scale) ** 2 / 4.0 + FILTER), rel=0.02
    )
    assert hidden[0][3] == pytest.approx(np.sqrt((0.15 * scale) ** 2 / 4.0 + FILTER), rel=0.03)


def test_a_camera_that_moves_smears_what_stands_and_not_what_moves_along():
    moves = STILL.replace("position = [0, 0, 0]", "position = { 1001 = [-0.48, 0, 0], 1002 = [0.48, 0, 0] }")
    moves = moves.replace("target = [0, 0, -1]", "target = { 1001 = [-0.48, 0, -1], 1002 = [0.48, 0, -1] }")
    moves = moves.replace("focal_length", "shutter = 360\nshutter_offset = 0\nfocal_length")
    standing = spread(rendered(moves + spot([0, 0, -2], 0.06), 256).luminance)
    along = spread(rendered(moves + spot(MOVING, 0.06), 256).luminance)
    pixels_a_metre = 50.0 / 36.0 * 48.0 / 2.0
    own = (0.12 * pixels_a_metre) ** 2 / 16.0 + FILTER
    assert standing[2] == pytest.approx(np.sqrt((0.96 * pixels_a_metre) ** 2 / 12.0 + own), rel=0.06)
    assert along[2:] == pytest.approx((np.sqrt(own), np.sqrt(own)), rel=0.05)


def test_shadow_and_lamp_are_taken_at_one_time():
    # Lamp, blocker and floor move together, and with the camera: the picture is that of the same things at rest.
    thing = '[[objects]]\nname = "{}"\nshape = {{ box = {} }}\nsurface = {{ reflectance = 0.5 }}\n'
    thing += "transform = {{ translation = {} }}\n"
    lamp = spot("{}", 0.3).replace("}}", "}").replace("translation = {}", "rotation = [90, 0, 0], translation = {}")

    def scene(rest):
        def keyed(x, y, z):
            return f"[{x}, {y}, {z}]" if rest else f"{{ 1001 = [{x}, {y}, {z}], 1002 = [{x + 1}, {y + 0.5}, {z}] }}"

        camera = STILL.replace("position = [0, 0, 0]", f"position = {keyed(0, 1, 3)}")
        camera = camera.replace("target = [0, 0, -1]", f"target = {keyed(0, 0.2, 0)}").replace("48, 48", "12, 12")
        camera = camera.replace("focal_length", "shutter = 360\nshutter_offset = 0\nfocal_length")
        things = thing.format("floor", [40, 0.1, 40], keyed(0, -0.05, 0))
        things += thing.format("block", [0.3, 0.3, 0.3], keyed(0, 0.4, 0))
        return camera + things + lamp.replace("{}", keyed(0.2, 1.5, 0))

    moving, resting = rendered(scene(False), 64), rendered(scene(True), 64)
    error = np.hypot(moving.mean_error, resting.mean_error)
    assert error < 0.03 * resting.mean
    assert moving.mean == pytest.approx(resting.mean, abs=5.0 * error)
    lit = np.maximum(np.hypot(moving.error, resting.error), 1e-3 * resting.mean)
    assert (np.abs(moving.luminance - resting.luminance) < 10.0 * lit).all()


def test_guides_are_those_of_mid_shutter():
    camera = STILL.replace("focal_length", "shutter = 180\nshutter_offset = 0\nfocal_length")
    ids = guides_of(camera + spot(MOVING, 0.1))["object_id"]
    middle = -0.48 + 0.96 * 0.25
    column = np.nonzero((ids >= 0).any(axis=0))[0].mean() + 0.5
    assert column == pytest.approx(24.0 + middle * 50.0 / 36.0 * 48.0 / 2.0, abs=0.6)
