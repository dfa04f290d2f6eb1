"""Scattering at a rough vertex: it is lit straight from every source, then the path goes on in a drawn direction."""

from __future__ import annotations

from renderer.base.jit import kernel
from renderer.base.vectors import across
from renderer.transport.direct import light_vertex
from renderer.transport.interface import (
    set_direction,
)
from renderer.transport.layout import (
    AXIS,
    IS_INTERFACE,
    MIS,
    RATIO,
    ROUGH_SEEN,
    SMOOTH_SINCE,
)
from renderer.transport.state import (
    new_ray,
    ratio_sum,
)
from renderer.transport.stokes import (
    depolarise,
)
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
def scatter(frame, work, k, wx, wy, wz, low, high):
    """Light the vertex and go on along w, in its frame. (low, high) is the set of objects beyond a rough boundary.

    Returns the slot to go on with.
    """
    interface = work.vertex[IS_INTERFACE] > 0.0
    light_vertex(frame, work, k, work.sets[k, 0], work.sets[k, 1], low, high)
    if wz == 0.0 or (wz < 0.0 and not interface):
        return k - 1
    dx, dy, dz = from_vertex(work.vertex, wx, wy, wz)
    if not scatter_on(work, k, dx, dy, dz):
        return k - 1
    if wz < 0.0:
        work.sets[k, 0], work.sets[k, 1] = low, high
    return k
