"""material.index and material.dispersion: what a clear substance can do, and what the one that it is called does."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator, Sequence
from itertools import pairwise

from renderer.checks.facts import Facts
from renderer.checks.findings import IMPLAUSIBLE, IMPOSSIBLE, Finding, Fix, Value
from renderer.checks.keys import material_key
from renderer.checks.view import FrameView
from renderer.optics.library import LibraryEntry, known_names
from renderer.shot.model import Material

AIR_BELOW = 0.9997  # vacuum relative to air of 20 °C: 1 / 1.000272 (Ciddor 1996)
AIR_ABOVE = 1.0003  # gases at this pressure stay near 1 (from memory)
THINNEST = 1.25  # perfluorinated liquids; only aerogels and gases lie below (from memory)
DENSEST = 2.95  # rutile's extraordinary ray at the d line is about 2.90 (from memory)
INDEX_SLACK = 0.002  # temperature and purity move a liquid's or a melt's index this much
SOURCE_RANGE = "the range of known clear substances in the visible, from memory"

# (nd, smallest Vd, largest Vd) of known clear substances: between them straight lines. From memory, but for those that
# the materials of this project have: water, polycarbonate, diamond.
KNOWN: tuple[tuple[float, float, float], ...] = (
    (1.00, 40.0, 110.0),  # gases
    (1.33, 45.0, 105.0),  # water 55.8, perfluorinated liquids
    (1.43, 40.0, 105.0),  # calcium fluoride 95, magnesium fluoride 106
    (1.50, 27.0, 87.0),  # benzene 30; fluor crowns 84
    (1.59, 22.0, 76.0),  # polycarbonate, polystyrene 28 to 31; phosphate crowns
    (1.63, 16.0, 75.0),  # carbon disulphide 18
    (1.77, 15.0, 76.0),  # sapphire 72
    (1.95, 14.0, 60.0),  # densest flints 18 to 21
    (2.42, 10.0, 58.0),  # diamond 55, strontium titanate 13
    (2.95, 7.0, 50.0),  # rutile 10
)


def named_entry(material: Material) -> LibraryEntry | None:
    """The library's entry for what a material is like, or is called: "water", "lock water"."""
    if material.like is not None:
        return known_names().get(material.like.strip().lower())
    name = " ".join(re.split(r"[\s_.-]+", material.name.strip().lower()))
    ends = [known for known in known_names() if name == known or name.endswith(" " + known)]
    return known_names()[max(ends, key=len)] if ends else None


def stated_materials(view: FrameView) -> Iterator[Material]:
    """Each material whose index the shot itself states, once."""
    seen: set[str] = set()
    for item in view.shot.objects:
        material = item.material
        if material is not None and material.dispersion is not None and material.name not in seen:
            seen.add(material.name)
            yield material


def check_index(view: FrameView, facts: Facts) -> Iterator[Finding]:
    """Findings for refractive indices that no clear substance, or not the named one, has."""
    for material in stated_materials(view):
        nd, _ = facts.index_and_abbe(material)
        entry = named_entry(material)
        if nd < AIR_BELOW:
            yield _below_air(material, nd)
        elif entry is not None:
            low, high = entry.nd_range
            if not low - INDEX_SLACK <= nd <= high + INDEX_SLACK:
                yield _not_as_named(material, entry, nd)
        elif AIR_ABOVE < nd < THINNEST or nd > DENSEST:
            yield _unknown_index(material, nd)


def _finding(
    rule: str, title: str, severity: str, material: Material, measured: float, expected: tuple[float, float], unit: str,
    why: str, source: str, fix: Fix, excess: float,
) -> Finding:  # fmt: skip
    return Finding(
        rule=rule, title=title, severity=severity, subject=material.name, measured=measured, expected=expected,
        unit=unit, why=why, source=source, fix=fix, excess=excess,
    )  # fmt: skip


def _below_air(material: Material, nd: float) -> Finding:
    inverse = round(1.0 / nd, 4) if 1.0 / nd >= THINNEST else 1.0
    return _finding(
        "material.index", "Refractive index below air's", IMPOSSIBLE, material, round(nd, 5), (1.0, DENSEST),
        "index at the d line, relative to air",
        "Light is slower in every clear substance than in air; an inverted index is often meant for air in a liquid.",
        SOURCE_RANGE,
        Fix(
            f"Use {inverse} for the substance itself; for a bubble, give an object the material air and a higher "
            "overlap_priority than what surrounds it.",
            {material_key(material.name, "refractive_index"): {"constant": inverse}},
        ),
        1.0 - nd,
    )  # fmt: skip


def _not_as_named(material: Material, entry: LibraryEntry, nd: float) -> Finding:
    low, high = entry.nd_range
    values: dict[str, Value] = {material_key(material.name, "refractive_index"): {"abbe": _typical(entry)}}
    return _finding(
        "material.index", f"Not the index of {entry.name}", IMPLAUSIBLE, material, round(nd, 5), (low, high),
        "index at the d line, relative to air",
        f'What is called "{material.like or material.name}" bends light as no {entry.name} does.',
        entry.source,
        Fix(f'Leave the index out and say like = "{entry.name}", or give the material another name.', values),
        max(low - nd, nd - high),
    )  # fmt: skip


def _typical(entry: LibraryEntry) -> tuple[float, float]:
    """The middle of what is sold under a name, as a pair of index and Abbe number."""
    return (
        round(0.5 * (entry.nd_range[0] + entry.nd_range[1]), 4),
        round(0.5 * (entry.vd_range[0] + entry.vd_range[1]), 1),
    )


def _unknown_index(material: Material, nd: float) -> Finding:
    thin = nd < THINNEST
    nearest = THINNEST if thin else DENSEST
    why = (
        "Only gases and aerogels are this thin."
        if thin
        else "No substance that is clear to visible light is this dense."
    )
    return _finding(
        "material.index", "Refractive index", IMPLAUSIBLE, material, round(nd, 5), (THINNEST, DENSEST),
        "index at the d line, relative to air", why, SOURCE_RANGE,
        Fix(
            f"Use an index within {THINNEST} and {DENSEST}; antisolar materials lists those of real substances.",
            {material_key(material.name, "refractive_index"): {"constant": nearest}},
        ),
        abs(nd - nearest),
    )  # fmt: skip


def known_abbe_range(nd: float) -> tuple[float, float]:
    """Smallest and largest Abbe number of known clear substances of this index."""
    points = KNOWN
    nd = min(max(nd, points[0][0]), points[-1][0])
    for (low_nd, low_a, low_b), (high_nd, high_a, high_b) in pairwise(points):
        if nd <= high_nd:
            share = (nd - low_nd) / (high_nd - low_nd)
            return low_a + share * (high_a - low_a), low_b + share * (high_b - low_b)
    raise AssertionError("the index was brought within the table")


def check_dispersion(view: FrameView, facts: Facts) -> Iterator[Finding]:
    """Findings for materials that do not spread the colours, spread them the wrong way, too much or too little."""
    if len(view.shot.settings.wavelengths_nm) == 1:
        return  # one wavelength alone has no dispersion to be wrong
    for material in stated_materials(view):
        nd, vd = facts.index_and_abbe(material)
        if nd < AIR_ABOVE:
            continue  # air itself; and an index below it is another rule's finding
        entry = named_entry(material)
        low, high = known_abbe_range(nd) if entry is None else entry.vd_range
        low, high = round(low, 1), round(high, 1)
        if math.isinf(vd):
            yield _no_dispersion(material, nd, entry, (low, high))
        elif vd <= 0.0:
            yield _wrong_way(material, nd, vd, entry, (low, high))
        elif not low <= vd <= high:
            yield _odd_dispersion(material, nd, vd, entry, (low, high))


def _dispersion_fix(material: Material, nd: float, entry: LibraryEntry | None, limits: Sequence[float]) -> Fix:
    """An Abbe pair with the index kept where it can be."""
    pair = (round(nd, 4), round(0.5 * (limits[0] + limits[1]), 1))
    other = f', or leave the index out and say like = "{entry.name}"' if entry else ""
    return Fix(
        f"Give index and Abbe number: refractive_index = {{ abbe = [{pair[0]}, {pair[1]}] }}{other}.",
        {material_key(material.name, "refractive_index"): {"abbe": pair}},
    )


def _no_dispersion(material: Material, nd: float, entry: LibraryEntry | None, limits: tuple[float, float]) -> Finding:
    return Finding(
        rule="material.dispersion",
        title="Dispersion is off",
        severity=IMPLAUSIBLE,
        subject=material.name,
        measured="one index for all colours",
        expected=limits,
        unit="Abbe number",
        why="Every clear substance bends blue more than red; without it there are no colours at edges, and no bows.",
        source="Newton 1704, Opticks, book I part I, proposition II",
        fix=_dispersion_fix(material, nd, entry, limits),
        excess=1.0,
    )


def _wrong_way(
    material: Material, nd: float, vd: float, entry: LibraryEntry | None, limits: tuple[float, float]
) -> Finding:
    return _finding(
        "material.dispersion", "Dispersion runs the wrong way", IMPOSSIBLE, material, round(vd, 2), limits,
        "Abbe number",
        "Where a substance is clear its index falls from blue to red; it rises only inside an absorption band.",
        "M. Born and E. Wolf, Principles of Optics, section 2.3.4 (from memory)",
        _dispersion_fix(material, nd, entry, limits), 100.0 - vd,
    )  # fmt: skip


def _odd_dispersion(
    material: Material, nd: float, vd: float, entry: LibraryEntry | None, limits: tuple[float, float]
) -> Finding:
    of_what = f"{entry.name}" if entry else f"known clear substances of index {nd:.3f}"
    return _finding(
        "material.dispersion", "Abbe number", IMPLAUSIBLE, material, round(vd, 2), limits, "Abbe number",
        f"This spreads the colours {'more' if vd < limits[0] else 'less'} than {of_what} do.",
        entry.source if entry else SOURCE_RANGE,
        _dispersion_fix(material, nd, entry, limits), max(limits[0] - vd, vd - limits[1]),
    )  # fmt: skip
