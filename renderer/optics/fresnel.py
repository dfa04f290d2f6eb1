"""Refraction, reflection and absorption at smooth interfaces: the Python door, in degrees, on arrays of any shape.

Signs, frames and the Mueller form are those stated at the head of `fresnel_kernels`. Scalars give scalars (0-d arrays).
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from renderer.base.errors import Fault, InputError

Floats = npt.NDArray[np.float64]
Complexes = npt.NDArray[np.complex128]


class Amplitudes(NamedTuple):
    """Complex amplitude ratios of reflection and transmission for s and p."""

    rs: Complexes
    rp: Complexes
    ts: Complexes
    tp: Complexes


def checked_indices(*indices: npt.ArrayLike) -> tuple[Floats, ...]:
    """The indices as arrays; InputError where one is not a positive, finite number."""
    arrays = tuple(np.asarray(index, dtype=np.float64) for index in indices)
    for array in arrays:
        if not np.all(np.isfinite(array) & (array > 0.0)):
            raise InputError(Fault("a refractive index is not positive and finite", expected="a real number above 0"))
    return arrays


def checked_angle_deg(angle_deg: npt.ArrayLike) -> Floats:
    """The angles of incidence as an array; InputError outside 0 to 90 degrees."""
    angle = np.asarray(angle_deg, dtype=np.float64)
    if not np.all((angle >= 0.0) & (angle <= 90.0)):
        raise InputError(Fault("an angle of incidence lies outside its range", expected="0 to 90 degrees"))
    return angle


def snell_deg(angle_deg: npt.ArrayLike, n1: npt.ArrayLike, n2: npt.ArrayLike) -> Floats:
    """Angle of refraction [deg] of light that comes from index n1; not-a-number where it is totally reflected."""
    first, second = checked_indices(n1, n2)
    sine = np.asarray(first / second * np.sin(np.radians(checked_angle_deg(angle_deg))))
    sine = np.where((sine > 1.0) & (sine < 1.0 + 1e-15), 1.0, sine)  # rounding alone never reflects totally
    return np.degrees(np.arcsin(np.where(sine <= 1.0, sine, np.nan)))


def critical_angle_deg(n1: npt.ArrayLike, n2: npt.ArrayLike = 1.0) -> Floats:
    """Least angle of total reflection [deg] inside n1 against n2; not-a-number where n1 < n2, which has none."""
    first, second = checked_indices(n1, n2)
    ratio = np.asarray(second / first)
    return np.degrees(np.arcsin(np.where(ratio <= 1.0, ratio, np.nan)))


def brewster_angle_deg(n1: npt.ArrayLike, n2: npt.ArrayLike) -> Floats:
    """Angle of incidence [deg] in n1 at which p is not reflected (Brewster 1815): arctan(n2 / n1)."""
    first, second = checked_indices(n1, n2)
    return np.asarray(np.degrees(np.arctan(second / first)))


def amplitudes(angle_deg: npt.ArrayLike, n1: npt.ArrayLike, n2: npt.ArrayLike) -> Amplitudes:
    """Fresnel's amplitude ratios at `angle_deg` in n1, complex where the reflection is total.

    Unlike the kernel, ts and tp are those of the evanescent field there.
    """
    first, second = checked_indices(n1, n2)
    angle = np.radians(checked_angle_deg(angle_deg))
    cos_i = np.where(angle == np.pi / 2, 0.0, np.cos(angle)).astype(np.complex128)
    sine = first / second * np.sin(angle)
    cos_t = np.sqrt((1.0 - sine * sine).astype(np.complex128))  # the root of positive imaginary part: it decays
    cos_t = np.where(first == second, cos_i, cos_t)
    sum_s, sum_p = first * cos_i + second * cos_t, second * cos_i + first * cos_t
    same = (first == second) & (cos_i == 0.0)
    sum_s, sum_p = np.where(same, 1.0, sum_s), np.where(same, 1.0, sum_p)
    forward = 2.0 * first * cos_i
    return Amplitudes(
        rs=(first * cos_i - second * cos_t) / sum_s,
        rp=(second * cos_i - first * cos_t) / sum_p,
        ts=np.where(same, 1.0, forward / sum_s),
        tp=np.where(same, 1.0, forward / sum_p),
    )


def reflectances(angle_deg: npt.ArrayLike, n1: npt.ArrayLike, n2: npt.ArrayLike) -> tuple[Floats, Floats]:
    """Reflected share of power for s and for p, in [0, 1] each."""
    found = amplitudes(angle_deg, n1, n2)
    return np.abs(found.rs) ** 2, np.abs(found.rp) ** 2


def reflectance(angle_deg: npt.ArrayLike, n1: npt.ArrayLike, n2: npt.ArrayLike) -> Floats:
    """Reflected share of unpolarised power, in [0, 1]."""
    s, p = reflectances(angle_deg, n1, n2)
    return 0.5 * (s + p)


def beer_lambert(absorption_per_m: npt.ArrayLike, distance_m: npt.ArrayLike) -> Floats:
    """Transmitted share of light, exp(-absorption x distance); both must be >= 0 (Bouguer 1729, Beer 1852)."""
    absorption = np.asarray(absorption_per_m, dtype=np.float64)
    distance = np.asarray(distance_m, dtype=np.float64)
    if not (np.all(absorption >= 0.0) and np.all(distance >= 0.0)):
        raise InputError(Fault("absorption or distance is negative", expected="numbers of 0 or more"))
    return np.asarray(np.exp(-absorption * distance))
