"""The difference of two scene-linear pictures of one size, pixel by pixel: in stops of light, and in CIEDE2000."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from renderer.base.errors import Fault, InputError
from renderer.colour.differences import ciede2000, cielab
from renderer.colour.spaces import rgb_to_xyz_matrix, white_xyz

Floats = npt.NDArray[np.float64]


@dataclass(frozen=True)
class Summary:
    """What a map of differences comes to: over the `count` pixels where it can be told. Largest by absolute value."""

    mean: float
    median: float
    percentile_95: float
    largest: float
    count: int


def stops_apart(reference: npt.ArrayLike, picture: npt.ArrayLike, space: str) -> Floats:
    """How many stops `picture` is brighter than `reference`, (rows, columns).

    Parameters
    ----------
    reference, picture : (rows, columns, 3)
        Scene-linear RGB in `space`, of one size and one exposure.
    space : str
        "acescg", "rec709", "rec2020" or "xyz".

    Returns
    -------
    (rows, columns) float64
        log2 of the ratio of luminances; not-a-number where either has none.
    """
    first, second = _luminance(reference, space), _luminance(picture, space)
    _check_sizes(first, second)
    with np.errstate(divide="ignore", invalid="ignore"):
        apart = np.log2(second / first)
    return np.where((first > 0.0) & (second > 0.0), apart, np.nan)


def colours_apart(reference: npt.ArrayLike, picture: npt.ArrayLike, space: str, white_luminance: float = 1.0) -> Floats:
    """CIEDE2000 between two pictures, (rows, columns).

    `white_luminance` is what counts as white in both, in the pictures' own units: colour differences hold for
    surfaces under one white. The arrays are as for `stops_apart`. Not-a-number where either pixel is no number.
    """
    if not white_luminance > 0.0:
        raise InputError(Fault(f"a white of {white_luminance:g} is no white", "", "a luminance above 0"))
    white = white_xyz(space)
    first, second = (_xyz(pixels, space) / white_luminance for pixels in (reference, picture))
    _check_sizes(first, second)
    finite = np.asarray(np.isfinite(first).all(axis=-1) & np.isfinite(second).all(axis=-1))
    first, second = (np.where(finite[..., None], part, white) for part in (first, second))
    apart = ciede2000(cielab(first, white), cielab(second, white))
    return np.where(finite, apart, np.nan)


def summary_of(apart: Floats) -> Summary:
    """The main figures of a map of differences; raises `InputError` where there is nothing to compare."""
    told = apart[np.isfinite(apart)]
    if not len(told):
        raise InputError(Fault("the pictures have no pixel that can be compared", "", "light in both"))
    size = np.abs(told)
    return Summary(
        mean=float(told.mean()),
        median=float(np.median(told)),
        percentile_95=float(np.percentile(size, 95.0)),
        largest=float(size.max()),
        count=len(told),
    )


def _xyz(pixels: npt.ArrayLike, space: str) -> Floats:
    given = np.asarray(pixels, dtype=np.float64)
    if given.ndim != 3 or given.shape[2] != 3:
        raise InputError(Fault("a picture has the wrong shape", "", f"(rows, columns, 3), not {given.shape}"))
    return np.asarray(given @ rgb_to_xyz_matrix(space).T, dtype=np.float64)


def _luminance(pixels: npt.ArrayLike, space: str) -> Floats:
    return _xyz(pixels, space)[..., 1]


def _check_sizes(first: Floats, second: Floats) -> None:
    if first.shape != second.shape:
        sizes = " and ".join(f"{part.shape[1]} x {part.shape[0]}" for part in (first, second))
        raise InputError(Fault(f"the pictures differ in size: {sizes} pixels", "", "two pictures of one size"))
