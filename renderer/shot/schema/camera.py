"""[camera]: where it stands, its lens, sensor, shutter and exposure."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Annotated, Any, ClassVar

from renderer.shot.keyed import Scalar, Values
from renderer.shot.schema.flaws import Flaw, Flawed, refusal
from renderer.shot.schema.leaves import FileName, Leaf, Text, clean_text
from renderer.shot.schema.matrices import rigid_flaws
from renderer.shot.schema.numbers import Bounds, Number, NumberLeaf, Vector, is_number, numbers_in
from renderer.shot.schema.table import OneOf, Table, key
from renderer.shot.schema.units import LENGTH
from renderer.shot.schema.whole_numbers import Wholes

MOST_PIXELS = 16_384  # a side
MOST_OVERSCAN = 4_096
SENSOR_RANGE = Bounds(above=0, high=10_000)
SENSOR_SLACK = 0.005  # a height of sensor may be off by half a per cent: data sheets round


@dataclass(frozen=True)
class ImportText(Text):
    """A node of a glTF file, as ``file.glb#Node``."""

    def expects(self) -> str:
        return 'a .glb or .gltf file and a camera\'s name in quotes, as in "layout.glb#ShotCam"'

    def read(self, value: Any) -> FileName:
        return FileName(clean_text(value, self.expects()))


@dataclass(frozen=True)
class Sensor(NumberLeaf):
    """A width, or a width and a height."""

    unit_text: str = "mm"
    bounds: Bounds = SENSOR_RANGE
    may_be_keyed: bool = False

    def expects(self) -> str:
        return f"a width, or [width, height], above 0, up to {self.bounds.high:g}, in mm"

    def still(self, value: Any) -> tuple[float, ...]:
        if is_number(value):
            return (self.one(value),)
        if not isinstance(value, list) or len(value) not in (1, 2):
            raise Flawed(refusal(value, self.expects()))
        return numbers_in(value, self)

    def still_json(self) -> dict[str, Any]:
        item = {"type": "number", **self.bounds.json()}
        return {"anyOf": [item, {"type": "array", "items": item, "minItems": 1, "maxItems": 2}]}


@dataclass(frozen=True)
class AutoMark(Leaf):
    """The word "auto"."""

    def expects(self) -> str:
        return '"auto", { stops = ... } or { iso = ... }'

    def read(self, value: Any) -> str:
        if value == "auto":
            return "auto"
        raise Flawed(refusal(value, self.expects(), nearest="auto" if isinstance(value, str) else ""))

    def json(self) -> dict[str, Any]:
        return {"const": "auto"}


class Exposure(Table):
    """How bright the picture is made: by stops, by ISO 12232, or by its own content."""

    SHORT: ClassVar = {"const": "auto"}
    NOUN: ClassVar = '"auto", { stops = ... } or { iso = ... }'
    ONE_OF: ClassVar[tuple[OneOf, ...]] = (OneOf((("stops",), ("iso",), ("auto",))),)

    stops: Annotated[Scalar | None, Number("stops", Bounds(-60, 60))] = key(
        None,
        "Exposure in stops: 0 is that of a sunny day, f/16 at 1/128 s and ISO 100; +1 is twice as bright",
        "0.0",
        "0 where nothing is set",
    )
    iso: Annotated[Scalar | None, Number("", Bounds(above=0, high=10_000_000))] = key(
        None, "Sensitivity by ISO 12232, with the shutter and the f-number of this camera", "100"
    )
    auto: Annotated[str | None, AutoMark()] = key(
        None, 'Expose by the picture\'s own content; `exposure = "auto"` says the same', '"auto"'
    )

    @classmethod
    def shorthand(cls, value: Any) -> Any:
        return {"auto": value} if isinstance(value, str) else value


class Distortion(Table):
    """Lens distortion after Brown (1966), on image coordinates in focal lengths, x right and y up."""

    k1: Annotated[Scalar, Number("", Bounds(-10, 10))] = key(0.0, "Radial, of the second power", "-0.05")
    k2: Annotated[Scalar, Number("", Bounds(-10, 10))] = key(0.0, "Radial, of the fourth power", "0.01")
    k3: Annotated[Scalar, Number("", Bounds(-10, 10))] = key(0.0, "Radial, of the sixth power", "0.0")
    p1: Annotated[Scalar, Number("", Bounds(-1, 1))] = key(0.0, "Tangential, first", "0.0")
    p2: Annotated[Scalar, Number("", Bounds(-1, 1))] = key(0.0, "Tangential, second", "0.0")


class Camera(Table):
    """The camera: it looks along its own -z, with +y up in the picture."""

    ONE_OF: ClassVar[tuple[OneOf, ...]] = (
        OneOf((("position", "target"), ("matrix",), ("import",))),
        OneOf((("crop",), ("overscan",)), needed=False),
    )

    position: Annotated[Values | None, Vector(LENGTH)] = key(
        None, "Where the camera stands; with `target`", "[0.0, 1.7, 0.0]"
    )
    target: Annotated[Values | None, Vector(LENGTH)] = key(None, "What it looks at", "[0.0, 1.2, -10.0]")
    matrix: Annotated[Values | None, Vector("", count=16)] = key(
        None,
        "In place of position and target: camera to world, 16 numbers row by row; 4, 8 and 12 are the position in the"
        " shot's unit of length. A scale of the same size along each axis is taken out",
        "[1, 0, 0, 0.0,  0, 1, 0, 1.7,  0, 0, 1, 0.0,  0, 0, 0, 1]",
    )
    import_: Annotated[FileName | None, ImportText()] = key(
        None,
        "In place of position and target: a perspective camera of a glTF file, by the name of its node, with its place"
        " in the world and its field of view. Its metres and axes are taken as they stand; animation is not read",
        '"layout.glb#ShotCam"',
        alias="import",
    )
    roll: Annotated[Scalar, Number("degrees")] = key(
        0.0, "Turn about the line of sight, clockwise as the operator sees it; the horizon tilts the other way", "0.0"
    )
    focal_length: Annotated[Scalar | None, Number("mm", Bounds(above=0, high=100_000))] = key(
        None, "Focal length; needed unless the camera is imported", "28.0", "the imported camera's"
    )
    sensor: Annotated[tuple[float, ...], Sensor()] = key(
        (36.0,), "Width and height of the sensor, or the width alone; the height must fit the pixels", "[36.0, 20.25]"
    )
    pixels: Annotated[tuple[int, ...], Wholes(2, 1, MOST_PIXELS)] = key(
        (1280, 720), "Columns and rows of the full frame", "[1280, 720]"
    )
    pixel_aspect: Annotated[float, Number("", Bounds(0.1, 10), may_be_keyed=False)] = key(
        1.0, "Width of a pixel over its height; 2 for a frame of an anamorphic lens that squeezes by 2", "1.0"
    )
    crop: Annotated[tuple[int, ...] | None, Wholes(4, 0, MOST_PIXELS, "pixels")] = key(
        None,
        "Render a part of the frame alone: first column, first row (from the top left), columns, rows",
        "[320, 180, 640, 360]",
        "the full frame",
    )
    overscan: Annotated[tuple[int, ...] | None, Wholes(4, 0, MOST_OVERSCAN, "pixels", single=True)] = key(
        None, "Render beyond the frame: on the left, top, right and bottom, or one number for all", "32", "none"
    )
    distortion: Distortion = key(Distortion(), "Distortion of the lens: k1, k2, k3, p1, p2", "{ k1 = -0.05 }", "none")
    f_number: Annotated[Scalar, Number("", Bounds(0, 1000))] = key(0.0, "f-number of the lens; 0 is a pinhole", "8.0")
    focus_distance: Annotated[Scalar | None, Number(LENGTH, Bounds(above=0))] = key(
        None, "Distance that is sharp, along the line of sight", "4.0", "the distance to the target"
    )
    shutter: Annotated[Scalar, Number("degrees", Bounds(0, 360))] = key(
        180.0, "How much of the frame's time the shutter is open; 360 is all of it, 0 an instant", "180.0"
    )
    shutter_offset: Annotated[Scalar | None, Number("degrees", Bounds(-360, 360))] = key(
        None,
        "When the shutter opens, from the frame's own time",
        "-90.0",
        "minus half of `shutter`: centred on the frame",
    )
    exposure: Exposure = key(
        Exposure(stops=0.0), 'Exposure: `{ stops = 0.0 }`, `{ iso = 100 }` or `"auto"`', "{ stops = 0.0 }"
    )
    white_balance: Annotated[Scalar, Number("kelvin", Bounds(1667, 25_000))] = key(
        6504.0, "Colour temperature of the light that the picture shows as neutral", "6504"
    )
    polariser: Annotated[Scalar | None, Number("degrees")] = key(
        None,
        "Axis of a linear polariser on the lens, from the picture's horizontal, anticlockwise",
        "30.0",
        "no polariser",
    )

    @classmethod
    def rules(cls, given: dict[str, Any]) -> Iterator[Flaw]:
        if "position" in given and "target" not in given:
            yield Flaw((), "`target` is missing beside `position`", Vector(LENGTH).expects())
        if "target" in given and "position" not in given:
            yield Flaw((), "`position` is missing beside `target`", Vector(LENGTH).expects())
        if "focal_length" not in given and "import" not in given:
            yield Flaw((), "`focal_length` is missing", "a number above 0, up to 100000, in mm")

    def agree(self) -> Iterator[Flaw]:
        yield from self._sensor_flaws()
        yield from self._window_flaws()
        if self.matrix is not None:
            yield from rigid_flaws(("matrix",), self.matrix)
        if self.exposure.iso is not None and self.f_number == 0.0:
            yield Flaw(("exposure", "iso"), "`{key}` needs an `f_number`", "`f_number` above 0 in [camera]")
        if self.exposure.iso is not None and self.shutter == 0.0:
            yield Flaw(("exposure", "iso"), "`{key}` needs a `shutter`", "`shutter` above 0 in [camera]")
        if self.f_number != 0.0 and self.focus_distance is None and self.target is None:
            yield Flaw((), "`focus_distance` is missing beside `f_number`", Number(LENGTH, Bounds(above=0)).expects())

    def _sensor_flaws(self) -> Iterator[Flaw]:
        """A height that would stretch the picture."""
        if len(self.sensor) == 2 and abs(self.sensor[1] / self.fitting_height() - 1.0) > SENSOR_SLACK:
            columns, rows = self.pixels
            shape = f"{columns} x {rows} pixels of aspect {self.pixel_aspect:g}"
            what = f"`{{key}}` is {self.sensor[1]:g} mm high, which stretches {shape}"
            aspect = self.sensor[0] / columns / (self.sensor[1] / rows)
            height = self.fitting_height()
            yield Flaw(
                ("sensor",), what, f"a height of {height:.4g} mm, the width alone, or a pixel_aspect of {aspect:.4g}"
            )

    def _window_flaws(self) -> Iterator[Flaw]:
        if self.crop is None:
            return
        column, row, columns, rows = self.crop
        if columns == 0 or rows == 0:
            yield Flaw(("crop",), "`{key}` is empty", "at least one column and one row")
        elif column + columns > self.pixels[0] or row + rows > self.pixels[1]:
            size = f"{self.pixels[0]} x {self.pixels[1]}"
            yield Flaw(
                ("crop",), "`{key}` reaches beyond the frame", f"a part of {size} pixels; `overscan` goes beyond"
            )

    def fitting_height(self) -> float:
        """The height of sensor [mm] at which pixels have the stated aspect."""
        return self.sensor[0] / self.pixels[0] * self.pixels[1] / self.pixel_aspect
