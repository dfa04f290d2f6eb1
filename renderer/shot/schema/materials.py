"""[materials.NAME]: clear substances."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, Any, ClassVar

from renderer.shot.keyed import Scalar, Values
from renderer.shot.schema.flaws import Flaw
from renderer.shot.schema.leaves import MaterialName, Substance
from renderer.shot.schema.numbers import Bounds, Number, Numbers, Vector
from renderer.shot.schema.spectra import Pairs
from renderer.shot.schema.table import OneOf, Table, key

INDEX = Bounds(0.5, 5.0)
TERMS = Bounds(-1e6, 1e6)
WATERS = 'like = "water" or "sea water"'


class RefractiveIndex(Table):
    """A refractive index by wavelength, relative to air at 20 C."""

    SHORT: ClassVar = {"type": "number", **INDEX.json()}
    NOUN: ClassVar = "a number from 0.5 to 5, or a table"
    ONE_OF: ClassVar[tuple[OneOf, ...]] = (OneOf((("constant",), ("abbe",), ("cauchy",), ("sellmeier",), ("table",))),)

    constant: Annotated[Scalar | None, Number("", INDEX)] = key(
        None, "The same at every wavelength; a number in place of the table says the same", "1.5"
    )
    abbe: Annotated[Values | None, Vector("", Bounds(0.5, 1000), count=2)] = key(
        None, "Index at the helium d line and Abbe number", "[1.52, 58.0]"
    )
    cauchy: Annotated[tuple[float, ...] | None, Numbers("", TERMS, most=6)] = key(
        None, "A, B, C... of n = A + B/w^2 + C/w^4 + ..., w in micrometres", "[1.5046, 0.0042]"
    )
    sellmeier: Annotated[tuple[float, ...] | None, Numbers("", TERMS, fewest=2, most=12, multiple=2)] = key(
        None,
        "B1, C1, B2, C2... of n^2 = 1 + sum of B w^2 / (w^2 - C), w in micrometres and C in their square",
        "[1.03961212, 0.00600069867, 0.231792344, 0.0200179144, 1.01046945, 103.560653]",
    )
    table: Annotated[tuple[tuple[float, float], ...] | None, Pairs("index", INDEX, fewest=2)] = key(
        None, "Pairs of wavelength and index", "[[400, 1.53], [550, 1.52], [700, 1.51]]"
    )

    @classmethod
    def shorthand(cls, value: Any) -> Any:
        return {"constant": value} if isinstance(value, int | float) and not isinstance(value, bool) else value

    def agree(self) -> Iterator[Flaw]:
        if isinstance(self.abbe, tuple) and self.abbe[0] > 5.0:
            yield Flaw(
                ("abbe", 0), "`{key}` cannot be " + f"{self.abbe[0]:g}", "an index from 0.5 to 5, then the Abbe number"
            )


class Absorption(Table):
    """What a clear substance takes away along the way through it."""

    NOUN: ClassVar = "a table, as in { per_metre = [[550, 0.4]] }"

    per_metre: Annotated[tuple[tuple[float, float], ...], Pairs("absorption", Bounds(0, 1e9), "per metre")] = key(
        ...,
        "Pairs of wavelength and absorption (base e); one pair holds at every wavelength",
        "[[400, 2.1], [550, 0.4], [700, 1.8]]",
    )


class Material(Table):
    """A clear substance of the shot's own. What is not stated comes from the material it is `like`."""

    LATER: ClassVar = ("scattering",)

    like: Annotated[MaterialName | None, Substance('the name of a material from "antisolar materials"')] = key(
        None, "A material of the library that this one starts from", '"water"'
    )
    temperature: Annotated[Scalar, Number("degrees Celsius", Bounds(0, 60))] = key(
        20.0, "Of water and sea water, whose index depends on it; up to 30 where there is salt in it", "12.0"
    )
    salinity: Annotated[Scalar | None, Number("per mille", Bounds(0, 42))] = key(
        None, "Of water and sea water", "35.0", "that of the material it is `like`"
    )
    refractive_index: RefractiveIndex | None = key(
        None, "A number, or one of the laws below", "{ abbe = [1.52, 58.0] }", "that of the material it is `like`"
    )
    absorption: Absorption | None = key(
        None, "Absorption by wavelength", "{ per_metre = [[550, 0.4]] }", "that of the material it is `like`, or none"
    )

    @classmethod
    def rules(cls, given: dict[str, Any]) -> Iterator[Flaw]:
        if "like" not in given and "refractive_index" not in given:
            yield Flaw((), "`like` or `refractive_index` is missing", "one of them, or both")
        for name in ("temperature", "salinity"):
            if name not in given:
                continue
            if "like" not in given:
                yield Flaw((name,), f"`{name}` does nothing without `like`", WATERS)
            elif _no_water(given["like"]):
                yield Flaw((name,), f'`{name}` does nothing in a material like "{given["like"].strip()}"', WATERS)


def _no_water(like: Any) -> bool:
    """Whether this is the name of a material of the library other than water and sea water."""
    from renderer.optics.library import known_names

    entry = known_names().get(like.strip().lower()) if isinstance(like, str) else None
    return entry is not None and not entry.is_water
