"""Light by direction: the sun's disc, the sky and emitting triangles; their radiance, sampling and densities."""

from __future__ import annotations

import math

from renderer.base.jit import kernel
from renderer.base.vectors import across, cross, dot
from renderer.ray_search.hits import triangle_corners
from renderer.transport.layout import LANE_LINE, LANE_NM
from renderer.transport.wavelengths import spectrum_at, table_at

# The sun.


@kernel
def sun_shines(sun):
    """Whether the scene has a sun."""
    return sun.numbers[0] > 0.0


@kernel
def on_sun(sun, dx, dy, dz):
    """Whether a unit direction meets the sun's disc."""
    return sun_shines(sun) and dot(dx, dy, dz, sun.numbers[1], sun.numbers[2], sun.numbers[3]) >= sun.numbers[4]


@kernel
def sun_darkening(sun, dx, dy, dz):
    """Radiance of the disc at a direction over its mean: limb darkening."""
    cx, cy, cz = cross(dx, dy, dz, sun.numbers[1], sun.numbers[2], sun.numbers[3])
    sin2_edge = 1.0 - sun.numbers[4] * sun.numbers[4]
    r2 = min(dot(cx, cy, cz, cx, cy, cz) / sin2_edge, 1.0)
    one_less_mu = 1.0 - math.sqrt(1.0 - r2)
    return (1.0 - sun.numbers[6] * one_less_mu - sun.numbers[7] * one_less_mu * one_less_mu) / sun.numbers[8]


@kernel
def draw_sun(sun, u, v):
    """A direction to the disc, evenly spread over its solid angle; its density is one over that."""
    tx, ty, tz, bx, by, bz = across(sun.numbers[1], sun.numbers[2], sun.numbers[3])
    # 1 - cos of a small angle is kept as its own number, or the disc loses digits.
    fall = u * (1.0 - sun.numbers[4])
    cos_a = 1.0 - fall
    sin_a = math.sqrt(fall * (2.0 - fall))
    phi = 2.0 * math.pi * v
    a, b = sin_a * math.cos(phi), sin_a * math.sin(phi)
    return (
        a * tx + b * bx + cos_a * sun.numbers[1],
        a * ty + b * by + cos_a * sun.numbers[2],
        a * tz + b * bz + cos_a * sun.numbers[3],
    )


@kernel
def sun_lane(sun, lanes, lane):
    """Mean radiance of the disc in a lane; none in a spectral line's lane."""
    if lanes[lane, LANE_LINE] >= 0.0:
        return 0.0
    return spectrum_at(sun.radiance, lanes[lane, LANE_NM])


# The sky.


@kernel
def sky_place(sky, dx, dy, dz):
    """(row, column) of a direction in the sky's map, with fractions."""
    axes = sky.axes
    east = dot(dx, dy, dz, axes[0, 0], axes[0, 1], axes[0, 2])
    up = dot(dx, dy, dz, axes[1, 0], axes[1, 1], axes[1, 2])
    north = dot(dx, dy, dz, axes[2, 0], axes[2, 1], axes[2, 2])
    azimuth = math.atan2(east, north)
    if azimuth < 0.0:
        azimuth += 2.0 * math.pi
    zenith = math.atan2(math.sqrt(east * east + north * north), up)
    n_rows, n_columns = sky.coefficients.shape[0], sky.coefficients.shape[1]
    return zenith / math.pi * (n_rows - 1), azimuth / (2.0 * math.pi) * n_columns


@kernel
def sky_cell(place, n):
    """Cell number and fraction within it of a place among n cells."""
    i = min(max(int(place), 0), n - 1)
    return i, min(max(place - i, 0.0), 1.0)


@kernel
def sky_lane(sky, row, column, lanes, lane):
    """Radiance of the sky at a place of its map in a lane; none in a spectral line's lane."""
    if lanes[lane, LANE_LINE] >= 0.0:
        return 0.0
    nm = lanes[lane, LANE_NM]
    n_columns = sky.coefficients.shape[1]
    i, fi = sky_cell(row, sky.coefficients.shape[0] - 1)
    j, fj = sky_cell(column, n_columns)
    j2 = j + 1 if j + 1 < n_columns else 0
    radiance = 0.0
    for k in range(sky.basis.shape[0]):
        above = sky.coefficients[i, j, k] * (1.0 - fj) + sky.coefficients[i, j2, k] * fj
        below = sky.coefficients[i + 1, j, k] * (1.0 - fj) + sky.coefficients[i + 1, j2, k] * fj
        radiance += (above * (1.0 - fi) + below * fi) * table_at(sky.basis, k, nm)
    return radiance


@kernel
def sky_density(sky, row, column):
    """Density per steradian with which `draw_sky` gives a direction."""
    n_rows, n_columns = sky.coefficients.shape[0] - 1, sky.coefficients.shape[1]
    i, _ = sky_cell(row, n_rows)
    j, _ = sky_cell(column, n_columns)
    chance = (sky.row_cdf[i + 1] - sky.row_cdf[i]) * (sky.column_cdf[i, j + 1] - sky.column_cdf[i, j])
    band = math.cos(math.pi * i / n_rows) - math.cos(math.pi * (i + 1) / n_rows)
    return chance * n_columns / (2.0 * math.pi * band)


@kernel
def bisect(cdf, u):
    """The cell of a cumulative table that holds u."""
    low, high = 0, cdf.shape[0] - 1
    while high - low > 1:
        middle = (low + high) >> 1
        if cdf[middle] <= u:
            low = middle
        else:
            high = middle
    return low


@kernel
def draw_sky(sky, u, v):
    """(direction, row, column) drawn by the map's luminance: a cell by its share, evenly within its solid angle."""
    n_rows, n_columns = sky.coefficients.shape[0] - 1, sky.coefficients.shape[1]
    i = bisect(sky.row_cdf, u)
    fi = (u - sky.row_cdf[i]) / (sky.row_cdf[i + 1] - sky.row_cdf[i])
    cells = sky.column_cdf[i]
    j = bisect(cells, v)
    fj = (v - cells[j]) / (cells[j + 1] - cells[j])
    top, bottom = math.cos(math.pi * i / n_rows), math.cos(math.pi * (i + 1) / n_rows)
    up = top + (bottom - top) * fi
    side = math.sqrt(max(0.0, 1.0 - up * up))
    azimuth = 2.0 * math.pi * (j + fj) / n_columns
    east, north = side * math.sin(azimuth), side * math.cos(azimuth)
    axes = sky.axes
    dx = east * axes[0, 0] + up * axes[1, 0] + north * axes[2, 0]
    dy = east * axes[0, 1] + up * axes[1, 1] + north * axes[2, 1]
    dz = east * axes[0, 2] + up * axes[1, 2] + north * axes[2, 2]
    return dx, dy, dz, math.acos(min(max(up, -1.0), 1.0)) / math.pi * n_rows, j + fj


# Emitting triangles.


@kernel
def area_lane(lights, light, lanes, lane):
    """Radiance of an area light in a lane, of its line where the lane is a line's."""
    if lanes[lane, LANE_LINE] >= 0.0:
        return lights.line_radiance[light, int(lanes[lane, LANE_LINE])]
    return table_at(lights.radiance, light, lanes[lane, LANE_NM])


@kernel
def corner_normal(ax, ay, az, bx, by, bz, cx, cy, cz):
    """Normal of a triangle whose length is twice its area."""
    return cross(bx - ax, by - ay, bz - az, cx - ax, cy - ay, cz - az)


@kernel
def area_density(world, lights, instance, primitive, time, dx, dy, dz, distance):
    """Density per steradian with which `draw_area` gives the point that a ray from a vertex met at a distance."""
    row = lights.of_primitive[primitive]
    if row < 0 or lights.instance[row] != instance:
        return 0.0
    ax, ay, az, bx, by, bz, cx, cy, cz = triangle_corners(world, instance, primitive, time)
    nx, ny, nz = corner_normal(ax, ay, az, bx, by, bz, cx, cy, cz)
    # cos / area = |n . d| / |n| / (|n| / 2)
    projected = 0.5 * abs(dot(nx, ny, nz, dx, dy, dz))
    if projected <= 0.0:
        return 0.0
    return (lights.cdf[row + 1] - lights.cdf[row]) * distance * distance / projected


@kernel
def draw_area(world, lights, time, u, v, ox, oy, oz):
    """(direction, distance, density, row) to a point of an emitting triangle, seen from a vertex; density 0 for none.

    One number picks the triangle and is stretched to be used again, so that the pair stays stratified.
    """
    row = bisect(lights.cdf, u)
    chance = lights.cdf[row + 1] - lights.cdf[row]
    u = (u - lights.cdf[row]) / chance
    root = math.sqrt(u)
    b, c = root * (1.0 - v), root * v
    ax, ay, az, bx, by, bz, cx, cy, cz = triangle_corners(world, lights.instance[row], lights.primitive[row], time)
    px = ax + b * (bx - ax) + c * (cx - ax) - ox
    py = ay + b * (by - ay) + c * (cy - ay) - oy
    pz = az + b * (bz - az) + c * (cz - az) - oz
    distance = math.sqrt(dot(px, py, pz, px, py, pz))
    nx, ny, nz = corner_normal(ax, ay, az, bx, by, bz, cx, cy, cz)
    if distance <= 0.0:
        return 0.0, 0.0, 1.0, 0.0, 0.0, row, 0.0
    dx, dy, dz = px / distance, py / distance, pz / distance
    facing = dot(nx, ny, nz, dx, dy, dz)
    projected = 0.5 * abs(facing)
    if projected <= 0.0:
        return dx, dy, dz, distance, 0.0, row, facing
    return dx, dy, dz, distance, chance * distance * distance / projected, row, facing
