"""[units] and [frames]: what the numbers of the shot are measured in."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated

from renderer.shot.schema.flaws import Flaw
from renderer.shot.schema.leaves import Choice, FrameRange
from renderer.shot.schema.numbers import Bounds, Number
from renderer.shot.schema.table import Table, key

LENGTH = "the shot's unit of length"

METRES = {"m": 1.0, "cm": 0.01, "mm": 0.001, "ft": 0.3048, "in": 0.0254}  # the foot of 1959, exact
AXES = {
    "+x": (1.0, 0.0, 0.0),
    "-x": (-1.0, 0.0, 0.0),
    "+y": (0.0, 1.0, 0.0),
    "-y": (0.0, -1.0, 0.0),
    "+z": (0.0, 0.0, 1.0),
    "-z": (0.0, 0.0, -1.0),
}
NORTHS = {"+y": "-z", "+z": "+y"}  # by the axis that is up


class Units(Table):
    """The unit of every length in the shot, and which way is up and north."""

    length: Annotated[str, Choice(tuple(METRES))] = key(
        "m", "Unit of every position and size in the shot, and of each mesh that has no unit of its own", '"m"'
    )
    up: Annotated[str, Choice(tuple(NORTHS))] = key("+y", "The axis that points straight up", '"+y"')
    north: Annotated[str | None, Choice(tuple(AXES))] = key(
        None,
        "The axis that points north; level, so never along `up`",
        '"-z"',
        '"-z" where up is "+y", "+y" where it is "+z"',
    )

    def agree(self) -> Iterator[Flaw]:
        if self.north is not None and self.north[1] == self.up[1]:
            yield Flaw(
                ("north",), f'`{{key}}` cannot be "{self.north}" where up is "{self.up}"', "an axis that is level"
            )

    @property
    def north_axis(self) -> str:
        """North, stated or by the axis that is up."""
        return self.north or NORTHS[self.up]


class Frames(Table):
    """Which frames the shot has, and how fast they run."""

    range: Annotated[str, FrameRange()] = key("1001", "The frames of the shot", '"1001-1048"')
    fps: Annotated[float, Number("frames a second", Bounds(above=0, high=10_000), may_be_keyed=False)] = key(
        24.0, "Frames a second; with the shutter's angle it gives the exposure time", "24.0"
    )
