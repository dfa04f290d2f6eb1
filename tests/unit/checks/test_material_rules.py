"""Rules about materials, on both sides of their limits, with their fixes applied."""

from __future__ import annotations

from dataclasses import replace

import frame_builder as build
import pytest

from renderer.checks.facts import Facts
from renderer.checks.findings import ADVICE, IMPLAUSIBLE, IMPOSSIBLE, Finding
from renderer.checks.keys import material_key
from renderer.checks.light_left_out import check_left_out
from renderer.checks.material_gain import check_gain
from renderer.checks.material_rules import check_dispersion, check_index, known_abbe_range, named_entry
from renderer.checks.view import FrameView
from renderer.optics.library import library
from renderer.shot.model import Dispersion, Material

SUN = build.sun(20.0, 180.0)


def ask(rule: object, material: Material, **changes: object) -> list[Finding]:
    item = build.shape_object(material=material)
    return list(rule(FrameView(build.frame(objects=(item,), **changes)), Facts()))


def stated(name: str, model: str, *values: object) -> Material:
    return build.glass(name, None, Dispersion(model, values))


def mended(material: Material, finding: Finding) -> Material:
    """The material with the index that the fix states."""
    ((model, value),) = finding.fix.values[material_key(material.name, "refractive_index")].items()
    return replace(material, dispersion=Dispersion(model, value if isinstance(value, tuple) else (value,)))


@pytest.mark.parametrize(
    ("name", "nd", "severity"),
    [
        ("vitrine", 1.52, None), ("vitrine", 0.752, IMPOSSIBLE), ("vitrine", 0.99965, IMPOSSIBLE),
        ("void", 0.9998, None),
        ("vitrine", 1.1, IMPLAUSIBLE), ("vitrine", 1.24, IMPLAUSIBLE), ("vitrine", 1.26, None), ("vitrine", 2.94, None),
        ("vitrine", 2.96, IMPLAUSIBLE), ("water", 1.333, None), ("lock water", 1.5, IMPLAUSIBLE),
        ("Diamond", 2.1, IMPLAUSIBLE),
    ],
)  # fmt: skip
def test_index_against_what_exists_and_what_is_named(name: str, nd: float, severity: str | None) -> None:
    material = stated(name, "constant", nd)
    found = ask(check_index, material)
    assert [finding.severity for finding in found] == ([severity] if severity else [])
    for finding in found:
        assert ask(check_index, mended(material, finding)) == []


def test_a_material_like_another_is_held_to_it() -> None:
    material = replace(stated("pond", "abbe", 1.45, 56.0), like="water")
    (found,) = ask(check_index, material)
    assert "water" in found.title
    assert ask(check_index, mended(material, found)) == []


def test_library_materials_are_right_by_their_own_rules() -> None:
    """What is published about each material lies in its own range, and in that of known substances."""
    for entry in library():
        material = build.glass("any name", entry.name)
        nd, vd = Facts().index_and_abbe(material)
        if nd < 1.001:
            continue  # air
        low, high = known_abbe_range(nd)
        assert low <= vd <= high, entry.name
        assert entry.nd_range[0] - 0.002 <= nd <= entry.nd_range[1] + 0.002, entry.name
        assert entry.vd_range[0] <= vd <= entry.vd_range[1], entry.name


@pytest.mark.parametrize(
    ("nd", "vd", "severity"),
    [
        (1.52, 58.0, None), (1.52, 25.7, IMPLAUSIBLE), (1.52, 26.0, None), (1.52, 95.0, IMPLAUSIBLE),
        (1.333, 55.8, None), (1.333, 20.0, IMPLAUSIBLE), (2.417, 55.3, None), (2.417, 80.0, IMPLAUSIBLE),
        (1.805, 25.4, None),
    ],
)  # fmt: skip
def test_abbe_number_against_known_substances(nd: float, vd: float, severity: str | None) -> None:
    material = stated("vitrine", "abbe", nd, vd)
    found = ask(check_dispersion, material)
    assert [finding.severity for finding in found] == ([severity] if severity else [])
    for finding in found:
        assert finding.measured == pytest.approx(vd, abs=0.01)
        assert ask(check_dispersion, mended(material, finding)) == []


def test_abbe_number_against_the_named_material() -> None:
    material = stated("diamond", "abbe", 2.417, 30.0)
    (found,) = ask(check_dispersion, material)
    assert "diamond" in found.why
    assert ask(check_dispersion, mended(material, found)) == []


def test_dispersion_that_is_off_or_runs_the_wrong_way() -> None:
    flat = stated("vitrine", "constant", 1.5)
    (found,) = ask(check_dispersion, flat)
    assert (found.severity, found.title) == (IMPLAUSIBLE, "Dispersion is off")
    assert ask(check_dispersion, mended(flat, found)) == []
    rising = stated("vitrine", "cauchy", 1.5, -0.004)
    (found,) = ask(check_dispersion, rising)
    assert found.severity == IMPOSSIBLE
    assert ask(check_dispersion, mended(rising, found)) == []


def test_one_wavelength_alone_has_no_dispersion_to_be_wrong() -> None:
    settings = replace(build.frame().settings, wavelengths_nm=(589.3,))
    assert ask(check_dispersion, stated("vitrine", "constant", 1.5), settings=settings) == []


def test_the_key_of_a_material_with_spaces_is_quoted() -> None:
    assert material_key("old glass", "absorption") == 'materials."old glass".absorption'
    assert material_key("bottle", "absorption") == "materials.bottle.absorption"


@pytest.mark.parametrize(
    ("name", "entry"), [("water", "water"), ("Lock_Water", "water"), ("waterglass", None), ("diamond dust", None)]
)
def test_names_are_recognised_by_their_last_words(name: str, entry: str | None) -> None:
    found = named_entry(stated(name, "constant", 1.5))
    assert (found.name if found else None) == entry


def test_negative_absorption_is_gain() -> None:
    material = replace(build.glass(), absorption_per_m=((400.0, 0.1), (550.0, -0.2), (700.0, 0.3)))
    (found,) = ask(check_gain, material)
    assert (found.severity, found.measured) == (IMPOSSIBLE, -0.2)
    values = found.fix.values["materials.bottle.absorption"]["per_metre"]
    assert values == ((400.0, 0.1), (550.0, 0.0), (700.0, 0.3))
    assert ask(check_gain, replace(material, absorption_per_m=values)) == []


@pytest.mark.parametrize(
    ("reflectance", "severity"),
    [((0.9, 0.9, 0.9), None), ((0.99, 0.2, 0.2), None), ((0.995, 0.9, 0.9), ADVICE), ((0.2, 1.01, 0.2), IMPOSSIBLE)],
)
def test_reflectance_over_one(reflectance: tuple[float, float, float], severity: str | None) -> None:
    item = build.shape_object(surface=build.paint(reflectance))
    found = list(check_gain(FrameView(build.frame(objects=(item,))), None))
    assert [finding.severity for finding in found] == ([severity] if severity else [])
    for finding in found:
        item = build.shape_object(surface=build.paint(finding.fix.values["objects.block.surface.reflectance"]))
        assert list(check_gain(FrameView(build.frame(objects=(item,))), None)) == []


def test_a_spectrum_over_one_names_its_wavelength() -> None:
    surface = replace(build.paint(), reflectance=None, spectrum=((400.0, 0.5), (600.0, 1.2)))
    (found,) = check_gain(FrameView(build.frame(objects=(build.shape_object(surface=surface),))), None)
    assert "600 nm" in found.unit
    assert max(value for _, value in found.fix.values["objects.block.surface.spectrum"]) < 1.0


@pytest.mark.parametrize(
    ("sun", "roughness", "opaque", "said"),
    [(SUN, 0.0, True, True), (None, 0.0, True, False), (SUN, 0.3, True, False), (SUN, 0.0, False, False)],
)
def test_light_that_is_left_out_is_said(sun: object, roughness: float, opaque: bool, said: bool) -> None:
    """Only a sharp light, something smooth for it to pass, and something opaque for it to fall on make the class."""
    clear = build.shape_object("tank", material=build.glass(), roughness=roughness)
    floor = build.shape_object("floor", surface=build.paint())
    objects = (clear, floor) if opaque else (clear,)
    found = list(check_left_out(FrameView(build.frame(sun=sun, objects=objects)), Facts()))
    assert [finding.severity for finding in found] == ([ADVICE] if said else [])


@pytest.mark.parametrize(("side", "said"), [(0.001, True), (0.5, False)])
def test_a_small_lamp_is_sharp_and_a_large_one_is_not(side: float, said: bool) -> None:
    clear = build.shape_object("tank", material=build.glass())
    floor = build.shape_object("floor", surface=build.paint(), size=(4.0, 0.1, 4.0))
    lamp = build.shape_object("lamp", "rectangle", role="light", size=(side, side))
    found = list(check_left_out(FrameView(build.frame(objects=(clear, floor, lamp))), Facts()))
    assert bool(found) == said
    assert all("lamp" in str(finding.measured) for finding in found)
