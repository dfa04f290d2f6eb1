"""Opaque surfaces: matt, metal, glossy and wet; their value, density and sampling in the frame of the normal (z).

A matt surface with a gloss, or under a film of water, is a body below a clear top. Dry: the body is coupled to the top
so that white loses nothing and reciprocity holds (C. Kelemen and L. Szirmay-Kalos, "A Microfacet Based Coupled
Specular-Matte BRDF Model", Eurographics 2001). Wet: the body is that of Lekner and Dorf 1988 (renderer/optics/wet.py).
"""

from __future__ import annotations

import math

from renderer.arrays.looks import METAL, PICTURE, SIGMOID
from renderer.base.jit import kernel
from renderer.optics.fresnel_kernels import unpolarised_reflectance
from renderer.optics.sigmoid_kernels import sigmoid_reflectance
from renderer.optics.wet_kernels import wet_body_factor
from renderer.transport.film import on_disc
from renderer.transport.layout import SMOOTH_BELOW
from renderer.transport.microfacet import reflect_rough, visible_normal
from renderer.transport.wavelengths import table_at

GLOSS_INDEX = 1.5  # of a dry matt surface's gloss: common practice for paint, plastic and stone, no source
GLOSS_DIFFUSE = 0.0917779593  # diffuse_fresnel(1.5), Walsh 1926
FILM_INDEX = 1.333  # water at the d line
GRAIN_INDEX = 1.5  # mineral grains, Lekner and Dorf 1988
NO_GLOSS = 0.999  # roughness from which a matt surface has no gloss at all


@kernel
def texel(surfaces, surface, column, row, wavelength_nm):
    """Reflectance of one texel of a picture."""
    i = surfaces.picture[surface, 0] + row * surfaces.picture[surface, 1] + column
    return sigmoid_reflectance(
        float(surfaces.texels[i, 0]), float(surfaces.texels[i, 1]), float(surfaces.texels[i, 2]), wavelength_nm
    )


@kernel
def wrapped(i, n):
    """A texel number brought back to 0..n-1; the picture repeats."""
    while i < 0:
        i += n
    while i >= n:
        i -= n
    return i


@kernel
def picture_reflectance(surfaces, surface, u, v, wavelength_nm):
    """Reflectance of a picture at (u, v), v = 1 at its top; bilinear between texels, repeating."""
    width, height = surfaces.picture[surface, 1], surfaces.picture[surface, 2]
    x = (u - math.floor(u)) * width - 0.5
    y = (1.0 - (v - math.floor(v))) * height - 0.5
    x0, y0 = math.floor(x), math.floor(y)
    fx, fy = x - x0, y - y0
    left, right = wrapped(int(x0), width), wrapped(int(x0) + 1, width)
    above, below = wrapped(int(y0), height), wrapped(int(y0) + 1, height)
    top = texel(surfaces, surface, left, above, wavelength_nm) * (1.0 - fx)
    top += texel(surfaces, surface, right, above, wavelength_nm) * fx
    low = texel(surfaces, surface, left, below, wavelength_nm) * (1.0 - fx)
    low += texel(surfaces, surface, right, below, wavelength_nm) * fx
    return top * (1.0 - fy) + low * fy


@kernel
def reflectance_at(surfaces, surface, u, v, wavelength_nm):
    """Reflectance of a surface at a point and wavelength, in [0, 1]."""
    kind = surfaces.reflectance_kind[surface]
    if kind == SIGMOID:
        return sigmoid_reflectance(
            surfaces.coefficients[surface, 0],
            surfaces.coefficients[surface, 1],
            surfaces.coefficients[surface, 2],
            wavelength_nm,
        )
    if kind == PICTURE:
        return picture_reflectance(surfaces, surface, u, v, wavelength_nm)
    return table_at(surfaces.reflectance_table, surface, wavelength_nm)


@kernel
def is_mirror(surfaces, surface):
    """Whether a surface is smooth metal, which only a reflected ray can meet."""
    return surfaces.finish[surface] == METAL and surfaces.roughness[surface] < SMOOTH_BELOW


@kernel
def mirror_spread(surfaces, surface):
    """Alpha of what a surface mirrors, dry or wet; -1 where it mirrors nothing."""
    if surfaces.finish[surface] == METAL or surfaces.roughness[surface] < NO_GLOSS:
        return surfaces.roughness[surface] ** 2
    if surfaces.wetness[surface] > 0.0:
        return surfaces.film_roughness[surface] ** 2
    return -1.0


@kernel
def top_of(surfaces, surface, u_wet):
    """(index of the clear top, alpha, wet) at this hit: index 0 for none, -1 for metal.

    The share of a surface that is wet is met by chance: each hit is wet or dry, and their mean is the mixture.
    """
    if surfaces.finish[surface] == METAL:
        return -1.0, max(surfaces.roughness[surface], SMOOTH_BELOW) ** 2, False
    if u_wet < surfaces.wetness[surface]:
        return FILM_INDEX, max(surfaces.film_roughness[surface], SMOOTH_BELOW) ** 2, True
    if surfaces.roughness[surface] >= NO_GLOSS:
        return 0.0, 1.0, False
    return GLOSS_INDEX, max(surfaces.roughness[surface], SMOOTH_BELOW) ** 2, False


@kernel
def body_factor(reflectance, top, wet):
    """What stands before T(in) T(out) / pi in the body's value."""
    if top < 0.0:
        return 0.0
    if wet:
        return wet_body_factor(reflectance, FILM_INDEX, GRAIN_INDEX)
    if top > 0.0:
        return reflectance / (1.0 - GLOSS_DIFFUSE)
    return reflectance


@kernel
def gloss_chance(top, vz):
    """Chance that a reflection is drawn from the top and not from the body; the same for all wavelengths."""
    if top == 0.0:
        return 0.0
    if top < 0.0:
        return 1.0
    return min(max(unpolarised_reflectance(vz, 1.0, top), 0.2), 0.8)


@kernel
def lobes(top, alpha, vx, vy, vz, wx, wy, wz):
    """(gloss, body, density, cosine at the microfacet): what the light direction w gives, times the cosine of w.

    gloss lacks Fresnel's factor for metal, body lacks the body's factor.
    """
    if wz <= 0.0 or vz <= 0.0:
        return 0.0, 0.0, 0.0, 1.0
    body = wz / math.pi
    if top == 0.0:
        return 0.0, body, body, 1.0
    gloss, gloss_density, vh = reflect_rough(alpha, vx, vy, vz, wx, wy, wz)
    if top < 0.0:
        return gloss, 0.0, gloss_density, vh
    chance = gloss_chance(top, vz)
    density = chance * gloss_density + (1.0 - chance) * body
    pass_v = 1.0 - unpolarised_reflectance(vz, 1.0, top)
    pass_w = 1.0 - unpolarised_reflectance(wz, 1.0, top)
    return gloss * unpolarised_reflectance(vh, 1.0, top), body * pass_v * pass_w, density, vh


@kernel
def schlick(reflectance, cosine):
    """Reflectance of a metal at a cosine, from that at normal incidence (Schlick, Comput. Graph. Forum 13(3), 1994)."""
    x = 1.0 - min(max(cosine, 0.0), 1.0)
    x2 = x * x
    return reflectance + (1.0 - reflectance) * x2 * x2 * x


@kernel
def lane_value(reflectance, top, wet, gloss, body, cosine):
    """Value of the surface at one wavelength, times the cosine, from its lobes."""
    if top < 0.0:
        return gloss * schlick(reflectance, cosine)
    return gloss + body * body_factor(reflectance, top, wet)


@kernel
def draw_reflection(top, alpha, vx, vy, vz, u, v, u_lobe):
    """A direction w for the view direction v, from the top or from the body; wz <= 0 means that none was found."""
    if u_lobe < gloss_chance(top, vz):
        hx, hy, hz = visible_normal(alpha, vx, vy, vz, u, v)
        twice = 2.0 * (vx * hx + vy * hy + vz * hz)
        return twice * hx - vx, twice * hy - vy, twice * hz - vz
    x, y = on_disc(u, v)
    return x, y, math.sqrt(max(0.0, 1.0 - x * x - y * y))
