"""What a ray is inside of, and what changes as it crosses the boundary of a clear object.

Where objects overlap, the one of highest priority is there (C. M. Schmidt and B. Budge, "Simple Nested Dielectrics in
Ray Traced Images", J. Graphics Tools 7(2), 2002), so glass that holds water needs no exact fit. Boundaries that fall
together within rounding are crossed as one, so that no film of air is seen between surfaces that touch.
"""

from __future__ import annotations

import math

from renderer.arrays.looks import CLEAR, SHEET
from renderer.base.jit import kernel
from renderer.base.vectors import dot
from renderer.ray_search.hits import hit_frame
from renderer.ray_search.object_set import set_item, set_with, set_without
from renderer.ray_search.search import closest_hit
from renderer.transport.wavelengths import table_at

TOUCH = 16.0  # error bounds within which boundaries are crossed as one
MAX_TOUCHING = 8  # boundaries that may fall together


@kernel
def top_object(objects, low, high):
    """The object of highest priority in a set, the later one at equal priority; -1 for air."""
    best = -1
    if low == 0 and high == 0:
        return best
    for k in range(8):
        item = set_item(low, high, k)
        if item >= 0 and (
            best < 0
            or objects.priority[item] > objects.priority[best]
            or (objects.priority[item] == objects.priority[best] and item > best)
        ):
            best = item
    return best


@kernel
def material_of(objects, item):
    """Row of Materials of an object, 0 (air) for -1."""
    if item < 0:
        return 0
    return objects.material[item]


@kernel
def crossed(objects, low, high, item, entering):
    """The set after a boundary of `item`, and whether it could hold or lose it."""
    if entering:
        return set_with(low, high, item)
    return set_without(low, high, item)


@kernel
def absorb(materials, material, lanes_nm, length_m):
    """Transmittance of a length of material at a wavelength, by the law of Beer and Lambert."""
    rate = table_at(materials.absorption_per_m, material, lanes_nm)
    if rate <= 0.0:
        return 1.0
    return math.exp(-rate * length_m)


@kernel
def is_boundary(kind):
    """Whether an object of this kind has an inside that rays enter and leave."""
    return kind in (CLEAR, SHEET)


@kernel
def touching(world, objects, ox, oy, oz, dx, dy, dz, time, t, instance, primitive, low, high, item, entering, reach):
    """Cross the boundary of `item` and all that lie within `reach` behind it on the same ray.

    Returns the set after them, whether all could be stored, the last hit in order (t, instance, primitive), and the
    first opaque hit among them (instance, or -1; primitive; t; u; v) at which the ray ends instead.
    """
    low, high, ok = crossed(objects, low, high, item, entering)
    seen_item, seen_entering = item, entering
    last_t, last_instance, last_primitive = t, instance, primitive
    for _ in range(MAX_TOUCHING):
        t2, instance2, primitive2, u2, v2, _crowded = closest_hit(
            world, ox, oy, oz, dx, dy, dz, time, t + reach, -1, -1, last_t, last_instance, last_primitive
        )
        if instance2 < 0:
            break
        frame = hit_frame(world, instance2, primitive2, u2, v2, ox, oy, oz, dx, dy, dz, t2, time)
        item2 = frame[11]
        if not is_boundary(objects.kind[item2]):
            return low, high, ok, last_t, last_instance, last_primitive, instance2, primitive2, t2, u2, v2
        entering2 = dot(frame[3], frame[4], frame[5], dx, dy, dz) < 0.0
        # A ray through a shared edge meets two triangles of one boundary: crossed once.
        if item2 != seen_item or entering2 != seen_entering:
            low, high, fitted = crossed(objects, low, high, item2, entering2)
            ok = ok and fitted
        seen_item, seen_entering = item2, entering2
        last_t, last_instance, last_primitive = t2, instance2, primitive2
    return low, high, ok, last_t, last_instance, last_primitive, -1, -1, 0.0, 0.0, 0.0
