"""mesh.gap: a liquid touches its vessel; a film of air between them mirrors where there should be none."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from renderer.checks.facts import Facts
from renderer.checks.findings import IMPLAUSIBLE, Finding, Fix
from renderer.checks.gap_measure import Fit
from renderer.checks.keys import object_key
from renderer.checks.view import FrameView
from renderer.shot.model import Object

FILM_SHARE = 0.01  # of the filling's surface: less is a corner cut by coarse faces
FILLING_SHARE = 0.25  # of the filling's surface must have to do with the vessel, or it only stands in it
VESSEL_MARGIN = 0.02  # of the vessel's size: how far a filling may stand out of the vessel's bounds
SOURCE_FILM = (
    "Fresnel 1823: water on glass reflects 0.4 %, each face of a film of air between them 2 and 4 %, up to all"
)
SOURCE_OVERLAP = "J. Schmidt and B. Budge, J. Graphics Tools 7(3), 2002"


def check_gap(view: FrameView, facts: Facts) -> Iterator[Finding]:
    """Findings for fillings with air between them and their vessel, or that cut into its wall."""
    order = {id(item): place for place, item in enumerate(view.shot.objects)}
    for vessel, filling in nested_pairs(view, facts):
        fit = facts.fit(vessel, filling)
        if fit is None or fit.near_share < FILLING_SHARE:
            continue
        if fit.film_share > FILM_SHARE:
            yield _film(vessel, filling, fit)
        filling_wins = (filling.priority, order[id(filling)]) > (vessel.priority, order[id(vessel)])
        if FILM_SHARE < fit.inside_share < 1.0 - FILM_SHARE and filling_wins:
            yield _cuts_in(vessel, filling, fit)


def nested_pairs(view: FrameView, facts: Facts) -> Iterator[tuple[Object, Object]]:
    """Closed solids of different materials, of which one's bounds hold the other's: (outer, inner)."""
    closed = [item for item in view.shot.objects if item.role == "solid" and facts.mesh(item).watertight]
    if len(closed) < 2:
        return
    bounds = np.array([facts.world_bounds(item) for item in closed])
    slack = VESSEL_MARGIN * np.linalg.norm(bounds[:, 1] - bounds[:, 0], axis=1)
    for place, vessel in enumerate(closed):
        low, high = bounds[place]
        within = (bounds[:, 0] >= low - slack[place]).all(axis=1) & (bounds[:, 1] <= high + slack[place]).all(axis=1)
        for other in np.flatnonzero(within):
            if other != place and closed[other].material != vessel.material:
                yield vessel, closed[other]


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
