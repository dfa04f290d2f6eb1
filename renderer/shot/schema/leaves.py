"""Leaves of the schema: the kinds of value that a key can have, other than numbers and tables.

A leaf is written into a pydantic field's annotation. From it come the check, the JSON Schema, and the words by which
messages and the reference page say what is expected.
"""

from __future__ import annotations

import datetime
import re
from dataclasses import dataclass
from typing import Any

from pydantic_core import PydanticCustomError, core_schema

from renderer.shot.schema.flaws import Flaw, Flawed, listed, nearest, refusal

LONGEST_TEXT = 1024


class FileName(str):
    """A path as the shot file writes it, relative to the shot file; may hold a run of ``#`` for the frame number."""

    __slots__ = ()


class MaterialName(str):
    """The name of a material, of the shot's own or of the library."""

    __slots__ = ()


@dataclass(frozen=True)
class Leaf:
    """One kind of value. `unit` is shown in the reference; `range` and `keyed` likewise."""

    @property
    def unit(self) -> str:
        """The unit, or an empty string."""
        return ""

    @property
    def keyed(self) -> bool:
        """Whether the value may be keyed by frame."""
        return False

    def expects(self) -> str:
        """What is expected, in words that follow "expected: "."""
        raise NotImplementedError

    def read(self, value: Any) -> Any:
        """`value` checked and in its final form; raises `Flawed`."""
        raise NotImplementedError

    def json(self) -> dict[str, Any]:
        """The leaf's JSON Schema."""
        raise NotImplementedError

    def _validate(self, value: Any) -> Any:
        try:
            return self.read(value)
        except Flawed as error:
            raise PydanticCustomError("flaws", "see the flaws", {"flaws": error.flaws}) from None

    def __get_pydantic_core_schema__(self, source: Any, handler: Any) -> core_schema.CoreSchema:
        return core_schema.no_info_plain_validator_function(self._validate)

    def __get_pydantic_json_schema__(self, schema: Any, handler: Any) -> dict[str, Any]:
        return self.json()


def clean_text(value: Any, expected: str, longest: int = LONGEST_TEXT) -> str:
    """`value` if it is text on one line of bearable length; raises `Flawed`."""
    if not isinstance(value, str):
        raise Flawed(refusal(value, expected))
    if not value.strip():
        raise Flawed(refusal(value, expected))
    if len(value) > longest:
        raise Flawed(Flaw((), f"`{{key}}` is {len(value)} characters long", f"at most {longest} characters"))
    if not value.isprintable():
        raise Flawed(Flaw((), "`{key}` holds a character that cannot be printed", expected))
    return value


@dataclass(frozen=True)
class Text(Leaf):
    """Free text on one line."""

    noun: str = "text in quotes"

    def expects(self) -> str:
        return self.noun

    def read(self, value: Any) -> str:
        return clean_text(value, self.expects())

    def json(self) -> dict[str, Any]:
        return {"type": "string", "minLength": 1, "maxLength": LONGEST_TEXT}


@dataclass(frozen=True)
class File(Text):
    """A path relative to the shot file, with forward slashes."""

    noun: str = "a path in quotes, relative to the shot file"

    def read(self, value: Any) -> FileName:
        text = clean_text(value, self.expects())
        if "\\" in text:
            raise Flawed(Flaw((), "`{key}` has a backslash in its path", "forward slashes, which work everywhere"))
        return FileName(text)


@dataclass(frozen=True)
class Substance(Text):
    """The name of a clear material."""

    noun: str = 'the name of a material, from [materials] or from "antisolar materials"'

    def read(self, value: Any) -> MaterialName:
        return MaterialName(clean_text(value, self.expects()))


@dataclass(frozen=True)
class Choice(Leaf):
    """One of a few words."""

    words: tuple[str, ...]

    def expects(self) -> str:
        return listed([f'"{word}"' for word in self.words])

    def read(self, value: Any) -> str:
        if isinstance(value, str) and value in self.words:
            return value
        near = nearest(value, self.words) if isinstance(value, str) else ""
        raise Flawed(refusal(value, self.expects(), nearest=near))

    def json(self) -> dict[str, Any]:
        return {"type": "string", "enum": list(self.words)}


@dataclass(frozen=True)
class Switch(Leaf):
    """True or false."""

    def expects(self) -> str:
        return "true or false"

    def read(self, value: Any) -> bool:
        if isinstance(value, bool):
            return value
        raise Flawed(refusal(value, self.expects()))

    def json(self) -> dict[str, Any]:
        return {"type": "boolean"}


@dataclass(frozen=True)
class Names(Leaf):
    """A list of names."""

    longest: int = 1000

    def expects(self) -> str:
        return "a list of names in quotes"

    def read(self, value: Any) -> tuple[str, ...]:
        if not isinstance(value, list) or len(value) > self.longest:
            raise Flawed(refusal(value, self.expects()))
        flaws = [refusal(name, "text in quotes", (index,)) for index, name in enumerate(value) if not _is_name(name)]
        if flaws:
            raise Flawed(*flaws)
        return tuple(value)

    def json(self) -> dict[str, Any]:
        return {"type": "array", "items": {"type": "string", "minLength": 1}, "maxItems": self.longest}


def _is_name(value: Any) -> bool:
    return isinstance(value, str) and bool(value.strip()) and value.isprintable() and len(value) <= LONGEST_TEXT


@dataclass(frozen=True)
class Day(Leaf):
    """A calendar date."""

    def expects(self) -> str:
        return 'a date, as in "2027-03-01"'

    def read(self, value: Any) -> str:
        if isinstance(value, datetime.date) and not isinstance(value, datetime.datetime):
            return value.isoformat()
        if isinstance(value, str) and re.fullmatch(r"\d{4}-\d{2}-\d{2}", value, re.ASCII):
            try:
                return datetime.date.fromisoformat(value).isoformat()
            except ValueError:
                pass
        raise Flawed(refusal(value, self.expects()))

    def json(self) -> dict[str, Any]:
        return {"type": "string", "format": "date"}


@dataclass(frozen=True)
class FrameRange(Leaf):
    """Frames in the trade's syntax."""

    def expects(self) -> str:
        from renderer.shot.frame_range import EXPECTED

        return EXPECTED

    def read(self, value: Any) -> str:
        from renderer.shot.frame_range import check_range

        text = clean_text(value, self.expects(), longest=10_000)
        check_range(text)
        return text

    def json(self) -> dict[str, Any]:
        return {"type": "string", "minLength": 1}
