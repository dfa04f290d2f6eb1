"""Works out renderer/optics/data/oxygen_a_band.csv again: ``python tools/oxygen_band.py [--out FILE]``.

Oxygen's A band, line by line, from the constants of the molecule, averaged over each nanometre, and stated as the
coefficient of Bird and Riordan's band model that lets as much through at an air mass of 2 (and within 2 % of the light
taken at any other). Straight lines between their own two points in this band take a fifth too little from it, and take
light between it and 780 nm, where the air is clear.

Sources (numbers from memory): term values of the ground state after R. Schlapp, Phys. Rev. 51, 342 (1937), and of both
states' constants G. Rouille et al., J. Mol. Spectrosc. 154, 372 (1992), and H. D. Babcock and L. Herzberg, Astrophys.
J. 108, 167 (1948); strength of the band and widths of lines: HITRAN. Lines are Lorentzian at half the pressure of the
ground, which is the mean over a column (Curtis 1952, Godson 1953), at 260 K, a mean of the column too.
"""

from __future__ import annotations

import argparse
from pathlib import Path

import numpy as np
import numpy.typing as npt

Floats = npt.NDArray[np.float64]

GROUND = (1.4376766, 4.842e-6, 1.9847511, -0.00842536)  # B, D, and of the spin lambda, mu [1/cm]
UPPER = (1.3912495, 5.369e-6, 13122.0057)  # B, D, origin of the band [1/cm]
BAND_STRENGTH = 2.28e-22  # [cm] a molecule
COLUMN = 0.20946 * 2.148e25  # molecules of oxygen over a square centimetre at 1013.25 hPa
HALF_WIDTH, HALF_WIDTH_FALL = 0.058, 0.0006  # [1/cm] at 1013.25 hPa and 296 K, and how much less a step of N
KELVIN, SECOND_RADIATION_CONSTANT = 260.0, 1.4387769  # [K], [cm K]
INDEX_OF_AIR = 1.000275
AIR_MASS = 2.0
WAVELENGTHS_NM = np.arange(757.0, 781.0)
HEAD = """\
# Oxygen's A band as the mixed-gas coefficient of Bird and Riordan's band model, means over a nanometre
# Source: worked out by tools/oxygen_band.py from the constants of the molecule; sources there
# Licence: own work
# Units: wavelength_nm; mixed km^-1 (as gas_bands.csv)
# Range: 757-780 nm
wavelength_nm,mixed
"""


def ground_levels(n: int) -> tuple[tuple[int, float], ...]:
    """J and term value [1/cm] of the three levels of a rotation N in the ground state."""
    b, d, spin, mu = GROUND
    turning = b * n * (n + 1) - d * (n * (n + 1)) ** 2
    wide = np.sqrt((2 * n + 3) ** 2 * b * b + spin * spin - 2 * spin * b)
    narrow = np.sqrt((2 * n - 1) ** 2 * b * b + spin * spin - 2 * spin * b)
    first = turning + (2 * n + 3) * b - spin - wide + mu * (n + 1)
    third = turning - (2 * n - 1) * b - spin + narrow - mu * n
    return (n + 1, float(first)), (n, turning), (n - 1, float(third))


def lines() -> Floats:
    """Wave number [1/cm], share of the band's strength, half width [1/cm]: (n, 3). Strengths by Hund's case b."""
    b, d, origin = UPPER
    found = []
    for n in range(1, 40, 2):
        for j, level in ground_levels(n):
            chance = np.exp(-SECOND_RADIATION_CONSTANT * level / KELVIN)
            width = (HALF_WIDTH - HALF_WIDTH_FALL * min(n, 30)) * 0.5 * (296.0 / KELVIN) ** 0.7
            strengths = {(n + 1, n + 1): 0.5 * (n + 1), (n + 1, n): 0.5 * (n + 2)}
            strengths |= {(n - 1, n - 1): 0.5 * n, (n - 1, n): 0.5 * (n - 1)}
            for (upper, from_j), strength in strengths.items():
                if from_j == j and strength > 0.0:
                    turning = upper * (upper + 1)
                    found.append((origin + b * turning - d * turning**2 - level, strength * chance, width))
    table = np.array(found)
    table[:, 1] *= BAND_STRENGTH / table[:, 1].sum()
    return table


def transmittance(air_mass: float) -> Floats:
    """Means over the nanometre round each of WAVELENGTHS_NM."""
    steps = (np.arange(200) + 0.5) / 200 - 0.5
    number = 1e7 / ((WAVELENGTHS_NM[:, None] + steps) * INDEX_OF_AIR)
    absorbing = np.zeros_like(number)
    for place, strength, width in lines():
        absorbing += strength * width / np.pi / ((number - place) ** 2 + width * width)
    return np.asarray(np.exp(-absorbing * COLUMN * air_mass).mean(axis=1))


def band_model(coefficient: Floats, air_mass: float) -> Floats:
    """Transmittance of mixed gases by R. Bird and C. Riordan, J. Clim. Appl. Meteorol. 25, 87 (1986)."""
    path = coefficient * air_mass
    return np.asarray(np.exp(-1.41 * path / (1.0 + 118.93 * path) ** 0.45))


def coefficients() -> Floats:
    """The band model's coefficient at each wavelength, by bisection."""
    wanted = transmittance(AIR_MASS)
    low, high = np.zeros_like(wanted), np.full_like(wanted, 1e4)
    for _ in range(80):
        middle = 0.5 * (low + high)
        passes = band_model(middle, AIR_MASS) > wanted
        low, high = np.where(passes, middle, low), np.where(passes, high, middle)
    return low


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    shipped = Path(__file__).resolve().parents[1] / "renderer" / "optics" / "data" / "oxygen_a_band.csv"
    parser.add_argument("--out", type=Path, default=shipped)
    rows = [f"{at:.0f},{value:.5g}\n" for at, value in zip(WAVELENGTHS_NM, coefficients(), strict=True)]
    parser.parse_args().out.write_text(HEAD + "".join(rows), encoding="utf-8")


if __name__ == "__main__":
    main()
