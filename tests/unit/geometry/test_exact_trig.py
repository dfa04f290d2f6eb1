"""Sines and cosines from arithmetic alone agree with the mathematics library, and are exact where they should be."""

from __future__ import annotations

import math

import numpy as np

from renderer.geometry.exact_trig import circle, sine_cosine, sine_cosine_deg


def test_agrees_with_the_library():
    angles = np.random.default_rng(1).uniform(-1e4, 1e4, 20_000)
    sine, cosine = sine_cosine(angles)
    expected = np.array([[math.sin(a), math.cos(a)] for a in angles])
    assert np.abs(np.column_stack([sine, cosine]) - expected).max() < 2.3e-16  # two units in the last place below 1


def test_small_angles_keep_their_relative_digits():
    angles = np.array([1e-300, 1e-20, -1e-9, 0.0])
    assert sine_cosine(angles)[0].tolist() == [1e-300, 1e-20, -1e-9, 0.0]


def test_degrees_are_exact_at_quarter_turns():
    sine, cosine = sine_cosine_deg([-90.0, 0.0, 90.0, 180.0, 270.0, 360.0, 450.0])
    assert np.abs(sine).tolist() == [1.0, 0.0, 1.0, 0.0, 1.0, 0.0, 1.0]
    assert sine[[0, 2, 4, 6]].tolist() == [-1.0, 1.0, -1.0, 1.0]
    assert np.abs(cosine).tolist() == [0.0, 1.0, 0.0, 1.0, 0.0, 1.0, 0.0]
    assert cosine[[1, 3, 5]].tolist() == [1.0, -1.0, 1.0]


def test_circle_closes_and_is_symmetric():
    cosine, sine = circle(64)
    assert len(cosine) == 64
    assert (cosine[0], sine[0], cosine[16], sine[16]) == (1.0, 0.0, 0.0, 1.0)
    assert np.abs(np.hypot(cosine, sine) - 1.0).max() < 3e-16
    assert np.abs(cosine - np.roll(sine, -16)).max() < 2.3e-16
