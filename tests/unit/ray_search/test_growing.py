"""Trees: the same for any number of threads, and every primitive in them once, inside all boxes above it."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from renderer.arrays.assets import SphereAsset
from renderer.arrays.world import NOTHING, SPHERES
from renderer.ray_search.build import build_world

sys.path.insert(0, str(Path(__file__).parent))
from plain_search import mesh_asset, objects_of, placed


def crowd(n, seed=3):
    """n triangles of very different sizes, many in one place."""
    rng = np.random.default_rng(seed)
    centres = rng.normal(size=(n, 1, 3)) ** 3
    points = centres + rng.normal(size=(n, 3, 3)) * np.exp(rng.uniform(-8.0, 0.0, (n, 1, 1)))
    points[: n // 20] = points[0]
    return mesh_asset(points.reshape(-1, 3), np.arange(3 * n).reshape(n, 3))


def drops(n):
    """n spheres."""
    rng = np.random.default_rng(4)
    return SphereAsset(rng.normal(size=(n, 3)), np.exp(rng.uniform(-6.0, -1.0, n)))


def test_threads_change_nothing():
    """To the bit."""
    assets, places = [crowd(90_000), drops(40_000)], [placed(0, 0), placed(1, 1)]
    one, three = (build_world(assets, places, objects_of([0, 0]), n_threads=n) for n in (1, 3))
    for name in one._fields:
        assert getattr(one, name).tobytes() == getattr(three, name).tobytes(), name


def contents(world, asset_boxes, child, low, high, found):
    """Walk a subtree, and note each primitive; its box must lie in [low, high], and so must every child's."""
    if child < 0:
        pack = -1 - child
        ids = world.packs[pack].view(np.int32)[144:] if pack < SPHERES else None
        if ids is None:
            ids = world.balls[pack - SPHERES].view(np.int32)[64:]
        for primitive in ids[8:][ids[8:] >= 0]:
            found.append(int(primitive))
            assert (asset_boxes[primitive, :3] >= low).all()
            assert (asset_boxes[primitive, 3:] <= high).all()
        return
    node = world.nodes[child]
    children = node.view(np.int32)[48:56]
    planes = node[:48].reshape(3, 2, 8)
    for k in np.flatnonzero(children != NOTHING):
        low2, high2 = planes[:, 0, k], planes[:, 1, k]
        assert (low2 >= low).all()
        assert (high2 <= high).all()
        contents(world, asset_boxes, int(children[k]), low2, high2, found)
    assert (planes[:, 0, children == NOTHING] == np.inf).all()


@pytest.mark.parametrize(("n_triangles", "n_drops"), [(1, 0), (7, 1), (9, 8), (0, 300), (3000, 500)])
def test_every_primitive_is_in_the_tree_once(n_triangles, n_drops):
    """And within the boxes of all nodes above it, which are rounded outward."""
    assets, places, boxes = [], [], [np.zeros((0, 6))]
    if n_triangles:
        assets.append(crowd(n_triangles))
        corners = assets[-1].vertices_m[assets[-1].faces]
        boxes.append(np.hstack([corners.min(axis=1), corners.max(axis=1)]))
        places.append(placed(len(places), len(places)))
    if n_drops:
        assets.append(drops(n_drops))
        reach = assets[-1].radii_m[:, None]
        boxes.append(np.hstack([assets[-1].centres_m - reach, assets[-1].centres_m + reach]))
        places.append(placed(len(places), len(places)))
    world = build_world(assets, places, objects_of([0] * len(assets)))
    found: list[int] = []
    contents(world, np.concatenate(boxes), int(world.roots[0]), np.full(3, -np.inf), np.full(3, np.inf), found)
    assert sorted(found) == list(range(n_triangles + n_drops))
    assert world.roots[1] == NOTHING
