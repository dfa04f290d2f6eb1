"""The leaf of the schema that holds a table by wavelength."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from renderer.shot.schema.flaws import Flaw, Flawed, refusal
from renderer.shot.schema.leaves import Leaf
from renderer.shot.schema.numbers import ANY, Bounds, NumberLeaf

LOWEST_NM, HIGHEST_NM = 200.0, 3000.0  # of a table that the shot gives; what is used lies in 380-780 nm


@dataclass(frozen=True)
class Pairs(Leaf):
    """A table by wavelength, ``[[nm, value], ...]``, never keyed; wavelengths rise, or with `any_order` are made to."""

    of: str
    bounds: Bounds = ANY
    unit_text: str = ""
    fewest: int = 1
    most: int = 10_000
    lowest_nm: float = LOWEST_NM
    highest_nm: float = HIGHEST_NM
    any_order: bool = False

    @property
    def unit(self) -> str:
        return f"nm, {self.unit_text}" if self.unit_text else "nm"

    def expects(self) -> str:
        tail = NumberLeaf(self.unit_text, self.bounds).tail()
        rising = f"wavelengths {'' if self.any_order else 'rising '}from {self.lowest_nm:g} to {self.highest_nm:g} nm"
        return f"pairs [[nm, {self.of}], ...], {rising}, {self.of}{tail}"

    def read(self, value: Any) -> tuple[tuple[float, float], ...]:
        if not isinstance(value, list):
            raise Flawed(refusal(value, self.expects()))
        if not self.fewest <= len(value) <= self.most:
            raise Flawed(
                Flaw((), f"`{{key}}` has {len(value)} entries", f"{self.fewest} to {self.most} {self.expects()}")
            )
        flaws: list[Flaw] = []
        pairs = [self._pair(entry, index, flaws) for index, entry in enumerate(value)]
        flaws = flaws or self._order_flaws(pairs)
        if flaws:
            raise Flawed(*flaws)
        return tuple(sorted(pairs))

    def _order_flaws(self, pairs: list[tuple[float, float]]) -> list[Flaw]:
        """Wavelengths that repeat, or that fall where they must rise."""
        found = []
        for i, (wavelength, _) in enumerate(pairs):
            if self.any_order and any(wavelength == other for other, _ in pairs[:i]):
                found.append(Flaw((i,), f"`{{key}}` is at {wavelength:g} nm again", "each wavelength once"))
            if not self.any_order and i > 0 and wavelength <= pairs[i - 1][0]:
                what = f"`{{key}}` is at {wavelength:g} nm, after {pairs[i - 1][0]:g} nm"
                found.append(Flaw((i,), what, "wavelengths that rise"))
        return found

    def _pair(self, entry: Any, index: int, flaws: list[Flaw]) -> tuple[float, float]:
        """One pair; (0, 0) with new flaws where it is none."""
        if not isinstance(entry, list) or len(entry) != 2:
            flaws.append(refusal(entry, f"a pair [nm, {self.of}]", (index,)))
            return 0.0, 0.0
        try:
            wavelength = NumberLeaf("nm", Bounds(self.lowest_nm, self.highest_nm)).one(entry[0], (index, 0))
            return wavelength, NumberLeaf(self.unit_text, self.bounds).one(entry[1], (index, 1))
        except Flawed as error:
            flaws += error.flaws
            return 0.0, 0.0

    def json(self) -> dict[str, Any]:
        wavelength = {"type": "number", "minimum": self.lowest_nm, "maximum": self.highest_nm}
        pair = {
            "type": "array",
            "prefixItems": [wavelength, {"type": "number", **self.bounds.json()}],
            "minItems": 2,
            "maxItems": 2,
        }
        return {"type": "array", "items": pair, "minItems": self.fewest, "maxItems": self.most}
