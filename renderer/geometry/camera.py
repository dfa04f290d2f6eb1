"""The camera: its arrays for kernels, and projection both ways for checks and overlays.

Pixels are continuous: (0, 0) is the top left corner of the full frame, (0.5, 0.5) the centre of its first pixel. A crop
or overscan changes which pixels are rendered, never where they are. Projection is that of mid-shutter.
"""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from renderer.arrays.camera import Camera as CameraArrays
from renderer.arrays.packing import pack
from renderer.base.errors import Fault, InputError
from renderer.geometry.distortion import distort, fold, straighten
from renderer.geometry.positions import Floats
from renderer.shot.model import Camera

FILTER_RADIUS_PIXELS = 1.0  # of the tent over which a pixel gathers light
NO_POLARISER = -1e9


def lens_radius_m(focal_length_mm: float, f_number: float) -> float:
    """Radius of the lens opening, focal length over twice the f-number [m]; 0 for a pinhole."""
    return focal_length_mm / 1000.0 / (2.0 * f_number) if f_number > 0.0 else 0.0


def camera_arrays(camera: Camera) -> CameraArrays:
    """The camera as kernels read it. Raises `InputError` where its distortion leaves rendered pixels without a view."""
    check_view(camera)
    polariser = NO_POLARISER if camera.polariser_deg is None else math.radians(camera.polariser_deg)
    lens = [
        camera.focal_length_mm,
        *camera.sensor_mm,
        *camera.pixels,
        lens_radius_m(camera.focal_length_mm, camera.f_number),
        camera.focus_distance_m,
        polariser,
        FILTER_RADIUS_PIXELS,
        float(any(camera.distortion)),
    ]
    return CameraArrays(
        pack(camera.matrices, shape=(-1, 3, 4)), pack(camera.window, np.int64), pack(lens), pack(camera.distortion)
    )


def check_view(camera: Camera) -> None:
    """Refuse a lens whose picture folds inside what is rendered."""
    if not any(camera.distortion):
        return
    column, row, columns, rows = camera.window
    step = np.linspace(-FILTER_RADIUS_PIXELS, 1.0 + FILTER_RADIUS_PIXELS, 33)
    across, down = column + np.clip(step, 0, 1) * columns, row + np.clip(step, 0, 1) * rows
    border = np.concatenate(
        [np.column_stack([across, np.full(33, y)]) for y in (row - 1.0, row + rows + 1.0)]
        + [np.column_stack([np.full(33, x), down]) for x in (column - 1.0, column + columns + 1.0)]
    )
    if np.isnan(straighten(camera.distortion, image_points(camera, border))).any():
        raise InputError(
            Fault(
                "the camera's distortion folds the picture before the edge of the frame",
                "",
                "coefficients that keep growing outward over the whole frame",
            )
        )


def middle_matrix(camera: Camera) -> Floats:
    """Camera to world at mid-shutter, (3, 4)."""
    last = len(camera.matrices) - 1
    return np.asarray(0.5 * (camera.matrices[last // 2] + camera.matrices[(last + 1) // 2]), dtype=np.float64)


def image_points(camera: Camera, pixels: Floats) -> Floats:
    """(n, 2) pixels as places on the sensor in focal lengths, x right and y up."""
    focal, (width, height), (columns, rows) = camera.focal_length_mm, camera.sensor_mm, camera.pixels
    x = (pixels[:, 0] / columns - 0.5) * width / focal
    y = (0.5 - pixels[:, 1] / rows) * height / focal
    return np.column_stack([x, y])


def pixels_of(camera: Camera, points: Floats) -> Floats:
    """The inverse of `image_points`."""
    focal, (width, height), (columns, rows) = camera.focal_length_mm, camera.sensor_mm, camera.pixels
    return np.column_stack(
        [(points[:, 0] * focal / width + 0.5) * columns, (0.5 - points[:, 1] * focal / height) * rows]
    )


def pixel_direction(camera: Camera, pixels: npt.ArrayLike) -> Floats:
    """Unit world directions (n, 3) that the pixels (n, 2) look along; one pixel (2,) gives (3,).

    Not-a-number where distortion leaves a pixel without a view. Through a thin lens this is the ray through its centre.
    """
    given = np.asarray(pixels, dtype=np.float64)
    points = image_points(camera, np.atleast_2d(given))
    if any(camera.distortion):
        points = straighten(camera.distortion, points)
    local = np.column_stack([points, np.full(len(points), -1.0)])
    world: Floats = local @ middle_matrix(camera)[:, :3].T
    world = world / np.linalg.norm(world, axis=1, keepdims=True)
    return world if given.ndim == 2 else world[0]


def project_directions(camera: Camera, directions: npt.ArrayLike) -> Floats:
    """Pixels (n, 2) of the full frame where world directions (n, 3), of any length, appear; one (3,) gives (2,).

    Not-a-number behind the camera, and where a distorting lens shows a direction nowhere.
    """
    given = np.asarray(directions, dtype=np.float64)
    local = np.atleast_2d(given) @ np.linalg.inv(middle_matrix(camera)[:, :3]).T
    ahead = -local[:, 2]
    with np.errstate(divide="ignore", invalid="ignore"):
        points = np.where(ahead[:, None] > 0.0, local[:, :2] / ahead[:, None], np.nan)
    if any(camera.distortion):
        lost = ~(np.square(points).sum(axis=1) <= fold(camera.distortion))
        points = distort(camera.distortion, points)
        points[lost] = np.nan
    pixels = pixels_of(camera, points)
    return pixels if given.ndim == 2 else pixels[0]


def project(camera: Camera, points_m: npt.ArrayLike) -> Floats:
    """As `project_directions`, for world points [m] seen from the camera's place at mid-shutter."""
    return project_directions(camera, np.asarray(points_m, dtype=np.float64) - middle_matrix(camera)[:, 3])
