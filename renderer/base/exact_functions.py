"""Exponentials, logarithms and angles that are the same, to the bit, on every machine.

Libraries choose an algorithm by processor, and their last digits differ. The light of sun and sky enters pixels, so it
is computed from additions, multiplications, divisions and square roots alone, which IEEE 754 defines exactly.
Each function is within a few units in the last place.
"""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

Floats = npt.NDArray[np.float64]

LN2 = 0.6931471805599453
LN2_HIGH = float.fromhex("0x1.62e42fee00000p-1")  # 33 bits of ln 2, so that n times it is exact (Cody and Waite 1980)
LN2_LOW = float.fromhex("0x1.a39ef35793c76p-33")
DEGREE = math.pi / 180.0

EXPONENTIAL_TERMS = tuple(1.0 / math.factorial(k) for k in range(16))
SINE_TERMS = tuple((-1.0) ** k / math.factorial(2 * k + 1) for k in range(11))
COSINE_TERMS = tuple((-1.0) ** k / math.factorial(2 * k) for k in range(11))
ARCTANGENT_TERMS = tuple((-1.0) ** k / (2 * k + 1) for k in range(14))
LOGARITHM_TERMS = tuple(2.0 / (2 * k + 1) for k in range(14))


def polynomial(x: Floats, terms: tuple[float, ...]) -> Floats:
    """Sum of terms[k] x^k by Horner's rule."""
    total = np.zeros_like(x)
    for term in reversed(terms):
        total = total * x + term
    return total


def exponential(x: npt.ArrayLike) -> Floats:
    """e^x; 0 below -700, and x is held at 700."""
    value = np.clip(np.asarray(x, dtype=np.float64), -745.0, 700.0)
    n = np.rint(value / LN2)
    rest = (value - n * LN2_HIGH) - n * LN2_LOW
    return np.where(value < -700.0, 0.0, np.ldexp(polynomial(rest, EXPONENTIAL_TERMS), n.astype(np.int64)))


def logarithm(x: npt.ArrayLike) -> Floats:
    """Natural logarithm of x > 0."""
    mantissa, exponent = np.frexp(np.asarray(x, dtype=np.float64))
    low = mantissa < math.sqrt(0.5)
    mantissa = np.where(low, 2.0 * mantissa, mantissa)
    power = exponent - low
    z = (mantissa - 1.0) / (mantissa + 1.0)
    return np.asarray(z * polynomial(z * z, LOGARITHM_TERMS) + power * LN2_LOW + power * LN2_HIGH)


def power(base: npt.ArrayLike, exponent: float) -> Floats:
    """base^exponent for base > 0."""
    return exponential(exponent * logarithm(base))


def sine_cosine_deg(angle_deg: npt.ArrayLike) -> tuple[Floats, Floats]:
    """Sine and cosine of degrees, exact at multiples of 90."""
    angle = np.asarray(angle_deg, dtype=np.float64)
    quarters = np.rint(angle / 90.0)
    rest = (angle - 90.0 * quarters) * DEGREE
    sine = rest * polynomial(rest * rest, SINE_TERMS)
    cosine = polynomial(rest * rest, COSINE_TERMS)
    quarter = quarters.astype(np.int64) & 3
    odd = (quarter & 1) == 1
    first, second = np.where(odd, cosine, sine), np.where(odd, sine, cosine)
    return np.where(quarter >= 2, -first, first), np.where((quarter == 1) | (quarter == 2), -second, second)


def arccosine(cosine: npt.ArrayLike) -> Floats:
    """Angle [rad] of a cosine, held within -1 to 1: twice the arctangent of the half angle, halved three times more."""
    c = np.clip(np.asarray(cosine, dtype=np.float64), -1.0, 1.0)
    sine_half, cosine_half = np.sqrt(0.5 * (1.0 - c)), np.sqrt(0.5 * (1.0 + c))
    quarter = sine_half / (1.0 + cosine_half)  # tangent of a quarter of the angle, in [0, 1]
    eighth = quarter / (1.0 + np.sqrt(1.0 + quarter * quarter))
    sixteenth = eighth / (1.0 + np.sqrt(1.0 + eighth * eighth))
    return np.asarray(16.0 * sixteenth * polynomial(sixteenth * sixteenth, ARCTANGENT_TERMS))
