"""The whole shot file."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Annotated, Any, ClassVar

from pydantic import Field

from renderer.shot.keyed import Keys
from renderer.shot.schema.camera import Camera
from renderer.shot.schema.checks import Bow, Checks
from renderer.shot.schema.flaws import Flaw, Flawed, refusal
from renderer.shot.schema.leaves import Leaf, Text
from renderer.shot.schema.materials import Material
from renderer.shot.schema.matrices import each
from renderer.shot.schema.names import repeated_names, unknown_materials
from renderer.shot.schema.objects import Light, Object
from renderer.shot.schema.render import Render
from renderer.shot.schema.sun_and_sky import LOW_SUN_EXPECTED, LOWEST_SUN_DEG, SKIES_BY_SUN, Sky, Sun
from renderer.shot.schema.table import Table, key
from renderer.shot.schema.units import Frames, Units

MOST_VARIANTS = 100  # each is checked with the whole shot
MOST_OBJECTS = 65_535  # an object's number has 16 bits, and 0 stands for none


@dataclass(frozen=True)
class FormatNumber(Leaf):
    """The number of the shot file's format."""

    def expects(self) -> str:
        return "1, the format of shot files that this version reads"

    def read(self, value: Any) -> int:
        if isinstance(value, int) and not isinstance(value, bool) and value == 1:
            return 1
        raise Flawed(refusal(value, self.expects()))

    def json(self) -> dict[str, Any]:
        return {"const": 1}


@dataclass(frozen=True)
class Changes(Leaf):
    """The dotted overrides of a variant; what they change is checked with the shot as a whole."""

    most: int = 1000

    def expects(self) -> str:
        return 'a table of dotted keys in quotes and values, as in "sun.azimuth" = 25.0'

    def read(self, value: Any) -> dict[str, Any]:
        if not isinstance(value, dict) or len(value) > self.most:
            raise Flawed(refusal(value, self.expects()))
        return dict(value)

    def json(self) -> dict[str, Any]:
        return {"type": "object", "maxProperties": self.most}


class ShotFile(Table):
    """A shot file, NAME.shot.toml."""

    LATER: ClassVar = ("droplets", "volumes", "beams", "wedge")

    format: Annotated[int, FormatNumber()] = key(..., "Always 1", "1")
    title: Annotated[str, Text()] = key("", "What the shot is called", '"Terrace hose, late sun"', "the file's name")
    units: Units = key(Units(), "Units and axes", '{ length = "m" }')
    frames: Frames = key(Frames(), "Frames", '{ range = "1001-1048" }')
    camera: Camera = key(..., "The camera", "{ position = [0, 1.7, 0], target = [0, 1.2, -10], focal_length = 28 }")
    sun: Sun | None = key(None, "The sun", "{ elevation = 24.0, azimuth = 205.0 }", "no sun")
    sky: Sky = key(Sky(kind="none"), "The sky", '{ kind = "clear" }', "no sky: black")
    materials: Annotated[dict[str, Material], Field(max_length=10_000)] = key(
        {},
        "Clear substances of the shot's own, by name",
        "{ bottle = { refractive_index = { abbe = [1.52, 58.0] } } }",
        "none",
    )
    objects: Annotated[list[Object], Field(max_length=MOST_OBJECTS)] = key(
        [], "What stands in the shot", '[{ name = "ball", shape = { sphere = 0.1 }, material = "water" }]', "none"
    )
    lights: Annotated[list[Light], Field(max_length=MOST_OBJECTS)] = key(
        [], "Area lights", '[{ name = "lamp", shape = { disc = 0.1 }, luminance = 5000.0 }]', "none"
    )
    render: Render = key(Render(), "Settings of the picture", "{ rounds = 64 }")
    bows_to_check: Annotated[list[Bow], Field(max_length=1000)] = key(
        [], "Rainbows as the shot shows them", '[{ name = "comp bow", radius = 41.5 }]', "none"
    )
    checks: Checks = key(Checks(), "Settings of the check command", '{ fail_on = "impossible" }')
    variants: Annotated[dict[str, Annotated[dict[str, Any], Changes()]], Field(max_length=MOST_VARIANTS)] = key(
        {},
        "Named sets of overrides, [variants.NAME]; `--variant NAME` takes one",
        '{ noon = { "sun.elevation" = 60.0 } }',
        "none",
    )

    @classmethod
    def rules(cls, given: dict[str, Any]) -> Iterator[Flaw]:
        yield from repeated_names(given)
        yield from unknown_materials(given)
        sky = given.get("sky")
        if isinstance(sky, dict) and sky.get("kind") == "clear" and "sun" not in given:
            yield Flaw(("sky", "kind"), "a clear sky needs a sun", "a [sun] table, or another kind of sky")

    def agree(self) -> Iterator[Flaw]:
        yield from self._sunk_sun()
        total = sum(len(item.placements or [0]) * (1 + item.filled) for item in (*self.objects, *self.lights))
        if total > MOST_OBJECTS - 1:
            yield Flaw(("objects",), f"the shot places {total:,} objects", f"at most {MOST_OBJECTS - 1:,}")

    def _sunk_sun(self) -> Iterator[Flaw]:
        """A sun so far down that no sky is known for it."""
        height = self.sun.elevation if self.sun is not None else None
        if self.sky.kind not in SKIES_BY_SUN or height is None:
            return
        for path, numbers in each(("sun", "elevation"), height if isinstance(height, Keys) else (height,)):
            if numbers[0] < LOWEST_SUN_DEG:
                what = f"`{{key}}` is {numbers[0]:g}, and no {self.sky.kind} sky is known for so low a sun"
                yield Flaw(path, what, LOW_SUN_EXPECTED)
