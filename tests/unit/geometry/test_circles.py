"""Points round circles: even, closed, on the circle, exact at quarter turns."""

from __future__ import annotations

import numpy as np

from renderer.geometry.circles import arc, circle


def test_circle_closes_and_is_symmetric():
    cosine, sine = circle(64)
    assert len(cosine) == 64
    assert (cosine[0], sine[0], cosine[16], sine[16]) == (1.0, 0.0, 0.0, 1.0)
    assert np.abs(np.hypot(cosine, sine) - 1.0).max() < 3e-16
    assert np.abs(cosine - np.roll(sine, -16)).max() < 2.3e-16
    angles = 2.0 * np.pi * np.arange(64) / 64
    assert np.abs(sine - np.sin(angles)).max() < 1e-15


def test_arc_runs_from_one_angle_to_the_other():
    points, normals = arc(2.0, -90.0, 30.0, 12)
    assert points.shape == (13, 2)
    assert points[0].tolist() == [0.0, -2.0]
    assert np.abs(points[-1] - (3**0.5, 1.0)).max() < 1e-15
    assert np.abs(points - 2.0 * normals).max() == 0.0
