"""Speed of ray search beside a general ray-intersection library: ``python tools/bench/traversal.py [--quick]``.

Both trace the same rays on one thread, in turn, in one process; a ratio above 1 means that ours is faster. The library
is `embreex` (a test dependency), float32, its way `EmbreeScene.run`; ours is float64 and watertight. That library
knows no spheres, so it gets each as an icosahedron of 20 triangles. It uses what it finds in the processor; ours is
measured compiled for that too (native), and for the level that pictures are rendered at.
"""

from __future__ import annotations

import argparse
import math
import os
import resource
import statistics
import subprocess
import sys
import time
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import trimesh
from embreex.mesh_construction import TriangleMesh
from embreex.rtcore_scene import EmbreeScene

from renderer.arrays.assets import Placement, SphereAsset, TriangleAsset
from renderer.arrays.looks import Objects
from renderer.arrays.world import World
from renderer.base.cache import cpu_level
from renderer.ray_search.build import build_world
from renderer.ray_search.trace import any_block, trace_block

Floats = npt.NDArray[np.float64]


@dataclass(frozen=True)
class Rays:
    """Origins and unit directions (n, 3)."""

    origins: Floats
    directions: Floats


def camera(eye: Floats, target: Floats, n: int, half_angle: float = 0.35) -> Rays:
    """Rays through a square picture, row by row in tiles of 8 x 8 pixels."""
    side = int(math.sqrt(n)) // 8 * 8
    forward = (target - eye) / np.linalg.norm(target - eye)
    right = np.cross(forward, [0.0, 1.0, 0.001])
    right /= np.linalg.norm(right)
    up = np.cross(right, forward)
    k = np.arange(side * side)
    tile, within = k // 64, k % 64
    x = (tile % (side // 8) * 8 + within % 8 + 0.5) / side * 2.0 - 1.0
    y = (tile // (side // 8) * 8 + within // 8 + 0.5) / side * 2.0 - 1.0
    s = math.tan(half_angle)
    d = forward + s * x[:, None] * right + s * y[:, None] * up
    return Rays(np.tile(eye, (len(d), 1)), d / np.linalg.norm(d, axis=1)[:, None])


def random_rays(low: Floats, high: Floats, n: int, seed: int = 3) -> Rays:
    """Rays from anywhere in a box in any direction."""
    rng = np.random.default_rng(seed)
    d = rng.normal(size=(n, 3))
    return Rays(rng.uniform(low, high, (n, 3)), d / np.linalg.norm(d, axis=1)[:, None])


def water(side: int) -> trimesh.Trimesh:
    """A wavy surface of 2 (side - 1)^2 triangles, 100 m across."""
    x, z = np.meshgrid(np.linspace(-50.0, 50.0, side), np.linspace(-50.0, 50.0, side), indexing="ij")
    y = 0.3 * np.sin(0.9 * x + 0.4 * z) + 0.15 * np.sin(1.7 * z - 0.6 * x) + 0.04 * np.sin(5.1 * x + 3.3 * z)
    a = (np.arange(side - 1)[:, None] * side + np.arange(side - 1)).ravel()
    faces = np.concatenate([np.stack([a, a + 1, a + side], 1), np.stack([a + 1, a + side + 1, a + side], 1)])
    return trimesh.Trimesh(np.stack([x.ravel(), y.ravel(), z.ravel()], 1), faces, process=False)


def mixture(subdivisions: int) -> trimesh.Trimesh:
    """Round, flat, long and hollow solids of very different sizes, strewn about."""
    rng = np.random.default_rng(8)
    parts = []
    solids = [trimesh.creation.icosphere(subdivisions), trimesh.creation.torus(1.0, 0.3, 40 << subdivisions, 32)]
    solids += [trimesh.creation.cylinder(0.3, 4.0, sections=16 << subdivisions), trimesh.creation.box()]
    for k in range(64):
        solid = solids[k & 3].copy()
        turn = trimesh.transformations.random_rotation_matrix(rng.random(3))
        turn[:3, :3] *= float(np.exp(rng.uniform(-1.5, 0.7)))
        turn[:3, 3] = rng.uniform(-5.0, 5.0, 3)
        parts.append(solid.apply_transform(turn))
    return trimesh.util.concatenate(parts)


def world_of(asset: TriangleAsset | SphereAsset) -> World:
    """A world of one asset."""
    none = np.zeros(1, dtype=np.int32)
    objects = Objects(none, none, none, none, none, np.zeros(1), np.zeros(1))
    return build_world([asset], [Placement(0, 0, np.eye(3, 4)[None])], objects)


def asset_of(mesh: trimesh.Trimesh) -> TriangleAsset:
    """A mesh as an asset."""
    points = np.ascontiguousarray(mesh.vertices, dtype=np.float64)
    return TriangleAsset(points, np.ascontiguousarray(mesh.faces, dtype=np.int32), np.zeros((0, 3)), np.zeros((0, 2)))


def baseline_of(mesh: trimesh.Trimesh) -> EmbreeScene:
    """A mesh in the other library."""
    scene = EmbreeScene()
    TriangleMesh(scene, np.asarray(mesh.vertices, dtype=np.float32)[mesh.faces])
    return scene


def balls_of(asset: SphereAsset) -> trimesh.Trimesh:
    """Each sphere as an icosahedron."""
    solid = trimesh.creation.icosahedron()
    n = len(asset.radii_m)
    points = asset.centres_m[:, None, :] + asset.radii_m[:, None, None] * np.asarray(solid.vertices)
    faces = np.asarray(solid.faces)[None] + 12 * np.arange(n)[:, None, None]
    return trimesh.Trimesh(points.reshape(-1, 3), faces.reshape(-1, 3), process=False)


def seconds(work: Callable[[], object]) -> float:
    """How long a call takes."""
    start = time.perf_counter()
    work()
    return time.perf_counter() - start


def compare(name: str, world: World, other: EmbreeScene, rays: Rays, repeats: int, any_hit: bool = False) -> None:
    """Time both in turn and print a line."""
    n = len(rays.origins)
    t, ids, uv = np.empty(n), np.empty((n, 3), dtype=np.int32), np.empty((n, 2))
    o32, d32 = rays.origins.astype(np.float32), rays.directions.astype(np.float32)

    def ours() -> None:
        if any_hit:
            any_block(world, rays.origins, rays.directions, 0.0, math.inf, ids)
        else:
            trace_block(world, rays.origins, rays.directions, 0.0, math.inf, t, ids, uv)

    def theirs() -> object:
        return other.run(o32, d32, query="OCCLUDED" if any_hit else "INTERSECT")

    ours()
    hits_other = (theirs() >= 0) if not any_hit else (theirs() != -1)  # type: ignore[operator]
    pairs = [(seconds(theirs), seconds(ours)) for _ in range(repeats)]
    ratio = statistics.median(a / b for a, b in pairs)
    fast = n / statistics.median(b for _, b in pairs) / 1e6
    share = float((ids[:, 0] >= 0).mean())
    print(f"{name:40s} {ratio:6.2f} {fast:9.2f} {share:7.2f} {float(np.mean(hits_other)):7.2f}", flush=True)


def main() -> None:
    """Measure at each level in a process of its own, for a process has one."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--quick", action="store_true", help="small scenes and few repeats: a minute in all")
    parser.add_argument("--only", default="", help="scenes whose name holds this")
    parser.add_argument("--level", help="this level alone")
    arguments = parser.parse_args()
    if arguments.level == os.environ.get("ANTISOLAR_CPU_LEVEL", ""):
        measure(arguments.quick, arguments.only)
        return
    levels = [arguments.level] if arguments.level else ["native", "x86-64-v3"]
    words = [*(["--quick"] if arguments.quick else []), "--only", arguments.only]
    for level in levels:
        command = [sys.executable, __file__, *words, "--level", level]
        subprocess.run(command, env={**os.environ, "ANTISOLAR_CPU_LEVEL": level}, check=True)


def measure(quick: bool, only: str) -> None:
    """Build the scenes and print the table."""
    repeats, n = (5, 40_000) if quick else (15, 200_000)
    print(f"processor level {cpu_level()}, {repeats} repeats, {n} rays")
    print(f"{'scene':40s} {'ratio':>6s} {'M rays/s':>9s} {'hit':>7s} {'other':>7s}")

    def wanted(name: str) -> bool:
        return only in name

    if wanted("icosphere"):
        mesh = trimesh.creation.icosphere(5 if quick else 8)
        world, other = world_of(asset_of(mesh)), baseline_of(mesh)
        rays = camera(np.array([0.3, 0.8, 2.6]), np.zeros(3), n)
        label = f"icosphere {len(mesh.faces)}"
        compare(label + ", camera, closest", world, other, rays, repeats)
        compare(label + ", camera, any", world, other, rays, repeats, any_hit=True)
    if wanted("water"):
        mesh = water(200 if quick else 1001)
        world, other = world_of(asset_of(mesh)), baseline_of(mesh)
        rays = camera(np.array([0.0, 12.0, 60.0]), np.array([0.0, 0.0, 10.0]), n)
        label = f"water {len(mesh.faces)}"
        compare(label + ", camera, closest", world, other, rays, repeats)
        scattered = random_rays(np.array([-50.0, -1.0, -50.0]), np.array([50.0, 1.0, 50.0]), n)
        compare(label + ", random, closest", world, other, scattered, repeats)
        compare(label + ", random, any", world, other, scattered, repeats, any_hit=True)
    if wanted("mixed"):
        mesh = mixture(3 if quick else 5)
        world, other = world_of(asset_of(mesh)), baseline_of(mesh)
        scattered = random_rays(np.full(3, -5.0), np.full(3, 5.0), n)
        label = f"mixed {len(mesh.faces)}"
        compare(label + ", random, closest", world, other, scattered, repeats)
        compare(label + ", random, any", world, other, scattered, repeats, any_hit=True)
    if wanted("spheres"):
        rng = np.random.default_rng(4)
        count = 20_000 if quick else 200_000
        asset = SphereAsset(rng.uniform(-1.0, 1.0, (count, 3)), rng.uniform(0.2, 1.0, count) * 0.4 * count ** (-1 / 3))
        world, other = world_of(asset), baseline_of(balls_of(asset))
        rays = camera(np.array([0.3, 0.8, 3.6]), np.zeros(3), n)
        label = f"spheres {count}"
        compare(label + ", camera, closest", world, other, rays, repeats)
        scattered = random_rays(np.full(3, -1.0), np.full(3, 1.0), n)
        compare(label + ", random, closest", world, other, scattered, repeats)
        compare(label + ", random, any", world, other, scattered, repeats, any_hit=True)
    print(f"peak memory {resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 2**20:.2f} GiB, both libraries together")


if __name__ == "__main__":
    main()
