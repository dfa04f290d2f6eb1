"""An opaque surface: lit where it is rough, then scattered from; or a mirror."""

from __future__ import annotations

from renderer.base.jit import kernel
from renderer.base.vectors import across, dot
from renderer.transport.direct import light_vertex
from renderer.transport.interface import (
    mirrored,
    safe_normal,
    set_direction,
)
from renderer.transport.layout import (
    ALPHA,
    AXIS,
    DIRECT,
    DIRECTION,
    IS_INTERFACE,
    LANE_NM,
    LOBE_POINT,
    MIS,
    RATIO,
    REFLECTANCE,
    REFLECTED,
    ROUGH_SEEN,
    SCATTER_POINT,
    SMOOTH_SINCE,
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
    ratio_sum,
    smooth_event,
)
from renderer.transport.stokes import (
    apply_block,
    depolarise,
    plane_axis,
    turn_rows,
)
from renderer.transport.surfaces import draw_reflection, is_mirror, reflectance_at, schlick, top_of
from renderer.transport.vertices import from_vertex, leave_vertex, respond


@kernel
def scatter_on(work, k, dx, dy, dz):
    """Send a path from its vertex into the world direction d that was drawn there; False when it cannot go there."""
    vertex, reals, whole = work.vertex, work.reals, work.whole
    f0, f1, f2, f3, p0, p1, p2, p3 = respond(vertex, dx, dy, dz)
    if not p0 > 0.0:
        return False
    reals[k, MIS] = ratio_sum(reals, k) / p0
    reals[k, RATIO + 1] *= p1 / p0
    reals[k, RATIO + 2] *= p2 / p0
    reals[k, RATIO + 3] *= p3 / p0
    depolarise(reals, k, 0, f0 / p0)
    depolarise(reals, k, 1, f1 / p0)
    depolarise(reals, k, 2, f2 / p0)
    depolarise(reals, k, 3, f3 / p0)
    set_direction(reals, k, dx, dy, dz)
    ox, oy, oz = leave_vertex(vertex, dx, dy, dz)
    new_ray(work, k, ox, oy, oz)
    # The reference axis is only kept across the ray: nothing polarised is left that it could refer to.
    ax, ay, az, _bx, _by, _bz = across(dx, dy, dz)
    reals[k, AXIS], reals[k, AXIS + 1], reals[k, AXIS + 2] = ax, ay, az
    whole[k, ROUGH_SEEN] = 1
    whole[k, SMOOTH_SINCE] = 0
    return True


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
def meet_opaque(frame, work, k, surface, tu, tv):
    """An opaque surface at a placed vertex: light it, then scatter. Returns the slot to go on with."""
    surfaces, vertex = frame.surfaces, work.vertex
    if is_mirror(surfaces, surface):
        meet_mirror(frame, work, k, surface, tu, tv)
        return k
    u_wet, u_lobe = draw(work, k, LOBE_POINT)
    top, alpha, wet = top_of(surfaces, surface, u_wet)
    vertex[TOP], vertex[ALPHA], vertex[WET], vertex[IS_INTERFACE] = top, alpha, 1.0 if wet else 0.0, 0.0
    for lane in range(4):
        vertex[REFLECTANCE + lane] = 0.0
    for lane in range(lane_count(work, k)):
        vertex[REFLECTANCE + lane] = reflectance_at(surfaces, surface, tu, tv, work.lanes[lane, LANE_NM])
    first_kind(work, k, DIRECT)
    low, high = work.sets[k, 0], work.sets[k, 1]
    light_vertex(frame, work, k, low, high, low, high)
    u, v = draw(work, k, SCATTER_POINT)
    wx, wy, wz = draw_reflection(top, alpha, vertex[VIEW], vertex[VIEW + 1], vertex[VIEW + 2], u, v, u_lobe)
    if wz <= 0.0:
        return k - 1
    dx, dy, dz = from_vertex(vertex, wx, wy, wz)
    return k if scatter_on(work, k, dx, dy, dz) else k - 1
