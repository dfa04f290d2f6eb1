"""Rough scattering at a point: the response of a surface or a rough boundary to light from a direction."""

from __future__ import annotations

from renderer.base.jit import kernel
from renderer.base.vectors import across, dot
from renderer.optics.fresnel_kernels import unpolarised_reflectance
from renderer.ray_search.hits import leave
from renderer.transport.interface import tangent_frame_from, tangent_frame_to
from renderer.transport.layout import (
    ALPHA,
    FRAME,
    INDEX_BEYOND,
    INDEX_HERE,
    IS_INTERFACE,
    POINT,
    POINT_ERROR,
    REFLECTANCE,
    TOP,
    TRUE_NORMAL,
    VIEW,
    WET,
)
from renderer.transport.microfacet import reflect_rough, refract_rough
from renderer.transport.surfaces import lane_value, lobes

NOTHING = (0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0)
LEAST_VIEW = 1e-4  # least cosine of the view with the shading normal; below it the true normal serves


@kernel
def place_vertex(vertex, px, py, pz, gx, gy, gz, sx, sy, sz, error_m, dx, dy, dz):
    """Set point, frame and view of a vertex; g and s are turned to the side that the ray d comes from."""
    if dot(gx, gy, gz, dx, dy, dz) > 0.0:
        gx, gy, gz = -gx, -gy, -gz
    if dot(sx, sy, sz, gx, gy, gz) < 0.0:
        sx, sy, sz = -sx, -sy, -sz
    if -dot(sx, sy, sz, dx, dy, dz) < LEAST_VIEW:
        sx, sy, sz = gx, gy, gz
    tx, ty, tz, bx, by, bz = across(sx, sy, sz)
    vertex[FRAME], vertex[FRAME + 1], vertex[FRAME + 2] = tx, ty, tz
    vertex[FRAME + 3], vertex[FRAME + 4], vertex[FRAME + 5] = bx, by, bz
    vertex[FRAME + 6], vertex[FRAME + 7], vertex[FRAME + 8] = sx, sy, sz
    vx, vy, vz = tangent_frame_to(-dx, -dy, -dz, tx, ty, tz, bx, by, bz, sx, sy, sz)
    vertex[VIEW], vertex[VIEW + 1], vertex[VIEW + 2] = vx, vy, max(vz, 1e-9)
    vertex[POINT], vertex[POINT + 1], vertex[POINT + 2] = px, py, pz
    vertex[TRUE_NORMAL], vertex[TRUE_NORMAL + 1], vertex[TRUE_NORMAL + 2] = gx, gy, gz
    vertex[POINT_ERROR] = error_m


@kernel
def to_vertex(vertex, x, y, z):
    """A world direction in the vertex's frame."""
    return tangent_frame_to(
        x, y, z, vertex[0], vertex[1], vertex[2], vertex[3], vertex[4], vertex[5], vertex[6], vertex[7], vertex[8]
    )


@kernel
def from_vertex(vertex, x, y, z):
    """A direction of the vertex's frame in the world, unit."""
    return tangent_frame_from(
        x, y, z, vertex[0], vertex[1], vertex[2], vertex[3], vertex[4], vertex[5], vertex[6], vertex[7], vertex[8]
    )


@kernel
def height(vertex, dx, dy, dz):
    """Cosine of a world direction with the true normal."""
    return dot(dx, dy, dz, vertex[TRUE_NORMAL], vertex[TRUE_NORMAL + 1], vertex[TRUE_NORMAL + 2])


@kernel
def leave_vertex(vertex, dx, dy, dz):
    """Where a ray into the world direction d starts from a vertex."""
    return leave(
        vertex[POINT], vertex[POINT + 1], vertex[POINT + 2],
        vertex[TRUE_NORMAL], vertex[TRUE_NORMAL + 1], vertex[TRUE_NORMAL + 2], vertex[POINT_ERROR], dx, dy, dz,
    )  # fmt: skip


@kernel
def surface_response(vertex, wx, wy, wz):
    """Value of an opaque surface in the four lanes, times the cosine, and its density, four times."""
    top, wet = vertex[TOP], vertex[WET] > 0.0
    gloss, body, density, cosine = lobes(
        top, vertex[ALPHA], vertex[VIEW], vertex[VIEW + 1], vertex[VIEW + 2], wx, wy, wz
    )
    return (
        lane_value(vertex[REFLECTANCE], top, wet, gloss, body, cosine),
        lane_value(vertex[REFLECTANCE + 1], top, wet, gloss, body, cosine),
        lane_value(vertex[REFLECTANCE + 2], top, wet, gloss, body, cosine),
        lane_value(vertex[REFLECTANCE + 3], top, wet, gloss, body, cosine),
        density,
        density,
        density,
        density,
    )


@kernel
def boundary_lane(vertex, lane, gloss, gloss_density, cosine, wx, wy, wz):
    """Value and density of a rough boundary in one lane: reflected where wz > 0, else refracted."""
    n_v, n_w = vertex[INDEX_HERE + lane], vertex[INDEX_BEYOND + lane]
    if wz > 0.0:
        f = unpolarised_reflectance(cosine, n_v, n_w)
        return gloss * f, gloss_density * f
    return refract_rough(vertex[ALPHA], n_v, n_w, vertex[VIEW], vertex[VIEW + 1], vertex[VIEW + 2], wx, wy, wz)


@kernel
def boundary_response(vertex, wx, wy, wz):
    """Values and densities of a rough boundary in the four lanes, times the cosine."""
    gloss, gloss_density, cosine = reflect_rough(
        vertex[ALPHA], vertex[VIEW], vertex[VIEW + 1], vertex[VIEW + 2], wx, wy, wz
    )
    f0, p0 = boundary_lane(vertex, 0, gloss, gloss_density, cosine, wx, wy, wz)
    f1, p1 = boundary_lane(vertex, 1, gloss, gloss_density, cosine, wx, wy, wz)
    f2, p2 = boundary_lane(vertex, 2, gloss, gloss_density, cosine, wx, wy, wz)
    f3, p3 = boundary_lane(vertex, 3, gloss, gloss_density, cosine, wx, wy, wz)
    return f0, f1, f2, f3, p0, p1, p2, p3


@kernel
def respond(vertex, dx, dy, dz):
    """(four values times the cosine, four densities) of light from the world direction d; nothing from a wrong side."""
    wx, wy, wz = to_vertex(vertex, dx, dy, dz)
    true_height = height(vertex, dx, dy, dz)
    if wz * true_height <= 0.0:
        return NOTHING
    if vertex[IS_INTERFACE] > 0.0:
        return boundary_response(vertex, wx, wy, wz)
    if wz <= 0.0:
        return NOTHING
    return surface_response(vertex, wx, wy, wz)
