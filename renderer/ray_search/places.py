"""Where instances stand: their matrices at a time of the shutter, and points and directions carried across."""

from __future__ import annotations

import numpy as np

from renderer.arrays.world import MATRIX, STEPS
from renderer.base.jit import kernel
from renderer.ray_search.lanes import pointers, real_at, word_at


@kernel
def carry(m, x, y, z):
    """A point through a matrix of three rows of four."""
    return (
        m[0] * x + m[1] * y + m[2] * z + m[3],
        m[4] * x + m[5] * y + m[6] * z + m[7],
        m[8] * x + m[9] * y + m[10] * z + m[11],
    )


@kernel
def turn(m, x, y, z):
    """A direction through a matrix, its length scaled along."""
    return m[0] * x + m[1] * y + m[2] * z, m[4] * x + m[5] * y + m[6] * z, m[8] * x + m[9] * y + m[10] * z


@kernel
def turn_normal(w, x, y, z):
    """A normal out of an asset's space: by the transpose of the inverse `w`, which keeps outward outward."""
    return w[0] * x + w[4] * y + w[8] * z, w[1] * x + w[5] * y + w[9] * z, w[2] * x + w[6] * y + w[10] * z


@kernel
def inverse(m):
    """The inverse of a matrix of three rows of four, and its determinant."""
    a = m[5] * m[10] - m[6] * m[9]
    b = m[6] * m[8] - m[4] * m[10]
    c = m[4] * m[9] - m[5] * m[8]
    det = m[0] * a + m[1] * b + m[2] * c
    s = 1.0 / det
    i00, i10, i20 = a * s, b * s, c * s
    i01, i02 = (m[2] * m[9] - m[1] * m[10]) * s, (m[1] * m[6] - m[2] * m[5]) * s
    i11, i12 = (m[0] * m[10] - m[2] * m[8]) * s, (m[2] * m[4] - m[0] * m[6]) * s
    i21, i22 = (m[1] * m[8] - m[0] * m[9]) * s, (m[0] * m[5] - m[1] * m[4]) * s
    return (
        i00, i01, i02, -(i00 * m[3] + i01 * m[7] + i02 * m[11]),
        i10, i11, i12, -(i10 * m[3] + i11 * m[7] + i12 * m[11]),
        i20, i21, i22, -(i20 * m[3] + i21 * m[7] + i22 * m[11]),
    ), det  # fmt: skip


@kernel
def row(reals, at):
    """Twelve numbers that begin `at` elements behind a pointer."""
    return (
        real_at(reals, at), real_at(reals, at + 1), real_at(reals, at + 2), real_at(reals, at + 3),
        real_at(reals, at + 4), real_at(reals, at + 5), real_at(reals, at + 6), real_at(reals, at + 7),
        real_at(reals, at + 8), real_at(reals, at + 9), real_at(reals, at + 10), real_at(reals, at + 11),
    )  # fmt: skip


@kernel
def mixed(a, b, f):
    """Two numbers mixed linearly."""
    return a + f * (b - a)


@kernel
def trees_of(world):
    """What a search reads of a world, as pointers: nodes, packs, balls, placed, instances, matrices, roots, touch_m."""
    return pointers(
        world.nodes, world.packs, world.balls, world.placed, world.instances, world.matrices, world.roots, world.touch_m
    )


@kernel
def matrix_at(trees, instance, time):
    """An instance's matrix to the world and back at a time in [0, 1], and the sign of its determinant."""
    instances, matrices = trees[4], trees[5]
    at = word_at(instances, 8 * instance + MATRIX) * 25
    steps = word_at(instances, 8 * instance + STEPS)
    if steps == 1:
        return row(matrices, at), row(matrices, at + 12), real_at(matrices, at + 24)
    place = min(max(time, 0.0), 1.0) * (steps - 1)
    i = min(int(place), steps - 2)
    f = place - i
    a, b = row(matrices, at + 25 * i), row(matrices, at + 25 * i + 25)
    m = (
        mixed(a[0], b[0], f), mixed(a[1], b[1], f), mixed(a[2], b[2], f), mixed(a[3], b[3], f),
        mixed(a[4], b[4], f), mixed(a[5], b[5], f), mixed(a[6], b[6], f), mixed(a[7], b[7], f),
        mixed(a[8], b[8], f), mixed(a[9], b[9], f), mixed(a[10], b[10], f), mixed(a[11], b[11], f),
    )  # fmt: skip
    w, det = inverse(m)
    return m, w, 1.0 if det > 0.0 else -1.0


@kernel
def steepest(dx, dy, dz):
    """The axis along which a direction is longest."""
    ax, ay, az = abs(dx), abs(dy), abs(dz)
    axis, longest = np.int64(0), ax
    axis, longest = (np.int64(1), ay) if ay > longest else (axis, longest)
    return np.int64(2) if az > longest else axis
