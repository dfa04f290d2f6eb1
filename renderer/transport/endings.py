"""Where a path ends: in the open, under sky and sun, or at an area light."""

from __future__ import annotations

from renderer.base.jit import kernel
from renderer.transport.direct import deposit
from renderer.transport.layout import (
    DIRECT,
    DIRECTION,
    KIND,
    LEFT_OUT,
    MIS,
    ROW,
    SMOOTH_SINCE,
    TIME,
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
from renderer.transport.state import (
    first_kind,
    lane_count,
    ratio_sum,
)


@kernel
def escape(frame, work, k):
    """Add the sky, and the sun's disc where the ray meets it."""
    sun, sky, lanes, reals = frame.sun, frame.sky, work.lanes, work.reals
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    ratios, mis, kind = ratio_sum(reals, k), reals[k, MIS], work.whole[k, KIND]
    row, column = sky_place(sky, dx, dy, dz)
    weight = 1.0 / ratios
    if mis > 0.0:
        weight = 1.0 / (ratios + mis * sky_density(sky, row, column))
    for lane in range(lane_count(work, k)):
        deposit(work, lane, kind, reals[k, ROW + 4 * lane] * weight * sky_lane(sky, row, column, lanes, lane))
    if on_sun(sun, dx, dy, dz):
        if work.whole[k, SMOOTH_SINCE] == 1:
            work.tally[LEFT_OUT] += 1
            return
        weight = sun_darkening(sun, dx, dy, dz) / (ratios + mis / sun.numbers[5])
        for lane in range(lane_count(work, k)):
            deposit(work, lane, kind, reals[k, ROW + 4 * lane] * weight * sun_lane(sun, lanes, lane))


@kernel
def meet_light(frame, work, k, item, facing, instance, primitive, t):
    """Add what an area light gives towards the ray; the path ends there."""
    lights, reals = frame.lights, work.reals
    row = frame.objects.light[item]
    if row < 0 or (facing > 0.0 and not lights.two_sided[row]):
        return
    if work.whole[k, SMOOTH_SINCE] == 1 and lights.small[row]:
        work.tally[LEFT_OUT] += 1
        return
    first_kind(work, k, DIRECT)
    weight = ratio_sum(reals, k)
    if reals[k, MIS] > 0.0:
        weight += reals[k, MIS] * area_density(
            frame.world, lights, instance, primitive, reals[k, TIME],
            reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2], t,
        )  # fmt: skip
    for lane in range(lane_count(work, k)):
        radiance = reals[k, ROW + 4 * lane] / weight * area_lane(lights, row, work.lanes, lane)
        deposit(work, lane, work.whole[k, KIND], radiance)
