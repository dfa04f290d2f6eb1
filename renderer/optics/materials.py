"""What a clear material does to light: index relative to air and absorption, from the library or from a shot's numbers.

Range: 380 to 780 nm. A library law fitted for less is continued there (its entry says so: `LibraryEntry.extended`).
A shot's own absorption is held at the ends of its table; a shot's own table of indices goes on along its last line.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt

from renderer.base.constants import FRAUNHOFER_C_NM, FRAUNHOFER_D_NM, FRAUNHOFER_F_NM
from renderer.base.errors import Fault, InputError
from renderer.optics import dispersion
from renderer.optics.library import LibraryEntry, accepted_names, library_entry, material_names
from renderer.optics.tables import between_lines, render_wavelengths_nm, table_column
from renderer.optics.water import water_absorption_per_m, water_index

__all__ = [
    "LibraryEntry",
    "accepted_names",
    "index_at",
    "library_entry",
    "material_names",
    "material_tables",
    "nd_and_vd",
]

Floats = npt.NDArray[np.float64]
Values = Sequence[float] | Sequence[tuple[float, float]]

LOWEST_NM, HIGHEST_NM = 370.0, 790.0  # what the tables that come with the package cover in common
MODELS = ("constant", "sellmeier", "cauchy", "abbe", "table")


def entry_salinity(entry: LibraryEntry, salinity: float | None) -> float:
    """Per mille of salt: as stated, else the library's; only water knows of any."""
    return entry.salinity if salinity is None or not entry.is_water else salinity


def library_index(entry: LibraryEntry, wavelength_nm: npt.ArrayLike, temperature_c: float, salinity: float) -> Floats:
    """Index of a library material relative to air. Only water knows temperature and salinity."""
    if entry.is_water:
        return water_index(wavelength_nm, temperature_c, salinity)
    if entry.law == "sellmeier":
        return dispersion.sellmeier(wavelength_nm, entry.terms, entry.offset)
    terms = [(factor, int(power)) for factor, power in entry.terms]
    if entry.relative_to == "vacuum":
        return dispersion.relative_to_air(lambda nm: dispersion.power_series(nm, terms), wavelength_nm)
    return dispersion.power_series(wavelength_nm, terms)


def library_absorption_per_m(
    entry: LibraryEntry, wavelength_nm: npt.ArrayLike, temperature_c: float, salinity: float
) -> Floats:
    """Absorption of a library material, base e; 0 where none is carried for it."""
    wavelength = np.asarray(wavelength_nm, dtype=np.float64)
    if entry.absorption == "none":
        return np.zeros_like(wavelength)
    if entry.absorption == "water":
        return water_absorption_per_m(wavelength, temperature_c, salinity)
    if entry.absorption == "ice":
        at = table_column("ice_absorption.csv", "wavelength_nm")
        return between_lines(wavelength, at, table_column("ice_absorption.csv", "a_per_m"))
    only = ("material", entry.absorption)
    at = table_column("glass_absorption.csv", "wavelength_nm", only)
    return between_lines(wavelength, at, table_column("glass_absorption.csv", "a_per_m", only))


def plain_numbers(model: str, values: Values) -> list[float]:
    """The numbers of a law, flattened; InputError where one is not finite."""
    numbers = [float(number) for number in np.asarray(values, dtype=np.float64).ravel()]
    if not numbers or not np.all(np.isfinite(numbers)):
        raise InputError(
            Fault(f'the numbers of the law "{model}" are missing or not finite', expected="finite numbers")
        )
    return numbers


def stated_index(model: str, values: Values, wavelength_nm: npt.ArrayLike) -> Floats:
    """Index by a shot's own law; `model` and `values` as the shot file states them."""
    if model not in MODELS:
        raise InputError(Fault(f'no law of refractive index named "{model}"', expected=", ".join(MODELS)))
    numbers = plain_numbers(model, values)
    if model == "constant":
        return np.full_like(np.asarray(wavelength_nm, dtype=np.float64), numbers[0])
    if model == "cauchy":
        return dispersion.cauchy(wavelength_nm, numbers)
    if len(numbers) % 2:
        raise InputError(Fault(f'the law "{model}" has an odd count of numbers', expected="pairs of numbers"))
    pairs = list(zip(numbers[::2], numbers[1::2], strict=True))
    if model == "sellmeier":
        return dispersion.sellmeier(wavelength_nm, pairs)
    if model == "abbe":
        return dispersion.cauchy(wavelength_nm, dispersion.abbe_coefficients(*pairs[0]))
    return dispersion.index_table(wavelength_nm, pairs)


def stated_absorption_per_m(pairs: Sequence[tuple[float, float]], wavelength_nm: npt.ArrayLike) -> Floats:
    """Absorption between a shot's own (nm, per metre): straight lines, held at both ends of the table."""
    at = dispersion.rising_wavelengths(pairs, "absorption")
    values = np.array([value for _, value in pairs], dtype=np.float64)
    if not np.all(np.isfinite(values) & (values >= 0.0)):
        raise InputError(
            Fault(
                "an absorption is negative or not finite",
                expected="numbers of 0 or more, per metre (a material has no gain)",
            )
        )
    return between_lines(wavelength_nm, at, values)


def index_at(
    wavelength_nm: npt.ArrayLike,
    like: str | None = None,
    temperature_c: float = 20.0,
    salinity: float | None = None,
    model: str | None = None,
    values: Values = (),
) -> Floats:
    """Index relative to air at any wavelengths in air, 370 to 790 nm; the shape of `wavelength_nm`.

    `model` and `values` state a law; else `like` names a library material. Only water knows salinity (None: its own).
    InputError for a name, law or wavelength that is not known, and for a law that leaves 0.5 to 5.
    """
    wavelength = np.asarray(wavelength_nm, dtype=np.float64)
    if not np.all((wavelength >= LOWEST_NM) & (wavelength <= HIGHEST_NM)):
        raise InputError(Fault("a wavelength lies outside the range of the materials", expected="370 to 790 nm"))
    if model is not None:
        return dispersion.checked_index(wavelength, stated_index(model, values, wavelength))
    if like is None:
        raise InputError(
            Fault("a material has no refractive index", expected='refractive_index, or like = "a material"')
        )
    entry = library_entry(like)
    return library_index(entry, wavelength, temperature_c, entry_salinity(entry, salinity))


def material_tables(
    like: str | None = None,
    temperature_c: float = 20.0,
    salinity: float | None = None,
    model: str | None = None,
    values: Values = (),
    absorption: Sequence[tuple[float, float]] | None = None,
) -> tuple[Floats, Floats]:
    """Index relative to air and absorption per metre (base e), (401,) each, 380 to 780 nm one a nanometre.

    `like` names a library material and gives whatever is not stated: `model` and `values` state the index (constant:
    [n]; sellmeier: [B1, C1, ...] with C in um^2; cauchy: [A, B, C, ...] with um^2, um^4; abbe: [nd, Vd]; table:
    [(nm, n), ...]), `absorption` the absorption as ((nm, per metre), ...). Absorption is 0 where neither gives one.
    """
    grid = render_wavelengths_nm()
    index = index_at(grid, like, temperature_c, salinity, model, values)
    if absorption is not None:
        return index, stated_absorption_per_m(absorption, grid)
    if like is None:
        return index, np.zeros_like(grid)
    entry = library_entry(like)
    return index, library_absorption_per_m(entry, grid, temperature_c, entry_salinity(entry, salinity))


def nd_and_vd(
    like: str | None = None,
    temperature_c: float = 20.0,
    salinity: float | None = None,
    model: str | None = None,
    values: Values = (),
) -> tuple[float, float]:
    """Index at the d line and Abbe number (infinite without dispersion) of a material, by its law itself."""
    lines = (FRAUNHOFER_D_NM, FRAUNHOFER_F_NM, FRAUNHOFER_C_NM)
    nd, nf, nc = (float(index) for index in index_at(np.array(lines), like, temperature_c, salinity, model, values))
    return nd, dispersion.abbe_number(nd, nf, nc)
