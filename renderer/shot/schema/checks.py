"""[[bows_to_check]] and [checks]: what the checks compare, and what has been accepted."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, Any, ClassVar

from pydantic import Field

from renderer.shot.keyed import Scalar, Values
from renderer.shot.schema.flaws import Flaw
from renderer.shot.schema.leaves import Choice, Day, FrameRange, Text
from renderer.shot.schema.numbers import Bounds, Number, Vector
from renderer.shot.schema.table import OneOf, Table, key
from renderer.shot.schema.units import LENGTH
from renderer.shot.schema.whole_numbers import Whole

SEVERITIES = ("impossible", "implausible", "advice")


class Centre(Table):
    """Where the centre of a bow stands."""

    NOUN: ClassVar = "a table, as in { azimuth = 25.0, elevation = -24.0 }"
    ONE_OF: ClassVar[tuple[OneOf, ...]] = (OneOf((("azimuth", "elevation"), ("pixel",), ("point",))),)

    azimuth: Annotated[Scalar | None, Number("degrees")] = key(None, "Clockwise from north; with `elevation`", "25.0")
    elevation: Annotated[Scalar | None, Number("degrees", Bounds(-90, 90))] = key(
        None, "Above the horizon; a bow's centre is as far below it as the sun is above", "-24.0"
    )
    pixel: Annotated[Values | None, Vector("pixels", count=2)] = key(
        None, "A place in the full frame: columns and rows from the top left; it may lie outside", "[640.0, 900.0]"
    )
    point: Annotated[Values | None, Vector(LENGTH)] = key(
        None, "A point in the world, where the picture has the bow fixed to the set", "[0.0, -5.0, -40.0]"
    )

    @classmethod
    def rules(cls, given: dict[str, Any]) -> Iterator[Flaw]:
        for one, other in (("elevation", "azimuth"), ("azimuth", "elevation")):
            if one in given and other not in given:
                yield Flaw((), f"`{other}` is missing beside `{one}`", "a number, in degrees")


class Bow(Table):
    """A rainbow as the shot shows it, where a comp or a matte painting put it."""

    LATER: ClassVar = ("picture",)

    name: Annotated[str, Text("a name in quotes")] = key(..., "A name of its own", '"comp bow v3"')
    order: Annotated[int, Whole(1, 4)] = key(
        1, "1 the primary bow, 2 the second one outside it; 3 and 4 stand round the sun", "1"
    )
    centre: Centre | None = key(None, "Where its centre stands", "{ azimuth = 25.0, elevation = -24.0 }", "not checked")
    radius: Annotated[Scalar | None, Number("degrees", Bounds(above=0, high=180))] = key(
        None, "Angle from the centre to the middle of the band", "41.5", "not checked"
    )
    width: Annotated[Scalar | None, Number("degrees", Bounds(above=0, high=90))] = key(
        None, "Width of the band, between half its brightness on either side", "1.4", "not checked"
    )
    outer_colour: Annotated[str | None, Choice(("red", "violet"))] = key(
        None, "The colour on the outside of the circle", '"red"', "not checked"
    )


class SignOff(Table):
    """A finding that someone has accepted, and why."""

    rule: Annotated[str, Text("a rule's name in quotes")] = key(..., "The rule, by its dotted name", '"bow.radius"')
    why: Annotated[str, Text("a reason in quotes")] = key(..., "The reason", '"the director wants it wide"')
    until: Annotated[str | None, Day()] = key(None, "The last day on which it holds", '"2027-03-01"', "for good")
    bow: Annotated[str | None, Text("a bow's name in quotes")] = key(None, "Only for this bow", '"comp bow v3"', "all")
    frames: Annotated[str | None, FrameRange()] = key(None, "Only in these frames", '"1001-1024"', "all")


class Checks(Table):
    """What the check command accepts, and where it draws the line."""

    sign_off: Annotated[list[SignOff], Field(max_length=1000)] = key(
        [], "Findings that have been accepted", '[{ rule = "bow.radius", why = "the director wants it wide" }]', "none"
    )
    fail_on: Annotated[str | None, Choice(SEVERITIES)] = key(
        None, "The mildest kind of finding that fails the check", '"impossible"', "that of the command line"
    )
