"""Sines and cosines of single angles, the same to the bit on every machine.

The system's mathematics library differs in its last digits from machine to machine, and transforms enter pixels; these
use additions and multiplications alone, which IEEE 754 defines exactly.
"""

from __future__ import annotations

import math

_SINE = tuple((-1.0) ** k / math.factorial(2 * k + 1) for k in range(11))  # Taylor, |x| <= pi/4: below 1e-22
_COSINE = tuple((-1.0) ** k / math.factorial(2 * k) for k in range(11))


def sine_cosine_deg(angle_deg: float) -> tuple[float, float]:
    """Sine and cosine of an angle in degrees; exact at multiples of 90."""
    quarters = round(angle_deg / 90.0)
    x = (angle_deg - 90.0 * quarters) * (math.pi / 180.0)
    square, sine, cosine = x * x, 0.0, 0.0
    for s, c in zip(reversed(_SINE), reversed(_COSINE), strict=True):
        sine = sine * square + s
        cosine = cosine * square + c
    sine *= x
    return ((sine, cosine), (cosine, -sine), (-sine, -cosine), (-cosine, sine))[quarters & 3]
