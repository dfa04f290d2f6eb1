"""Materials, surfaces, textures and objects become rows of tables."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest
from PIL import Image

from renderer.arrays import looks
from renderer.base.errors import InputError
from renderer.colour.upsampling import coefficients_to_reflectance
from renderer.frames.scene_looks import Looks, material_arrays, object_arrays, surface_arrays
from renderer.frames.textures import decoded, load_texture
from renderer.optics.materials import material_tables
from renderer.shot.model import Dispersion, Material
from tests.unit.frames.shot_values import GREY, WATER, thing


def test_equal_materials_share_a_row_and_air_is_row_0():
    air = Material("bubble", None, 20.0, 0.0, Dispersion("constant", (1.0,)), None)
    glass = Material("glass", None, 20.0, 0.0, Dispersion("constant", (1.5,)), ((400.0, 2.0), (700.0, 4.0)))
    items = [thing(role="solid", material=m) for m in (WATER, glass, WATER, air)]
    table = Looks()
    objects = object_arrays(items, table)
    materials = material_arrays(table)
    assert objects.material.tolist() == [1, 2, 1, 0]
    assert table.material_names == ["air", "water", "glass"]
    assert materials.index.shape == (3, 401)
    assert materials.index[0].tolist() == [1.0] * 401
    assert np.array_equal(materials.index[1], material_tables("water", 20.0, 0.0)[0])
    assert materials.dispersive.tolist() == [False, True, False]
    assert materials.absorption_per_m[2, 170] == pytest.approx(3.0, rel=1e-12)  # 550 nm, half-way
    assert not materials.index.flags.writeable


def test_objects_say_what_they_are():
    items = [
        thing(role="solid", priority=2, roughness=0.3),
        thing(role="light"),
        thing(role="pane", thickness_m=0.004),
        thing(role="sheet"),
        thing(role="opaque"),
        thing(role="light"),
    ]
    objects = object_arrays(items, Looks())
    kinds = [looks.CLEAR, looks.LIGHT, looks.PANE, looks.SHEET, looks.OPAQUE, looks.LIGHT]
    assert objects.kind.tolist() == kinds
    assert objects.light.tolist() == [-1, 0, -1, -1, -1, 1]
    assert objects.surface.tolist() == [-1, -1, -1, -1, 0, -1]
    assert objects.material.tolist() == [1, 0, 1, 1, 0, 0]
    assert (objects.priority[0], objects.roughness[0], objects.thickness_m[2]) == (2, 0.3, 0.004)


def test_surfaces_by_colour_spectrum_and_picture(tmp_path):
    pixels = np.zeros((2, 3, 3), dtype=np.uint8)
    pixels[0, 0], pixels[1, 2] = (188, 188, 188), (200, 100, 50)
    Image.fromarray(pixels).save(tmp_path / "a.png")
    picture = dataclasses.replace(GREY, reflectance=None, picture=tmp_path / "a.png", encoding="srgb")
    measured = dataclasses.replace(GREY, reflectance=None, spectrum=((400.0, 0.2), (500.0, 0.4)))
    shiny = dataclasses.replace(picture, roughness=0.1, wetness=0.5, film_roughness=0.05, finish="metal")
    table = Looks()
    objects = object_arrays([thing(surface=s) for s in (GREY, picture, measured, shiny, GREY)], table)
    surfaces = surface_arrays(table)
    assert objects.surface.tolist() == [0, 1, 2, 3, 0]
    assert surfaces.reflectance_kind.tolist() == [looks.SIGMOID, looks.PICTURE, looks.TABLE, looks.PICTURE]
    assert np.abs(coefficients_to_reflectance(surfaces.coefficients[0]) - 0.5).max() < 1e-6
    assert surfaces.picture[[1, 3]].tolist() == [[0, 3, 2], [0, 3, 2]]  # one picture, read once
    assert surfaces.texels.dtype == np.float32
    assert surfaces.texels.shape == (6, 3)
    assert np.abs(coefficients_to_reflectance(surfaces.texels[0]) - decoded(np.array(188 / 255))).max() < 1e-5
    assert surfaces.reflectance_table[2, [0, 20, 70, 120, 400]] == pytest.approx([0.2, 0.2, 0.3, 0.4, 0.4])
    assert (surfaces.finish[3], surfaces.roughness[3], surfaces.wetness[3]) == (looks.METAL, 0.1, 0.5)
    assert not surfaces.texels.flags.writeable


def test_no_surfaces_at_all():
    surfaces = surface_arrays(Looks())
    assert surfaces.coefficients.shape == (0, 3)
    assert surfaces.texels.shape == (0, 3)
    assert surfaces.reflectance_table.shape == (1, 401)


def test_colours_that_no_surface_can_have_are_told_once(tmp_path):
    Image.fromarray(np.array([[[0, 255, 0], [128, 128, 128]]], dtype=np.uint8)).save(tmp_path / "neon.png")
    neon = dataclasses.replace(GREY, reflectance=(0.0, 1.0, 0.0), space="rec2020")
    picture = dataclasses.replace(
        GREY, reflectance=None, picture=tmp_path / "neon.png", encoding="linear", space="rec2020"
    )
    table = Looks()
    object_arrays([thing(surface=s) for s in (neon, picture, neon, picture)], table)
    surface_arrays(table)
    assert len(table.notes) == 2
    assert "[0, 1, 0]" in table.notes[0]
    assert "50 % of the texels of neon.png" in table.notes[1]


def test_srgb_decoding_at_published_points():
    """IEC 61966-2-1:1999: 0.04045 is where the two pieces meet; 0.5 decodes to 0.2140 (from memory)."""
    assert decoded(np.array([0.0, 0.04045, 0.5, 1.0])) == pytest.approx([0.0, 0.04045 / 12.92, 0.21404, 1.0], abs=1e-5)


def test_pictures_of_other_kinds(tmp_path):
    grey = np.arange(16, dtype=np.uint8).reshape(4, 4)
    Image.fromarray(grey).save(tmp_path / "grey.png")
    assert (load_texture(tmp_path / "grey.png", "linear", "rec709").width) == 4
    Image.fromarray(np.dstack([grey] * 4)).save(tmp_path / "alpha.png")
    assert load_texture(tmp_path / "alpha.png", "linear", "rec709").texels.shape == (16, 3)


def test_too_many_objects():
    with pytest.raises(InputError, match="65,535 objects"):
        object_arrays([thing()] * 65_535, Looks())
