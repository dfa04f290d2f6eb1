"""Large drops against the full series of an independent package (miepython), and Airy functions against scipy.

Differences are stated over the primary bow's peak, or over the mean of a degree round about, after folding in the sun's
disc (taken as even here), for sizes spread by 5 %: drops of one size are not what `large_drops` is for.
"""

from __future__ import annotations

import math

import miepython
import numpy as np
import pytest
import scipy.special

from renderer.optics.airy import airy
from renderer.optics.large_drops import airy_disc, bessel, intensities, intensities_of, ray_table
from renderer.optics.mie_kernels import add_intensities

WATER = 1.333
NM = 550.0
SUN_RADIUS_DEG = 0.2666


def spread_sizes(radius_um: float, count: int, spread: float = 0.05) -> tuple[np.ndarray, np.ndarray]:
    """Size parameters and weights (their sum is 1); uneven, so that no fringe is met in step."""
    rng = np.random.default_rng(5)
    at = np.linspace(-2.5, 2.5, count) + rng.uniform(-0.5, 0.5, count) * 5.0 / count
    weights = np.exp(-0.5 * at * at)
    return 2000.0 * math.pi * radius_um / NM * (1.0 + spread * at), weights / weights.sum()


def under_sun(edges_deg: np.ndarray, values: np.ndarray) -> np.ndarray:
    """Blurred over an even disc, taken as straight across: right some degrees from the axis, and more is not asked."""
    step = edges_deg[1] - edges_deg[0]
    reach = np.arange(-math.floor(SUN_RADIUS_DEG / step), math.floor(SUN_RADIUS_DEG / step) + 1) * step
    chord = np.sqrt(SUN_RADIUS_DEG**2 - reach**2)
    return np.convolve(values, chord / chord.sum(), mode="valid")


def both(radius_um: float, low: float, high: float, count: int, step: float = 0.02) -> tuple[np.ndarray, np.ndarray]:
    """S11 by the series and by `large_drops`, over the disc, at even angles from low to high [deg]."""
    edges = np.arange(low - 0.3, high + 0.3, step)
    angles = 0.5 * (edges[1:] + edges[:-1])
    sizes, weights = spread_sizes(radius_um, count)
    rays, cosines = ray_table(WATER, angles), np.cos(np.radians(angles))
    series, waves = np.zeros(len(angles)), np.zeros(len(angles))
    for x, weight in zip(sizes.tolist(), weights.tolist(), strict=True):
        s1, s2 = miepython.S1_S2(complex(WATER), x, cosines, norm="wiscombe")
        series += weight * 0.5 * (np.abs(s1) ** 2 + np.abs(s2) ** 2)
        waves += weight * intensities_of(rays, x)[0]
    return under_sun(edges, series), under_sun(edges, waves)


def test_airy_functions_are_scipys() -> None:
    z = np.linspace(-60.0, 15.0, 5001)
    value, slope = airy(z)
    right, right_slope, _, _ = scipy.special.airy(z)
    assert np.abs(value - right).max() < 1e-9
    assert np.abs(slope - right_slope).max() < 1e-9
    dark = z > 0.0
    assert np.abs(value / right - 1.0)[dark].max() < 2e-6
    assert np.abs(slope / right_slope - 1.0)[dark].max() < 2e-6


def test_bessel_functions_are_scipys() -> None:
    u = np.linspace(0.0, 44.0, 2001)
    j0, j1 = bessel(u)
    assert np.abs(j0 - scipy.special.j0(u)).max() < 1e-12
    assert np.abs(j1 - scipy.special.j1(u)).max() < 1e-12


def test_primary_bow_of_small_drops_is_the_series() -> None:
    """Measured: 1.3 % of the peak at 50 micrometres, which is over the 1 % that is asked of tables of larger drops."""
    series, waves = both(50.0, 137.0, 141.5, 70, 0.05)
    assert np.abs(waves - series).max() < 0.02 * series.max()
    assert abs(int(np.argmax(waves)) - int(np.argmax(series))) <= 1  # steps of 0.05 degree


# Measured: 0.5, 0.35 and 0.5 % of the peak. The package would take minutes for so many sizes, and fewer leave fringes
# of their own; so this is held to the project's series, which tests/published/test_mie_series.py holds to the package.
@pytest.mark.parametrize("radius_um", [100.0, 250.0, 500.0])
def test_both_bows_and_the_band_between_are_the_series(radius_um: float) -> None:
    edges = np.arange(119.7, 150.3, 0.025)
    angles = 0.5 * (edges[1:] + edges[:-1])
    sizes, weights = spread_sizes(radius_um, 260)
    series = np.zeros((4, len(angles)))
    add_intensities(sizes, weights, complex(WATER), np.cos(np.radians(angles)), series)
    rays = ray_table(WATER, angles)
    waves = sum(weight * intensities_of(rays, x) for x, weight in zip(sizes.tolist(), weights.tolist(), strict=True))
    right = under_sun(edges, series[0])
    for element in range(4):
        error = np.abs(under_sun(edges, waves[element]) - under_sun(edges, series[element])).max() / right.max()
        assert error < 0.01, (element, error)


# Measured: 0.3 to 3 % in the mean; by rays alone the second and the third are 10 and 20 % too dark.
@pytest.mark.parametrize("low", [8.0, 75.0, 160.0])
def test_elsewhere_the_mean_is_the_series(low: float) -> None:
    series, waves = both(100.0, low, low + 1.5, 40, 0.05)
    assert waves.mean() == pytest.approx(series.mean(), rel=0.04)


@pytest.mark.parametrize("x", [300.0, 1500.0, 20000.0])
def test_all_light_is_there(x: float) -> None:
    """What meets the drop leaves it: S11 of reflected and refracted light over all directions makes pi x^2."""
    step = 0.005
    angles = (np.arange(round(180.0 / step)) + 0.5) * step
    rings = 2.0 * math.pi * np.sin(np.radians(angles)) * math.radians(step)
    s11 = intensities_of(ray_table(WATER, angles), x, diffraction=False)[0]
    assert (s11 * rings).sum() / (math.pi * x * x) == pytest.approx(1.0, abs=6e-4)


def test_diffracted_light_is_as_much_as_is_met() -> None:
    """Babinet: the disc's spike holds pi x^2 (and what grazing rays add to it, 2 x^(-2/3) of it: 2 % here)."""
    x = 1000.0
    angles = (np.arange(200_000) + 0.5) * (0.5 * math.pi / 200_000)
    total = (airy_disc(angles, x) * 2.0 * math.pi * np.sin(angles)).sum() * (0.5 * math.pi / 200_000)
    assert total / (math.pi * x * x) == pytest.approx(1.0 + 2.0 * 0.9962 * x ** (-2.0 / 3.0), abs=0.004)


def test_straight_on_and_back_nothing_is_infinite() -> None:
    found = intensities(250.0, 450.0, 1.34, np.array([0.0, 1e-9, 82.8, 137.9, 180.0 - 1e-9, 180.0]))
    assert np.all(np.isfinite(found))
    assert np.all(found[0] > 0.0)
    assert np.abs(found[1] / found[0])[[0, -1]].max() < 0.01  # nothing tells the polarisations apart on the axis
    assert found[2][0] > 0.0 > found[2][-1]  # S1 = S2 straight on, S1 = -S2 straight back
