"""An opaque surface: a mirror, or what a rough one is like where a path meets it."""

from __future__ import annotations

from renderer.base.jit import kernel
from renderer.base.vectors import dot
from renderer.transport.interface import (
    mirrored,
    safe_normal,
    set_direction,
)
from renderer.transport.layout import (
    ALPHA,
    DIRECT,
    DIRECTION,
    IS_INTERFACE,
    LANE_NM,
    LOBE_POINT,
    REFLECTANCE,
    REFLECTED,
    SCATTER_POINT,
    TOP,
    TRUE_NORMAL,
    VIEW,
    WET,
)
from renderer.transport.state import (
    draw,
    first_kind,
    lane_count,
    new_ray,
    smooth_event,
)
from renderer.transport.stokes import (
    apply_block,
    plane_axis,
    turn_rows,
)
from renderer.transport.surfaces import draw_reflection, reflectance_at, schlick, top_of
from renderer.transport.vertices import leave_vertex


@kernel
def meet_mirror(frame, work, k, surface, tu, tv):
    """Reflect a path at a smooth metal: s and p alike in power, half a turn apart in phase."""
    vertex, reals = work.vertex, work.reals
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    n = safe_normal(
        dx, dy, dz, vertex[TRUE_NORMAL], vertex[TRUE_NORMAL + 1], vertex[TRUE_NORMAL + 2],
        vertex[6], vertex[7], vertex[8],
    )  # fmt: skip
    cos_i = min(-dot(dx, dy, dz, n[0], n[1], n[2]), 1.0)
    sx, sy, sz = plane_axis(reals, k, n[0], n[1], n[2])
    turn_rows(reals, k, sx, sy, sz)
    for lane in range(lane_count(work, k)):
        r = schlick(reflectance_at(frame.surfaces, surface, tu, tv, work.lanes[lane, LANE_NM]), cos_i)
        apply_block(reals, k, lane, r, 0.0, -r, 0.0)
    rx, ry, rz = mirrored(dx, dy, dz, n[0], n[1], n[2])
    ox, oy, oz = leave_vertex(vertex, rx, ry, rz)
    set_direction(reals, k, rx, ry, rz)
    new_ray(work, k, ox, oy, oz)
    first_kind(work, k, REFLECTED)
    smooth_event(work, k)


@kernel
def opaque_way(frame, work, k, surface, tu, tv):
    """Set what an opaque surface is like at the placed vertex; gives a direction drawn there, in the vertex's frame."""
    surfaces, vertex = frame.surfaces, work.vertex
    u_wet, u_lobe = draw(work, k, LOBE_POINT)
    top, alpha, wet = top_of(surfaces, surface, u_wet)
    vertex[TOP], vertex[ALPHA], vertex[WET], vertex[IS_INTERFACE] = top, alpha, 1.0 if wet else 0.0, 0.0
    for lane in range(4):
        vertex[REFLECTANCE + lane] = 0.0
    for lane in range(lane_count(work, k)):
        vertex[REFLECTANCE + lane] = reflectance_at(surfaces, surface, tu, tv, work.lanes[lane, LANE_NM])
    first_kind(work, k, DIRECT)
    u, v = draw(work, k, SCATTER_POINT)
    return draw_reflection(top, alpha, vertex[VIEW], vertex[VIEW + 1], vertex[VIEW + 2], u, v, u_lobe)
