"""Overrides: dotted keys with values, from a variant or the command line, laid over the tables of a shot file.

A dotted key reads as in TOML: parts apart by dots, a part in quotes where it holds anything but letters, digits, _ and
-. A list of tables is entered by name (``objects.tank.material``) or by number from 0 (``objects[0].material``); a list
of numbers by number (``camera.position[1]``). A value that excludes another (``mesh`` and ``shape``) takes its place.
"""

from __future__ import annotations

import copy
import re
import tomllib
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from typing import Any

from renderer.base.errors import Fault, InputError
from renderer.shot.schema.flaws import Flaw, Flawed, Path, clean, nearest, shown
from renderer.shot.schema.shot_file import ShotFile
from renderer.shot.schema.tree import is_table, table_at

LONGEST_KEY = 1000
DEEPEST = 24
FIXED = ("format", "variants")  # what an override may not touch

_PART = re.compile(
    r'\s*(?:(?P<bare>[A-Za-z0-9_-]+)|(?P<quoted>"(?:[^"\\]|\\.)*"|\'[^\']*\')|\[\s*(?P<index>\d{1,7})\s*\])\s*'
)
_WORD = re.compile(r"[A-Za-z][A-Za-z0-9 _./#-]*")


@dataclass(frozen=True)
class Override:
    """`path` as written, `value` as TOML gives it; `source` says where it comes from, `at` its own key in the file."""

    path: Path
    value: Any
    source: str
    at: Path = ()


def parse_key(text: str) -> Path:
    """The parts of a dotted key; raises `Flawed`."""
    expected = "a dotted key, as in sun.elevation, objects.tank.material or objects[0].material"
    path: list[str | int] = []
    at = 0
    while at < len(text):
        match = _PART.match(text, at)
        if match is None or len(text) > LONGEST_KEY or len(path) >= DEEPEST:
            raise Flawed(Flaw((), f"{shown(text)} is no dotted key", expected))
        if match["index"] is not None:
            path.append(int(match["index"]))
        else:
            path.append(_unquoted(match["quoted"]) if match["quoted"] else match["bare"])
        at = match.end()
        if at < len(text) and text[at] == ".":
            at += 1
            if at == len(text) or text[at : at + 1] == "[":
                raise Flawed(Flaw((), f"{shown(text)} is no dotted key", expected))
        elif at < len(text) and text[at] != "[":
            raise Flawed(Flaw((), f"{shown(text)} is no dotted key", expected))
    if not path or isinstance(path[0], int):
        raise Flawed(Flaw((), f"{shown(text)} is no dotted key", expected))
    return tuple(path)


def _unquoted(text: str) -> str:
    try:
        return str(tomllib.loads(f"value = {text}")["value"])
    except tomllib.TOMLDecodeError:
        raise Flawed(Flaw((), f"{shown(text)} is no quoted key", "a key in quotes, as TOML has it")) from None


def parse_value(text: str) -> Any:
    """A value in TOML; a plain word is taken as text, since a shell takes its quotes away. Raises `Flawed`."""
    from renderer.shot.reader import check_depth

    try:
        check_depth(text, "")
        found = tomllib.loads(f"value = {text}")
        if set(found) == {"value"}:
            return found["value"]
    except (ValueError, RecursionError, InputError):
        pass
    word = text.strip()
    if _WORD.fullmatch(word) and word not in ("inf", "nan", "true", "false"):
        return word
    raise Flawed(
        Flaw((), f"{shown(text)} is not a value of TOML", 'a number, "text", true, false, [ list ] or { table }')
    )


def parse_overrides(texts: Iterable[str]) -> list[Override]:
    """Overrides of the command line, ``key=value`` each; raises `InputError` with all that are wrong."""
    found: list[Override] = []
    faults: list[Fault] = []
    for text in texts:
        where = f"--override {clean(text, 120)}"
        key, equals, value = _split(text)
        if not equals:
            faults.append(Fault(f"{shown(text)} has no equals sign", where, "--override key=value"))
            continue
        try:
            found.append(Override(parse_key(key.strip()), parse_value(value), where))
        except Flawed as error:
            faults += (Fault(flaw.what, where, flaw.expected) for flaw in error.flaws)
    if faults:
        raise InputError(*faults)
    return found


def _split(text: str) -> tuple[str, str, str]:
    """Key, equals sign and value, at the first equals sign outside quotes."""
    match = re.match(r"""(?:"(?:[^"\\]|\\.)*"|'[^']*'|[^"'=])*""", text)
    end = match.end() if match else 0
    return text[:end], text[end : end + 1], text[end + 1 :]


def variant_overrides(name: str, changes: Mapping[str, Any]) -> Iterator[Override | Flaw]:
    """The overrides of a variant, or what is wrong with a key."""
    for key, value in flattened(changes):
        at: Path = ("variants", name, *key)
        try:
            parts = tuple(part for piece in key for part in parse_key(piece))
        except Flawed as error:
            yield from (Flaw(at, flaw.what, flaw.expected) for flaw in error.flaws)
            continue
        yield Override(parts, value, f"variant {name}", at)


def flattened(changes: Mapping[str, Any], at: tuple[str, ...] = ()) -> Iterator[tuple[tuple[str, ...], Any]]:
    """A variant's keys and values. Keys in quotes hold their dots; without quotes TOML makes tables of them,
    ``sun.azimuth = 25``, which are followed down as far as the schema has tables, and so mean the same."""
    for key, value in changes.items():
        path = (*at, key)
        whole = "." in key or "[" in key or not isinstance(value, dict) or not value
        if whole or path[0] in FIXED or not is_table(ShotFile, path):
            yield path, value
        else:
            yield from flattened(value, path)


def apply(
    tables: dict[str, Any], overrides: Iterable[Override]
) -> tuple[dict[str, Any], list[tuple[Path, Override]], list[Flaw]]:
    """The tables with the overrides laid over, where each landed, and what could not be laid.

    Only what an override passes through is copied; the rest is shared with `tables`, and is known by its identity to
    have been read already.
    """
    changed = dict(tables)
    landed: list[tuple[Path, Override]] = []
    flaws: list[Flaw] = []
    for override in overrides:
        try:
            landed.append((_lay(changed, override), override))
        except Flawed as error:
            flaws += error.flaws
            landed += ((flaw.at, override) for flaw in error.flaws)
    return changed, landed, flaws


def _lay(tables: dict[str, Any], override: Override) -> Path:
    """Set one value; the path that it landed at."""
    if override.path[0] in FIXED:
        raise Flawed(Flaw((override.path[0],), f"`{override.path[0]}` cannot be overridden", "another key"))
    place: Any = tables
    path: Path = ()
    for part in override.path[:-1]:
        place, path = _enter(place, path, part)
    last = override.path[-1]
    if isinstance(place, list):
        index = _row(place, path, last)
        place[index] = override.value
        return (*path, index)
    if not isinstance(place, dict) or isinstance(last, int):
        raise Flawed(Flaw((*path, last), "`{key}` is no place in a list or a table", "a key of the shot file"))
    table = table_at(ShotFile, path)
    for alternatives in table.ONE_OF if table is not None else ():
        for other in alternatives.excluded_by(last):
            place.pop(other, None)
    place[last] = override.value
    return (*path, last)


def _enter(place: Any, path: Path, part: str | int) -> tuple[Any, Path]:
    """One step down; a table that is not there yet is made, and one that is written in short is written out."""
    if isinstance(place, list):
        index = _row(place, path, part)
        place[index] = copy.copy(place[index])
        return place[index], (*path, index)
    if not isinstance(place, dict) or isinstance(part, int):
        raise Flawed(Flaw((*path, part), "`{key}` is no place in a list or a table", "a key of the shot file"))
    if part not in place:
        table = table_at(ShotFile, path)
        if table is not None and table.is_list(part):
            place[part] = []
        else:
            place[part] = {}
    below = (*path, part)
    table = table_at(ShotFile, below)
    if table is not None and not isinstance(place[part], dict):
        place[part] = table.shorthand(place[part])
    place[part] = copy.copy(place[part])
    return place[part], below


def _row(rows: list[Any], path: Path, part: str | int) -> int:
    """The number of a row, given by number or by name."""
    if isinstance(part, int):
        if part < len(rows):
            return part
        what = f"`{path[-1]}` has no [{part}]" if rows else f"`{path[-1]}` is empty, so there is no [{part}]"
        raise Flawed(Flaw(path, what, f"from [0] to [{len(rows) - 1}]" if rows else ""))
    names = [row.get("name") for row in rows if isinstance(row, dict)]
    known = [name for name in names if isinstance(name, str)]
    for index, row in enumerate(rows):
        if isinstance(row, dict) and row.get("name") == part:
            return index
    kind = str(path[-1]) if path else "the shot"
    expected = (
        f"one of {', '.join(clean(name) for name in known[:8])}, or a number as in {kind}[0]"
        if known
        else f"a number, as in {kind}[0]"
    )
    raise Flawed(Flaw((*path, part), f'`{kind}` has nothing named "{clean(part)}"', expected, nearest(part, known)))
