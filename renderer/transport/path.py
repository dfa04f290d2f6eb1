"""A camera path: from the lens, event by event, until all its branches have ended."""

from __future__ import annotations

import math

from renderer.arrays.looks import LIGHT, PANE
from renderer.base.jit import kernel
from renderer.base.vectors import dot, unit
from renderer.ray_search.hits import hit_frame
from renderer.ray_search.search import any_hit, closest_hit, objects_at
from renderer.transport.boundaries import meet_boundary
from renderer.transport.endings import escape, meet_light
from renderer.transport.film import camera_ray, polarisation_axis, tent
from renderer.transport.interface import rough_normal
from renderer.transport.layout import (
    AFTER,
    AXIS,
    BRANCH,
    BRANCH_POINT,
    CAP_LOST,
    CAPPED,
    DEPTH,
    DIRECTION,
    FILTER_POINT,
    INSTANCE_AFTER,
    INTERFACES,
    KIND,
    LANE_NM,
    LENS_POINT,
    MAX_DEPTH,
    MIS,
    ORIGIN,
    PRIMITIVE_AFTER,
    RATIO,
    ROUGH_SEEN,
    ROW,
    SEGMENTS,
    SET_MAX_INTERFACES,
    SET_OVERFLOW,
    SET_SPLITS,
    SKIP_INSTANCE,
    SKIP_PRIMITIVE,
    SKY,
    SMOOTH_BELOW,
    SMOOTH_SINCE,
    SOLO,
    SPLITS,
    START,
    TIME,
    UNMATCHED,
)
from renderer.transport.media import TOUCH, absorb, crossed, is_boundary, material_of, top_object, touching
from renderer.transport.opaque import meet_mirror, opaque_way
from renderer.transport.panes import meet_pane
from renderer.transport.points import pair
from renderer.transport.rough_boundary import boundary_way
from renderer.transport.scattering import scatter
from renderer.transport.state import draw, lane_count, same_ray
from renderer.transport.stokes import importance, scale_row
from renderer.transport.surfaces import is_mirror, mirror_spread
from renderer.transport.vertices import place_vertex
from renderer.transport.wavelengths import table_at

ROULETTE_BELOW = 0.1  # share of what a branch began with, under which it goes on by chance only
LEAST_CHANCE = 0.05
POWER_SCALE = 4294967296.0  # 2^32: the unit in which the power of cut paths is counted
MATCHED = 1e-3  # difference of index under which a rough boundary is as good as smooth
N_LOOKS = 8  # directions in which the point query is tried


@kernel
def look(axes, k):
    """The k-th direction of the point query: nearly upright, so that it meets open water, and of no symmetry that a
    scene could share. `axes` are the sky's: east, up, north."""
    a = 0.737 + 2.399963229728653 * k  # the golden angle spreads them
    up = 0.9734567 - 0.11 * k
    side = math.sqrt(1.0 - up * up)
    east, north = side * math.cos(a), side * math.sin(a)
    return unit(
        east * axes[0, 0] + up * axes[1, 0] + north * axes[2, 0],
        east * axes[0, 1] + up * axes[1, 1] + north * axes[2, 1],
        east * axes[0, 2] + up * axes[1, 2] + north * axes[2, 2],
    )


@kernel
def surroundings(frame, x, y, z, time):
    """The set of objects that hold a point, and whether one was found that could be stored."""
    ux, uy, uz = look(frame.sky.axes, 0)
    low, high, ok = objects_at(frame.world, x, y, z, time, ux, uy, uz)
    k = 1
    while not ok and k < N_LOOKS:
        ux, uy, uz = look(frame.sky.axes, k)
        low, high, ok = objects_at(frame.world, x, y, z, time, ux, uy, uz)
        k += 1
    return low, high, ok


@kernel
def start_path(frame, work, column, row, time):
    """Put a path that leaves the camera through a pixel into slot 0."""
    camera, reals, whole = frame.camera, work.reals, work.whole
    key, index = work.sample[0], work.sample[1]
    u, v = pair(key, index, FILTER_POINT)
    x = column + 0.5 + tent(u, camera.lens[8])
    y = row + 0.5 + tent(v, camera.lens[8])
    u, v = 0.5, 0.5
    if camera.lens[5] > 0.0:
        u, v = pair(key, index, LENS_POINT)
    ox, oy, oz, dx, dy, dz = camera_ray(camera, x, y, u, v, time)
    reals[0, ORIGIN], reals[0, ORIGIN + 1], reals[0, ORIGIN + 2] = ox, oy, oz
    reals[0, DIRECTION], reals[0, DIRECTION + 1], reals[0, DIRECTION + 2] = dx, dy, dz
    reals[0, TIME], reals[0, AFTER], reals[0, MIS], reals[0, START] = time, 0.0, 0.0, 1.0
    reals[0, AXIS], reals[0, AXIS + 1], reals[0, AXIS + 2] = polarisation_axis(camera, dx, dy, dz, time)
    # An ideal polariser passes half of unpolarised light: the first row of its Mueller matrix is (1, 1, 0, 0) / 2.
    polarised = camera.lens[7] > -1e8
    for lane in range(4):
        i = ROW + 4 * lane
        reals[0, i] = 0.5 if polarised else 1.0
        reals[0, i + 1] = 0.5 if polarised else 0.0
        reals[0, i + 2] = 0.0
        reals[0, i + 3] = 0.0
        reals[0, RATIO + lane] = 1.0
    whole[0, INSTANCE_AFTER], whole[0, PRIMITIVE_AFTER] = -1, -1
    whole[0, SKIP_INSTANCE], whole[0, SKIP_PRIMITIVE] = -1, -1
    whole[0, BRANCH], whole[0, DEPTH], whole[0, INTERFACES] = 0, 0, 0
    whole[0, SPLITS], whole[0, KIND] = frame.settings[SET_SPLITS], SKY
    whole[0, ROUGH_SEEN], whole[0, SMOOTH_SINCE], whole[0, SOLO] = 0, 0, 0


@kernel
def goes_on(frame, work, k):
    """Whether a path is followed further: cut and counted at the caps; by chance where it carries little."""
    carried = importance(work.reals, k)
    if not carried > 0.0:
        return carried != carried  # a not-a-number is followed to where it is counted
    if work.whole[k, INTERFACES] > frame.settings[SET_MAX_INTERFACES] or work.whole[k, DEPTH] >= MAX_DEPTH:
        work.tally[CAPPED] += 1
        work.tally[CAP_LOST] += int(min(carried, 1.0) * POWER_SCALE)
        return False
    share = carried / work.reals[k, START]
    if share < ROULETTE_BELOW:
        chance = max(share / ROULETTE_BELOW, LEAST_CHANCE)
        _, v = draw(work, k, BRANCH_POINT)
        if v >= chance:
            return False
        for lane in range(4):
            scale_row(work.reals, k, lane, 1.0 / chance)
    return True


@kernel
def through_medium(frame, work, k, length_m):
    """Let the material that the ray runs in absorb over a length; gives its row."""
    material = material_of(frame.objects, top_object(frame.objects, work.sets[k, 0], work.sets[k, 1]))
    if material != 0:
        for lane in range(lane_count(work, k)):
            scale_row(work.reals, k, lane, absorb(frame.materials, material, work.lanes[lane, LANE_NM], length_m))
    return material


@kernel
def is_rough(materials, m1, m2, roughness, lanes):
    """Whether a boundary scatters: rough, and with a step of index to scatter at."""
    if roughness < SMOOTH_BELOW:
        return False
    step = 0.0
    for lane in range(4):
        nm = lanes[lane, LANE_NM]
        step = max(step, abs(table_at(materials.index, m1, nm) - table_at(materials.index, m2, nm)))
    return step > MATCHED


@kernel
def cross(frame, work, k, hit, t, instance, primitive, crowded):
    """What lies beyond a boundary: see `touching`. Counts sets that could not be kept."""
    objects, reals = frame.objects, work.reals
    item, error_m = hit[11], hit[12]
    facing = dot(hit[3], hit[4], hit[5], reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2])
    entering = facing < 0.0
    low, high, ok = crossed(objects, work.sets[k, 0], work.sets[k, 1], item, entering)
    beyond = (low, high, ok, t, instance, primitive, -1, -1, 0.0, 0.0, 0.0)
    if crowded:
        beyond = touching(
            frame.world, objects, reals[k, 0], reals[k, 1], reals[k, 2], reals[k, DIRECTION], reals[k, DIRECTION + 1],
            reals[k, DIRECTION + 2], reals[k, TIME], t, instance, primitive, work.sets[k, 0], work.sets[k, 1], item,
            entering, TOUCH * error_m / max(abs(facing), 1e-3),
        )  # fmt: skip
    if not beyond[2]:
        work.tally[SET_OVERFLOW if entering else UNMATCHED] += 1
    return beyond


@kernel
def place(work, k, hit, error_m, alpha):
    """Place the vertex at a hit; alpha is the spread of what it mirrors, below 0 where its normal may be any."""
    px, py, pz, gx, gy, gz, sx, sy, sz, _tu, _tv, _item, _error_m = hit
    reals = work.reals
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    if alpha >= 0.0:
        sx, sy, sz = rough_normal(dx, dy, dz, gx, gy, gz, sx, sy, sz, alpha)
    place_vertex(work.vertex, px, py, pz, gx, gy, gz, sx, sy, sz, error_m, dx, dy, dz)


@kernel
def skip(work, k, instance, primitive):
    """Let the next ray not meet what it leaves."""
    work.whole[k, SKIP_INSTANCE], work.whole[k, SKIP_PRIMITIVE] = instance, primitive


@kernel
def meet_clear(frame, work, k, hit, m1, instance, primitive, t, beyond):
    """A boundary of a clear object, with what lies beyond it: (slot to go on with, whether to scatter, way drawn)."""
    objects = frame.objects
    px, py, pz, gx, gy, gz, sx, sy, sz, _tu, _tv, item, error_m = hit
    low, high, _ok, last_t, last_instance, last_primitive, _i, _p, _t, _u, _v = beyond
    m2 = material_of(objects, top_object(objects, low, high))
    if m1 == m2:
        work.sets[k, 0], work.sets[k, 1] = low, high
        same_ray(work, k, last_t, last_instance, last_primitive)
        return k, False, 0.0, 0.0, 0.0
    error_through = error_m + (last_t - t)
    if is_rough(frame.materials, m1, m2, objects.roughness[item], work.lanes):
        place(work, k, hit, error_through, objects.roughness[item] ** 2)
        skip(work, k, instance, primitive)
        wx, wy, wz = boundary_way(frame, work, k, objects.roughness[item], m1, m2)
        return k, True, wx, wy, wz
    k = meet_boundary(frame, work, k, m1, m2, (px, py, pz), (gx, gy, gz), (sx, sy, sz), error_m, error_through,
                      instance, primitive, low, high)  # fmt: skip
    return k, False, 0.0, 0.0, 0.0


@kernel
def meet_other(frame, work, k, hit, m1, instance, primitive, t):
    """A hit that is no boundary: a pane, a light or an opaque surface. Returns as `meet_clear`."""
    objects = frame.objects
    px, py, pz, gx, gy, gz, _sx, _sy, _sz, tu, tv, item, error_m = hit
    if objects.kind[item] == PANE:
        k = meet_pane(frame, work, k, item, m1, (px, py, pz), (gx, gy, gz), error_m, t, instance, primitive)
        return k, False, 0.0, 0.0, 0.0
    if objects.kind[item] == LIGHT:
        reals = work.reals
        facing = dot(gx, gy, gz, reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2])
        meet_light(frame, work, k, item, facing, instance, primitive, t)
        return k - 1, False, 0.0, 0.0, 0.0
    surface = objects.surface[item]
    place(work, k, hit, error_m, mirror_spread(frame.surfaces, surface))
    skip(work, k, instance, primitive)
    if is_mirror(frame.surfaces, surface):
        meet_mirror(frame, work, k, surface, tu, tv)
        return k, False, 0.0, 0.0, 0.0
    wx, wy, wz = opaque_way(frame, work, k, surface, tu, tv)
    return k, True, wx, wy, wz


@kernel
def hit_of(frame, work, k, instance, primitive, u, v, t):
    """`hit_frame` on the path's ray."""
    reals = work.reals
    return hit_frame(
        frame.world, instance, primitive, u, v, reals[k, 0], reals[k, 1], reals[k, 2], reals[k, DIRECTION],
        reals[k, DIRECTION + 1], reals[k, DIRECTION + 2], t, reals[k, TIME],
    )  # fmt: skip


@kernel
def step(frame, work, k):
    """Follow the path in slot k to its next event. Returns the slot to go on with, -1 when all have ended."""
    reals, whole = work.reals, work.whole
    if not goes_on(frame, work, k):
        return k - 1
    work.tally[SEGMENTS] += 1
    t, instance, primitive, u, v, crowded = closest_hit(
        frame.world, reals[k, 0], reals[k, 1], reals[k, 2], reals[k, DIRECTION], reals[k, DIRECTION + 1],
        reals[k, DIRECTION + 2], reals[k, TIME], math.inf, whole[k, SKIP_INSTANCE], whole[k, SKIP_PRIMITIVE],
        reals[k, AFTER], whole[k, INSTANCE_AFTER], whole[k, PRIMITIVE_AFTER],
    )  # fmt: skip
    whole[k, DEPTH] += 1
    m1 = through_medium(frame, work, k, math.inf if instance < 0 else t - reals[k, AFTER])
    if instance < 0:
        escape(frame, work, k)
        return k - 1
    low, high = work.sets[k, 0], work.sets[k, 1]
    hit = hit_of(frame, work, k, instance, primitive, u, v, t)
    clear = is_boundary(frame.objects.kind[hit[11]])
    if clear:
        beyond = cross(frame, work, k, hit, t, instance, primitive, crowded)
        if beyond[6] >= 0:
            # Something that is no boundary lies on the boundary: it is met in the material of this side.
            instance, primitive, t, clear = beyond[6], beyond[7], beyond[8], False
            hit = hit_of(frame, work, k, instance, primitive, beyond[9], beyond[10], t)
        else:
            low, high = beyond[0], beyond[1]
            k, scatters, wx, wy, wz = meet_clear(frame, work, k, hit, m1, instance, primitive, t, beyond)
    if not clear:
        k, scatters, wx, wy, wz = meet_other(frame, work, k, hit, m1, instance, primitive, t)
    if scatters:
        return scatter(frame, work, k, wx, wy, wz, low, high)
    return k


@kernel
def camera_set(frame, work, lens_low, lens_high, still):
    """Set the objects round the path's start: those round the lens's middle, unless a boundary lies between."""
    reals, sets, matrices = work.reals, work.sets, frame.camera.matrices
    ox, oy, oz, time = reals[0, 0], reals[0, 1], reals[0, 2], reals[0, TIME]
    same = still
    if still:
        mx, my, mz = matrices[0, 0, 3], matrices[0, 1, 3], matrices[0, 2, 3]
        ex, ey, ez = ox - mx, oy - my, oz - mz
        reach = math.sqrt(dot(ex, ey, ez, ex, ey, ez))
        if reach > 0.0:
            ex, ey, ez = ex / reach, ey / reach, ez / reach
            instance, _ = any_hit(frame.world, mx, my, mz, ex, ey, ez, time, reach, -1, -1)
            same = instance < 0
    if same:
        sets[0, 0], sets[0, 1] = lens_low, lens_high
    else:
        sets[0, 0], sets[0, 1], _ = surroundings(frame, ox, oy, oz, time)


@kernel
def trace_sample(frame, work, column, row, time, lens_low, lens_high, still):
    """One sample of a pixel: what a camera path and all its branches find, added to the work's `light` and `bins`."""
    start_path(frame, work, column, row, time)
    camera_set(frame, work, lens_low, lens_high, still)
    k = work.whole[0, BRANCH]  # 0, as a number of the type that `step` returns: a literal would be compiled apart
    while k >= 0:
        k = step(frame, work, k)
