"""Finding the sigmoid reflectance of a colour, for many colours at once.

Levenberg-Marquardt (D. W. Marquardt, SIAM J. Appl. Math. 11, 1963) in CIELAB, as Jakob & Hanika 2019 fit their
tables: for a colour that no reflectance has it ends at the nearest one. Only additions, multiplications, divisions
and square roots, in a fixed order, so that every machine finds the same numbers.
"""

from __future__ import annotations

import numpy as np

from renderer.colour.differences import LINEAR_BELOW, LINEAR_OFFSET, LINEAR_SLOPE
from renderer.colour.sigmoid_cells import Cells, colours_and_slopes
from renderer.colour.tables import Floats

LARGEST = 1e6  # of a coefficient; edges are then far sharper than the observer can tell
CLOSE_ENOUGH = 1e-7  # squared CIELAB difference at which a colour is met
PROGRESS = 3e-4  # share of the squared difference that a step must take off, or it counts as stalled
MOST_STALLS = 4
MOST_STEPS = 120


def fitted(targets: Floats, start: Floats, cells: Cells, progress: float = PROGRESS) -> tuple[Floats, Floats]:
    """Coefficients (3, n) whose colours come nearest to the XYZ `targets` (3, n), and squared CIELAB differences (n,).

    `start` (3, n) are coefficients to start from; a colour whose last steps took less than the share `progress` off
    its squared difference is as near as it gets.
    """
    wanted = lab_and_slopes(targets / cells.white[:, None])[0]
    coefficients = start.copy()
    misses, slopes = misses_and_slopes(coefficients, wanted, cells)
    errors = squared(misses)
    active = np.flatnonzero(errors > CLOSE_ENOUGH)
    misses, slopes = misses[:, active], slopes[:, :, active]
    damping, stalls = np.full(active.size, 1e-2), np.zeros(active.size, dtype=np.int64)
    for _ in range(MOST_STEPS):
        if active.size == 0:
            break
        old = errors[active]
        tried = bounded(coefficients[:, active] + damped_step(misses, slopes, damping))
        new_misses, new_slopes = misses_and_slopes(tried, wanted[:, active], cells)
        new = squared(new_misses)
        better = new < old
        coefficients[:, active[better]] = tried[:, better]
        errors[active[better]] = new[better]
        misses = np.where(better, new_misses, misses)
        slopes = np.where(better, new_slopes, slopes)
        damping = np.where(better, np.maximum(damping * 0.1, 1e-9), damping * 8.0)
        stalls = np.where(better & (new < (1.0 - progress) * old), 0, stalls + better)
        going = (errors[active] > CLOSE_ENOUGH) & (stalls < MOST_STALLS) & (damping < 1e8)
        active, damping, stalls = active[going], damping[going], stalls[going]
        misses, slopes = misses[:, going], slopes[:, :, going]
    return coefficients, errors


def misses_and_slopes(coefficients: Floats, wanted: Floats, cells: Cells) -> tuple[Floats, Floats]:
    """CIELAB difference (3, n) from what is wanted, and its derivatives (3, 3, n) by the coefficients."""
    colours, colour_slopes = colours_and_slopes(coefficients, cells)
    lab, f_slopes = lab_and_slopes(colours / cells.white[:, None])
    inner = colour_slopes * (f_slopes / cells.white[:, None])[:, None, :]
    slopes = np.stack([116.0 * inner[1], 500.0 * (inner[0] - inner[1]), 200.0 * (inner[1] - inner[2])])
    return lab - wanted, slopes


def lab_and_slopes(t: Floats) -> tuple[Floats, Floats]:
    """CIELAB (3, n) of XYZ over white (3, n), without the constant 16, and the derivatives of its f by them."""
    root = cube_root(np.maximum(t, LINEAR_BELOW))
    linear = t <= LINEAR_BELOW
    f = np.where(linear, LINEAR_SLOPE * t + LINEAR_OFFSET, root)
    f_slopes = np.where(linear, LINEAR_SLOPE, 1.0 / (3.0 * root * root))
    return np.stack([116.0 * f[1], 500.0 * (f[0] - f[1]), 200.0 * (f[1] - f[2])]), f_slopes


def cube_root(t: Floats) -> Floats:
    """Cube root of values above 0 by three of Halley's steps: library roots differ in the last bit between machines."""
    mantissa, exponent = np.frexp(t)
    thirds = -(-exponent // 3)
    m = np.ldexp(mantissa, exponent - 3 * thirds)  # in [1/8, 1)
    y = (3.0 + 4.0 * m) / 7.0
    for _ in range(3):
        cubed = y * y * y
        y = y * (cubed + 2.0 * m) / (2.0 * cubed + m)
    return np.asarray(np.ldexp(y, thirds))


def damped_step(misses: Floats, slopes: Floats, damping: Floats) -> Floats:
    """The step (3, n) of Levenberg and Marquardt: (J'J + damping diag(J'J)) step = -J' miss, by cofactors."""
    a = [[sum(slopes[i, p] * slopes[i, k] for i in range(3)) for k in range(3)] for p in range(3)]
    b = [-(slopes[0, p] * misses[0] + slopes[1, p] * misses[1] + slopes[2, p] * misses[2]) for p in range(3)]
    floor = 1e-12 * (a[0][0] + a[1][1] + a[2][2]) + 1e-300
    d0, d1, d2 = (a[p][p] + damping * (a[p][p] + floor) for p in range(3))
    a01, a02, a12 = a[0][1], a[0][2], a[1][2]
    c00, c01, c02 = d1 * d2 - a12 * a12, a02 * a12 - a01 * d2, a01 * a12 - a02 * d1
    c11, c12, c22 = d0 * d2 - a02 * a02, a01 * a02 - d0 * a12, d0 * d1 - a01 * a01
    determinant = d0 * c00 + a01 * c01 + a02 * c02
    scale = np.where(determinant > 0.0, 1.0 / np.where(determinant > 0.0, determinant, 1.0), 0.0)
    return np.stack(
        [
            (c00 * b[0] + c01 * b[1] + c02 * b[2]) * scale,
            (c01 * b[0] + c11 * b[1] + c12 * b[2]) * scale,
            (c02 * b[0] + c12 * b[1] + c22 * b[2]) * scale,
        ]
    )


def bounded(coefficients: Floats) -> Floats:
    """The coefficients, those beyond the largest scaled back all three alike: edges stay where they are."""
    largest = np.abs(coefficients).max(axis=0)
    return np.asarray(coefficients * np.minimum(1.0, LARGEST / np.maximum(largest, 1.0)))


def squared(misses: Floats) -> Floats:
    """Squared lengths (n,) of (3, n)."""
    return np.asarray(misses[0] * misses[0] + misses[1] * misses[1] + misses[2] * misses[2])
