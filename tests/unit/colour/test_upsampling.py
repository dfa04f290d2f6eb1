"""RGB to reflectance: what it promises beyond the round trip, which tests/published/test_colour_solid.py measures."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.colour.differences import ciede2000, cielab
from renderer.colour.observer import observer, spectrum_to_xyz
from renderer.colour.sigmoid_cells import cells_of, colours_and_slopes
from renderer.colour.sigmoid_fit import cube_root
from renderer.colour.spaces import applied, reference_light, reflected_matrix
from renderer.colour.tables import wavelengths_nm
from renderer.colour.upsampling import coefficients_to_reflectance, distinct, reflectance_coefficients
from renderer.optics.sigmoid_kernels import sigmoid_reflectance

RNG_SEED = 4


def test_greys_are_flat_and_exact():
    grey = np.array([0.0, 0.02, 0.18, 0.5, 0.9, 1.0])
    coefficients, outside = reflectance_coefficients(np.repeat(grey[:, None], 3, axis=1), "acescg")
    assert not outside.any()
    reflectance = coefficients_to_reflectance(coefficients)
    np.testing.assert_allclose(reflectance, np.repeat(grey[:, None], 401, axis=1), atol=1.1e-6)
    assert np.ptp(reflectance, axis=1).max() == 0.0


@pytest.mark.parametrize("space", ["rec709", "rec2020", "acescg"])
def test_tables_of_the_reflectance_show_the_colour(space):
    """Sums over the 401 entries, which are what a TABLE surface would be rendered with."""
    rgb = 0.1 + 0.5 * np.random.default_rng(RNG_SEED).random((200, 3))
    coefficients, outside = reflectance_coefficients(rgb, space)
    assert not outside.any()
    seen = spectrum_to_xyz(coefficients_to_reflectance(coefficients) * reference_light(space))
    white = spectrum_to_xyz(reference_light(space))
    difference = ciede2000(cielab(seen, white), cielab(applied(reflected_matrix(space), rgb), white))
    assert difference.max() < 0.03


def test_a_colour_does_not_depend_on_its_company():
    rgb = np.random.default_rng(RNG_SEED).random((70, 3)) ** 2
    together, outside = reflectance_coefficients(rgb, "acescg")
    for k in range(0, 70, 7):
        alone, alone_outside = reflectance_coefficients(rgb[k : k + 1], "acescg")
        np.testing.assert_array_equal(alone[0], together[k])
        assert alone_outside[0] == outside[k]
    backwards, _ = reflectance_coefficients(rgb[::-1], "acescg")
    np.testing.assert_array_equal(backwards[::-1], together)


def test_threads_do_not_change_a_bit():
    rgb = np.random.default_rng(RNG_SEED).random((70_000, 3))  # two blocks
    one, _ = reflectance_coefficients(rgb, "rec709", n_threads=1)
    two, _ = reflectance_coefficients(rgb, "rec709", n_threads=2)
    np.testing.assert_array_equal(one, two)


def test_out_of_reach_is_flagged_and_stays_a_reflectance():
    rgb = np.array([[0.5, 0.5, 0.5], [1.5, 1.5, 1.5], [0.0, 1.0, 0.0], [-0.5, 0.1, 0.1], [40.0, 0.0, 0.0]])
    coefficients, outside = reflectance_coefficients(rgb, "acescg")
    np.testing.assert_array_equal(outside, [False, True, True, True, True])
    reflectance = coefficients_to_reflectance(coefficients)
    assert np.isfinite(coefficients).all()
    assert reflectance.min() >= 0.0
    assert reflectance.max() <= 1.0
    assert reflectance[1].min() > 0.999  # nothing is whiter than white


def test_none_and_not_a_number():
    coefficients, outside = reflectance_coefficients(np.empty((0, 3)), "rec709")
    assert coefficients.shape == (0, 3)
    assert outside.shape == (0,)
    with pytest.raises(InputError, match="finite"):
        reflectance_coefficients(np.array([[0.1, np.nan, 0.2]]), "rec709")
    with pytest.raises(InputError, match="rec709"):
        reflectance_coefficients(np.array([[0.1, 0.1, 0.2]]), "rec700")


def test_python_and_kernel_agree():
    coefficients = np.array([-1200.0, 400.0, 33.0])
    nm = np.array([380.0, 444.4, 580.0, 780.0])
    expected = [sigmoid_reflectance(*coefficients, x) for x in nm]
    np.testing.assert_allclose(coefficients_to_reflectance(coefficients, nm), expected, rtol=1e-13)


def test_distinct_puts_every_colour_back():
    colours = np.random.default_rng(RNG_SEED).integers(0, 3, (500, 3)).astype(float)
    some, place = distinct(colours)
    assert len(some) == 27
    np.testing.assert_array_equal(some[place], colours)


def test_cube_root():
    t = np.array([1e-9, 0.008856, 0.125, 0.5, 1.0, 1.2, 8.0, 1e6])
    np.testing.assert_allclose(cube_root(t), np.cbrt(t), rtol=4e-16)


def test_cells_meet_literal_sums_however_steep():
    """Narrow cells against 50 samples a nanometre; an edge inside a cell is worth up to 1e-4 of white."""
    coefficients = np.array([[0.3, 60.0, -45000.0], [1.0, 90.0, -3000.0], [-0.5, 10.0, 600.0]])
    x = np.arange(380.01, 780.0, 0.02)
    light = np.interp(x, wavelengths_nm(), reference_light("rec709")) * 0.02
    eye = np.stack([np.interp(x, wavelengths_nm(), column) for column in observer().T], axis=1) * light[:, None]
    expected = coefficients_to_reflectance(coefficients.T, x) @ eye
    found, _ = colours_and_slopes(coefficients, cells_of("rec709", 2))
    np.testing.assert_allclose(found.T, expected, atol=1.2e-4)


def test_a_picture_of_a_million_texels():
    """An eight-bit picture with 200,000 different colours."""
    rng = np.random.default_rng(RNG_SEED)
    palette = ((rng.integers(0, 256, (200_000, 3)) / 255.0 + 0.055) / 1.055) ** 2.4
    picture = palette[rng.integers(0, len(palette), 1_000_000)]
    coefficients, outside = reflectance_coefficients(picture, "rec709", n_threads=2)
    assert coefficients.shape == (1_000_000, 3)
    assert not outside.any()
