"""The closest hit of a ray, any hit, and the objects that hold a point."""

from __future__ import annotations

import math

import numpy as np

from renderer.arrays.looks import CLEAR, SHEET
from renderer.arrays.world import NOTHING, ROOT, SPHERES
from renderer.base.jit import kernel
from renderer.base.reference import refer
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
    set_lane,
    single_bits,
    spheres_hit,
    triangles_hit,
    wholes,
    word_at,
)
from renderer.ray_search.object_set import set_item, set_with, set_without
from renderer.ray_search.places import carry, matrix_at, steepest, trees_of, turn

# Where in a query's room its numbers are: the best hit so far, and what counts as one. Kept in memory, since a search
# touches them seldom, and needs its registers for boxes.
T, U, V, WEIGHT, T_NEXT, T_MAX, T_AFTER = 0, 1, 2, 3, 4, 5, 6
INSTANCE, PRIMITIVE, SKIP_INSTANCE, SKIP_PRIMITIVE, INSTANCE_AFTER, PRIMITIVE_AFTER = 8, 9, 10, 11, 12, 13
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
def ask(t_max, skip_instance, skip_primitive, t_after, instance_after, primitive_after, query):
    """Write a query: what counts as a hit. Nothing is found yet, which is a hit at `t_max`."""
    set_lane(query, T, t_max)
    set_lane(query, T_NEXT, math.inf)
    set_lane(query, T_MAX, t_max)
    set_lane(query, T_AFTER, t_after)
    whole = wholes(query)
    put(whole, INSTANCE, -1)
    put(whole, PRIMITIVE, -1)
    put(whole, SKIP_INSTANCE, skip_instance)
    put(whole, SKIP_PRIMITIVE, skip_primitive)
    put(whole, INSTANCE_AFTER, instance_after)
    put(whole, PRIMITIVE_AFTER, primitive_after)


@kernel
def offer(query, t, instance, primitive, u, v, whole_weight):
    """Let a query know of one more hit; u and v are parts of `whole_weight`."""
    whole = wholes(query)
    t_after = lane(query, T_AFTER)
    if not (t >= t_after and t <= lane(query, T_MAX)):
        return
    if not farther(t, instance, primitive, t_after, get(whole, INSTANCE_AFTER), get(whole, PRIMITIVE_AFTER)):
        return
    best = lane(query, T)
    if get(whole, INSTANCE) >= 0:
        if farther(t, instance, primitive, best, get(whole, INSTANCE), get(whole, PRIMITIVE)):
            set_lane(query, T_NEXT, min(lane(query, T_NEXT), t))
            return
        set_lane(query, T_NEXT, best)
    set_lane(query, T, t)
    set_lane(query, U, u)
    set_lane(query, V, v)
    set_lane(query, WEIGHT, whole_weight)
    put(whole, INSTANCE, instance)
    put(whole, PRIMITIVE, primitive)


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
def take_triangles(packs, at, mask, instance, query, room):
    """Offer the triangles of a pack whose bits are set."""
    whole = wholes(query)
    while mask != 0:
        k = first_bit(mask)
        mask &= mask - 1
        owner = instance if instance >= 0 else number(packs, at, k)
        primitive = number(packs, at, k + 8)
        if owner != get(whole, SKIP_INSTANCE) or primitive != get(whole, SKIP_PRIMITIVE):
            u, v, det = lane(room, k + 8), lane(room, k + 16), lane(room, k + 24)
            offer(query, lane(room, k), owner, primitive, u, v, det)


@kernel
def take_spheres(balls, at, mask, instance, query, room):
    """Offer the spheres of a pack whose bits are set: the near side of each, and the far one."""
    whole = wholes(query)
    while mask != 0:
        k = first_bit(mask)
        mask &= mask - 1
        owner = instance if instance >= 0 else number(balls, at, k)
        primitive = number(balls, at, k + 8)
        if owner != get(whole, SKIP_INSTANCE) or primitive != get(whole, SKIP_PRIMITIVE):
            offer(query, lane(room, k), owner, primitive, 0.0, 0.0, 1.0)
        offer(query, lane(room, k + 8), owner, primitive, 0.0, 0.0, 1.0)


@kernel
def walk(world, root, instance, ox, oy, oz, dx, dy, dz, touch, any_will_do, query):
    """Offer all primitives of one tree that the ray meets, or those up to the first that counts where any will do."""
    trees = trees_of(world)
    nodes, packs, balls = trees[0], trees[1], trees[2]
    stack, entries, room, ray = new_stack(), new_room(), new_room(), new_room()
    near = near_planes(prepare((ox, oy, oz), (dx, dy, dz), ray))
    # The longest axis comes last; read from memory, since no one could foretell a branch.
    axis = steepest(dx, dy, dz)
    scale = lane(ray, RAY_INVERSE + axis)
    shear = (lane(ray, RAY_D + axis + 1) * scale, lane(ray, RAY_D + axis + 2) * scale, scale)
    origin = (lane(ray, RAY_O + axis + 1), lane(ray, RAY_O + axis + 2), lane(ray, RAY_O + axis))
    # Axes 1, 2, 0 and 2, 0, 1 as pairs of bits: again no branch.
    axes = (24 * ((0b001001 >> (axis << 1)) & 3), 24 * ((0b010010 >> (axis << 1)) & 3), 24 * axis)
    top, child = np.int64(0), root
    reach = rounded_up(lane(query, T) + touch)
    while True:
        if child >= 0:
            mask = children_hit(nodes, child, near, ray, reach, entries)
            if mask != 0:
                # Mostly one or two are met: then the nearer is next, without the stack.
                rest = mask & (mask - 1)
                first = entry(entries, first_bit(mask))
                if rest == 0:
                    child = (first << 32) >> 32
                    continue
                if rest & (rest - 1) == 0:
                    second = entry(entries, first_bit(rest))
                    later = max(first, second)
                    prefetch(nodes, packs, (later << 32) >> 32)
                    put(stack, top, later)
                    top += 1
                    child = (min(first, second) << 32) >> 32
                    continue
                top = push_children(nodes, packs, mask, entries, stack, top)
        else:
            pack = -1 - child
            least, most = lane(query, T_AFTER), lane(query, T) + touch
            if pack < SPHERES:
                mask = triangles_hit(packs, pack, axes, origin, shear, least, most, room)
                if mask != 0:
                    take_triangles(packs, PACK_WIDTH * pack + 72, mask, instance, query, room)
            else:
                pack -= SPHERES
                mask = spheres_hit(balls, pack, ray, least, most, room)
                if mask != 0:
                    take_spheres(balls, BALL_WIDTH * pack + 32, mask, instance, query, room)
            if mask != 0:
                if any_will_do and get(wholes(query), INSTANCE) >= 0:
                    return
                reach = rounded_up(lane(query, T) + touch)
        limit = single_bits(reach)
        found = np.int64(-1)
        while top > 0 and found < 0:
            top -= 1
            found = get(stack, top)
            if (found >> 32) > limit:
                found = np.int64(-1)
        if found < 0:
            return
        child = (found << 32) >> 32


@kernel
def walk_instances(world, root, ox, oy, oz, dx, dy, dz, time, touch, any_will_do, query):
    """Offer what the ray meets of all instances that have a tree of their own."""
    trees = trees_of(world)
    stack, entries, ray = new_stack(), new_room(), new_room()
    near = near_planes(prepare((ox, oy, oz), (dx, dy, dz), ray))
    put(stack, 0, root & np.int64(0xFFFFFFFF))
    top = np.int64(1)
    while top > 0 and not (any_will_do and get(wholes(query), INSTANCE) >= 0):
        top -= 1
        found = get(stack, top)
        child = (found << 32) >> 32
        reach = rounded_up(lane(query, T) + touch)
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
        own = word_at(trees[4], 8 * instance + ROOT)
        walk(world, own, instance, px, py, pz, qx, qy, qz, touch, any_will_do, query)


@kernel
def search(world, ox, oy, oz, dx, dy, dz, time, touch, any_will_do, query):
    """Answer a query in the whole world."""
    roots = trees_of(world)[6]
    if not lane(query, T) >= 0.0:
        return
    root = word_at(roots, 0)
    if root != NOTHING:
        walk(world, root, np.int64(-1), ox, oy, oz, dx, dy, dz, touch, any_will_do, query)
    root = word_at(roots, 1)
    if root != NOTHING and not (any_will_do and get(wholes(query), INSTANCE) >= 0):
        walk_instances(world, root, ox, oy, oz, dx, dy, dz, time, touch, any_will_do, query)


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
    query = new_room()
    ask(
        np.float64(t_max), np.int64(skip_instance), np.int64(skip_primitive), np.float64(t_after),
        np.int64(instance_after), np.int64(primitive_after), query,
    )  # fmt: skip
    search(refer(world), ox, oy, oz, dx, dy, dz, np.float64(time), touch, False, query)
    whole = wholes(query)
    instance, primitive = get(whole, INSTANCE), get(whole, PRIMITIVE)
    if instance < 0:
        return math.inf, instance, primitive, 0.0, 0.0, False
    t, weight = lane(query, T), lane(query, WEIGHT)
    u, v = lane(query, U) / weight, lane(query, V) / weight
    return t, instance, primitive, u, v, lane(query, T_NEXT) - t <= touch


@kernel
def any_hit(world, ox, oy, oz, dx, dy, dz, time, t_max, skip_instance, skip_primitive):
    """Some hit at a distance in (0, t_max), as (instance, primitive); (-1, -1) where there is none."""
    query = new_room()
    ask(
        np.nextafter(np.float64(t_max), 0.0), np.int64(skip_instance), np.int64(skip_primitive), 0.0,
        np.int64(1) << np.int64(40), np.int64(-1), query,
    )  # fmt: skip
    search(refer(world), ox, oy, oz, dx, dy, dz, np.float64(time), 0.0, True, query)
    whole = wholes(query)
    return get(whole, INSTANCE), get(whole, PRIMITIVE)


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
