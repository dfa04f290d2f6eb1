"""A smooth reflectance from three numbers, for kernels.

W. Jakob and J. Hanika, "A Low-Dimensional Function Space for Efficient Spectral Upsampling", Computer Graphics Forum
38(2), 2019, doi:10.1111/cgf.13626: a sigmoid of a quadratic in wavelength. It stays inside (0, 1) whatever the numbers,
and its limits are the box-shaped spectra of the most saturated colours that a surface can have.

The quadratic is written in x = (wavelength - 580) / 200, which runs from -1 to 1 over 380-780 nm, so that the three
numbers are of like size and survive being stored as float32.
"""

from __future__ import annotations

import math

from renderer.base.jit import kernel


@kernel
def sigmoid_reflectance(c0, c1, c2, wavelength_nm):
    """Reflectance in [0, 1] at a wavelength: 1/2 + q / (2 sqrt(1 + q^2)), q = (c0 x + c1) x + c2."""
    x = (wavelength_nm - 580.0) * 0.005
    q = (c0 * x + c1) * x + c2
    return 0.5 + 0.5 * q / math.sqrt(1.0 + q * q)
