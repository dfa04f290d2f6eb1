"""Names that must be unique, and names that must exist; looked at as written, so that other errors hide none."""

from __future__ import annotations

import itertools
from collections.abc import Iterator
from typing import Any

from renderer.shot.schema.flaws import Flaw, Path, clean, nearest

MOST_OWN = 100  # of the shot's own materials that a nearest name is looked for among


def library_names() -> tuple[str, ...]:
    """The names of the library of materials, and the other names that they go by."""
    from renderer.optics.library import accepted_names

    return accepted_names()


def in_library(name: str) -> bool:
    """Whether the library has a material of that name, in capitals or not."""
    from renderer.optics.library import known_names

    return name.strip().lower() in known_names()


def rows(table: dict[str, Any], name: str) -> Iterator[tuple[int, dict[str, Any]]]:
    """The tables of a list of tables, with their numbers; whatever is none is passed over."""
    value = table.get(name)
    if isinstance(value, list):
        yield from ((index, row) for index, row in enumerate(value) if isinstance(row, dict))


def repeated_names(shot: dict[str, Any]) -> Iterator[Flaw]:
    """Objects and lights, and bows, that share a name."""
    for kinds in (("objects", "lights"), ("bows_to_check",)):
        taken: dict[str, str] = {}
        for kind in kinds:
            for index, row in rows(shot, kind):
                name = row.get("name")
                if not isinstance(name, str):
                    continue
                if name in taken:
                    yield Flaw(
                        (kind, index, "name"),
                        f'the name "{clean(name)}" is taken by {taken[name]}',
                        "a name of its own",
                    )
                taken.setdefault(name, f"{kind}[{index}]")
                if _filled(row):
                    taken.setdefault(f"{name} filling", f"what stands in {kind}[{index}]")


def _vessels(row: dict[str, Any]) -> Iterator[tuple[str, dict[str, Any]]]:
    """The vessels of an object's shape, by kind."""
    shape = row.get("shape")
    for kind in ("tank", "bowl"):
        vessel = shape.get(kind) if isinstance(shape, dict) else None
        if isinstance(vessel, dict):
            yield kind, vessel


def _filled(row: dict[str, Any]) -> bool:
    """Whether something stands in an object, which has a name of its own."""
    return any("filling" in vessel for _, vessel in _vessels(row))


def unknown_materials(shot: dict[str, Any]) -> Iterator[Flaw]:
    """References to materials that neither the shot nor the library has."""
    own = shot.get("materials")
    own = own if isinstance(own, dict) else {}
    for name, material in own.items():
        like = material.get("like") if isinstance(material, dict) else None
        if isinstance(like, str) and not in_library(like):
            yield _unknown(("materials", name, "like"), like, library_names(), 'a name from "antisolar materials"')
    for at, name in _references(shot):
        if name not in own and not in_library(name):
            known = (*itertools.islice(own, MOST_OWN), *library_names())
            yield _unknown(at, name, known, 'a name from [materials] or from "antisolar materials"')


def _unknown(at: Path, name: str, known: tuple[str, ...], expected: str) -> Flaw:
    return Flaw(at, f'no material is named "{clean(name)}"', expected, nearest(name, known))


def _references(shot: dict[str, Any]) -> Iterator[tuple[Path, str]]:
    """Every place that names a material."""
    for index, row in rows(shot, "objects"):
        for key in ("material", "below"):
            if isinstance(row.get(key), str):
                yield ("objects", index, key), row[key]
        for kind, vessel in _vessels(row):
            if isinstance(vessel.get("filling"), str):
                yield ("objects", index, "shape", kind, "filling"), vessel["filling"]
