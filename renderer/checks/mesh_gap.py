"""mesh.gap: a liquid touches its vessel; a film of air between them mirrors where there should be none."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import permutations

import numpy as np
import numpy.typing as npt

from renderer.checks.facts import Facts
from renderer.checks.findings import IMPLAUSIBLE, Finding, Fix
from renderer.checks.gap_measure import Fit
from renderer.checks.keys import object_key
from renderer.checks.view import FrameView
from renderer.shot.model import Object

Floats = npt.NDArray[np.float64]

FILM_SHARE = 0.01  # of the filling's surface: less is a corner cut by coarse faces
FILLING_SHARE = 0.25  # of the filling's surface must have to do with the vessel, or it only stands in it
VESSEL_MARGIN = 0.02  # of the vessel's size: how far a filling may stand out of the vessel's bounds
SOURCE_FILM = (
    "Fresnel 1823: water on glass reflects 0.4 %, each face of a film of air between them 2 and 4 %, up to all"
)
SOURCE_OVERLAP = "J. Schmidt and B. Budge, J. Graphics Tools 7(3), 2002"


def check_gap(view: FrameView, facts: Facts) -> Iterator[Finding]:
    """Findings for fillings with air between them and their vessel, or that cut into its wall."""
    closed = [item for item in view.shot.objects if item.role == "solid" and facts.mesh(item).watertight]
    bounds = {id(item): world_bounds(item, facts) for item in closed}
    order = {id(item): place for place, item in enumerate(view.shot.objects)}
    for vessel, filling in permutations(closed, 2):
        if _same_material(vessel, filling) or not _within(bounds[id(filling)], bounds[id(vessel)]):
            continue
        fit = facts.fit(vessel, filling)
        if fit is None or fit.near_share < FILLING_SHARE:
            continue
        if fit.film_share > FILM_SHARE:
            yield _film(vessel, filling, fit)
        filling_wins = (filling.priority, order[id(filling)]) > (vessel.priority, order[id(vessel)])
        if FILM_SHARE < fit.inside_share < 1.0 - FILM_SHARE and filling_wins:
            yield _cuts_in(vessel, filling, fit)


def world_bounds(item: Object, facts: Facts) -> tuple[Floats, Floats]:
    """Low and high corner of an object's bounding box as placed. [m]"""
    report, matrix = facts.mesh(item), item.matrices[0]
    sides = np.array([report.low_m, report.high_m])
    corners = np.array([[sides[i, 0], sides[j, 1], sides[k, 2]] for i in (0, 1) for j in (0, 1) for k in (0, 1)])
    placed = corners @ matrix[:, :3].T + matrix[:, 3]
    return placed.min(axis=0), placed.max(axis=0)


def _within(inner: tuple[Floats, Floats], outer: tuple[Floats, Floats]) -> bool:
    slack = VESSEL_MARGIN * float(np.linalg.norm(outer[1] - outer[0]))
    return bool((inner[0] >= outer[0] - slack).all() and (inner[1] <= outer[1] + slack).all())


def _same_material(a: Object, b: Object) -> bool:
    return a.material is not None and b.material is not None and a.material == b.material


def _film(vessel: Object, filling: Object, fit: Fit) -> Finding:
    scale = scale_of(vessel)
    median_m, largest_m = (scale * part for part in fit.film_m)
    grow_m = float(f"{1.2 * largest_m:.3g}")
    return Finding(
        rule="mesh.gap",
        title="Air between glass and its filling",
        severity=IMPLAUSIBLE,
        subject=filling.name,
        measured=float(f"{median_m:.3g}"),
        expected=0.0,
        unit=f"m of air between it and {vessel.name}, over {100.0 * fit.film_share:.0f} % of its surface",
        why="A liquid wets its vessel. A film of air adds a mirror, total at a slant: the liquid looks silvered.",
        source=SOURCE_FILM,
        fix=Fix(
            f"Grow {filling.name} by {grow_m} m along its normals, so that it reaches into {vessel.name}, and give "
            f"{vessel.name} the higher overlap_priority.",
            {
                "grow_by_m": grow_m,
                object_key(vessel, "overlap_priority"): max(vessel.priority, filling.priority + 1),
            },
        ),
        excess=fit.film_share,
    )


def _cuts_in(vessel: Object, filling: Object, fit: Fit) -> Finding:
    higher = filling.priority + 1
    return Finding(
        rule="mesh.gap",
        title="Filling cuts into its glass",
        severity=IMPLAUSIBLE,
        subject=filling.name,
        measured=vessel.priority,
        expected=(float(higher), None),
        unit=f"overlap_priority of {vessel.name}, with {100.0 * fit.inside_share:.0f} % of the filling inside its wall",
        why="Where the two overlap the filling wins, so the wall is thinner than it was modelled.",
        source=SOURCE_OVERLAP,
        fix=Fix(f"Give {vessel.name} overlap_priority = {higher}.", {object_key(vessel, "overlap_priority"): higher}),
        excess=fit.inside_share,
    )


def scale_of(item: Object) -> float:
    """How much larger than its own metres an object is placed, mean over its axes."""
    return float(abs(np.linalg.det(item.matrices[0][:, :3])) ** (1.0 / 3.0))
