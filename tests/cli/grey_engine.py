"""A stand-in for transport, so that commands are tested in moments: round r gives every pixel a grey of 1 + r mod 3."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from renderer.frames.engine import Engine


@dataclass(frozen=True)
class Counts:
    """What rendering some rows counts."""

    non_finite: int = 0
    left_out: int = 0


@dataclass(frozen=True)
class Scene:
    """A scene of nothing."""

    notes: tuple[str, ...] = ("the sky is plain",)
    reference_radiance: float = 100.0
    object_names: tuple[str, ...] = ("ground",)
    material_names: tuple[str, ...] = ("air",)


class GreyEngine:
    """`during` is called for each band of rows, with the round's number."""

    def __init__(self) -> None:
        self.during: Any = lambda number: None

    def rows(self, scene: Scene, number: int, seed: int, start: int, stop: int, sums: Any, quantum: float) -> Counts:
        self.during(number)
        grey = 1.0 + number % 3
        sums.xyz[start:stop] += np.rint(np.array([0.9505, 1.0, 1.089]) * grey / quantum).astype(np.int64)
        sums.replicate_y[number & 7, start:stop] += np.int64(round(grey / quantum))
        return Counts()

    def engine(self) -> Engine:
        return Engine(("all",), lambda shot: Scene(), self.rows, lambda *given: {}, lambda threads: 1, lambda: True)
