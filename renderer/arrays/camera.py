"""The camera, as kernels see it."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt


class Camera(NamedTuple):
    """matrices (n_steps, 3, 4): camera to world, rigid, evenly spaced over the shutter and interpolated linearly.

    The camera looks along -z with +y up. `window` (4,) int64: first column, first row, and the columns and rows that
    are rendered (the data window); a pixel's centre is at column + 0.5, row + 0.5 from the top left of the full frame.
    `lens` (10,): focal length, sensor width, sensor height (all in mm), full frame's columns, rows, lens radius [m]
    (0 is a pinhole), distance in focus [m], polariser angle [rad, from the camera's +x towards +y] or -1e9 for none,
    filter radius [pixels], 1 where the view has distortion else 0.
    `distortion` (5,): k1, k2, k3, p1, p2 (Brown 1966), on image coordinates in focal lengths (x right, y up).
    """

    matrices: npt.NDArray[np.float64]
    window: npt.NDArray[np.int64]
    lens: npt.NDArray[np.float64]
    distortion: npt.NDArray[np.float64]
