"""CIELAB and CIEDE2000 beyond the published pairs: shapes, ends, stops."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.colour.differences import ciede2000, cielab, stops

WHITE = np.array([0.95, 1.0, 1.09])


def test_white_black_and_the_linear_part():
    assert cielab(WHITE, WHITE) == pytest.approx([100.0, 0.0, 0.0], abs=1e-12)
    assert cielab(np.zeros(3), WHITE) == pytest.approx([0.0, 0.0, 0.0], abs=1e-12)
    dark = cielab(WHITE * 0.001, WHITE)
    assert dark == pytest.approx([0.9033, 0.0, 0.0], abs=1e-4)  # 903.3 Y/Yn, CIE 015
    below = cielab(-WHITE * 0.001, WHITE)
    assert below == pytest.approx(-dark, abs=1e-12)


def test_shapes_and_identity():
    lab = np.random.default_rng(1).normal(0.0, 40.0, (4, 5, 3))
    assert ciede2000(lab, lab).shape == (4, 5)
    assert ciede2000(lab, lab).max() == 0.0
    assert ciede2000(lab, lab[0, 0]).shape == (4, 5)


def test_greys_differ_by_lightness_alone():
    difference = ciede2000(np.array([50.0, 0.0, 0.0]), np.array([51.0, 0.0, 0.0]))
    assert difference == pytest.approx(1.0, abs=2e-3)  # S_L is 1 at L* = 50


def test_stops():
    np.testing.assert_allclose(stops(np.array([8.0, 1.0, 3.0]), np.array([1.0, 2.0, 3.0])), [3.0, -1.0, 0.0])
