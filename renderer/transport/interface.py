"""A smooth interface: which ways light can go on, with what polarisation, and safe normals."""

from __future__ import annotations

from renderer.base.jit import kernel
from renderer.base.vectors import dot, unit
from renderer.optics.fresnel_kernels import fresnel_mueller
from renderer.transport.layout import DIRECTION, LANE_NM, RATIO
from renderer.transport.stokes import apply_block, scale_row, share
from renderer.transport.wavelengths import table_at

GRAZE = 1e-6  # least cosine with the true surface that a bent ray keeps


@kernel
def safe_normal(dx, dy, dz, gx, gy, gz, sx, sy, sz):
    """The shading normal, bent as little as needed that the mirrored ray leaves the true surface.

    g faces the ray (g . d < 0). The result faces the ray too, and mirrors d to the side of g.
    """
    if dot(sx, sy, sz, gx, gy, gz) < 0.0:
        sx, sy, sz = -sx, -sy, -sz
    cos_i = -dot(dx, dy, dz, sx, sy, sz)
    if cos_i <= GRAZE:
        return gx, gy, gz
    rx, ry, rz = dx + 2.0 * cos_i * sx, dy + 2.0 * cos_i * sy, dz + 2.0 * cos_i * sz
    height = dot(rx, ry, rz, gx, gy, gz)
    if height >= GRAZE:
        return sx, sy, sz
    lift = 2.0 * GRAZE - height
    rx, ry, rz = unit(rx + lift * gx, ry + lift * gy, rz + lift * gz)
    return unit(rx - dx, ry - dy, rz - dz)


@kernel
def rough_normal(dx, dy, dz, gx, gy, gz, sx, sy, sz, alpha):
    """The shading normal of what mirrors roughly, bent as little as needed that the mirrored ray stays above the
    true surface g by twice the spread of its lobe, or by half its height over a flat surface where that is less.

    Else part of the lobe would fall below the surface and be lost: coarse waves would turn dark. g and s may face
    either way.
    """
    if dot(gx, gy, gz, dx, dy, dz) > 0.0:
        gx, gy, gz = -gx, -gy, -gz
    sx, sy, sz = safe_normal(dx, dy, dz, gx, gy, gz, sx, sy, sz)
    twice = -2.0 * dot(dx, dy, dz, sx, sy, sz)
    rx, ry, rz = dx + twice * sx, dy + twice * sy, dz + twice * sz
    lift = min(2.0 * alpha, -0.5 * dot(dx, dy, dz, gx, gy, gz)) - dot(rx, ry, rz, gx, gy, gz)
    if lift <= 0.0:
        return sx, sy, sz
    rx, ry, rz = unit(rx + lift * gx, ry + lift * gy, rz + lift * gz)
    return unit(rx - dx, ry - dy, rz - dz)


@kernel
def mirrored(dx, dy, dz, nx, ny, nz):
    """The ray d mirrored at the normal n."""
    twice = -2.0 * dot(dx, dy, dz, nx, ny, nz)
    return unit(dx + twice * nx, dy + twice * ny, dz + twice * nz)


@kernel
def refracted(dx, dy, dz, nx, ny, nz, cos_i, cos_t, ratio, gx, gy, gz):
    """The ray d refracted (ratio = n1/n2), kept on the far side of the true surface g."""
    k = ratio * cos_i - cos_t
    tx, ty, tz = ratio * dx + k * nx, ratio * dy + k * ny, ratio * dz + k * nz
    height = dot(tx, ty, tz, gx, gy, gz)
    if height > -GRAZE:
        drop = height + 2.0 * GRAZE
        tx, ty, tz = tx - drop * gx, ty - drop * gy, tz - drop * gz
    return unit(tx, ty, tz)


@kernel
def set_direction(reals, k, x, y, z):
    """Point a path's ray."""
    reals[k, DIRECTION], reals[k, DIRECTION + 1], reals[k, DIRECTION + 2] = x, y, z


@kernel
def lane_mueller(materials, m1, m2, cos_i, nm):
    """`fresnel_mueller` between two rows of Materials at a wavelength."""
    return fresnel_mueller(cos_i, table_at(materials.index, m1, nm), table_at(materials.index, m2, nm))


@kernel
def reflect_lanes(reals, k, materials, m1, m2, cos_i, lanes, n_lanes, chance):
    """Carry the lanes through a reflection: followed for certain (chance 0), or drawn with the hero's `chance`."""
    for lane in range(n_lanes):
        ra, rb, rc, rs, _, _, _, _ = lane_mueller(materials, m1, m2, cos_i, lanes[lane, LANE_NM])
        if chance > 0.0:
            reals[k, RATIO + lane] *= share(reals, k, lane, ra, rb) / chance
        apply_block(reals, k, lane, ra, rb, rc, rs)
        if chance > 0.0:
            scale_row(reals, k, lane, 1.0 / chance)


@kernel
def refract_lanes(reals, k, materials, m1, m2, cos_i, lanes, n_lanes, chance):
    """Carry the lanes through a refraction, as `reflect_lanes` does through a reflection; `chance` is of refraction."""
    for lane in range(n_lanes):
        _, _, _, _, ta, tb, tc, _ = lane_mueller(materials, m1, m2, cos_i, lanes[lane, LANE_NM])
        if chance > 0.0:
            reals[k, RATIO + lane] *= share(reals, k, lane, ta, tb) / chance
        apply_block(reals, k, lane, ta, tb, tc, 0.0)
        if chance > 0.0:
            scale_row(reals, k, lane, 1.0 / chance)


@kernel
def tangent_frame_to(x, y, z, tx, ty, tz, bx, by, bz, nx, ny, nz):
    """A world vector in the frame (t, b, n)."""
    return dot(x, y, z, tx, ty, tz), dot(x, y, z, bx, by, bz), dot(x, y, z, nx, ny, nz)


@kernel
def tangent_frame_from(x, y, z, tx, ty, tz, bx, by, bz, nx, ny, nz):
    """A vector of the frame (t, b, n) in the world, unit."""
    return unit(x * tx + y * bx + z * nx, x * ty + y * by + z * ny, x * tz + y * bz + z * nz)
