"""Objects and lights at a frame."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
import shot_writing as shots

from renderer.geometry.shapes import build_shape
from renderer.shot.model import Object


def objects(folder: Path, text: str, number: int = 1001) -> tuple[Object, ...]:
    """The objects of a frame."""
    return shots.frame(folder, text, number).objects


def test_roles(tmp_path: Path) -> None:
    (tmp_path / "sea.ply").write_text("ply", encoding="utf-8")
    text = (
        shots.ball()
        + '[[objects]]\nname = "pane"\nshape = { rectangle = [1, 1] }\nmaterial = "ice"\nthickness = 0.004\n'
        + '[[objects]]\nname = "sea"\nmesh = "sea.ply"\nbelow = "sea water"\n'
        + '[[objects]]\nname = "wall"\nshape = { box = [1, 1, 1] }\nsurface = { reflectance = 0.5 }\n'
        + '[[objects]]\nname = "tube"\nshape = { cylinder = [0.1, 1] }\nemission = { luminance = 10 }\n'
        + '[[lights]]\nname = "lamp"\nshape = { disc = 0.1 }\nluminance = 5\ntwo_sided = true\n'
    )
    found = objects(tmp_path, text)
    assert [item.role for item in found] == ["solid", "pane", "sheet", "opaque", "light", "light"]
    assert found[1].thickness_m == 0.004
    assert found[2].material is not None
    assert found[2].material.salinity == 35.0  # the library's, since the shot states none
    assert found[3].surface is not None
    assert (found[3].surface.reflectance, found[3].surface.roughness) == ((0.5, 0.5, 0.5), 1.0)
    assert found[5].emission is not None
    assert (found[5].emission.colour, found[5].emission.two_sided) == ((1.0, 1.0, 1.0), True)


def test_a_filling_is_an_object_of_its_own(tmp_path: Path) -> None:
    text = (
        '[[objects]]\nname = "tank"\noverlap_priority = 3\nmaterial = "soda-lime glass"\n'
        "transform = { translation = [0, 2, 0] }\n"
        'shape = { tank = { size = [0.4, 0.3, 0.2], wall = 0.006, fill = 0.9, filling = "water" } }\n'
        '[[objects]]\nname = "bowl"\nmaterial = "soda-lime glass"\n'
        'shape = { bowl = { radius = 0.1, wall = 0.003, fill = 0.5, filling = "ethanol" } }\n'
    )
    tank, water, bowl, spirit = objects(tmp_path, text)
    assert [item.name for item in (tank, water, bowl, spirit)] == ["tank", "tank filling", "bowl", "bowl filling"]
    assert (tank.priority, water.priority) == (3, 2)
    assert water.material is not None
    assert water.material.name == "water"
    assert water.matrices.tolist() == tank.matrices.tolist()
    assert water.shape is not None
    assert water.shape.kind == "tank_filling"
    assert spirit.shape is not None
    assert spirit.shape.kind == "bowl_filling"


def test_an_empty_tank_has_no_filling(tmp_path: Path) -> None:
    text = '[[objects]]\nname = "t"\nmaterial = "ice"\nshape = {{ tank = {{ size = [1, 1, 1], wall = 0.1{} }} }}\n'
    assert len(objects(tmp_path, text.format(""))) == 1
    assert len(objects(tmp_path, text.format(', fill = { 1001 = 0, 1003 = 1 }, filling = "water"'))) == 1
    assert len(objects(tmp_path, text.format(', fill = { 1001 = 0, 1003 = 1 }, filling = "water"'), 1002)) == 2


EVERY_SHAPE = [
    "{ box = [1, 2, 3] }",
    "{ sphere = 2 }",
    "{ cylinder = [1, 2] }",
    "{ cylinder = { radius = 1, height = 2, segments = 12 } }",
    "{ lens = { radius_front = 10, radius_back = -20, thickness = 1, diameter = 5 } }",
    "{ prism = { apex = 60, side = 5, length = 10 } }",
    '{ tank = { size = [40, 30, 20], wall = 0.6, fill = 0.9, filling = "water" } }',
    '{ bowl = { radius = 10, wall = 0.3, fill = 0.9, filling = "water" } }',
    "{ water_surface = { size = [100, 50], cells = [4, 4], depth = 20, waves = [{ amplitude = 1, wavelength = 9 }] } }",
]
OPEN_SHAPES = [
    "{ rectangle = [2, 3] }",
    "{ disc = 1 }",
    "{ disc = { radius = 1, segments = 12 } }",
    "{ water_surface = { size = [100, 50] } }",
]


@pytest.mark.parametrize("shape", EVERY_SHAPE + OPEN_SHAPES)
def test_every_shape_can_be_built_and_is_in_metres(tmp_path: Path, shape: str) -> None:
    """The names of sizes here and in the room that builds them must agree."""
    look = 'material = "water"' if shape in EVERY_SHAPE else "surface = { reflectance = 0.5 }"
    text = f'[units]\nlength = "cm"\n[[objects]]\nname = "a"\nshape = {shape}\n{look}\n'
    sizes = []
    for unit in ("cm", "m"):
        for item in objects(tmp_path, text.replace('"cm"', f'"{unit}"')):
            assert item.shape is not None
            assets = build_shape(item.shape).assets
            sizes.append([np.ptp(a.vertices_m, axis=0) if hasattr(a, "vertices_m") else a.radii_m for a in assets])
    half = len(sizes) // 2
    for small, large in zip(sizes[:half], sizes[half:], strict=True):
        assert np.allclose(np.array(small) * 100.0, np.array(large), rtol=1e-9)


def test_smooth_by_default_where_the_form_is_round(tmp_path: Path) -> None:
    def smooth(shape: str, more: str = "") -> bool:
        text = f'[[objects]]\nname = "a"\nshape = {shape}\nmaterial = "water"\n{more}\n'
        return objects(tmp_path, text)[0].smooth

    assert smooth("{ cylinder = [1, 2] }")
    assert not smooth("{ box = [1, 2, 3] }")
    assert not smooth("{ cylinder = [1, 2] }", "smooth = false")


def test_units_of_meshes(tmp_path: Path) -> None:
    for name in ("a.ply", "b.glb", "c.obj"):
        (tmp_path / name).write_text("x", encoding="utf-8")
    text = '[units]\nlength = "in"\n' + "".join(
        f'[[objects]]\nname = "{name}"\nmesh = "{name}"\nmaterial = "ice"\n{more}\n'
        for name, more in (("a.ply", ""), ("b.glb", ""), ("c.obj", 'mesh_unit = "mm"'))
    )
    assert [item.metres_per_unit for item in objects(tmp_path, text)] == [0.0254, 1.0, 0.001]


def test_placements_share_what_they_place(tmp_path: Path) -> None:
    text = shots.ball(
        "transform = { translation = [0, 1, 0] }\n"
        "placements = [{ translation = [1, 0, 0] }, { rotation = [0, 90, 0], scale = 2 }, "
        "{ translation = { 1001 = [0, 0, 0], 1002 = [0, 0, 8] } }]"
    )
    found = objects(tmp_path, text)
    assert [item.name for item in found] == ["ball[0]", "ball[1]", "ball[2]"]
    assert found[0].shape is found[2].shape
    assert found[0].matrices[0, :, 3].tolist() == [1.0, 1.0, 0.0]
    assert found[1].matrices[0].tolist() == [[0.0, 0.0, 2.0, 0.0], [0.0, 2.0, 0.0, 1.0], [-2.0, 0.0, 0.0, 0.0]]
    assert [item.matrices.shape[0] for item in found] == [1, 1, 5]
    assert found[2].matrices[:, 2, 3].tolist() == [0.0, 0.0, 0.0, 1.0, 2.0]


def test_materials_of_the_shot(tmp_path: Path) -> None:
    text = (
        '[materials.cold]\nlike = "water"\ntemperature = 4\nabsorption = { per_metre = [[500, 1.5]] }\n'
        "[materials.plain]\nrefractive_index = 1.5\n"
        "[materials.law]\nrefractive_index = { cauchy = [1.5, 0.004] }\n"
        "[materials.steps]\nrefractive_index = { table = [[400, 1.53], [700, 1.51]] }\n"
        "[materials.glass]\nrefractive_index = { sellmeier = [1.0, 0.006, 0.2, 0.02] }\n"
    )
    text += "".join(
        shots.ball(name=name).replace('"water"', f'"{name}"') for name in ("cold", "plain", "law", "steps", "glass")
    )
    cold, *others = (item.material for item in objects(tmp_path, text))
    assert cold is not None
    assert (cold.like, cold.temperature_c, cold.salinity, cold.absorption_per_m) == ("water", 4.0, 0.0, ((500.0, 1.5),))
    laws = [item.dispersion for item in others if item is not None and item.dispersion is not None]
    assert [(law.model, law.values) for law in laws] == [
        ("constant", (1.5,)),
        ("cauchy", (1.5, 0.004)),
        ("table", ((400.0, 1.53), (700.0, 1.51))),
        ("sellmeier", (1.0, 0.006, 0.2, 0.02)),
    ]


def test_library_materials_by_any_of_their_names(tmp_path: Path) -> None:
    found = objects(tmp_path, shots.ball().replace('"water"', '"Soda-Lime Glass"'))
    assert found[0].material is not None
    assert found[0].material.like == "Soda-Lime Glass"


def test_lights(tmp_path: Path) -> None:
    head = '[[lights]]\nname = "lamp"\nshape = { disc = 0.1 }\nluminance = { 1001 = 0, 1003 = 200 }\n'
    for line, expected in (
        ("temperature = 3200", (None, 3200.0, None, ())),
        ("spectrum = [[400, 1], [700, 2]]", (None, None, ((400.0, 1.0), (700.0, 2.0)), ())),
        ("lines = [[589.6, 0.25], [589.0, 0.75]]", (None, None, None, ((589.0, 0.75), (589.6, 0.25)))),
        ("colour = 0.5\nlines = [[589.0, 0.4]]", ((0.5, 0.5, 0.5), None, None, ((589.0, 0.4),))),
    ):
        light = objects(tmp_path, head + line, 1002)[0].emission
        assert light is not None
        assert light.luminance == 100.0
        assert (light.colour, light.temperature_k, light.spectrum, light.lines) == expected


def test_files_by_frame(tmp_path: Path) -> None:
    for number in (1001, 1002):
        (tmp_path / f"spray.{number:06d}.ply").write_text("x", encoding="utf-8")
    shot = shots.read(tmp_path, '[[objects]]\nname = "s"\nmesh = "spray.######.ply"\nmaterial = "water"\n')
    assert shot.at(1001).objects[0].mesh == tmp_path / "spray.001001.ply"
    assert shot.at(1002).objects[0].mesh == tmp_path / "spray.001002.ply"


def test_what_stands_still_is_resolved_once(tmp_path: Path) -> None:
    moving = "transform = { translation = { 1001 = [0, 0, 0], 1009 = [8, 0, 0] } }"
    shot = shots.read(tmp_path, shots.ball() + shots.ball(moving, "mover"))
    first, second = shot.at(1001), shot.at(1005)
    assert first.objects[0] is second.objects[0]
    assert second.objects[1].matrices[2, 0, 3] == 4.0
