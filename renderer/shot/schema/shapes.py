"""Built-in shapes."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, Any, ClassVar

from renderer.shot.keyed import Scalar, Values
from renderer.shot.schema.flaws import Flaw
from renderer.shot.schema.leaves import MaterialName, Substance
from renderer.shot.schema.numbers import Bounds, Number, Vector
from renderer.shot.schema.table import OneOf, Table, key
from renderer.shot.schema.units import LENGTH
from renderer.shot.schema.whole_numbers import Whole, Wholes

POSITIVE = Bounds(above=0)
MOST_CELLS = 4_000_000


class Cylinder(Table):
    """A closed cylinder along y, its middle at the origin. `[radius, height]` says the same in short."""

    SHORT: ClassVar = {
        "type": "array",
        "items": {"type": "number", "exclusiveMinimum": 0},
        "minItems": 2,
        "maxItems": 2,
    }
    NOUN: ClassVar = "[radius, height] or a table"

    radius: Annotated[Scalar, Number(LENGTH, POSITIVE)] = key(..., "Radius", "0.05")
    height: Annotated[Scalar, Number(LENGTH, POSITIVE)] = key(..., "Height, along y", "0.2")
    segments: Annotated[int, Whole(3, 4096)] = key(128, "Flat sides that stand for the round", "128")

    @classmethod
    def shorthand(cls, value: Any) -> Any:
        return {"radius": value[0], "height": value[1]} if isinstance(value, list) and len(value) == 2 else value


class Disc(Table):
    """A flat disc that faces +z. A number says the radius in short."""

    SHORT: ClassVar = {"type": "number", "exclusiveMinimum": 0}
    NOUN: ClassVar = "a radius or a table"

    radius: Annotated[Scalar, Number(LENGTH, POSITIVE)] = key(..., "Radius", "0.1")
    segments: Annotated[int, Whole(3, 4096)] = key(128, "Flat sides that stand for the round", "128")

    @classmethod
    def shorthand(cls, value: Any) -> Any:
        return {"radius": value} if isinstance(value, int | float) and not isinstance(value, bool) else value


class Lens(Table):
    """A lens with spherical faces along z, its middle at the origin."""

    radius_front: Annotated[Scalar, Number(LENGTH)] = key(
        ..., "Radius of the face at +z; positive bulges outward, negative is hollow, 0 is flat", "0.1"
    )
    radius_back: Annotated[Scalar, Number(LENGTH)] = key(..., "Radius of the face at -z, likewise", "0.1")
    thickness: Annotated[Scalar, Number(LENGTH, POSITIVE)] = key(..., "Thickness on the axis", "0.01")
    diameter: Annotated[Scalar, Number(LENGTH, POSITIVE)] = key(..., "Diameter", "0.05")

    def agree(self) -> Iterator[Flaw]:
        for name in ("radius_front", "radius_back"):
            radius, diameter = getattr(self, name), self.diameter
            if isinstance(radius, float) and isinstance(diameter, float) and 0.0 < abs(radius) < diameter / 2.0:
                yield Flaw(
                    (name,),
                    f"`{{key}}` is {radius:g}, too small for a diameter of {diameter:g}",
                    f"0, or {diameter / 2:g} or more either way",
                )


class Prism(Table):
    """A triangular prism whose ridge is along z, its middle at the origin."""

    apex: Annotated[Scalar, Number("degrees", Bounds(above=0, high=179))] = key(..., "Angle at the ridge", "60.0")
    side: Annotated[Scalar, Number(LENGTH, POSITIVE)] = key(..., "Length of the two faces that meet there", "0.05")
    length: Annotated[Scalar, Number(LENGTH, POSITIVE)] = key(..., "Length along z", "0.1")


class Vessel(Table):
    """What a tank and a bowl share: what is in them."""

    fill: Annotated[Scalar, Number("", Bounds(0, 1))] = key(0.0, "How full it is: share of the inner height", "0.9")
    filling: Annotated[MaterialName | None, Substance()] = key(
        None, 'Material of what is in it; an object of its own, called "NAME filling"', '"water"', "empty"
    )

    @classmethod
    def rules(cls, given: dict[str, Any]) -> Iterator[Flaw]:
        if ("fill" in given) != ("filling" in given):
            one, other = ("fill", "filling") if "fill" in given else ("filling", "fill")
            expected = "a number from 0 to 1" if other == "fill" else Substance().expects()
            yield Flaw((), f"`{other}` is missing beside `{one}`", expected)


class Tank(Vessel):
    """An open box of glass, its middle at the origin."""

    size: Annotated[Values, Vector(LENGTH, POSITIVE)] = key(..., "Outer width, height and depth", "[0.4, 0.3, 0.2]")
    wall: Annotated[Scalar, Number(LENGTH, POSITIVE)] = key(..., "Thickness of walls and floor", "0.006")

    def agree(self) -> Iterator[Flaw]:
        if isinstance(self.size, tuple) and isinstance(self.wall, float):
            most = min(self.size[0] / 2.0, self.size[1], self.size[2] / 2.0)
            if self.wall >= most:
                yield Flaw(("wall",), f"`{{key}}` is {self.wall:g}, which leaves no room inside", f"less than {most:g}")


class Bowl(Vessel):
    """An open half-round bowl of glass: its rim level at y = 0, its centre at the origin."""

    radius: Annotated[Scalar, Number(LENGTH, POSITIVE)] = key(..., "Outer radius", "0.1")
    wall: Annotated[Scalar, Number(LENGTH, POSITIVE)] = key(..., "Thickness of the glass", "0.003")

    def agree(self) -> Iterator[Flaw]:
        radius, wall = self.radius, self.wall
        if isinstance(radius, float) and isinstance(wall, float) and not radius / 1000.0 <= wall < radius:
            expected = f"from {radius / 1000.0:g} to less than {radius:g}"
            yield Flaw(("wall",), f"`{{key}}` is {wall:g} for a radius of {radius:g}", expected)


class Wave(Table):
    """One sine wave of a water surface."""

    amplitude: Annotated[Scalar, Number(LENGTH, Bounds(0))] = key(
        ..., "Height of the crest above the still water", "0.01"
    )
    wavelength: Annotated[Scalar, Number(LENGTH, POSITIVE)] = key(..., "From crest to crest", "0.5")
    direction: Annotated[Scalar, Number("degrees")] = key(
        0.0, "Where it runs: 0 to -z, and clockwise seen from above, so 90 to +x", "90.0"
    )
    phase: Annotated[Scalar, Number("degrees")] = key(
        0.0, "Phase at the origin; key it to make the water move", "{ 1001 = 0.0, 1025 = 360.0 }"
    )


class WaterSurface(Table):
    """An open, level sheet of water facing +y, its middle at the origin, with waves; with a depth, a closed block."""

    size: Annotated[Values, Vector(LENGTH, POSITIVE, count=2)] = key(..., "Size along x and z", "[20.0, 20.0]")
    cells: Annotated[tuple[int, ...], Wholes(2, 1, 8192)] = key((64, 64), "Cells along x and z", "[64, 64]")
    waves: list[Wave] = key([], "Sine waves, added up", "[{ amplitude = 0.01, wavelength = 0.5 }]", "none: still water")
    depth: Annotated[Scalar, Number(LENGTH, Bounds(0))] = key(
        0.0, "Closes the sheet to a block with a flat bottom this far down; 0 leaves it open", "2.0"
    )

    def agree(self) -> Iterator[Flaw]:
        if self.cells[0] * self.cells[1] > MOST_CELLS:
            yield Flaw(
                ("cells",), f"`{{key}}` asks for {self.cells[0] * self.cells[1]:,} cells", f"at most {MOST_CELLS:,}"
            )
        if len(self.waves) > 256:
            yield Flaw(("waves",), f"`{{key}}` has {len(self.waves)} entries", "at most 256 entries")


class Shape(Table):
    """A built-in shape: exactly one of these."""

    NOUN: ClassVar = "a table with one shape, as in { sphere = 0.1 }"
    ONE_OF: ClassVar[tuple[OneOf, ...]] = (
        OneOf(
            tuple(
                (name,)
                for name in (
                    "box",
                    "sphere",
                    "cylinder",
                    "lens",
                    "prism",
                    "tank",
                    "bowl",
                    "water_surface",
                    "rectangle",
                    "disc",
                )
            )
        ),
    )

    box: Annotated[Values | None, Vector(LENGTH, POSITIVE)] = key(
        None, "A box round the origin: its size along x, y and z", "[0.4, 0.3, 0.2]"
    )
    sphere: Annotated[Scalar | None, Number(LENGTH, POSITIVE)] = key(
        None, "An exact sphere round the origin: its radius", "0.1"
    )
    cylinder: Cylinder | None = key(None, "A cylinder", "[0.05, 0.2]")
    lens: Lens | None = key(
        None, "A lens", "{ radius_front = 0.1, radius_back = 0.1, thickness = 0.01, diameter = 0.05 }"
    )
    prism: Prism | None = key(None, "A prism", "{ apex = 60.0, side = 0.05, length = 0.1 }")
    tank: Tank | None = key(None, "A tank", '{ size = [0.4, 0.3, 0.2], wall = 0.006, fill = 0.9, filling = "water" }')
    bowl: Bowl | None = key(None, "A bowl", '{ radius = 0.1, wall = 0.003, fill = 0.8, filling = "water" }')
    water_surface: WaterSurface | None = key(None, "Open water", "{ size = [20.0, 20.0] }")
    rectangle: Annotated[Values | None, Vector(LENGTH, POSITIVE, count=2)] = key(
        None, "A flat rectangle that faces +z, its middle at the origin: its size along x and y", "[1.0, 0.5]"
    )
    disc: Disc | None = key(None, "A flat disc that faces +z", "0.1")

    @property
    def kind(self) -> str:
        """The name of the one shape."""
        return next(name for name in type(self).model_fields if getattr(self, name) is not None)

    @property
    def table(self) -> Table | None:
        """The sizes of the one shape, None where they are written as plain numbers."""
        value = getattr(self, self.kind)
        return value if isinstance(value, Table) else None

    @property
    def vessel(self) -> Vessel | None:
        """The tank or bowl, if it is one."""
        return self.tank or self.bowl

    @property
    def open(self) -> bool:
        """Whether it has no inside."""
        depth = self.water_surface.depth if self.water_surface is not None else 0.0
        return self.kind in ("rectangle", "disc") or (self.kind == "water_surface" and depth == 0.0)

    @property
    def round(self) -> bool:
        """Whether its flat triangles stand for something curved."""
        return self.kind in ("sphere", "cylinder", "lens", "bowl", "water_surface")
