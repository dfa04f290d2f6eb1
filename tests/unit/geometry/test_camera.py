"""The camera: arrays for kernels, a lens table worked by hand, and round trips through projection."""

from __future__ import annotations

import dataclasses
import math

import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.geometry.camera import (
    camera_arrays,
    lens_radius_m,
    middle_matrix,
    pixel_direction,
    project,
    project_directions,
)
from renderer.geometry.distortion import distort, fold, straighten
from renderer.shot.model import Camera

PLAIN = Camera(
    matrices=np.eye(3, 4)[None],
    focal_length_mm=28.0,
    sensor_mm=(36.0, 20.25),
    pixels=(1280, 720),
    pixel_aspect=1.0,
    window=(0, 0, 1280, 720),
    distortion=(0.0, 0.0, 0.0, 0.0, 0.0),
    f_number=8.0,
    focus_distance_m=4.0,
    shutter_deg=180.0,
    polariser_deg=None,
    exposure_stops=0.0,
    iso=None,
    exposure_auto=False,
    white_balance_k=6504.0,
)
BENT = (-0.08, 0.015, -0.001, 0.0007, -0.0004)


def turned() -> np.ndarray:
    """A rigid matrix with no zero in it."""
    rng = np.random.default_rng(5)
    q, _ = np.linalg.qr(rng.normal(size=(3, 3)))
    q *= np.sign(np.linalg.det(q))
    return np.column_stack([q, [1.0, -2.0, 3.0]])


# focal length over sensor width, worked by hand: half-angle of view = atan(width / (2 f))
LENS_TABLE = [
    (18.0, 36.0, 45.0),  # atan(1)
    (50.0, 36.0, 19.7989),  # atan(0.36); a 50 mm lens on 36 mm, 39.6 degrees in all
    (28.0, 36.0, 32.7352),  # atan(0.642857)
    (35.0, 24.0, 18.9246),  # atan(0.342857)
    (100.0, 36.0, 10.2040),  # atan(0.18)
]


@pytest.mark.parametrize(("focal", "width", "half_angle"), LENS_TABLE)
def test_angle_of_view_follows_the_lens_table(focal, width, half_angle):
    camera = dataclasses.replace(PLAIN, focal_length_mm=focal, sensor_mm=(width, width / 1280 * 720))
    right = pixel_direction(camera, (1280.0, 360.0))
    assert math.degrees(math.atan2(right[0], -right[2])) == pytest.approx(half_angle, abs=5e-5)
    assert right[1] == pytest.approx(0.0, abs=1e-15)


@pytest.mark.parametrize(
    ("focal", "f_number", "radius"),
    [(28.0, 8.0, 0.00175), (50.0, 1.0, 0.025), (100.0, 2.8, 0.1 / 5.6), (35.0, 0.0, 0.0)],
)
def test_lens_radius_is_focal_length_over_twice_the_f_number(focal, f_number, radius):
    assert lens_radius_m(focal, f_number) == pytest.approx(radius, rel=1e-15)


def test_arrays_hold_what_their_docstring_says():
    camera = dataclasses.replace(
        PLAIN, window=(-10, -20, 1300, 760), polariser_deg=30.0, distortion=(-0.01, 0.0, 0.0, 0.0, 0.0)
    )
    arrays = camera_arrays(camera)
    assert arrays.matrices.shape == (1, 3, 4)
    assert arrays.window.tolist() == [-10, -20, 1300, 760]
    assert arrays.window.dtype == np.int64
    expected = [28.0, 36.0, 20.25, 1280.0, 720.0, 0.00175, 4.0, math.pi / 6.0, 1.0, 1.0]
    assert arrays.lens.tolist() == pytest.approx(expected, rel=1e-15)
    assert arrays.distortion.tolist() == [-0.01, 0.0, 0.0, 0.0, 0.0]
    assert camera_arrays(PLAIN).lens[7] == -1e9
    assert camera_arrays(PLAIN).lens[9] == 0.0


def test_looks_along_minus_z_with_y_up():
    assert pixel_direction(PLAIN, (640.0, 360.0)).tolist() == [0.0, 0.0, -1.0]
    assert pixel_direction(PLAIN, (640.0, 0.0))[1] > 0.3
    assert pixel_direction(PLAIN, (0.0, 360.0))[0] < -0.5
    assert project(PLAIN, (1.0, 1.0, -4.0)).tolist() == pytest.approx(
        [640 + 0.25 * 28 / 36 * 1280, 360 - 0.25 * 28 / 20.25 * 720]
    )


def test_window_never_moves_a_pixel():
    crop = dataclasses.replace(PLAIN, window=(100, 200, 30, 40))
    assert np.array_equal(pixel_direction(crop, (110.5, 215.5)), pixel_direction(PLAIN, (110.5, 215.5)))


@pytest.mark.parametrize("distortion", [(0.0,) * 5, BENT, (0.2, 0.0, 0.0, 0.0, 0.0)])
@pytest.mark.parametrize("sensor", [(36.0, 20.25), (21.0, 17.5)])  # the second with pixels twice as wide as high
def test_pixel_to_direction_and_back(distortion, sensor):
    camera = dataclasses.replace(PLAIN, matrices=turned()[None], distortion=distortion, sensor_mm=sensor)
    pixels = np.random.default_rng(2).uniform((-50.0, -50.0), (1330.0, 770.0), (2000, 2))
    directions = pixel_direction(camera, pixels)
    assert np.abs(np.linalg.norm(directions, axis=1) - 1.0).max() < 1e-14
    assert np.abs(project_directions(camera, directions * 7.0) - pixels).max() < 1e-9
    points = camera.matrices[0][:, 3] + directions * 12.5
    assert np.abs(project(camera, points) - pixels).max() < 1e-9


def test_behind_the_camera_is_nowhere():
    assert np.isnan(project_directions(PLAIN, (0.1, 0.2, 1.0))).all()
    assert np.isnan(project_directions(PLAIN, (1.0, 0.0, 0.0))).all()


def test_distortion_worked_by_hand():
    """At (0.3, 0.4), q = 0.25: radial = 1 - 0.1*0.25 + 0.02*0.0625 = 0.97625; with p1 = 0.01, p2 = 0.02:
    x = 0.292875 + 2*0.01*0.12 + 0.02*(0.25 + 0.18) = 0.303875;
    y = 0.3905 + 0.01*(0.25 + 0.32) + 2*0.02*0.12 = 0.401."""
    found = distort((-0.1, 0.02, 0.0, 0.01, 0.02), np.array([[0.3, 0.4]]))
    assert found[0].tolist() == pytest.approx([0.303875, 0.401], abs=1e-15)
    back = straighten((-0.1, 0.02, 0.0, 0.01, 0.02), found)
    assert back[0].tolist() == pytest.approx([0.3, 0.4], abs=1e-14)


def test_directions_beyond_the_fold_are_not_shown():
    """r (1 - r^2 / 3) turns back at r = 1; farther out it would come back into the frame."""
    lens = (-1.0 / 3.0, 0.0, 0.0, 0.0, 0.0)
    assert fold(lens) == pytest.approx(1.0)
    camera = dataclasses.replace(PLAIN, distortion=lens)
    assert np.isfinite(project_directions(camera, (0.9, 0.0, -1.0))).all()
    assert np.isnan(project_directions(camera, (1.6, 0.0, -1.0))).all()


def test_a_picture_that_folds_inside_the_frame_is_refused():
    with pytest.raises(InputError, match="folds the picture"):
        camera_arrays(dataclasses.replace(PLAIN, distortion=(-2.0, 0.0, 0.0, 0.0, 0.0)))


def test_mid_shutter_lies_between_the_steps():
    steps = np.stack([np.eye(3, 4) + k * np.eye(3, 4)[:, [3, 3, 3, 0]] for k in range(4)])
    steps[:, 0, 3] = [0.0, 1.0, 2.0, 3.0]
    camera = dataclasses.replace(PLAIN, matrices=steps)
    assert middle_matrix(camera)[0, 3] == 1.5
    assert middle_matrix(dataclasses.replace(PLAIN, matrices=steps[:3]))[0, 3] == 1.0
