"""Light that a rough vertex gets straight from the sun, the sky and area lights, weighed against scattered rays.

E. Veach and L. Guibas, "Optimally Combining Sampling Techniques for Monte Carlo Rendering", SIGGRAPH 1995 (balance
heuristic), over all four wavelengths as in Wilkie et al. 2014.
"""

from __future__ import annotations

import math

from renderer.base.jit import kernel
from renderer.ray_search.hits import leave
from renderer.transport.layout import (
    BRANCH,
    DEPTH,
    KIND,
    LANE_BIN,
    LANE_BIN_WEIGHT,
    LANE_X,
    POINT,
    POINT_ERROR,
    RATIO,
    ROW,
    SKIP_INSTANCE,
    SKIP_PRIMITIVE,
    SUN_POINT,
    TIME,
    TRUE_NORMAL,
)
from renderer.transport.lights import (
    area_lane,
    draw_area,
    draw_sky,
    draw_sun,
    sky_density,
    sky_lane,
    sun_darkening,
    sun_lane,
    sun_shines,
)
from renderer.transport.points import pair
from renderer.transport.shadows import finite_reach, seen
from renderer.transport.vertices import height, respond


@kernel
def dimension(whole, k, purpose):
    """The sample dimension of a purpose at a path's present event."""
    return (whole[k, BRANCH] << 20) | (whole[k, DEPTH] << 4) | purpose


@kernel
def deposit(light, bins, lanes, lane, kind, radiance):
    """Add a lane's radiance, already weighed, to the kind of light it came as."""
    for c in range(3):
        light[kind, c] += radiance * lanes[lane, LANE_X + c]
    if lanes[lane, LANE_BIN] >= 0.0:
        bins[int(lanes[lane, LANE_BIN])] += radiance * lanes[lane, LANE_BIN_WEIGHT]


@kernel
def emitted_lane(sun, sky, lights, source, lanes, lane, a, b):
    """Radiance of a drawn light in a lane: the sun (a: darkening), the sky (a, b: place), or area light a."""
    if source == 0:
        return a * sun_lane(sun, lanes, lane)
    if source == 1:
        return sky_lane(sky, a, b, lanes, lane)
    return area_lane(lights, int(a), lanes, lane)


@kernel
def draw_light(world, sun, sky, lights, source, key, index, dim, ox, oy, oz, time):
    """(direction, distance, density, a, b) of a light drawn from a source, see `emitted_lane`; density 0 for none."""
    u, v = pair(key, index, dim)
    if source == 0:
        dx, dy, dz = draw_sun(sun, u, v)
        return dx, dy, dz, math.inf, 1.0 / sun.numbers[5], sun_darkening(sun, dx, dy, dz), 0.0
    if source == 1:
        dx, dy, dz, row, column = draw_sky(sky, u, v)
        return dx, dy, dz, math.inf, sky_density(sky, row, column), row, column
    dx, dy, dz, distance, density, row, facing = draw_area(world, lights, time, u, v, ox, oy, oz)
    light = lights.light[row]
    if facing > 0.0 and not lights.two_sided[light]:
        density = 0.0
    return dx, dy, dz, distance, density, float(light), 0.0


@kernel
def has_source(sun, sky, lights, source):
    """Whether the scene has this source at all: 0 sun, 1 sky, 2 area lights."""
    if source == 0:
        return sun_shines(sun)
    if source == 1:
        return sky.row_cdf[sky.row_cdf.shape[0] - 1] > 0.0
    return lights.instance.shape[0] > 0


@kernel
def light_vertex(world, objects, materials, sun, sky, lights, key, index, lanes, reals, whole, k, vertex, low, high,
                 low_beyond, high_beyond, light, bins):  # fmt: skip
    """Add what a vertex gets straight from one draw of each source.

    (low, high) is the set of objects on the ray's side, the other pair the set beyond a rough boundary.
    """
    time = reals[k, TIME]
    for source in range(3):
        if not has_source(sun, sky, lights, source):
            continue
        dim = dimension(whole, k, SUN_POINT + source)
        dx, dy, dz, distance, density, a, b = draw_light(
            world, sun, sky, lights, source, key, index, dim, vertex[POINT], vertex[POINT + 1], vertex[POINT + 2], time
        )
        if density <= 0.0:
            continue
        f0, f1, f2, f3, p0, p1, p2, p3 = respond(vertex, dx, dy, dz)
        if f0 + f1 + f2 + f3 <= 0.0:
            continue
        inner_low, inner_high = low, high
        if height(vertex, dx, dy, dz) < 0.0:
            inner_low, inner_high = low_beyond, high_beyond
        ox, oy, oz = leave(
            vertex[POINT], vertex[POINT + 1], vertex[POINT + 2],
            vertex[TRUE_NORMAL], vertex[TRUE_NORMAL + 1], vertex[TRUE_NORMAL + 2],
            vertex[POINT_ERROR], dx, dy, dz,
        )  # fmt: skip
        c0, c1, c2, c3 = seen(
            world, objects, materials, lanes, ox, oy, oz, dx, dy, dz, time, finite_reach(distance),
            whole[k, SKIP_INSTANCE], whole[k, SKIP_PRIMITIVE], inner_low, inner_high,
        )  # fmt: skip
        if c0 + c1 + c2 + c3 <= 0.0:
            continue
        r0, r1, r2, r3 = reals[k, RATIO], reals[k, RATIO + 1], reals[k, RATIO + 2], reals[k, RATIO + 3]
        weight = 1.0 / (density * (r0 + r1 + r2 + r3) + r0 * p0 + r1 * p1 + r2 * p2 + r3 * p3)
        kind = whole[k, KIND]
        deposit(light, bins, lanes, 0, kind,
                weight * reals[k, ROW] * f0 * c0 * emitted_lane(sun, sky, lights, source, lanes, 0, a, b))  # fmt: skip
        deposit(light, bins, lanes, 1, kind,
                weight * reals[k, ROW + 4] * f1 * c1 * emitted_lane(sun, sky, lights, source, lanes, 1, a, b))  # fmt: skip
        deposit(light, bins, lanes, 2, kind,
                weight * reals[k, ROW + 8] * f2 * c2 * emitted_lane(sun, sky, lights, source, lanes, 2, a, b))  # fmt: skip
        deposit(light, bins, lanes, 3, kind,
                weight * reals[k, ROW + 12] * f3 * c3 * emitted_lane(sun, sky, lights, source, lanes, 3, a, b))  # fmt: skip
