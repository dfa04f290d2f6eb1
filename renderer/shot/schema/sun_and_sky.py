"""[sun] and [sky]."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, Any, ClassVar

from renderer.shot.keyed import Scalar, Values
from renderer.shot.schema.flaws import Flaw
from renderer.shot.schema.leaves import Choice, File, FileName
from renderer.shot.schema.numbers import Bounds, Number, Vector
from renderer.shot.schema.table import OneOf, Table, key

KINDS = ("clear", "overcast", "uniform", "picture", "none")
SKIES_BY_SUN = ("clear", "overcast")  # whose light goes by the height of the sun
LOWEST_SUN_DEG = -12.0  # the end of nautical twilight, below which no published luminance of the sky is carried
LOW_SUN_EXPECTED = f"{LOWEST_SUN_DEG:g} degrees or more, or another kind of sky"
SCENE_LINEAR = ("rec709", "rec2020", "acescg", "xyz")


class Sun(Table):
    """The sun, a disc of its true size. Without this table there is none."""

    LATER: ClassVar = ("location",)
    ONE_OF: ClassVar[tuple[OneOf, ...]] = (OneOf((("elevation", "azimuth"), ("direction",))),)

    elevation: Annotated[Scalar | None, Number("degrees", Bounds(-90, 90))] = key(
        None, "Height of the sun's centre above the horizon, as seen through the air; with `azimuth`", "24.0"
    )
    azimuth: Annotated[Scalar | None, Number("degrees")] = key(
        None, "Direction of the sun, clockwise from north seen from above", "205.0"
    )
    direction: Annotated[Values | None, Vector("")] = key(
        None,
        "In place of elevation and azimuth: from the shot towards the sun, in the shot's axes, of any length",
        "[0.4, 0.4, 0.8]",
    )
    visibility: Annotated[Scalar, Number("km", Bounds(1, 330))] = key(
        23.0, "Meteorological visibility: how hazy the air is, for the sun and a clear sky", "23.0"
    )

    @classmethod
    def rules(cls, given: dict[str, Any]) -> Iterator[Flaw]:
        for one, other in (("elevation", "azimuth"), ("azimuth", "elevation")):
            if one in given and other not in given:
                yield Flaw((), f"`{other}` is missing beside `{one}`", "a number, in degrees")

    def agree(self) -> Iterator[Flaw]:
        if self.direction == (0.0, 0.0, 0.0):
            yield Flaw(("direction",), "`{key}` has no length", "3 numbers that are not all 0")


class Sky(Table):
    """What surrounds the shot. Without this table there is no sky: black."""

    kind: Annotated[str, Choice(KINDS)] = key(
        ...,
        "clear or overcast, by the height of the sun; an overcast sky hides the disc, and needs no [sun]. uniform;"
        " picture (latitude-longitude); or none",
        '"clear"',
    )
    luminance: Annotated[Scalar, Number("cd/m2", Bounds(0, 1e9))] = key(1000.0, "Of a uniform sky", "1000.0")
    colour: Annotated[Values, Vector("", Bounds(0, 1e6), single=True)] = key(
        (1.0, 1.0, 1.0), "Of a uniform sky: linear Rec.709; its brightness does not count", "[0.8, 0.9, 1.0]"
    )
    picture: Annotated[FileName | None, File()] = key(
        None, "Latitude-longitude EXR or Radiance HDR, up at the top, north in the middle", '"skies/quay.exr"'
    )
    encoding: Annotated[str, Choice(SCENE_LINEAR)] = key(
        "rec709", "Colour space of the picture, scene-linear; a value of 1 is 1 cd/m2 times `scale`", '"acescg"'
    )
    scale: Annotated[Scalar, Number("", Bounds(0, 1e9))] = key(1.0, "Multiplies the sky's radiance, of any kind", "1.0")
    turn: Annotated[Scalar, Number("degrees")] = key(0.0, "Turns the picture clockwise, seen from above", "90.0")

    @classmethod
    def rules(cls, given: dict[str, Any]) -> Iterator[Flaw]:
        kind = given.get("kind")
        if kind == "picture" and "picture" not in given:
            yield Flaw((), '`picture` is missing beside kind = "picture"', File().expects())
        if kind not in KINDS:
            return
        for name, only in (
            ("luminance", "uniform"),
            ("colour", "uniform"),
            ("picture", "picture"),
            ("encoding", "picture"),
            ("turn", "picture"),
        ):
            if name in given and kind != only:
                yield Flaw(
                    (name,), f'`{name}` does nothing in a sky of kind "{kind}"', f'kind = "{only}", or no `{name}`'
                )

    def agree(self) -> Iterator[Flaw]:
        from renderer.shot.schema.colours import black_flaws

        yield from black_flaws(("colour",), self.colour)
