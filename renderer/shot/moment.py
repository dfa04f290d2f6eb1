"""One frame of a shot while it is being resolved: its times, its units, and what has been found wrong."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path

import numpy as np

from renderer.shot.files import Files
from renderer.shot.keyed import Scalar, Values, number_at, values_at
from renderer.shot.model import Axes, Floats, Vector
from renderer.shot.schema.flaws import Flaw
from renderer.shot.schema.flaws import Path as KeyPath
from renderer.shot.schema.shot_file import ShotFile
from renderer.shot.schema.units import AXES, METRES

N_STEPS = 5  # of what moves while the shutter is open


@dataclass
class Moment:
    """`times` are where the shutter is sampled, ends included [frames]; `flaws` grows as files are found missing."""

    frame: int
    times: tuple[float, ...]
    shot: ShotFile
    files: Files
    flaws: list[Flaw] = field(default_factory=list)

    @property
    def metres(self) -> float:
        """Metres in the shot's unit of length."""
        return METRES[self.shot.units.length]

    def number(self, value: Scalar) -> float:
        """A number at the frame."""
        return number_at(value, self.frame)

    def maybe(self, value: Scalar | None) -> float | None:
        """The same of a number that may not be stated."""
        return None if value is None else self.number(value)

    def length(self, value: Scalar) -> float:
        """A length at the frame [m]."""
        return self.number(value) * self.metres

    def values(self, value: Values) -> tuple[float, ...]:
        """A vector or colour at the frame."""
        return values_at(value, self.frame)

    def vector(self, value: Values) -> Vector:
        """Three numbers at the frame."""
        x, y, z = self.values(value)
        return x, y, z

    def path(self, name: str, at: KeyPath) -> Path:
        """The file of that name at the frame; where it is missing, a flaw is noted and the path is still given."""
        found = self.files.find(name, self.frame)
        if isinstance(found, Path):
            return found
        self.flaws.append(Flaw(at, found.what, found.expected, found.nearest))
        return self.files.folder / name


def shutter_times(shot: ShotFile, frame: int) -> tuple[float, ...]:
    """When the shutter is sampled [frames]; one time where it opens for an instant."""
    shutter = number_at(shot.camera.shutter, frame)
    opening = shot.camera.shutter_offset
    start = -0.5 * shutter if opening is None else number_at(opening, frame)
    if shutter == 0.0:
        return (frame + start / 360.0,)
    return tuple(frame + (start + shutter * step / (N_STEPS - 1)) / 360.0 for step in range(N_STEPS))


def axes_of(shot: ShotFile) -> Axes:
    """Up, north and east = north x up."""
    up, north = AXES[shot.units.up], AXES[shot.units.north_axis]
    east = (
        north[1] * up[2] - north[2] * up[1] + 0.0,
        north[2] * up[0] - north[0] * up[2] + 0.0,
        north[0] * up[1] - north[1] * up[0] + 0.0,
    )
    return Axes(up, north, east)


def stack(matrices: list[tuple[float, ...]]) -> Floats:
    """Matrices as (n_steps, 3, 4), read-only; one step where all are the same."""
    steps = matrices[:1] if all(matrix == matrices[0] for matrix in matrices) else matrices
    array = np.array(steps, dtype=np.float64).reshape(-1, 3, 4)
    array.flags.writeable = False
    return array
