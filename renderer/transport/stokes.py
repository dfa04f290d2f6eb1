"""Rows of Mueller products along a camera path: turning their axis and meeting interfaces.

The row r of a lane says what the path shows of light with Stokes vector S at its end: r0 S0 + r1 S1 + r2 S2 + r3 S3.
Its axis is `AXIS`, across the ray; the second axis is light x AXIS, where light runs against the camera ray. The
conventions are those of renderer/optics/fresnel_kernels.py.
"""

from __future__ import annotations

import math

from renderer.base.jit import kernel
from renderer.base.vectors import cross, dot
from renderer.transport.layout import AXIS, DIRECTION, RATIO, ROW


@kernel
def plane_axis(reals, k, nx, ny, nz):
    """The s axis for a normal: unit, across ray and normal; the row's own axis where the two are parallel."""
    dx, dy, dz = reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2]
    sx, sy, sz = cross(dx, dy, dz, nx, ny, nz)
    square = dot(sx, sy, sz, sx, sy, sz)
    if square < 1e-24:
        return reals[k, AXIS], reals[k, AXIS + 1], reals[k, AXIS + 2]
    scale = 1.0 / math.sqrt(square)
    return sx * scale, sy * scale, sz * scale


@kernel
def turn_rows(reals, k, sx, sy, sz):
    """Refer the rows of all lanes to the unit axis s, across the ray."""
    ax, ay, az = reals[k, AXIS], reals[k, AXIS + 1], reals[k, AXIS + 2]
    bx, by, bz = cross(-reals[k, DIRECTION], -reals[k, DIRECTION + 1], -reals[k, DIRECTION + 2], ax, ay, az)
    c = dot(ax, ay, az, sx, sy, sz)
    s = dot(bx, by, bz, sx, sy, sz)
    norm = c * c + s * s
    cos2, sin2 = (c * c - s * s) / norm, 2.0 * c * s / norm
    for lane in range(4):
        i = ROW + 4 * lane
        r1, r2 = reals[k, i + 1], reals[k, i + 2]
        reals[k, i + 1] = r1 * cos2 + r2 * sin2
        reals[k, i + 2] = r2 * cos2 - r1 * sin2
    reals[k, AXIS], reals[k, AXIS + 1], reals[k, AXIS + 2] = sx, sy, sz


@kernel
def apply_block(reals, k, lane, a, b, c, s):
    """Multiply a lane's row by [[a, b, 0, 0], [b, a, 0, 0], [0, 0, c, s], [0, 0, -s, c]], in the frame of the plane."""
    i = ROW + 4 * lane
    r0, r1, r2, r3 = reals[k, i], reals[k, i + 1], reals[k, i + 2], reals[k, i + 3]
    reals[k, i] = r0 * a + r1 * b
    reals[k, i + 1] = r0 * b + r1 * a
    reals[k, i + 2] = r2 * c - r3 * s
    reals[k, i + 3] = r2 * s + r3 * c


@kernel
def scale_row(reals, k, lane, factor):
    """Multiply a lane's row by a number."""
    i = ROW + 4 * lane
    reals[k, i] *= factor
    reals[k, i + 1] *= factor
    reals[k, i + 2] *= factor
    reals[k, i + 3] *= factor


@kernel
def depolarise(reals, k, lane, factor):
    """Keep a lane's first element, times a number: what a rough or diffuse vertex leaves."""
    i = ROW + 4 * lane
    reals[k, i] *= factor
    reals[k, i + 1] = 0.0
    reals[k, i + 2] = 0.0
    reals[k, i + 3] = 0.0


@kernel
def share(reals, k, lane, a, b):
    """What a block with first row (a, b) leaves of a lane's power: its chance as a branch, in [0, 1].

    A lane that absorption has put out counts as unpolarised: a chance of nothing would make its ratio 0, as if no path
    could have come this way, and 0/0 where all lanes are out.
    """
    i = ROW + 4 * lane
    if reals[k, i] <= 0.0:
        return min(max(a, 0.0), 1.0)
    return min(max(a + b * reals[k, i + 1] / reals[k, i], 0.0), 1.0)


@kernel
def drop_companions(reals, k):
    """Leave the hero alone: the others could not have come this way at a dispersive interface."""
    for lane in range(1, 4):
        reals[k, RATIO + lane] = 0.0
        for element in range(4):
            reals[k, ROW + 4 * lane + element] = 0.0


@kernel
def importance(reals, k):
    """Mean power of the path over its lanes, as their shared estimate weighs them: 1 at the camera."""
    power = 0.0
    ratios = 0.0
    for lane in range(4):
        power += reals[k, ROW + 4 * lane]
        ratios += reals[k, RATIO + lane]
    return power / ratios
