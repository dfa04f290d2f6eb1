"""Differences of two pictures: against values worked out by hand and by an outside library."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.compare.pixel_differences import colours_apart, stops_apart, summary_of

SEED = 20261201


def grey(level: float, rows: int = 2, columns: int = 3) -> np.ndarray:
    return np.full((rows, columns, 3), level)


@pytest.mark.parametrize("space", ["acescg", "rec709", "rec2020"])
@pytest.mark.parametrize("stops", [-2.0, 0.0, 0.5, 3.0])
def test_a_scaled_picture_is_that_many_stops_apart(space: str, stops: float) -> None:
    colour = np.random.default_rng(SEED).uniform(0.01, 2.0, (4, 5, 3))
    assert stops_apart(colour, colour * 2.0**stops, space) == pytest.approx(np.full((4, 5), stops), abs=1e-12)


def test_black_can_not_be_told_in_stops() -> None:
    picture = grey(1.0)
    picture[0, 0] = 0.0
    apart = stops_apart(grey(1.0), picture, "rec709")
    assert np.isnan(apart[0, 0])
    assert summary_of(apart).count == 5


def test_colour_differences_agree_with_an_outside_library() -> None:
    """colour-science's CIEDE2000 of the same CIELAB values, worked out by its own functions throughout."""
    colour = pytest.importorskip("colour")
    rng = np.random.default_rng(SEED)
    first, second = rng.uniform(0.0, 1.0, (2, 8, 8, 3))
    space = colour.RGB_COLOURSPACES["sRGB"]
    lab = [colour.XYZ_to_Lab(pixels @ space.matrix_RGB_to_XYZ.T, space.whitepoint) for pixels in (first, second)]
    expected = colour.delta_E(*lab, method="CIE 2000")
    assert colours_apart(first, second, "rec709") == pytest.approx(
        expected, abs=0.02
    )  # its matrix is rounded to 4 digits


def test_equal_pictures_do_not_differ_and_white_scales_both() -> None:
    picture = np.random.default_rng(SEED).uniform(0.0, 1.0, (4, 4, 3))
    assert colours_apart(picture, picture, "acescg").max() == 0.0
    other = picture[::-1]
    scaled = colours_apart(100.0 * picture, 100.0 * other, "acescg", white_luminance=100.0)
    assert scaled == pytest.approx(colours_apart(picture, other, "acescg"), abs=1e-9)


def test_pixels_that_are_no_numbers_are_left_out() -> None:
    picture = grey(0.5)
    picture[1, 2, 0] = np.nan
    apart = colours_apart(grey(0.4), picture, "rec709")
    assert np.isnan(apart[1, 2])
    assert summary_of(apart).count == 5


def test_the_summary_keeps_the_sign_of_the_mean_and_the_size_of_the_largest() -> None:
    found = summary_of(np.array([[-3.0, 1.0], [1.0, np.nan]]))
    assert (found.mean, found.median, found.largest, found.count) == (pytest.approx(-1.0 / 3.0), 1.0, 3.0, 3)


@pytest.mark.parametrize(
    ("first", "second", "words"),
    [
        (grey(1.0), grey(1.0, 3), "differ in size: 3 x 2 and 3 x 3 pixels"),
        (np.ones((4, 4)), grey(1.0), "wrong shape"),
    ],
)
def test_pictures_that_cannot_be_compared_are_refused(first: np.ndarray, second: np.ndarray, words: str) -> None:
    with pytest.raises(InputError, match=words):
        stops_apart(first, second, "rec709")


def test_nothing_to_compare_is_said() -> None:
    with pytest.raises(InputError, match="no pixel"):
        summary_of(stops_apart(grey(0.0), grey(1.0), "rec709"))
    with pytest.raises(InputError, match="no white"):
        colours_apart(grey(1.0), grey(1.0), "rec709", white_luminance=0.0)
