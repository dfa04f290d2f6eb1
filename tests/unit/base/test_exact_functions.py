"""The exact functions against the library's, within a few units in the last place."""

from __future__ import annotations

import numpy as np

from renderer.base import exact_functions as exact


def test_exponential_and_logarithm():
    x = np.concatenate([np.linspace(-50, 50, 20001), [0.0, -699.0, 699.0]])
    np.testing.assert_allclose(exact.exponential(x), np.exp(x), rtol=1e-14)
    assert exact.exponential(-1e9) == 0.0
    y = np.exp(np.linspace(-300, 300, 10001))
    np.testing.assert_allclose(exact.logarithm(y), np.log(y), rtol=1e-14, atol=1e-15)
    np.testing.assert_allclose(exact.power(y[4000:6000], -1.3), y[4000:6000] ** -1.3, rtol=1e-12)
    assert exact.logarithm(1.0) == 0.0
    assert exact.exponential(0.0) == 1.0


def test_angles():
    angle = np.linspace(-720, 720, 30001)
    sine, cosine = exact.sine_cosine_deg(angle)
    np.testing.assert_allclose(sine, np.sin(np.radians(angle)), atol=3e-15)
    np.testing.assert_allclose(cosine, np.cos(np.radians(angle)), atol=3e-15)
    assert exact.sine_cosine_deg(90.0)[1] == 0.0
    assert exact.sine_cosine_deg(180.0)[0] == 0.0
    c = np.linspace(-1, 1, 20001)
    np.testing.assert_allclose(exact.arccosine(c), np.arccos(c), rtol=1e-14, atol=1e-15)
