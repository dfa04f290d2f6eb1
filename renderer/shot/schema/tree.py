"""Finding one's way in the schema: which table stands at a path."""

from __future__ import annotations

import typing
from typing import Any

from renderer.shot.schema.flaws import Path
from renderer.shot.schema.table import Table


def table_at(root: type[Table], path: Path) -> type[Table] | None:
    """The kind of table at a path from `root`; None where no table of a known kind stands there."""
    table, inside = _follow(root, path)
    return None if inside else table


def is_table(root: type[Table], path: Path) -> bool:
    """Whether a table, or a list or table of tables, stands at a path from `root`."""
    return _follow(root, path)[0] is not None


def _follow(root: type[Table], path: Path) -> tuple[type[Table] | None, str]:
    """The kind of table at a path, and "list" or "dict" where the path ends at many of them."""
    found: type[Table] | None = root
    inside = ""
    for part in path:
        if found is None:
            return None, ""
        if inside:
            inside = ""
            continue
        info = found.keys().get(part) if isinstance(part, str) else None
        found, inside = kind_of(info.annotation) if info is not None else (None, "")
    return found, inside


def kind_of(annotation: Any) -> tuple[type[Table] | None, str]:
    """The table in a field's annotation, and whether it comes in a "list" or a "dict"."""
    if isinstance(annotation, type) and issubclass(annotation, Table):
        return annotation, ""
    origin = typing.get_origin(annotation)
    for argument in typing.get_args(annotation):
        table, _ = kind_of(argument)
        if table is not None:
            return table, origin.__name__ if origin in (list, dict) else _inner(argument)
    return None, ""


def _inner(annotation: Any) -> str:
    return kind_of(annotation)[1]
