"""What a frame's picture depends on, in one number: resolved values that change pixels, and the content of its files.

Values are taken as the shot file states them, evaluated at the frame and over its shutter, before any sine or root is
taken of them, so that the fingerprint is the same on every machine. Names, titles, checks, bows, the number of rounds
and the seed do not count; neither does where files lie or what they are called.
"""

from __future__ import annotations

import hashlib
from pathlib import Path
from typing import Any

from renderer.shot.camera_import import split_node
from renderer.shot.keyed import Keys
from renderer.shot.moment import Moment
from renderer.shot.schema.leaves import FileName, MaterialName
from renderer.shot.schema.table import Table

SALT = "antisolar shot 1"
PARTS = ("units", "camera", "sun", "sky", "objects", "lights", "render")
UNCOUNTED = ("name", "rounds", "seed")  # keys, wherever they stand; a portion states its rounds and seed itself
LIKE = "like"  # names a material of the library even where the shot has one of that name


def library_text(name: str) -> str:
    """A material of the library."""
    return f"library {name!r}"


def part_text(value: Any, moment: Moment) -> str:
    """A part of the shot at a frame, written one way only."""
    if isinstance(value, Table):
        rows = (
            f"{name}:{library_text(entry) if name == LIKE else part_text(entry, moment)}"
            for name, entry in sorted(value, key=lambda pair: pair[0])
            if entry is not None and name not in UNCOUNTED
        )
        return "{" + ",".join(rows) + "}"
    if isinstance(value, Keys):
        return _keys_text(value, moment)
    if isinstance(value, FileName):
        return _file_text(value, moment)
    if isinstance(value, MaterialName):
        own = moment.shot.materials.get(value)
        return part_text(own, moment) if own is not None else library_text(value)
    if isinstance(value, list | tuple):
        return "[" + ",".join(part_text(entry, moment) for entry in value) + "]"
    return repr(value)


def _keys_text(keys: Keys, moment: Moment) -> str:
    """A keyed value: what it is at the frame, and over the shutter where it moves."""
    times = (moment.frame, *moment.times)
    found = [keys.at(time) for time in times]
    still = all(one == found[0] for one in found)
    rows = [repr(one[0]) if len(one) == 1 else part_text(one, moment) for one in (found[:1] if still else found)]
    return rows[0] if still else "moving(" + ",".join(rows) + ")"


def _file_text(name: FileName, moment: Moment) -> str:
    """A file by its content; an empty text where it is missing, which is an error told elsewhere."""
    plain, node = split_node(name)
    found = moment.files.find(plain, moment.frame)
    content = moment.files.content(found) if isinstance(found, Path) else ""
    return f"file {content} {node!r}"


def digest(*texts: str) -> str:
    """SHA-256 of texts, in hexadecimal."""
    return hashlib.sha256("\n".join((SALT, *texts)).encode("utf-8")).hexdigest()
