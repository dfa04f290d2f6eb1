"""The closest hit of a ray, any hit, and the objects that hold a point."""

from __future__ import annotations

import math

import numpy as np

from renderer.arrays.looks import CLEAR, SHEET
from renderer.arrays.world import OBJECT, ROOT
from renderer.base.jit import kernel
from renderer.base.vectors import dot
from renderer.ray_search.hits import hit_frame
from renderer.ray_search.object_set import set_item, set_with, set_without
from renderer.ray_search.places import carry, matrix_at, turn
from renderer.ray_search.shapes import sphere_hit, steepest, triangle_hit
from renderer.ray_search.stack import get, new_stack, put

ROUNDING = 1.5e-11  # share of a ray's numbers that joins touch_m: see `hits.error_of` for where both come from
MAX_WALK = 4096  # hits that a point query follows
NEAR_EDGE = 1e-9  # barycentric, and cosine to the surface, under which a crossing may be counted wrongly


@kernel
def farther(t, instance, primitive, t2, instance2, primitive2):
    """Whether the first hit comes after the second in the order (distance, instance, primitive)."""
    if t != t2:
        return t > t2
    if instance != instance2:
        return instance > instance2
    return primitive > primitive2


@kernel
def offered(best, limits, t, instance, primitive, u, v):
    """The best hit so far (t, instance, primitive, u, v, next t) after one more is found."""
    t_max, _, _, t_after, i_after, p_after, _ = limits
    if not (t >= t_after and t <= t_max) or not farther(t, instance, primitive, t_after, i_after, p_after):
        return best
    if best[1] >= 0 and farther(t, instance, primitive, best[0], best[1], best[2]):
        return best[0], best[1], best[2], best[3], best[4], min(best[5], t)
    after = best[0] if best[1] >= 0 else math.inf
    return t, instance, primitive, u, v, after


@kernel
def box_entry(boxes, node, ox, oy, oz, ix, iy, iz, reach):
    """Distance at which a ray enters a node's box, or infinity when it misses it or enters beyond `reach`."""
    x0, x1 = (boxes[node, 0] - ox) * ix, (boxes[node, 3] - ox) * ix
    y0, y1 = (boxes[node, 1] - oy) * iy, (boxes[node, 4] - oy) * iy
    z0, z1 = (boxes[node, 2] - oz) * iz, (boxes[node, 5] - oz) * iz
    enter = max(max(min(x0, x1), min(y0, y1)), max(min(z0, z1), 0.0))
    leave = min(min(max(x0, x1), max(y0, y1)), max(z0, z1))
    # Rounded outward by far more than float64 loses, so that no hit is lost between box and triangle.
    if enter <= leave * (1.0 + 1e-9) and enter * (1.0 - 1e-9) <= reach:
        return enter
    return math.inf


@kernel
def inverted(d):
    """One over a number, finite where it is zero, so that a ray in a box's plane makes no not-a-number."""
    if abs(d) < 1e-290:
        return math.copysign(1e290, d)
    return 1.0 / d


@kernel
def meet_item(world, item, instance, ox, oy, oz, dx, dy, dz, axis, sx, sy, sz, limits, best):
    """The best hit after one triangle or sphere of a leaf."""
    c = world.corners
    primitive = np.int64(world.items[item, 1])
    if instance < 0:
        instance = np.int64(world.items[item, 0])
    skipped = instance == limits[1] and primitive == limits[2]
    if world.faces[primitive, 1] >= 0:
        if skipped:
            return best
        t, u, v = triangle_hit(
            axis, sx, sy, sz,
            c[item, 0] - ox, c[item, 1] - oy, c[item, 2] - oz,
            c[item, 3] - ox, c[item, 4] - oy, c[item, 5] - oz,
            c[item, 6] - ox, c[item, 7] - oy, c[item, 8] - oz,
        )  # fmt: skip
        return offered(best, limits, t, instance, primitive, u, v)
    near, far = sphere_hit(ox - c[item, 0], oy - c[item, 1], oz - c[item, 2], dx, dy, dz, c[item, 3])
    if not skipped:
        best = offered(best, limits, near, instance, primitive, 0.0, 0.0)
    return offered(best, limits, far, instance, primitive, 0.0, 0.0)


@kernel
def walk(world, root, instance, ox, oy, oz, dx, dy, dz, limits, any_will_do, best):
    """The best hit after all primitives of one tree, or after the first hit where any will do."""
    ix, iy, iz = inverted(dx), inverted(dy), inverted(dz)
    axis = steepest(dx, dy, dz)
    if axis == 0:
        sx, sy, sz = dy / dx, dz / dx, 1.0 / dx
    elif axis == 1:
        sx, sy, sz = dz / dy, dx / dy, 1.0 / dy
    else:
        sx, sy, sz = dx / dz, dy / dz, 1.0 / dz
    stack = new_stack()
    put(stack, 0, root)
    top = 1
    while top > 0:
        top -= 1
        node = get(stack, top)
        reach = best[0] + limits[6]
        if box_entry(world.boxes, node, ox, oy, oz, ix, iy, iz, reach) == math.inf:
            continue
        left, count = np.int64(world.links[node, 0]), np.int64(world.links[node, 1])
        if count > 0:
            for item in range(left, left + count):
                best = meet_item(world, item, instance, ox, oy, oz, dx, dy, dz, axis, sx, sy, sz, limits, best)
            if any_will_do and best[1] >= 0:
                return best
            continue
        a = box_entry(world.boxes, left, ox, oy, oz, ix, iy, iz, reach)
        b = box_entry(world.boxes, left + 1, ox, oy, oz, ix, iy, iz, reach)
        near, far = (left, left + 1) if a <= b else (left + 1, left)
        if max(a, b) < math.inf:
            put(stack, top, far)
            top += 1
        if min(a, b) < math.inf:
            put(stack, top, near)
            top += 1
    return best


@kernel
def walk_instances(world, ox, oy, oz, dx, dy, dz, time, limits, any_will_do, best):
    """The best hit after all instances that have a tree of their own."""
    ix, iy, iz = inverted(dx), inverted(dy), inverted(dz)
    stack = new_stack()
    put(stack, 0, np.int64(world.roots[1]))
    top = 1
    while top > 0:
        top -= 1
        node = get(stack, top)
        if box_entry(world.boxes, node, ox, oy, oz, ix, iy, iz, best[0] + limits[6]) == math.inf:
            continue
        left, count = np.int64(world.links[node, 0]), np.int64(world.links[node, 1])
        if count == 0:
            put(stack, top, left)
            put(stack, top + 1, left + 1)
            top += 2
        for item in range(left, left + count):
            instance = np.int64(world.items[item, 0])
            _, w, _ = matrix_at(world, instance, time)
            px, py, pz = carry(w, ox, oy, oz)
            qx, qy, qz = turn(w, dx, dy, dz)
            root = np.int64(world.instances[instance, ROOT])
            best = walk(world, root, instance, px, py, pz, qx, qy, qz, limits, any_will_do, best)
            if any_will_do and best[1] >= 0:
                return best
    return best


@kernel
def search(world, ox, oy, oz, dx, dy, dz, time, limits, any_will_do):
    """The best hit in the whole world: (t, instance, primitive, u, v, t of the next)."""
    best = (limits[0], np.int64(-1), np.int64(-1), 0.0, 0.0, math.inf)
    if world.roots[0] >= 0:
        best = walk(world, np.int64(world.roots[0]), np.int64(-1), ox, oy, oz, dx, dy, dz, limits, any_will_do, best)
    if world.roots[1] >= 0 and not (any_will_do and best[1] >= 0):
        best = walk_instances(world, ox, oy, oz, dx, dy, dz, time, limits, any_will_do, best)
    return best


@kernel
def closest_hit(
    world, ox, oy, oz, dx, dy, dz, time, t_max, skip_instance, skip_primitive, t_after, instance_after, primitive_after
):
    """The first hit after another in the strict order: (t, instance, primitive, u, v, crowded).

    The order is by t, then instance, then primitive.

    Parameters: origin [m] and unit direction; time in [0, 1] over the shutter; `t_max` [m], which counts; the element
    that the ray leaves (-1, -1 for none), of a sphere only the near side; and the hit to come after, (0.0, -1, -1)
    for a fresh ray. Instance -1: nothing is hit, t is then infinite. (u, v) are the barycentrics of the second and
    third corner. `crowded`: the next hit lies so close behind that both may be one boundary.
    """
    touch = world.touch_m[0] + ROUNDING * (abs(ox) + abs(oy) + abs(oz))
    limits = (
        np.float64(t_max), np.int64(skip_instance), np.int64(skip_primitive),
        np.float64(t_after), np.int64(instance_after), np.int64(primitive_after), touch,
    )  # fmt: skip
    t, instance, primitive, u, v, t_next = search(world, ox, oy, oz, dx, dy, dz, time, limits, False)
    if instance < 0:
        return math.inf, instance, primitive, u, v, False
    return t, instance, primitive, u, v, t_next - t <= touch


@kernel
def any_hit(world, ox, oy, oz, dx, dy, dz, time, t_max, skip_instance, skip_primitive):
    """Some hit at a distance in (0, t_max), as (instance, primitive); (-1, -1) where there is none."""
    none = np.int64(1) << np.int64(40)
    limits = (
        np.nextafter(np.float64(t_max), 0.0), np.int64(skip_instance), np.int64(skip_primitive), 0.0, none, none, 0.0
    )  # fmt: skip
    best = search(world, ox, oy, oz, dx, dy, dz, time, limits, True)
    return best[1], best[2]


@kernel
def next_crossing(world, x, y, z, ux, uy, uz, time, t, instance, primitive):
    """The next hit of a point query: (t, instance, primitive, object, cosine, whether it is plainly a crossing)."""
    t, instance, primitive, u, v, _ = closest_hit(
        world, x, y, z, ux, uy, uz, time, math.inf, -1, -1, t, instance, primitive
    )
    if instance < 0:
        return t, instance, primitive, np.int64(-1), 0.0, True
    hit = hit_frame(world, instance, primitive, u, v, x, y, z, ux, uy, uz, t, time)
    facing = dot(hit[3], hit[4], hit[5], ux, uy, uz)
    plain = abs(facing) > NEAR_EDGE and t > hit[12]
    if world.faces[primitive, 1] >= 0:
        plain = plain and min(min(u, v), 1.0 - u - v) > NEAR_EDGE
    return t, instance, primitive, np.int64(world.instances[instance, OBJECT]), facing, plain


@kernel
def solids_at(world, x, y, z, time, ux, uy, uz):
    """The solids that hold a point and the sheets above it; the sheets met at all; and whether that is sure.

    A solid that the ray leaves more often than it enters holds the point. Of a sheet the first crossing decides.
    """
    low, high, ok = np.uint64(0), np.uint64(0), True
    ahead_low, ahead_high = np.uint64(0), np.uint64(0)
    met_low, met_high = np.uint64(0), np.uint64(0)
    t, instance, primitive = 0.0, np.int64(-1), np.int64(-1)
    for _ in range(MAX_WALK):
        t, instance, primitive, item, facing, plain = next_crossing(
            world, x, y, z, ux, uy, uz, time, t, instance, primitive
        )
        if instance < 0:
            return low, high, met_low, met_high, ok
        if world.kinds[item] == SHEET and not holds(met_low, met_high, item):
            met_low, met_high, fits = set_with(met_low, met_high, item)
            ok = ok and plain and fits
            if facing > 0.0:
                low, high, fits = set_with(low, high, item)
                ok = ok and fits
        elif world.kinds[item] == CLEAR:
            ok = ok and plain
            if facing < 0.0:
                ahead_low, ahead_high, fits = set_with(ahead_low, ahead_high, item)
            else:
                ahead_low, ahead_high, fits = set_without(ahead_low, ahead_high, item)
                if not fits:
                    low, high, fits = set_with(low, high, item)
            ok = ok and fits
    return low, high, met_low, met_high, False


@kernel
def holds(low, high, item):
    """Whether an object is in a set."""
    found = False
    for k in range(8):
        found = found or set_item(low, high, k) == item
    return found


@kernel
def objects_at(world, x, y, z, time, ux, uy, uz):
    """The objects with an inside (clear solids, and sheets with something below) that hold a point.

    Returns the set (low, high) as in object_set.py, and whether it is sure: not where the ray along the unit vector
    u grazes a surface or passes an edge, or where more than eight objects are there; ask again with another u then.
    Below a sheet is where its first crossing along u, or where there is none along -u, leads out of its top.
    """
    low, high, met_low, met_high, ok = solids_at(world, x, y, z, time, ux, uy, uz)
    if world.roots[2] == 0:
        return low, high, ok
    back_low, back_high, _, _, sure = solids_at(world, x, y, z, time, -ux, -uy, -uz)
    for k in range(8):
        item = set_item(back_low, back_high, k)
        if item >= 0 and world.kinds[item] == SHEET and not holds(met_low, met_high, item):
            low, high, fits = set_with(low, high, item)
            ok = ok and fits
    return low, high, ok and sure
