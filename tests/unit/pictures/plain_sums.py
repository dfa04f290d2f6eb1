"""Sums and a camera to make pictures of, without light."""

from __future__ import annotations

from typing import Any

import numpy as np

from renderer.pictures.layers import Accumulated
from renderer.pictures.sums import empty_sums
from renderer.shot.model import Camera

ROUNDS = 24  # three of each replicate


def accumulated(rows: int = 9, columns: int = 13) -> Accumulated:
    """24 rounds of noise round 100 cd/m2, the four kinds of light adding up to it."""
    draw = np.random.default_rng(9)
    quantum = 2.0**-39
    sums = empty_sums(rows, columns, 4, 2)
    for number in range(ROUNDS):
        kinds = np.rint(draw.uniform(5.0, 45.0, (rows, columns, 4, 3)) / quantum).astype(np.int64)
        sums.kinds[...] += kinds
        sums.xyz[...] += kinds.sum(axis=2)
        sums.replicate_y[number & 7] += kinds.sum(axis=2)[..., 1]
    sums.bins[...] = sums.xyz[..., :2].transpose(2, 0, 1)
    return Accumulated(sums, quantum, np.full(8, ROUNDS // 8))


def camera(**changes: Any) -> Camera:
    """A pinhole on 16 x 12 pixels."""
    values: dict[str, Any] = {
        "matrices": np.eye(3, 4)[None], "focal_length_mm": 28.0, "sensor_mm": (36.0, 20.25), "pixels": (16, 12),
        "pixel_aspect": 1.0, "window": (0, 0, 16, 12), "distortion": (0.0,) * 5, "f_number": 0.0,
        "focus_distance_m": 1.0, "shutter_deg": 180.0, "polariser_deg": None, "exposure_stops": 0.0, "iso": None,
        "exposure_auto": False, "white_balance_k": 6504.0,
    }  # fmt: skip
    return Camera(**{**values, **changes})
