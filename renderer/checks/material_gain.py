"""material.gain: nothing gives back more light than it gets."""

from __future__ import annotations

from collections.abc import Iterator

from renderer.checks.findings import ADVICE, IMPOSSIBLE, Finding, Fix
from renderer.checks.keys import material_key, object_key
from renderer.checks.view import FrameView
from renderer.shot.model import Material, Object, Surface

RULE = "material.gain"
LAW = "the conservation of energy"
WHITEST = 0.99  # pressed fluoropolymer for measuring; fresh snow reaches about 0.98, white paint 0.9 (from memory)


def check_gain(view: FrameView, facts: object) -> Iterator[Finding]:
    """Findings for clear materials that amplify, and for surfaces whose reflectance is over 1, or over what exists."""
    seen: set[str] = set()
    for item in view.shot.objects:
        if item.material is not None and item.material.name not in seen:
            seen.add(item.material.name)
            yield from _amplifying(item.material)
        if item.surface is not None:
            yield from _bright_surface(item, item.surface)


def _amplifying(material: Material) -> Iterator[Finding]:
    pairs = material.absorption_per_m or ()
    lowest = min((value for _, value in pairs), default=0.0)
    if lowest < 0.0:
        held = tuple((nm, max(0.0, value)) for nm, value in pairs)
        yield Finding(
            rule=RULE,
            title="Material amplifies light",
            severity=IMPOSSIBLE,
            subject=material.name,
            measured=lowest,
            expected=(0.0, None),
            unit="per metre",
            why="A negative absorption makes light grow on its way through.",
            source=LAW,
            fix=Fix(
                "Raise every absorption below 0 to 0.", {material_key(material.name, "absorption"): {"per_metre": held}}
            ),
            excess=-lowest,
        )


def largest_reflectance(surface: Surface) -> tuple[float, str]:
    """The largest reflectance that a surface states, and where that is; 0 for a picture."""
    if surface.reflectance is not None:
        largest = max(surface.reflectance)
        return largest, ("red", "green", "blue")[surface.reflectance.index(largest)]
    if surface.spectrum:
        nm, largest = max(surface.spectrum, key=lambda pair: pair[1])
        return largest, f"{nm:g} nm"
    return 0.0, ""


def _bright_surface(item: Object, surface: Surface) -> Iterator[Finding]:
    largest, where = largest_reflectance(surface)
    if largest <= WHITEST:
        return
    over = largest > 1.0
    yield Finding(
        rule=RULE,
        title="Surface gives more than it gets" if over else "Surface whiter than anything",
        severity=IMPOSSIBLE if over else ADVICE,
        subject=item.name,
        measured=round(largest, 4),
        expected=(0.0, 1.0 if over else WHITEST),
        unit=f"reflectance, at {where}",
        why=(
            "A surface that returns more light than falls on it glows."
            if over
            else "The whitest surfaces made for measuring return 99 %, white paint 80 to 90 %."
        ),
        source=LAW if over else "common practice, no source",
        fix=_darker(item, surface, largest),
        excess=largest,
    )


def _darker(item: Object, surface: Surface, largest: float) -> Fix:
    """The same colour, scaled to a good white paint."""
    scale = 0.9 / largest
    if surface.reflectance is not None:
        red, green, blue = (round(part * scale, 4) for part in surface.reflectance)
        return Fix(
            f"Scale it down: reflectance = [{red}, {green}, {blue}].",
            {object_key(item, "surface", "reflectance"): (red, green, blue)},
        )
    held = tuple((nm, round(value * scale, 4)) for nm, value in surface.spectrum or ())
    return Fix(f"Scale the spectrum by {scale:.3g}.", {object_key(item, "surface", "spectrum"): held})
