"""The sigmoid reflectance against its formula, written out."""

from __future__ import annotations

import math

import pytest

from renderer.optics.sigmoid_kernels import sigmoid_reflectance


@pytest.mark.parametrize(
    "coefficients", [(0.0, 0.0, 0.0), (1.5, -2.0, 0.3), (-4000.0, 900.0, 250.0), (0.0, 0.0, -500.0)]
)
@pytest.mark.parametrize("wavelength_nm", [380.0, 555.3, 580.0, 780.0])
def test_value(coefficients, wavelength_nm):
    c0, c1, c2 = coefficients
    x = (wavelength_nm - 580.0) / 200.0
    q = c0 * x**2 + c1 * x + c2
    expected = 0.5 * (1.0 + q / math.sqrt(1.0 + q**2))
    assert sigmoid_reflectance(c0, c1, c2, wavelength_nm) == pytest.approx(expected, abs=1e-12)


def test_stays_within_0_and_1_however_steep():
    for size in (1e3, 1e6, 1e9):
        for wavelength_nm in (380.0, 579.0, 780.0):
            for sign in (-1.0, 1.0):
                assert 0.0 <= sigmoid_reflectance(sign * size, 0.5 * size, -0.1 * size, wavelength_nm) <= 1.0


def test_zero_coefficients_are_a_grey_of_half():
    assert sigmoid_reflectance(0.0, 0.0, 0.0, 500.0) == 0.5
