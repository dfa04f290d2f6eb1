"""What is wrong with a value, before anyone knows the file and line that it stands on."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

from renderer.base.errors import nearest_name

Path = tuple[str | int, ...]

KEY = "{key}"  # stands in a flaw's sentence for the key that the flaw is at

LONGEST_NAME = 100  # of names that a nearest one is looked for
SHOWN = 40  # characters of a user's value that are repeated back


@dataclass(frozen=True)
class Flaw:
    """`at` is the path to the value from wherever the flaw was found; `what` may hold ``{key}``."""

    at: Path
    what: str
    expected: str = ""
    nearest: str = ""


class Flawed(Exception):
    """Raised by a leaf that refuses its value, with everything that is wrong with it."""

    def __init__(self, *flaws: Flaw) -> None:
        super().__init__(flaws)
        self.flaws = flaws


def clean(text: str, longest: int = 60) -> str:
    """A user's text as it may stand in a message: short, and nothing in it that a terminal would act on."""
    return "".join(letter if letter.isprintable() else "?" for letter in text[:longest])


def nearest(name: str, known: Iterable[str]) -> str:
    """The known name most like `name`; a name of absurd length is not searched for."""
    return nearest_name(name, known) if len(name) <= LONGEST_NAME else ""


def below(prefix: Path, flaws: Iterable[Flaw]) -> list[Flaw]:
    """The same flaws, seen from further up."""
    return [replace(flaw, at=prefix + flaw.at) for flaw in flaws]


def shown(value: object) -> str:
    """A user's value as it may be repeated in a message: short, on one line, as TOML would write it."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, dict):
        return "a table"
    if isinstance(value, list):
        return "a list" if len(value) != 1 else "a list of one"
    if isinstance(value, int):
        return str(value) if abs(value) < 10**SHOWN else "so large a number"
    if isinstance(value, str):
        return f'"{clean(value, SHOWN)}{"..." if len(value) > SHOWN else ""}"'
    return str(value)[:SHOWN]


def refusal(value: object, expected: str, at: Path = (), nearest: str = "") -> Flaw:
    """The usual flaw: this key cannot have this value."""
    return Flaw(at, f"`{KEY}` cannot be {shown(value)}", expected, nearest)


def listed(names: Sequence[str], last: str = "or") -> str:
    """Names in a sentence: "a, b or c"."""
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} {last} {names[-1]}"
