"""Each bow rule on both sides of its limit; every fix is applied, and the shot checked again."""

from __future__ import annotations

from collections.abc import Callable, Iterator

import frame_builder as build
import pytest

from renderer.checks import sphere
from renderer.checks.bow_centre import check_centre
from renderer.checks.bow_limits import limits_of
from renderer.checks.bow_motion import check_follows_camera
from renderer.checks.bow_shape import check_colour_order, check_radius, check_width
from renderer.checks.bow_sun import check_sun_behind, check_sun_height
from renderer.checks.findings import ADVICE, IMPLAUSIBLE, IMPOSSIBLE, Finding
from renderer.checks.keys import bow_key
from renderer.checks.view import FrameView
from renderer.shot.model import BowToCheck, FrameShot, Sun

LOW_SUN = build.sun(20.0, 180.0)

Rule = Callable[[FrameView, object], Iterator[Finding]]


def ask(rule: Rule, shot: FrameShot) -> list[Finding]:
    return list(rule(FrameView(shot), None))


def with_bow(stated: BowToCheck, sun: Sun | None = LOW_SUN, **changes: object) -> FrameShot:
    return build.frame(sun=sun, bows=(stated,), **changes)


def moved_off(centre: sphere.Vector, by_deg: float) -> sphere.Vector:
    """A direction `by_deg` straight above another."""
    return sphere.on_circle(centre, by_deg, 0.0, build.AXES)


def sun_of_fix(finding: Finding) -> Sun:
    assert finding.fix is not None
    values = finding.fix.values | finding.fix.instead
    return build.sun(float(values["sun.elevation"]), float(values["sun.azimuth"]))


@pytest.mark.parametrize(("off_deg", "severity"), [(0.0, None), (0.49, None), (0.51, IMPLAUSIBLE), (1.01, IMPOSSIBLE)])
def test_centre_is_held_to_the_antisolar_point(off_deg: float, severity: str | None) -> None:
    stated = build.bow(moved_off(build.opposite_of(LOW_SUN), off_deg))
    found = ask(check_centre, with_bow(stated))
    assert [finding.severity for finding in found] == ([severity] if severity else [])
    if found:
        assert found[0].measured == pytest.approx(off_deg, abs=0.006)


def test_fixes_of_the_centre_make_it_right_both_ways() -> None:
    stated = build.bow(sphere.direction_at(-31.0, 25.0, build.AXES))
    (found,) = ask(check_centre, with_bow(stated))
    assert found.measured == pytest.approx(sphere.angle_deg(stated.centre, build.opposite_of(LOW_SUN)), abs=0.006)
    assert ask(check_centre, with_bow(stated, sun_of_fix(found))) == []
    centre = found.fix.values["centre_direction"]
    assert ask(check_centre, with_bow(build.bow(centre))) == []


def test_the_pixel_of_the_fix_looks_at_the_antisolar_point() -> None:
    from renderer.geometry.camera import pixel_direction

    (found,) = ask(check_centre, with_bow(build.bow(sphere.direction_at(-31.0, 25.0, build.AXES))))
    direction = pixel_direction(build.camera(), found.fix.values["centre_pixel"])
    assert (
        sphere.angle_deg(tuple(direction), build.opposite_of(LOW_SUN)) < 0.01
    )  # half a tenth of a pixel of 0.04 degree


def test_a_centre_above_the_horizon_has_no_sun_to_offer() -> None:
    (found,) = ask(check_centre, with_bow(build.bow(sphere.direction_at(5.0, 40.0, build.AXES))))
    assert found.fix.instead == {}
    assert "no sun above the horizon" in found.fix.text


def test_a_reflected_light_bow_is_told_apart() -> None:
    centre = sphere.direction_at(20.0, 0.0, build.AXES)  # opposite the mirror image of LOW_SUN
    (found,) = ask(check_centre, with_bow(build.bow(centre)))
    assert found.severity == ADVICE
    assert "reflected-light bow" in found.why


def test_a_bow_without_a_sun_gets_advice() -> None:
    (found,) = ask(check_centre, with_bow(build.bow(sphere.direction_at(-20.0, 0.0, build.AXES)), None))
    assert (found.severity, found.measured) == (ADVICE, "no sun in the shot")


def test_third_order_lies_around_the_sun() -> None:
    assert ask(check_centre, with_bow(build.bow(LOW_SUN.direction, order=3))) == []
    (found,) = ask(check_centre, with_bow(build.bow(build.opposite_of(LOW_SUN), order=3)))
    assert found.severity == IMPOSSIBLE


@pytest.mark.parametrize(
    ("order", "radius", "severity"),
    [
        (1, 40.79, IMPLAUSIBLE), (1, 40.8, None), (1, 42.0, None), (1, 42.01, IMPLAUSIBLE), (1, 42.81, IMPOSSIBLE),
        (1, 32.9, IMPOSSIBLE), (2, 51.09, IMPLAUSIBLE), (2, 51.1, None), (2, 52.9, None), (2, 52.91, IMPLAUSIBLE),
        (2, 57.1, IMPOSSIBLE), (2, 49.4, IMPOSSIBLE), (3, 42.9, None), (3, 45.0, IMPOSSIBLE), (4, 45.0, None),
    ],
)  # fmt: skip
def test_radius_by_order(order: int, radius: float, severity: str | None) -> None:
    found = ask(check_radius, with_bow(build.bow(radius=radius, order=order)))
    assert [finding.severity for finding in found] == ([severity] if severity else [])
    for finding in found:
        mended = build.bow(radius=finding.fix.values[bow_key("comp bow", "radius")], order=order)
        assert ask(check_radius, with_bow(mended)) == []


def test_radius_of_the_other_order_is_recognised() -> None:
    (found,) = ask(check_radius, with_bow(build.bow(radius=51.5, order=1)))
    assert found.fix.instead == {bow_key("comp bow", "order"): 2}
    assert ask(check_radius, with_bow(build.bow(radius=51.5, order=2))) == []


def test_sea_spray_is_named_as_an_exception() -> None:
    (found,) = ask(check_radius, with_bow(build.bow(radius=40.3)))
    assert "sea" in found.why


@pytest.mark.parametrize(
    ("order", "width", "flagged"), [(1, 1.09, True), (1, 1.1, False), (1, 1.81, True), (2, 3.4, False), (2, 1.8, True)]
)
def test_width_by_order(order: int, width: float, flagged: bool) -> None:
    found = ask(check_width, with_bow(build.bow(width=width, order=order)))
    assert bool(found) == flagged
    for finding in found:
        width = finding.fix.values[bow_key("comp bow", "width")]
        assert ask(check_width, with_bow(build.bow(width=width, order=order))) == []


@pytest.mark.parametrize(("order", "right"), [(1, "red"), (2, "violet"), (3, "red"), (4, "violet")])
def test_colour_order(order: int, right: str) -> None:
    wrong = {"red": "violet", "violet": "red"}[right]
    assert ask(check_colour_order, with_bow(build.bow(outer=right, order=order))) == []
    (found,) = ask(check_colour_order, with_bow(build.bow(outer=wrong, order=order)))
    assert found.severity == IMPOSSIBLE
    assert found.fix.values == {bow_key("comp bow", "outer_colour"): right}


def test_a_bow_beside_the_sun_is_impossible_and_its_fix_works() -> None:
    ahead = build.sun(12.0, 20.0)  # in the frame of a camera that looks north
    stated = build.bow(sphere.direction_at(-12.0, 5.0, build.AXES), radius=42.0)
    (found,) = ask(check_sun_behind, with_bow(stated, ahead))
    assert found.severity == IMPOSSIBLE
    assert found.why.startswith("The sun is in the frame")
    mended = with_bow(stated, sun_of_fix(found))
    assert ask(check_sun_behind, mended) == []
    assert ask(check_centre, mended) == []


def test_the_sun_must_be_more_than_a_right_angle_from_the_bow() -> None:
    stated = build.bow(sphere.direction_at(-20.0, 0.0, build.AXES), radius=42.0)
    assert ask(check_sun_behind, with_bow(stated, LOW_SUN)) == []
    (found,) = ask(check_sun_behind, with_bow(stated, build.sun(20.0, 70.0)))
    assert found.measured < 90.0


def test_a_bow_without_centre_is_held_to_the_frame() -> None:
    stated = build.bow(radius=42.0)
    assert ask(check_sun_behind, with_bow(stated, LOW_SUN)) == []
    (found,) = ask(check_sun_behind, with_bow(stated, build.sun(5.0, 10.0)))
    assert ask(check_sun_behind, with_bow(stated, sun_of_fix(found))) == []


@pytest.mark.parametrize(("order", "highest"), [(1, 41.9), (2, 52.9)])
def test_sun_height(order: int, highest: float) -> None:
    stated = build.bow(order=order)
    assert ask(check_sun_height, with_bow(stated, build.sun(highest - 0.01, 180.0))) == []
    (found,) = ask(check_sun_height, with_bow(stated, build.sun(highest + 0.01, 180.0)))
    assert found.severity == IMPLAUSIBLE
    assert "camera's own height" in found.why
    mended = build.sun(float(found.fix.values["sun.elevation"]), 180.0)
    assert ask(check_sun_height, with_bow(stated, mended)) == []


def test_a_set_sun_makes_no_bow() -> None:
    assert ask(check_sun_height, with_bow(build.bow(), build.sun(-0.2, 180.0))) == []
    (found,) = ask(check_sun_height, with_bow(build.bow(), build.sun(-0.3, 180.0)))
    assert found.severity == IMPOSSIBLE
    assert (
        ask(check_sun_height, with_bow(build.bow(), build.sun(float(found.fix.values["sun.elevation"]), 180.0))) == []
    )


def drifting(step_deg: float, travel_m: float, anchored: str) -> list[FrameView]:
    """Eleven frames of a camera on a track, with a bow that drifts by `step_deg` a frame."""
    return [
        FrameView(
            build.frame(
                1001 + k,
                sun=LOW_SUN,
                camera=build.camera(position=(travel_m * k, 1.7, 0.0)),
                bows=(build.bow(sphere.direction_at(-20.0, step_deg * k, build.AXES), anchored=anchored),),
            )
        )
        for k in range(11)
    ]


def test_a_bow_that_keeps_its_direction_follows_the_camera() -> None:
    assert list(check_follows_camera(drifting(0.0, 5.0, "direction"), None)) == []
    assert list(check_follows_camera(drifting(0.049, 5.0, "world"), None)) == []


def test_a_bow_fixed_to_the_world_does_not() -> None:
    (found,) = check_follows_camera(drifting(0.2, 5.0, "world"), None)
    assert found.severity == IMPOSSIBLE
    assert found.worst_frame == 1011
    assert found.measured == pytest.approx(1.88, abs=0.02)  # 2 degrees of azimuth, 20 degrees below the horizon
    assert "fixed to a place in the world" in found.why
    assert sphere.angle_deg(found.fix.values["centre_direction"], build.opposite_of(LOW_SUN)) < 1e-3


def test_a_wrong_bow_that_keeps_its_distance_does_follow() -> None:
    """Five degrees off in each frame is a finding of bow.centre alone, also while the sun moves."""
    views = []
    for k in range(5):
        place = build.sun(20.0 + k, 180.0 + 3.0 * k)
        views.append(
            FrameView(build.frame(1001 + k, sun=place, bows=(build.bow(moved_off(build.opposite_of(place), 5.0)),)))
        )
    assert list(check_follows_camera(views, None)) == []


def test_limits_agree_with_the_geometry_of_drops() -> None:
    """The limits hold the rings of fresh water of 0 to 30 degrees C at 580 nm, where the eye is most sensitive.

    The brightest ring of drops of 0.1 mm radius and more lies up to 0.7 degree to the lit side of the geometric one.
    """
    from renderer.optics.bow_geometry import bow_radius_deg, drop_index

    for order, lit_side in ((1, -1.0), (2, 1.0), (3, 0.0), (4, 0.0)):
        low, high = limits_of(order).radius_deg
        for temperature_c in (0.0, 30.0):
            radius = float(bow_radius_deg(order, drop_index(580.0, temperature_c)))
            radius = 180.0 - radius if order > 2 else radius
            assert low <= radius + 0.45 * lit_side <= high, (order, temperature_c, radius)
