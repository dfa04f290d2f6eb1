"""mesh.watertight, mesh.normals and mesh.clean: a clear solid must have an inside and an outside everywhere."""

from __future__ import annotations

from collections.abc import Iterator

from renderer.checks import sphere
from renderer.checks.facts import Facts
from renderer.checks.findings import ADVICE, IMPLAUSIBLE, IMPOSSIBLE, Finding, Fix, Value
from renderer.checks.keys import object_key
from renderer.checks.view import FrameView
from renderer.shot.model import Object

SOURCE_SOLID = "C. M. Hoffmann, Geometric and Solid Modeling, 1989, on the boundary of a solid (from memory)"
PRACTICE = "common practice, no source"
FLAT = 1e-4  # thickness over length below which an open mesh is taken for a single sheet
PANE_M = 0.004  # the commonest float glass for windows


def clear_solids(view: FrameView) -> Iterator[Object]:
    """The objects that light enters and leaves, and that must be closed."""
    return (item for item in view.shot.objects if item.role == "solid")


def check_watertight(view: FrameView, facts: Facts) -> Iterator[Finding]:
    """Findings for clear solids with holes."""
    for item in clear_solids(view):
        report = facts.mesh(item)
        if not report.watertight:
            yield Finding(
                rule="mesh.watertight",
                title="Clear solid is not closed",
                severity=IMPOSSIBLE,
                subject=item.name,
                measured=report.n_open_edges,
                expected=0,
                unit="open edges",
                why="Light that enters through the surface and leaves by a hole never comes out of the material again.",
                source=SOURCE_SOLID,
                fix=_closing_fix(item, facts),
                excess=float(report.n_open_edges),
            )


def _closing_fix(item: Object, facts: Facts) -> Fix:
    """Weld what nearly meets; call a flat sheet a pane; else close the holes."""
    report = facts.mesh(item)
    if report.welds_within_m is not None:
        distance = report.welds_within_m
        return Fix(f"Merge vertices within {distance:.2g} m: that closes the mesh.", {"weld_within_m": distance})
    sides = sorted(high - low for low, high in zip(report.low_m, report.high_m, strict=True))
    if sides[0] <= FLAT * sides[2]:
        return Fix(
            f"It is a single sheet: give it a thickness, as in thickness = {PANE_M}, or model both faces; "
            "a water surface declares what is below it instead.",
            {"thickness_m": PANE_M},
        )
    return Fix(
        f"Close the holes: {report.n_open_edges} edges have an odd number of faces.", {"n_open": report.n_open_edges}
    )


def check_normals(view: FrameView, facts: Facts) -> Iterator[Finding]:
    """Findings for clear solids wound inside out or both ways, for sheets that face down, and for stray normals."""
    for item in view.shot.objects:
        if item.role == "sheet" and sphere.dot(facts.facing(item), view.axes.up) < 0.0:
            yield _normals_finding(
                item, IMPOSSIBLE, "Water surface faces down", 1, "sheets",
                "What is below a sheet is on the side away from its normals: here the air is under the water.",
                Fix("Flip the faces of the sheet, so that its normals point up.", {"flip": True}),
            )  # fmt: skip
    for item in clear_solids(view):
        report = facts.mesh(item)
        if not report.consistent:
            yield _normals_finding(
                item, IMPOSSIBLE, "Faces wound both ways", report.n_flipped_edges, "edges where the winding flips",
                "Neighbouring faces disagree on which side is outside.",
                Fix("Make the normals consistent, pointing outward.", {"recalculate_outside": True}),
            )  # fmt: skip
        elif report.watertight and (not report.outward or report.n_inside_out):
            count = max(1, report.n_inside_out)
            yield _normals_finding(
                item, IMPOSSIBLE, "Solid is inside out", count, "shells wound inward",
                "Its faces say that the material is outside and the air inside.",
                Fix("Flip the faces of the shells that are wound inward.", {"flip": True}),
            )  # fmt: skip
        elif item.smooth and report.n_normals_against:
            yield _normals_finding(
                item, IMPLAUSIBLE, "Stored normals against their faces", report.n_normals_against, "corners of faces",
                "The normals for smooth shading point to the other side of the faces that they belong to.",
                Fix("Recalculate the normals, or shade it flat: smooth = false.", {object_key(item, "smooth"): False}),
            )  # fmt: skip


def _normals_finding(item: Object, severity: str, title: str, count: int, unit: str, why: str, fix: Fix) -> Finding:
    return Finding(
        rule="mesh.normals",
        title=title,
        severity=severity,
        subject=item.name,
        measured=count,
        expected=0,
        unit=unit,
        why=why,
        source=SOURCE_SOLID,
        fix=fix,
        excess=float(count),
    )


def check_clean(view: FrameView, facts: Facts) -> Iterator[Finding]:
    """Findings for meshes with points that are no numbers, faces twice in one place, or faces without area."""
    for item in view.shot.objects:
        if item.mesh is None:
            continue
        report = facts.mesh(item)
        counts: tuple[tuple[int, str, str, str, str, dict[str, Value]], ...] = (
            (report.n_non_finite, IMPOSSIBLE, "vertices that are no numbers", "A point without a place cannot be lit.",
             "Delete these vertices and what uses them.", {"n_vertices": report.n_non_finite}),
            (report.n_duplicate if item.role == "solid" else 0, IMPLAUSIBLE, "faces twice in one place",
             "Light that crosses both enters and leaves again at once, or is counted twice.",
             "Delete the faces that repeat another.", {"n_faces": report.n_duplicate}),
            (report.n_degenerate, ADVICE, "faces without area",
             "They catch no light, and can spoil normals beside them.",
             "Dissolve the faces without area.", {"n_faces": report.n_degenerate}),
        )  # fmt: skip
        for count, severity, unit, why, fix, values in counts:
            if count:
                yield Finding(
                    rule="mesh.clean",
                    title="Mesh is not clean",
                    severity=severity,
                    subject=item.name,
                    measured=count,
                    expected=0,
                    unit=unit,
                    why=why,
                    source=PRACTICE,
                    fix=Fix(fix, values),
                    excess=float(count),
                )
