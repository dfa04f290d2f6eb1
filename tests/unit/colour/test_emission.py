"""Lights: exact luminance, exact chromaticity, nothing below 0."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.base.constants import LUMINOUS_EFFICACY
from renderer.base.errors import InputError
from renderer.colour import emission
from renderer.colour.illuminants import blackbody, d65
from renderer.colour.observer import luminance, observer_at, spectrum_to_xyz
from renderer.colour.spaces import applied, converted, reflected_matrix, xyz_to_rgb

INSIDE = [(1.0, 1.0, 1.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0), (0.2, 0.7, 0.9), (30.0, 4.0, 0.0)]
VIVID = [(1.2, -0.1, 0.1), (-0.3, 0.9, 0.05), (0.1, -0.02, 1.0), (-0.4, 0.6, 1.0), (1.0, -0.2, 1.0)]


@pytest.mark.parametrize("colour", INSIDE + VIVID)
def test_colour_of_light_is_exact(colour):
    spectrum = emission.light_spectrum(250.0, colour=colour)
    target = applied(reflected_matrix("rec709"), np.array(colour))
    assert spectrum.min() >= 0.0
    assert float(luminance(spectrum)) == pytest.approx(250.0, rel=1e-12)
    np.testing.assert_allclose(spectrum_to_xyz(spectrum) / target, 250.0 / (LUMINOUS_EFFICACY * target[1]), rtol=1e-9)
    assert np.abs(np.diff(spectrum)).max() < 0.12 * spectrum.max()  # smooth: D65 itself steps by 2.4 %


def test_a_primary_of_rec2020_is_met_although_it_is_nearly_one_wavelength():
    green = converted(np.array([0.02, 0.9, 0.02]), "rec2020", "rec709")
    spectrum = emission.light_spectrum(1.0, colour=tuple(green))
    target = applied(reflected_matrix("rec709"), green)
    assert spectrum.min() >= 0.0
    assert emission.chromaticity_miss(spectrum[None], target)[0] < 1e-3


def test_white_is_d65_and_balances_to_grey():
    spectrum = emission.light_spectrum(100.0, colour=(1.0, 1.0, 1.0))
    np.testing.assert_allclose(spectrum / spectrum[180], d65() / d65()[180], rtol=1e-10)
    values = xyz_to_rgb(LUMINOUS_EFFICACY * spectrum_to_xyz(spectrum), "rec709", 6504.0)
    np.testing.assert_allclose(values, 100.0, rtol=1e-10)


def test_temperature():
    spectrum = emission.light_spectrum(5.0, temperature_k=3200.0)
    assert float(luminance(spectrum)) == pytest.approx(5.0, rel=1e-12)
    np.testing.assert_allclose(spectrum / spectrum[0], blackbody(3200.0) / blackbody(3200.0)[0], rtol=1e-12)


def test_table_is_linear_between_and_nothing_beyond():
    spectrum = emission.light_spectrum(1.0, spectrum=((500.0, 1.0), (600.0, 3.0)))
    assert spectrum[119] == 0.0
    assert spectrum[221] == 0.0
    assert spectrum[170] / spectrum[120] == pytest.approx(2.0)
    assert float(luminance(spectrum)) == pytest.approx(1.0, rel=1e-12)


@pytest.mark.parametrize(
    "table", [(), ((500.0, 1.0), (400.0, 2.0)), ((500.0, -1.0), (510.0, 2.0)), ((800.0, 1.0), (900.0, 2.0))]
)
def test_tables_that_are_no_light(table):
    with pytest.raises(InputError, match="spectrum of a light"):
        emission.light_spectrum(1.0, spectrum=table)


@pytest.mark.parametrize("colour", [(0.0, 0.0, 0.0), (-1.0, 0.0, 0.0), (float("nan"), 1.0, 1.0)])
def test_colours_that_are_no_light(colour):
    with pytest.raises(InputError, match="no luminance"):
        emission.light_spectrum(1.0, colour=colour)


def test_lines_carry_their_share_of_the_luminance():
    lines = ((435.83, 0.2), (546.07, 0.8))
    radiance = emission.line_radiance(lines, 1000.0)
    for (nm, share), value in zip(lines, radiance, strict=True):
        assert LUMINOUS_EFFICACY * value * observer_at(nm)[1] == pytest.approx(share * 1000.0)


def test_lines_alone_have_all_of_the_light():
    smooth, lines = emission.light_radiance(10.0, lines=((589.0, 2.0), (589.6, 1.0)))
    assert smooth.max() == 0.0
    total = LUMINOUS_EFFICACY * (lines[0] * observer_at(589.0)[1] + lines[1] * observer_at(589.6)[1])
    assert total == pytest.approx(10.0)
    assert lines[0] * observer_at(589.0)[1] == pytest.approx(2.0 * lines[1] * observer_at(589.6)[1])


def test_lines_beside_a_spectrum_share_the_light():
    smooth, lines = emission.light_radiance(10.0, temperature_k=3000.0, lines=((546.07, 0.3),))
    assert float(luminance(smooth)) == pytest.approx(7.0)
    assert LUMINOUS_EFFICACY * lines[0] * observer_at(546.07)[1] == pytest.approx(3.0)


@pytest.mark.parametrize("lines", [((300.0, 1.0),), ((500.0, -1.0), (550.0, 2.0)), ()])
def test_lines_that_are_no_light(lines):
    with pytest.raises(InputError):
        emission.light_radiance(10.0, lines=lines)


def test_lines_with_more_than_all_of_the_light():
    with pytest.raises(InputError, match="more than all"):
        emission.light_radiance(10.0, temperature_k=3000.0, lines=((546.07, 1.3),))


def test_picture_sky_basis():
    """Coefficients are linear Rec.709 in cd/m2: each channel has its primary's colour, and white is D65."""
    basis = emission.sky_basis_from_rgb()
    assert basis.shape == (3, 401)
    assert basis.min() >= 0.0
    np.testing.assert_allclose(LUMINOUS_EFFICACY * spectrum_to_xyz(basis).T, reflected_matrix("rec709"), atol=1e-9)
    np.testing.assert_allclose(basis.sum(axis=0) / basis.sum(axis=0)[180], d65() / d65()[180], rtol=1e-9)
    assert float(luminance(basis.sum(axis=0))) == pytest.approx(1.0, rel=1e-9)
