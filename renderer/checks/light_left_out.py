"""light.left-out: which light a picture of this shot will lack, said before anyone waits for it."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence

import numpy as np

from renderer.checks.facts import Facts
from renderer.checks.findings import ADVICE, Finding, Fix
from renderer.checks.mesh_gap import scale_of
from renderer.checks.view import FrameView
from renderer.shot.model import Object
from renderer.transport.layout import SMOOTH_BELOW

CLEAR_ROLES = ("solid", "pane", "sheet")
SOURCE = (
    "J. T. Kajiya, Computer Graphics 20(4), 1986: the whole of the light, of which this leaves out one kind of path"
)


def check_left_out(view: FrameView, facts: Facts) -> Iterator[Finding]:
    """Findings for shots whose sun or small lights shine through smooth clear objects onto opaque ones."""
    smooth = [item for item in view.shot.objects if item.role in CLEAR_ROLES and item.roughness < SMOOTH_BELOW]
    mirrors = [item for item in view.shot.objects if _mirror(item)]
    opaque = [item for item in view.shot.objects if item.surface is not None and not _mirror(item)]
    lights = _sharp_lights(view, facts)
    if not lights or not opaque or not (smooth or mirrors):
        return
    yield Finding(
        rule="light.left-out",
        title="Light that is left out",
        severity=ADVICE,
        subject=listed([item.name for item in (*smooth, *mirrors)]),
        measured=f"light of {listed(lights)} through or off smooth objects onto opaque ones",
        expected=None,
        unit="",
        why=(
            "The bright patterns that this light draws (caustics), and the light inside shadows of clear objects, are "
            "not rendered yet; they are left out whole, never dimmed. Everything else in the picture is complete."
        ),
        source=SOURCE,
        fix=Fix(
            "Judge the picture without caustics; or light the shot by a large lamp or the sky, which are complete.",
        ),
    )


def listed(names: Sequence[str], most: int = 3) -> str:
    """Names in a row, placements of one object as one; after so many only how many more there are."""
    known = list(dict.fromkeys(re.sub(r"\[\d+\]$", "", name) for name in names))
    return ", ".join(known[:most]) + (f" and {len(known) - most} more" if len(known) > most else "")


def _mirror(item: Object) -> bool:
    surface = item.surface
    return surface is not None and surface.finish == "metal" and surface.roughness < SMOOTH_BELOW


def _sharp_lights(view: FrameView, facts: Facts) -> list[str]:
    """The lights that need photon rounds to get through a smooth surface: the sun, and small lamps."""
    found = ["the sun"] if view.shot.sun is not None else []
    lamps = [item for item in view.shot.objects if item.role == "light"]
    if lamps:
        from renderer.frames.scene_lights import SMALL

        corners = np.concatenate([np.stack(facts.world_bounds(item)) for item in view.shot.objects])
        square_m2 = float(np.square(np.ptp(corners, axis=0)).sum())
        areas = [(item, facts.mesh(item).area_m2 * scale_of(item) ** 2) for item in lamps]
        found += [item.name for item, area_m2 in areas if area_m2 < SMALL * square_m2]
    return found
