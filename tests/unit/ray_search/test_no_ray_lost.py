"""No ray gets between triangles, and none changes side: short in the daily run, by the million as a study.

Nothing outside is needed to judge: a ray from inside a closed surface must meet it, and from its inside.
"""

from __future__ import annotations

import math
import sys
from pathlib import Path

import numpy as np
import pytest
import trimesh

from renderer.arrays.assets import SphereAsset
from renderer.base.jit import kernel, prange
from renderer.base.vectors import dot
from renderer.ray_search.build import build_world
from renderer.ray_search.hits import hit_frame, leave
from renderer.ray_search.search import closest_hit
from renderer.ray_search.trace import trace_rays

sys.path.insert(0, str(Path(__file__).parent))
from plain_search import mesh_asset, objects_of, placed

TURN = trimesh.transformations.rotation_matrix(0.7, [0.3, 1.0, -0.4])[:3, :3]
SCALES_M = (1e-3, 1.0, 1e3)
RING = 1.0, 0.3


def spiky():
    """A ball with needles: edges at every angle, triangles long and thin."""
    mesh = trimesh.creation.icosphere(4)
    factors = np.where(np.random.default_rng(2).random(len(mesh.vertices)) < 0.1, 4.0, 1.0)
    return trimesh.Trimesh(mesh.vertices * factors[:, None], mesh.faces, process=False)


SOLIDS = {
    "ball": lambda: trimesh.creation.icosphere(5),
    "box": lambda: trimesh.creation.box((1.0, 2.0, 0.3)),
    "cylinder": lambda: trimesh.creation.cylinder(0.3, 2.0, sections=200),
    "ring": lambda: trimesh.creation.torus(*RING, 60, 40),
    "needles": spiky,
}


def inside(rng, name, n):
    """Points (n, 3) well inside a solid."""
    points = rng.uniform(-0.1, 0.1, (n, 3))
    if name == "ring":
        a = rng.uniform(0.0, 2.0 * math.pi, n)
        points += RING[0] * np.stack([np.cos(a), np.sin(a), np.zeros(n)], axis=1)
    return points


def aims(rng, mesh, n):
    """Points (n, 3): a third on the surface at random, a third on edges, a third corners."""
    faces = mesh.vertices[mesh.faces[rng.integers(len(mesh.faces), size=n)]]
    weights = rng.dirichlet([1.0, 1.0, 1.0], n)
    third = n // 3
    weights[:third, 2] = 0.0
    weights[:third] /= weights[:third].sum(axis=1)[:, None]
    weights[third : 2 * third] = np.eye(3)[0]
    return (weights[:, :, None] * faces).sum(axis=1)


def escaped(name, scale, n, seed):
    """How many of n rays get out of a solid, of a size and away from the origin, lone and as a shared instance."""
    rng, mesh = np.random.default_rng(seed), SOLIDS[name]()
    shift = np.array([3.0, -2.0, 5.0]) * scale
    points = mesh.vertices @ TURN.T * scale + shift
    origins = inside(rng, name, n) @ TURN.T * scale + shift
    d = aims(rng, mesh, n) @ TURN.T * scale + shift - origins
    d /= np.linalg.norm(d, axis=1)[:, None]
    asset = mesh_asset(points, mesh.faces)
    lone = build_world([asset], [placed(asset=0, object_id=0)], objects_of([0]))
    local = mesh_asset(mesh.vertices, mesh.faces)
    matrix = np.hstack([TURN * scale, shift[:, None]])
    shared = build_world([local], [placed(0, 0, matrix), placed(0, 0, matrix, matrix)], objects_of([0]))
    return sum(int((trace_rays(world, origins, d)[1] < 0).sum()) for world in (lone, shared))


@pytest.mark.parametrize("scale", SCALES_M)
@pytest.mark.parametrize("name", SOLIDS)
def test_no_ray_is_lost(name, scale):
    """20,000 rays from inside each of five solids, two thirds of them at edges and corners."""
    assert escaped(name, scale, 20_000, seed=11) == 0


@pytest.mark.slow
@pytest.mark.parametrize("scale", SCALES_M)
@pytest.mark.parametrize("name", SOLIDS)
def test_no_ray_of_millions_is_lost(name, scale):
    """10 million rays a solid, over three sizes."""
    assert sum(escaped(name, scale, 333_334, seed) for seed in range(10)) == 0


@kernel
def bounce(world, ox, oy, oz, dx, dy, dz, n_bounces):
    """Reflect a ray within a solid: how often it was lost, or met a surface from outside."""
    lost = wrong = 0
    skip_i, skip_p = -1, -1
    x, y, z = ox, oy, oz
    for _ in range(n_bounces):
        t, instance, primitive, u, v, _crowded = closest_hit(
            world, x, y, z, dx, dy, dz, 0.0, math.inf, skip_i, skip_p, 0.0, -1, -1
        )
        if instance < 0:
            return lost + 1, wrong
        hit = hit_frame(world, instance, primitive, u, v, x, y, z, dx, dy, dz, t, 0.0)
        facing = dot(hit[3], hit[4], hit[5], dx, dy, dz)
        if facing < 0.0:
            return lost, wrong + 1
        dx, dy, dz = dx - 2.0 * facing * hit[3], dy - 2.0 * facing * hit[4], dz - 2.0 * facing * hit[5]
        scale = 1.0 / math.sqrt(dot(dx, dy, dz, dx, dy, dz))
        dx, dy, dz = dx * scale, dy * scale, dz * scale
        x, y, z = leave(hit[0], hit[1], hit[2], hit[3], hit[4], hit[5], hit[12], dx, dy, dz)
        skip_i, skip_p = instance, primitive
    return lost, wrong


@kernel(parallel=True)
def bounce_all(world, origins, directions, n_bounces, faults):
    """`bounce` for every ray."""
    for k in prange(origins.shape[0]):
        faults[k, 0], faults[k, 1] = bounce(
            world, origins[k, 0], origins[k, 1], origins[k, 2], directions[k, 0], directions[k, 1], directions[k, 2],
            n_bounces,
        )  # fmt: skip


def walks(kind, n_rays, n_bounces):
    """Lost rays and wrong sides of walks inside glass or a drop of 1 mm, in a scene that reaches 100 m."""
    rng = np.random.default_rng(5)
    d = rng.normal(size=(n_rays, 3))
    d /= np.linalg.norm(d, axis=1)[:, None]
    centre = np.array([61.0, 37.0, -48.0])
    ground = mesh_asset([[-100, 0, -100], [-100, 0, 100], [100, 0, 100], [100, 0, -100]], [[0, 1, 2], [0, 2, 3]])
    if kind == "drop":
        assets = [SphereAsset(centre[None], np.array([0.5e-3])), ground]
        places = [placed(0, 0), placed(1, 1)]
    else:
        plate = trimesh.creation.box((0.8, 1e-3, 0.6))
        matrix = np.hstack([TURN, centre[:, None]])
        assets = [mesh_asset(plate.vertices, plate.faces), ground]
        places = [placed(0, 0, matrix, matrix) if kind == "moving plate" else placed(0, 0, matrix), placed(1, 1)]
    world = build_world(assets, places, objects_of([0, 0]))
    origins = np.ascontiguousarray(centre + rng.uniform(-1.0, 1.0, (n_rays, 3)) * 1e-4)
    faults = np.zeros((n_rays, 2), dtype=np.int64)
    bounce_all(world, origins, d, n_bounces, faults)
    return faults.sum(axis=0).tolist()


@pytest.mark.parametrize("kind", ["plate", "moving plate", "drop"])
def test_walks_stay_inside(kind):
    """200,000 reflections in thin glass and in a small drop, far from the origin: none lost, none from outside."""
    assert walks(kind, 1000, 200) == [0, 0]


@pytest.mark.slow
@pytest.mark.parametrize("kind", ["plate", "moving plate", "drop"])
def test_millions_of_walks_stay_inside(kind):
    """10 million reflections."""
    assert walks(kind, 10_000, 1000) == [0, 0]
