"""A ray against one triangle or one sphere."""

from __future__ import annotations

import math

from renderer.base.jit import kernel


@kernel
def steepest(dx, dy, dz):
    """The axis along which a direction is longest."""
    ax, ay, az = abs(dx), abs(dy), abs(dz)
    if ax > ay and ax > az:
        return 0
    return 1 if ay > az else 2


@kernel
def permuted(axis, x, y, z):
    """The three numbers turned round so that `axis` is the last."""
    if axis == 0:
        return y, z, x
    if axis == 1:
        return z, x, y
    return x, y, z


@kernel
def triangle_hit(axis, sx, sy, sz, ax, ay, az, bx, by, bz, cx, cy, cz):
    """Distance and barycentrics (t, u of b, v of c) of a ray in a triangle; t is not-a-number for a miss.

    Corners are relative to the ray's origin; (sx, sy, sz) is the ray's shear along `axis`. Watertight: the three edge
    numbers of neighbours are exact negations of each other, so no ray passes between (Woop, Benthin & Wald,
    "Watertight Ray/Triangle Intersection", JCGT 2(1), 2013, here in float64).
    """
    ax, ay, az = permuted(axis, ax, ay, az)
    bx, by, bz = permuted(axis, bx, by, bz)
    cx, cy, cz = permuted(axis, cx, cy, cz)
    ax, ay = ax - sx * az, ay - sy * az
    bx, by = bx - sx * bz, by - sy * bz
    cx, cy = cx - sx * cz, cy - sy * cz
    u = cx * by - cy * bx
    v = ax * cy - ay * cx
    w = bx * ay - by * ax
    if (u < 0.0 or v < 0.0 or w < 0.0) and (u > 0.0 or v > 0.0 or w > 0.0):
        return math.nan, 0.0, 0.0
    det = u + v + w
    if det == 0.0:
        return math.nan, 0.0, 0.0
    t = (u * az + v * bz + w * cz) * sz / det
    return t, v / det, w / det


@kernel
def sphere_hit(fx, fy, fz, dx, dy, dz, radius):
    """Both distances at which a ray meets a sphere, near and far; not-a-number twice for a miss or a mere touch.

    (fx, fy, fz) is the origin relative to the centre; d need not be unit. The discriminant is formed so that small
    spheres far away lose no digits (Haines et al., "Precision Improvements for Ray/Sphere Intersection", Ray Tracing
    Gems, 2019, ch. 7).
    """
    a = dx * dx + dy * dy + dz * dz
    b = -(fx * dx + fy * dy + fz * dz)
    s = b / a
    gx, gy, gz = fx + s * dx, fy + s * dy, fz + s * dz
    rest = radius * radius - (gx * gx + gy * gy + gz * gz)
    if not rest > 0.0:
        return math.nan, math.nan
    root = math.sqrt(a * rest)
    f = math.sqrt(fx * fx + fy * fy + fz * fz)
    c = (f - radius) * (f + radius)
    q = b + root if b >= 0.0 else b - root
    first, second = c / q, q / a
    near, far = min(first, second), max(first, second)
    if not near < far:
        return math.nan, math.nan
    return near, far
