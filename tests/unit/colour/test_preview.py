"""The preview: honest in the dark half, bent above, inside the screen's gamut with the hue kept."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.colour import preview
from renderer.colour.spaces import converted


def test_the_straight_part_shows_what_was_rendered():
    linear = np.array([0.0, 0.01, 0.05, 0.18])
    shown = preview.preview(np.repeat(linear[:, None], 3, axis=1), "rec709")
    expected = np.floor(preview.srgb_encoded(linear) * 255.0 + 0.5)
    np.testing.assert_array_equal(shown, np.repeat(expected[:, None], 3, axis=1))


def test_tone_curve_rises_without_a_kink_and_ends_at_1():
    x = np.linspace(0.0, 16.0, 160_001)
    y = preview.tone_curve(x)
    slope = np.diff(y) / np.diff(x)
    assert slope.min() > 0.0
    assert np.abs(np.diff(slope)).max() < 5e-4  # a kink would jump; this bends
    assert y[-1] == pytest.approx(1.0)
    np.testing.assert_array_equal(preview.tone_curve(np.array([100.0, -1.0])), [1.0, 0.0])


@pytest.mark.parametrize("space", ["rec709", "rec2020", "acescg", "xyz"])
def test_greys_stay_grey(space):
    grey = converted(np.repeat(np.array([[0.02], [0.3], [1.0], [5.0]]), 3, axis=1), "rec709", space)
    shown = preview.preview(grey, space).astype(int)
    assert np.ptp(shown, axis=1).max() == 0


def test_gamut_mapping_keeps_lightness_and_hue():
    rng = np.random.default_rng(5)
    colours = converted(rng.random((400, 3)), "acescg", "rec709")
    outside = ((colours < 0.0) | (colours > 1.0)).any(axis=1)
    assert outside.sum() > 100
    mapped = preview.into_gamut(colours)
    assert mapped.min() >= 0.0
    assert mapped.max() <= 1.0
    np.testing.assert_array_equal(mapped[~outside], colours[~outside])
    before, after = preview.linear_to_oklab(colours[outside]), preview.linear_to_oklab(mapped[outside])
    np.testing.assert_allclose(after[:, 0], np.clip(before[:, 0], 0.0, 1.0), atol=1e-6)
    chroma = np.hypot(after[:, 1], after[:, 2])
    turn = np.arctan2(after[:, 2], after[:, 1]) - np.arctan2(before[:, 2], before[:, 1])
    turn = (turn + np.pi) % (2.0 * np.pi) - np.pi
    assert np.abs(turn[chroma > 0.01]).max() < 1e-4
    assert (chroma <= np.hypot(before[:, 1], before[:, 2]) + 1e-9).all()
    # as far out as the gamut goes: one of the channels is at an end
    at_end = np.minimum(mapped[outside], 1.0 - mapped[outside]).min(axis=1)
    assert np.quantile(at_end, 0.95) < 2e-3


def test_bright_colours_go_toward_white_and_keep_order():
    blue = np.array([0.05, 0.05, 1.0])
    shown = preview.preview(np.stack([blue * k for k in (0.5, 1.0, 4.0, 64.0, 1000.0)]), "rec709").astype(int)
    assert (np.diff(shown.sum(axis=1)) >= 0).all()
    np.testing.assert_array_equal(shown[-1], [255, 255, 255])


def test_odd_values_do_no_harm():
    shown = preview.preview(np.array([[np.nan, 0.1, 0.1], [np.inf, 1.0, 1.0], [-1.0, -1.0, -1.0]]), "acescg")
    assert shown.dtype == np.uint8
    np.testing.assert_array_equal(shown[2], [0, 0, 0])


def test_shapes_and_srgb_round_trip():
    assert preview.preview(np.zeros((4, 5, 3)), "rec709").shape == (4, 5, 3)
    v = np.arange(256) / 255.0
    np.testing.assert_array_equal(preview.to_8_bit(preview.srgb_encoded(preview.srgb_decoded(v))), np.arange(256))
    assert float(preview.srgb_decoded(np.array(0.5))) == pytest.approx(0.21404, abs=1e-5)  # IEC 61966-2-1


def test_oklab_reference_values():
    """B. Ottosson 2020: white is L = 1, a = b = 0; and there and back."""
    np.testing.assert_allclose(preview.linear_to_oklab(np.ones(3)), [1.0, 0.0, 0.0], atol=1e-6)
    rgb = np.random.default_rng(1).random((20, 3))
    np.testing.assert_allclose(preview.oklab_to_linear(preview.linear_to_oklab(rgb)), rgb, atol=1e-6)
