"""A smooth boundary between two materials: reflected, refracted, or both as two branches."""

from __future__ import annotations

from renderer.base.jit import kernel
from renderer.base.vectors import dot
from renderer.optics.fresnel_kernels import refract_cosine
from renderer.ray_search.hits import leave
from renderer.transport.interface import (
    lane_mueller,
    mirrored,
    reflect_lanes,
    refract_lanes,
    refracted,
    safe_normal,
    set_direction,
)
from renderer.transport.layout import (
    BRANCH_POINT,
    DIRECTION,
    LANE_NM,
    REFLECTED,
    SKIP_INSTANCE,
    SKIP_PRIMITIVE,
    SOLO,
    SPLITS,
    TRANSMITTED,
)
from renderer.transport.state import (
    draw,
    first_kind,
    lane_count,
    new_ray,
    note_start,
    smooth_event,
    split,
)
from renderer.transport.stokes import (
    drop_companions,
    plane_axis,
    share,
    turn_rows,
)
from renderer.transport.wavelengths import table_at


@kernel
def go_back(frame, work, k, m1, m2, cos_i, point, normal, true_normal, error_m, chance):
    """Reflect a path at a smooth boundary."""
    reals = work.reals
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    rx, ry, rz = mirrored(dx, dy, dz, normal[0], normal[1], normal[2])
    reflect_lanes(reals, k, frame.materials, m1, m2, cos_i, work.lanes, lane_count(work, k), chance)
    set_direction(reals, k, rx, ry, rz)
    ox, oy, oz = leave(
        point[0], point[1], point[2], true_normal[0], true_normal[1], true_normal[2], error_m, rx, ry, rz
    )
    new_ray(work, k, ox, oy, oz)
    first_kind(work, k, REFLECTED)
    smooth_event(work, k)


@kernel
def go_through(frame, work, k, m1, m2, cos_i, cos_t, point, normal, true_normal, error_m, chance, low, high):
    """Refract a path at a smooth boundary; where the index varies with wavelength, the hero goes on alone."""
    materials, lanes, reals, whole = frame.materials, work.lanes, work.reals, work.whole
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    refract_lanes(reals, k, materials, m1, m2, cos_i, lanes, lane_count(work, k), chance)
    if whole[k, SOLO] == 0 and (materials.dispersive[m1] or materials.dispersive[m2]):
        drop_companions(reals, k)
        whole[k, SOLO] = 1
    nm = lanes[0, LANE_NM]
    ratio = table_at(materials.index, m1, nm) / table_at(materials.index, m2, nm)
    tx, ty, tz = refracted(
        dx, dy, dz, normal[0], normal[1], normal[2], cos_i, cos_t, ratio,
        true_normal[0], true_normal[1], true_normal[2],
    )  # fmt: skip
    set_direction(reals, k, tx, ty, tz)
    ox, oy, oz = leave(
        point[0], point[1], point[2], true_normal[0], true_normal[1], true_normal[2], error_m, tx, ty, tz
    )
    new_ray(work, k, ox, oy, oz)
    work.sets[k, 0], work.sets[k, 1] = low, high
    first_kind(work, k, TRANSMITTED)
    smooth_event(work, k)


@kernel
def any_passes(materials, m1, m2, cos_i, lanes, n_lanes):
    """Whether any lane can pass a boundary at this angle."""
    for lane in range(n_lanes):
        nm = lanes[lane, LANE_NM]
        if refract_cosine(cos_i, table_at(materials.index, m1, nm), table_at(materials.index, m2, nm)) >= 0.0:
            return True
    return False


@kernel
def meet_boundary(frame, work, k, m1, m2, point, true_normal, shading_normal, error_back, error_through, instance,
                  primitive, low, high):  # fmt: skip
    """A smooth boundary from material m1 into m2; (low, high) is the set of objects beyond it.

    `error_through` is larger than `error_back` where several boundaries fall together: the ray must start behind all.
    """
    materials, lanes, reals, whole = frame.materials, work.lanes, work.reals, work.whole
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    gx, gy, gz = true_normal
    if dot(dx, dy, dz, gx, gy, gz) > 0.0:
        gx, gy, gz = -gx, -gy, -gz
    g = (gx, gy, gz)
    n = safe_normal(dx, dy, dz, gx, gy, gz, shading_normal[0], shading_normal[1], shading_normal[2])
    cos_i = min(-dot(dx, dy, dz, n[0], n[1], n[2]), 1.0)
    sx, sy, sz = plane_axis(reals, k, n[0], n[1], n[2])
    turn_rows(reals, k, sx, sy, sz)
    ra, rb, _, _, _, _, _, cos_t = lane_mueller(materials, m1, m2, cos_i, lanes[0, LANE_NM])
    back = share(reals, k, 0, ra, rb)
    whole[k, SKIP_INSTANCE], whole[k, SKIP_PRIMITIVE] = instance, primitive
    # Whether to split must not hang on which lane is the hero, or the lanes' densities would disagree.
    if whole[k, SPLITS] > 0 and any_passes(materials, m1, m2, cos_i, lanes, lane_count(work, k)):
        split(work, k)
        passes = cos_t >= 0.0
        if passes:
            go_through(frame, work, k + 1, m1, m2, cos_i, cos_t, point, n, g, error_through, 0.0, low, high)
            note_start(work, k + 1)
        go_back(frame, work, k, m1, m2, cos_i, point, n, g, error_back, 0.0)
        note_start(work, k)
        return k + 1 if passes else k
    if cos_t < 0.0:
        back = 1.0  # a companion's chance is its own share: it may pass where the hero cannot
    u, _ = draw(work, k, BRANCH_POINT)
    if u < back:
        go_back(frame, work, k, m1, m2, cos_i, point, n, g, error_back, back)
    else:
        go_through(frame, work, k, m1, m2, cos_i, cos_t, point, n, g, error_through, 1.0 - back, low, high)
    return k
