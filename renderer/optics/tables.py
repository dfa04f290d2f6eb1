"""The published tables that come with the package, and reading between their lines."""

from __future__ import annotations

from functools import cache
from importlib.resources import files

import numpy as np
import numpy.typing as npt

from renderer.base.constants import N_WAVELENGTHS, WAVELENGTH_HIGH_NM, WAVELENGTH_LOW_NM

Floats = npt.NDArray[np.float64]


def table_text(name: str) -> str:
    """The text of a data file of this room."""
    return (files("renderer.optics") / "data" / name).read_text(encoding="utf-8")


@cache
def table_source(name: str) -> str:
    """The line of a table's head that names where it was published."""
    for line in table_text(name).splitlines():
        if line.startswith("# Source:"):
            return line.removeprefix("# Source:").strip()
    raise LookupError(f"{name} names no source")


@cache
def table_rows(name: str) -> tuple[dict[str, str], ...]:
    """The rows of a table, each by column name; lines that start with # are its head."""
    lines = [line for line in table_text(name).splitlines() if not line.startswith("#")]
    names = lines[0].split(",")
    return tuple(dict(zip(names, line.split(","), strict=True)) for line in lines[1:])


@cache
def table_column(name: str, column: str, only: tuple[str, str] | None = None) -> Floats:
    """One column of numbers, read-only; `only` = (column, text) takes the rows where that column has that text."""
    rows = [row for row in table_rows(name) if only is None or row[only[0]] == only[1]]
    if not rows:
        raise LookupError(f"{name} has no rows for {only}")
    values = np.array([float(row[column]) for row in rows])
    values.flags.writeable = False
    return values


@cache
def render_wavelengths_nm() -> Floats:
    """The wavelengths of every table that kernels get: (401,), 380 to 780 nm, one a nanometre; read-only."""
    grid = np.linspace(WAVELENGTH_LOW_NM, WAVELENGTH_HIGH_NM, N_WAVELENGTHS)
    grid.flags.writeable = False
    return grid


def between_lines(wavelength_nm: npt.ArrayLike, at_nm: Floats, values: Floats) -> Floats:
    """Linear interpolation of `values` known at rising `at_nm`; held at both ends, which the caller must document."""
    return np.asarray(np.interp(np.asarray(wavelength_nm, dtype=np.float64), at_nm, values))
