"""Fresnel kernels against Jones calculus, conservation and reciprocity."""

from __future__ import annotations

import cmath
import math

import numpy as np
import pytest

from renderer.optics import fresnel_kernels as kernels

CASES = [
    (cos_i, n1, n2)
    for cos_i in (1.0, 0.93, 0.7, 0.5, 0.2, 0.01)
    for n1, n2 in ((1.0, 1.5), (1.5, 1.0), (1.0, 1.333), (1.333, 1.0), (2.4, 1.333), (1.5, 1.5))
]


def jones(cos_i, n1, n2):
    """Complex rs, rp, ts, tp written out from the boundary conditions, fields as exp(i k.r - i w t)."""
    sin_t = n1 / n2 * math.sqrt(1 - cos_i**2)
    cos_t = cmath.sqrt(1 - sin_t**2)  # the root with a positive imaginary part decays
    sum_s, sum_p = n1 * cos_i + n2 * cos_t, n2 * cos_i + n1 * cos_t
    return (
        (n1 * cos_i - n2 * cos_t) / sum_s,
        (n2 * cos_i - n1 * cos_t) / sum_p,
        2 * n1 * cos_i / sum_s,
        2 * n1 * cos_i / sum_p,
        cos_t,
    )


def stokes(es, ep):
    """Stokes vector of a field, as the kernels' file defines it."""
    product = 2 * np.conj(es) * ep
    return np.array([abs(es) ** 2 + abs(ep) ** 2, abs(es) ** 2 - abs(ep) ** 2, product.real, product.imag])


def matrix(a, b, c, s):
    return np.array([[a, b, 0, 0], [b, a, 0, 0], [0, 0, c, s], [0, 0, -s, c]])


FIELDS = [(1, 0), (0, 1), (1, 1), (1, 1j), (0.3 - 0.2j, 0.7 + 0.9j)]


@pytest.mark.parametrize(("cos_i", "n1", "n2"), CASES)
def test_mueller_matrices_move_stokes_vectors_as_jones_moves_fields(cos_i, n1, n2):
    ra, rb, rc, rs, ta, tb, tc, cos_t = kernels.fresnel_mueller(cos_i, n1, n2)
    j_rs, j_rp, j_ts, j_tp, j_cos_t = jones(cos_i, n1, n2)
    flux = (n2 * j_cos_t / (n1 * cos_i)).real
    for es, ep in FIELDS:
        np.testing.assert_allclose(matrix(ra, rb, rc, rs) @ stokes(es, ep), stokes(j_rs * es, j_rp * ep), atol=1e-12)
        np.testing.assert_allclose(
            matrix(ta, tb, tc, 0.0) @ stokes(es, ep), flux * stokes(j_ts * es, j_tp * ep), atol=1e-12
        )
    if cos_t >= 0:
        assert cos_t == pytest.approx(j_cos_t.real, abs=1e-14)


@pytest.mark.parametrize(("cos_i", "n1", "n2"), CASES)
def test_a_lossless_interface_keeps_the_energy(cos_i, n1, n2):
    ra, rb, rc, rs, ta, tb, tc, _ = kernels.fresnel_mueller(cos_i, n1, n2)
    assert ra + ta == pytest.approx(1.0, abs=1e-14)
    assert rb + tb == pytest.approx(0.0, abs=1e-14)
    assert rc * rc + rs * rs == pytest.approx(ra * ra - rb * rb, abs=1e-14)  # no depolarisation
    assert tc * tc == pytest.approx(ta * ta - tb * tb, abs=1e-14)
    assert kernels.unpolarised_reflectance(cos_i, n1, n2) == pytest.approx(ra, abs=1e-15)


@pytest.mark.parametrize(("cos_i", "n1", "n2"), CASES)
def test_light_against_the_camera_ray_has_the_same_numbers(cos_i, n1, n2):
    """Reversed, M becomes K M^T K with K = diag(1, 1, -1, 1); both branches must equal what the camera ray is given."""
    ra, rb, rc, rs, ta, tb, tc, cos_t = kernels.fresnel_mueller(cos_i, n1, n2)
    reverse = np.diag([1.0, 1.0, -1.0, 1.0])
    forward = matrix(ra, rb, rc, rs)
    np.testing.assert_allclose(reverse @ forward.T @ reverse, forward, atol=1e-15)
    if cos_t >= 0:
        back = kernels.fresnel_mueller(cos_t, n2, n1)
        np.testing.assert_allclose(back[4:7], (ta, tb, tc), atol=1e-12)
        assert back[7] == pytest.approx(cos_i, abs=1e-12)


def test_either_handedness_of_frames_gives_the_same_matrices():
    flip = np.diag([1.0, 1.0, -1.0, -1.0])  # turning the second axis round
    ra, rb, rc, rs, *_ = kernels.fresnel_mueller(0.6, 1.5, 1.0)
    assert abs(rs) > 0.1
    np.testing.assert_array_equal(flip @ matrix(ra, rb, rc, rs) @ flip, matrix(ra, rb, rc, rs))


def test_normal_incidence_signs_are_as_documented():
    rs, _, rp, _, ts, tp, cos_t = kernels.fresnel_amplitudes(1.0, 1.0, 1.5)
    assert rs == pytest.approx(-0.2)
    assert rp == pytest.approx(0.2)
    assert ts == pytest.approx(0.8)
    assert tp == pytest.approx(0.8)
    assert cos_t == 1.0


@pytest.mark.parametrize(("n1", "n2"), [(1.0, 1.5), (1.5, 1.0), (1.3, 1.3)])
def test_grazing_incidence_gives_finite_numbers(n1, n2):
    values = kernels.fresnel_mueller(0.0, n1, n2)
    assert all(math.isfinite(value) for value in values)
    assert values[0] == (0.0 if n1 == n2 else 1.0)
    assert all(math.isfinite(value) for value in kernels.pane_mueller(0.0, n2 / n1, 0.9))


def test_the_critical_angle_itself_is_finite_and_continuous():
    cosine = math.sqrt(1 - (1 / 1.5) ** 2)
    for near in (cosine, np.nextafter(cosine, 0), np.nextafter(cosine, 1), cosine + 1e-13, cosine - 1e-13):
        values = kernels.fresnel_mueller(near, 1.5, 1.0)
        assert all(math.isfinite(value) for value in values)
        assert values[0] == pytest.approx(1.0, abs=1e-5)
        assert values[2] == pytest.approx(1.0, abs=1e-5)  # rs = rp = 1 where total reflection starts


@pytest.mark.parametrize("tau", [1.0, 0.6])
@pytest.mark.parametrize("cos_i", [1.0, 0.55, 0.1])
def test_pane_equals_the_plain_sum_over_orders(cos_i, tau):
    n = 1.52
    ra, rb, rc, _, ta, tb, tc, cos_t = kernels.fresnel_mueller(cos_i, 1.0, n)
    inside = matrix(*kernels.fresnel_mueller(cos_t, n, 1.0)[:4])
    through = matrix(ta, tb, tc, 0.0)
    state, reflected, transmitted = tau * through, matrix(ra, rb, rc, 0.0), np.zeros((4, 4))
    for _ in range(60):
        transmitted = transmitted + through @ state
        state = tau * (inside @ state)
        reflected = reflected + through @ state
        state = tau * (inside @ state)
    got = kernels.pane_mueller(cos_i, n, tau)
    np.testing.assert_allclose(matrix(*got[:3], 0.0), reflected, atol=1e-12)
    np.testing.assert_allclose(matrix(*got[3:], 0.0), transmitted, atol=1e-12)
    assert got[0] + got[3] <= 1.0 + 1e-12
