"""White lights, spaces and white balance: ranges, round trips, and that white comes out white."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.colour import illuminants, spaces
from renderer.colour.observer import spectrum_to_xyz

RGB = ["rec709", "rec2020", "acescg"]


@pytest.mark.parametrize("space", [*RGB, "xyz"])
@pytest.mark.parametrize("kelvin", [1900.0, 3200.0, 3999.0, 4000.0, 5600.0, 6504.0, 12000.0])
def test_light_of_the_white_balance_comes_out_white(space, kelvin):
    light = illuminants.white_light(kelvin)
    values = spaces.xyz_to_rgb(spectrum_to_xyz(light), space, kelvin)
    white = spaces.white_xyz("rec709") if space == "xyz" else np.ones(3)
    np.testing.assert_allclose(values / spectrum_to_xyz(light)[1], white, rtol=1e-12)


def test_lower_white_balance_makes_daylight_blue():
    r, g, b = spaces.xyz_to_rgb(spectrum_to_xyz(illuminants.d65()), "rec709", 3200.0)
    assert b > g > r


def test_6504_kelvin_is_d65():
    np.testing.assert_array_equal(illuminants.white_light(6504.0), illuminants.d65())


def test_black_body_below_4000_kelvin_and_daylight_from_there():
    np.testing.assert_array_equal(illuminants.white_light(3999.0), illuminants.blackbody(3999.0))
    np.testing.assert_array_equal(illuminants.white_light(4000.0), illuminants.daylight(4000.0))


@pytest.mark.parametrize("kelvin", [3000.0, 26000.0, float("nan")])
def test_daylight_out_of_range(kelvin):
    with pytest.raises(InputError, match="4000 to 25000"):
        illuminants.daylight(kelvin)


def test_white_balance_out_of_range():
    with pytest.raises(InputError, match="kelvin"):
        illuminants.white_light(100.0)


@pytest.mark.parametrize("space", RGB)
def test_matrices_invert_and_white_is_1_1_1(space):
    forth, back = spaces.rgb_to_xyz_matrix(space), spaces.xyz_to_rgb_matrix(space)
    np.testing.assert_allclose(forth @ back, np.eye(3), atol=1e-14)
    np.testing.assert_allclose(forth.sum(axis=1), spaces.white_xyz(space), atol=1e-14)
    np.testing.assert_allclose(
        spaces.reflected_matrix(space).sum(axis=1), spectrum_to_xyz(spaces.reference_light(space)), rtol=1e-13
    )


def test_reference_light_lies_at_the_printed_white():
    for space in RGB:
        xyz = spectrum_to_xyz(spaces.reference_light(space))
        np.testing.assert_allclose(xyz[:2] / xyz.sum(), spaces.space_named(space).white, atol=6e-5)


def test_conversion_keeps_white_and_returns():
    rgb = np.random.default_rng(9).random((7, 2, 3))
    there = spaces.converted(rgb, "rec709", "acescg")
    np.testing.assert_allclose(spaces.converted(there, "acescg", "rec709"), rgb, atol=1e-13)
    np.testing.assert_allclose(spaces.converted(np.ones(3), "acescg", "rec2020"), np.ones(3), atol=1e-13)


def test_unknown_space_names_the_nearest():
    with pytest.raises(InputError) as caught:
        spaces.space_named("acesg")
    assert caught.value.faults[0].nearest == "acescg"


def test_small_algebra_equals_numpys():
    rng = np.random.default_rng(1)
    a, b, v = rng.random((3, 3)), rng.random((3, 3)), rng.random((4, 5, 3))
    np.testing.assert_allclose(spaces.product(a, b), a @ b, atol=1e-15)
    np.testing.assert_allclose(spaces.applied(a, v), v @ a.T, atol=1e-15)
    np.testing.assert_allclose(spaces.inverse(a), np.linalg.inv(a), rtol=1e-11)
    np.testing.assert_allclose(a @ spaces.solved(a, v[0, 0]), v[0, 0], atol=1e-13)
