"""Solves renderer/colour/data/rec709_light_shares_1nm.csv again: ``python tools/light_shares.py [--out FILE]``.

Three shares of D65 with the chromaticities of the Rec.709 primaries: none below 0, their sum 1 at every wavelength, and
of all such the ones with the least sum of squared steps from nanometre to nanometre. The idea is that of I. Mallett and
C. Yuksel, "Spectral Primary Decomposition for Rendering with sRGB Reflectance", EGSR 2019, doi:10.2312/sr.20191216.
Needs the package itself, for D65, the observer and the primaries. A test compares the shipped table with what it makes.
"""

from __future__ import annotations

import argparse
import sys
from pathlib import Path

import numpy as np
import numpy.typing as npt

from renderer.colour.observer import observer_weights
from renderer.colour.spaces import reference_light, reflected_matrix
from renderer.colour.tables import wavelengths_nm

Floats = npt.NDArray[np.float64]

MOST_STEPS = 100  # eight were needed
DECIMALS = 12
TITLE = "Three shares of D65 that have the chromaticities of the Rec.709 primaries: none below 0, sum 1 everywhere"
HEAD = f"""\
# {TITLE}
# Source: solved by tools/light_shares.py: least sum of squared steps from nanometre to nanometre, by an active-set
# quadratic programme; the idea is I. Mallett and C. Yuksel, "Spectral Primary Decomposition for Rendering with sRGB
# Reflectance", EGSR 2019, doi:10.2312/sr.20191216
# Units: wavelength_nm; share of D65
# Range: 380-780 nm, every 1 nm
wavelength_nm,red,green,blue
"""


def roughness(n: int) -> Floats:
    """(3 n, 3 n): x' H x is the sum of squared steps of three curves of n values, one after the other."""
    steps = np.diff(np.eye(n), axis=0)
    return np.asarray(np.kron(np.eye(3), steps.T @ steps), dtype=np.float64)


def conditions() -> tuple[Floats, Floats]:
    """A and b of A x = b: the shares add up to 1 at each wavelength, and red and green have the XYZ of their primaries.

    Blue's XYZ follows from these, because the three primaries add up to D65.
    """
    weights = (observer_weights() * reference_light("rec709")[:, None]).T
    primaries = reflected_matrix("rec709")
    n = weights.shape[1]
    one_each = np.kron(np.ones((1, 3)), np.eye(n))
    colours = np.kron(np.eye(2, 3), weights)
    return np.concatenate([one_each, colours]), np.concatenate([np.ones(n), primaries[:, 0], primaries[:, 1]])


def least(h: Floats, a: Floats, b: Floats) -> Floats:
    """x of the least x' h x / 2 with a x = b and x >= 0, by a primal-dual active set.

    M. Hintermueller, K. Ito and K. Kunisch, SIAM J. Optim. 13, 865 (2002): entries below 0 are held at 0, and
    those held whose multiplier would lift them are let go, until there are neither. What is left meets every condition
    of optimality, and the problem is convex. RuntimeError if it does not settle.
    """
    held = np.zeros(len(h), dtype=bool)
    for _ in range(MOST_STEPS):
        free = ~held
        system = np.block([[h[np.ix_(free, free)], a[:, free].T], [a[:, free], np.zeros((len(b), len(b)))]])
        found = np.linalg.solve(system, np.concatenate([np.zeros(free.sum()), b]))
        x = np.zeros(len(h))
        x[free] = found[: free.sum()]
        pull = h @ x + a.T @ found[free.sum() :]
        next_held = np.where(held, pull > 0.0, x < 0.0)
        if (next_held == held).all():
            return x
        held = next_held
    raise RuntimeError(f"the shares did not settle in {MOST_STEPS} steps")


def light_shares() -> Floats:
    """The shares (401, 3): red, green, blue."""
    a, b = conditions()
    n = len(wavelengths_nm())
    return np.ascontiguousarray(least(roughness(n), a, b).reshape(3, n).T)


def table(shares: Floats) -> str:
    """The whole text of the shipped file."""
    rows = (
        ",".join([f"{nm:.0f}", *(f"{round(share, DECIMALS):.{DECIMALS}g}" for share in row)])
        for nm, row in zip(wavelengths_nm().tolist(), shares.tolist(), strict=True)
    )
    return HEAD + "\n".join(rows) + "\n"


def main(arguments: list[str]) -> int:
    """Write the table to a file, or to standard output."""
    options = argparse.ArgumentParser(description=(__doc__ or "").splitlines()[0])
    options.add_argument("--out", type=Path, help="the file to write, in place of standard output")
    chosen = options.parse_args(arguments)
    text = table(light_shares())
    if chosen.out:
        chosen.out.write_text(text, encoding="utf-8", newline="\n")
    else:
        sys.stdout.write(text)
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
