"""Points round a circle, the same to the bit on every machine, since shapes enter pixels."""

from __future__ import annotations

import numpy as np

from renderer.base.exact_functions import sine_cosine_deg
from renderer.geometry.positions import Floats


def circle(n: int) -> tuple[Floats, Floats]:
    """Cosine and sine of `n` even steps round the circle, (n,) each, from angle 0."""
    sine, cosine = sine_cosine_deg(np.arange(n) * 360.0 / n)
    return cosine, sine


def arc(radius_m: float, from_deg: float, to_deg: float, steps: int) -> tuple[Floats, Floats]:
    """(steps + 1, 2) points (radius, y) on a circle about the origin, and outward normals; angles up from level."""
    sine, cosine = sine_cosine_deg(from_deg + (to_deg - from_deg) * np.arange(steps + 1) / steps)
    normals = np.column_stack([cosine, sine])
    return radius_m * normals, normals
