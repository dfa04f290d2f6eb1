"""mesh.scale: things have sizes, and a mesh in the wrong unit is wrong by a known factor.

Limits, in metres along the longest side of the object as placed. Where no source is named they are common practice:
wide enough that nothing real is flagged, since a wrong unit is off by a factor of 10 to 1000.
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from renderer.checks.facts import Facts
from renderer.checks.findings import IMPLAUSIBLE, Finding, Fix
from renderer.checks.keys import object_key
from renderer.checks.view import FrameView
from renderer.geometry.parts import moved
from renderer.shot.model import Object

UNITS_M = {"mm": 0.001, "cm": 0.01, "in": 0.0254, "ft": 0.3048, "m": 1.0}


@dataclass(frozen=True)
class Sizes:
    """What a kind of thing measures along its longest side; `words` are the words of an object's name that tell it."""

    kind: str
    words: tuple[str, ...]
    low_m: float
    high_m: float
    why: str
    source: str = "common practice, no source"


BY_NAME = (
    Sizes("a drop", ("drop", "droplet", "raindrop", "drops", "raindrops"), 1e-6, 0.0105,
          "Fog drops measure some micrometres; rain drops over 8 mm break up as they fall, the largest seen had 10 mm.",
          "P. V. Hobbs and A. L. Rangno, Geophys. Res. Lett. 31, L13102 (2004) (from memory)"),
    Sizes("a drinking glass", ("tumbler", "goblet", "wineglass", "cup", "mug", "shotglass", "beaker"), 0.02, 0.5,
          "A drinking glass is held in a hand."),
    Sizes("a bottle or jar", ("bottle", "jar", "flask", "vial", "carafe", "decanter"), 0.01, 1.5,
          "Bottles run from a vial of 1 cm to a show bottle of about a metre."),
    Sizes("a lens", ("lens", "lenses", "eyepiece", "magnifier", "loupe"), 2e-4, 2.0,
          "Lenses run from those at the tip of an endoscope, under a millimetre, to the largest ever made, 1.57 m.",
          "The largest: the first corrector lens of the Vera C. Rubin Observatory's camera, 1.57 m (from memory)"),
    Sizes("a prism", ("prism", "pyramid"), 5e-4, 2.0, "Prisms are cut from blocks of optical glass."),
    Sizes("a stone", ("diamond", "gem", "gemstone", "brilliant"), 2e-4, 0.2,
          "The largest rough diamond found measured about 10 cm.", "The Cullinan diamond, 1905 (from memory)"),
    Sizes("a bowl or basin", ("bowl", "vase", "basin", "aquarium", "fishbowl"), 0.02, 60.0,
          "From a finger bowl to the largest show tanks."),
)  # fmt: skip

ANY_CLEAR = Sizes(
    "a clear solid", (), 1e-6, 50_000.0,
    "Below a micrometre rays no longer describe light; above 50 km a clear solid would be a sea.",
)  # fmt: skip
GLASS = Sizes(
    "a solid of glass or plastic", (), 5e-5, 60.0,
    "The longest single panes of glass made are about 20 m, the largest acrylic show tanks' windows about 40 m.",
)  # fmt: skip
SOFT = ("water", "sea", "ice", "ethanol", "glycerol", "air")  # of materials that come in any amount


def check_scale(view: FrameView, facts: Facts) -> Iterator[Finding]:
    """Findings for clear objects too large or too small for what they are."""
    for item in view.shot.objects:
        if item.material is None:
            continue
        size_m = longest_side_m(item, facts)
        if size_m <= 0.0 or not math.isfinite(size_m):
            continue
        sizes = sizes_of(item)
        if not sizes.low_m <= size_m <= sizes.high_m:
            yield _wrong_size(item, sizes, size_m)


def longest_side_m(item: Object, facts: Facts) -> float:
    """The longest side of an object's bounding box, placed with its scale but along its own axes. [m]"""
    report = facts.mesh(item)
    low, high = np.array(report.low_m), np.array(report.high_m)
    corners = moved(np.array([low, [high[0], low[1], low[2]], [low[0], high[1], low[2]], [low[0], low[1], high[2]]]),
                    item.matrices[0])  # fmt: skip
    return float(np.linalg.norm(corners[1:] - corners[0], axis=1).max())


def sizes_of(item: Object) -> Sizes:
    """The sizes to hold an object to: by the words of its name, else by its material."""
    words = set(re.findall(r"[a-z]+", item.name.lower()))
    if item.role == "solid":
        for sizes in BY_NAME:
            if words & set(sizes.words):
                return sizes
    material = item.material
    name = f"{material.name} {material.like or ''}".lower() if material else ""
    return ANY_CLEAR if item.role == "sheet" or any(soft in name for soft in SOFT) else GLASS


def _wrong_size(item: Object, sizes: Sizes, size_m: float) -> Finding:
    beyond = size_m / sizes.high_m if size_m > sizes.high_m else sizes.low_m / size_m
    return Finding(
        rule="mesh.scale",
        title="Size of an object",
        severity=IMPLAUSIBLE,
        subject=item.name,
        measured=float(f"{size_m:.4g}"),
        expected=(sizes.low_m, sizes.high_m),
        unit=f"m along the longest side of {sizes.kind}",
        why=sizes.why,
        source=sizes.source,
        fix=_unit_fix(item, sizes, size_m),
        excess=math.log10(beyond),
    )


def _unit_fix(item: Object, sizes: Sizes, size_m: float) -> Fix:
    """The unit that would make the size right; else the scale that just would."""
    middle = math.sqrt(sizes.low_m * sizes.high_m)
    fits = []
    for name, unit_m in UNITS_M.items():
        new_m = size_m * unit_m / item.metres_per_unit
        if sizes.low_m <= new_m <= sizes.high_m:
            fits.append((abs(math.log(new_m / middle)), name, new_m, unit_m / item.metres_per_unit))
    if item.mesh is not None and fits:
        _, name, new_m, factor = min(fits)
        return Fix(
            f"The mesh may be in another unit: in {name} it measures {new_m:.3g} m, that is a scale of {factor:.4g}.",
            {object_key(item, "mesh_unit"): name, "scale_by": float(f"{factor:.10g}")},
        )
    factor = (0.9 * sizes.high_m if size_m > sizes.high_m else 1.1 * sizes.low_m) / size_m
    return Fix(f"Scale it by {factor:.3g} or so.", {"scale_by": float(f"{factor:.3g}")})
