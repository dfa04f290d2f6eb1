"""Observer, white lights and RGB spaces against colour-science 0.4.7, which carries the CIE's and ITU's own tables."""

from __future__ import annotations

import numba  # noqa: F401  (before colour, which leaves a stand-in for scipy behind where scipy is missing)
import numpy as np
import pytest

from renderer.colour import illuminants, observer, spaces
from renderer.colour.tables import shipped_table, wavelengths_nm

colour = pytest.importorskip("colour")


def library_table(spectra):
    """A library spectrum at our 401 wavelengths, linear between its own as the CIE says."""
    return np.interp(wavelengths_nm(), spectra.wavelengths, spectra.values)


def test_observer_is_the_cie_table():
    published = colour.MSDS_CMFS["CIE 1931 2 Degree Standard Observer"]
    table = shipped_table("cie_1931_2deg_1nm.csv")
    np.testing.assert_array_equal(table[:, 0], published.wavelengths)
    np.testing.assert_allclose(table[:, 1:], published.values, rtol=0, atol=1e-12)
    np.testing.assert_array_equal(observer.observer(), table[20:421, 1:])


@pytest.mark.parametrize(
    ("name", "ours", "tolerance"),
    [
        ("D65", illuminants.d65(), 1e-9),
        ("E", illuminants.illuminant_e(), 1e-9),
        ("D65", illuminants.daylight(illuminants.D65_K), 1e-3),  # the table's own values are rounded to 4 decimals
    ],
)
def test_illuminants_are_the_cie_tables(name, ours, tolerance):
    np.testing.assert_allclose(ours, library_table(colour.SDS_ILLUMINANTS[name]), rtol=0, atol=tolerance)


def test_illuminant_a_where_the_cie_tabulates_it():
    """The CIE's table has 5 nm steps and 6 digits; the formula is evaluated at each nanometre."""
    published = colour.SDS_ILLUMINANTS["A"]
    ours = illuminants.illuminant_a()
    nodes = (published.wavelengths >= 380) & (published.wavelengths <= 780)
    every_5 = np.rint(published.wavelengths[nodes] - 380).astype(int)
    np.testing.assert_allclose(ours[every_5], published.values[nodes], rtol=1e-5)


@pytest.mark.parametrize("temperature_k", [4000.0, 5003.0, 7000.0, 9305.0, 25000.0])
def test_daylight_of_any_temperature(temperature_k):
    xy = colour.temperature.CCT_to_xy_CIE_D(temperature_k)
    np.testing.assert_allclose(illuminants.daylight_xy(temperature_k), xy, atol=1e-12)
    published = colour.sd_CIE_illuminant_D_series(xy)
    # the library interpolates to 1 nm after rounding nothing; the CIE rounds M1 and M2 to 3 decimals: 0.0005 x 120
    np.testing.assert_allclose(illuminants.daylight(temperature_k), library_table(published), atol=0.12)


@pytest.mark.parametrize("temperature_k", [1000.0, 2856.0, 5778.0, 12000.0])
def test_black_body_radiance(temperature_k):
    """By the library's formula with the exact constants of 2019: c1 = 3.741771852e-16 W m2, c2 = 0.01438776877 m K."""
    published = colour.colorimetry.planck_law(
        wavelengths_nm() * 1e-9, temperature_k, c1=3.741771852e-16, c2=0.01438776877
    )
    np.testing.assert_allclose(
        illuminants.blackbody(temperature_k), np.ravel(published) * 1e-9, rtol=1e-7
    )  # c2 has ten digits here


def test_d65_chromaticity():
    """x = 0.31272, y = 0.32903 over 360-830 nm: CIE 015:2018, table 3.1. Cutting at 380 and 780 nm moves it by 3e-5."""
    xyz = observer.spectrum_to_xyz(illuminants.d65())
    assert xyz[0] / xyz.sum() == pytest.approx(0.31272, abs=5e-5)
    assert xyz[1] / xyz.sum() == pytest.approx(0.32903, abs=5e-5)


@pytest.mark.parametrize(
    ("name", "published"), [("rec709", "ITU-R BT.709"), ("rec2020", "ITU-R BT.2020"), ("acescg", "ACEScg")]
)
def test_rgb_spaces(name, published):
    """The library's own matrices are printed ones, so those that it derives are compared."""
    space = colour.RGB_COLOURSPACES[published].copy()
    space.use_derived_transformation_matrices(True)
    np.testing.assert_allclose(spaces.rgb_to_xyz_matrix(name), space.matrix_RGB_to_XYZ, atol=1e-12)
    np.testing.assert_allclose(spaces.xyz_to_rgb_matrix(name), space.matrix_XYZ_to_RGB, atol=1e-12)


def test_bradford_adaptation():
    before, after = spaces.white_xyz("rec709"), spaces.white_xyz("acescg")
    published = colour.adaptation.matrix_chromatic_adaptation_VonKries(before, after, transform="Bradford")
    np.testing.assert_allclose(spaces.bradford_matrix(before, after), published, atol=1e-12)


@pytest.mark.parametrize(("source", "target"), [("rec2020", "acescg"), ("acescg", "rec709"), ("rec709", "rec2020")])
def test_conversion_between_spaces(source, target):
    names = {"rec709": "ITU-R BT.709", "rec2020": "ITU-R BT.2020", "acescg": "ACEScg"}
    before, after = (colour.RGB_COLOURSPACES[names[name]].copy() for name in (source, target))
    before.use_derived_transformation_matrices(True)
    after.use_derived_transformation_matrices(True)
    rgb = np.random.default_rng(2).random((50, 3))
    published = colour.RGB_to_RGB(rgb, before, after, chromatic_adaptation_transform="Bradford")
    np.testing.assert_allclose(spaces.converted(rgb, source, target), published, atol=1e-10)
