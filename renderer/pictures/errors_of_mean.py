"""How sure a picture is of itself: the standard error of each pixel, from its eight replicates.

A. B. Owen, "Scrambled Net Variance for Integrals of Smooth Functions", Annals of Statistics 25(4), 1997: independently
scrambled replicates are the honest way to an error of quasi-random points, whose samples are not independent.
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from renderer.base.constants import N_REPLICATES

Floats = npt.NDArray[np.float64]

# Quantile of Student's t at 0.8413447 (one standard deviation of the normal distribution) for 1 to 7 degrees of
# freedom: the half-width that holds the truth 68.27 % of the time is so many sample standard errors. For one degree
# it is tan(pi (0.8413447 - 1/2)); tests compare all with an outside library.
STUDENT_T = (1.8373372, 1.3212774, 1.1968814, 1.1416266, 1.1105066, 1.0905691, 1.0767134)

DARK_SHARE = 0.01  # of the frame's mean luminance: pixels darker than that count as if they were so bright
COUNTED_SHARE = 0.95  # of the pixels are within the error that a frame states


def standard_error(replicate_y: npt.NDArray[np.int64], rounds_by_replicate: npt.NDArray[np.int64]) -> Floats | None:
    """Half-width (rows, columns), in quanta, that holds a pixel's mean 68.27 % of the time; None for one replicate.

    Parameters
    ----------
    replicate_y : (8, rows, columns), sums of Y in quanta.
    rounds_by_replicate : (8,), how many rounds each sum is of; replicates without any are left out.

    Notes
    -----
    With n_r rounds in replicate r, mean m_r there and m in all N of them, the squared standard error is
    sum n_r (m_r - m)^2 / ((R - 1) N): that of the mean of R means where all n_r are equal, and unbiased where they are
    not as long as variance falls as 1/n_r. Student's t with R - 1 degrees of freedom widens it.
    """
    used = [r for r in range(N_REPLICATES) if rounds_by_replicate[r] > 0]
    if len(used) < 2:
        return None
    n_rounds = int(sum(int(rounds_by_replicate[r]) for r in used))
    total = np.zeros(replicate_y.shape[1:], dtype=np.int64)
    for r in used:
        total += replicate_y[r]
    mean = total / n_rounds
    squares = np.zeros(total.shape)
    for r in used:
        n = int(rounds_by_replicate[r])
        squares += n * (replicate_y[r] / n - mean) ** 2
    return np.asarray(STUDENT_T[len(used) - 2] * np.sqrt(squares / ((len(used) - 1) * n_rounds)))


def frame_error(error: Floats, mean_y: Floats) -> float:
    """The relative standard error that 19 of 20 pixels of a frame are within; what `--standard-error` asks for. [1]

    Each pixel's error is over its own luminance, or over a hundredth of the frame's mean luminance where it is darker.
    A black frame has 0. Both arguments (rows, columns), in one unit.
    """
    floor = DARK_SHARE * float(np.abs(mean_y).mean())
    if floor == 0.0:
        return 0.0
    relative = (error / np.maximum(np.abs(mean_y), floor)).ravel()
    k = min(int(COUNTED_SHARE * relative.size), relative.size - 1)
    return float(np.partition(relative, k)[k])
