"""Lens distortion after D. C. Brown, "Decentering Distortion of Lenses", Photogrammetric Engineering 32(3), 1966.

Image points are in focal lengths, x right and y up. The polynomial takes the place where an ideal lens would show a
point to where this lens shows it; Newton's method takes it back.
"""

from __future__ import annotations

import numpy as np

from renderer.geometry.positions import Floats

Coefficients = tuple[float, float, float, float, float]

NEWTON_STEPS = 20
CONVERGED = 1e-10  # of a focal length


def distort(coefficients: Coefficients, ideal: Floats) -> Floats:
    """(n, 2) places on the picture of (n, 2) ideal image points."""
    k1, k2, k3, p1, p2 = coefficients
    x, y = ideal[:, 0], ideal[:, 1]
    q = x * x + y * y
    radial = 1.0 + q * (k1 + q * (k2 + q * k3))
    return np.column_stack(
        [
            x * radial + 2.0 * p1 * x * y + p2 * (q + 2.0 * x * x),
            y * radial + p1 * (q + 2.0 * y * y) + 2.0 * p2 * x * y,
        ]
    )


def slopes(coefficients: Coefficients, ideal: Floats) -> tuple[Floats, Floats, Floats]:
    """Derivatives of `distort`: dx/dx, dx/dy (which is also dy/dx) and dy/dy, (n,) each."""
    k1, k2, k3, p1, p2 = coefficients
    x, y = ideal[:, 0], ideal[:, 1]
    q = x * x + y * y
    radial = 1.0 + q * (k1 + q * (k2 + q * k3))
    slope = k1 + q * (2.0 * k2 + 3.0 * q * k3)
    return (
        radial + 2.0 * x * x * slope + 2.0 * p1 * y + 6.0 * p2 * x,
        2.0 * x * y * slope + 2.0 * p1 * x + 2.0 * p2 * y,
        radial + 2.0 * y * y * slope + 6.0 * p1 * y + 2.0 * p2 * x,
    )


def straighten(coefficients: Coefficients, shown: Floats) -> Floats:
    """(n, 2) ideal image points of (n, 2) places on the picture; not-a-number where the lens shows nothing there."""
    ideal = np.array(shown, dtype=np.float64)
    with np.errstate(all="ignore"):
        for _ in range(NEWTON_STEPS):
            miss = distort(coefficients, ideal) - shown
            xx, xy, yy = slopes(coefficients, ideal)
            determinant = xx * yy - xy * xy
            ideal[:, 0] -= (miss[:, 0] * yy - miss[:, 1] * xy) / determinant
            ideal[:, 1] -= (miss[:, 1] * xx - miss[:, 0] * xy) / determinant
        good = np.abs(distort(coefficients, ideal) - shown).max(axis=1) < CONVERGED
    ideal[~(good & (np.square(ideal).sum(axis=1) <= fold(coefficients)))] = np.nan
    return ideal


def fold(coefficients: Coefficients) -> float:
    """Squared ideal radius at which the radial polynomial turns back, so that the picture folds; inf if never."""
    k1, k2, k3 = coefficients[:3]
    roots = np.roots([7.0 * k3, 5.0 * k2, 3.0 * k1, 1.0])  # d/dr of r (1 + k1 r^2 + k2 r^4 + k3 r^6), in r^2
    real = roots.real[(np.abs(roots.imag) < 1e-12 * np.maximum(1.0, np.abs(roots.real))) & (roots.real > 0.0)]
    return float(real.min()) if len(real) else float("inf")
