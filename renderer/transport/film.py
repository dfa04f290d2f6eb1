"""Rays from the camera: pixel filter, lens, shutter and distortion."""

from __future__ import annotations

import math

from renderer.base.jit import kernel
from renderer.base.vectors import cross, dot, unit

NEWTON_STEPS = 12  # far more than needed: a lens within the shot file's limits converges to 1e-12 in five


@kernel
def matrix_at(matrices, time, row, column):
    """Entry of the matrix at a time within the shutter, linear between its steps."""
    steps = matrices.shape[0]
    if steps == 1:
        return matrices[0, row, column]
    x = time * (steps - 1)
    i = min(max(int(x), 0), steps - 2)
    f = x - i
    return matrices[i, row, column] * (1.0 - f) + matrices[i + 1, row, column] * f


@kernel
def turn(matrices, time, x, y, z):
    """A camera direction in the world; unit, though a matrix between two steps is not quite rigid."""
    return unit(
        matrix_at(matrices, time, 0, 0) * x + matrix_at(matrices, time, 0, 1) * y + matrix_at(matrices, time, 0, 2) * z,
        matrix_at(matrices, time, 1, 0) * x + matrix_at(matrices, time, 1, 1) * y + matrix_at(matrices, time, 1, 2) * z,
        matrix_at(matrices, time, 2, 0) * x + matrix_at(matrices, time, 2, 1) * y + matrix_at(matrices, time, 2, 2) * z,
    )


@kernel
def distorted(distortion, x, y):
    """Brown's distortion of an image point in focal lengths, with derivatives (Brown, Photogramm. Eng. 32, 1966)."""
    k1, k2, k3, p1, p2 = distortion[0], distortion[1], distortion[2], distortion[3], distortion[4]
    q = x * x + y * y
    radial = 1.0 + q * (k1 + q * (k2 + q * k3))
    slope = k1 + q * (2.0 * k2 + 3.0 * q * k3)
    dx = x * radial + 2.0 * p1 * x * y + p2 * (q + 2.0 * x * x)
    dy = y * radial + p1 * (q + 2.0 * y * y) + 2.0 * p2 * x * y
    dxx = radial + 2.0 * x * x * slope + 2.0 * p1 * y + 6.0 * p2 * x
    dxy = 2.0 * x * y * slope + 2.0 * p1 * x + 2.0 * p2 * y
    dyy = radial + 2.0 * y * y * slope + 6.0 * p1 * y + 2.0 * p2 * x
    return dx, dy, dxx, dxy, dyy


@kernel
def straightened(distortion, x, y):
    """The undistorted image point whose distorted place is (x, y), by Newton's method."""
    ux, uy = x, y
    for _ in range(NEWTON_STEPS):
        dx, dy, dxx, dxy, dyy = distorted(distortion, ux, uy)
        determinant = dxx * dyy - dxy * dxy
        ux -= ((dx - x) * dyy - (dy - y) * dxy) / determinant
        uy -= ((dy - y) * dxx - (dx - x) * dxy) / determinant
    return ux, uy


@kernel
def image_point(camera, column, row):
    """A place on the frame (pixels, from its top left) as an image point in focal lengths, undistorted."""
    lens = camera.lens
    x = (column / lens[3] - 0.5) * lens[1] / lens[0]
    y = (0.5 - row / lens[4]) * lens[2] / lens[0]
    if lens[9] != 0.0:
        return straightened(camera.distortion, x, y)
    return x, y


@kernel
def tent(u, radius):
    """Offset with a tent-shaped density over (-radius, radius)."""
    if u < 0.5:
        return radius * (math.sqrt(2.0 * u) - 1.0)
    return radius * (1.0 - math.sqrt(2.0 - 2.0 * u))


@kernel
def on_disc(u, v):
    """A point of the unit disc, evenly spread (P. Shirley and K. Chiu, J. Graphics Tools 2(3), 1997)."""
    a, b = 2.0 * u - 1.0, 2.0 * v - 1.0
    if a == 0.0 and b == 0.0:
        return 0.0, 0.0
    if abs(a) > abs(b):
        angle = 0.25 * math.pi * (b / a)
        return a * math.cos(angle), a * math.sin(angle)
    angle = 0.5 * math.pi - 0.25 * math.pi * (a / b)
    return b * math.cos(angle), b * math.sin(angle)


@kernel
def camera_ray(camera, column, row, u_lens, v_lens, time):
    """Origin and direction of the ray through a place on the frame and one on the lens, at a time in the shutter."""
    x, y = image_point(camera, column, row)
    matrices = camera.matrices
    ex, ey = 0.0, 0.0
    lx, ly, lz = x, y, -1.0
    radius = camera.lens[5]
    if radius > 0.0:
        ex, ey = on_disc(u_lens, v_lens)
        ex *= radius
        ey *= radius
        focus = camera.lens[6]
        lx, ly, lz = x * focus - ex, y * focus - ey, -focus
    dx, dy, dz = turn(matrices, time, lx, ly, lz)
    ox = matrix_at(matrices, time, 0, 3)
    oy = matrix_at(matrices, time, 1, 3)
    oz = matrix_at(matrices, time, 2, 3)
    if radius > 0.0:
        ox += matrix_at(matrices, time, 0, 0) * ex + matrix_at(matrices, time, 0, 1) * ey
        oy += matrix_at(matrices, time, 1, 0) * ex + matrix_at(matrices, time, 1, 1) * ey
        oz += matrix_at(matrices, time, 2, 0) * ex + matrix_at(matrices, time, 2, 1) * ey
    return ox, oy, oz, dx, dy, dz


@kernel
def polarisation_axis(camera, dx, dy, dz, time):
    """Unit axis across the ray that its Stokes parameters refer to: the polariser's, or the camera's +x."""
    angle = camera.lens[7]
    if angle < -1e8:
        angle = 0.0
    ax, ay, az = turn(camera.matrices, time, math.cos(angle), math.sin(angle), 0.0)
    along = dot(ax, ay, az, dx, dy, dz)
    px, py, pz = ax - along * dx, ay - along * dy, az - along * dz
    if dot(px, py, pz, px, py, pz) < 1e-12:
        bx, by, bz = turn(camera.matrices, time, -math.sin(angle), math.cos(angle), 0.0)
        px, py, pz = cross(bx, by, bz, dx, dy, dz)
    return unit(px, py, pz)
