"""The draw of wavelengths is unbiased: the expectation of weight times f is the integral of f, lines and all."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.colour.observer import observer
from renderer.colour.wavelengths import FLOOR, spectrum_for, stretch_shares

CASES = [(), (589.3,), (435.83, 546.07, 576.96, 579.07), (380.0, 500.0, 780.0)]


def drawn(spectrum, u):
    """Segment and wavelength of each u, written out from what `Spectrum` documents."""
    k = np.searchsorted(spectrum.u_low, u, side="right") - 1
    within = (u - spectrum.u_low[k]) / (spectrum.u_low[k + 1] - spectrum.u_low[k])
    return k, spectrum.low_nm[k] + within * (spectrum.high_nm[k] - spectrum.low_nm[k])


def rough(nm):
    """An arbitrary function of wavelength."""
    return 1.0 + np.sin(nm / 7.0) + (nm > 512.3) * 0.5 + 1e-4 * (nm - 450.0) ** 2


@pytest.mark.parametrize("lines", CASES)
def test_expectation_equals_integral_and_lines(lines):
    """By 16 even points in each segment: the sum over u of weight times f is the integral plus the lines' values."""
    spectrum = spectrum_for(lines)
    within = (np.arange(16) + 0.5) / 16
    width = np.diff(spectrum.u_low)
    u = spectrum.u_low[:-1, None] + width[:, None] * within
    k, nm = drawn(spectrum, u.ravel())
    of_line = spectrum.line[k] >= 0
    strength = np.array([3.0, 1.0, 0.25, 7.0])
    value = np.where(of_line, strength[np.maximum(spectrum.line[k], 0)] * rough(nm), rough(nm))
    expectation = (spectrum.weight[k] * value * np.repeat(width / 16, 16)).sum()
    x = np.arange(380.0 + 1 / 32, 780.0, 1 / 16)  # the same points
    expected = rough(x).sum() / 16 + sum(s * rough(line) for s, line in zip(strength, lines, strict=False))
    assert expectation == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize("lines", CASES)
def test_random_draws_agree(lines):
    """400,000 draws of a fixed seed: the mean is within 4 standard errors of the integral of a colour-matching sum."""
    spectrum = spectrum_for(lines)
    k, nm = drawn(spectrum, np.random.default_rng(12).random(400_000))
    eye = np.interp(nm, np.arange(380.0, 781.0), observer().sum(axis=1))
    estimate = np.where(spectrum.line[k] < 0, spectrum.weight[k] * eye, 0.0)
    expected = 0.5 * (observer()[1:] + observer()[:-1]).sum()
    error = estimate.std() / np.sqrt(len(estimate))
    assert abs(estimate.mean() - expected) < 4.0 * error


@pytest.mark.parametrize("lines", CASES)
def test_layout(lines):
    spectrum = spectrum_for(lines)
    assert spectrum.u_low[0] == 0.0
    assert spectrum.u_low[-1] == 1.0
    assert (np.diff(spectrum.u_low) > 0.0).all()
    assert len(spectrum.u_low) == len(spectrum.low_nm) + 1
    assert (np.diff(spectrum.low_nm) >= 0.0).all()
    assert (spectrum.bin_of == -1).all()
    assert spectrum.line.dtype == spectrum.bin_of.dtype == np.int32
    stretches = spectrum.line < 0
    np.testing.assert_allclose(spectrum.high_nm[stretches] - spectrum.low_nm[stretches], 1.0)
    for column, line in enumerate(lines):
        (k,) = np.flatnonzero(spectrum.line == column)
        assert spectrum.low_nm[k] == spectrum.high_nm[k] == line


def test_share_of_lines():
    """One line is on a quarter of the draws, so one of four rotations by a quarter meets it; many have a half."""
    for lines, share in (((589.3,), 0.25), (tuple(range(400, 500, 10)), 0.5)):
        spectrum = spectrum_for(lines)
        assert np.diff(spectrum.u_low)[spectrum.line >= 0].sum() == pytest.approx(share)


def test_density_has_a_floor_and_the_observers_shape():
    shares = stretch_shares()
    assert shares.sum() == pytest.approx(1.0)
    assert shares.min() >= FLOOR / 400.0
    assert shares[170] > 5.0 * shares[0]
    assert shares[170] > 5.0 * shares[-1]


def test_colour_noise_is_far_below_that_of_even_draws():
    """Variance of X, Y and Z of a grey, one draw each, against a density that is even over the range."""
    eye = 0.5 * (observer()[1:] + observer()[:-1])
    ours = (eye**2 / stretch_shares()[:, None]).sum(axis=0) - eye.sum(axis=0) ** 2
    even = (eye**2 * 400.0).sum(axis=0) - eye.sum(axis=0) ** 2
    assert (ours < 0.75 * even).all()


def test_wavelengths_asked_for_are_drawn_alone_and_evenly():
    spectrum = spectrum_for(lines_nm=(589.3,), wavelengths_nm=(656.3, 486.1, 589.3, 450.0))
    np.testing.assert_allclose(np.diff(spectrum.u_low), 0.25)
    np.testing.assert_array_equal(spectrum.low_nm, [656.3, 486.1, 589.3, 450.0])
    np.testing.assert_array_equal(spectrum.low_nm, spectrum.high_nm)
    np.testing.assert_array_equal(spectrum.bin_of, [0, 1, 2, 3])
    np.testing.assert_array_equal(spectrum.line, -1)
    np.testing.assert_allclose(spectrum.weight, (400.0 / 4) / 0.25)


@pytest.mark.parametrize("bad", [(379.9,), (500.0, 780.1), (550.0, 550.0), (float("nan"),)])
def test_wavelengths_that_cannot_be(bad):
    with pytest.raises(InputError):
        spectrum_for(wavelengths_nm=bad)
    with pytest.raises(InputError):
        spectrum_for(lines_nm=bad)
