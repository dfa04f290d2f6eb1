"""Vectors of three numbers, written out: kernels pass x, y and z apart, and get tuples back."""

from __future__ import annotations

import math

from renderer.base.jit import kernel


@kernel
def dot(ax, ay, az, bx, by, bz):
    """Scalar product of a and b."""
    return ax * bx + ay * by + az * bz


@kernel
def cross(ax, ay, az, bx, by, bz):
    """Vector product a x b."""
    return ay * bz - az * by, az * bx - ax * bz, ax * by - ay * bx


@kernel
def unit(x, y, z):
    """The vector scaled to length one; a zero vector gives not-a-number."""
    scale = 1.0 / math.sqrt(x * x + y * y + z * z)
    return x * scale, y * scale, z * scale


@kernel
def across(x, y, z):
    """Two unit vectors that make a right-handed frame (t, b, n) with the unit vector n = (x, y, z).

    Duff et al., "Building an Orthonormal Basis, Revisited", JCGT 6(1), 2017.
    """
    sign = math.copysign(1.0, z)
    a = -1.0 / (sign + z)
    b = x * y * a
    return 1.0 + sign * x * x * a, sign * b, -sign * x, b, sign + y * y * a, -y
