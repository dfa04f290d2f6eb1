"""What lies at a hit: point, normals, texture coordinates, and how far rounding may have moved the point."""

from __future__ import annotations

import math

import numpy as np

from renderer.arrays.world import NONE, NORMALS, OBJECT, UVS
from renderer.base.jit import kernel
from renderer.base.vectors import cross, dot, unit
from renderer.ray_search.places import carry, matrix_at, trees_of, turn_normal

EPS = 2.0**-52
POINT_ERROR = 16.0 * EPS  # of a point from its corners, through a matrix and back, over the sizes that enter
RAY_ERROR = 4.0 * EPS  # of a distance along a ray, over the lengths that enter


@kernel
def corners_of(world, m, primitive):
    """A triangle's corners, carried through a matrix."""
    f, v = world.faces, world.vertices
    i, j, k = f[primitive, 0], f[primitive, 1], f[primitive, 2]
    ax, ay, az = carry(m, v[i, 0], v[i, 1], v[i, 2])
    bx, by, bz = carry(m, v[j, 0], v[j, 1], v[j, 2])
    cx, cy, cz = carry(m, v[k, 0], v[k, 1], v[k, 2])
    return ax, ay, az, bx, by, bz, cx, cy, cz


@kernel
def triangle_corners(world, instance, primitive, time):
    """The corners of a triangle in the world at a time, as nine numbers. [m]"""
    m, _, _ = matrix_at(trees_of(world), np.int64(instance), time)
    return corners_of(world, m, primitive)


@kernel
def size_through(m, w, x, y, z):
    """Largest number that enters when a point of the world goes to an asset's space by `w` and back by `m`. [m]"""
    x, y, z = abs(x) + abs(m[3]), abs(y) + abs(m[7]), abs(z) + abs(m[11])
    px = abs(w[0]) * x + abs(w[1]) * y + abs(w[2]) * z
    py = abs(w[4]) * x + abs(w[5]) * y + abs(w[6]) * z
    pz = abs(w[8]) * x + abs(w[9]) * y + abs(w[10]) * z
    qx = abs(m[0]) * px + abs(m[1]) * py + abs(m[2]) * pz
    qy = abs(m[4]) * px + abs(m[5]) * py + abs(m[6]) * pz
    qz = abs(m[8]) * px + abs(m[9]) * py + abs(m[10]) * pz
    return qx + qy + qz


@kernel
def shading_normal(world, instance, primitive, w, u, v, gx, gy, gz):
    """The unit normal interpolated between the corners; the geometric one for flat shading."""
    shift = np.int64(world.instances[instance, NORMALS])
    if shift == NONE:
        return gx, gy, gz
    f, n = world.faces, world.normals
    i, j, k = f[primitive, 0] + shift, f[primitive, 1] + shift, f[primitive, 2] + shift
    a = 1.0 - u - v
    x = a * n[i, 0] + u * n[j, 0] + v * n[k, 0]
    y = a * n[i, 1] + u * n[j, 1] + v * n[k, 1]
    z = a * n[i, 2] + u * n[j, 2] + v * n[k, 2]
    x, y, z = turn_normal(w, x, y, z)
    if not x * x + y * y + z * z > 0.0:
        return gx, gy, gz
    return unit(x, y, z)


@kernel
def texture_place(world, instance, primitive, u, v):
    """Texture coordinates at a place of a triangle; zeros where it has none."""
    shift = np.int64(world.instances[instance, UVS])
    if shift == NONE:
        return 0.0, 0.0
    f, t = world.faces, world.uvs
    i, j, k = f[primitive, 0] + shift, f[primitive, 1] + shift, f[primitive, 2] + shift
    a = 1.0 - u - v
    return a * t[i, 0] + u * t[j, 0] + v * t[k, 0], a * t[i, 1] + u * t[j, 1] + v * t[k, 1]


@kernel
def sphere_point(world, primitive, m, w, ox, oy, oz, dx, dy, dz, t):
    """Point and unit normal on a sphere at distance t of a ray, and the largest number that enters [m]."""
    s = world.spheres
    k = world.faces[primitive, 0]
    radius = s[k, 3]
    x, y, z = carry(w, ox + t * dx, oy + t * dy, oz + t * dz)
    # Back onto the sphere: what the ray's length has cost is lost again.
    nx, ny, nz = unit(x - s[k, 0], y - s[k, 1], z - s[k, 2])
    px, py, pz = carry(m, s[k, 0] + radius * nx, s[k, 1] + radius * ny, s[k, 2] + radius * nz)
    gx, gy, gz = turn_normal(w, nx, ny, nz)
    gx, gy, gz = unit(gx, gy, gz)
    ex, ey, ez = carry(m, s[k, 0], s[k, 1], s[k, 2])
    size = size_through(m, w, abs(px) + abs(ex), abs(py) + abs(ey), abs(pz) + abs(ez))
    return px, py, pz, gx, gy, gz, size


@kernel
def hit_frame(world, instance, primitive, u, v, ox, oy, oz, dx, dy, dz, t, time):
    """What lies at a hit: (point [m] x 3, unit geometric normal x 3, unit shading normal x 3, texture u, v, object id,
    error of the point [m]).

    The geometric normal points out of the object, under mirroring matrices too. The point comes from the corners and
    not from the ray, so its error does not grow with distance; the ray's own rounding is added so that boundaries
    that fall together can be told by it.
    """
    m, w, sign = matrix_at(trees_of(world), np.int64(instance), time)
    item = np.int64(world.instances[instance, OBJECT])
    along = RAY_ERROR * (abs(ox) + abs(oy) + abs(oz) + abs(t))
    if world.faces[primitive, 1] < 0:
        px, py, pz, gx, gy, gz, size = sphere_point(world, primitive, m, w, ox, oy, oz, dx, dy, dz, t)
        return px, py, pz, gx, gy, gz, gx, gy, gz, 0.0, 0.0, item, POINT_ERROR * size + along
    ax, ay, az, bx, by, bz, cx, cy, cz = corners_of(world, m, primitive)
    a = 1.0 - u - v
    px, py, pz = a * ax + u * bx + v * cx, a * ay + u * by + v * cy, a * az + u * bz + v * cz
    gx, gy, gz = cross(bx - ax, by - ay, bz - az, cx - ax, cy - ay, cz - az)
    gx, gy, gz = unit(sign * gx, sign * gy, sign * gz)
    size = size_through(
        m, w,
        max(max(abs(ax), abs(bx)), abs(cx)), max(max(abs(ay), abs(by)), abs(cy)), max(max(abs(az), abs(bz)), abs(cz)),
    )  # fmt: skip
    sx, sy, sz = shading_normal(world, instance, primitive, w, u, v, gx, gy, gz)
    tu, tv = texture_place(world, instance, primitive, u, v)
    return px, py, pz, gx, gy, gz, sx, sy, sz, tu, tv, item, POINT_ERROR * size + along


@kernel
def leave(px, py, pz, gx, gy, gz, error_m, dx, dy, dz):
    """An origin for a ray along d from a surface, clear of it on the side that d leads to. [m]"""
    step = math.copysign(error_m, dot(gx, gy, gz, dx, dy, dz))
    return px + step * gx, py + step * gy, pz + step * gz
