"""The shot file's dotted keys, as fixes state them: each works as it stands after --override."""

from __future__ import annotations

import re

from renderer.shot.model import Object

BARE = re.compile(r"[A-Za-z0-9_-]+")


def dotted(table: str, name: str, *rest: str) -> str:
    """``table.name.rest``, the name in quotes where TOML asks for them."""
    if not BARE.fullmatch(name):
        name = '"' + name.replace("\\", "\\\\").replace('"', '\\"') + '"'
    return ".".join((table, name, *rest))


def bow_key(name: str, *rest: str) -> str:
    """A key of a bow to check."""
    return dotted("bows_to_check", name, *rest)


def material_key(name: str, *rest: str) -> str:
    """A key of a material of the shot."""
    return dotted("materials", name, *rest)


def object_key(item: Object, *rest: str) -> str:
    """A key of an object; all placements of one mesh share theirs."""
    return dotted("objects", re.sub(r"\[\d+\]$", "", item.name), *rest)
