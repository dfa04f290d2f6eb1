"""Where bows stand: closed forms by Descartes against a search over rays, and published angles."""

from __future__ import annotations

import math

import numpy as np
import pytest

from renderer.optics import bow_circle, bow_geometry
from renderer.optics.bow_geometry import bow_band, bow_radius_deg, descartes_ring, drop_index


# n = 4/3: primary 42 deg 2', secondary 50 deg 59' (R. A. R. Tricker, Introduction to Meteorological Optics, 1970, and
# many textbooks; from memory). For n = 1.3330 the textbook values are 42.1 and 50.9 (from memory)
@pytest.mark.parametrize(("order", "printed_deg"), [(1, 42 + 2 / 60), (2, 50 + 59 / 60)])
def test_angles_of_index_four_thirds(order, printed_deg):
    assert float(bow_radius_deg(order, 4 / 3)) == pytest.approx(printed_deg, abs=0.02)


@pytest.mark.parametrize("index", [1.31, 1.3330, 1.345, 1.5])
@pytest.mark.parametrize("order", [1, 2, 3, 4, 5, 6])
def test_the_closed_form_is_the_turning_point_of_traced_rays(order, index):
    """A ray traced by its law of refraction alone, for half a million offsets: the least turn, and where it is."""
    impact = (np.arange(500_000) + 0.5) / 500_000
    incidence, refraction = np.arcsin(impact), np.arcsin(impact / index)
    turn = np.degrees(2 * (incidence - refraction) + order * (np.pi - 2 * refraction))
    least = int(np.argmin(turn))
    ring = descartes_ring(order, index)
    assert float(ring.deviation_deg) == pytest.approx(float(turn[least]), abs=1e-7)
    assert float(ring.impact) == pytest.approx(float(impact[least]), abs=2e-3)
    assert float(ring.from_sun_deg) == pytest.approx(180 - abs((float(turn[least]) % 360) - 180), abs=1e-7)
    step = 1e-6
    slope = (descartes_ring(order, index + step).radius_deg - descartes_ring(order, index - step).radius_deg) / (
        2 * step
    )
    assert float(ring.slope_deg) == pytest.approx(float(slope), rel=1e-5)


# nm, primary, its impact, secondary, its impact: fresh water of 20 C relative to air (an independent prototype)
@pytest.mark.parametrize(
    ("nm", "first", "first_impact", "second", "second_impact"),
    [
        (400.0, 40.62, 0.8555, 53.53, 0.9484),
        (500.0, 41.58, 0.8591, 51.79, 0.9496),
        (589.3, 42.08, 0.8608, 50.89, 0.9502),
        (700.0, 42.49, 0.8623, 50.14, 0.9507),
    ],
)
def test_bows_by_wavelength(nm, first, first_impact, second, second_impact):
    index = drop_index(nm)
    one, two = descartes_ring(1, index), descartes_ring(2, index)
    assert (float(one.radius_deg), float(two.radius_deg)) == pytest.approx((first, second), abs=0.01)
    assert (float(one.impact), float(two.impact)) == pytest.approx((first_impact, second_impact), abs=1e-4)


def test_width_dark_band_and_colours():
    """2.41 and 3.92 degrees wide from 400 to 700 nm with the sun's disc; red outside, then red inside; band between."""
    first, second = bow_band(1), bow_band(2)
    assert first.width_deg == pytest.approx(2.41, abs=0.01)
    assert second.width_deg == pytest.approx(3.92, abs=0.01)
    assert (first.outer_colour, first.bright_side) == ("red", "inside")
    assert (second.outer_colour, second.bright_side) == ("violet", "outside")
    low, high = bow_geometry.dark_band_deg()
    assert (low, high) == pytest.approx((42.76, 49.88), abs=0.01)


def test_salt_and_cold():
    """Sea water of 35 per mille: -0.9 and +1.7 degrees; 10 C instead of 20 C: -0.10 and +0.18 or so."""
    fresh, salt, cold = (drop_index(589.3), drop_index(589.3, 20.0, 35.0), drop_index(589.3, 10.0))
    for order, by_salt, by_cold in ((1, -0.9, -0.10), (2, 1.7, 0.18)):
        assert float(bow_radius_deg(order, salt) - bow_radius_deg(order, fresh)) == pytest.approx(by_salt, abs=0.05)
        assert float(bow_radius_deg(order, cold) - bow_radius_deg(order, fresh)) == pytest.approx(by_cold, abs=0.01)


def test_higher_orders_stand_on_the_sun_side():
    """Third and fourth lie 37.5-42.9 and 42.3-48.7 degrees from the sun."""
    for order, low, high in ((3, 37.5, 42.9), (4, 42.3, 48.7)):
        ring = descartes_ring(order, drop_index((400.0, 700.0)))
        assert low <= float(ring.from_sun_deg.min())
        assert float(ring.from_sun_deg.max()) <= high


@pytest.mark.parametrize(
    ("radius_deg", "sun_deg"), [(42.0, 20.0), (42.0, 0.0), (51.0, 45.0), (42.0, 41.5), (42.0, -5.0)]
)
def test_visible_arc_against_points_of_the_circle(radius_deg, sun_deg):
    sun = np.array([0.0, math.sin(math.radians(sun_deg)), math.cos(math.radians(sun_deg))])
    clock = np.linspace(-180, 180, 36001)
    points = bow_circle.circle_directions(-sun, radius_deg, (0, 1, 0), clock)
    up = points[:, 1] > 0
    arc = bow_circle.visible_arc(radius_deg, sun_deg)
    assert arc.visible_share == pytest.approx(up.mean(), abs=1e-3)
    assert arc.top_elevation_deg == pytest.approx(float(bow_circle.elevation_deg(points[18000], (0, 1, 0))), abs=1e-9)
    feet = bow_circle.circle_directions(-sun, radius_deg, (0, 1, 0), [-arc.half_arc_clock_deg, arc.half_arc_clock_deg])
    assert feet[:, 1] == pytest.approx([0.0, 0.0], abs=1e-12)
    azimuth = np.degrees(np.arctan2(feet[:, 0], -feet[:, 2]))
    assert np.abs(azimuth) == pytest.approx([arc.foot_azimuth_deg] * 2, abs=1e-9)
    assert azimuth[0] < 0 < azimuth[1]  # clockwise from the top is to the right


def test_no_bow_over_level_ground_with_a_high_sun():
    """No primary bow with the sun higher than about 42 degrees (Descartes 1637)."""
    assert bow_circle.visible_arc(42.0, 42.5).visible_share == 0.0
    assert bow_circle.visible_arc(42.0, 41.0).visible_share > 0.0
    assert bow_circle.highest_sun_deg(42.0) == 42.0


def test_reflected_light_bow_stands_twice_the_sun_height_above():
    sun = (0.0, math.sin(math.radians(24)), math.cos(math.radians(24)))
    centre = bow_circle.mirrored_sun_centre(sun, (0, 1, 0))
    assert float(bow_circle.angle_between_deg(centre, bow_circle.antisolar_point(sun))) == pytest.approx(48.0)
    assert float(bow_circle.elevation_deg(centre, (0, 1, 0))) == pytest.approx(24.0)
    ordinary, mirrored = bow_circle.visible_arc(42.0, 24.0), bow_circle.visible_arc(42.0, 24.0, mirrored=True)
    assert ordinary.foot_azimuth_deg == pytest.approx(mirrored.foot_azimuth_deg)  # they meet at the horizon
    assert mirrored.top_elevation_deg - ordinary.top_elevation_deg == pytest.approx(48.0)


def test_fit_finds_the_circle_again():
    rng = np.random.default_rng(5)
    centre = bow_circle.unit_rows((0.3, -0.4, -0.8))
    points = bow_circle.circle_directions(centre, 42.1, (0, 1, 0), rng.uniform(-70, 70, 400))
    fit = bow_circle.fit_circle(points)
    assert float(bow_circle.angle_between_deg(fit.centre, centre)) < 1e-9
    assert fit.radius_deg == pytest.approx(42.1, abs=1e-9)
    noisy = points + rng.normal(0, math.radians(0.1), points.shape)
    fit = bow_circle.fit_circle(noisy)
    assert float(bow_circle.angle_between_deg(fit.centre, centre)) < 0.15
    assert fit.rms_deg == pytest.approx(0.1, abs=0.02)
