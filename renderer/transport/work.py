"""The arrays that a thread works in, as one argument."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from renderer.transport.layout import KINDS, N_LANE_REALS, N_REALS, N_SLOTS, N_TALLY, N_VERTEX, N_WHOLE

Floats = npt.NDArray[np.float64]


class Work(NamedTuple):
    """Work arrays of one thread.

    `sample` (2,): key and index of the sample points; `lanes` (4, N_LANE_REALS); `vertex` (N_VERTEX,); `reals`
    (N_SLOTS, N_REALS), `whole` (N_SLOTS, N_WHOLE) and `sets` (N_SLOTS, 2), a path or waiting branch a slot; `light`
    (kinds, 3) and `bins` (n_bins or 1,), what the sample has found; `tally` (N_TALLY,).
    """

    sample: npt.NDArray[np.uint64]
    lanes: Floats
    vertex: Floats
    reals: Floats
    whole: npt.NDArray[np.int64]
    sets: npt.NDArray[np.uint64]
    light: Floats
    bins: Floats
    tally: npt.NDArray[np.int64]


def new_work(n_bins: int) -> Work:
    """Work arrays; the tally starts from 0."""
    return Work(
        sample=np.zeros(2, dtype=np.uint64),
        lanes=np.zeros((4, N_LANE_REALS)),
        vertex=np.zeros(N_VERTEX),
        reals=np.zeros((N_SLOTS, N_REALS)),
        whole=np.zeros((N_SLOTS, N_WHOLE), dtype=np.int64),
        sets=np.zeros((N_SLOTS, 2), dtype=np.uint64),
        light=np.zeros((len(KINDS), 3)),
        bins=np.zeros(max(1, n_bins)),
        tally=np.zeros(N_TALLY, dtype=np.int64),
    )
