"""A rough boundary between two materials, where a path meets it: it reflects or refracts by chance."""

from __future__ import annotations

import math

from renderer.base.jit import kernel
from renderer.base.vectors import dot
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
from renderer.transport.state import (
    draw,
    first_kind,
)
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
def boundary_way(frame, work, k, roughness, m1, m2):
    """Set what a rough boundary is like at the placed vertex; gives a direction drawn there, in the vertex's frame."""
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
    return wx, wy, wz
