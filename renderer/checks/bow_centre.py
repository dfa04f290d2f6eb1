"""bow.centre: a bow's centre lies opposite the sun, to within what the sun's own width blurs."""

from __future__ import annotations

from collections.abc import Iterator

from renderer.checks import sphere
from renderer.checks.findings import ADVICE, IMPLAUSIBLE, IMPOSSIBLE, Finding, Fix, Value
from renderer.checks.places import centre_words, sun_values
from renderer.checks.view import AROUND_SUN, FrameView
from renderer.shot.model import BowToCheck, Vector

RULE = "bow.centre"
TITLE = "Bow centre"
TOLERANCE_DEG = 0.5  # about the sun's own diameter, 0.53 degrees: a smaller error is lost in the blur of the disc
SURE_DEG = 1.0  # twice that: no reading of the plate or of the sun's place explains it
SOURCE = "Descartes 1637, Les Météores, discourse VIII; the sun's diameter at 1 au: IAU 2015 resolution B3"
WHY = "Every drop of a bow sends its light back at one angle to the line from the sun through the eye."


def check_centre(view: FrameView, facts: object) -> Iterator[Finding]:
    """Findings for bows whose stated centre is not where this sun puts it."""
    for bow in view.bows:
        belongs = view.centre_for(bow.order)
        if belongs is None:
            yield _no_sun(bow)
        elif bow.centre is not None:
            error_deg = sphere.angle_deg(bow.centre, belongs)
            if error_deg > TOLERANCE_DEG:
                yield _off_centre(view, bow, bow.centre, belongs, error_deg)


def _off_centre(view: FrameView, bow: BowToCheck, centre: Vector, belongs: Vector, error_deg: float) -> Finding:
    severity = IMPOSSIBLE if error_deg > SURE_DEG else IMPLAUSIBLE
    title, why = TITLE, WHY
    if bow.order in AROUND_SUN:
        why = "Bows of the third and fourth order lie around the sun itself."
    elif _is_reflected_light(view, centre):
        severity, title = ADVICE, "Bow centre, of a reflected-light bow"
        why = (
            "This is the centre of a reflected-light bow, which needs calm water that mirrors the sun towards the "
            "rain; the ordinary bow's is twice the sun's height lower."
        )
    return Finding(
        rule=RULE,
        title=title,
        severity=severity,
        subject=bow.name,
        measured=round(error_deg, 2),
        expected=(0.0, TOLERANCE_DEG),
        unit="degrees from the sun" if bow.order in AROUND_SUN else "degrees from the antisolar point",
        why=why,
        source=SOURCE,
        fix=_fix(view, bow, centre, belongs),
        excess=error_deg,
    )


def _is_reflected_light(view: FrameView, centre: Vector) -> bool:
    """Whether the centre is opposite the sun's mirror image in level water."""
    if view.antisolar is None:
        return False
    return sphere.angle_deg(centre, sphere.mirrored(view.antisolar, view.axes)) <= TOLERANCE_DEG


def _fix(view: FrameView, bow: BowToCheck, centre: Vector, belongs: Vector) -> Fix:
    """Both ways out: the centre that this sun asks for, and the sun that this centre asks for."""
    words, values = centre_words(view, bow.name, belongs)
    text = f"Put the centre at {words}"
    sun = centre if bow.order in AROUND_SUN else sphere.opposite(centre)
    sun_at: dict[str, Value] = sun_values(view, sun)
    if sphere.elevation_deg(sun, view.axes) > 0.0:
        text += f"; or put the sun at elevation {sun_at['sun.elevation']}°, azimuth {sun_at['sun.azimuth']}°"
    else:
        sun_at = {}
        text += "; no sun above the horizon has a bow with this centre"
    return Fix(text + ".", values, sun_at)


def _no_sun(bow: BowToCheck) -> Finding:
    return Finding(
        rule=RULE,
        title=TITLE,
        severity=ADVICE,
        subject=bow.name,
        measured="no sun in the shot",
        expected="a sun",
        unit="",
        why="Without the sun's (or the moon's) place nothing can be said about where a bow stands.",
        source="common practice, no source",
        fix=Fix("State the light that makes the bow under [sun], by elevation and azimuth."),
    )
