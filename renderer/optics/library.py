"""The library of clear materials: names as users type them, and what is published about each."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache
from typing import Any

from renderer.base.errors import Fault, InputError, nearest_name
from renderer.optics.tables import table_text


@dataclass(frozen=True)
class LibraryEntry:
    """One material of the library. Indices are relative to air at 20 C; `range_nm` is where its law was fitted.

    `nd_range` and `vd_range` hold what is sold under this name, so a shot's own numbers can be held against them.
    `extended` says in words where the law is used beyond its fitted range within 380 to 780 nm; it is empty where not.
    """

    name: str
    aliases: tuple[str, ...]
    law: str
    offset: float
    terms: tuple[tuple[float, float], ...]
    relative_to: str
    range_nm: tuple[float, float]
    source: str
    nd_range: tuple[float, float]
    vd_range: tuple[float, float]
    absorption: str
    note: str
    salinity: float

    @property
    def is_water(self) -> bool:
        """Whether its index depends on temperature and salinity: fresh water, or sea water."""
        return self.law == "water"

    @property
    def extended(self) -> str:
        """What of 380 to 780 nm the fitted range leaves out, and what is done there."""
        low, high = self.range_nm
        parts = [f"380-{low:g} nm"] if low > 380.0 else []
        parts += [f"{high:g}-780 nm"] if high < 780.0 else []
        return f"the law is continued at {' and '.join(parts)}" if parts else ""


def read_entry(entry: dict[str, Any]) -> LibraryEntry:
    """One entry of the data file."""
    return LibraryEntry(
        name=entry["name"],
        aliases=tuple(entry["aliases"]),
        law=entry["law"],
        offset=float(entry.get("offset", 0.0)),
        terms=tuple((float(a), float(b)) for a, b in entry["terms"]),
        relative_to=entry["relative_to"],
        range_nm=(float(entry["range_nm"][0]), float(entry["range_nm"][1])),
        source=entry["source"],
        nd_range=(float(entry["nd_range"][0]), float(entry["nd_range"][1])),
        vd_range=(float(entry["vd_range"][0]), float(entry["vd_range"][1])),
        absorption=entry["absorption"],
        note=entry["note"],
        salinity=float(entry.get("salinity", 0.0)),
    )


@cache
def library() -> tuple[LibraryEntry, ...]:
    """Every material, in the order of the data file."""
    return tuple(read_entry(entry) for entry in tomllib.loads(table_text("materials.toml"))["material"])


@cache
def known_names() -> dict[str, LibraryEntry]:
    """Every name and alias in lower case, and its entry."""
    return {name.lower(): entry for entry in library() for name in (entry.name, *entry.aliases)}


def material_names() -> tuple[str, ...]:
    """The materials' first names, in the library's order."""
    return tuple(entry.name for entry in library())


def accepted_names() -> tuple[str, ...]:
    """Every first name and alias as written; `library_entry` takes them in any case."""
    return tuple(name for entry in library() for name in (entry.name, *entry.aliases))


def library_entry(name: str) -> LibraryEntry:
    """The entry of a material by its name or alias, whatever the case; InputError with the nearest name for none."""
    found = known_names().get(name.strip().lower())
    if found is None:
        raise InputError(
            Fault(
                f'no material named "{name}"',
                expected='a name from "antisolar materials"',
                nearest=nearest_name(name, accepted_names()),
            )
        )
    return found
