"""Flaws to faults: each with the file, line and column it stands on, or the variant or override that caused it."""

from __future__ import annotations

import itertools
import re
from collections.abc import Callable, Iterable
from typing import Any

from renderer.base.errors import Fault
from renderer.shot.positions import Place, Places, positions
from renderer.shot.schema.flaws import KEY, Flaw, Path, clean

MOST_PLACED = 5_000  # that are looked for in the file
MOST_FAULTS = 100  # that are listed; the rest is counted

_BARE = re.compile(r"[A-Za-z0-9_-]+", re.ASCII)

Origin = Callable[[Path], "tuple[str, Path] | None"]


def dotted(path: Path) -> str:
    """A path as a person writes it: ``objects[1].shape.sphere``."""
    text = ""
    for part in path:
        if isinstance(part, int):
            text += f"[{part}]"
        else:
            text += ("." if text else "") + (clean(part) if _BARE.fullmatch(part) else f'"{clean(part)}"')
    return text


def short(path: Path) -> str:
    """The end of a path, from its last name on: ``position[1]``, ``elevation.1001``."""
    start = len(path)
    while start > 0:
        start -= 1
        part = path[start]
        if isinstance(part, str) and not part.lstrip("-").isdigit():
            break
    return dotted(path[start:]) or "the shot"


def faults_of(flaws: Iterable[Flaw], text: str, file: str, tables: dict[str, Any], origin: Origin) -> tuple[Fault, ...]:
    """Faults in the order of the file, each once; what a variant or override caused is said to be there."""
    places = positions(text)
    found: dict[Fault, tuple[int, int]] = {}
    for flaw in itertools.islice(flaws, MOST_PLACED):
        fault, place = _fault(flaw, places, file, tables, origin)
        found.setdefault(fault, place)
    ordered = sorted(found, key=lambda fault: found[fault])
    if len(ordered) > MOST_FAULTS:
        rest = Fault(f"and {len(ordered) - MOST_FAULTS:,} more errors", file)
        ordered = [*ordered[:MOST_FAULTS], rest]
    return tuple(ordered)


def _fault(flaw: Flaw, places: Places, file: str, tables: dict[str, Any], origin: Origin) -> tuple[Fault, Place]:
    at = as_written(flaw.at, tables)
    what = flaw.what.replace(KEY, short(at))
    caused = origin(at)
    if caused is not None and caused[1] == ():  # from the command line
        return Fault(what, f"{caused[0]}  {dotted(at)}", flaw.expected, flaw.nearest), (10**9, 0)
    key = at if caused is None else caused[1]
    place = place_of(key, places)
    tail = f"  {dotted(key)}" if key else ""
    return Fault(what, f"{file}:{place[0]}:{place[1]}{tail}", flaw.expected, flaw.nearest), place


def place_of(path: Path, places: Places) -> Place:
    """Where a key stands, or the nearest table round it."""
    while path and path not in places:
        path = path[:-1]
    return places[path] if path else (1, 1)


def as_written(path: Path, tables: Any) -> Path:
    """`path` cut where a value in short stands for a table, so that only keys of the file are named."""
    value: Any = tables
    for depth, part in enumerate(path):
        if isinstance(value, dict):
            if part not in value:
                return path
            value = value[part]
        elif isinstance(value, list):
            if not isinstance(part, int) or part >= len(value):
                return path[:depth]
            value = value[part]
        else:
            return path[:depth]
    return path
