"""The shot file: its one schema, reading, keyed values, frames and variants; yields the plain values of `model`.

`schema` says what may be written; `load_shot` reads a file against it and gives a `Shot`, whose `at(frame)` is a
`model.FrameShot`. The JSON Schema for editors and the reference page come from the same schema. Importing this package
is cheap: pydantic is imported when a shot is read, and the parser that finds line numbers when there is an error.
"""

from __future__ import annotations

from collections.abc import Sequence
from os import PathLike
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from renderer.shot.load import Shot

__all__ = ["json_schema", "load_shot", "reference_page", "starter_text"]


def load_shot(
    path: str | PathLike[str],
    variant: str | None = None,
    overrides: Sequence[str] = (),
    roots: Sequence[str | PathLike[str]] = (),
) -> Shot:
    """The shot in the file at `path`; see `renderer.shot.load.load_shot`."""
    from renderer.shot import load

    return load.load_shot(path, variant, overrides, roots)


def json_schema() -> dict[str, Any]:
    """The JSON Schema of a shot file, for completion and checking in editors."""
    from renderer.shot import schema_export

    return schema_export.json_schema()


def reference_page() -> str:
    """The reference of every key of a shot file, as Markdown."""
    from renderer.shot import reference

    return reference.reference_page()


def starter_text(name: str) -> str:
    """A commented shot file titled `name` that renders as it stands."""
    from renderer.shot import starter

    return starter.starter_text(name)
