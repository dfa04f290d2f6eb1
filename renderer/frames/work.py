"""Rendering rounds into exact sums: one after the other, each whole or not at all."""

from __future__ import annotations

import time
from collections.abc import Callable
from dataclasses import asdict, dataclass
from typing import Any

from renderer.base.errors import Fault, InputError
from renderer.frames.bands import Bands
from renderer.frames.engine import Engine
from renderer.frames.portion_files import Tally
from renderer.frames.round_ranges import Ranges, by_replicate, joined
from renderer.pictures.layers import Accumulated
from renderer.pictures.sums import Sums, SumsFull, add, clear

ShouldStop = Callable[[], bool]
OnRows = Callable[[int, int], None]  # round, rows done


class FrameFailed(Exception):
    """A frame cannot be finished, by a fault of ours; the message says what happened."""


@dataclass
class Work:
    """Finished rounds of a frame in memory. `whole` is False only while a round is being added."""

    sums: Sums
    quantum: float
    rounds: Ranges
    tally: Tally
    whole: bool = True

    def take(self, rounds: Ranges, sums: Sums, tally: Tally) -> None:
        """Add finished rounds. Raises `InputError` where sums are full."""
        self.whole = False
        try:
            add(self.sums, sums)
        except SumsFull:
            what = f"the sums of a pixel are full before round {rounds[0][0]:,}"
            raise InputError(Fault(what, "--rounds", f"at most {rounds[0][0]:,}")) from None
        self.rounds = joined((*self.rounds, *rounds))
        self.tally = added(self.tally, tally)
        self.whole = True

    def accumulated(self) -> Accumulated:
        """The sums as a picture is made from them."""
        return Accumulated(self.sums, self.quantum, by_replicate(self.rounds))


def added(a: Tally, b: Tally) -> Tally:
    """Two sets of counts, added name by name."""
    return {name: a.get(name, 0) + b.get(name, 0) for name in sorted({*a, *b})}


@dataclass
class Rounds:
    """Renders rounds of one scene. `scratch` holds the round in hand, so that it can be dropped."""

    engine: Engine
    scene: Any
    seed: int
    quantum: float
    scratch: Sums
    bands: Bands

    def render(self, number: int, should_stop: ShouldStop, on_rows: OnRows) -> Tally | None:
        """One round into `scratch`; None, and nothing worth keeping there, when asked to stop before its end.

        Raises `FrameFailed` when a sample is not a finite number.
        """
        clear(self.scratch)
        rows = self.scratch.size[0]
        tally: Tally = {}
        row = 0
        while row < rows:
            if should_stop():
                return None
            stop = self.bands.next(row, rows)
            started = time.perf_counter()
            counts = self.engine.render_rows(self.scene, number, self.seed, row, stop, self.scratch, self.quantum)
            self.bands.took(stop - row, time.perf_counter() - started)
            tally = added(tally, {name: int(count) for name, count in asdict(counts).items()})
            row = stop
            on_rows(number, row)
        if tally["non_finite"]:
            n = tally["non_finite"]
            samples = "1 sample" if n == 1 else f"{n:,} samples"
            numbers = "is not a finite number" if n == 1 else "are not finite numbers"
            raise FrameFailed(f"{samples} of round {number} {numbers}")
        return tally
