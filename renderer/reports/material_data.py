"""Clear materials as plain data: the one form that JSON and text are made from."""

from __future__ import annotations

import math
from typing import Any

from renderer.optics.library import LibraryEntry, library, library_entry
from renderer.optics.materials import index_at, material_tables, nd_and_vd

STEP_NM = 20
SHOWN_NM = (450, 550, 650)


def list_data() -> dict[str, Any]:
    """Every material of the library, by its main figures at 20 degrees C."""
    return {"format": 1, "materials": [_figures(entry, 20.0, None) for entry in library()]}


def _figures(entry: LibraryEntry, temperature_c: float, salinity: float | None) -> dict[str, Any]:
    nd, vd = nd_and_vd(entry.name, temperature_c, salinity)
    return {
        "name": entry.name,
        "other_names": list(entry.aliases),
        "nd": round(nd, 5),
        "abbe_number": round(vd, 2) if math.isfinite(vd) else None,
        "source": entry.source,
    }


def material_data(name: str, temperature_c: float = 20.0, salinity: float | None = None) -> dict[str, Any]:
    """One material: its figures, and index and absorption every 20 nm. An unknown name is an `InputError`."""
    entry = library_entry(name)
    _, absorption = material_tables(entry.name, temperature_c, salinity)
    wavelengths = range(380, 781, STEP_NM)
    indices = index_at([float(nm) for nm in wavelengths], entry.name, temperature_c, salinity)
    return {
        "format": 1,
        **_figures(entry, temperature_c, salinity),
        "temperature": temperature_c,
        "salinity": entry.salinity if salinity is None else salinity,
        "fitted_range_nm": list(entry.range_nm),
        "extended": entry.extended or None,
        "note": entry.note or None,
        "nd_range": list(entry.nd_range),
        "abbe_range": list(entry.vd_range),
        "has_absorption": bool(absorption.any()),
        "table": [
            {"nm": nm, "index": round(float(index), 6), "absorption": float(f"{absorption[nm - 380]:.4g}")}
            for nm, index in zip(wavelengths, indices, strict=True)
        ],
    }
