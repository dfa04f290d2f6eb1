"""Which way a pixel looks: the inverse of projection through the lens, for one pixel at mid-shutter."""

from __future__ import annotations

import numpy as np

from renderer.shot.model import Camera, Vector
from renderer.shot.transforms import unit

NEWTON_STEPS = 20
EXACT, CONVERGED = 1e-15, 1e-10  # of a focal length: when to stop, and what is good enough after the last step

Coefficients = tuple[float, float, float, float, float]


def pixel_direction(camera: Camera, column: float, row: float) -> Vector | None:
    """Unit world direction of a place in the full frame, from the top left; None where the lens shows nothing there."""
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
    """The ideal image point that a lens shows at (x, y), in focal lengths; None where there is none.

    By Newton's method, inside the radius at which the picture folds.

    The polynomial is that of D. C. Brown, Photogrammetric Engineering 32(3), 1966, from ideal to shown.
    """
    k1, k2, k3, p1, p2 = lens
    x, y, miss = x_shown, y_shown, float("inf")
    for _ in range(NEWTON_STEPS):
        q = x * x + y * y
        radial, slope = 1.0 + q * (k1 + q * (k2 + q * k3)), k1 + q * (2.0 * k2 + 3.0 * q * k3)
        miss_x = x * radial + 2.0 * p1 * x * y + p2 * (q + 2.0 * x * x) - x_shown
        miss_y = y * radial + p1 * (q + 2.0 * y * y) + 2.0 * p2 * x * y - y_shown
        xx = radial + 2.0 * x * x * slope + 2.0 * p1 * y + 6.0 * p2 * x
        xy = 2.0 * x * y * slope + 2.0 * p1 * x + 2.0 * p2 * y
        yy = radial + 2.0 * y * y * slope + 6.0 * p1 * y + 2.0 * p2 * x
        determinant = xx * yy - xy * xy
        miss = max(abs(miss_x), abs(miss_y))
        if miss < EXACT or determinant == 0.0:
            break
        x -= (miss_x * yy - miss_y * xy) / determinant
        y -= (miss_y * xx - miss_x * xy) / determinant
        if not abs(x) + abs(y) < 1e6:
            return None
    return (x, y) if miss < CONVERGED and x * x + y * y <= fold(lens) else None


def fold(lens: Coefficients) -> float:
    """Squared ideal radius at which the radial polynomial turns back; infinite if never."""
    k1, k2, k3 = lens[:3]
    roots = np.roots([7.0 * k3, 5.0 * k2, 3.0 * k1, 1.0])  # d/dr of r (1 + k1 r^2 + k2 r^4 + k3 r^6), in r^2
    real = roots.real[(np.abs(roots.imag) < 1e-12 * np.maximum(1.0, np.abs(roots.real))) & (roots.real > 0.0)]
    return float(real.min()) if len(real) else float("inf")
