"""Exposure by stops, by ISO 12232 and by itself."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.colour import exposure


def test_iso_by_hand():
    """f/2.8, 1/48 s, ISO 400, 100 cd/m2: H = 0.65 x 100 / 48 / 7.84 = 0.17273 lx s; 0.18 x H x 400 / 10 = 1.2436."""
    assert 100.0 * exposure.exposure_by_iso(400.0, 1.0 / 48.0, 2.8) == pytest.approx(1.2436, abs=1e-4)


def test_the_rated_exposure_comes_out_as_mid_grey():
    """A sensor of ISO S that receives 10 / S lx s shows 0.18; 0.461 of full scale in sRGB, as ISO 12232 has it."""
    from renderer.colour.preview import srgb_encoded

    iso, time_s, f_number = 160.0, 1.0 / 50.0, 5.6
    luminance = 10.0 / iso * f_number**2 / (0.65 * time_s)
    value = luminance * exposure.exposure_by_iso(iso, time_s, f_number)
    assert value == pytest.approx(0.18)
    assert srgb_encoded(np.array(value)) == pytest.approx(0.461, abs=1e-3)


def test_stops_double_and_zero_is_a_sunny_day():
    zero = exposure.exposure_by_stops(0.0)
    assert 1.0 / zero == pytest.approx(28006.8, abs=0.1)  # cd/m2 that come out as 1
    assert exposure.exposure_by_stops(3.0) == pytest.approx(8.0 * zero)
    assert exposure.exposure_by_stops(-0.5) == pytest.approx(zero / 2.0**0.5)
    assert exposure.exposure_factor(stops=2.0) == exposure.exposure_by_stops(2.0)
    assert exposure.exposure_factor(iso=100.0, shutter_s=1.0 / 128.0, f_number=16.0) == pytest.approx(zero)


@pytest.mark.parametrize("settings", [(100.0, 0.01, 0.0), (0.0, 0.01, 4.0), (100.0, 0.0, 4.0)])
def test_iso_without_lens_or_light(settings):
    with pytest.raises(InputError, match="exposure by ISO"):
        exposure.exposure_by_iso(*settings)


def test_automatic_exposure_brings_the_geometric_mean_to_mid_grey():
    luminance = np.exp(np.random.default_rng(3).normal(5.0, 1.0, (40, 50)))
    factor = exposure.exposure_auto(luminance)
    # to half a hundredth of a stop: 0.35 %
    assert np.exp(np.log(luminance * factor).mean()) == pytest.approx(0.18, rel=0.0036)
    black = np.concatenate([luminance.ravel(), np.zeros(5000)])
    assert exposure.exposure_auto(black) == factor
    steps = np.log2(factor / exposure.exposure_by_stops(0.0)) * 100.0
    assert steps == pytest.approx(round(steps), abs=1e-6)


def test_automatic_exposure_of_nothing():
    assert exposure.exposure_auto(np.zeros((3, 3))) == exposure.exposure_by_stops(0.0)
    assert exposure.exposure_auto(np.array([])) == exposure.exposure_by_stops(0.0)
