"""[render]: how much work goes into the picture, and what it holds."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated

from renderer.shot.schema.flaws import Flaw
from renderer.shot.schema.leaves import Choice
from renderer.shot.schema.numbers import Bounds, Numbers
from renderer.shot.schema.table import Table, key
from renderer.shot.schema.whole_numbers import Whole


class Render(Table):
    """Settings of the picture; the command line's own options win over them."""

    rounds: Annotated[int, Whole(1, 1_000_000)] = key(64, "Rounds: whole-frame sets of samples", "64")
    splits: Annotated[int, Whole(0, 8)] = key(
        2, "Interfaces at which both what is reflected and what passes is followed", "2"
    )
    max_interfaces: Annotated[int, Whole(1, 65_536)] = key(2048, "Interfaces after which a path ends", "2048")
    seed: Annotated[int, Whole(0, 2**31 - 1)] = key(0, "Another number gives another pattern of noise", "0")
    wavelengths: Annotated[tuple[float, ...], Numbers("nm", Bounds(380, 780), most=64)] = key(
        (), "Render these wavelengths alone", "[589.3]", "all of 380-780 nm"
    )
    space: Annotated[str, Choice(("acescg", "rec709", "rec2020", "xyz"))] = key(
        "acescg", "Colour space of the finished picture, scene-linear", '"rec709"'
    )

    def agree(self) -> Iterator[Flaw]:
        for index, wavelength in enumerate(self.wavelengths):
            if wavelength in self.wavelengths[:index]:
                yield Flaw(("wavelengths", index), f"`{{key}}` repeats {wavelength:g} nm", "each wavelength once")
