"""Sines and cosines that are the same, to the bit, on every machine.

The system's mathematics library and NumPy choose an algorithm by processor, and their last digits differ. Shapes enter
pixels, so their angles go through additions and multiplications alone, which IEEE 754 defines exactly.
"""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

Floats = npt.NDArray[np.float64]

# pi/2 in three pieces, the first two with 33 bits, so that n times a piece is exact for n below 2^20
# (Cody and Waite, Software Manual for the Elementary Functions, 1980)
HALF_PI_1 = float.fromhex("0x1.921fb544p+0")
HALF_PI_2 = float.fromhex("0x1.0b4611a6p-34")
HALF_PI_3 = float.fromhex("0x1.3198a2e037073p-69")
TWO_OVER_PI = 0.6366197723675814

SINE_TERMS = tuple((-1.0) ** k / math.factorial(2 * k + 1) for k in range(11))  # Taylor, |r| <= pi/4: below 1e-22
COSINE_TERMS = tuple((-1.0) ** k / math.factorial(2 * k) for k in range(11))


def sine_cosine(angle_rad: npt.ArrayLike) -> tuple[Floats, Floats]:
    """Sine and cosine, each the shape of `angle_rad`, within two units in the last place for |angle| < 1e6."""
    angle = np.asarray(angle_rad, dtype=np.float64)
    n = np.rint(angle * TWO_OVER_PI)
    r = ((angle - n * HALF_PI_1) - n * HALF_PI_2) - n * HALF_PI_3
    square = r * r
    sine, cosine = np.zeros_like(r), np.zeros_like(r)
    for s, c in zip(reversed(SINE_TERMS), reversed(COSINE_TERMS), strict=True):
        sine = sine * square + s
        cosine = cosine * square + c
    sine = sine * r
    quarter = n.astype(np.int64) & 3
    swapped = (quarter & 1) == 1
    sine, cosine = np.where(swapped, cosine, sine), np.where(swapped, sine, cosine)
    return np.where(quarter >= 2, -sine, sine), np.where((quarter == 1) | (quarter == 2), -cosine, cosine)


def sine_cosine_deg(angle_deg: npt.ArrayLike) -> tuple[Floats, Floats]:
    """Sine and cosine of degrees; exact at multiples of 90."""
    angle = np.asarray(angle_deg, dtype=np.float64)
    quarters = np.rint(angle / 90.0)
    sine, cosine = sine_cosine((angle - 90.0 * quarters) * (math.pi / 180.0))
    quarter = quarters.astype(np.int64) & 3
    swapped = (quarter & 1) == 1
    sine, cosine = np.where(swapped, cosine, sine), np.where(swapped, sine, cosine)
    return np.where(quarter >= 2, -sine, sine), np.where((quarter == 1) | (quarter == 2), -cosine, cosine)


def circle(n: int) -> tuple[Floats, Floats]:
    """Cosine and sine of `n` even steps round the circle, (n,) each, from angle 0."""
    sine, cosine = sine_cosine_deg(np.arange(n) * 360.0 / n)
    return cosine, sine
