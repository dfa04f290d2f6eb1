"""Which way a pixel looks: the inverse of projection through the lens, for one pixel at mid-shutter."""

from __future__ import annotations

import numpy as np

from renderer.shot.model import Camera, Vector
from renderer.shot.transforms import unit

NEWTON_STEPS = 20
CONVERGED = 1e-10  # of a focal length

Coefficients = tuple[float, float, float, float, float]


def pixel_direction(camera: Camera, column: float, row: float) -> Vector | None:
    """Unit world direction of a place in the full frame, from the top left; None where distortion shows nothing there."""
    (width, height), (columns, rows) = camera.sensor_mm, camera.pixels
    x = (column / columns - 0.5) * width / camera.focal_length_mm
    y = (0.5 - row / rows) * height / camera.focal_length_mm
    ideal = straighten(camera.distortion, x, y) if any(camera.distortion) else (x, y)
    if ideal is None:
        return None
    last = len(camera.matrices) - 1
    turn = 0.5 * (camera.matrices[last // 2] + camera.matrices[(last + 1) // 2])[:, :3]
    a, b, c = (float(value) for value in turn @ np.array([ideal[0], ideal[1], -1.0]))
    return unit((a, b, c))


def straighten(lens: Coefficients, x_shown: float, y_shown: float) -> tuple[float, float] | None:
    """The ideal image point that a lens shows at (x, y), in focal lengths, by Newton's method; None where there is none.

    The polynomial is that of D. C. Brown, Photogrammetric Engineering 32(3), 1966, from ideal to shown.
    """
    k1, k2, k3, p1, p2 = lens
    x, y = x_shown, y_shown
    for _ in range(NEWTON_STEPS):
        q = x * x + y * y
        radial, slope = 1.0 + q * (k1 + q * (k2 + q * k3)), k1 + q * (2.0 * k2 + 3.0 * q * k3)
        miss_x = x * radial + 2.0 * p1 * x * y + p2 * (q + 2.0 * x * x) - x_shown
        miss_y = y * radial + p1 * (q + 2.0 * y * y) + 2.0 * p2 * x * y - y_shown
        xx = radial + 2.0 * x * x * slope + 2.0 * p1 * y + 6.0 * p2 * x
        xy = 2.0 * x * y * slope + 2.0 * p1 * x + 2.0 * p2 * y
        yy = radial + 2.0 * y * y * slope + 6.0 * p1 * y + 2.0 * p2 * x
        determinant = xx * yy - xy * xy
        if max(abs(miss_x), abs(miss_y)) < CONVERGED:
            return (x, y) if determinant > 0.0 and radial > 0.0 else None
        if determinant == 0.0:
            return None
        x -= (miss_x * yy - miss_y * xy) / determinant
        y -= (miss_y * xx - miss_x * xy) / determinant
        if not abs(x) + abs(y) < 1e6:
            return None
    return None
