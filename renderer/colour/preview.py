"""From linear picture values to what a screen shows: tone curve, gamut, sRGB encoding.

1. Tone, on luminance alone, so that colours keep their proportions. Up to mid grey the curve is the straight line, so
   that what is shown there is what was rendered; above it bends into the shoulder of E. Reinhard, M. Stark, P. Shirley,
   J. Ferwerda, "Photographic Tone Reproduction for Digital Images", Proc. SIGGRAPH 2002, equation 4, joined with the
   same slope, and reaches 1 at 16 times white.
2. Gamut. A colour that the screen lacks moves toward grey at the same lightness and hue of Oklab (B. Ottosson, "A
   perceptual color space for image processing", 2020) until it is just inside.
3. sRGB encoding, IEC 61966-2-1:1999, to the nearest of 256 steps.
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from renderer.colour.spaces import applied, converted, inverse, rgb_to_xyz_matrix
from renderer.colour.tables import Floats

KNEE = 0.18  # mid grey: below it the tone curve is the straight line
BRIGHTEST = 16.0  # the linear value that becomes 1
HALVINGS = 12  # of the search along the line toward grey: to 1/4096 of it, below a step of 8 bits

# B. Ottosson 2020: linear sRGB to cone responses, and their cube roots to L, a, b
TO_CONES = np.array(
    [
        [0.4122214708, 0.5363325363, 0.0514459929],
        [0.2119034982, 0.6806995451, 0.1073969566],
        [0.0883024619, 0.2817188376, 0.6299787005],
    ]
)
TO_OKLAB = np.array(
    [
        [0.2104542553, 0.7936177850, -0.0040720468],
        [1.9779984951, -2.4285922050, 0.4505937099],
        [0.0259040371, 0.7827717662, -0.8086757660],
    ]
)


def preview(rgb: Floats, space: str) -> npt.NDArray[np.uint8]:
    """8-bit sRGB (..., 3) of exposed linear values (..., 3) in a space: rec709, rec2020, acescg or xyz."""
    linear = converted(rgb, space, "rec709")
    return to_8_bit(srgb_encoded(into_gamut(toned(linear))))


def tone_curve(luminance: Floats) -> Floats:
    """Shown luminance of a linear one: the same up to 0.18, bent above, 1 from 16 on; below 0 it is 0."""
    x = np.maximum(np.asarray(luminance, dtype=np.float64), 0.0)
    t = np.maximum(x - KNEE, 0.0) / (1.0 - KNEE)
    top = (BRIGHTEST - KNEE) / (1.0 - KNEE)
    shoulder = KNEE + (1.0 - KNEE) * t * (1.0 + t / top**2) / (1.0 + t)
    return np.where(x <= KNEE, x, np.minimum(shoulder, 1.0))


def toned(rgb: Floats) -> Floats:
    """Linear Rec.709 (..., 3) with its luminance through the tone curve; no luminance, no light."""
    values = np.nan_to_num(np.asarray(rgb, dtype=np.float64), nan=0.0, posinf=1e30, neginf=0.0)
    r, g, b = rgb_to_xyz_matrix("rec709")[1]
    luminance = r * values[..., 0] + g * values[..., 1] + b * values[..., 2]
    lit = luminance > 0.0
    return np.asarray(values * np.where(lit, tone_curve(luminance) / np.where(lit, luminance, 1.0), 0.0)[..., None])


def into_gamut(rgb: Floats) -> Floats:
    """Linear Rec.709 (..., 3) within 0 to 1: what lies outside loses chroma at the same Oklab lightness and hue."""
    values = np.asarray(rgb, dtype=np.float64)
    flat = values.reshape(-1, 3).copy()
    outside = ((flat < 0.0) | (flat > 1.0)).any(axis=1)
    if outside.any():
        flat[outside] = greyed(linear_to_oklab(flat[outside]))
    return np.clip(flat, 0.0, 1.0).reshape(values.shape)


def greyed(oklab: Floats) -> Floats:
    """Linear Rec.709 (n, 3) of Oklab colours (n, 3) with as much of their chroma as the gamut has."""
    lightness = np.clip(oklab[:, :1], 0.0, 1.0)
    low, high = np.zeros((len(oklab), 1)), np.ones((len(oklab), 1))
    for _ in range(HALVINGS):
        middle = 0.5 * (low + high)
        tried = oklab_to_linear(np.concatenate([lightness, middle * oklab[:, 1:]], axis=1))
        fits = ((tried >= 0.0) & (tried <= 1.0)).all(axis=1, keepdims=True)
        low, high = np.where(fits, middle, low), np.where(fits, high, middle)
    return oklab_to_linear(np.concatenate([lightness, low * oklab[:, 1:]], axis=1))


def linear_to_oklab(rgb: Floats) -> Floats:
    """Oklab (..., 3) of linear Rec.709 (..., 3)."""
    return applied(TO_OKLAB, np.cbrt(applied(TO_CONES, rgb)))


def oklab_to_linear(oklab: Floats) -> Floats:
    """Linear Rec.709 (..., 3) of Oklab (..., 3)."""
    roots = applied(inverse(TO_OKLAB), oklab)
    return applied(inverse(TO_CONES), roots * roots * roots)


def srgb_encoded(linear: Floats) -> Floats:
    """Display values of linear ones, both 0 to 1. IEC 61966-2-1:1999."""
    x = np.asarray(linear, dtype=np.float64)
    return np.where(x <= 0.0031308, 12.92 * x, 1.055 * np.maximum(x, 0.0031308) ** (1.0 / 2.4) - 0.055)


def srgb_decoded(encoded: Floats) -> Floats:
    """Linear values of display values, both 0 to 1. IEC 61966-2-1:1999."""
    v = np.asarray(encoded, dtype=np.float64)
    return np.where(v <= 0.04045, v / 12.92, ((np.maximum(v, 0.04045) + 0.055) / 1.055) ** 2.4)


def to_8_bit(display: Floats) -> npt.NDArray[np.uint8]:
    """Display values, 0 to 1, as 0 to 255, rounded to the nearest."""
    return np.floor(np.clip(display, 0.0, 1.0) * 255.0 + 0.5).astype(np.uint8)
