"""[[objects]] and [[lights]]: what stands in the shot, and where."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, Any, ClassVar

from pydantic import Field

from renderer.shot.keyed import Scalar, Values
from renderer.shot.schema.flaws import Flaw
from renderer.shot.schema.leaves import Choice, File, FileName, MaterialName, Names, Substance, Switch, Text
from renderer.shot.schema.matrices import affine_flaws
from renderer.shot.schema.numbers import Bounds, Number, Vector
from renderer.shot.schema.shapes import Shape
from renderer.shot.schema.surfaces import Emission, Surface
from renderer.shot.schema.table import OneOf, Table, key
from renderer.shot.schema.units import LENGTH, METRES
from renderer.shot.schema.whole_numbers import Whole

MOST_PLACEMENTS = 100_000


class Transform(Table):
    """Where an object stands: scaled first, then turned, then moved."""

    ONE_OF: ClassVar[tuple[OneOf, ...]] = (OneOf((("translation", "rotation", "scale"), ("matrix",)), needed=False),)

    translation: Annotated[Values, Vector(LENGTH)] = key((0.0, 0.0, 0.0), "Moved along x, y and z", "[0.0, 0.8, -4.0]")
    rotation: Annotated[Values, Vector("degrees")] = key(
        (0.0, 0.0, 0.0), "Turned about x, then y, then z", "[0.0, 45.0, 0.0]"
    )
    scale: Annotated[Values, Vector("", Bounds(nonzero=True), single=True)] = key(
        (1.0, 1.0, 1.0), "Scaled along x, y and z, or alike; a negative number mirrors", "1.0"
    )
    matrix: Annotated[Values | None, Vector("", count=16)] = key(
        None,
        "In place of these: object to world, 16 numbers row by row; 4, 8 and 12 are the position in the shot's unit"
        " of length",
        "[1, 0, 0, 0.0,  0, 1, 0, 0.8,  0, 0, 1, -4.0,  0, 0, 0, 1]",
    )

    def agree(self) -> Iterator[Flaw]:
        if self.matrix is not None:
            yield from affine_flaws(("matrix",), self.matrix)


class Placed(Table):
    """What objects and lights share: a name, a form, and places."""

    name: Annotated[str, Text("a name in quotes")] = key(
        ..., "A name of its own, for messages, layers and overrides", '"tank"'
    )
    mesh: Annotated[FileName | None, File()] = key(
        None, "A mesh file: .ply, .obj, .stl, .glb or .gltf; a run of # is the frame number", '"tank.ply"'
    )
    nodes: Annotated[tuple[str, ...], Names()] = key(
        (), "Take only these named parts of the mesh file", '["glass"]', "all"
    )
    mesh_unit: Annotated[str | None, Choice(tuple(METRES))] = key(
        None,
        "Unit of the mesh file",
        '"cm"',
        "metres for .glb and .gltf, as glTF has it; otherwise the shot's unit of length",
    )
    shape: Shape | None = key(None, "In place of mesh: a built-in shape", "{ sphere = 0.1 }")
    transform: Transform = key(Transform(), "Where it stands", "{ translation = [0.0, 0.8, -4.0] }", "at the origin")
    placements: Annotated[list[Transform] | None, Field(max_length=MOST_PLACEMENTS)] = key(
        None,
        "Many copies that share one mesh: a list of transforms, each followed by `transform`; they are named NAME[0],"
        " NAME[1]...",
        "[{ translation = [0.0, 0.0, 0.0] }, { translation = [1.0, 0.0, 0.0] }]",
        "one",
    )

    @property
    def filled(self) -> bool:
        """Whether something stands in it, which is an object of its own."""
        vessel = self.shape.vessel if self.shape is not None else None
        return vessel is not None and vessel.filling is not None

    FORM: ClassVar = OneOf((("mesh",), ("shape",)))

    @classmethod
    def rules(cls, given: dict[str, Any]) -> Iterator[Flaw]:
        for name in ("nodes", "mesh_unit"):
            if name in given and "mesh" not in given:
                yield Flaw((name,), f"`{name}` does nothing without `mesh`", f"`mesh`, or no `{name}`")
        if given.get("placements") == []:
            yield Flaw(("placements",), "`placements` is empty", "at least one transform, or no `placements`")


class Object(Placed):
    """A solid, a pane, a sheet of water, or an opaque or shining thing."""

    ONE_OF: ClassVar[tuple[OneOf, ...]] = (
        Placed.FORM,
        OneOf((("material",), ("below",), ("surface",), ("emission",))),
    )

    material: Annotated[MaterialName | None, Substance()] = key(
        None, "Clear: what it is made of, by a name from [materials] or the library", '"soda-lime glass"'
    )
    below: Annotated[MaterialName | None, Substance()] = key(
        None, "An open sheet (an ocean grid): the material on the side away from its normals", '"water"'
    )
    surface: Surface | None = key(None, "Opaque: what light meets on it", "{ reflectance = 0.3 }")
    emission: Emission | None = key(None, "It shines: an area light", "{ luminance = 5000.0, temperature = 3200.0 }")
    thickness: Annotated[Scalar | None, Number(LENGTH, Bounds(above=0))] = key(
        None,
        "Beside `material`: the mesh is a single sheet that stands for a pane of this thickness",
        "0.004",
        "a solid",
    )
    overlap_priority: Annotated[int, Whole(-1000, 1000)] = key(
        0, "Where clear objects overlap, the higher wins; of equals, the later in the file", "2"
    )
    roughness: Annotated[Scalar, Number("", Bounds(0, 1))] = key(
        0.0, "Of a clear object: 0 is polished, 1 is frosted", "0.2"
    )
    smooth: Annotated[bool | None, Switch()] = key(
        None,
        "Shade by normals that are interpolated across triangles",
        "true",
        "true for round shapes and water, false for meshes and flat shapes",
    )

    @classmethod
    def rules(cls, given: dict[str, Any]) -> Iterator[Flaw]:
        yield from Placed.rules(given)
        if "thickness" in given and "material" not in given:
            yield Flaw(("thickness",), "`thickness` does nothing without `material`", "`material`, or no `thickness`")
        if "roughness" in given and ("surface" in given or "emission" in given):
            where = "in `surface`" if "surface" in given else "only on a clear object"
            yield Flaw(("roughness",), "`roughness` stands in the wrong place", f"`roughness` {where}")
        if "overlap_priority" in given and ("surface" in given or "emission" in given):
            yield Flaw(("overlap_priority",), "`overlap_priority` does nothing on an opaque object", "a clear object")

    def agree(self) -> Iterator[Flaw]:
        shape = self.shape
        if shape is not None and shape.vessel is not None and self.material is None:
            yield Flaw((), f"a {shape.kind} is clear: `material` is missing", Substance().expects())
        if shape is not None and shape.open and self.material is not None and self.thickness is None:
            expected = "`thickness` beside `material` for a pane, or `below` for a sheet of water"
            yield Flaw(("shape",), "an open shape has no inside for a `material`", expected)
        if shape is not None and not shape.open and self.thickness is not None:
            yield Flaw(
                ("thickness",),
                f"`{{key}}` makes a pane of a {shape.kind}, which is closed",
                "no `thickness`, or an open shape",
            )
        if shape is not None and not shape.open and self.below is not None:
            yield Flaw(
                ("below",),
                f"`{{key}}` needs an open sheet, and a {shape.kind} is closed",
                "`material`, or an open shape",
            )


class Light(Placed, Emission):
    """A shining surface: an object with `emission`, written shorter."""

    ONE_OF: ClassVar[tuple[OneOf, ...]] = (Placed.FORM, *Emission.ONE_OF)
