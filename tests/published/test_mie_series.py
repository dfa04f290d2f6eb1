"""The full series against an independent package (miepython), the optical theorem, and limits in closed form.

miepython counts absorption by a negative imaginary part; its norm "wiscombe" is that of Bohren and Huffman's S1, S2.
"""

from __future__ import annotations

import math

import miepython
import mpmath
import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.optics.mie import amplitudes, efficiencies
from renderer.optics.mie_kernels import add_cross_sections, add_intensities


def cases(n: int, largest: float) -> list[tuple[float, complex]]:
    """Random spheres: size parameters from 0.3 up, indices from 1.1 to 2, every other one absorbing."""
    rng = np.random.default_rng(11)
    sizes = 10.0 ** rng.uniform(-0.5, math.log10(largest), n)
    absorbing = np.where(np.arange(n) & 1, 0.0, 10.0 ** rng.uniform(-8.0, -1.0, n))
    return [(float(x), complex(m, k)) for x, m, k in zip(sizes, rng.uniform(1.1, 2.0, n), absorbing, strict=True)]


def test_efficiencies_of_two_hundred_spheres() -> None:
    for x, m in cases(200, 2000.0):
        found = efficiencies(x, m)
        extinction, scattering, back, asymmetry = miepython.efficiencies_mx(m.conjugate(), x)
        assert found.extinction == pytest.approx(extinction, rel=1e-9)
        assert found.scattering == pytest.approx(scattering, rel=1e-9)
        assert found.asymmetry == pytest.approx(asymmetry, abs=1e-9)
        if found.backscatter != pytest.approx(back, rel=1e-7):
            # On narrow resonances of clear spheres double precision itself leaves no more than this.
            assert found.backscatter == pytest.approx(backscatter_with_40_digits(x, m), rel=1e-7 if m.imag else 5e-6)


def backscatter_with_40_digits(x: float, m: complex) -> float:
    """The same series where the packages disagree."""
    mpmath.mp.dps = 40
    n_last, size, index = int(x + 4.8 * x ** (1.0 / 3.0) + 20.0), mpmath.mpf(x), mpmath.mpc(m)
    z, order = index * size, int(max(x, abs(m) * x)) + 120
    derivative, down = [mpmath.mpc(0)] * (order + 1), mpmath.mpc(0)
    for n in range(order, 0, -1):
        down = n / z - 1 / (down + n / z)
        derivative[n - 1] = down
    psi, chi = [mpmath.cos(size), mpmath.sin(size)], [-mpmath.sin(size), mpmath.cos(size)]
    total = mpmath.mpc(0)
    for n in range(1, n_last + 1):
        for pair in (psi, chi):
            pair[:] = pair[1], (2 * n - 1) / size * pair[1] - pair[0]
        xi = [mpmath.mpc(p, -c) for p, c in zip(psi, chi, strict=True)]
        of_a, of_b = derivative[n] / index + n / size, derivative[n] * index + n / size
        a, b = ((of * psi[1] - psi[0]) / (of * xi[1] - xi[0]) for of in (of_a, of_b))
        total += (-1) ** n * (2 * n + 1) * (a - b)
    return float(abs(total) ** 2 / size**2)


def test_intensities_of_two_hundred_spheres() -> None:
    rng = np.random.default_rng(12)
    for x, m in cases(200, 1000.0):
        cosines = np.cos(rng.uniform(0.0, math.pi, 24))
        s1, s2 = amplitudes(x, m, cosines)
        t1, t2 = miepython.S1_S2(m.conjugate(), x, cosines, norm="wiscombe")
        found, expected = np.abs(s1) ** 2 + np.abs(s2) ** 2, np.abs(t1) ** 2 + np.abs(t2) ** 2
        assert np.all(np.abs(found - expected) <= 1e-5 * np.maximum(expected, 1e-3 * np.median(expected)))


@pytest.mark.parametrize("x", [0.01, 1.0, 300.0, 20_000.0, 50_000.0])
def test_the_optical_theorem(x: float) -> None:
    """Extinction is 4 / x^2 times the real part of S straight on (Bohren & Huffman, eq. 4.76)."""
    (forward,), _ = amplitudes(x, 1.33 + 1e-6j, np.ones(1))
    assert 4.0 / x**2 * forward.real == pytest.approx(efficiencies(x, 1.33 + 1e-6j).extinction, rel=1e-9)


def test_small_spheres_scatter_as_rayleigh_has_it() -> None:
    x, m = 0.01, 1.5
    found = efficiencies(x, m)
    assert found.scattering == pytest.approx(8.0 / 3.0 * x**4 * ((m * m - 1.0) / (m * m + 2.0)) ** 2, rel=1e-3)
    assert abs(found.asymmetry) < 1e-3


def test_what_scatters_adds_up_over_all_directions() -> None:
    """Scattering is the integral of S11 over all directions, and nothing is lost without absorption."""
    x, m = 60.0, 1.33
    cosines, weights = np.polynomial.legendre.leggauss(400)
    sums, sections = np.zeros((4, 400)), np.zeros(3)
    add_intensities(np.array([x]), np.ones(1), complex(m), cosines, sums)
    add_cross_sections(np.array([x]), np.ones(1), complex(m), sections)
    assert 2.0 / x**2 * (weights * sums[0]).sum() == pytest.approx(sections[1] / x**2, rel=1e-10)
    assert 2.0 / x**2 * (weights * cosines * sums[0]).sum() == pytest.approx(sections[2] / x**2, rel=1e-9)
    assert sections[0] == pytest.approx(sections[1], rel=1e-12)
    assert np.all(sums[0] ** 2 * (1.0 + 1e-12) >= sums[1] ** 2 + sums[2] ** 2 + sums[3] ** 2)


def test_many_spheres_are_the_sum_of_each() -> None:
    cosines, x, weights = np.linspace(-1.0, 1.0, 150), np.array([3.0, 40.0]), np.array([0.25, 2.0])
    sums = np.zeros((4, 150))
    add_intensities(x, weights, 1.4 + 0.01j, cosines, sums)
    expected = np.zeros((4, 150))
    for size, weight in zip(x, weights, strict=True):
        s1, s2 = amplitudes(size, 1.4 + 0.01j, cosines)
        cross = s2 * s1.conj()
        both = (np.abs(s2) ** 2 + np.abs(s1) ** 2, np.abs(s2) ** 2 - np.abs(s1) ** 2)
        expected += weight * np.array([0.5 * both[0], 0.5 * both[1], cross.real, cross.imag])
    np.testing.assert_allclose(sums, expected, rtol=1e-10, atol=1e-10 * expected.max())


@pytest.mark.parametrize(("x", "m"), [(0.0, 1.33), (1e6, 1.33), (math.nan, 1.33), (10.0, 1.33 - 0.1j), (10.0, -1.0)])
def test_what_is_no_sphere_is_refused(x: float, m: complex) -> None:
    with pytest.raises(InputError):
        efficiencies(x, m)
