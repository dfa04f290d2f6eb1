"""Refraction and reflection at a smooth interface between two clear media, for kernels.

Convention, binding for everything that carries polarised light
----------------------------------------------------------------
*Frames.* s is one unit vector perpendicular to the plane of incidence, the same for all rays at the interface.
Every ray has its own p = direction x s, so that (s, p, direction) is right-handed. The reflected ray's p follows the
same rule, so at normal incidence the reflected p points against the incident p, and rp = -rs there: from air to glass
rs < 0 and rp > 0, and C = rs rp < 0 (a mirror turns U and V round in right-handed frames, as it must).

*Time.* Fields vary as exp(i k.r - i w t). In total reflection cos_t = +i kappa, kappa > 0, so that the field decays.

*Stokes vector* in a frame (s, p): I = |Es|^2 + |Ep|^2, Q = |Es|^2 - |Ep|^2, U = 2 Re(Es* Ep), V = 2 Im(Es* Ep). V > 0
when the field turns from s towards p, which is positive helicity in a right-handed frame.

*Reflection* has the Mueller matrix [[A, B, 0, 0], [B, A, 0, 0], [0, 0, C, S], [0, 0, -S, C]] with A = (Rs + Rp)/2,
B = (Rs - Rp)/2, C + iS = rs conj(rp). *Transmission* has the same form with S = 0, and carries the flux factor
n2 cos_t / (n1 cos_i): RA + TA = 1, RB + TB = 0.

*Against the light.* A camera ray in n1 that meets n2 is followed against the light, as a row that is multiplied from
the right by the Mueller matrix of the light, row' = row M:

    reflected    r0' = r0 A + r1 B    r1' = r0 B + r1 A    r2' = r2 C - r3 S    r3' = r2 S + r3 C
    refracted    r0' = r0 A + r1 B    r1' = r0 B + r1 A    r2' = r2 C           r3' = r3 C

with the very numbers that `fresnel_mueller(cos_i, n1, n2)` gives for the camera ray. Reflected: the light also comes
from n1 at the same angle, so it is its own matrix, and S keeps its sign. Refracted: the light goes from n2 to n1, and
A, B, C with the flux factor are the same in both directions (4 n1 cos_i n2 cos_t over products of the symmetric sums),
so for basic radiance L/n^2 nothing more is needed. The row may be kept in frames that are right-handed for the camera
ray (a, ray x a) or for the light (a, light x a), as long as it is one of the two throughout: going from one to the
other turns the signs of U and V together, and both matrices above stay as they are under that. A frame turned by phi
from its first axis towards its second takes a row to r1' = r1 cos 2phi + r2 sin 2phi, r2' = -r1 sin 2phi + r2 cos 2phi.
Only what a light gives, and a lens polariser's row (1/2)(1, cos 2phi, sin 2phi, 0), must be stated in the chosen frame.

Amplitudes: M. Born and E. Wolf, *Principles of Optics*, 7th ed., Cambridge 1999, section 1.5.2 eqs. 20-21 and 1.5.4.
"""

from __future__ import annotations

import math

from renderer.base.jit import kernel


@kernel
def refract_cosine(cos_i, n1, n2):
    """Cosine of the refracted ray with the normal, in [0, 1]; -1 when the interface reflects totally (Snell's law).

    cos_i in [0, 1] is measured on the side of index n1, where the ray comes from.
    """
    if n1 == n2:
        return cos_i
    ratio = n1 / n2
    square = 1.0 - ratio * ratio * (1.0 - cos_i * cos_i)
    if square < 0.0:
        return -1.0
    return math.sqrt(square)


@kernel
def evanescent_decay(cos_i, n1, n2):
    """kappa of cos_t = i kappa under total reflection; 0 at the critical angle."""
    ratio = n1 / n2
    return math.sqrt(max(0.0, ratio * ratio * (1.0 - cos_i * cos_i) - 1.0))


@kernel
def unit_phase(real, decay):
    """(real - i decay) / (real + i decay): a total reflection's amplitude, as its real and imaginary part."""
    square = real * real + decay * decay
    if square == 0.0:
        return 1.0, 0.0
    return (real * real - decay * decay) / square, -2.0 * real * decay / square


@kernel
def fresnel_amplitudes(cos_i, n1, n2):
    """Amplitude ratios of reflection and transmission: (rs_re, rs_im, rp_re, rp_im, ts, tp, cos_t).

    rs = (n1 cos_i - n2 cos_t) / (n1 cos_i + n2 cos_t), rp = (n2 cos_i - n1 cos_t) / (n2 cos_i + n1 cos_t), in the
    frames of this file. Totally reflected: |rs| = |rp| = 1, ts = tp = 0, cos_t = -1. Equal indices reflect nothing.
    """
    if n1 == n2:
        return 0.0, 0.0, 0.0, 0.0, 1.0, 1.0, cos_i
    cos_t = refract_cosine(cos_i, n1, n2)
    if cos_t < 0.0:
        kappa = evanescent_decay(cos_i, n1, n2)
        rs_re, rs_im = unit_phase(n1 * cos_i, n2 * kappa)
        rp_re, rp_im = unit_phase(n2 * cos_i, n1 * kappa)
        return rs_re, rs_im, rp_re, rp_im, 0.0, 0.0, -1.0
    sum_s = n1 * cos_i + n2 * cos_t
    sum_p = n2 * cos_i + n1 * cos_t
    rs = (n1 * cos_i - n2 * cos_t) / sum_s
    rp = (n2 * cos_i - n1 * cos_t) / sum_p
    return rs, 0.0, rp, 0.0, 2.0 * n1 * cos_i / sum_s, 2.0 * n1 * cos_i / sum_p, cos_t


@kernel
def fresnel_mueller(cos_i, n1, n2):
    """Mueller entries of reflection and transmission: (RA, RB, RC, RS, TA, TB, TC, cos_t); see the head of this file.

    Totally reflected: TA = TB = TC = 0, cos_t = -1, and the phase difference is in RC + i RS = rs conj(rp).
    """
    rs_re, rs_im, rp_re, rp_im, _, _, cos_t = fresnel_amplitudes(cos_i, n1, n2)
    rc = rs_re * rp_re + rs_im * rp_im
    if cos_t < 0.0:
        return 1.0, 0.0, rc, rs_im * rp_re - rs_re * rp_im, 0.0, 0.0, 0.0, -1.0
    rs = rs_re * rs_re
    rp = rp_re * rp_re
    if n1 == n2:
        return 0.0, 0.0, 0.0, 0.0, 1.0, 0.0, 1.0, cos_t
    sum_s = n1 * cos_i + n2 * cos_t
    sum_p = n2 * cos_i + n1 * cos_t
    through = 4.0 * n1 * n2 * cos_i * cos_t
    ts = through / (sum_s * sum_s)
    tp = through / (sum_p * sum_p)
    tc = through / (sum_s * sum_p)
    return 0.5 * (rs + rp), 0.5 * (rs - rp), rc, 0.0, 0.5 * (ts + tp), 0.5 * (ts - tp), tc, cos_t


@kernel
def unpolarised_reflectance(cos_i, n1, n2):
    """Reflected share of unpolarised power, in [0, 1]; exactly 1 under total reflection, exactly 0 for n1 == n2."""
    rs_re, _, rp_re, _, _, _, cos_t = fresnel_amplitudes(cos_i, n1, n2)
    if cos_t < 0.0:
        return 1.0
    return 0.5 * (rs_re * rs_re + rp_re * rp_re)


@kernel
def plate_sum(r, t, tau):
    """What a plate reflects and transmits: all internal reflections added, for one polarisation or for the product C.

    r, t: share reflected and transmitted at one face; tau: transmittance of one crossing.
    """
    once = r * tau
    many = t * t * tau / (1.0 - once * once)
    return r + many * once, many


@kernel
def pane_mueller(cos_i, n, tau):
    """Mueller entries of a plane-parallel plate: (RA, RB, RC, TA, TB, TC), in the form at the head of this file.

    n: index of the plate over that of its surroundings, the same on both sides; tau in [0, 1]: its internal
    transmittance along one slanted crossing. The orders of internal reflection are added as powers, without
    interference, which holds for plates many wavelengths thick; within each order s and p keep their phase (RC, TC).
    """
    ra, rb, rc, _, ta, tb, tc, cos_t = fresnel_mueller(cos_i, 1.0, n)
    if cos_t < 0.0 or cos_i <= 0.0:
        return ra, rb, rc, 0.0, 0.0, 0.0
    reflected_s, through_s = plate_sum(ra + rb, ta + tb, tau)
    reflected_p, through_p = plate_sum(ra - rb, ta - tb, tau)
    reflected_c, through_c = plate_sum(rc, tc, tau)
    return (
        0.5 * (reflected_s + reflected_p),
        0.5 * (reflected_s - reflected_p),
        reflected_c,
        0.5 * (through_s + through_p),
        0.5 * (through_s - through_p),
        through_c,
    )
