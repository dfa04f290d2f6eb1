"""A single sheet that stands for a plane-parallel plate: light is reflected as by both faces, or goes straight on."""

from __future__ import annotations

from renderer.base.jit import kernel
from renderer.base.vectors import dot
from renderer.ray_search.hits import leave
from renderer.transport.interface import (
    mirrored,
    set_direction,
)
from renderer.transport.layout import (
    BRANCH_POINT,
    DIRECTION,
    INTERFACES,
    LANE_NM,
    REFLECTED,
    SKIP_INSTANCE,
    SKIP_PRIMITIVE,
    SPLITS,
    TRANSMITTED,
)
from renderer.transport.shadows import pane_share
from renderer.transport.state import (
    draw,
    first_kind,
    lane_count,
    new_ray,
    note_start,
    same_ray,
    smooth_event,
    split,
)
from renderer.transport.stokes import (
    apply_block,
    plane_axis,
    scale_row,
    share,
    turn_rows,
)


@kernel
def pane_chance(frame, work, k, item, outer, cos_i, n_lanes):
    """Chance of a reflection by a pane: the lanes' mean share of what is not absorbed, so that none is favoured."""
    back, through = 0.0, 0.0
    for lane in range(n_lanes):
        ra, rb, _, ta, tb, _ = pane_share(frame, item, outer, cos_i, work.lanes[lane, LANE_NM])
        back += share(work.reals, k, lane, ra, rb)
        through += share(work.reals, k, lane, ta, tb)
    if back + through <= 0.0:
        return 1.0
    return back / (back + through)


@kernel
def pane_reflects(frame, work, k, item, outer, cos_i, n_lanes, chance):
    """Carry the lanes through a reflection at a pane that was drawn with this chance."""
    for lane in range(n_lanes):
        ra, rb, rc, _, _, _ = pane_share(frame, item, outer, cos_i, work.lanes[lane, LANE_NM])
        apply_block(work.reals, k, lane, ra, rb, rc, 0.0)
        scale_row(work.reals, k, lane, 1.0 / chance)


@kernel
def pane_passes(frame, work, k, item, outer, cos_i, n_lanes, chance):
    """Carry the lanes straight through a pane; chance is that of passing."""
    for lane in range(n_lanes):
        _, _, _, ta, tb, tc = pane_share(frame, item, outer, cos_i, work.lanes[lane, LANE_NM])
        apply_block(work.reals, k, lane, ta, tb, tc, 0.0)
        scale_row(work.reals, k, lane, 1.0 / chance)


@kernel
def meet_pane(frame, work, k, item, outer, point, normal, error_m, t, instance, primitive):
    """A single sheet that stands for a plate: reflected as by its two faces, or straight through."""
    reals, whole = work.reals, work.whole
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    nx, ny, nz = normal
    if dot(dx, dy, dz, nx, ny, nz) > 0.0:
        nx, ny, nz = -nx, -ny, -nz
    cos_i = min(-dot(dx, dy, dz, nx, ny, nz), 1.0)
    sx, sy, sz = plane_axis(reals, k, nx, ny, nz)
    turn_rows(reals, k, sx, sy, sz)
    n_lanes = lane_count(work, k)
    back = pane_chance(frame, work, k, item, outer, cos_i, n_lanes)
    through = 1.0 - back
    passing, returning = k, k
    if whole[k, SPLITS] > 0 and 0.0 < back < 1.0:
        split(work, k)
        passing = k + 1
        back, through = 1.0, 1.0
    else:
        u, _ = draw(work, k, BRANCH_POINT)
        if u < back:
            passing = -1
        else:
            returning = -1
    if passing >= 0:
        pane_passes(frame, work, passing, item, outer, cos_i, n_lanes, through)
        first_kind(work, passing, TRANSMITTED)
        whole[passing, INTERFACES] += 1
        same_ray(work, passing, t, instance, primitive)
    if returning >= 0:
        pane_reflects(frame, work, k, item, outer, cos_i, n_lanes, back)
        first_kind(work, k, REFLECTED)
        smooth_event(work, k)
        rx, ry, rz = mirrored(dx, dy, dz, nx, ny, nz)
        ox, oy, oz = leave(point[0], point[1], point[2], nx, ny, nz, error_m, rx, ry, rz)
        set_direction(reals, k, rx, ry, rz)
        new_ray(work, k, ox, oy, oz)
        whole[k, SKIP_INSTANCE], whole[k, SKIP_PRIMITIVE] = instance, primitive
    if passing > k:
        note_start(work, k)
        note_start(work, passing)
    return max(passing, k)
