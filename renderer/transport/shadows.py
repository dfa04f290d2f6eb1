"""Whether light reaches a rough vertex straight: through air, boundaries that change nothing, and panes.

Smooth interfaces between two materials stop it: what comes through those is light that other kinds of path find.
"""

from __future__ import annotations

import math

from renderer.arrays.looks import PANE
from renderer.base.jit import kernel
from renderer.base.vectors import dot
from renderer.optics.fresnel_kernels import pane_mueller, refract_cosine
from renderer.ray_search.hits import hit_frame
from renderer.ray_search.search import any_hit, closest_hit
from renderer.transport.layout import LANE_NM
from renderer.transport.media import TOUCH, absorb, crossed, is_boundary, material_of, top_object, touching
from renderer.transport.wavelengths import table_at

MAX_SHADOW_SURFACES = 64
SHORT = 1e-6  # share of a light's distance by which a shadow ray stops short of it
BLOCKED = (0.0, 0.0, 0.0, 0.0)


@kernel
def absorbed_lanes(materials, material, lanes, length_m, clear):
    """The four transmittances `clear`, after a length of material."""
    if material == 0:
        return clear
    return (
        clear[0] * absorb(materials, material, lanes[0, LANE_NM], length_m),
        clear[1] * absorb(materials, material, lanes[1, LANE_NM], length_m),
        clear[2] * absorb(materials, material, lanes[2, LANE_NM], length_m),
        clear[3] * absorb(materials, material, lanes[3, LANE_NM], length_m),
    )


@kernel
def pane_share(frame, item, outer, cos_i, nm):
    """(RA, RB, RC, TA, TB, TC) of a pane in its surroundings, at a wavelength."""
    materials, objects = frame.materials, frame.objects
    material = objects.material[item]
    n = table_at(materials.index, material, nm) / table_at(materials.index, outer, nm)
    cos_t = refract_cosine(cos_i, 1.0, n)
    tau = 1.0
    if cos_t > 0.0:
        tau = absorb(materials, material, nm, objects.thickness_m[item] / cos_t)
    return pane_mueller(cos_i, n, tau)


@kernel
def through_pane(frame, item, outer, cos_i, lanes, clear):
    """The four transmittances `clear`, after a pane met by unpolarised light."""
    return (
        clear[0] * pane_share(frame, item, outer, cos_i, lanes[0, LANE_NM])[3],
        clear[1] * pane_share(frame, item, outer, cos_i, lanes[1, LANE_NM])[3],
        clear[2] * pane_share(frame, item, outer, cos_i, lanes[2, LANE_NM])[3],
        clear[3] * pane_share(frame, item, outer, cos_i, lanes[3, LANE_NM])[3],
    )


@kernel
def same_material(objects, low, high, low2, high2):
    """Whether two sets of objects have the same material on top, so that nothing changes for a ray."""
    return material_of(objects, top_object(objects, low, high)) == material_of(
        objects, top_object(objects, low2, high2)
    )


@kernel
def step_through(frame, lanes, ox, oy, oz, dx, dy, dz, time, reach, skip_i, skip_p, low, high):
    """The slow half of `seen`: surface by surface along the ray, as long as each lets it by."""
    world, objects, materials = frame.world, frame.objects, frame.materials
    clear = (1.0, 1.0, 1.0, 1.0)
    t, instance, primitive = 0.0, -1, -1
    done = 0.0
    for _ in range(MAX_SHADOW_SURFACES):
        t, instance, primitive, u, v, crowded = closest_hit(
            world, ox, oy, oz, dx, dy, dz, time, reach, skip_i, skip_p, t, instance, primitive
        )
        outer = material_of(objects, top_object(objects, low, high))
        if instance < 0:
            return absorbed_lanes(materials, outer, lanes, reach - done, clear)
        hit = hit_frame(world, instance, primitive, u, v, ox, oy, oz, dx, dy, dz, t, time)
        item = hit[11]
        facing = dot(hit[3], hit[4], hit[5], dx, dy, dz)
        clear = absorbed_lanes(materials, outer, lanes, t - done, clear)
        done = t
        if objects.kind[item] == PANE:
            clear = through_pane(frame, item, outer, min(abs(facing), 1.0), lanes, clear)
        elif is_boundary(objects.kind[item]):
            entering = facing < 0.0
            low2, high2, _ok = crossed(objects, low, high, item, entering)
            if crowded and not same_material(objects, low, high, low2, high2):
                # As on a camera path, boundaries that fall together are one: blocks of water that touch let light by.
                low2, high2, _ok, t, instance, primitive, other, _p, _t, _u, _v = touching(
                    world, objects, ox, oy, oz, dx, dy, dz, time, t, instance, primitive, low, high, item, entering,
                    TOUCH * hit[12] / max(abs(facing), 1e-3),
                )  # fmt: skip
                if other >= 0:
                    return BLOCKED
            if not same_material(objects, low, high, low2, high2):
                return BLOCKED
            low, high = low2, high2
        else:
            return BLOCKED
    return BLOCKED


@kernel
def seen(frame, lanes, ox, oy, oz, dx, dy, dz, time, reach, skip_i, skip_p, low, high):
    """Transmittance of the four lanes from a vertex along a direction, up to the distance `reach` (may be infinite)."""
    objects = frame.objects
    instance, primitive = any_hit(frame.world, ox, oy, oz, dx, dy, dz, time, reach, skip_i, skip_p)
    if instance < 0:
        outer = material_of(objects, top_object(objects, low, high))
        return absorbed_lanes(frame.materials, outer, lanes, reach, (1.0, 1.0, 1.0, 1.0))
    # An opaque object ends it; only where the first found is clear is it worth a walk.
    hit = hit_frame(frame.world, instance, primitive, 0.3, 0.3, ox, oy, oz, dx, dy, dz, 0.0, time)
    kind = objects.kind[hit[11]]
    if not is_boundary(kind) and kind != PANE:
        return BLOCKED
    return step_through(frame, lanes, ox, oy, oz, dx, dy, dz, time, reach, skip_i, skip_p, low, high)


@kernel
def finite_reach(reach):
    """A light's distance less a hair, so that the ray does not meet the light itself: far more than the rounding of
    points a hundred kilometres from the origin."""
    if math.isinf(reach):
        return reach
    return reach * (1.0 - SHORT)
