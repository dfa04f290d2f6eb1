"""Rough reflection and refraction: the GGX distribution with visible normals, in the frame of the normal (z).

B. Walter et al., "Microfacet Models for Refraction through Rough Surfaces", EGSR 2007; E. Heitz, "Sampling the GGX
Distribution of Visible Normals", JCGT 7(4), 2018. Radiance is divided by the square of the index throughout, so that a
rough interface's value is the one that `refract_rough` returns, without a further factor.
"""

from __future__ import annotations

import math

from renderer.base.jit import kernel
from renderer.base.vectors import dot, unit
from renderer.optics.fresnel_kernels import unpolarised_reflectance


@kernel
def ggx_density(alpha, hz):
    """Density of microfacet normals, per steradian of normals and unit of flat area."""
    if hz <= 0.0:
        return 0.0
    a2 = alpha * alpha
    f = hz * hz * (a2 - 1.0) + 1.0
    return a2 / (math.pi * f * f)


@kernel
def smith_lambda(alpha, z):
    """Smith's auxiliary function of a direction at cosine z with the normal."""
    c2 = z * z
    return 0.5 * (math.sqrt(1.0 + alpha * alpha * (1.0 - c2) / c2) - 1.0)


@kernel
def masking_one(alpha, z):
    """Share of microfacets seen from a direction at cosine z."""
    return 1.0 / (1.0 + smith_lambda(alpha, abs(z)))


@kernel
def masking_both(alpha, vz, wz, across):
    """Share seen from two directions: height-correlated on one side of the surface, separable `across` it.

    E. Heitz, "Understanding the Masking-Shadowing Function in Microfacet-Based BRDFs", JCGT 3(2), 2014.
    """
    lv, lw = smith_lambda(alpha, abs(vz)), smith_lambda(alpha, abs(wz))
    if across:
        return 1.0 / ((1.0 + lv) * (1.0 + lw))
    return 1.0 / (1.0 + lv + lw)


@kernel
def visible_normal(alpha, vx, vy, vz, u, v):
    """A microfacet normal drawn from those seen from the direction v (vz > 0)."""
    sx, sy, sz = unit(alpha * vx, alpha * vy, vz)
    length2 = sx * sx + sy * sy
    tx, ty = 1.0, 0.0
    if length2 > 0.0:
        scale = 1.0 / math.sqrt(length2)
        tx, ty = -sy * scale, sx * scale
    bx, by, bz = -sz * ty, sz * tx, sx * ty - sy * tx
    r = math.sqrt(u)
    phi = 2.0 * math.pi * v
    t1 = r * math.cos(phi)
    t2 = r * math.sin(phi)
    s = 0.5 * (1.0 + sz)
    t2 = (1.0 - s) * math.sqrt(max(0.0, 1.0 - t1 * t1)) + s * t2
    t3 = math.sqrt(max(0.0, 1.0 - t1 * t1 - t2 * t2))
    nx = t1 * tx + t2 * bx + t3 * sx
    ny = t1 * ty + t2 * by + t3 * sy
    nz = t2 * bz + t3 * sz
    return unit(alpha * nx, alpha * ny, max(1e-9, nz))


@kernel
def visible_density(alpha, vz, hz, vh):
    """Density of `visible_normal` per steradian of normals; vh is the cosine between v and the normal."""
    return masking_one(alpha, vz) * max(0.0, vh) * ggx_density(alpha, hz) / vz


@kernel
def reflect_rough(alpha, vx, vy, vz, wx, wy, wz):
    """(value, density, cosine): reflection of v into w without its Fresnel factor, times the cosine of w.

    The density is that of w when the normal is drawn by `visible_normal`; the cosine is that at the microfacet.
    """
    if wz <= 0.0 or vz <= 0.0:
        return 0.0, 0.0, 1.0
    hx, hy, hz = unit(vx + wx, vy + wy, vz + wz)
    vh = dot(vx, vy, vz, hx, hy, hz)
    if vh <= 0.0:
        return 0.0, 0.0, 1.0
    d = ggx_density(alpha, hz)
    value = d * masking_both(alpha, vz, wz, False) / (4.0 * vz)
    return value, masking_one(alpha, vz) * d / (4.0 * vz), vh


@kernel
def refract_rough(alpha, n_v, n_w, vx, vy, vz, wx, wy, wz):
    """(value, density): refraction between v (index n_v, vz > 0) and w (index n_w, wz < 0), times the cosine of w.

    Both hold the Fresnel share that passes; the density is that of w with the normal from `visible_normal`.
    Walter et al. 2007, eqs. 16, 17 and 21, in basic radiance.
    """
    if wz >= 0.0 or vz <= 0.0 or n_v == n_w:
        return 0.0, 0.0
    hx, hy, hz = n_v * vx + n_w * wx, n_v * vy + n_w * wy, n_v * vz + n_w * wz
    hx, hy, hz = unit(hx, hy, hz)
    if hz < 0.0:
        hx, hy, hz = -hx, -hy, -hz
    vh, wh = dot(vx, vy, vz, hx, hy, hz), dot(wx, wy, wz, hx, hy, hz)
    if vh <= 0.0 or wh >= 0.0:
        return 0.0, 0.0
    through = 1.0 - unpolarised_reflectance(vh, n_v, n_w)
    if through <= 0.0:
        return 0.0, 0.0
    root = n_v * vh + n_w * wh
    jacobian = n_w * n_w * -wh / (root * root)
    common = through * ggx_density(alpha, hz) * vh / vz * jacobian
    return common * masking_both(alpha, vz, wz, True), common * masking_one(alpha, vz)
