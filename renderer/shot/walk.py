"""The leaves of a table that has been read, each with its dotted path: for what must be asked of every one."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from renderer.shot.keyed import Keys
from renderer.shot.schema.flaws import Path
from renderer.shot.schema.leaves import FileName
from renderer.shot.schema.table import Table


def leaves(value: Any, at: Path = ()) -> Iterator[tuple[Path, Any]]:
    """Every value that is no table and no list of tables, by its path."""
    if isinstance(value, Table):
        for name, info in type(value).model_fields.items():
            yield from leaves(getattr(value, name), (*at, info.alias or name))
    elif isinstance(value, list):
        for index, item in enumerate(value):
            yield from leaves(item, (*at, index))
    elif isinstance(value, dict):
        for name, item in value.items():
            yield from leaves(item, (*at, name))
    else:
        yield at, value


def changes_by_frame(value: Any) -> bool:
    """Whether anything below a table is keyed, or is a file that comes by frame."""
    return any(isinstance(leaf, Keys) or (isinstance(leaf, FileName) and "#" in leaf) for _, leaf in leaves(value))
