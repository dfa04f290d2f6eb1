"""Clear materials as text for a terminal."""

from __future__ import annotations

import textwrap
from typing import Any

WIDTH = 100
BAR = 36  # characters of the longest bar of a chart


def list_text(data: dict[str, Any]) -> str:
    """The library as a table: name, index at the d line, Abbe number, source."""
    rows = data["materials"]
    wide = max(len(row["name"]) for row in rows) + 2
    lines = [f"{'material':<{wide}}{'nd':>8}{'Abbe':>9}  source"]
    for row in rows:
        abbe = "-" if row["abbe_number"] is None else f"{row['abbe_number']:.1f}"
        lines.append(f"{row['name']:<{wide}}{row['nd']:8.4f}{abbe:>9}  {_short(row['source'], WIDTH - wide - 19)}")
    return "\n".join(
        [*lines, "", "antisolar materials NAME shows one with its whole source; indices are relative to air."]
    )


def _short(text: str, width: int) -> str:
    return textwrap.shorten(text, max(width, 20), placeholder=" ...")


def material_text(data: dict[str, Any]) -> str:
    """One material: figures, a chart of index and absorption by wavelength, sources."""
    abbe = "none: no dispersion" if data["abbe_number"] is None else f"{data['abbe_number']:.2f}"
    others = ", ".join(data["other_names"])
    lines = [data["name"] + (f" (also: {others})" if others else "")]
    lines += [f"  index at the d line  {data['nd']:.5f}, relative to air", f"  Abbe number          {abbe}"]
    if data["salinity"] or data["name"] in ("water", "sea water"):
        lines.append(f"  at                   {data['temperature']:g} °C, salinity {data['salinity']:g} ‰")
    lines += _paragraph("source", data["source"])
    low, high = data["fitted_range_nm"]
    lines += _paragraph(
        "range", f"fitted from {low:g} to {high:g} nm" + (f"; {data['extended']}" if data["extended"] else "")
    )
    if data["note"]:
        lines += _paragraph("note", data["note"])
    return "\n".join([*lines, "", *_chart(data)])


def _paragraph(label: str, text: str) -> list[str]:
    first = f"  {label:<21}"
    return textwrap.wrap(text, WIDTH, initial_indent=first, subsequent_indent=" " * len(first))


def _chart(data: dict[str, Any]) -> list[str]:
    """A bar for the index and the absorption at each wavelength of the table."""
    table = data["table"]
    lowest, highest = (pick(row["index"] for row in table) for pick in (min, max))
    most = max(row["absorption"] for row in table)
    head = "absorption, per metre" if data["has_absorption"] else ""
    lines = [f"  {'nm':>4}{'index':>10}  {'':{BAR // 2}}  {head}".rstrip()]
    for row in table:
        share = (row["index"] - lowest) / (highest - lowest) if highest > lowest else 0.0
        line = f"  {row['nm']:>4}{row['index']:>10.5f}  {'█' * (1 + round(share * (BAR // 2 - 1))):<{BAR // 2}}"
        if data["has_absorption"]:
            line += f"  {row['absorption']:>10.4g}  {'▒' * round(row['absorption'] / most * BAR)}"
        lines.append(line.rstrip())
    return lines
