"""A sample depends on scene, round, seed and pixel alone: threads, order and division of the work change no bit."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.pictures.sums import add, empty_sums, quantum_of, same
from renderer.transport.layout import KINDS
from renderer.transport.render import render_rows
from renderer.transport.threads import set_threads
from tests.rendering import rendered, scene_of

SHOT = """
[camera]
position = { 1001 = [0, 1.2, 3], 1002 = [0.2, 1.2, 3] }
target = [0, 0.4, 0]
focal_length = 40
pixels = [24, 16]
f_number = 4
polariser = 20
[sun]
elevation = 35
azimuth = 120
[sky]
kind = "clear"
[[objects]]
name = "floor"
shape = { box = [6, 0.1, 6] }
surface = { reflectance = [0.4, 0.3, 0.2], roughness = 0.4, wetness = 0.5 }
transform = { translation = [0, -0.05, 0] }
[[objects]]
name = "ball"
shape = { sphere = 0.4 }
material = "water"
transform = { translation = { 1001 = [-0.5, 0.4, 0], 1002 = [-0.5, 0.9, 0] } }
[[objects]]
name = "frosted"
shape = { box = [0.5, 0.5, 0.5] }
material = "N-BK7"
roughness = 0.4
transform = { translation = [0.5, 0.26, 0], rotation = [0, 30, 0] }
[[lights]]
name = "lamp"
shape = { disc = 0.3 }
luminance = 30000
lines = [[589.0, 0.6]]
colour = [1, 1, 1]
transform = { translation = [0, 2.5, 0], rotation = [90, 0, 0] }
"""
ROUNDS = 18


@pytest.fixture
def threads():
    yield set_threads
    set_threads(1)


@pytest.fixture(scope="module")
def scene():
    return scene_of(SHOT)


@pytest.fixture(scope="module")
def whole(scene):
    return rendered(scene, ROUNDS)


@pytest.mark.parametrize("count", [2, 4])
def test_threads_change_no_bit(scene, whole, threads, count):
    threads(count)
    other = rendered(scene, ROUNDS)
    assert same(whole.sums, other.sums)
    assert other.tally == whole.tally


def test_rounds_may_come_in_any_order_and_be_added_in_any_parts(scene, whole, threads):
    order = np.random.default_rng(5).permutation(ROUNDS)
    assert same(whole.sums, rendered(scene, order).sums)
    parts = [rendered(scene, order[first::4], finite=False).sums for first in (2, 0, 3, 1)]
    total = parts.pop()
    while parts:
        add(total, parts.pop())
    assert same(whole.sums, total)


def test_rows_may_be_rendered_in_any_parts(scene, whole):
    rows, columns = whole.sums.size
    sums = empty_sums(rows, columns, len(KINDS), whole.sums.bins.shape[0])
    quantum = quantum_of(scene.reference_radiance)
    for first, stop in ((9, 16), (0, 2), (2, 9)):
        for number in range(ROUNDS):
            render_rows(scene, number, 0, first, stop, sums, quantum)
    assert same(whole.sums, sums)


def test_a_part_of_the_frame_has_the_whole_frames_bits(whole):
    part = rendered(SHOT.replace("f_number", "crop = [5, 3, 11, 7]\nf_number"), ROUNDS)
    assert np.array_equal(part.sums.xyz, whole.sums.xyz[3:10, 5:16])
    more = rendered(SHOT.replace("f_number", "overscan = [3, 2, 1, 4]\nf_number"), ROUNDS)
    assert np.array_equal(more.sums.xyz[2:18, 3:27], whole.sums.xyz)


def test_kinds_of_light_make_the_picture_to_the_bit(whole):
    assert np.array_equal(whole.sums.kinds.sum(axis=2), whole.sums.xyz)
    assert np.array_equal(whole.sums.replicate_y.sum(axis=0), whole.sums.xyz[..., 1])
    assert all(whole.kind(name).max() > 0.0 for name in KINDS)


def test_another_seed_and_another_round_are_other_samples(scene, whole):
    first = rendered(scene, [0])
    assert not np.array_equal(first.sums.xyz, rendered(scene, [0], seed=1).sums.xyz)
    assert not np.array_equal(first.sums.xyz, rendered(scene, [8]).sums.xyz)
    other = rendered(scene, ROUNDS, seed=12345)
    assert other.mean == pytest.approx(whole.mean, abs=5.0 * np.hypot(other.mean_error, whole.mean_error))
