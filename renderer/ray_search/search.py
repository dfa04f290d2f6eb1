"""The closest hit of a ray, any hit, and the objects that hold a point."""

from __future__ import annotations

import math

import numpy as np

from renderer.arrays.looks import CLEAR, SHEET
from renderer.arrays.world import NOTHING, ROOT, SPHERES
from renderer.base.jit import kernel
from renderer.base.vectors import dot
from renderer.ray_search.hits import hit_frame
from renderer.ray_search.lanes import (
    BALL_WIDTH,
    OUTWARD,
    PACK_WIDTH,
    RAY_D,
    RAY_INVERSE,
    RAY_O,
    children_hit,
    entry,
    first_bit,
    get,
    lane,
    new_room,
    new_stack,
    number,
    prefetch,
    prepare,
    put,
    single_bits,
    spheres_hit,
    triangles_hit,
    word_at,
)
from renderer.ray_search.object_set import set_item, set_with, set_without
from renderer.ray_search.places import carry, matrix_at, steepest, trees_of, turn

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
    t_max, _, _, t_after, i_after, p_after, _, _ = limits
    if not (t >= t_after and t <= t_max) or not farther(t, instance, primitive, t_after, i_after, p_after):
        return best
    if best[1] >= 0 and farther(t, instance, primitive, best[0], best[1], best[2]):
        return best[0], best[1], best[2], best[3], best[4], min(best[5], t)
    after = best[0] if best[1] >= 0 else math.inf
    return t, instance, primitive, u, v, after


@kernel
def near_planes(signs):
    """Where in a node the planes begin that a ray meets first, an axis each, by the signs of its direction."""
    return (signs & 1) << 3, 16 + ((signs & 2) << 2), 32 + ((signs & 4) << 1)


@kernel
def rounded_up(reach):
    """A distance as float32, never smaller."""
    return np.float32(reach * (1.0 + OUTWARD))


@kernel
def push_children(nodes, packs, mask, room, stack, top):
    """Put the children whose bits are set on the stack, the nearest on top; gives the new top."""
    bottom = top
    while mask != 0:
        found = entry(room, first_bit(mask))
        prefetch(nodes, packs, (found << 32) >> 32)
        mask &= mask - 1
        k = top
        while k > bottom and get(stack, k - 1) < found:
            put(stack, k, get(stack, k - 1))
            k -= 1
        put(stack, k, found)
        top += 1
    return top


@kernel
def take_triangles(packs, at, mask, instance, limits, best, room):
    """The best hit after the triangles of a pack whose bits are set."""
    while mask != 0:
        k = first_bit(mask)
        mask &= mask - 1
        owner = instance if instance >= 0 else number(packs, at, k)
        primitive = number(packs, at, k + 8)
        if owner != limits[1] or primitive != limits[2]:
            det = lane(room, k + 24)
            u, v = lane(room, k + 8) / det, lane(room, k + 16) / det
            best = offered(best, limits, lane(room, k), owner, primitive, u, v)
    return best


@kernel
def take_spheres(balls, at, mask, instance, limits, best, room):
    """The best hit after the spheres of a pack whose bits are set: the near side of each, and the far one."""
    while mask != 0:
        k = first_bit(mask)
        mask &= mask - 1
        owner = instance if instance >= 0 else number(balls, at, k)
        primitive = number(balls, at, k + 8)
        if owner != limits[1] or primitive != limits[2]:
            best = offered(best, limits, lane(room, k), owner, primitive, 0.0, 0.0)
        best = offered(best, limits, lane(room, k + 8), owner, primitive, 0.0, 0.0)
    return best


@kernel
def meet_spheres(balls, pack, instance, origin, direction, limits, best, room):
    """The best hit after a pack of spheres."""
    mask = spheres_hit(balls, pack, origin, direction, limits[3], best[0] + limits[6], room)
    if mask != 0:
        return take_spheres(balls, BALL_WIDTH * pack + 32, mask, instance, limits, best, room)
    return best


@kernel
def walk(trees, root, instance, ox, oy, oz, dx, dy, dz, limits, best):
    """The best hit after all primitives of one tree, or after the first hit where any will do."""
    nodes, packs, balls = trees[0], trees[1], trees[2]
    stack, entries, room, ray = new_stack(), new_room(), new_room(), new_room()
    near = near_planes(prepare((ox, oy, oz), (dx, dy, dz), ray))
    # The longest axis comes last; read from memory, since no one could foretell a branch.
    axis = steepest(dx, dy, dz)
    scale = lane(ray, RAY_INVERSE + axis)
    shear = (lane(ray, RAY_D + axis + 1) * scale, lane(ray, RAY_D + axis + 2) * scale, scale)
    origin = (lane(ray, RAY_O + axis + 1), lane(ray, RAY_O + axis + 2), lane(ray, RAY_O + axis))
    axes = (24 * (axis + 1 if axis < 2 else axis - 2), 24 * (axis + 2 if axis < 1 else axis - 1), 24 * axis)
    top, child = np.int64(0), root
    reach = rounded_up(best[0] + limits[6])
    while True:
        if child >= 0:
            mask = children_hit(nodes, child, near, ray, reach, entries)
            if mask != 0 and mask & (mask - 1) == 0:
                child = (entry(entries, first_bit(mask)) << 32) >> 32
                continue
            top = push_children(nodes, packs, mask, entries, stack, top)
        else:
            pack = -1 - child
            if pack < SPHERES:
                mask = triangles_hit(packs, pack, axes, origin, shear, limits[3], best[0] + limits[6], room)
                if mask != 0:
                    best = take_triangles(packs, PACK_WIDTH * pack + 72, mask, instance, limits, best, room)
            else:
                best = meet_spheres(balls, pack - SPHERES, instance, (ox, oy, oz), (dx, dy, dz), limits, best, room)
            if limits[7] and best[1] >= 0:
                return best
            reach = rounded_up(best[0] + limits[6])
        limit = single_bits(reach)
        found = np.int64(-1)
        while top > 0 and found < 0:
            top -= 1
            found = get(stack, top)
            if (found >> 32) > limit:
                found = np.int64(-1)
        if found < 0:
            return best
        child = (found << 32) >> 32


@kernel
def walk_instances(trees, ox, oy, oz, dx, dy, dz, time, limits, best):
    """The best hit after all instances that have a tree of their own."""
    stack, entries, ray = new_stack(), new_room(), new_room()
    near = near_planes(prepare((ox, oy, oz), (dx, dy, dz), ray))
    put(stack, 0, word_at(trees[6], 1) & np.int64(0xFFFFFFFF))
    top = np.int64(1)
    while top > 0 and not (limits[7] and best[1] >= 0):
        top -= 1
        found = get(stack, top)
        child = (found << 32) >> 32
        reach = rounded_up(best[0] + limits[6])
        if (found >> 32) > single_bits(reach):
            continue
        if child >= 0:
            mask = children_hit(trees[0], child, near, ray, reach, entries)
            top = push_children(trees[0], trees[1], mask, entries, stack, top)
            continue
        instance = word_at(trees[3], -1 - child)
        _, w, _ = matrix_at(trees, instance, time)
        px, py, pz = carry(w, ox, oy, oz)
        qx, qy, qz = turn(w, dx, dy, dz)
        best = walk(
            trees, word_at(trees[4], 8 * instance + ROOT), instance, px, py, pz, qx, qy, qz, limits, best
        )  # fmt: skip
    return best


@kernel
def search(trees, ox, oy, oz, dx, dy, dz, time, limits):
    """The best hit in the whole world: (t, instance, primitive, u, v, t of the next); instance -1 for none."""
    best = (limits[0], np.int64(-1), np.int64(-1), 0.0, 0.0, math.inf)
    if not limits[0] >= 0.0:
        return best
    root = word_at(trees[6], 0)
    if root != NOTHING:
        best = walk(trees, root, np.int64(-1), ox, oy, oz, dx, dy, dz, limits, best)
    if word_at(trees[6], 1) != NOTHING and not (limits[7] and best[1] >= 0):
        best = walk_instances(trees, ox, oy, oz, dx, dy, dz, time, limits, best)
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
        np.float64(t_after), np.int64(instance_after), np.int64(primitive_after), touch, False,
    )  # fmt: skip
    t, instance, primitive, u, v, t_next = search(trees_of(world), ox, oy, oz, dx, dy, dz, time, limits)
    if instance < 0:
        return math.inf, instance, primitive, u, v, False
    return t, instance, primitive, u, v, t_next - t <= touch


@kernel
def any_hit(world, ox, oy, oz, dx, dy, dz, time, t_max, skip_instance, skip_primitive):
    """Some hit at a distance in (0, t_max), as (instance, primitive); (-1, -1) where there is none."""
    none = np.int64(1) << np.int64(40)
    limits = (
        np.nextafter(np.float64(t_max), 0.0), np.int64(skip_instance), np.int64(skip_primitive),
        0.0, none, none, 0.0, True,
    )  # fmt: skip
    best = search(trees_of(world), ox, oy, oz, dx, dy, dz, time, limits)
    return best[1], best[2]


@kernel
def crossing(world, instance, primitive, u, v, x, y, z, ux, uy, uz, t, time):
    """A hit of a point query: (object, cosine between normal and ray, whether it is plainly a crossing)."""
    hit = hit_frame(world, instance, primitive, u, v, x, y, z, ux, uy, uz, t, time)
    facing = dot(hit[3], hit[4], hit[5], ux, uy, uz)
    plain = abs(facing) > NEAR_EDGE and t > hit[12]
    if world.faces[primitive, 1] >= 0:
        plain = plain and min(min(u, v), 1.0 - u - v) > NEAR_EDGE
    return hit[11], facing, plain


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
    A solid that the ray leaves more often than it enters holds the point. Below a sheet is where its first crossing
    along u, or where there is none along -u, leads out of its top.
    """
    low, high, ok = np.uint64(0), np.uint64(0), True
    ahead_low, ahead_high = low, high
    met_low, met_high = low, high
    t, instance, primitive, back = 0.0, np.int64(-1), np.int64(-1), False
    for _ in range(MAX_WALK):
        t, instance, primitive, u, v, _ = closest_hit(
            world, x, y, z, ux, uy, uz, time, math.inf, -1, -1, t, instance, primitive
        )
        if instance < 0:
            if back or world.roots[2] == 0:
                return low, high, ok
            back, t, ux, uy, uz = True, 0.0, -ux, -uy, -uz
            continue
        item, facing, plain = crossing(world, instance, primitive, u, v, x, y, z, ux, uy, uz, t, time)
        fits = True
        if world.kinds[item] == SHEET and not holds(met_low, met_high, item):
            met_low, met_high, fits = set_with(met_low, met_high, item)
            if fits and facing > 0.0:
                low, high, fits = set_with(low, high, item)
            ok = ok and fits and plain
        elif world.kinds[item] == CLEAR and not back:
            if facing < 0.0:
                ahead_low, ahead_high, fits = set_with(ahead_low, ahead_high, item)
            else:
                ahead_low, ahead_high, fits = set_without(ahead_low, ahead_high, item)
                if not fits:
                    low, high, fits = set_with(low, high, item)
            ok = ok and fits and plain
    return low, high, False
