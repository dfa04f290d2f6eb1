"""What lies under each pixel's centre: depth, normal, which object, how many interfaces are crossed, and the angle from
the antisolar point. Without noise: one ray through the middle of pixel, lens and shutter, that follows refraction."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import numpy.typing as npt

from renderer.arrays.looks import PANE
from renderer.base.jit import kernel
from renderer.base.reference import refer
from renderer.base.vectors import cross, dot
from renderer.optics.fresnel_kernels import refract_cosine
from renderer.ray_search.hits import hit_frame, leave
from renderer.ray_search.search import closest_hit
from renderer.transport.film import camera_ray
from renderer.transport.interface import mirrored, refracted, safe_normal
from renderer.transport.layout import SMOOTH_BELOW
from renderer.transport.media import TOUCH, is_boundary, material_of, top_object, touching
from renderer.transport.path import surroundings
from renderer.transport.render import frame_of
from renderer.transport.threads import over_rows
from renderer.transport.wavelengths import table_at

MIDDLE_NM = 550.0  # the wavelength whose refraction is followed
MIDDLE_TIME = 0.5
MOST_CROSSED = 64  # interfaces that are followed and counted


@kernel
def onward(materials, m1, m2, dx, dy, dz, gx, gy, gz, sx, sy, sz):
    """The way through a smooth boundary, or back where nothing passes; and whether it passes."""
    if dot(dx, dy, dz, gx, gy, gz) > 0.0:
        gx, gy, gz = -gx, -gy, -gz
    nx, ny, nz = safe_normal(dx, dy, dz, gx, gy, gz, sx, sy, sz)
    cos_i = min(-dot(dx, dy, dz, nx, ny, nz), 1.0)
    n1, n2 = table_at(materials.index, m1, MIDDLE_NM), table_at(materials.index, m2, MIDDLE_NM)
    cos_t = refract_cosine(cos_i, n1, n2)
    if cos_t < 0.0:
        tx, ty, tz = mirrored(dx, dy, dz, nx, ny, nz)
        return tx, ty, tz, False
    tx, ty, tz = refracted(dx, dy, dz, nx, ny, nz, cos_i, cos_t, n1 / n2, gx, gy, gz)
    return tx, ty, tz, True


@kernel
def count_crossed(frame, low, high, ox, oy, oz, dx, dy, dz):
    """How many smooth interfaces a ray crosses, refracting, before the first surface that is none, or the open."""
    world, objects, materials = frame.world, frame.objects, frame.materials
    crossed_count = 0
    skip_i, skip_p, t, instance, primitive = -1, -1, 0.0, -1, -1
    while crossed_count < MOST_CROSSED:
        t, instance, primitive, u, v, _crowded = closest_hit(
            world, ox, oy, oz, dx, dy, dz, MIDDLE_TIME, math.inf, skip_i, skip_p, t, instance, primitive
        )
        if instance < 0:
            return crossed_count
        px, py, pz, gx, gy, gz, sx, sy, sz, _tu, _tv, item, error_m = hit_frame(
            world, instance, primitive, u, v, ox, oy, oz, dx, dy, dz, t, MIDDLE_TIME
        )
        if objects.kind[item] == PANE:
            crossed_count += 1
            continue
        if not is_boundary(objects.kind[item]) or objects.roughness[item] >= SMOOTH_BELOW:
            return crossed_count
        facing = dot(gx, gy, gz, dx, dy, dz)
        low2, high2, _ok, last_t, last_i, last_p, opaque, _p2, _t2, _u2, _v2 = touching(
            world, objects, ox, oy, oz, dx, dy, dz, MIDDLE_TIME, t, instance, primitive, low, high, item, facing < 0.0,
            TOUCH * error_m / max(abs(facing), 1e-3),
        )  # fmt: skip
        if opaque >= 0:
            return crossed_count
        m1 = material_of(objects, top_object(objects, low, high))
        m2 = material_of(objects, top_object(objects, low2, high2))
        if m1 == m2:
            low, high, t, instance, primitive = low2, high2, last_t, last_i, last_p
            continue
        crossed_count += 1
        dx, dy, dz, passes = onward(materials, m1, m2, dx, dy, dz, gx, gy, gz, sx, sy, sz)
        if passes:
            low, high = low2, high2
        ox, oy, oz = leave(px, py, pz, gx, gy, gz, error_m + (last_t - t), dx, dy, dz)
        skip_i, skip_p, t, instance, primitive = instance, primitive, 0.0, -1, -1
    return crossed_count


@kernel
def guide_pixel(frame, low, high, row_from, row, column, depth, normal, object_id, material_id, crossed_count,
                angle_deg):  # fmt: skip
    """The guides of one pixel; row 0 of the arrays is row `row_from` of the camera's window."""
    world, objects, sun, camera = frame.world, frame.objects, frame.sun, frame.camera
    x, y = camera.window[0] + column + 0.5, camera.window[1] + row_from + row + 0.5
    ox, oy, oz, dx, dy, dz = camera_ray(camera, x, y, 0.5, 0.5, MIDDLE_TIME)
    cx, cy, cz = cross(dx, dy, dz, sun.numbers[1], sun.numbers[2], sun.numbers[3])
    away = -dot(dx, dy, dz, sun.numbers[1], sun.numbers[2], sun.numbers[3])
    angle_deg[row, column] = math.degrees(math.atan2(math.sqrt(dot(cx, cy, cz, cx, cy, cz)), away))
    t, instance, primitive, u, v, _crowded = closest_hit(
        world, ox, oy, oz, dx, dy, dz, MIDDLE_TIME, math.inf, -1, -1, 0.0, -1, -1
    )
    depth[row, column] = t if instance >= 0 else math.inf
    object_id[row, column], material_id[row, column] = -1, -1
    normal[row, column, :] = 0.0
    if instance >= 0:
        hit = hit_frame(world, instance, primitive, u, v, ox, oy, oz, dx, dy, dz, t, MIDDLE_TIME)
        side = 1.0 if dot(hit[3], hit[4], hit[5], dx, dy, dz) < 0.0 else -1.0
        normal[row, column, 0], normal[row, column, 1] = side * hit[6], side * hit[7]
        normal[row, column, 2] = side * hit[8]
        item = hit[11]
        object_id[row, column] = item
        if is_boundary(objects.kind[item]) or objects.kind[item] == PANE:
            material_id[row, column] = objects.material[item]
    crossed_count[row, column] = count_crossed(frame, low, high, ox, oy, oz, dx, dy, dz)


@kernel
def guide_some(frame, row_from, first, stop, depth, normal, object_id, material_id, crossed_count, angle_deg):
    """The guides of rows `first` up to `stop`; row 0 of the arrays is row `row_from` of the camera's window."""
    camera = frame.camera
    ox, oy, oz, _, _, _ = camera_ray(camera, 0.5 * camera.lens[3], 0.5 * camera.lens[4], 0.5, 0.5, MIDDLE_TIME)
    low, high, _ok = surroundings(frame, ox, oy, oz, MIDDLE_TIME)
    for row in range(first, stop):
        for column in range(depth.shape[1]):
            guide_pixel(frame, low, high, row_from, row, column, depth, normal, object_id, material_id, crossed_count,
                        angle_deg)  # fmt: skip


@kernel
def guide_piece(frame, row_from, first, stop, depth, normal, object_id, material_id, crossed_count, angle_deg):
    """The door from Python: `guide_some` with the frame by address."""
    guide_some(refer(frame), row_from, first, stop, depth, normal, object_id, material_id, crossed_count, angle_deg)


def guide_rows(scene: Any, row_from: int, row_to: int) -> dict[str, npt.NDArray[Any]]:
    """Guides of the rows `row_from` up to `row_to` of the camera's window, by name, each (rows, columns[, 3]).

    depth [m], infinite where nothing is met; normal, unit, towards the camera; object_id and material_id from 0, or -1
    (a material only where light can enter); surfaces_crossed, smooth interfaces before the first surface that is none;
    antisolar_angle [degrees], only where the shot has a sun.
    """
    rows, columns = row_to - row_from, int(scene.camera.window[2])
    found: dict[str, npt.NDArray[Any]] = {
        "depth": np.empty((rows, columns)),
        "normal": np.empty((rows, columns, 3)),
        "object_id": np.empty((rows, columns), dtype=np.int32),
        "material_id": np.empty((rows, columns), dtype=np.int32),
        "surfaces_crossed": np.empty((rows, columns), dtype=np.int32),
        "antisolar_angle": np.empty((rows, columns)),
    }
    frame = frame_of(scene)
    over_rows(0, rows, lambda first, stop: guide_piece(frame, row_from, first, stop, *found.values()))
    if scene.sun.numbers[0] == 0.0:
        del found["antisolar_angle"]
    return found
