"""Refusals and edges of the bow geometry."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.optics import bow_circle, bow_geometry


@pytest.mark.parametrize(
    "call",
    [
        lambda: bow_geometry.descartes_ring(0, 1.33),
        lambda: bow_geometry.descartes_ring(1, 1.0),
        lambda: bow_geometry.descartes_ring(1, 2.0),
        lambda: bow_geometry.descartes_ring(1, float("nan")),
        lambda: bow_geometry.bow_band(1, temperature_c=80.0),
        lambda: bow_circle.circle_directions((0, 1, 0), 42.0, (0, 1, 0), 0.0),
        lambda: bow_circle.antisolar_point((0, 0, 0)),
        lambda: bow_circle.visible_arc(95.0, 10.0),
        lambda: bow_circle.fit_circle([(1, 0, 0), (0, 1, 0)]),
        lambda: bow_circle.fit_circle([(1, 0, 0)] * 5),
    ],
)
def test_refusals(call):
    with pytest.raises(InputError) as caught:
        call()
    assert caught.value.faults[0].expected


def test_shapes_follow_the_index():
    ring = bow_geometry.descartes_ring(2, np.full((3, 2), 1.333))
    assert all(field.shape == (3, 2) for field in ring)
    assert bow_geometry.bow_radius_deg(1, 1.333).shape == ()


def test_small_angles_keep_their_digits():
    near = (0.0, 1e-9, -1.0)
    assert float(bow_circle.angle_between_deg((0, 0, -1), near)) == pytest.approx(np.degrees(1e-9), rel=1e-6)


def test_a_bow_from_the_air_is_a_whole_circle():
    arc = bow_circle.visible_arc(42.0, -60.0)
    assert arc.visible_share == 1.0
    assert arc.foot_azimuth_deg is None


def test_sun_for_a_top():
    elevation = bow_circle.sun_elevation_for_top_deg(42.0, 25.0)
    assert bow_circle.visible_arc(42.0, elevation).top_elevation_deg == pytest.approx(25.0)
