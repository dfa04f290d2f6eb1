"""Leaves of the schema that hold whole numbers: pixels, cells, counts."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from renderer.shot.schema.flaws import Flaw, Flawed, below, refusal
from renderer.shot.schema.leaves import Leaf
from renderer.shot.schema.numbers import in_unit, plain


@dataclass(frozen=True)
class Whole(Leaf):
    """A whole number from `low` to `high`; never keyed."""

    low: int
    high: int
    unit_text: str = ""

    @property
    def unit(self) -> str:
        return self.unit_text

    def expects(self) -> str:
        return f"a whole number from {plain(self.low)} to {plain(self.high)}{in_unit(self.unit)}"

    def read(self, value: Any) -> int:
        if isinstance(value, int) and not isinstance(value, bool) and self.low <= value <= self.high:
            return value
        raise Flawed(refusal(value, self.expects()))

    def json(self) -> dict[str, Any]:
        return {"type": "integer", "minimum": self.low, "maximum": self.high}


@dataclass(frozen=True)
class Wholes(Leaf):
    """`count` whole numbers; with `single`, one stands for all of them."""

    count: int
    low: int
    high: int
    unit_text: str = ""
    single: bool = False

    @property
    def unit(self) -> str:
        return self.unit_text

    def expects(self) -> str:
        single = ", or one for all of them" if self.single else ""
        return f"{self.count} whole numbers from {plain(self.low)} to {plain(self.high)}{in_unit(self.unit)}{single}"

    def read(self, value: Any) -> tuple[int, ...]:
        whole = Whole(self.low, self.high)
        if self.single and isinstance(value, int) and not isinstance(value, bool):
            value = [value] * self.count
        if not isinstance(value, list):
            raise Flawed(refusal(value, self.expects()))
        if len(value) != self.count:
            raise Flawed(Flaw((), f"`{{key}}` has {len(value)} entries", self.expects()))
        flaws: list[Flaw] = []
        for index, entry in enumerate(value):
            try:
                whole.read(entry)
            except Flawed as error:
                flaws += below((index,), error.flaws)
        if flaws:
            raise Flawed(*flaws)
        return tuple(value)

    def json(self) -> dict[str, Any]:
        item = {"type": "integer", "minimum": self.low, "maximum": self.high}
        many = {"type": "array", "items": item, "minItems": self.count, "maxItems": self.count}
        return {"anyOf": [item, many]} if self.single else many
