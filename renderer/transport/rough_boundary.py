"""A rough boundary between two materials: lit from both sides, then reflected from or refracted through by chance."""

from __future__ import annotations

import math

from renderer.base.jit import kernel
from renderer.base.vectors import dot
from renderer.transport.direct import light_vertex
from renderer.transport.layout import (
    ALPHA,
    BRANCH_POINT,
    INDEX_BEYOND,
    INDEX_HERE,
    INTERFACES,
    IS_INTERFACE,
    LANE_NM,
    REFLECTED,
    SCATTER_POINT,
    TRANSMITTED,
    VIEW,
)
from renderer.transport.microfacet import visible_normal
from renderer.transport.opaque import scatter_on
from renderer.transport.state import (
    draw,
    first_kind,
)
from renderer.transport.vertices import from_vertex
from renderer.transport.wavelengths import table_at


@kernel
def draw_rough_way(vertex, n_v, n_w, u, v, u_way):
    """A direction beyond or back from a rough boundary for the hero, in the vertex's frame; z = 0 for none."""
    vx, vy, vz = vertex[VIEW], vertex[VIEW + 1], vertex[VIEW + 2]
    hx, hy, hz = visible_normal(vertex[ALPHA], vx, vy, vz, u, v)
    vh = dot(vx, vy, vz, hx, hy, hz)
    ratio = n_v / n_w
    square = 1.0 - ratio * ratio * (1.0 - vh * vh)
    reflects = square <= 0.0
    if not reflects:
        root = math.sqrt(square)
        rs = (n_v * vh - n_w * root) / (n_v * vh + n_w * root)
        rp = (n_w * vh - n_v * root) / (n_w * vh + n_v * root)
        reflects = u_way < 0.5 * (rs * rs + rp * rp)
    if reflects:
        return 2.0 * vh * hx - vx, 2.0 * vh * hy - vy, max(2.0 * vh * hz - vz, 0.0)
    m = ratio * vh - root
    return m * hx - ratio * vx, m * hy - ratio * vy, min(m * hz - ratio * vz, 0.0)


@kernel
def meet_rough_boundary(frame, work, k, roughness, m1, m2, low, high):
    """A rough clear boundary at a placed vertex: light it from both sides, then reflect or refract by chance."""
    vertex, materials = work.vertex, frame.materials
    vertex[IS_INTERFACE], vertex[ALPHA] = 1.0, roughness * roughness
    for lane in range(4):
        vertex[INDEX_HERE + lane] = table_at(materials.index, m1, work.lanes[lane, LANE_NM])
        vertex[INDEX_BEYOND + lane] = table_at(materials.index, m2, work.lanes[lane, LANE_NM])
    u, v = draw(work, k, SCATTER_POINT)
    u_way, _ = draw(work, k, BRANCH_POINT)
    wx, wy, wz = draw_rough_way(vertex, vertex[INDEX_HERE], vertex[INDEX_BEYOND], u, v, u_way)
    first_kind(work, k, REFLECTED if wz > 0.0 else TRANSMITTED)
    work.whole[k, INTERFACES] += 1
    light_vertex(frame, work, k, work.sets[k, 0], work.sets[k, 1], low, high)
    if wz == 0.0:
        return k - 1
    dx, dy, dz = from_vertex(vertex, wx, wy, wz)
    if not scatter_on(work, k, dx, dy, dz):
        return k - 1
    if wz < 0.0:
        work.sets[k, 0], work.sets[k, 1] = low, high
    return k
