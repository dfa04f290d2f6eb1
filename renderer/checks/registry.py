"""Every rule by name: a plain table, read without importing anything, and the entry point for a studio's own.

A rule is a function ``rule(view, facts)`` that yields findings. Over "frame" it gets one `FrameView` at a time, over
"frames" the whole sequence of them. A studio registers its own in the entry-point group ``antisolar.rules``; the
entry's name is the rule's, and its function is called frame by frame unless it has the attribute ``over = "frames"``.
"""

from __future__ import annotations

import importlib
from collections.abc import Callable, Iterable
from dataclasses import dataclass
from functools import cache
from typing import Any

from renderer.checks.findings import Finding

ENTRY_POINTS = "antisolar.rules"

FRAME = "frame"
FRAMES = "frames"

RuleFunction = Callable[[Any, Any], Iterable[Finding]]


@dataclass(frozen=True)
class Rule:
    """`place` is ``module:function``; `own` is False for a studio's rule, whose crash must not end the run."""

    name: str
    title: str
    place: str
    over: str = FRAME
    own: bool = True


TABLE: tuple[Rule, ...] = (
    Rule("bow.centre", "Bow centre", "renderer.checks.bow_centre:check_centre"),
    Rule("bow.radius", "Bow radius", "renderer.checks.bow_shape:check_radius"),
    Rule("bow.width", "Bow width", "renderer.checks.bow_shape:check_width"),
    Rule("bow.colour-order", "Bow colour order", "renderer.checks.bow_shape:check_colour_order"),
    Rule("bow.sun-behind", "Sun behind the viewer", "renderer.checks.bow_sun:check_sun_behind"),
    Rule("bow.sun-height", "Sun low enough for a bow", "renderer.checks.bow_sun:check_sun_height"),
    Rule("bow.follows-camera", "Bow follows the camera", "renderer.checks.bow_motion:check_follows_camera", FRAMES),
    Rule("mesh.watertight", "Clear solid is closed", "renderer.checks.mesh_rules:check_watertight"),
    Rule("mesh.normals", "Normals point outward", "renderer.checks.mesh_rules:check_normals"),
    Rule("mesh.clean", "Mesh is clean", "renderer.checks.mesh_rules:check_clean"),
    Rule("mesh.gap", "Glass and its filling touch", "renderer.checks.mesh_gap:check_gap"),
    Rule("mesh.scale", "Size of an object", "renderer.checks.mesh_scale:check_scale"),
    Rule("material.index", "Refractive index", "renderer.checks.material_rules:check_index"),
    Rule("material.dispersion", "Dispersion", "renderer.checks.material_rules:check_dispersion"),
    Rule("material.gain", "More light out than in", "renderer.checks.material_gain:check_gain"),
    Rule("light.left-out", "Light that is left out", "renderer.checks.light_left_out:check_left_out"),
)


@cache
def function_of(place: str) -> RuleFunction:
    """The function behind ``module:function``, imported on first use."""
    module, name = place.split(":")
    function: RuleFunction = getattr(importlib.import_module(module), name)
    return function


def studio_rules() -> list[Rule]:
    """The rules that installed packages register; nothing of theirs is imported yet."""
    from importlib.metadata import entry_points

    found = sorted(entry_points(group=ENTRY_POINTS), key=lambda entry: entry.name)
    return [Rule(entry.name, entry.name, entry.value.split(" ")[0], own=False) for entry in found]


def rules() -> list[Rule]:
    """Our rules, then the studio's."""
    return [*TABLE, *studio_rules()]
