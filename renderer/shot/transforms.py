"""Matrices of transforms, (3, 4) row by row as 12 numbers: made, combined, and taken apart to be keyed."""

from __future__ import annotations

import math
from functools import lru_cache

from renderer.base.exact_functions import sine_cosine_deg
from renderer.shot.keyed import Keys, Values, between, values_at
from renderer.shot.model import Vector
from renderer.shot.schema.objects import Transform

Matrix = tuple[float, ...]  # 12 numbers
Square = tuple[float, ...]  # 9 numbers

IDENTITY: Matrix = (1.0, 0.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0, 0.0, 1.0, 0.0)
UNTURNED: Square = (1.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0, 1.0)
POLAR_STEPS = 100  # Newton's method doubles the digits each step; a hundred reaches any matrix that can be undone


def times(a: Square, b: Square) -> Square:
    """The product a b of 3 x 3 matrices."""
    return tuple(
        a[3 * i] * b[j] + a[3 * i + 1] * b[3 + j] + a[3 * i + 2] * b[6 + j] for i in range(3) for j in range(3)
    )


def combine(a: Matrix, b: Matrix) -> Matrix:
    """The transform that does b first, then a."""
    turned = times(square(a), square(b))
    moved = tuple(a[4 * i] * b[3] + a[4 * i + 1] * b[7] + a[4 * i + 2] * b[11] + a[4 * i + 3] for i in range(3))
    return joined(turned, moved)


def square(m: Matrix) -> Square:
    """The 3 x 3 part."""
    return (*m[0:3], *m[4:7], *m[8:11])


def joined(turned: Square, moved: tuple[float, ...]) -> Matrix:
    """A 3 x 3 part and a translation as one."""
    return (*turned[0:3], moved[0], *turned[3:6], moved[1], *turned[6:9], moved[2])


@lru_cache(maxsize=4096)
def rotation(angles_deg: tuple[float, ...]) -> Square:
    """Turned about x, then y, then z, each right-handed about the axis of the world."""
    (sx, sy, sz), (cx, cy, cz) = (part.tolist() for part in sine_cosine_deg(angles_deg))
    about_x = (1.0, 0.0, 0.0, 0.0, cx, -sx, 0.0, sx, cx)
    about_y = (cy, 0.0, sy, 0.0, 1.0, 0.0, -sy, 0.0, cy)
    about_z = (cz, -sz, 0.0, sz, cz, 0.0, 0.0, 0.0, 1.0)
    return times(about_z, times(about_y, about_x))


def transform_at(transform: Transform, time: float, metres: float) -> Matrix:
    """A transform of the shot file at a time [frames], its lengths in units of `metres`."""
    if transform.matrix is not None:
        return matrix_at(transform.matrix, time, metres)
    turned = rotation(values_at(transform.rotation, time))
    sx, sy, sz = values_at(transform.scale, time)
    scaled = tuple(value * (sx, sy, sz)[index % 3] for index, value in enumerate(turned))
    moved = tuple(value * metres for value in values_at(transform.translation, time))
    return joined(scaled, moved)


def matrix_at(value: Values, time: float, metres: float) -> Matrix:
    """A matrix of 16 numbers at a time, its translation in metres.

    Between keys it is taken apart into what turns, what scales and what moves; turning takes the shortest arc.
    """
    m = value if isinstance(value, tuple) else _between_matrices(value, time)
    return joined(square(m[:12]), (m[3] * metres, m[7] * metres, m[11] * metres))


def _between_matrices(keys: Keys, time: float) -> Matrix:
    """A keyed matrix of 16 numbers at a time, as 12."""
    before, after, share = keys.span(time)
    if before == after:
        return keys.values[before][:12]
    a, b = taken_apart(keys.values[before][:12]), taken_apart(keys.values[after][:12])
    if dot(a[:4], b[:4]) < 0.0:  # the other of the two quaternions of this turn is the nearer one
        b = (*(-value for value in b[:4]), *b[4:])
    mixed = tuple(between(x, y, share) for x, y in zip(a, b, strict=True))
    return joined(times(of_quaternion(mixed[:4]), mixed[4:13]), mixed[13:])


def taken_apart(m: Matrix) -> tuple[float, ...]:
    """A matrix as quaternion (4), scale and shear (9) and translation (3): M = R S. A mirror is left in S."""
    a = square(m)
    turned = a
    for _ in range(POLAR_STEPS):  # polar decomposition, N. Higham, SIAM J. Sci. Stat. Comput. 7(4), 1986
        other = _inverse_transposed(turned)
        nearer = tuple(0.5 * (x + y) for x, y in zip(turned, other, strict=True))
        done = max(abs(x - y) for x, y in zip(turned, nearer, strict=True)) < 1e-15
        turned = nearer
        if done:
            break
    if determinant(turned) < 0.0:
        turned = tuple(-value for value in turned)
    scale = times(transposed(turned), a)
    return (*quaternion(turned), *scale, m[3], m[7], m[11])


def determinant(a: Square) -> float:
    """Of a 3 x 3 matrix."""
    return a[0] * (a[4] * a[8] - a[5] * a[7]) - a[1] * (a[3] * a[8] - a[5] * a[6]) + a[2] * (a[3] * a[7] - a[4] * a[6])


def transposed(a: Square) -> Square:
    """Rows for columns."""
    return tuple(a[3 * j + i] for i in range(3) for j in range(3))


def _inverse_transposed(a: Square) -> Square:
    """The inverse with rows for columns: cofactors over the determinant."""
    d = determinant(a)
    cofactors = (
        a[4] * a[8] - a[5] * a[7], a[5] * a[6] - a[3] * a[8], a[3] * a[7] - a[4] * a[6],
        a[2] * a[7] - a[1] * a[8], a[0] * a[8] - a[2] * a[6], a[1] * a[6] - a[0] * a[7],
        a[1] * a[5] - a[2] * a[4], a[2] * a[3] - a[0] * a[5], a[0] * a[4] - a[1] * a[3],
    )  # fmt: skip
    return tuple(value / d for value in cofactors)


def quaternion(a: Square) -> tuple[float, float, float, float]:
    """(w, x, y, z) of a rotation; the largest of the four is found first, so that nothing small is divided by."""
    squares = (1 + a[0] + a[4] + a[8], 1 + a[0] - a[4] - a[8], 1 - a[0] + a[4] - a[8], 1 - a[0] - a[4] + a[8])
    largest = max(range(4), key=lambda index: squares[index])
    s = 2.0 * math.sqrt(squares[largest])
    x, y, z = a[7] - a[5], a[2] - a[6], a[3] - a[1]
    xy, xz, yz = a[1] + a[3], a[2] + a[6], a[5] + a[7]
    rows = ((s * s / 4, x, y, z), (x, s * s / 4, xy, xz), (y, xy, s * s / 4, yz), (z, xz, yz, s * s / 4))
    w, i, j, k = (value / s for value in rows[largest])
    return w, i, j, k


def of_quaternion(q: tuple[float, ...]) -> Square:
    """The rotation of a quaternion of any length but 0."""
    size = math.sqrt(sum(value * value for value in q))
    w, x, y, z = (value / size for value in q)
    return (
        1 - 2 * (y * y + z * z), 2 * (x * y - w * z), 2 * (x * z + w * y),
        2 * (x * y + w * z), 1 - 2 * (x * x + z * z), 2 * (y * z - w * x),
        2 * (x * z - w * y), 2 * (y * z + w * x), 1 - 2 * (x * x + y * y),
    )  # fmt: skip


def unit(v: tuple[float, ...]) -> Vector:
    """The vector at length 1; raises ZeroDivisionError where it has none."""
    largest = max(abs(value) for value in v)
    x, y, z = (value / largest for value in v)
    size = math.sqrt(x * x + y * y + z * z)
    return x / size, y / size, z / size


def cross(a: Vector, b: Vector) -> Vector:
    """Vector product a x b."""
    return a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]


def dot(a: tuple[float, ...], b: tuple[float, ...]) -> float:
    """Scalar product."""
    return sum(x * y for x, y in zip(a, b, strict=True))
