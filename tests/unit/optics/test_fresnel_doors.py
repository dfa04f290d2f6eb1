"""The Python doors beside the kernels: shapes, edges, refusals, and agreement with the kernels."""

from __future__ import annotations

import math

import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.optics import fresnel, fresnel_kernels, wet, wet_kernels


def test_doors_and_kernels_agree():
    for n1, n2 in ((1.0, 1.5), (1.5, 1.0), (1.333, 1.5), (1.0, 1.0)):
        angles = np.linspace(0.0, 90.0, 37)
        found = fresnel.amplitudes(angles, n1, n2)
        for k, angle in enumerate(angles):
            cosine = 0.0 if angle == 90.0 else math.cos(math.radians(angle))
            rs_re, rs_im, rp_re, rp_im, *_ = fresnel_kernels.fresnel_amplitudes(cosine, n1, n2)
            assert found.rs[k] == pytest.approx(complex(rs_re, rs_im), abs=1e-9)
            assert found.rp[k] == pytest.approx(complex(rp_re, rp_im), abs=1e-9)
            assert float(fresnel.reflectance(angle, n1, n2)) == pytest.approx(
                fresnel_kernels.unpolarised_reflectance(cosine, n1, n2), abs=1e-12
            )


def test_snell_and_its_end():
    assert fresnel.snell_deg([0.0, 30.0], 1.0, 1.5).shape == (2,)
    assert np.isnan(fresnel.snell_deg(45.0, 1.5, 1.0))
    critical = float(fresnel.critical_angle_deg(1.5))
    assert float(fresnel.snell_deg(critical, 1.5, 1.0)) == pytest.approx(90.0, abs=1e-5)
    assert np.isnan(fresnel.critical_angle_deg(1.0, 1.5))
    assert float(fresnel.critical_angle_deg(1.5, 1.5)) == 90.0


def test_brewster_and_refracted_ray_are_square():
    angle = fresnel.brewster_angle_deg(1.333, 1.5168)
    assert float(angle + fresnel.snell_deg(angle, 1.333, 1.5168)) == pytest.approx(90.0, abs=1e-12)


def test_absorption_multiplies_over_distance():
    first, second = fresnel.beer_lambert(0.7, [1.0, 2.0])
    assert second == pytest.approx(first**2)
    assert fresnel.beer_lambert(0.0, 1e9) == 1.0


@pytest.mark.parametrize(
    "call",
    [
        lambda: fresnel.snell_deg(91.0, 1.0, 1.5),
        lambda: fresnel.snell_deg(10.0, 0.0, 1.5),
        lambda: fresnel.brewster_angle_deg(1.0, float("inf")),
        lambda: fresnel.beer_lambert(-0.1, 1.0),
        lambda: fresnel.beer_lambert(0.1, -1.0),
        lambda: wet.wet_body_reflectance(1.2),
        lambda: wet.diffuse_fresnel(0.0),
    ],
)
def test_refusals(call):
    with pytest.raises(InputError) as caught:
        call()
    assert caught.value.faults[0].expected


def test_wet_ends_are_fixed_and_the_middle_is_darker():
    dry = np.linspace(0.0, 1.0, 101)
    whole = wet.wet_reflectance(dry)
    assert whole[-1] == pytest.approx(1.0, abs=1e-12)
    assert whole[0] == pytest.approx(float(wet.diffuse_fresnel(wet.FILM_INDEX)))
    assert np.all(np.diff(whole) > 0.0)
    assert np.all(whole[14:-1] < dry[14:-1])  # darker ones gain more gloss than they lose
    np.testing.assert_array_equal(wet.wet_reflectance(dry, 0.0), dry)


def test_body_distribution_integrates_to_the_body_reflectance():
    """factor / pi T(in) T(out), for even light from the whole sky, is `wet_body_reflectance`; and it is reciprocal."""
    cosine = (np.arange(20000) + 0.5) / 20000
    through = 1 - fresnel.reflectance(np.degrees(np.arccos(cosine)), 1.0, 1.333)
    mean = float(np.mean(2 * cosine * through))
    for dry in (0.05, 0.3, 0.8):
        factor = wet_kernels.wet_body_factor(dry, 1.333, 1.5)
        assert mean * mean * factor == pytest.approx(wet_kernels.wet_body_reflectance(dry, 1.333, 1.5), abs=1e-7)


@pytest.mark.parametrize("n", [1.00001, 1.00009, 1.00011, 1.001, 0.9995, 0.75])
def test_mean_reflectance_by_quadrature(n):
    edge = math.sqrt(abs(1 - 1 / n**2) if n > 1 else 1 - n * n)
    split = min(4 * edge, 0.9)  # most is reflected near grazing
    fine = (np.arange(400_000) + 0.5) / 400_000
    cosine = np.concatenate([split * fine, split + (1 - split) * fine])
    widths = np.repeat([split / 400_000, (1 - split) / 400_000], 400_000)
    sine2 = (1 - cosine**2) / n**2
    refracted = np.sqrt(np.maximum(1 - sine2, 0))
    s = ((cosine - n * refracted) / (cosine + n * refracted)) ** 2
    p = ((n * cosine - refracted) / (n * cosine + refracted)) ** 2
    share = np.where(sine2 >= 1, 1.0, 0.5 * (s + p))
    assert wet_kernels.diffuse_fresnel(n) == pytest.approx(float(np.sum(2 * cosine * share * widths)), rel=2e-3)
