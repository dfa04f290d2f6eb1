"""Light that a rough vertex gets straight from the sun, the sky and area lights, weighed against scattered rays.

E. Veach and L. Guibas, "Optimally Combining Sampling Techniques for Monte Carlo Rendering", SIGGRAPH 1995 (balance
heuristic), over all four wavelengths as in Wilkie et al. 2014.
"""

from __future__ import annotations

import math

from renderer.base.jit import kernel
from renderer.transport.layout import (
    KIND,
    LANE_BIN,
    LANE_BIN_WEIGHT,
    LANE_X,
    POINT,
    RATIO,
    ROW,
    SKIP_INSTANCE,
    SKIP_PRIMITIVE,
    SUN_POINT,
    TIME,
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
from renderer.transport.shadows import finite_reach, seen
from renderer.transport.state import draw
from renderer.transport.vertices import height, leave_vertex, respond


@kernel
def deposit(work, lane, kind, radiance):
    """Add a lane's radiance, already weighed, to the kind of light it came as."""
    for c in range(3):
        work.light[kind, c] += radiance * work.lanes[lane, LANE_X + c]
    if work.lanes[lane, LANE_BIN] >= 0.0:
        work.bins[int(work.lanes[lane, LANE_BIN])] += radiance * work.lanes[lane, LANE_BIN_WEIGHT]


@kernel
def emitted_lane(frame, source, lanes, lane, a, b):
    """Radiance of a drawn light in a lane: the sun (a: darkening), the sky (a, b: place), or area light a."""
    if source == 0:
        return a * sun_lane(frame.sun, lanes, lane)
    if source == 1:
        return sky_lane(frame.sky, a, b, lanes, lane)
    return area_lane(frame.lights, int(a), lanes, lane)


@kernel
def draw_light(frame, source, u, v, ox, oy, oz, time):
    """(direction, distance, density, a, b) of a light drawn from a source, see `emitted_lane`; density 0 for none."""
    sun, sky, lights = frame.sun, frame.sky, frame.lights
    if source == 0:
        dx, dy, dz = draw_sun(sun, u, v)
        return dx, dy, dz, math.inf, 1.0 / sun.numbers[5], sun_darkening(sun, dx, dy, dz), 0.0
    if source == 1:
        dx, dy, dz, row, column = draw_sky(sky, u, v)
        return dx, dy, dz, math.inf, sky_density(sky, row, column), row, column
    dx, dy, dz, distance, density, row, facing = draw_area(frame.world, lights, time, u, v, ox, oy, oz)
    light = lights.light[row]
    if facing > 0.0 and not lights.two_sided[light]:
        density = 0.0
    return dx, dy, dz, distance, density, float(light), 0.0


@kernel
def has_source(frame, source):
    """Whether the scene has this source at all: 0 sun, 1 sky, 2 area lights."""
    if source == 0:
        return sun_shines(frame.sun)
    if source == 1:
        return frame.sky.row_cdf[frame.sky.row_cdf.shape[0] - 1] > 0.0
    return frame.lights.instance.shape[0] > 0


@kernel
def share_lane(frame, work, k, source, a, b, lane, factor):
    """Add what a drawn light gives in one lane; `factor` holds the vertex's value, the shadow and the weight."""
    if factor > 0.0:
        radiance = factor * work.reals[k, ROW + 4 * lane] * emitted_lane(frame, source, work.lanes, lane, a, b)
        deposit(work, lane, work.whole[k, KIND], radiance)


@kernel
def light_source(frame, work, k, source, low, high, low_beyond, high_beyond):
    """Add what a vertex gets straight from one draw of a source: 0 sun, 1 sky, 2 area lights."""
    vertex, reals, whole = work.vertex, work.reals, work.whole
    time = reals[k, TIME]
    u, v = draw(work, k, SUN_POINT + source)
    dx, dy, dz, distance, density, a, b = draw_light(
        frame, source, u, v, vertex[POINT], vertex[POINT + 1], vertex[POINT + 2], time
    )
    if density <= 0.0:
        return
    f0, f1, f2, f3, p0, p1, p2, p3 = respond(vertex, dx, dy, dz)
    if f0 + f1 + f2 + f3 <= 0.0:
        return
    if height(vertex, dx, dy, dz) < 0.0:
        low, high = low_beyond, high_beyond
    ox, oy, oz = leave_vertex(vertex, dx, dy, dz)
    c0, c1, c2, c3 = seen(
        frame, work.lanes, ox, oy, oz, dx, dy, dz, time, finite_reach(distance), whole[k, SKIP_INSTANCE],
        whole[k, SKIP_PRIMITIVE], low, high,
    )  # fmt: skip
    if c0 + c1 + c2 + c3 <= 0.0:
        return
    r0, r1, r2, r3 = reals[k, RATIO], reals[k, RATIO + 1], reals[k, RATIO + 2], reals[k, RATIO + 3]
    weight = 1.0 / (density * (r0 + r1 + r2 + r3) + r0 * p0 + r1 * p1 + r2 * p2 + r3 * p3)
    share_lane(frame, work, k, source, a, b, 0, weight * f0 * c0)
    share_lane(frame, work, k, source, a, b, 1, weight * f1 * c1)
    share_lane(frame, work, k, source, a, b, 2, weight * f2 * c2)
    share_lane(frame, work, k, source, a, b, 3, weight * f3 * c3)


@kernel
def light_vertex(frame, work, k, low, high, low_beyond, high_beyond):
    """Add what a vertex gets straight from one draw of each source.

    (low, high) is the set of objects on the ray's side, the other pair the set beyond a rough boundary.
    """
    for source in range(3):
        if has_source(frame, source):
            light_source(frame, work, k, source, low, high, low_beyond, high_beyond)
