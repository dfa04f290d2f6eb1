"""Reading the tables that are shipped with the package."""

from __future__ import annotations

from functools import cache
from importlib import resources

import numpy as np
import numpy.typing as npt

from renderer.base.constants import N_WAVELENGTHS, WAVELENGTH_HIGH_NM, WAVELENGTH_LOW_NM

Floats = npt.NDArray[np.float64]


@cache
def wavelengths_nm() -> Floats:
    """The wavelengths of every table of spectra: (401,) [nm], 380 to 780."""
    return frozen(np.linspace(WAVELENGTH_LOW_NM, WAVELENGTH_HIGH_NM, N_WAVELENGTHS))


@cache
def shipped_table(name: str) -> Floats:
    """A shipped CSV file as (n_rows, n_columns): lines of remarks begin with #, then one row of headings."""
    text = resources.files("renderer.colour").joinpath("data", name).read_text(encoding="utf-8")
    rows = [line for line in text.splitlines() if line and not line.startswith("#")][1:]
    return frozen(np.array([[float(entry) for entry in row.split(",")] for row in rows]))


def resampled(table: Floats) -> Floats:
    """Columns 1 and on of a table whose column 0 is in nm, linear between its rows: (401, n_columns - 1).

    The table must cover 380-780 nm.
    """
    nm = wavelengths_nm()
    assert table[0, 0] <= nm[0]
    assert table[-1, 0] >= nm[-1]
    return np.stack([np.interp(nm, table[:, 0], column) for column in table.T[1:]], axis=1)


def frozen(values: Floats) -> Floats:
    """The same values, C order, read-only: shared tables must not change."""
    result = np.ascontiguousarray(values, dtype=np.float64)
    result.setflags(write=False)
    return result
