"""The Airy function Ai and its derivative at real arguments, for light near a rainbow's angle.

M. Abramowitz and I. A. Stegun (eds.), *Handbook of Mathematical Functions*, 1964: 10.4.2-5 (power series), 10.4.58-62
(large arguments).
"""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

Floats = npt.NDArray[np.float64]

AI_0 = 0.355028053887817239  # 3^(-2/3) / gamma(2/3)
SLOPE_0 = 0.258819403792806798  # 3^(-1/3) / gamma(1/3), of the opposite sign to Ai'(0)
SERIES_FROM, SERIES_TO = -7.0, 5.0  # beyond, the terms for large arguments err by less than 1e-8
SERIES_TERMS = 60
LARGE_TERMS = 12


def airy(z: npt.ArrayLike) -> tuple[Floats, Floats]:
    """Ai(z) and Ai'(z) of real z (n,), to about 1e-10 (to 1e-6 of themselves for positive z)."""
    at = np.atleast_1d(np.asarray(z, dtype=np.float64))
    value, slope = np.empty_like(at), np.empty_like(at)
    near, high, low = (at > SERIES_FROM) & (at < SERIES_TO), at >= SERIES_TO, at <= SERIES_FROM
    value[near], slope[near] = by_series(at[near])
    value[high], slope[high] = decaying(at[high])
    value[low], slope[low] = oscillating(-at[low])
    return value, slope


def by_series(z: Floats) -> tuple[Floats, Floats]:
    """Power series about 0."""
    even, odd = np.ones_like(z), z.copy()
    f, g, df, dg = even.copy(), odd.copy(), np.zeros_like(z), np.ones_like(z)
    cube, square = z**3, z * z
    for k in range(1, SERIES_TERMS):
        df += even * square / (3 * k - 1)
        dg += odd * square / (3 * k)
        even = even * cube / ((3 * k - 1) * (3 * k))
        odd = odd * cube / ((3 * k) * (3 * k + 1))
        f += even
        g += odd
    return AI_0 * f - SLOPE_0 * g, AI_0 * df - SLOPE_0 * dg


def large_coefficients() -> tuple[list[float], list[float]]:
    """c_k and d_k of the expansions for large arguments."""
    c, d = [1.0], [1.0]
    for k in range(1, LARGE_TERMS):
        c.append(c[-1] * (6 * k - 5) * (6 * k - 3) * (6 * k - 1) / (216.0 * k * (2 * k - 1)))
        d.append(-(6 * k + 1) / (6 * k - 1) * c[-1])
    return c, d


def decaying(z: Floats) -> tuple[Floats, Floats]:
    """Large positive arguments."""
    c, d = large_coefficients()
    zeta = 2.0 / 3.0 * z**1.5
    front = np.exp(-zeta) / (2.0 * math.sqrt(math.pi))
    value = sum(((-1) ** k * c[k] * zeta**-k for k in range(LARGE_TERMS)), np.zeros_like(z))
    slope = sum(((-1) ** k * d[k] * zeta**-k for k in range(LARGE_TERMS)), np.zeros_like(z))
    return front * value * z**-0.25, -front * slope * z**0.25


def oscillating(z: Floats) -> tuple[Floats, Floats]:
    """Ai(-z) and Ai'(-z) of large positive z."""
    c, d = large_coefficients()
    zeta = 2.0 / 3.0 * z**1.5
    sine, cosine = np.sin(zeta + 0.25 * math.pi), np.cos(zeta + 0.25 * math.pi)
    even_c, odd_c, even_d, odd_d = (
        sum(((-1) ** (k // 2) * f[k] * zeta**-k for k in range(first, LARGE_TERMS, 2)), np.zeros_like(z))
        for f in (c, d)
        for first in (0, 1)
    )
    value = (sine * even_c - cosine * odd_c) * z**-0.25
    slope = -(cosine * even_d + sine * odd_d) * z**0.25
    return value / math.sqrt(math.pi), slope / math.sqrt(math.pi)
