"""bow.follows-camera: a bow is at infinity, opposite the sun from wherever it is seen; it goes where that goes."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

from renderer.checks import sphere
from renderer.checks.bow_centre import TOLERANCE_DEG
from renderer.checks.findings import IMPOSSIBLE, Finding, Fix
from renderer.checks.keys import bow_key
from renderer.checks.places import centre_words
from renderer.checks.view import FrameView
from renderer.shot.model import BowToCheck, Vector

MOVED_M = 1e-6


@dataclass(frozen=True)
class Stand:
    """A stated bow in one frame: its centre's offset from where the sun puts it, (east, up) on the sphere. [degrees]"""

    view: FrameView
    bow: BowToCheck
    belongs: Vector
    offset: tuple[float, float]


def check_follows_camera(views: Sequence[FrameView], facts: object) -> Iterator[Finding]:
    """Findings for bows whose centre drifts over the frames against the place that the sun gives it."""
    for name, stands in _by_bow(views).items():
        first, drifts = stands[0], [_distance_deg(stands[0], stand) for stand in stands]
        worst = max(range(len(stands)), key=drifts.__getitem__)
        if drifts[worst] > TOLERANCE_DEG:
            yield _drifting(name, first, stands[worst], drifts[worst], stands)


def _by_bow(views: Sequence[FrameView]) -> dict[str, list[Stand]]:
    """Every bow with a centre, frame by frame, under its name."""
    found: dict[str, list[Stand]] = {}
    for view in views:
        for bow in view.bows:
            belongs = view.centre_for(bow.order)
            if bow.centre is not None and belongs is not None:
                stand = Stand(view, bow, belongs, _offset_deg(view, bow.centre, belongs))
                found.setdefault(bow.name, []).append(stand)
    return found


def _offset_deg(view: FrameView, centre: Vector, belongs: Vector) -> tuple[float, float]:
    """The centre seen from where it belongs, as angles to the east and up: steady while a bow follows the camera."""
    up = sphere.combine(1.0, view.axes.up, -sphere.dot(view.axes.up, belongs), belongs)
    up = sphere.unit(up) if sphere.dot(up, up) > 1e-18 else view.axes.north
    right = sphere.cross(belongs, up)
    angle, x, y = sphere.angle_deg(centre, belongs), sphere.dot(centre, right), sphere.dot(centre, up)
    length = math.hypot(x, y)
    return (angle * x / length, angle * y / length) if length > 0.0 else (0.0, 0.0)


def _distance_deg(a: Stand, b: Stand) -> float:
    return math.hypot(a.offset[0] - b.offset[0], a.offset[1] - b.offset[1])


def _drifting(name: str, first: Stand, worst: Stand, drift_deg: float, stands: Sequence[Stand]) -> Finding:
    words, values = centre_words(worst.view, name, worst.belongs)
    if (
        sphere.angle_deg(first.belongs, worst.belongs) > TOLERANCE_DEG
    ):  # the sun moves: no one centre is right throughout
        values = {key: value for key, value in values.items() if key != bow_key(name, "centre")}
    finding = Finding(
        rule="bow.follows-camera",
        title="Bow does not follow the camera",
        severity=IMPOSSIBLE,
        subject=name,
        measured=round(drift_deg, 2),
        expected=(0.0, TOLERANCE_DEG),
        unit=f"degrees of drift from frame {first.view.frame} to {worst.view.frame}",
        why=_why(first, worst),
        source="common practice, no source: a bow is at infinity and has no parallax",
        fix=Fix(
            f"State the centre as a direction, the antisolar point of every frame; in {worst.view.frame} {words}.",
            values,
        ),
        excess=drift_deg,
    )
    frames = tuple(stand.view.frame for stand in stands)
    return replace(finding, frames=frames, worst_frame=worst.view.frame)


def _why(first: Stand, worst: Stand) -> str:
    """What the bow hangs on instead of the camera."""
    travelled_m = math.dist(first.view.position, worst.view.position)
    if worst.bow.anchored == "world":
        return (
            f"The bow is fixed to a place in the world and the camera moves {travelled_m:.3g} m; each viewer's bow is "
            "made by other drops, opposite the sun from there."
        )
    if worst.bow.anchored == "pixel" and sphere.angle_deg(first.view.forward, worst.view.forward) > TOLERANCE_DEG:
        return "The bow is fixed to the frame and the camera turns; a bow keeps its direction in the world."
    if travelled_m > MOVED_M:
        return "The camera moves and the bow drifts against the sun; a bow has no parallax, and keeps its place."
    return "The bow drifts while sun and camera do not ask it to; its centre stays opposite the sun."
