"""The one schema: what is made from it is up to date, whole, and agrees with the reader."""

from __future__ import annotations

import tomllib
from pathlib import Path
from typing import Any

import pytest
import shot_writing as shots

from renderer.shot import json_schema, load_shot, reference_page, starter_text
from renderer.shot.reference import FILE as PAGE
from renderer.shot.reference import sections
from renderer.shot.schema.table import Table, leaf_of
from renderer.shot.schema_export import FILE as SCHEMA
from renderer.shot.schema_export import schema_text

KEYS = [(title, table, name) for title, table in sections() for name in [*table.keys()]]


def test_the_reference_page_is_up_to_date() -> None:
    text = PAGE.read_text(encoding="utf-8")
    assert text == reference_page(), "run python -m renderer.shot.reference"


def test_the_shipped_json_schema_is_up_to_date() -> None:
    text = SCHEMA.read_text(encoding="utf-8")
    assert text == schema_text(), "run python -m renderer.shot.schema_export"


def test_both_can_be_asked_for_again() -> None:
    """Importing a module of a function's name would put the module in the function's place."""
    assert json_schema() == json_schema()
    assert reference_page() == reference_page()
    assert starter_text("a") == starter_text("a")


def example(table: type[Table], name: str) -> tuple[str, Any]:
    """A key's example, as text and as read."""
    extra = table.keys()[name].json_schema_extra
    assert isinstance(extra, dict)
    text = str(extra["x-example"])
    return text, tomllib.loads(f"example = {text}")["example"]


@pytest.mark.parametrize(("title", "table", "name"), KEYS, ids=[f"{title} {name}" for title, _, name in KEYS])
def test_each_key_has_a_meaning_and_an_example_that_its_leaf_takes(title: str, table: type[Table], name: str) -> None:
    info = table.keys()[name]
    assert info.description
    leaf = leaf_of(info)
    text, value = example(table, name)
    if leaf is not None:
        leaf.read(value)
    assert f"`{text}`" in reference_page()


EXAMPLE = """\
format = 1
title  = "Terrace hose, late sun"
[units]
length = "m"
up     = "+y"
[frames]
range = "1001-1048"
fps   = 24.0
[camera]
position     = [0.0, 1.7, 0.0]
target       = [0.0, 1.2, -10.0]
focal_length = 28.0
sensor       = [36.0, 20.25]
pixels       = [1280, 720]
f_number     = 8.0
shutter      = 180.0
exposure     = { stops = 0.0 }
white_balance = 6504
[sun]
elevation  = { 1001 = 24.0, 1048 = 22.0, ease = true }
azimuth    = 205.0
visibility = 23.0
[sky]
kind = "clear"
[materials.bottle]
refractive_index = { abbe = [1.52, 58.0] }
absorption = { per_metre = [[400, 2.1], [550, 0.4], [700, 1.8]] }
[[objects]]
name      = "tank"
shape     = { tank = { size = [0.4, 0.3, 0.2], wall = 0.006, fill = 0.9, filling = "water" } }
material  = "soda-lime glass"
overlap_priority = 2
transform = { translation = [0,0,0], rotation = [0,45,0], scale = 1.0 }
[[objects]]
name    = "terrace"
shape   = { box = [10, 0.1, 10] }
surface = { reflectance = [0.30, 0.27, 0.24], roughness = 0.6, wetness = 0.8 }
[[lights]]
name = "lamp"
shape = { disc = 0.1 }
luminance = 5000
lines = [[589.0, 0.67], [589.6, 0.33]]
[[bows_to_check]]
name = "comp bow v3"
centre = { azimuth = 25.0, elevation = -24.0 }
radius = 41.5
[variants.stylised]
"sun.azimuth" = 25.0
[checks]
sign_off = [{ rule = "bow.radius", why = "the director wants it wide", until = "2027-03-01" }]
"""


def resolve(schema: dict[str, Any], root: dict[str, Any]) -> dict[str, Any]:
    """A schema behind its reference."""
    while "$ref" in schema:
        schema = root["$defs"][schema["$ref"].rsplit("/", 1)[1]]
    return schema


def fits(value: Any, schema: dict[str, Any], root: dict[str, Any]) -> bool:
    """Whether a value fits a JSON Schema; the few keywords that ours uses, written from the standard."""
    schema = resolve(schema, root)
    kinds = {"object": dict, "array": list, "string": str, "boolean": bool}
    if "const" in schema and value != schema["const"]:
        return False
    if "enum" in schema and value not in schema["enum"]:
        return False
    if "not" in schema and fits(value, schema["not"], root):
        return False
    for word, wanted in (("anyOf", lambda n: n >= 1), ("oneOf", lambda n: n == 1)):
        if word in schema and not wanted(sum(fits(value, one, root) for one in schema[word])):
            return False
    if not all(fits(value, one, root) for one in schema.get("allOf", [])):
        return False
    kind = schema.get("type")
    if kind in kinds and not isinstance(value, kinds[kind]):
        return False
    if kind in ("number", "integer"):
        if isinstance(value, bool) or not isinstance(value, int if kind == "integer" else (int, float)):
            return False
        low, high, above = (schema.get(word) for word in ("minimum", "maximum", "exclusiveMinimum"))
        if (
            (low is not None and value < low)
            or (high is not None and value > high)
            or (above is not None and value <= above)
        ):
            return False
    if isinstance(value, list):
        items = schema.get("prefixItems", [schema.get("items", {})] * len(value))
        if not schema.get("minItems", 0) <= len(value) <= schema.get("maxItems", 10**9):
            return False
        return all(fits(entry, item, root) for entry, item in zip(value, items, strict=False))
    if isinstance(value, dict):
        return fits_table(value, schema, root)
    return True


def fits_table(value: dict[str, Any], schema: dict[str, Any], root: dict[str, Any]) -> bool:
    """The same of a table."""
    if any(name not in value for name in schema.get("required", [])):
        return False
    known, others = schema.get("properties", {}), schema.get("additionalProperties", True)
    patterned = schema.get("patternProperties", {})
    for name, entry in value.items():
        if name in known:
            good = fits(entry, known[name], root)
        elif patterned and name.lstrip("-").isdigit():
            good = fits(entry, next(iter(patterned.values())), root)
        else:
            good = others is True or (isinstance(others, dict) and fits(entry, others, root))
        if not good:
            return False
    return True


@pytest.mark.parametrize("text", [EXAMPLE, starter_text("first")], ids=["the example", "the starter"])
def test_a_whole_shot_is_read_and_fits_the_json_schema(tmp_path: Path, text: str) -> None:
    found = shots.frame(tmp_path, text, whole=True)
    assert len(found.fingerprint) == 64
    assert fits(tomllib.loads(text), json_schema(), json_schema())


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ("[frames]", "[frame]"),
        ("elevation  = {", "height = {"),
        ("azimuth    = 205.0", 'azimuth = "south"'),
        ("pixels       = [1280, 720]", "pixels = [1280.5, 720]"),
        ("target       = [0.0, 1.2, -10.0]", "matrix = [1]"),
        ('material  = "soda-lime glass"', 'material = "ice"\nsurface = { reflectance = 1 }'),
        ("luminance = 5000", "luminance = -1"),
        ("shape = { disc = 0.1 }", "shape = { disc = 0 }"),
        ("{ stops = 0.0 }", '"manual"'),
    ],
)
def test_what_the_json_schema_refuses_the_reader_refuses(tmp_path: Path, old: str, new: str) -> None:
    assert old in EXAMPLE
    text = EXAMPLE.replace(old, new, 1)
    assert not fits(tomllib.loads(text), json_schema(), json_schema())
    with pytest.raises(Exception, match="error: "):
        shots.read(tmp_path, text, whole=True)


def test_the_starter_takes_any_title(tmp_path: Path) -> None:
    for name in ('shots/quay "9" \\ .shot.toml', "quai nº 9", "a\tb", "x" * 500):
        path = shots.write(tmp_path, starter_text(name), whole=True)
        assert load_shot(path).title == Path(name).name.removesuffix(".shot.toml").replace("\t", "?")[:200]
    shot = load_shot(path, variant="noon")
    assert shot.at(1001).objects[0].name == "tumbler"


def test_the_starter_has_its_bow_where_its_sun_wants_it(tmp_path: Path) -> None:
    found = shots.frame(tmp_path, starter_text("first"), whole=True)
    assert found.sun is not None
    assert found.bows[0].centre == pytest.approx(tuple(-x for x in found.sun.direction), abs=1e-12)
