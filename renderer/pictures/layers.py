"""The layers of a picture, and what their channels are called in an OpenEXR file.

`R G B` is the picture and `Z` its depth, the format's standard names; every other layer is `layer.channel`. Light by
kind has the picture's own exposure and space, so that the kinds add up to the picture.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import numpy.typing as npt

from renderer.pictures.developing import Development, developed
from renderer.pictures.errors_of_mean import standard_error
from renderer.pictures.sums import Sums

Floats = npt.NDArray[np.float64]
Channels = dict[str, npt.NDArray[Any]]

NOTHING_AT_M = 1e10  # depth where nothing is hit: far, but finite, so that a blur over it stays finite
HALF_MOST = 65_504.0  # the largest value that half floats hold

# name that guides come under: (channels, type, unit or meaning)
GUIDES: dict[str, tuple[tuple[str, ...], type, str]] = {
    "depth": (("Z",), np.float32, "m along the line of sight"),
    "normal": (("normal.X", "normal.Y", "normal.Z"), np.float32, "unit vector in the shot's axes"),
    "object_id": (("object_id.id",), np.uint32, "number in the shot from 1; 0 is nothing"),
    "material_id": (("material_id.id",), np.uint32, "number of the material from 1; 0 is nothing"),
    "surfaces_crossed": (("surfaces_crossed.count",), np.uint32, "smooth interfaces to the first surface that is none"),
    "antisolar_angle": (("antisolar_angle.deg",), np.float32, "degrees from the antisolar point"),
}


@dataclass(frozen=True)
class Accumulated:
    """Sums of whole rounds: `quantum` [cd/m2] is what a 1 in them stands for, `rounds_by_replicate` (8,) how many."""

    sums: Sums
    quantum: float
    rounds_by_replicate: npt.NDArray[np.int64]

    @property
    def n_rounds(self) -> int:
        """How many rounds were added."""
        return int(self.rounds_by_replicate.sum())

    def mean(self, total: npt.NDArray[np.int64]) -> Floats:
        """A sum as its mean over rounds, in its own unit."""
        return np.asarray(total * (self.quantum / self.n_rounds))

    def luminance(self) -> Floats:
        """Mean luminance (rows, columns). [cd/m2]"""
        return self.mean(self.sums.xyz[..., 1])


def colour_channels(done: Accumulated, how: Development, half: bool) -> Channels:
    """R, G and B; as half floats where asked for, cut at the largest that these hold."""
    rgb = developed(done.mean(done.sums.xyz), how)
    return _three("", rgb, half)


def kind_channels(done: Accumulated, how: Development, kinds: Sequence[str], half: bool) -> Channels:
    """Light by kind, ``light_KIND.R`` and so on."""
    channels: Channels = {}
    for k, kind in enumerate(kinds):
        channels |= _three(f"light_{kind}.", developed(done.mean(done.sums.kinds[:, :, k]), how), half)
    return channels


def error_channels(done: Accumulated, how: Development) -> Channels:
    """``standard_error.Y``: of the picture's luminance, at its exposure. Nothing where there is one replicate alone."""
    error = standard_error(done.sums.replicate_y, done.rounds_by_replicate)
    if error is None:
        return {}
    return {"standard_error.Y": (error * (done.quantum * how.exposure)).astype(np.float32)}


def count_channels(done: Accumulated) -> Channels:
    """``samples.count``: how many samples each pixel has, one a round."""
    return {"samples.count": np.full(done.sums.size, done.n_rounds, dtype=np.uint32)}


def spectral_channels(done: Accumulated, wavelengths_nm: Sequence[float]) -> Channels:
    """``S0.589,3nm`` and so on: spectral radiance at the shot's own wavelengths. [W m^-2 sr^-1 nm^-1]

    A. Fichet, R. Pacanowski, A. Wilkie, "An OpenEXR Layout for Spectral Images", JCGT 10(3), 2021: S0 is the first
    element of the Stokes vector, and the wavelength has a comma for its decimal mark, since a point parts layers.
    """
    means = done.mean(done.sums.bins)
    return {
        f"S0.{f'{nm:.10g}'.replace('.', ',')}nm": mean.astype(np.float32)
        for nm, mean in zip(wavelengths_nm, means, strict=True)
    }


def guide_channels(guides: Mapping[str, npt.NDArray[Any]]) -> Channels:
    """Depth, normals and the like, of pixel centres. Ids come from 0 with -1 for nothing, and leave from 1 with 0."""
    channels: Channels = {}
    for name, values in guides.items():
        names, kind, _ = GUIDES[name]
        array = np.asarray(values)
        if name == "depth":
            array = np.where(np.isfinite(array), array, NOTHING_AT_M)
        if name.endswith("_id"):
            array = array.astype(np.int64) + 1
        parts = np.moveaxis(array, -1, 0) if len(names) > 1 else array[None]
        channels |= {channel: part.astype(kind) for channel, part in zip(names, parts, strict=True)}
    return channels


def _three(prefix: str, rgb: Floats, half: bool) -> Channels:
    """R, G and B under a prefix."""
    values = np.clip(rgb, -HALF_MOST, HALF_MOST).astype(np.float16) if half else rgb.astype(np.float32)
    return {f"{prefix}{letter}": np.ascontiguousarray(values[..., k]) for k, letter in enumerate("RGB")}
