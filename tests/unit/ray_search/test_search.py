"""Ray search against every primitive in turn, by other formulas, and against solids whose hits are known."""

from __future__ import annotations

import math
import sys
from pathlib import Path

import numpy as np
import pytest
import trimesh

from renderer.arrays.assets import SphereAsset
from renderer.arrays.looks import CLEAR, OPAQUE, SHEET
from renderer.ray_search.build import build_world, object_primitives
from renderer.ray_search.hits import hit_frame, leave, triangle_corners
from renderer.ray_search.object_set import set_item, set_with, set_without
from renderer.ray_search.search import any_hit, closest_hit, objects_at
from renderer.ray_search.trace import trace_rays

sys.path.insert(0, str(Path(__file__).parent))
from plain_search import all_hits, matrix_at, mesh_asset, objects_of, placed

FRESH = (-1, -1, 0.0, -1, -1)


def turned(angle, axis, shift, scale=1.0):
    """A rigid matrix (3, 4) with a scale."""
    matrix = trimesh.transformations.rotation_matrix(angle, axis)[:3]
    matrix[:, :3] *= scale
    matrix[:, 3] = shift
    return matrix


def directions(rng, n):
    """Unit vectors (n, 3), evenly spread."""
    d = rng.normal(size=(n, 3))
    return d / np.linalg.norm(d, axis=1)[:, None]


def inward(rng, origins):
    """Unit vectors (n, 3) from points towards the middle of the scene."""
    d = rng.uniform(-0.5, 0.5, origins.shape) - origins
    return d / np.linalg.norm(d, axis=1)[:, None]


def soup(rng, n):
    """Triangles that have no order at all."""
    centres = rng.uniform(-1.0, 1.0, (n, 1, 3))
    return mesh_asset((centres + rng.normal(size=(n, 3, 3)) * 0.4).reshape(-1, 3), np.arange(3 * n).reshape(n, 3))


def mixed(rng):
    """Everything at once: lone meshes and spheres, shared, mirrored, scaled and moving ones."""
    box = trimesh.creation.box((0.5, 0.7, 0.3))
    spheres = SphereAsset(rng.uniform(-1.0, 1.0, (40, 3)), rng.uniform(0.02, 0.3, 40))
    drop = SphereAsset(np.array([[0.1, 0.2, 0.0]]), np.array([0.2]))
    assets = [soup(rng, 150), mesh_asset(box.vertices, box.faces), spheres, drop, soup(rng, 30), soup(rng, 3)]
    mirror = np.diag([1.0, -2.0, 0.5]) @ turned(0.7, [1, 1, 0], [0, 0, 0])
    placements = [
        placed(0, 0, turned(0.3, [0, 1, 0], [0.1, 0.0, 0.2])),
        placed(1, 1, turned(0.5, [1, 0, 0], [0.6, 0.1, 0.0])),
        placed(1, 2, mirror),
        placed(2, 3),
        placed(3, 4, turned(0.2, [0, 0, 1], [-0.5, 0.0, 0.0], 2.0), turned(0.2, [0, 0, 1], [0.5, 0.3, 0.0], 2.0)),
        placed(4, 5, turned(0.0, [0, 0, 1], [-0.5, 0, 0]), turned(1.0, [0, 0, 1], [0, 0.5, 0]), np.eye(3, 4)),
        placed(5, 6),
        placed(3, 7, turned(0.0, [0, 0, 1], [0.5, 0.5, 0.5], 0.5)),
    ]
    return assets, placements, build_world(assets, placements, objects_of([OPAQUE] * 8))


@pytest.mark.parametrize("time", [0.0, 0.37, 1.0])
def test_every_hit_in_order(time):
    """Walking from hit to hit finds each that the plain search finds, in its order, and then no more."""
    rng = np.random.default_rng(5)
    assets, placements, world = mixed(rng)
    n_hits = 0
    origins = rng.uniform(-1.5, 1.5, (150, 3))
    for o, d in zip(origins, inward(rng, origins), strict=True):
        t, instance, primitive = 0.0, -1, -1
        for expected in all_hits(assets, placements, o, d, time):
            t, instance, primitive, _u, _v, _crowded = closest_hit(
                world, *o, *d, time, math.inf, -1, -1, t, instance, primitive
            )
            assert (instance, primitive) == expected[1:]
            assert t == pytest.approx(expected[0], abs=1e-9)
            n_hits += 1
        assert closest_hit(world, *o, *d, time, math.inf, -1, -1, t, instance, primitive)[1] == -1
    assert n_hits > 500


@pytest.mark.parametrize("time", [0.0, 0.6])
def test_any_hit_is_found_exactly_when_there_is_one(time):
    """And the one given lies on the ray within reach."""
    rng = np.random.default_rng(6)
    assets, placements, world = mixed(rng)
    origins = rng.uniform(-1.5, 1.5, (200, 3))
    for o, d in zip(origins, inward(rng, origins), strict=True):
        reach = rng.uniform(0.05, 1.0)
        near = {hit[1:] for hit in all_hits(assets, placements, o, d, time) if hit[0] < reach}
        found = any_hit(world, *o, *d, time, reach, -1, -1)
        assert found in near if near else found == (-1, -1)


def test_points_and_normals():
    """A hit's point lies on the ray; normals are unit and, of closed solids, outward under mirroring too."""
    rng = np.random.default_rng(7)
    _assets, placements, world = mixed(rng)
    o = rng.uniform(-1.5, 1.5, (600, 3))
    d = directions(rng, 600)
    time = 0.25
    t, instance, primitive, uv = trace_rays(world, o, d, time)
    hit = np.flatnonzero(instance >= 0)
    assert len(hit) > 200
    for k in hit:
        frame = hit_frame(world, instance[k], primitive[k], uv[k, 0], uv[k, 1], *o[k], *d[k], t[k], time)
        assert frame[:3] == pytest.approx(o[k] + t[k] * d[k], abs=1e-12)
        assert np.linalg.norm(frame[3:6]) == pytest.approx(1.0, abs=1e-14)
        assert frame[11] == placements[instance[k]].object_id
        assert 0.0 < frame[12] < 1e-13
        asset = placements[instance[k]].asset
        if asset in (1, 3):
            middle = matrix_at(placements[instance[k]], time)[:, 3]
            if asset == 3:
                middle = matrix_at(placements[instance[k]], time) @ [0.1, 0.2, 0.0, 1.0]
            assert np.dot(frame[3:6], frame[:3] - middle) > 0.0
        if asset == 1:
            corners = np.reshape(triangle_corners(world, instance[k], primitive[k], time), (3, 3))
            weights = [1.0 - uv[k].sum(), *uv[k]]
            assert frame[:3] == pytest.approx(weights @ corners, abs=1e-13)


def test_equal_distances_go_by_instance_then_primitive():
    """Two boxes in the same place: each of their faces is met once, the earlier instance first, and it is crowded."""
    box = trimesh.creation.box((2.0, 2.0, 2.0))
    asset = mesh_asset(box.vertices, box.faces)
    world = build_world([asset, asset], [placed(0, 0), placed(1, 1)], objects_of([CLEAR] * 2))
    ray = (0.3, 0.1, -5.0, 0.0, 0.0, 1.0)
    t, instance, primitive, _, _, crowded = closest_hit(world, *ray, 0.0, math.inf, *FRESH)
    assert (t, instance, crowded) == (4.0, 0, True)
    t2, instance2, primitive2, _, _, crowded = closest_hit(world, *ray, 0.0, math.inf, -1, -1, t, instance, primitive)
    assert (t2, instance2, primitive2, crowded) == (4.0, 1, primitive + 12, False)
    t3, instance3 = closest_hit(world, *ray, 0.0, math.inf, -1, -1, t2, instance2, primitive2)[:2]
    assert (t3, instance3) == (6.0, 0)
    assert closest_hit(world, *ray, 0.0, 4.0, *FRESH)[1] == 0, "t_max itself counts"
    assert closest_hit(world, *ray, 0.0, 3.999, *FRESH)[1] == -1
    assert any_hit(world, *ray, 0.0, 4.0, -1, -1) == (-1, -1), "t_max itself does not count"


def test_the_element_being_left_is_not_met():
    """A triangle not at all; of a sphere the near side only, so that a ray inside meets the far side."""
    ball = SphereAsset(np.zeros((1, 3)), np.ones(1))
    box = trimesh.creation.box((2.0, 2.0, 2.0))
    world = build_world(
        [ball, mesh_asset(box.vertices, box.faces)],
        [placed(0, 0), placed(1, 1, turned(0.0, [0, 0, 1], [9, 0, 0]))],
        objects_of([0, 0]),
    )
    ray = (-1.0, 0.0, 0.0, 1.0, 0.0, 0.0)
    assert closest_hit(world, *ray, 0.0, math.inf, 0, 0, 0.0, -1, -1)[:3] == (2.0, 0, 0)
    assert any_hit(world, *ray, 0.0, 3.0, 0, 0) == (0, 0)
    t, instance = closest_hit(world, *ray, 0.0, math.inf, 0, 0, 2.0, 0, 0)[:2]
    assert (t, instance) == (9.0, 1)
    assert any_hit(world, 7.0, 0.3, 0.1, 1.0, 0.0, 0.0, 0.0, 2.0, 1, any_of(world)) == (-1, -1)


def any_of(world):
    """The triangle of the box that the ray from (7, 0.3, 0.1) along x meets first."""
    return closest_hit(world, 7.0, 0.3, 0.1, 1.0, 0.0, 0.0, 0.0, math.inf, *FRESH)[2]


def test_a_left_surface_is_left():
    """`leave` steps off on the side that the ray goes to, by the error."""
    assert leave(1.0, 2.0, 3.0, 0.0, 0.0, 1.0, 0.5, 0.1, 0.0, 0.9) == (1.0, 2.0, 3.5)
    assert leave(1.0, 2.0, 3.0, 0.0, 0.0, 1.0, 0.5, 0.1, 0.0, -0.9) == (1.0, 2.0, 2.5)


def test_normals_and_texture_are_interpolated():
    """At the corners they are the corners' own, between them their mean by the barycentrics."""
    from renderer.arrays.assets import TriangleAsset

    normals = np.array([[0.0, 0.6, 0.8], [0.6, 0.0, 0.8], [0.0, 0.0, 1.0]])
    uvs = np.array([[0.0, 0.0], [1.0, 0.25], [0.5, 1.0]])
    flat = mesh_asset([[5.0, 0, 0], [6, 0, 0], [5, 1, 0]], [[0, 1, 2]])
    asset = TriangleAsset(np.array([[0.0, 0, 0], [1, 0, 0], [0, 1, 0]]), flat.faces, normals, uvs)
    world = build_world([flat, asset], [placed(0, 0), placed(1, 1)], objects_of([0, 0]))
    for u, v in [(0.0, 0.0), (1.0, 0.0), (0.0, 1.0), (0.2, 0.3)]:
        weights = np.array([1.0 - u - v, u, v])
        frame = hit_frame(world, 1, 1, u, v, 0.2, 0.2, 1.0, 0.0, 0.0, -1.0, 1.0, 0.0)
        mean = weights @ normals
        assert frame[6:9] == pytest.approx(mean / np.linalg.norm(mean), abs=1e-15)
        assert frame[9:11] == pytest.approx(weights @ uvs, abs=1e-15)
    assert hit_frame(world, 0, 0, 0.2, 0.2, 5.2, 0.2, 1.0, 0.0, 0.0, -1.0, 1.0, 0.0)[6:11] == (0.0, 0.0, 1.0, 0.0, 0.0)


def test_an_object_lists_its_elements():
    """Placement by placement; primitives are numbered through all assets, placed or not."""
    rng = np.random.default_rng(1)
    assets = [soup(rng, 5), soup(rng, 3), SphereAsset(np.zeros((2, 3)), np.ones(2))]
    world = build_world(assets, [placed(1, 0), placed(2, 1), placed(1, 1)], objects_of([0, 0, 0]))
    instance, primitive = object_primitives(world, 1)
    assert (instance.dtype, primitive.dtype) == (np.int32, np.int32)
    assert instance.tolist() == [1, 1, 2, 2, 2]
    assert primitive.tolist() == [8, 9, 5, 6, 7]
    assert [part.tolist() for part in object_primitives(world, 2)] == [[], []]


def test_an_empty_world_is_dark():
    """Nothing placed: nothing hit, and no object holds a point."""
    world = build_world([], [], objects_of([]))
    assert closest_hit(world, 0.0, 0.0, 0.0, 0.0, 0.0, 1.0, 0.0, math.inf, *FRESH)[1] == -1
    assert any_hit(world, 0.0, 0.0, 0.0, 0.0, 0.0, 1.0, 0.0, math.inf, -1, -1) == (-1, -1)
    assert objects_at(world, 0.0, 0.0, 0.0, 0.0, 0.0, 0.6, 0.8) == (0, 0, True)


def test_no_ray_is_lost():
    """Rays from inside closed meshes, many aimed at edges and corners, never get out without a hit."""
    rng = np.random.default_rng(9)
    for mesh in (trimesh.creation.icosphere(3), trimesh.creation.box(), trimesh.creation.cylinder(0.3, 2.0)):
        for scale in (1e-3, 1.0, 1e3):
            points = mesh.vertices * scale
            asset = mesh_asset(points, mesh.faces)
            world = build_world([asset], [placed(0, 0)], objects_of([0]))
            shared = build_world([asset], [placed(0, 0)] * 2, objects_of([0]))
            n = 6000
            o = rng.uniform(-0.1, 0.1, (n, 3)) * scale
            pairs = points[mesh.edges_unique[rng.integers(len(mesh.edges_unique), size=n)]]
            f = np.where(rng.random(n) < 0.3, 0.0, rng.random(n))[:, None]
            d = pairs[:, 0] + f * (pairs[:, 1] - pairs[:, 0]) - o
            d /= np.linalg.norm(d, axis=1)[:, None]
            assert (trace_rays(world, o, d)[1] == 0).all()
            assert (trace_rays(shared, o, d)[1] == 0).all()


def items(low, high):
    """What a set holds."""
    return sorted(item for item in (set_item(low, high, k) for k in range(8)) if item >= 0)


def test_nested_solids_hold_a_point():
    """A glass with water in it, a bubble in the water, and a stone that no light enters."""
    ball = trimesh.creation.icosphere(3)
    assets = [mesh_asset(ball.vertices * s, ball.faces) for s in (1.0, 0.8)]
    assets += [SphereAsset(np.array([[0.0, 0.0, 0.0]]), np.array([0.5])), mesh_asset(ball.vertices * 0.2, ball.faces)]
    world = build_world(
        assets, [placed(0, 0), placed(1, 1), placed(2, 2), placed(3, 3)], objects_of([CLEAR] * 3 + [OPAQUE])
    )
    u = np.array([0.3, 0.5, math.sqrt(1 - 0.34)])
    for radius, expected in [(0.1, [0, 1, 2]), (0.4, [0, 1, 2]), (0.6, [0, 1]), (0.9, [0]), (1.1, [])]:
        for point in directions(np.random.default_rng(3), 20) * radius:
            low, high, ok = objects_at(world, *point, 0.0, *u)
            assert ok
            assert items(low, high) == expected


def test_an_object_of_two_parts_that_overlap_counts_twice():
    """It must be left twice, so it is held twice."""
    drops = SphereAsset(np.array([[0.0, 0.0, 0.0], [0.5, 0.0, 0.0]]), np.ones(2))
    world = build_world([drops], [placed(0, 0)], objects_of([CLEAR]))
    low, high, ok = objects_at(world, 0.25, 0.1, 0.0, 0.0, 0.36, 0.48, 0.8)
    assert (items(low, high), ok) == ([0, 0], True)


def test_below_a_sheet():
    """Below its normals' side is inside, whichever way is asked; beside it is outside."""
    sheet = mesh_asset([[-9, 0, -9], [-9, 0, 9], [9, 0, 9], [9, 0, -9]], [[0, 1, 2], [0, 2, 3]])
    world = build_world([sheet], [placed(0, 0)], objects_of([SHEET]))
    for y in (-1.0, 1.0):
        for u in ((0.0, 0.8, 0.6), (0.0, -0.8, 0.6)):
            low, high, ok = objects_at(world, 0.1, y, 0.3, 0.0, *u)
            assert (items(low, high), ok) == ([0] if y < 0 else [], True)
    low, high, ok = objects_at(world, 50.0, -1.0, 0.3, 0.0, 0.0, 0.8, 0.6)
    assert (items(low, high), ok) == ([], True)


def test_a_query_through_an_edge_is_not_sure():
    """Both triangles at an edge are met, so that the count is wrong: the caller is told."""
    box = trimesh.creation.box((2.0, 2.0, 2.0))
    world = build_world([mesh_asset(box.vertices, box.faces)], [placed(0, 0)], objects_of([CLEAR]))
    s = math.sqrt(0.5)
    assert not objects_at(world, 0.0, 0.0, 0.3, 0.0, s, s, 0.0)[2]


def test_sets():
    """Eight objects fit, each as often as put in; a ninth, or one that is not there, leaves the set as it is."""
    low, high = np.uint64(0), np.uint64(0)
    members = [5, 0, 65534, 7, 7, 300, 12, 1]
    for k, item in enumerate(members):
        low, high, ok = set_with(low, high, item)
        assert ok
        assert items(low, high) == sorted(members[: k + 1])
    assert set_with(low, high, 9) == (low, high, False)
    assert set_without(low, high, 9) == (low, high, False)
    for item in members:
        low, high, ok = set_without(low, high, item)
        assert ok
    assert (low, high) == (0, 0)
    assert not set_with(low, high, 65535)[2]
