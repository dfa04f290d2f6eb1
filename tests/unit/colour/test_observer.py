"""Integrals of spectra against literal sums."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.base.constants import LUMINOUS_EFFICACY
from renderer.colour.observer import luminance, observer, observer_at, observer_weights, spectrum_to_xyz
from renderer.colour.tables import resampled, shipped_table, wavelengths_nm


def test_integral_is_that_of_the_linear_pieces():
    """Against the midpoint rule, 200 points to the nanometre: a rough spectrum, as the sun's is."""
    spectrum = np.random.default_rng(6).random(401)
    x = np.arange(380.0 + 0.0025, 780.0, 0.005)
    fine = np.interp(x, wavelengths_nm(), spectrum)
    expected = [(np.interp(x, wavelengths_nm(), c) * fine).sum() * 0.005 for c in observer().T]
    np.testing.assert_allclose(spectrum_to_xyz(spectrum), expected, rtol=1e-6)


def test_shapes():
    spectra = np.random.default_rng(6).random((2, 3, 401))
    assert spectrum_to_xyz(spectra).shape == (2, 3, 3)
    assert luminance(spectra).shape == (2, 3)
    np.testing.assert_allclose(luminance(spectra), LUMINOUS_EFFICACY * spectrum_to_xyz(spectra)[..., 1])


def test_luminance_of_a_watt_at_555_nm():
    spectrum = np.zeros(401)
    spectrum[175] = 1.0  # a triangle of 1 W m^-2 sr^-1 in all
    assert float(luminance(spectrum)) == pytest.approx(683.0, abs=0.1)


def test_observer_between_and_outside_its_entries():
    assert observer_at(555.0)[1] == 1.0
    assert observer_at(500.5)[1] == pytest.approx(0.5 * (observer()[120, 1] + observer()[121, 1]))
    assert observer_at(379.0) == (0.0, 0.0, 0.0)


def test_tables_are_read_only_and_must_cover_the_range():
    with pytest.raises(ValueError, match="read-only"):
        observer()[0, 0] = 1.0
    with pytest.raises(ValueError, match="read-only"):
        observer_weights()[0, 0] = 1.0
    with pytest.raises(AssertionError):
        resampled(shipped_table("cie_d65_5nm.csv")[20:])
