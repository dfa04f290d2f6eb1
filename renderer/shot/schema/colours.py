"""Rules for colours."""

from __future__ import annotations

from collections.abc import Iterator

from renderer.shot.keyed import Values
from renderer.shot.schema.flaws import Flaw, Path
from renderer.shot.schema.matrices import each


def black_flaws(at: Path, colour: Values) -> Iterator[Flaw]:
    """A light has no colour when it is black."""
    for path, numbers in each(at, colour):
        if not any(numbers):
            yield Flaw(path, "`{key}` is black, which is no colour of a light", "at least one number above 0")
