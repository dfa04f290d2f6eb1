"""Scattering by one sphere, by the full series."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from renderer.base.errors import Fault, InputError
from renderer.optics.mie_kernels import all_efficiencies, amplitude_blocks

LARGEST = 5e4  # size parameter to which the series is checked


@dataclass(frozen=True)
class SphereEfficiencies:
    """Cross-sections over pi r^2; `backscatter` is 4 pi times that per steradian straight back; mean cosine."""

    extinction: float
    scattering: float
    backscatter: float
    asymmetry: float


def efficiencies(size_parameter: float, index: complex) -> SphereEfficiencies:
    """Efficiencies of a sphere: 2 pi r / wavelength, and its index relative to what is round it (imaginary part >= 0
    absorbs). InputError outside 1e-3 to 50,000, and for gain.
    """
    checked(size_parameter, index)
    found = np.empty((1, 4))
    all_efficiencies(np.array([size_parameter]), complex(index), found)
    extinction, scattering, forward, back = found[0].tolist()
    return SphereEfficiencies(extinction, scattering, back, forward / scattering)


def amplitudes(
    size_parameter: float, index: complex, cosines: npt.NDArray[np.float64]
) -> tuple[npt.NDArray[np.complex128], npt.NDArray[np.complex128]]:
    """S1 and S2 (n,) at cosines (n,) of the scattering angle; as `efficiencies` otherwise."""
    checked(size_parameter, index)
    s1, s2 = (np.empty(len(cosines), dtype=np.complex128) for _ in range(2))
    amplitude_blocks(float(size_parameter), complex(index), np.ascontiguousarray(cosines, dtype=np.float64), s1, s2)
    return s1, s2


def checked(size_parameter: float, index: complex) -> None:
    """InputError for what the series is not made for."""
    if not 1e-3 <= size_parameter <= LARGEST:
        raise InputError(
            Fault(f"a size parameter of {size_parameter:g} is outside its range", expected="0.001 to 50000")
        )
    if not (complex(index).real > 0.0 and complex(index).imag >= 0.0):
        raise InputError(Fault(f"an index of {index} is none of a sphere", expected="a positive one, without gain"))
