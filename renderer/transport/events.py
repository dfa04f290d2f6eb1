"""What happens to a path where its ray ends: in the open, at a light, a pane, a clear boundary or an opaque surface.

Every event function returns the slot to go on with: the same, the next one up after a split, or one lower when the path
has ended there.
"""

from __future__ import annotations

import math

from renderer.base.jit import kernel
from renderer.base.vectors import dot
from renderer.ray_search.hits import leave
from renderer.transport.direct import deposit, dimension, light_vertex
from renderer.transport.interface import (
    depolarise_all,
    lane_mueller,
    mirrored,
    reflect_lanes,
    refract_lanes,
    refracted,
    safe_normal,
    set_direction,
)
from renderer.transport.layout import (
    AFTER,
    AXIS,
    BRANCH,
    BRANCH_POINT,
    DIRECT,
    DIRECTION,
    INDEX_BEYOND,
    INDEX_HERE,
    INSTANCE_AFTER,
    INTERFACES,
    IS_INTERFACE,
    KIND,
    LANE_NM,
    LEFT_OUT,
    LOBE_POINT,
    MIS,
    N_REALS,
    N_WHOLE,
    ORIGIN,
    POINT,
    POINT_ERROR,
    PRIMITIVE_AFTER,
    RATIO,
    REFLECTANCE,
    REFLECTED,
    ROUGH_SEEN,
    ROW,
    SCATTER_POINT,
    SKIP_INSTANCE,
    SKIP_PRIMITIVE,
    SKY,
    SMOOTH_SINCE,
    SOLO,
    SPLITS,
    TIME,
    TOP,
    TRANSMITTED,
    TRUE_NORMAL,
    VIEW,
    WET,
    ALPHA,
)
from renderer.transport.lights import (
    area_density,
    area_lane,
    on_sun,
    sky_density,
    sky_lane,
    sky_place,
    sun_darkening,
    sun_lane,
)
from renderer.transport.microfacet import visible_normal
from renderer.transport.points import pair
from renderer.transport.shadows import pane_share
from renderer.transport.stokes import (
    apply_block,
    depolarise,
    drop_companions,
    plane_axis,
    scale_row,
    share,
    turn_rows,
)
from renderer.transport.surfaces import draw_reflection, is_mirror, reflectance_at, schlick, top_of
from renderer.transport.vertices import from_vertex, place_vertex, respond, to_vertex, height
from renderer.transport.wavelengths import table_at


# Shared pieces.


@kernel
def first_kind(whole, k, kind):
    """Name the kind of light that a path finds, by its first event."""
    if whole[k, KIND] == SKY:
        whole[k, KIND] = kind


@kernel
def new_ray(reals, whole, k, ox, oy, oz):
    """Start the path's ray afresh from a point."""
    reals[k, ORIGIN], reals[k, ORIGIN + 1], reals[k, ORIGIN + 2] = ox, oy, oz
    reals[k, AFTER] = 0.0
    whole[k, INSTANCE_AFTER] = -1
    whole[k, PRIMITIVE_AFTER] = -1


@kernel
def same_ray(reals, whole, k, t, instance, primitive):
    """Let the path's ray run on behind a hit."""
    reals[k, AFTER] = t
    whole[k, INSTANCE_AFTER] = instance
    whole[k, PRIMITIVE_AFTER] = primitive


@kernel
def lane_count(whole, k):
    """How many lanes still carry light: four, or the hero alone."""
    return 1 if whole[k, SOLO] == 1 else 4


@kernel
def smooth_event(reals, whole, k):
    """Note that the path has met a smooth interface."""
    reals[k, MIS] = 0.0
    whole[k, INTERFACES] += 1
    if whole[k, ROUGH_SEEN] == 1:
        whole[k, SMOOTH_SINCE] = 1


@kernel
def copy_slot(reals, whole, sets, k):
    """Copy a path into the next slot up."""
    for i in range(N_REALS):
        reals[k + 1, i] = reals[k, i]
    for i in range(N_WHOLE):
        whole[k + 1, i] = whole[k, i]
    sets[k + 1, 0] = sets[k, 0]
    sets[k + 1, 1] = sets[k, 1]


@kernel
def ratio_sum(reals, k):
    """Sum of the lanes' density ratios."""
    return reals[k, RATIO] + reals[k, RATIO + 1] + reals[k, RATIO + 2] + reals[k, RATIO + 3]


# In the open.


@kernel
def escape(sun, sky, lanes, reals, whole, k, light, bins, tally):
    """Add the sky, and the sun's disc where the ray meets it."""
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    ratios, mis = ratio_sum(reals, k), reals[k, MIS]
    row, column = sky_place(sky, dx, dy, dz)
    weight = 1.0 / ratios
    if mis > 0.0:
        weight = 1.0 / (ratios + mis * sky_density(sky, row, column))
    for lane in range(lane_count(whole, k)):
        radiance = reals[k, ROW + 4 * lane] * weight * sky_lane(sky, row, column, lanes, lane)
        deposit(light, bins, lanes, lane, whole[k, KIND], radiance)
    if on_sun(sun, dx, dy, dz):
        if whole[k, SMOOTH_SINCE] == 1:
            tally[LEFT_OUT] += 1
            return
        weight = 1.0 / (ratios + mis / sun.numbers[5])
        darkening = sun_darkening(sun, dx, dy, dz)
        for lane in range(lane_count(whole, k)):
            radiance = reals[k, ROW + 4 * lane] * weight * darkening * sun_lane(sun, lanes, lane)
            deposit(light, bins, lanes, lane, whole[k, KIND], radiance)


@kernel
def meet_light(world, objects, lights, item, facing, instance, primitive, t, lanes, reals, whole, k, light, bins,
               tally):  # fmt: skip
    """Add what an area light gives towards the ray; the path ends there."""
    row = objects.light[item]
    if row < 0 or (facing > 0.0 and not lights.two_sided[row]):
        return
    if whole[k, SMOOTH_SINCE] == 1 and lights.small[row]:
        tally[LEFT_OUT] += 1
        return
    first_kind(whole, k, DIRECT)
    weight = ratio_sum(reals, k)
    if reals[k, MIS] > 0.0:
        density = area_density(
            world, lights, instance, primitive, reals[k, TIME],
            reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2], t,
        )  # fmt: skip
        weight += reals[k, MIS] * density
    for lane in range(lane_count(whole, k)):
        radiance = reals[k, ROW + 4 * lane] / weight * area_lane(lights, row, lanes, lane)
        deposit(light, bins, lanes, lane, whole[k, KIND], radiance)


# A pane.


@kernel
def pane_reflects(materials, objects, item, outer, cos_i, lanes, reals, k, n_lanes, chance):
    """Carry the lanes through a reflection at a pane."""
    for lane in range(n_lanes):
        ra, rb, rc, _, _, _ = pane_share(materials, objects, item, outer, cos_i, lanes[lane, LANE_NM])
        if chance > 0.0:
            reals[k, RATIO + lane] *= pane_chance(materials, objects, item, outer, cos_i, lanes, reals, k, lane) / chance
        apply_block(reals, k, lane, ra, rb, rc, 0.0)
        if chance > 0.0:
            scale_row(reals, k, lane, 1.0 / chance)


@kernel
def pane_passes(materials, objects, item, outer, cos_i, lanes, reals, k, n_lanes, chance):
    """Carry the lanes straight through a pane; chance is that of passing."""
    for lane in range(n_lanes):
        _, _, _, ta, tb, tc = pane_share(materials, objects, item, outer, cos_i, lanes[lane, LANE_NM])
        if chance > 0.0:
            drawn = 1.0 - pane_chance(materials, objects, item, outer, cos_i, lanes, reals, k, lane)
            reals[k, RATIO + lane] *= drawn / chance
        apply_block(reals, k, lane, ta, tb, tc, 0.0)
        if chance > 0.0:
            scale_row(reals, k, lane, 1.0 / chance)


@kernel
def pane_chance(materials, objects, item, outer, cos_i, lanes, reals, k, lane):
    """Chance that a lane is reflected by a pane: its share of what is not absorbed."""
    ra, rb, _, ta, tb, _ = pane_share(materials, objects, item, outer, cos_i, lanes[lane, LANE_NM])
    back, through = share(reals, k, lane, ra, rb), share(reals, k, lane, ta, tb)
    if back + through <= 0.0:
        return 1.0
    return back / (back + through)


@kernel
def meet_pane(materials, objects, item, outer, point, normal, error_m, t, instance, primitive, key, index, lanes,
              reals, whole, sets, k):  # fmt: skip
    """A single sheet that stands for a plate: reflected as by its two faces, or straight through."""
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    nx, ny, nz = normal
    if dot(dx, dy, dz, nx, ny, nz) > 0.0:
        nx, ny, nz = -nx, -ny, -nz
    cos_i = min(-dot(dx, dy, dz, nx, ny, nz), 1.0)
    sx, sy, sz = plane_axis(reals, k, nx, ny, nz)
    turn_rows(reals, k, sx, sy, sz)
    n_lanes = lane_count(whole, k)
    chance = pane_chance(materials, objects, item, outer, cos_i, lanes, reals, k, 0)
    whole[k, INTERFACES] += 1
    through = k
    if whole[k, SPLITS] > 0 and 0.0 < chance < 1.0:
        whole[k, SPLITS] -= 1
        copy_slot(reals, whole, sets, k)
        through = k + 1
        whole[k, BRANCH] = 2 * whole[k, BRANCH] + 1
        whole[through, BRANCH] = 2 * whole[through, BRANCH] + 2
        chance_back, chance_through = 0.0, 0.0
    else:
        u, _ = pair(key, index, dimension(whole, k, BRANCH_POINT))
        if u < chance:
            through = -1
        chance_back, chance_through = chance, 1.0 - chance
    if through >= 0:
        pane_passes(materials, objects, item, outer, cos_i, lanes, reals, through, n_lanes, chance_through)
        first_kind(whole, through, TRANSMITTED)
        same_ray(reals, whole, through, t, instance, primitive)
    if through != k:
        pane_reflects(materials, objects, item, outer, cos_i, lanes, reals, k, n_lanes, chance_back)
        first_kind(whole, k, REFLECTED)
        smooth_event(reals, whole, k)
        rx, ry, rz = mirrored(dx, dy, dz, nx, ny, nz)
        ox, oy, oz = leave(point[0], point[1], point[2], nx, ny, nz, error_m, rx, ry, rz)
        set_direction(reals, k, rx, ry, rz)
        new_ray(reals, whole, k, ox, oy, oz)
        whole[k, SKIP_INSTANCE], whole[k, SKIP_PRIMITIVE] = instance, primitive
    return max(through, k)


# A smooth clear boundary.


@kernel
def go_back(materials, m1, m2, cos_i, point, normal, true_normal, error_m, lanes, reals, whole, k, n_lanes, chance):
    """Reflect a path at a smooth boundary."""
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    rx, ry, rz = mirrored(dx, dy, dz, normal[0], normal[1], normal[2])
    reflect_lanes(reals, k, materials, m1, m2, cos_i, lanes, n_lanes, chance)
    set_direction(reals, k, rx, ry, rz)
    ox, oy, oz = leave(
        point[0], point[1], point[2], true_normal[0], true_normal[1], true_normal[2], error_m, rx, ry, rz
    )
    new_ray(reals, whole, k, ox, oy, oz)
    first_kind(whole, k, REFLECTED)
    smooth_event(reals, whole, k)


@kernel
def go_through(materials, m1, m2, cos_i, cos_t, point, normal, true_normal, error_m, lanes, reals, whole, sets, k,
               n_lanes, chance, low, high):  # fmt: skip
    """Refract a path at a smooth boundary; where the index varies with wavelength, the hero goes on alone."""
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    refract_lanes(reals, k, materials, m1, m2, cos_i, lanes, n_lanes, chance)
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
    new_ray(reals, whole, k, ox, oy, oz)
    sets[k, 0], sets[k, 1] = low, high
    first_kind(whole, k, TRANSMITTED)
    smooth_event(reals, whole, k)


@kernel
def meet_boundary(materials, m1, m2, point, true_normal, shading_normal, error_m, instance, primitive, low, high, key,
                  index, lanes, reals, whole, sets, k):  # fmt: skip
    """A smooth boundary from material m1 into m2; (low, high) is the set of objects beyond it."""
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
    if cos_t < 0.0:
        back = 1.0
    n_lanes = lane_count(whole, k)
    whole[k, SKIP_INSTANCE], whole[k, SKIP_PRIMITIVE] = instance, primitive
    if back >= 1.0:
        # The hero's chance is one, a companion's its own share: it may pass where the hero cannot.
        go_back(materials, m1, m2, cos_i, point, n, g, error_m, lanes, reals, whole, k, n_lanes, 1.0)
        return k
    if whole[k, SPLITS] > 0:
        whole[k, SPLITS] -= 1
        copy_slot(reals, whole, sets, k)
        whole[k, BRANCH] = 2 * whole[k, BRANCH] + 1
        whole[k + 1, BRANCH] = 2 * whole[k + 1, BRANCH] + 2
        go_through(materials, m1, m2, cos_i, cos_t, point, n, g, error_m, lanes, reals, whole, sets, k + 1, n_lanes,
                   0.0, low, high)  # fmt: skip
        go_back(materials, m1, m2, cos_i, point, n, g, error_m, lanes, reals, whole, k, n_lanes, 0.0)
        return k + 1
    u, _ = pair(key, index, dimension(whole, k, BRANCH_POINT))
    if u < back:
        go_back(materials, m1, m2, cos_i, point, n, g, error_m, lanes, reals, whole, k, n_lanes, back)
    else:
        go_through(materials, m1, m2, cos_i, cos_t, point, n, g, error_m, lanes, reals, whole, sets, k, n_lanes,
                   1.0 - back, low, high)  # fmt: skip
    return k


# Rough vertices.


@kernel
def scatter_on(vertex, reals, whole, k, dx, dy, dz):
    """Send a path from a vertex into the world direction d that was drawn there; False when it cannot go there."""
    f0, f1, f2, f3, p0, p1, p2, p3 = respond(vertex, dx, dy, dz)
    if not p0 > 0.0:
        return False
    before = ratio_sum(reals, k)
    reals[k, MIS] = before / p0
    reals[k, RATIO + 1] *= p1 / p0
    reals[k, RATIO + 2] *= p2 / p0
    reals[k, RATIO + 3] *= p3 / p0
    depolarise(reals, k, 0, f0 / p0)
    depolarise(reals, k, 1, f1 / p0)
    depolarise(reals, k, 2, f2 / p0)
    depolarise(reals, k, 3, f3 / p0)
    set_direction(reals, k, dx, dy, dz)
    ox, oy, oz = leave(
        vertex[POINT], vertex[POINT + 1], vertex[POINT + 2],
        vertex[TRUE_NORMAL], vertex[TRUE_NORMAL + 1], vertex[TRUE_NORMAL + 2], vertex[POINT_ERROR], dx, dy, dz,
    )  # fmt: skip
    new_ray(reals, whole, k, ox, oy, oz)
    # The reference axis is only kept across the ray: nothing polarised is left that it could refer to.
    ax, ay, az = plane_axis(reals, k, vertex[0], vertex[1], vertex[2])
    reals[k, AXIS], reals[k, AXIS + 1], reals[k, AXIS + 2] = ax, ay, az
    whole[k, ROUGH_SEEN] = 1
    whole[k, SMOOTH_SINCE] = 0
    return True


@kernel
def meet_mirror(surfaces, surface, u, v, lanes, vertex, reals, whole, k):
    """Reflect a path at a smooth metal; its phases are not told apart, so the reflection only scales the row."""
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    n = safe_normal(
        dx, dy, dz, vertex[TRUE_NORMAL], vertex[TRUE_NORMAL + 1], vertex[TRUE_NORMAL + 2], vertex[6], vertex[7], vertex[8]
    )
    cos_i = min(-dot(dx, dy, dz, n[0], n[1], n[2]), 1.0)
    sx, sy, sz = plane_axis(reals, k, n[0], n[1], n[2])
    turn_rows(reals, k, sx, sy, sz)
    for lane in range(lane_count(whole, k)):
        r = schlick(reflectance_at(surfaces, surface, u, v, lanes[lane, LANE_NM]), cos_i)
        apply_block(reals, k, lane, r, 0.0, -r, 0.0)
    rx, ry, rz = mirrored(dx, dy, dz, n[0], n[1], n[2])
    ox, oy, oz = leave(
        vertex[POINT], vertex[POINT + 1], vertex[POINT + 2],
        vertex[TRUE_NORMAL], vertex[TRUE_NORMAL + 1], vertex[TRUE_NORMAL + 2], vertex[POINT_ERROR], rx, ry, rz,
    )  # fmt: skip
    set_direction(reals, k, rx, ry, rz)
    new_ray(reals, whole, k, ox, oy, oz)
    first_kind(whole, k, REFLECTED)
    smooth_event(reals, whole, k)


@kernel
def meet_opaque(world, objects, materials, surfaces, sun, sky, lights, surface, tu, tv, key, index, lanes, vertex,
                reals, whole, sets, k, light, bins):  # fmt: skip
    """An opaque surface at a placed vertex: light it, then scatter. Returns the slot to go on with."""
    if is_mirror(surfaces, surface):
        meet_mirror(surfaces, surface, tu, tv, lanes, vertex, reals, whole, k)
        return k
    u_wet, u_lobe = pair(key, index, dimension(whole, k, LOBE_POINT))
    top, alpha, wet = top_of(surfaces, surface, u_wet)
    vertex[TOP], vertex[ALPHA], vertex[WET], vertex[IS_INTERFACE] = top, alpha, 1.0 if wet else 0.0, 0.0
    for lane in range(4):
        vertex[REFLECTANCE + lane] = 0.0
    for lane in range(lane_count(whole, k)):
        vertex[REFLECTANCE + lane] = reflectance_at(surfaces, surface, tu, tv, lanes[lane, LANE_NM])
    first_kind(whole, k, DIRECT)
    low, high = sets[k, 0], sets[k, 1]
    light_vertex(world, objects, materials, sun, sky, lights, key, index, lanes, reals, whole, k, vertex, low, high,
                 low, high, light, bins)  # fmt: skip
    u, v = pair(key, index, dimension(whole, k, SCATTER_POINT))
    wx, wy, wz = draw_reflection(top, alpha, vertex[VIEW], vertex[VIEW + 1], vertex[VIEW + 2], u, v, u_lobe)
    if wz <= 0.0:
        return k - 1
    dx, dy, dz = from_vertex(vertex, wx, wy, wz)
    if not scatter_on(vertex, reals, whole, k, dx, dy, dz):
        return k - 1
    return k


@kernel
def draw_rough_way(vertex, reals, k, n_v, n_w, u, v, u_way):
    """A direction beyond or back from a rough boundary for the hero, in the vertex's frame; z = 0 for none."""
    vx, vy, vz = vertex[VIEW], vertex[VIEW + 1], vertex[VIEW + 2]
    hx, hy, hz = visible_normal(vertex[ALPHA], vx, vy, vz, u, v)
    vh = dot(vx, vy, vz, hx, hy, hz)
    ratio = n_v / n_w
    square = 1.0 - ratio * ratio * (1.0 - vh * vh)
    reflects = square <= 0.0
    if not reflects:
        root = math.sqrt(square)
        rs = (n_v * vh - n_w * root) / (n_v * vh + n_w * root)
        rp = (n_w * vh - n_v * root) / (n_w * vh + n_v * root)
        reflects = u_way < 0.5 * (rs * rs + rp * rp)
    if reflects:
        return 2.0 * vh * hx - vx, 2.0 * vh * hy - vy, max(2.0 * vh * hz - vz, 0.0)
    m = ratio * vh - root
    return m * hx - ratio * vx, m * hy - ratio * vy, min(m * hz - ratio * vz, 0.0)


@kernel
def meet_rough_boundary(world, objects, materials, sun, sky, lights, roughness, m1, m2, low, high, key, index, lanes,
                        vertex, reals, whole, sets, k, light, bins):  # fmt: skip
    """A rough clear boundary at a placed vertex: light it from both sides, then reflect or refract by chance."""
    vertex[IS_INTERFACE], vertex[ALPHA] = 1.0, roughness * roughness
    for lane in range(4):
        vertex[INDEX_HERE + lane] = table_at(materials.index, m1, lanes[lane, LANE_NM])
        vertex[INDEX_BEYOND + lane] = table_at(materials.index, m2, lanes[lane, LANE_NM])
    u, v = pair(key, index, dimension(whole, k, SCATTER_POINT))
    u_way, _ = pair(key, index, dimension(whole, k, BRANCH_POINT))
    n_v, n_w = vertex[INDEX_HERE], vertex[INDEX_BEYOND]
    wx, wy, wz = draw_rough_way(vertex, reals, k, n_v, n_w, u, v, u_way)
    first_kind(whole, k, REFLECTED if wz > 0.0 else TRANSMITTED)
    whole[k, INTERFACES] += 1
    light_vertex(world, objects, materials, sun, sky, lights, key, index, lanes, reals, whole, k, vertex, sets[k, 0],
                 sets[k, 1], low, high, light, bins)  # fmt: skip
    if wz == 0.0:
        return k - 1
    dx, dy, dz = from_vertex(vertex, wx, wy, wz)
    if not scatter_on(vertex, reals, whole, k, dx, dy, dz):
        return k - 1
    if wz < 0.0:
        sets[k, 0], sets[k, 1] = low, high
    return k
