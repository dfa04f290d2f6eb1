"""Overrides: dotted keys, values, and where they land."""

from __future__ import annotations

import json
import tomllib
from pathlib import Path

import pytest
import shot_writing as shots
from hypothesis import given
from hypothesis import strategies as st

from renderer.base.errors import InputError
from renderer.shot.overrides import parse_key, parse_overrides, parse_value
from renderer.shot.schema.flaws import Flawed

BARE = st.text("abcdefXYZ0189_-", min_size=1, max_size=8)
QUOTED = st.text(st.characters(exclude_categories=("Cs", "Cc")), min_size=1, max_size=12)


@given(st.lists(BARE, min_size=1, max_size=6))
def test_bare_keys_read_as_written(parts: list[str]) -> None:
    assert parse_key(".".join(parts)) == tuple(parts)


@given(BARE, st.lists(st.one_of(QUOTED, st.integers(0, 9_999_999)), max_size=5))
def test_quoted_keys_and_numbers_read_as_written(first: str, rest: list[str | int]) -> None:
    text = first
    for part in rest:
        text += f"[{part}]" if isinstance(part, int) else "." + json.dumps(part, ensure_ascii=False)
    assert parse_key(text) == (first, *rest)


@given(st.text(max_size=40))
def test_any_text_is_a_key_or_is_refused(text: str) -> None:
    try:
        found = parse_key(text)
    except Flawed:
        return
    assert found
    assert isinstance(found[0], str)


@given(st.text(max_size=40))
def test_any_text_is_a_value_or_is_refused(text: str) -> None:
    try:
        found = parse_value(text)
    except Flawed:
        return
    assert found == text.strip() or tomllib.loads(f"value = {text}") == {"value": found}


@given(
    st.recursive(
        st.one_of(
            st.integers(-(2**62), 2**62), st.booleans(), st.floats(allow_nan=False, allow_infinity=False), QUOTED
        ),
        lambda inner: st.lists(inner, max_size=4),
        max_leaves=10,
    )
)
def test_values_read_as_toml(value: object) -> None:
    assert parse_value(json.dumps(value, ensure_ascii=False)) == value


def test_a_plain_word_needs_no_quotes() -> None:
    assert parse_value("overcast") == "overcast"
    assert parse_value("soda-lime glass") == "soda-lime glass"
    assert parse_value('"overcast"') == "overcast"


@pytest.mark.parametrize("text", ["12deg", "", "1\nb = 2", "[1, 2", "value]", "= 3", "'open"])
def test_what_is_no_value(text: str) -> None:
    with pytest.raises(Flawed):
        parse_value(text)


def test_an_equals_sign_in_quotes_parts_nothing() -> None:
    (found,) = parse_overrides(['objects."a = b".material = "c = d"'])
    assert (found.path, found.value) == (("objects", "a = b", "material"), "c = d")


def test_all_wrong_overrides_are_told_at_once() -> None:
    with pytest.raises(InputError) as caught:
        parse_overrides(["a", "sun.x=1y", "ok=1"])
    assert len(caught.value.faults) == 2


TWO = shots.ball() + shots.ball(name="my ball") + "[sun]\nelevation = 10\nazimuth = 0\n"


def test_objects_by_name_by_quoted_name_and_by_number(tmp_path: Path) -> None:
    given_ones = ['objects.ball.material="ice"', 'objects."my ball".shape.sphere=0.3', "objects[0].roughness=0.5"]
    first, second = shots.frame(tmp_path, TWO, overrides=given_ones).objects
    assert first.material is not None
    assert (first.material.name, first.roughness) == ("ice", 0.5)
    assert second.shape is not None
    assert second.shape.sizes["radius"] == 0.3


def test_an_entry_of_a_vector(tmp_path: Path) -> None:
    found = shots.frame(tmp_path, overrides=["camera.position[1]=3"])
    assert found.camera.matrices[0, :, 3].tolist() == [0.0, 3.0, 5.0]


def test_a_key_takes_the_place_of_what_it_excludes(tmp_path: Path) -> None:
    found = shots.frame(tmp_path, TWO, overrides=["sun.direction=[0, 2, 0]", "objects.ball.surface={reflectance=0.5}"])
    assert found.sun is not None
    assert found.sun.direction == (0.0, 1.0, 0.0)
    assert found.objects[0].role == "opaque"
    boxed = shots.frame(tmp_path, TWO, overrides=["objects.ball.shape.box=[1, 2, 3]"])
    assert boxed.objects[0].shape is not None
    assert boxed.objects[0].shape.kind == "box"


def test_a_table_that_is_not_there_is_made(tmp_path: Path) -> None:
    found = shots.frame(tmp_path, overrides=["sky.kind=uniform", "sky.luminance={1001=10.0, 1003=30.0}"], number=1002)
    assert (found.sky.kind, found.sky.luminance) == ("uniform", 20.0)


def test_a_value_in_short_is_written_out(tmp_path: Path) -> None:
    text = "[materials.m]\nrefractive_index = 1.4\n"
    text += '[[objects]]\nname = "a"\nshape = { cylinder = [1, 2] }\nmaterial = "m"\n'
    over = ["materials.m.refractive_index.abbe=[1.5, 60]", "objects.a.shape.cylinder.segments=12"]
    (found,) = shots.frame(tmp_path, text, overrides=over).objects
    assert found.shape is not None
    assert found.shape.sizes == {"radius": 1.0, "height": 2.0, "segments": 12}
    assert found.material is not None
    assert found.material.dispersion is not None
    assert found.material.dispersion.model == "abbe"


VARIANTS = (
    TWO
    + """
[variants.quoted]
"sun.elevation" = 40
"objects.ball.material" = "ice"
[variants.bare]
sun.elevation = 40
objects.ball.material = "ice"
[variants.tables.sun]
elevation = 40
[variants.tables.objects.ball]
material = "ice"
"""
)


@pytest.mark.parametrize("name", ["quoted", "bare", "tables"])
def test_a_variant_with_and_without_quotes(tmp_path: Path, name: str) -> None:
    found = shots.frame(tmp_path, VARIANTS, variant=name)
    assert found.sun is not None
    assert found.objects[0].material is not None
    assert (found.sun.elevation_deg, found.sun.azimuth_deg, found.objects[0].material.name) == (40.0, 0.0, "ice")
    assert found.variant == name
    plain = shots.frame(tmp_path, VARIANTS)
    assert plain.sun is not None
    assert plain.sun.elevation_deg == 10.0


def test_the_command_line_is_laid_over_the_variant(tmp_path: Path) -> None:
    found = shots.frame(tmp_path, VARIANTS, variant="bare", overrides=["sun.elevation=50"])
    assert found.sun is not None
    assert found.sun.elevation_deg == 50.0


def test_a_variant_leaves_the_file_and_other_variants_as_they_are(tmp_path: Path) -> None:
    """Tables that no override touches are shared between variants; those that one touches must not be."""
    text = VARIANTS + '[variants.more]\n"objects.ball.shape.sphere" = 9\n"objects[1].transform.scale" = 2\n'
    for name in (None, "quoted", "more", None):
        first, second = shots.frame(tmp_path, text, variant=name).objects
        assert first.shape is not None
        assert first.shape.sizes == {"radius": 9.0 if name == "more" else 0.1}
        assert second.matrices[0, 0, 0] == (2.0 if name == "more" else 1.0)
        assert first.material is not None
        assert first.material.name == ("ice" if name == "quoted" else "water")


def test_variants_are_listed(tmp_path: Path) -> None:
    assert shots.read(tmp_path, VARIANTS).variants == ("quoted", "bare", "tables")
