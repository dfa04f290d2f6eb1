"""One way to make an array for a kernel, so that no kernel is compiled twice for a stray type."""

from __future__ import annotations

from typing import Any

import numpy as np
import numpy.typing as npt


def pack(
    values: npt.ArrayLike, dtype: npt.DTypeLike = np.float64, shape: tuple[int, ...] | None = None
) -> npt.NDArray[Any]:
    """`values` as a read-only, C-ordered array of `dtype`, in `shape` where one is given.

    A view is copied, so that nobody can change a scene under a running kernel.
    """
    array = np.array(values, dtype=dtype, order="C", copy=True)
    if shape is not None:
        array = array.reshape(shape)
    array.flags.writeable = False
    return array
