"""The camera at a frame: its place, its lens, its window, and what moves while the shutter is open."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
import shot_writing as shots

from renderer.shot.model import Camera

HEAD = "format = 1\n[camera]\nfocal_length = 35\n"


def camera(folder: Path, text: str, number: int = 1001, units: str = "") -> Camera:
    """The camera of a shot whose [camera] holds `text`."""
    return shots.frame(folder, HEAD + text + "\n" + units, number, whole=True).camera


def axes(found: Camera, step: int = 0) -> list[list[float]]:
    """Right, up and back of a step's matrix."""
    return np.round(found.matrices[step, :, :3].T, 12).tolist()


def test_it_looks_along_its_own_minus_z(tmp_path: Path) -> None:
    found = camera(tmp_path, "position = [0, 1, 5]\ntarget = [0, 1, 0]")
    assert axes(found) == [[1, 0, 0], [0, 1, 0], [0, 0, 1]]
    assert found.matrices[0, :, 3].tolist() == [0, 1, 5]
    assert found.matrices.shape == (1, 3, 4)


def test_z_up(tmp_path: Path) -> None:
    found = camera(tmp_path, "position = [0, 0, 1]\ntarget = [0, 5, 1]", units='[units]\nup = "+z"')
    assert axes(found) == [[1, 0, 0], [0, 0, 1], [0, -1, 0]]


def test_straight_down_has_north_at_the_top_and_straight_up_south(tmp_path: Path) -> None:
    down = camera(tmp_path, "position = [0, 5, 0]\ntarget = [0, 0, 0]")
    assert axes(down) == [[1, 0, 0], [0, 0, -1], [0, 1, 0]]
    up = camera(tmp_path, "position = [0, 0, 0]\ntarget = [0, 5, 0]")
    assert axes(up) == [[1, 0, 0], [0, 0, 1], [0, -1, 0]]


def test_roll_is_clockwise_as_the_operator_sees_it(tmp_path: Path) -> None:
    found = camera(tmp_path, "position = [0, 1, 5]\ntarget = [0, 1, 0]\nroll = 90")
    assert axes(found)[1] == [1, 0, 0]  # the camera's up has gone to the right


def test_lengths_are_in_the_shots_unit(tmp_path: Path) -> None:
    text = "position = [0, 100, 500]\ntarget = [0, 100, 0]\nf_number = 4"
    found = camera(tmp_path, text, units='[units]\nlength = "cm"')
    assert found.matrices[0, :, 3].tolist() == [0.0, 1.0, 5.0]
    assert found.focus_distance_m == pytest.approx(5.0, abs=1e-15)


def test_a_matrix_with_a_scale_in_it(tmp_path: Path) -> None:
    found = camera(tmp_path, "matrix = [0, 0, 2, 1, 0, 2, 0, 2, -2, 0, 0, 3, 0, 0, 0, 1]")
    assert axes(found) == [[0, 0, -1], [0, 1, 0], [1, 0, 0]]
    assert found.matrices[0, :, 3].tolist() == [1, 2, 3]


def test_moving_has_five_steps_over_the_shutter(tmp_path: Path) -> None:
    text = "position = { 1001 = [0, 0, 5], 1011 = [10, 0, 5] }\ntarget = [0, 0, -1000000]"
    found = camera(tmp_path, text, 1005)
    assert found.matrices.shape == (5, 3, 4)
    assert np.allclose(found.matrices[:, 0, 3], 4.0 + np.array([-0.25, -0.125, 0.0, 0.125, 0.25]), atol=1e-12)


def test_held_between_keys_has_one_step(tmp_path: Path) -> None:
    text = "position = { 1001 = [0, 0, 5], 1011 = [10, 0, 5] }\ntarget = [0, 0, 0]"
    assert camera(tmp_path, text, 1012).matrices.shape == (1, 3, 4)
    assert camera(tmp_path, text, 1011).matrices.shape == (5, 3, 4)


def test_the_shutters_offset_and_an_instant(tmp_path: Path) -> None:
    moving = "position = { 1001 = [0, 0, 5], 1011 = [10, 0, 5] }\ntarget = [0, 0, -1000000]\n"
    late = camera(tmp_path, moving + "shutter = 90\nshutter_offset = 0", 1005)
    assert np.allclose(late.matrices[:, 0, 3], 4.0 + np.linspace(0.0, 0.25, 5), atol=1e-12)
    instant = camera(tmp_path, moving + "shutter = 0", 1005)
    assert instant.matrices[:, 0, 3].tolist() == [4.0]


def test_sensor_from_its_width_and_pixel_aspect(tmp_path: Path) -> None:
    text = "position = [0, 1, 5]\ntarget = [0, 1, 0]\npixels = [1000, 500]\n"
    assert camera(tmp_path, text + "sensor = 20.0").sensor_mm == (20.0, 10.0)
    assert camera(tmp_path, text + "sensor = [20.0, 5.0]\npixel_aspect = 2.0").sensor_mm == (20.0, 5.0)
    assert camera(tmp_path, text).sensor_mm == (36.0, 18.0)


def test_windows(tmp_path: Path) -> None:
    text = "position = [0, 1, 5]\ntarget = [0, 1, 0]\npixels = [1000, 500]\n"
    assert camera(tmp_path, text).window == (0, 0, 1000, 500)
    assert camera(tmp_path, text + "crop = [10, 20, 30, 40]").window == (10, 20, 30, 40)
    assert camera(tmp_path, text + "overscan = 8").window == (-8, -8, 1016, 516)
    assert camera(tmp_path, text + "overscan = [1, 2, 3, 4]").window == (-1, -2, 1004, 506)


def test_exposure_is_exactly_one_of_three(tmp_path: Path) -> None:
    text = "position = [0, 1, 5]\ntarget = [0, 1, 0]\nf_number = 8\n"
    found = [
        camera(tmp_path, text + line)
        for line in ("", "exposure = { stops = -2 }", "exposure = { iso = 200 }", 'exposure = "auto"')
    ]
    assert [(one.exposure_stops, one.iso, one.exposure_auto) for one in found] == [
        (0.0, None, False),
        (-2.0, None, False),
        (None, 200.0, False),
        (None, None, True),
    ]


def test_lens_and_filters(tmp_path: Path) -> None:
    text = "position = [0, 1, 5]\ntarget = [0, 1, 0]\npolariser = 30\n"
    text += "distortion = { k1 = -0.1, p2 = { 1001 = 0.0, 1003 = 0.02 } }"
    found = camera(tmp_path, text, 1002)
    assert found.distortion == (-0.1, 0.0, 0.0, 0.0, 0.01)
    assert found.polariser_deg == 30.0
    assert camera(tmp_path, "position = [0, 1, 5]\ntarget = [0, 1, 0]").polariser_deg is None
