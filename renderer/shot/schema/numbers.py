"""Leaves of the schema that hold numbers: one, a vector or colour, a list; and keying by frame."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from typing import Any

from renderer.shot.keyed import Keys
from renderer.shot.schema.flaws import Flaw, Flawed, Path, below, clean, refusal
from renderer.shot.schema.leaves import Leaf

LARGEST = 1e12  # beyond any shot in any unit, and far from overflow
MOST_KEYS = 100_000
MOST_TOLD = 50  # wrong keys of one value that are told
EASE = "ease"
_FRAME = re.compile(r"-?\d{1,8}", re.ASCII)


def plain(value: float) -> str:
    """A limit as a person writes it."""
    return f"{value:,.0f}" if abs(value) >= 10_000 else f"{value:g}"


@dataclass(frozen=True)
class Bounds:
    """The range of a number: `low` and `high` are allowed themselves, `above` is not; `nonzero` refuses zero."""

    low: float | None = None
    high: float | None = None
    above: float | None = None
    nonzero: bool = False

    def hold(self, value: float) -> bool:
        """Whether `value` is allowed."""
        return (
            abs(value) <= LARGEST
            and (self.low is None or value >= self.low)
            and (self.high is None or value <= self.high)
            and (self.above is None or value > self.above)
            and not (self.nonzero and value == 0)
        )

    def text(self) -> str:
        """The range in words, empty where any finite number will do."""
        if self.above is not None:
            return f"above {plain(self.above)}" + (f", up to {plain(self.high)}" if self.high is not None else "")
        if self.low is not None and self.high is not None:
            return f"from {plain(self.low)} to {plain(self.high)}"
        if self.low is not None:
            return f"{plain(self.low)} or more"
        if self.high is not None:
            return f"up to {plain(self.high)}"
        return "other than 0" if self.nonzero else ""

    def json(self) -> dict[str, Any]:
        """The range as JSON Schema."""
        found = {"minimum": self.low, "maximum": self.high, "exclusiveMinimum": self.above}
        schema: dict[str, Any] = {key: value for key, value in found.items() if value is not None}
        return schema | ({"not": {"const": 0}} if self.nonzero else {})


ANY = Bounds()


def in_unit(unit: str) -> str:
    """A unit, to follow "a number" or the like; empty where there is none."""
    if not unit:
        return ""
    return f", {unit}" if unit.startswith("per ") else f", in {unit}"


def is_number(value: Any) -> bool:
    """Whether `value` is a finite number of TOML; true and false are none."""
    if isinstance(value, bool) or not isinstance(value, int | float):
        return False
    return isinstance(value, int) or math.isfinite(value)


@dataclass(frozen=True)
class NumberLeaf(Leaf):
    """What all leaves of numbers share: a unit, bounds of every number, and whether it may be keyed."""

    unit_text: str = ""
    bounds: Bounds = ANY
    may_be_keyed: bool = True

    @property
    def unit(self) -> str:
        return self.unit_text

    @property
    def keyed(self) -> bool:
        return self.may_be_keyed

    def tail(self) -> str:
        """Range and unit, to follow "a number" or the like."""
        found = self.bounds.text()
        return (f" {found}" if found else "") + in_unit(self.unit)

    def read(self, value: Any) -> Any:
        if self.keyed and isinstance(value, dict):
            return read_keys(value, self)
        return self.finish(self.still(value))

    def still(self, value: Any) -> tuple[float, ...]:
        """The numbers of a value that is not keyed; raises `Flawed`."""
        raise NotImplementedError

    def finish(self, numbers: tuple[float, ...]) -> Any:
        """The final form of such numbers."""
        return numbers

    def still_json(self) -> dict[str, Any]:
        """JSON Schema of a value that is not keyed."""
        raise NotImplementedError

    def json(self) -> dict[str, Any]:
        still = self.still_json()
        if not self.keyed:
            return still
        keys = {
            "type": "object",
            "description": "keyed by frame",
            "patternProperties": {"^-?[0-9]+$": still},
            "properties": {EASE: {"type": "boolean"}},
            "additionalProperties": False,
            "minProperties": 1,
        }
        return {"anyOf": [still, keys]}

    def one(self, value: Any, at: Path = ()) -> float:
        """One finite number inside the bounds; raises `Flawed`."""
        if is_number(value) and self.bounds.hold(value):
            return float(value) + 0.0  # no negative zero
        huge = is_number(value) and abs(value) > LARGEST
        raise Flawed(refusal(value, f"a number{self.tail()}{f', and at most {LARGEST:g}' if huge else ''}", at))


def read_keys(table: dict[str, Any], leaf: NumberLeaf) -> Keys:
    """A keyed value, ``{ 1001 = 12.0, 1048 = 14.5, ease = true }``; raises `Flawed` with all that is wrong."""
    flaws: list[Flaw] = []
    if len(table) > MOST_KEYS:
        raise Flawed(Flaw((), f"`{{key}}` has {len(table):,} keys", f"at most {MOST_KEYS:,} keys"))
    ease = table.get(EASE, False)
    if not isinstance(ease, bool):
        flaws.append(refusal(ease, "true or false", (EASE,)))
    keys: dict[int, tuple[float, ...]] = {}
    for name, value in table.items():
        if name == EASE:
            continue
        if len(flaws) >= MOST_TOLD:
            break
        frame = _frame(name, keys, flaws)
        try:
            keys[frame] = leaf.still(value)
        except Flawed as error:
            flaws += below((name,), error.flaws)
    if not keys and not flaws:
        flaws.append(
            Flaw((), "`{key}` has no keys", f"frames and values, as in {{ 1001 = ..., 1048 = ... }}: {leaf.expects()}")
        )
    if flaws:
        raise Flawed(*flaws)
    frames = tuple(sorted(keys))
    return Keys(frames, tuple(keys[frame] for frame in frames), ease)


def _frame(name: str, taken: dict[int, tuple[float, ...]], flaws: list[Flaw]) -> int:
    """The frame that a key stands at; 0 with a new flaw where it is none."""
    if not _FRAME.fullmatch(name):
        flaws.append(
            Flaw((name,), f'"{clean(name)}" is not a frame', f"whole frame numbers as keys, and {EASE} = true or false")
        )
        return 0
    frame = int(name)
    if frame in taken:
        flaws.append(Flaw((name,), f"frame {frame} is keyed twice", "one value a frame"))
    return frame


@dataclass(frozen=True)
class Number(NumberLeaf):
    """One number."""

    def expects(self) -> str:
        return f"a number{self.tail()}"

    def still(self, value: Any) -> tuple[float, ...]:
        return (self.one(value),)

    def finish(self, numbers: tuple[float, ...]) -> float:
        return numbers[0]

    def still_json(self) -> dict[str, Any]:
        return {"type": "number", **self.bounds.json()}


@dataclass(frozen=True)
class Vector(NumberLeaf):
    """`count` numbers; with `single`, one number stands for all of them."""

    count: int = 3
    single: bool = False

    def expects(self) -> str:
        return f"{self.count} numbers{self.tail()}" + (", or one number for all of them" if self.single else "")

    def still(self, value: Any) -> tuple[float, ...]:
        if self.single and is_number(value):
            return (self.one(value),) * self.count
        if not isinstance(value, list):
            raise Flawed(refusal(value, self.expects()))
        if len(value) != self.count:
            raise Flawed(Flaw((), f"`{{key}}` has {len(value)} entries", self.expects()))
        return numbers_in(value, self)

    def still_json(self) -> dict[str, Any]:
        item = {"type": "number", **self.bounds.json()}
        many = {"type": "array", "items": item, "minItems": self.count, "maxItems": self.count}
        return {"anyOf": [item, many]} if self.single else many


@dataclass(frozen=True)
class Numbers(NumberLeaf):
    """A list of `fewest` to `most` numbers, their count a multiple of `multiple`; never keyed."""

    may_be_keyed: bool = False
    fewest: int = 1
    most: int = 1000
    multiple: int = 1

    def expects(self) -> str:
        kind = "" if self.multiple == 1 else f", {self.multiple} at a time"
        return f"a list of {self.fewest} to {self.most} numbers{self.tail()}{kind}"

    def still(self, value: Any) -> tuple[float, ...]:
        if not isinstance(value, list):
            raise Flawed(refusal(value, self.expects()))
        if not self.fewest <= len(value) <= self.most or len(value) % self.multiple:
            raise Flawed(Flaw((), f"`{{key}}` has {len(value)} entries", self.expects()))
        return numbers_in(value, self)

    def still_json(self) -> dict[str, Any]:
        item = {"type": "number", **self.bounds.json()}
        return {"type": "array", "items": item, "minItems": self.fewest, "maxItems": self.most}


def numbers_in(values: list[Any], leaf: NumberLeaf) -> tuple[float, ...]:
    """Every entry as a number inside the leaf's bounds; raises `Flawed` with every entry that is none."""
    found: list[float] = []
    flaws: list[Flaw] = []
    for index, entry in enumerate(values):
        try:
            found.append(leaf.one(entry, (index,)))
        except Flawed as error:
            flaws += error.flaws
    if flaws:
        raise Flawed(*flaws)
    return tuple(found)
