"""Sky maps and sun radiance: shapes, bounds, scaling, refusals."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.optics import atmosphere, sky, sun


@pytest.mark.parametrize("visibility_km", [1.0, 23.0, 330.0])
@pytest.mark.parametrize("elevation_deg", [-12.0, -0.1, 0.0, 3.0, 45.0, 90.0])
def test_clear_sky_is_finite_and_positive(elevation_deg, visibility_km):
    coefficients, basis = sky.clear_sky(elevation_deg, 205.0, visibility_km)
    assert coefficients.shape == (181, 360, 6)
    assert basis.shape == (6, 401)
    assert np.all(np.isfinite(coefficients))
    assert np.all(coefficients > 0.0)
    assert np.all(np.isfinite(basis))
    assert np.all(basis >= 0.0)


def test_clear_sky_gives_back_its_own_level_light():
    coefficients, basis = sky.clear_sky(25.0, 90.0, 23.0)
    weights = sky.level_irradiance_weights(*sky.sine_cosine_deg(sky.rows_deg()))
    level = sky.from_level_irradiance(coefficients @ basis, weights)
    np.testing.assert_allclose(level, basis.sum(axis=0), rtol=1e-6)
    assert weights.sum() == pytest.approx(np.pi, rel=2e-4)  # of a sky of radiance 1


def test_clear_sky_turns_with_the_sun_and_is_brightest_round_it():
    first, basis = sky.clear_sky(30.0, 0.0)
    turned, _ = sky.clear_sky(30.0, 137.0)
    np.testing.assert_allclose(np.roll(first, 137, axis=1), turned, rtol=1e-9)
    luminance = sky.luminance_of(turned @ basis)
    row, column = np.unravel_index(np.argmax(luminance), luminance.shape)
    assert abs(row - 60) <= 12  # the gradation towards the horizon draws it down a little
    assert column == 137


def test_clear_sky_is_smooth():
    coefficients, basis = sky.clear_sky(35.0, 180.0)
    luminance = np.log(sky.luminance_of(coefficients[:90] @ basis))
    assert np.max(np.abs(np.diff(luminance, axis=0))) < 0.08  # no step of more than 8 % a degree
    assert np.max(np.abs(np.diff(luminance, axis=1))) < 0.08


def test_twilight_goes_on_where_sunset_ends():
    dusk, basis = sky.clear_sky(-0.001, 90.0)
    sunset, same = sky.clear_sky(0.0, 90.0)
    np.testing.assert_array_equal(basis, same)
    np.testing.assert_allclose(dusk, sunset, rtol=2e-3)
    levels = [sky.clear_sky(h, 90.0)[0].max() for h in (0.0, -1.0, -3.0, -6.0, -9.0, -12.0)]
    assert all(later < 0.7 * earlier for earlier, later in pairwise(levels))


def test_ground_is_what_the_sky_and_sun_light():
    dark, _ = sky.clear_sky(40.0, 0.0, ground_reflectance=0.0)
    grey, basis = sky.clear_sky(40.0, 0.0, ground_reflectance=0.2)
    assert np.all(dark[91:] == 0.0)
    assert np.ptp(grey[91:], axis=(0, 1)).max() == 0.0
    beam = sun.beam_irradiance(sky.render_wavelengths_nm(), 40.0, atmosphere.air_over(23.0))
    level = beam * np.sin(np.radians(40.0)) + basis.sum(axis=0)
    np.testing.assert_allclose(
        (grey[120, 0] @ basis)[[0, 110, 270, 400]], 0.2 / np.pi * level[[0, 110, 270, 400]], rtol=0.02
    )


def test_overcast_sky_has_no_direction():
    coefficients, basis = sky.overcast_sky(45.0)
    assert coefficients.shape == (181, 1, 1)
    assert basis.shape == (1, 401)
    assert float(sky.luminance_of(basis[0])) == pytest.approx(1.0)
    assert np.all(coefficients > 0.0)


@pytest.mark.parametrize(
    "call",
    [
        lambda: sky.clear_sky(-13.0, 0.0),
        lambda: sky.clear_sky(float("nan"), 0.0),
        lambda: sky.clear_sky(30.0, 0.0, 0.2),
        lambda: sky.clear_sky(30.0, 0.0, ground_reflectance=1.5),
        lambda: sky.overcast_sky(91.0),
        lambda: sun.sun_radiance(100.0),
        lambda: sun.sun_radiance(20.0, 500.0),
        lambda: sun.sun_radiance(20.0, 23.0, 20000.0),
    ],
)
def test_refusals_are_sentences(call):
    with pytest.raises(InputError) as caught:
        call()
    assert caught.value.faults[0].expected


def test_sun_reddens_and_fades_towards_the_horizon():
    spectra = [sun.sun_radiance(h) for h in (60.0, 20.0, 5.0, 1.0)]
    for high, low in pairwise(spectra):
        assert np.all(low < high)
        assert low[300] / low[50] > high[300] / high[50]
    assert spectra[0].shape == (401,)
    assert np.all(sun.sun_radiance(-0.3) == 0.0)
    np.testing.assert_array_equal(sun.sun_radiance(-0.2), sun.sun_radiance(0.0))


def test_thinner_air_lets_more_through():
    assert np.all(sun.sun_radiance(30.0, 23.0, 3000.0) > sun.sun_radiance(30.0, 23.0, 0.0))
    assert np.all(sun.sun_radiance(30.0, 60.0) > sun.sun_radiance(30.0, 10.0))


def test_the_numbers_do_not_depend_on_the_library_of_the_machine():
    """Sums of exactly defined operations: these digits are the same wherever IEEE 754 holds."""
    radiance = sun.sun_radiance(24.0)
    coefficients, _ = sky.clear_sky(24.0, 205.0)
    assert [value.hex() for value in (radiance[170], coefficients[40, 100, 2])] == [
        "0x1.5a290f011ffd0p+13",
        "0x1.38a1523f6bf52p-3",
    ]
