"""Rough absorbing surfaces under a film of water, for kernels.

J. Lekner and M. C. Dorf, "Why some things are darker when wet", Appl. Opt. 27, 1278 (1988). The film's own gloss is
not in here: whoever uses the body adds one Fresnel reflection at the film's top, once.
"""

from __future__ import annotations

import math

from renderer.base.jit import kernel


@kernel
def diffuse_fresnel_denser(n):
    """`diffuse_fresnel` for n >= 1.

    J. W. T. Walsh 1926; S. Q. Duntley, J. Opt. Soc. Am. 32, 61 (1942): closed form of 2 x the integral of R cos sin.
    """
    if n < 1.0001:
        return (n - 1.0) * (0.3333333333333333 - 3.0 * (n - 1.0))  # the form below loses its digits here
    n2 = n * n
    n4 = n2 * n2
    plain = 0.5 + (n - 1.0) * (3.0 * n + 1.0) / (6.0 * (n + 1.0) * (n + 1.0))
    third = 2.0 * n2 * n * (n2 + 2.0 * n - 1.0) / ((n2 + 1.0) * (n4 - 1.0))
    second = n2 * (n2 - 1.0) * (n2 - 1.0) / ((n2 + 1.0) * (n2 + 1.0) * (n2 + 1.0)) * math.log((n - 1.0) / (n + 1.0))
    fourth = 8.0 * n4 * (n4 + 1.0) / ((n2 + 1.0) * (n4 - 1.0) * (n4 - 1.0)) * math.log(n)
    return plain + second - third + fourth


@kernel
def diffuse_fresnel(n):
    """Reflected share of diffuse (cosine-weighted, unpolarised) light that meets a smooth interface.

    n: index beyond the interface over the index on the light's side. For n < 1 the value includes total reflection,
    by reciprocity: 1 - n^2 (1 - diffuse_fresnel(1/n)).
    """
    if n >= 1.0:
        return diffuse_fresnel_denser(n)
    return 1.0 - n * n * (1.0 - diffuse_fresnel_denser(1.0 / n))


@kernel
def albedo_under_film(dry, film_index, grain_index):
    """Albedo of the surface as the light in the film meets it: a smaller index step lets more light into the grains.

    Lekner & Dorf 1988: absorption a = 1 - dry becomes a [(1 - a) (1 - R(grain/film)) / (1 - R(grain)) + a].
    """
    absorbed = 1.0 - dry
    gain = (1.0 - diffuse_fresnel(grain_index / film_index)) / (1.0 - diffuse_fresnel(grain_index))
    return 1.0 - absorbed * (dry * gain + absorbed)


@kernel
def wet_body_factor(dry, film_index, grain_index):
    """The diffuse light that a wet surface's body sends back, without the two crossings of the film's top.

    The body's reflectance distribution is factor / pi * T(cos_in) * T(cos_out), T being 1 - Fresnel reflectance from
    air to the film on each side: it is reciprocal, and its integral is `wet_body_reflectance`. With a film of
    internal diffuse reflectance p and an albedo A under it, factor = A / (film_index^2 (1 - p A)).
    """
    under = albedo_under_film(dry, film_index, grain_index)
    back = 1.0 - (1.0 - diffuse_fresnel(film_index)) / (film_index * film_index)
    return under / (film_index * film_index * (1.0 - back * under))


@kernel
def wet_body_reflectance(dry, film_index, grain_index):
    """Share of diffuse light that a wet surface's body reflects: the albedo without the film's gloss, in [0, 1].

    dry: the dry surface's albedo at one wavelength, in [0, 1]; film_index about 1.333 for water; grain_index about 1.5
    for mineral grains. With the gloss `diffuse_fresnel(film_index)` added, 1 stays 1.
    """
    crossing = 1.0 - diffuse_fresnel(film_index)
    return crossing * crossing * wet_body_factor(dry, film_index, grain_index)
