"""How far apart two colours or two luminances are: CIELAB, CIEDE2000, stops."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from renderer.colour.tables import Floats

# CIE 015:2018, section 8.2.1
LINEAR_BELOW = (6.0 / 29.0) ** 3
LINEAR_SLOPE = 841.0 / 108.0
LINEAR_OFFSET = 4.0 / 29.0


def cielab(xyz: Floats, white: Floats) -> Floats:
    """CIE 1976 L*, a*, b* (..., 3) of XYZ (..., 3) under a white (3,). CIE 015:2018; negative values go on the line."""
    t = np.asarray(xyz, dtype=np.float64) / np.asarray(white)
    f = np.where(t > LINEAR_BELOW, np.cbrt(t), LINEAR_SLOPE * t + LINEAR_OFFSET)
    fx, fy, fz = f[..., 0], f[..., 1], f[..., 2]
    return np.stack([116.0 * fy - 16.0, 500.0 * (fx - fy), 200.0 * (fy - fz)], axis=-1)


def ciede2000(lab1: Floats, lab2: Floats) -> Floats:
    """CIEDE2000 colour difference (...,) of two CIELAB colours (..., 3), k_L = k_C = k_H = 1. ISO/CIE 11664-6:2014.

    G. Sharma, W. Wu, E. N. Dalal, "The CIEDE2000 Color-Difference Formula: Implementation Notes, Supplementary Test
    Data, and Mathematical Observations", Color Research and Application 30(1), 2005, equations 2-22.
    """
    lab1, lab2 = np.asarray(lab1, dtype=np.float64), np.asarray(lab2, dtype=np.float64)
    mean_chroma = 0.5 * (np.hypot(lab1[..., 1], lab1[..., 2]) + np.hypot(lab2[..., 1], lab2[..., 2]))
    g = 0.5 * (1.0 - np.sqrt(mean_chroma**7 / (mean_chroma**7 + 25.0**7)))
    chroma1, hue1 = _chroma_and_hue(lab1, g)
    chroma2, hue2 = _chroma_and_hue(lab2, g)
    coloured = chroma1 * chroma2 > 0.0
    turn = np.where(coloured, _wrapped(hue2 - hue1), 0.0)
    lightness_step, chroma_step = lab2[..., 0] - lab1[..., 0], chroma2 - chroma1
    hue_step = 2.0 * np.sqrt(chroma1 * chroma2) * np.sin(np.radians(0.5 * turn))

    lightness, chroma = 0.5 * (lab1[..., 0] + lab2[..., 0]), 0.5 * (chroma1 + chroma2)
    hue = _mean_hue(hue1, hue2, coloured)
    s_l = 1.0 + 0.015 * (lightness - 50.0) ** 2 / np.sqrt(20.0 + (lightness - 50.0) ** 2)
    s_c = 1.0 + 0.045 * chroma
    s_h = 1.0 + 0.015 * chroma * _hue_weight(hue)
    rotation = -np.sin(np.radians(60.0 * np.exp(-(((hue - 275.0) / 25.0) ** 2)))) * 2.0
    rotation = rotation * np.sqrt(chroma**7 / (chroma**7 + 25.0**7))
    l_term, c_term, h_term = lightness_step / s_l, chroma_step / s_c, hue_step / s_h
    return np.asarray(np.sqrt(np.maximum(l_term**2 + c_term**2 + h_term**2 + rotation * c_term * h_term, 0.0)))


def stops(brighter: Floats, darker: Floats) -> Floats:
    """How many doublings lead from one value to another: log2(brighter / darker); both above 0."""
    return np.asarray(np.log2(np.asarray(brighter, dtype=np.float64) / np.asarray(darker, dtype=np.float64)))


def _chroma_and_hue(lab: Floats, g: Floats) -> tuple[Floats, Floats]:
    """C' and h' [deg, 0 to 360] of equations 5-7."""
    a = (1.0 + g) * lab[..., 1]
    return np.hypot(a, lab[..., 2]), np.degrees(np.arctan2(lab[..., 2], a)) % 360.0


def _wrapped(turn_deg: Floats) -> Floats:
    """An angle from -360 to 360 degrees as one from -180 to 180: equation 10, both of whose ends stay as they are."""
    return np.where(turn_deg > 180.0, turn_deg - 360.0, np.where(turn_deg < -180.0, turn_deg + 360.0, turn_deg))


def _mean_hue(hue1: Floats, hue2: Floats, coloured: npt.NDArray[np.bool_]) -> Floats:
    """The hue between two hues on the shorter way, equation 14; their sum where one of them is grey."""
    total = hue1 + hue2
    far = np.abs(hue1 - hue2) > 180.0
    mean = np.where(far, np.where(total < 360.0, 0.5 * (total + 360.0), 0.5 * (total - 360.0)), 0.5 * total)
    return np.where(coloured, mean, total)


def _hue_weight(hue: Floats) -> Floats:
    """T of equation 15."""
    h = np.radians(hue)
    return np.asarray(
        1.0
        - 0.17 * np.cos(h - np.radians(30.0))
        + 0.24 * np.cos(2.0 * h)
        + 0.32 * np.cos(3.0 * h + np.radians(6.0))
        - 0.20 * np.cos(4.0 * h - np.radians(63.0))
    )
