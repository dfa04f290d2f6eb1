"""A whole frame assembled: lights listed triangle by triangle, all arrays frozen and of one type."""

from __future__ import annotations

import dataclasses
from pathlib import Path

import numpy as np
import pytest

from renderer.colour.observer import luminance
from renderer.frames.assemble import assemble
from renderer.frames.scene_lights import SMALL, lines_of
from renderer.ray_search.build import object_primitives
from renderer.shot import load_shot
from renderer.shot.model import Emission, Shape, Sky
from tests.unit.frames.shot_values import LAMP, placed, shot, thing

ROOT = Path(__file__).parents[3]
NO_SKY = Sky("none", 0.0, (1.0, 1.0, 1.0), None, "rec709", 1.0, 0.0)
PANEL = Shape("rectangle", {"size": (2.0, 1.0)})


def test_lights_are_listed_by_power():
    """Panels of 2 and 8 m2 (scaled by 2), the second of half the luminance and shining both ways."""
    half = dataclasses.replace(LAMP, luminance=500.0, two_sided=True)
    scene = assemble(
        shot(
            thing("room", shape=Shape("box", {"size": (9.0, 9.0, 9.0)})),
            thing("first", role="light", shape=PANEL),
            thing("second", role="light", shape=PANEL, emission=half, matrices=placed(0.0, 3.0, 0.0, scale=2.0)),
        )
    )
    lights = scene.lights
    assert lights.light.tolist() == [0, 0, 1, 1]
    chances = np.diff(lights.cdf)
    assert chances == pytest.approx([0.1, 0.1, 0.4, 0.4], rel=1e-12)
    assert lights.two_sided.tolist() == [False, True]
    assert luminance(lights.radiance) == pytest.approx([1000.0, 500.0], rel=1e-9)
    assert scene.objects.light.tolist() == [-1, 0, 1]
    for object_id, rows in ((1, [0, 1]), (2, [2, 3])):
        instance, primitive = object_primitives(scene.world, object_id)
        assert lights.instance[rows].tolist() == instance.tolist()
        assert lights.primitive[rows].tolist() == primitive.tolist()
        assert lights.of_primitive[primitive].tolist() == rows
    assert len(lights.of_primitive) == 12 + 4
    assert (lights.of_primitive >= 0).sum() == 4
    assert scene.reference_radiance == pytest.approx(1000.0, rel=1e-12)
    assert scene.object_names == ("room", "first", "second")


def test_sphere_lights_are_cut_into_triangles():
    ball = Shape("sphere", {"radius": 0.5})
    scene = assemble(shot(thing(role="light", shape=ball), thing(shape=ball)))
    assert len(scene.lights.primitive) == 2208
    assert len(scene.lights.of_primitive) == 2209
    assert np.diff(scene.lights.cdf).min() > 0.0
    assert scene.lights.cdf[-1] == 1.0


def test_small_lights_are_marked():
    """The mark is at an area of SMALL of the squared diagonal of all bounds."""
    side = (SMALL * (100.0 + 100.0)) ** 0.5
    floor = thing(shape=Shape("rectangle", {"size": (10.0, 10.0)}))
    for scale, small in ((0.99, True), (1.01, False)):
        lamp = Shape("rectangle", {"size": (side * scale, side * scale)})
        assert assemble(shot(floor, thing(role="light", shape=lamp))).lights.small.tolist() == [small]


def test_spectral_lines_become_columns():
    sodium = Emission(100.0, None, None, None, ((589.0, 2.0), (589.6, 1.0)), False)
    mixed = Emission(200.0, (1.0, 1.0, 1.0), None, None, ((546.07, 0.25), (589.0, 0.0)), False)
    items = (thing(role="light", shape=PANEL, emission=sodium), thing(role="light", shape=PANEL, emission=mixed))
    assert lines_of(items) == [546.07, 589.0, 589.6]
    scene = assemble(shot(*items))
    rows = scene.lights.line_radiance
    assert rows.shape == (2, 3)
    assert (rows > 0.0).tolist() == [[False, True, True], [True, False, False]]
    assert luminance(scene.lights.radiance) == pytest.approx([0.0, 150.0], abs=1e-9)
    assert sorted(set(scene.spectrum.line.tolist())) == [-1, 0, 1, 2]
    at = {int(line): nm for line, nm in zip(scene.spectrum.line, scene.spectrum.low_nm, strict=True) if line >= 0}
    assert at == {0: 546.07, 1: 589.0, 2: 589.6}


def test_a_shot_without_anything():
    scene = assemble(shot(sky=NO_SKY))
    assert scene.reference_radiance == 1.0
    assert scene.lights.cdf.tolist() == [0.0]
    assert scene.lights.of_primitive.tolist() == [-1]
    assert scene.lights.radiance.shape == (1, 401)
    assert scene.material_names == ("air",)


def test_reference_is_the_brightest_light():
    assert assemble(shot(thing())).reference_radiance == pytest.approx(1000.0, rel=1e-6)
    bright = dataclasses.replace(LAMP, luminance=5e6)
    assert assemble(shot(thing(role="light", emission=bright))).reference_radiance == 5e6


def frozen(values, name):
    """Every array read-only, C-ordered and of the type that its docstring states."""
    for field, array in zip(values._fields, values, strict=True):
        if isinstance(array, np.ndarray):
            assert not array.flags.writeable, f"{name}.{field}"
            assert array.flags.c_contiguous, f"{name}.{field}"


SHOTS = sorted((ROOT / "scenes").glob("*/*.shot.toml"))


@pytest.mark.parametrize("path", SHOTS, ids=[path.parent.name for path in SHOTS])
def test_shipped_shots_assemble_into_arrays_of_the_same_types(path):
    loaded = load_shot(path)
    scene = assemble(loaded.at(loaded.frames[0]))
    plain = assemble(shot())
    for name in ("objects", "materials", "surfaces", "sun", "sky", "lights", "camera", "spectrum"):
        values = getattr(scene, name)
        frozen(values, name)
        kinds = [(array.dtype, array.ndim) for array in values]
        assert kinds == [(array.dtype, array.ndim) for array in getattr(plain, name)], name  # or kernels compile twice
    assert np.isfinite(scene.reference_radiance)
    assert scene.sky.row_cdf[-1] == 1.0
    assert len(scene.object_names) == len(scene.objects.kind)
    assert scene.objects.material.max() < len(scene.material_names)
