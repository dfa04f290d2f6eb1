"""bow.radius, bow.width and bow.colour-order: what a bow of each order looks like, whatever the shot."""

from __future__ import annotations

from collections.abc import Iterator

from renderer.checks.bow_limits import KNOWN_ORDERS, BowLimits, limits_of
from renderer.checks.findings import IMPLAUSIBLE, IMPOSSIBLE, Finding, Fix
from renderer.checks.keys import bow_key
from renderer.checks.view import AROUND_SUN, FrameView
from renderer.shot.model import BowToCheck

SOURCE_RADIUS = (
    "Descartes 1637, Les Météores VIII, with the index of fresh water of 0 to 30 °C (IAPWS R9-97); "
    "limits from full scattering series for drops of 0.1 mm radius and more"
)
SOURCE_ORDER = "Newton 1704, Opticks, book I part II, proposition IX"
ROUND_OFF = 1e-9


def check_radius(view: FrameView, facts: object) -> Iterator[Finding]:
    """Findings for bows too narrow or too wide for their order."""
    for bow in view.bows:
        if bow.radius_deg is None or bow.order not in KNOWN_ORDERS:
            continue
        limits = limits_of(bow.order)
        excess = _beyond(bow.radius_deg, limits.radius_deg)
        if excess > ROUND_OFF:
            yield _wrong_radius(bow, bow.radius_deg, limits, excess)


def _wrong_radius(bow: BowToCheck, radius_deg: float, limits: BowLimits, excess: float) -> Finding:
    reach_low, reach_high = limits.reach_deg
    severity = IMPLAUSIBLE if reach_low <= radius_deg <= reach_high else IMPOSSIBLE
    why = f"Water of 0 to 30 °C turns the light of the {limits.name} by one angle, whatever the size of large drops."
    if severity == IMPLAUSIBLE:
        why += f" {limits.exceptions}"
    from_what = "sun" if bow.order in AROUND_SUN else "antisolar point"
    return Finding(
        rule="bow.radius",
        title="Bow radius",
        severity=severity,
        subject=bow.name,
        measured=round(radius_deg, 3),
        expected=limits.radius_deg,
        unit=f"degrees from the {from_what}",
        why=why,
        source=SOURCE_RADIUS,
        fix=_radius_fix(bow, radius_deg, limits),
        excess=excess,
    )


def _radius_fix(bow: BowToCheck, radius_deg: float, limits: BowLimits) -> Fix:
    """The radius for this order; and the other order, when that is what the stated radius fits."""
    text = f"Give the {limits.name} a radius of {limits.typical_deg}°"
    for other in KNOWN_ORDERS:
        low, high = limits_of(other).radius_deg
        if (
            other != limits.order
            and (other in AROUND_SUN) == (limits.order in AROUND_SUN)
            and low <= radius_deg <= high
        ):
            return Fix(
                f"{text}; or call it the {limits_of(other).name}, whose radius this is.",
                {bow_key(bow.name, "radius"): limits.typical_deg},
                {bow_key(bow.name, "order"): other},
            )
    return Fix(f"{text}.", {bow_key(bow.name, "radius"): limits.typical_deg})


def check_width(view: FrameView, facts: object) -> Iterator[Finding]:
    """Findings for bands too thin or too thick for their order."""
    for bow in view.bows:
        if bow.width_deg is None or bow.order not in KNOWN_ORDERS:
            continue
        limits = limits_of(bow.order)
        if limits.width_deg is None:
            continue
        excess = _beyond(bow.width_deg, limits.width_deg)
        if excess > ROUND_OFF:
            yield _wrong_width(bow, bow.width_deg, limits, limits.width_deg, excess)


def _wrong_width(
    bow: BowToCheck, width_deg: float, limits: BowLimits, expected: tuple[float, float], excess: float
) -> Finding:
    middle = round(0.5 * (expected[0] + expected[1]), 2)
    return Finding(
        rule="bow.width",
        title="Bow width",
        severity=IMPLAUSIBLE,
        subject=bow.name,
        measured=round(width_deg, 3),
        expected=expected,
        unit="degrees",
        why="Water spreads the colours over this width, blurred by the sun's disc; only drops under 0.1 mm widen it.",
        source=SOURCE_RADIUS,
        fix=Fix(f"Give the {limits.name} a width of {middle}°.", {bow_key(bow.name, "width"): middle}),
        excess=excess,
    )


def check_colour_order(view: FrameView, facts: object) -> Iterator[Finding]:
    """Findings for bows whose colours run the wrong way."""
    for bow in view.bows:
        if bow.outer_colour is None or bow.order not in KNOWN_ORDERS:
            continue
        limits = limits_of(bow.order)
        if bow.outer_colour != limits.outer_colour:
            yield Finding(
                rule="bow.colour-order",
                title="Bow colour order",
                severity=IMPOSSIBLE,
                subject=bow.name,
                measured=f"{bow.outer_colour} outside",
                expected=f"{limits.outer_colour} outside",
                unit="",
                why=f"Water bends red least, which puts it on the {limits.red_side} of the {limits.name}.",
                source=SOURCE_ORDER,
                fix=Fix(
                    f"Turn the colours round: {limits.outer_colour} outside.",
                    {bow_key(bow.name, "outer_colour"): limits.outer_colour},
                ),
                excess=1.0,
            )


def _beyond(value: float, limits: tuple[float, float]) -> float:
    """How far `value` is outside `limits`; negative inside."""
    return max(limits[0] - value, value - limits[1])
