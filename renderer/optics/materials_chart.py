"""A chart of one material as an SVG picture: index and absorption over wavelength, with its numbers and sources."""

from __future__ import annotations

import textwrap
from dataclasses import dataclass
from html import escape

import numpy as np
import numpy.typing as npt

from renderer.base.constants import FRAUNHOFER_C_NM, FRAUNHOFER_D_NM, FRAUNHOFER_F_NM
from renderer.optics.library import LibraryEntry
from renderer.optics.materials import library_entry, material_tables, nd_and_vd
from renderer.optics.tables import render_wavelengths_nm, table_source

Floats = npt.NDArray[np.float64]

WIDTH, LEFT, RIGHT = 720, 84, 696
INDEX_COLOUR, ABSORPTION_COLOUR, GRID_COLOUR, INK = "#1f5f8b", "#b4532a", "#d9dde1", "#222222"
LINES = (("F", FRAUNHOFER_F_NM), ("d", FRAUNHOFER_D_NM), ("C", FRAUNHOFER_C_NM))
TABLE_OF = {"water": "water_absorption.csv", "ice": "ice_absorption.csv"}


@dataclass(frozen=True)
class Panel:
    """A frame of the chart: its place in the picture and the values at its lower and upper edge."""

    top: float
    bottom: float
    low: float
    high: float

    def x(self, nm: Floats | float) -> Floats:
        """Picture column of a wavelength."""
        return np.asarray(LEFT + (RIGHT - LEFT) * (np.asarray(nm, dtype=np.float64) - 380.0) / 400.0)

    def y(self, value: Floats | float) -> Floats:
        """Picture row of a value."""
        share = (np.asarray(value, dtype=np.float64) - self.low) / (self.high - self.low)
        return np.asarray(self.bottom - (self.bottom - self.top) * share)


def round_step(span: float, at_most: int) -> float:
    """The smallest of 1, 2, 5 times a power of ten that divides `span` into at most so many parts."""
    step = 10.0 ** np.floor(np.log10(span / at_most))
    return float(next(step * factor for factor in (1, 2, 5, 10, 20) if span / (step * factor) <= at_most))


def panel_over(values: Floats, top: float, bottom: float, from_zero: bool) -> tuple[Panel, Floats]:
    """A panel that holds `values`, and the values of its level lines."""
    low, high = (0.0 if from_zero else float(values.min())), float(values.max())
    if high - low < 1e-4:
        low, high = (0.0, 1.0) if from_zero else (low - 0.01, high + 0.01)
    step = round_step(high - low, 6)
    first, last = np.floor(low / step + 1e-9), np.ceil(high / step - 1e-9)
    return Panel(top, bottom, first * step, last * step), np.arange(first, last + 1.0) * step


def text(
    x: float, y: float, words: str, anchor: str = "start", size: int = 12, colour: str = INK, bold: bool = False
) -> str:
    """One line of writing."""
    weight = ' font-weight="600"' if bold else ""
    style = f'font-size="{size}" text-anchor="{anchor}" fill="{colour}"{weight}'
    return f'<text x="{x:.1f}" y="{y:.1f}" {style}>{escape(words)}</text>'


def line(x1: float, y1: float, x2: float, y2: float, colour: str, dash: str = "") -> str:
    """One straight line."""
    dashes = f' stroke-dasharray="{dash}"' if dash else ""
    return f'<line x1="{x1:.1f}" y1="{y1:.1f}" x2="{x2:.1f}" y2="{y2:.1f}" stroke="{colour}"{dashes}/>'


def panel_parts(panel: Panel, levels: Floats, values: Floats, colour: str, title: str) -> list[str]:
    """Level lines with their numbers, wavelength lines, the curve and its title."""
    digits = max(0, -int(np.floor(np.log10(levels[1] - levels[0]) + 1e-9)))
    parts = [text(LEFT, panel.top - 8, title, size=13, colour=colour, bold=True)]
    for level in levels:
        y = float(panel.y(float(level)))
        parts += [line(LEFT, y, RIGHT, y, GRID_COLOUR), text(LEFT - 8, y + 4, f"{level:.{digits}f}", "end")]
    for nm in range(400, 781, 50):
        x = float(panel.x(float(nm)))
        parts += [line(x, panel.top, x, panel.bottom, GRID_COLOUR), text(x, panel.bottom + 18, str(nm), "middle")]
    points = " ".join(
        f"{x:.1f},{y:.1f}" for x, y in zip(panel.x(render_wavelengths_nm()), panel.y(values), strict=True)
    )
    return [*parts, f'<polyline points="{points}" fill="none" stroke="{colour}" stroke-width="2"/>']


def line_marks(panel: Panel) -> list[str]:
    """The Fraunhofer lines between which the Abbe number is taken."""
    parts = []
    for name, nm in LINES:
        x = float(panel.x(nm))
        parts += [line(x, panel.top, x, panel.bottom, "#888888", "3 3"), text(x + 3, panel.top + 12, name, size=11)]
    return parts


def extension_marks(panel: Panel, entry: LibraryEntry) -> list[str]:
    """Shades over the wavelengths to which the index law was continued."""
    low, high = max(entry.range_nm[0], 380.0), min(entry.range_nm[1], 780.0)
    return [
        f'<rect x="{float(panel.x(a)):.1f}" y="{panel.top:.1f}" width="{float(panel.x(b) - panel.x(a)):.1f}" '
        f'height="{panel.bottom - panel.top:.1f}" fill="#000000" fill-opacity="0.06"/>'
        for a, b in ((380.0, low), (high, 780.0))
        if b > a
    ]


def notes(entry: LibraryEntry) -> list[str]:
    """What stands under the chart: source, range, what was continued."""
    table = TABLE_OF.get(entry.absorption, "glass_absorption.csv")
    absorption = "none carried: drawn as clear" if entry.absorption == "none" else table_source(table)
    sentences = [f"Source: {entry.source}", f"Absorption: {absorption}", f"Note: {entry.note}"]
    extended = f"; {entry.extended} (grey)" if entry.extended else ""
    sentences.insert(1, f"Index fitted from {entry.range_nm[0]:g} to {entry.range_nm[1]:g} nm{extended}")
    return [row for sentence in sentences for row in textwrap.wrap(sentence, 104)]


def materials_chart(name: str) -> str:
    """The chart of a library material at 20 C as SVG text; InputError with the nearest name for an unknown one."""
    entry = library_entry(name)
    index, absorption = material_tables(entry.name)
    nd, vd = nd_and_vd(entry.name)
    abbe = f"Vd {vd:.2f}" if np.isfinite(vd) else "no dispersion"
    upper, index_levels = panel_over(index, 84.0, 290.0, from_zero=False)
    lower, absorption_levels = panel_over(absorption, 352.0, 500.0, from_zero=True)
    written = notes(entry)
    height = 560 + 17 * len(written)
    parts = [
        f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {WIDTH} {height}" width="{WIDTH}" height="{height}" '
        f'font-family="sans-serif" role="img" aria-label="{escape(entry.name)}: refractive index and absorption">',
        f'<rect width="{WIDTH}" height="{height}" fill="#ffffff"/>',
        text(LEFT, 30, entry.name, size=20, bold=True),
        text(LEFT, 50, f"nd {nd:.5f} relative to air, {abbe}", size=14),
        *extension_marks(upper, entry),
        *panel_parts(upper, index_levels, index, INDEX_COLOUR, "Refractive index"),
        *line_marks(upper),
        *panel_parts(lower, absorption_levels, absorption, ABSORPTION_COLOUR, "Absorption, per metre (base e)"),
        text((LEFT + RIGHT) / 2, 538, "wavelength, nm", "middle"),
        *(text(24, 562 + 17 * k, row, size=12, colour="#555555") for k, row in enumerate(written)),
        "</svg>",
    ]
    return "\n".join(parts) + "\n"
