"""Built-in shapes: closed ones are watertight, outward and exact in size; normals are those of the true surface."""

from __future__ import annotations

import math

import numpy as np
import pytest
import trimesh

from renderer.arrays.assets import SphereAsset, TriangleAsset
from renderer.base.errors import InputError
from renderer.geometry.inspection import inspect_mesh
from renderer.geometry.round_solids import sphere_mesh
from renderer.geometry.shapes import build_shape
from renderer.geometry.sheets import wave_height
from renderer.shot.model import Shape

WAVES = ((0.02, 0.5, 30.0, 10.0), (0.01, 0.3, 100.0, 0.0))
LENS = {"radius_front": 0.1, "radius_back": 0.2, "thickness": 0.02, "diameter": 0.05}
TANK = {"size": (1.0, 2.0, 3.0), "wall": 0.1, "fill": 0.5}
BOWL = {"radius": 0.1, "wall": 0.004, "fill": 0.75}
BLOCK = {"size": (2.0, 3.0), "cells": (20, 30), "waves": WAVES, "depth": 0.5}


def cap_volume(radius: float, half: float) -> float:
    """Of the cap of a sphere that is `half` wide from its axis."""
    sag = radius - math.sqrt(radius**2 - half**2)
    return math.pi * sag**2 * (3.0 * radius - sag) / 3.0


def lens_volume() -> float:
    """By its two caps and the cylinder between."""
    sags = sum(r - math.sqrt(r**2 - 0.025**2) for r in (0.1, 0.2))
    return cap_volume(0.1, 0.025) + cap_volume(0.2, 0.025) + math.pi * 0.025**2 * (0.02 - sags)


# kind, sizes, bounds low, bounds high, true volume, relative tolerance: that of the facets, pi^2 / 1.5 over segments^2
# for a solid of 128 segments (4.0e-4), zero for flat ones
CLOSED = [
    ("box", {"size": (1.0, 2.0, 3.0)}, (-0.5, -1.0, -1.5), (0.5, 1.0, 1.5), 6.0, 1e-12),
    (
        "prism",
        {"apex_deg": 60.0, "side": 1.0, "length": 2.0},
        (-0.5, -(0.75**0.5) / 2, -1.0),
        (0.5, 0.75**0.5 / 2, 1.0),
        0.75**0.5,
        1e-12,
    ),
    ("cylinder", {"radius": 0.5, "height": 3.0}, (-0.5, -1.5, -0.5), (0.5, 1.5, 0.5), 0.75 * math.pi, 5e-4),
    ("rod", {"radius": 0.5, "height": 3.0, "segments": 512}, (-0.5, -1.5, -0.5), (0.5, 1.5, 0.5), 0.75 * math.pi, 3e-5),
    ("lens", LENS, (-0.025, -0.025, -0.01), (0.025, 0.025, 0.01), lens_volume(), 1e-3),
    ("tank", TANK, (-0.5, -1.0, -1.5), (0.5, 1.0, 1.5), 6.0 - 0.8 * 1.9 * 2.8, 1e-12),
    ("tank_filling", TANK, (-0.45, -0.95, -1.45), (0.45, 0.05, 1.45), 0.9 * 1.0 * 2.9, 1e-12),
    ("bowl", BOWL, (-0.1, -0.1, -0.1), (0.1, 0.0, 0.1), 2.0 * math.pi / 3.0 * (0.1**3 - 0.096**3), 5e-3),
    ("water_surface", BLOCK, (-1.0, -0.5, -1.5), None, 3.0, 1e-12),
]


@pytest.mark.parametrize(
    ("kind", "sizes", "low", "high", "volume", "tolerance"), CLOSED, ids=[row[0] for row in CLOSED]
)
def test_closed_shapes_are_watertight_outward_and_exact(kind, sizes, low, high, volume, tolerance):
    (mesh,) = build_shape(Shape(kind, sizes)).assets
    found = inspect_mesh(mesh)
    assert (found.watertight, found.consistent, found.outward, found.n_components) == (True, True, True, 1)
    assert (found.n_degenerate, found.n_duplicate, found.n_crowded_edges, found.n_normals_against) == (0, 0, 0, 0)
    assert found.low_m == pytest.approx(low, abs=1e-12)
    if high is not None:
        assert found.high_m == pytest.approx(high, abs=1e-12)
    assert found.volume_m3 == pytest.approx(volume, rel=tolerance)
    assert found.volume_m3 <= volume * (1.0 + 1e-12)  # facets lie inside a solid that bulges
    other = trimesh.Trimesh(mesh.vertices_m, mesh.faces, process=False)
    other.merge_vertices(merge_norm=True, merge_tex=True)
    assert other.is_watertight
    assert other.is_winding_consistent
    assert other.volume == pytest.approx(found.volume_m3, rel=1e-9)
    assert not mesh.vertices_m.flags.writeable
    assert mesh.faces.dtype == np.int32


@pytest.mark.parametrize(("front", "back"), [(0.1, 0.2), (-0.1, 0.2), (0.0, 0.1), (-0.1, -0.1), (0.1, 0.0)])
def test_lens_vertices_and_normals_lie_on_the_spheres(front, back):
    sizes = {**LENS, "radius_front": front, "radius_back": back}
    (mesh,) = build_shape(Shape("lens", sizes)).assets
    found = inspect_mesh(mesh)
    assert found.watertight
    assert found.outward
    assert found.n_normals_against == 0
    for radius, side in ((front, 1.0), (back, -1.0)):
        face = mesh.vertex_normals[:, 2] * side > 0.5
        points, normals = mesh.vertices_m[face], mesh.vertex_normals[face]
        assert points[:, 2].max() * side >= 0.0
        if radius == 0.0:
            assert np.abs(points[:, 2] - side * 0.01).max() < 1e-15
            assert np.abs(normals - (0.0, 0.0, side)).max() < 1e-15
            continue
        centre = np.array([0.0, 0.0, side * (0.01 - radius)])
        assert np.abs(np.linalg.norm(points - centre, axis=1) - abs(radius)).max() < 1e-15
        assert np.abs(normals - (points - centre) / radius).max() < 1e-13


def test_lens_may_have_a_sharp_rim():
    sag = 0.1 - math.sqrt(0.1**2 - 0.025**2)
    sizes = {"radius_front": 0.1, "radius_back": 0.1, "thickness": 2.0 * sag, "diameter": 0.05}
    (mesh,) = build_shape(Shape("lens", sizes)).assets
    found = inspect_mesh(mesh)
    assert found.watertight
    assert found.n_degenerate == 0


def test_cylinder_keeps_its_edges_in_the_normals():
    (mesh,) = build_shape(Shape("cylinder", {"radius": 0.5, "height": 1.0, "segments": 64})).assets
    side = np.abs(mesh.vertex_normals[:, 1]) < 0.5
    radial = mesh.vertices_m[side] * (2.0, 0.0, 2.0)
    assert np.abs(mesh.vertex_normals[side] - radial).max() < 1e-15
    assert set(map(tuple, np.abs(mesh.vertex_normals[~side]))) == {(0.0, 1.0, 0.0)}


def test_sphere_is_analytic_and_its_mesh_exact():
    (ball,) = build_shape(Shape("sphere", {"radius": 0.3})).assets
    assert isinstance(ball, SphereAsset)
    assert ball.radii_m.tolist() == [0.3]
    mesh = sphere_mesh(0.3, 64)
    assert np.abs(np.linalg.norm(mesh.vertices_m, axis=1) - 0.3).max() < 2e-16
    assert np.abs(mesh.vertex_normals * 0.3 - mesh.vertices_m).max() < 2e-16
    found = inspect_mesh(mesh)
    assert found.watertight
    assert found.outward
    assert found.low_m == pytest.approx((-0.3, -0.3, -0.3), abs=1e-15)


@pytest.mark.parametrize(("kind", "sizes"), [("tank", TANK), ("bowl", BOWL)])
def test_filling_is_closed_and_flat_at_the_fill_height(kind, sizes):
    built = build_shape(Shape(kind, sizes))
    (filling,) = built.filling
    (alone,) = build_shape(Shape(f"{kind}_filling", sizes)).assets
    assert np.array_equal(filling.vertices_m, alone.vertices_m)
    found = inspect_mesh(filling)
    assert found.watertight
    assert found.outward
    floor, depth = (-0.9, 1.9) if kind == "tank" else (-0.096, 0.096)
    assert found.high_m[1] == pytest.approx(floor + sizes["fill"] * depth, abs=1e-12)


@pytest.mark.parametrize(("radius", "wall"), [(0.1, 0.004), (0.1, 0.0002), (2.0, 1.9)])
def test_bowl_and_filling_overlap_all_over(radius, wall):
    """Every facet of the filling lies between the inner and the outer facets of the glass, so there is no air gap."""
    built = build_shape(Shape("bowl", {"radius": radius, "wall": wall, "fill": 0.8}))
    glass, filling = built.assets[0], built.filling[0]
    sunk = filling.vertices_m[filling.faces].mean(axis=1)
    wet = sunk[filling.vertices_m[filling.faces][:, :, 1].min(axis=1) < filling.vertices_m[:, 1].max() - 1e-12]
    outer = glass.vertices_m[glass.faces].mean(axis=1)
    outer = outer[np.linalg.norm(outer, axis=1) > radius - wall / 2.0]
    outer = outer[outer[:, 1] < -1e-9]
    assert np.linalg.norm(wet, axis=1).min() > radius - wall + 0.3 * wall
    assert np.linalg.norm(filling.vertices_m, axis=1).max() < np.linalg.norm(outer, axis=1).min() - 0.3 * wall


def test_empty_vessel_has_no_filling():
    built = build_shape(Shape("tank", {**TANK, "fill": 0.0}))
    assert built.filling == ()
    with pytest.raises(InputError, match="has no filling"):
        build_shape(Shape("tank_filling", {**TANK, "fill": 0.0}))


def test_water_surface_normals_are_the_slope_of_its_waves():
    (mesh,) = build_shape(Shape("water_surface", {**BLOCK, "depth": 0.0})).assets
    x, z = mesh.vertices_m[:, 0], mesh.vertices_m[:, 2]
    height, _, _ = wave_height(x, z, WAVES)
    assert np.abs(height - mesh.vertices_m[:, 1]).max() == 0.0
    step = 1e-6
    slope_x = (wave_height(x + step, z, WAVES)[0] - wave_height(x - step, z, WAVES)[0]) / (2 * step)
    slope_z = (wave_height(x, z + step, WAVES)[0] - wave_height(x, z - step, WAVES)[0]) / (2 * step)
    expected = np.column_stack([-slope_x, np.ones_like(x), -slope_z])
    expected /= np.linalg.norm(expected, axis=1, keepdims=True)
    assert np.abs(mesh.vertex_normals - expected).max() < 1e-9
    found = inspect_mesh(mesh)
    assert not found.watertight
    assert found.n_open_edges == 2 * (20 + 30)


def test_wave_runs_clockwise_from_minus_z():
    """A wave to 90 degrees runs along +x: its height rises with x at phase 0 and does not change along z."""
    height, slope_x, slope_z = wave_height(np.zeros(1), np.zeros(1), ((0.1, 2.0, 90.0, 0.0),))
    assert height[0] == 0.0
    assert slope_x[0] == pytest.approx(0.1 * math.pi, rel=1e-14)
    assert slope_z[0] == 0.0


@pytest.mark.parametrize(("kind", "sizes"), [("rectangle", {"size": (2.0, 1.0)}), ("disc", {"radius": 1.0})])
def test_open_shapes_face_plus_z(kind, sizes):
    (mesh,) = build_shape(Shape(kind, sizes)).assets
    assert isinstance(mesh, TriangleAsset)
    a, b, c = (mesh.vertices_m[mesh.faces[:, k]] for k in range(3))
    assert (np.cross(b - a, c - a)[:, 2] > 0.0).all()
    assert mesh.uvs.min() == pytest.approx(0.0)
    assert mesh.uvs.max() == pytest.approx(1.0)


BROKEN = [
    ("cube", {"size": (1.0, 1.0, 1.0)}, "no shape named"),
    ("box", {"size": (1.0, 1.0)}, "3 lengths"),
    ("box", {"size": (1.0, 0.0, 1.0)}, "3 lengths"),
    ("box", {}, "lacks a size"),
    ("sphere", {"radius": -1.0}, "more than 0"),
    ("sphere", {"radius": float("nan")}, "more than 0"),
    ("cylinder", {"radius": 1.0, "height": 1.0, "segments": 2}, "3 to 20000"),
    ("lens", {**LENS, "radius_front": 0.01}, "at least half its diameter"),
    ("lens", {**LENS, "thickness": 0.001}, "a thickness of at least"),
    ("prism", {"apex_deg": 180.0, "side": 1.0, "length": 1.0}, "less than 180"),
    ("tank", {**TANK, "wall": 0.5}, "less than half its width"),
    ("tank", {**TANK, "fill": 1.5}, "0 to 1"),
    ("bowl", {**BOWL, "wall": 0.2}, "less than its radius"),
    ("water_surface", {**BLOCK, "depth": 0.02}, "more than its waves' amplitudes"),
    ("water_surface", {**BLOCK, "cells": (100_000, 100_000)}, "4,000,000 in all"),
    ("water_surface", {**BLOCK, "waves": ((0.1, 0.0, 0.0, 0.0),)}, "more than 0 m"),
]


@pytest.mark.parametrize(("kind", "sizes", "said"), BROKEN, ids=[f"{row[0]}-{k}" for k, row in enumerate(BROKEN)])
def test_sizes_that_make_no_shape_are_one_sentence(kind, sizes, said):
    with pytest.raises(InputError) as caught:
        build_shape(Shape(kind, sizes))
    assert len(caught.value.faults) == 1
    assert said in str(caught.value)
