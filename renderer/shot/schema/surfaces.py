"""Surfaces of opaque objects, and the light that emitting ones give."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise
from typing import Annotated, Any, ClassVar

from renderer.shot.keyed import Scalar, Values
from renderer.shot.schema.colours import black_flaws
from renderer.shot.schema.flaws import Flaw
from renderer.shot.schema.leaves import Choice, File, FileName, Switch
from renderer.shot.schema.numbers import Bounds, Number, Vector
from renderer.shot.schema.spectra import Pairs
from renderer.shot.schema.table import OneOf, Table, key

SHARE = Bounds(0, 1)
SPACES = ("rec709", "rec2020", "acescg")


class Surface(Table):
    """What light meets on an opaque object."""

    ONE_OF: ClassVar[tuple[OneOf, ...]] = (OneOf((("reflectance",), ("spectrum",), ("picture",))),)

    reflectance: Annotated[Values | None, Vector("", SHARE, single=True)] = key(
        None, "Linear RGB, or one number for grey", "[0.30, 0.27, 0.24]"
    )
    spectrum: Annotated[tuple[tuple[float, float], ...] | None, Pairs("reflectance", SHARE)] = key(
        None, "In place of reflectance: pairs of wavelength and reflectance", "[[400, 0.1], [600, 0.4]]"
    )
    picture: Annotated[FileName | None, File()] = key(
        None, "In place of reflectance: a picture laid on by the mesh's UVs", '"setts.png"'
    )
    space: Annotated[str, Choice(SPACES)] = key("rec709", "RGB space of reflectance or picture", '"acescg"')
    encoding: Annotated[str, Choice(("srgb", "linear"))] = key(
        "srgb", "How the picture's values are stored", '"linear"'
    )
    finish: Annotated[str, Choice(("matt", "metal"))] = key(
        "matt", "matt: a body colour under a gloss; metal: the reflectance is that of the gloss itself", '"metal"'
    )
    roughness: Annotated[Scalar | None, Number("", SHARE)] = key(
        None, "Of the gloss: 0 is a mirror, 1 has none on a matt finish", "0.6", "1 for matt, 0 for metal"
    )
    wetness: Annotated[Scalar, Number("", SHARE)] = key(0.0, "Share of the surface under a film of water", "0.8")
    film_roughness: Annotated[Scalar, Number("", SHARE)] = key(0.1, "Roughness of that film's top", "0.05")

    @classmethod
    def rules(cls, given: dict[str, Any]) -> Iterator[Flaw]:
        if "encoding" in given and "picture" not in given:
            yield Flaw(("encoding",), "`encoding` does nothing without `picture`", "`picture`, or no `encoding`")
        if "space" in given and "spectrum" in given:
            yield Flaw(
                ("space",), "`space` does nothing beside `spectrum`", "`reflectance` or `picture`, or no `space`"
            )


class Emission(Table):
    """The light that a surface gives, alike in every direction."""

    ONE_OF: ClassVar[tuple[OneOf, ...]] = (OneOf((("colour",), ("temperature",), ("spectrum",)), needed=False),)

    luminance: Annotated[Scalar, Number("cd/m2", Bounds(0, 1e10))] = key(..., "Brightness of the surface", "5000.0")
    colour: Annotated[Values | None, Vector("", Bounds(0, 1e6), single=True)] = key(
        None, "Linear Rec.709; its brightness does not count", "[1.0, 0.9, 0.8]", "white, D65, where there are no lines"
    )
    temperature: Annotated[Scalar | None, Number("kelvin", Bounds(500, 50_000))] = key(
        None, "In place of colour: a black body", "3200.0"
    )
    spectrum: Annotated[tuple[tuple[float, float], ...] | None, Pairs("power", Bounds(0, 1e12), fewest=2)] = key(
        None, "In place of colour: pairs of wavelength and relative power", "[[400, 0.2], [550, 1.0], [700, 0.8]]"
    )
    lines: Annotated[
        tuple[tuple[float, float], ...],
        Pairs("share", Bounds(above=0, high=1), most=32, lowest_nm=380, highest_nm=780, any_order=True),
    ] = key(
        (), "Spectral lines: pairs of wavelength and share of the luminance", "[[589.0, 0.67], [589.6, 0.33]]", "none"
    )
    two_sided: Annotated[bool, Switch()] = key(False, "Shine from both sides; otherwise from the outside alone", "true")

    def agree(self) -> Iterator[Flaw]:
        if self.colour is not None:
            yield from black_flaws(("colour",), self.colour)
        if self.spectrum is not None and not shines(self.spectrum):
            yield Flaw(("spectrum",), "`{key}` has nothing visible in it", "a power above 0 between 380 and 780 nm")
        total = sum(share for _, share in self.lines)
        alone = self.colour is None and self.temperature is None and self.spectrum is None
        if self.lines and alone and abs(total - 1.0) > 1e-6:
            yield Flaw(
                ("lines",),
                f"the shares of `{{key}}` add up to {total:.6g}",
                "shares that add up to 1, or a colour for the rest",
            )
        if self.lines and not alone and total > 1.0 + 1e-6:
            yield Flaw(("lines",), f"the shares of `{{key}}` add up to {total:.6g}", "shares that add up to 1 at most")


def shines(pairs: tuple[tuple[float, float], ...]) -> bool:
    """Whether straight lines through (nm, power) rise above 0 anywhere between 380 and 780 nm."""
    return any(
        (a[1] > 0.0 and 380.0 <= a[0] < 780.0) or (b[1] > 0.0 and 380.0 < b[0] <= 780.0) or _across(a, b)
        for a, b in pairwise(pairs)
    )


def _across(a: tuple[float, float], b: tuple[float, float]) -> bool:
    """Whether a line from outside reaches in: its lit end beyond one side, its other end not."""
    return (a[1] > 0.0 and a[0] < 380.0 < b[0]) or (b[1] > 0.0 and a[0] < 780.0 < b[0])
