"""Materials, surfaces and objects of a shot as rows of tables; equal ones share a row."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from pathlib import Path

import numpy as np
import numpy.typing as npt

from renderer.arrays import looks
from renderer.arrays.packing import pack
from renderer.base.constants import N_WAVELENGTHS, WAVELENGTH_HIGH_NM, WAVELENGTH_LOW_NM
from renderer.base.errors import Fault, InputError
from renderer.frames.textures import Texture, load_texture
from renderer.shot.model import Material, Object, Surface

Floats = npt.NDArray[np.float64]

ROLES = {"solid": looks.CLEAR, "opaque": looks.OPAQUE, "light": looks.LIGHT, "pane": looks.PANE, "sheet": looks.SHEET}
FINISHES = {"matt": looks.MATT, "metal": looks.METAL}
MAX_OBJECTS = 65_534
DISPERSIVE = 1e-9  # range of the index above which a material splits colours


@dataclass
class Looks:
    """Rows so far. Row 0 of the materials is air."""

    material_rows: dict[Material, int] = field(default_factory=dict)
    material_names: list[str] = field(default_factory=lambda: ["air"])
    index: list[Floats] = field(default_factory=lambda: [np.ones(N_WAVELENGTHS)])
    absorption_per_m: list[Floats] = field(default_factory=lambda: [np.zeros(N_WAVELENGTHS)])
    surface_rows: dict[Surface, int] = field(default_factory=dict)
    textures: dict[tuple[Path, str, str], tuple[int, Texture]] = field(default_factory=dict)
    notes: list[str] = field(default_factory=list)

    def material(self, material: Material | None) -> int:
        """The row of a material; what is air in all but name is row 0."""
        if material is None:
            return 0
        if material not in self.material_rows:
            index, absorption = tables_of(material)
            if (index == 1.0).all() and (absorption == 0.0).all():
                self.material_rows[material] = 0
            else:
                self.material_rows[material] = len(self.index)
                self.index.append(index)
                self.absorption_per_m.append(absorption)
                self.material_names.append(material.name)
        return self.material_rows[material]

    def surface(self, surface: Surface | None) -> int:
        """The row of a surface, or -1."""
        if surface is None:
            return -1
        return self.surface_rows.setdefault(surface, len(self.surface_rows))

    def texture(self, surface: Surface, path: Path) -> tuple[int, Texture]:
        """Where a picture's texels start, and the picture; read once for any number of surfaces."""
        key = (path, surface.encoding, surface.space)
        if key not in self.textures:
            start = sum(len(texture.texels) for _, texture in self.textures.values())
            texture = load_texture(path, surface.encoding, surface.space)
            if texture.share_outside > 0.0:
                self.notes.append(
                    f"{100.0 * texture.share_outside:.2g} % of the texels of {path.name} are more saturated than any"
                    " surface can be, and are shown as the nearest that can"
                )
            self.textures[key] = (start, texture)
        return self.textures[key]


def tables_of(material: Material) -> tuple[Floats, Floats]:
    """Index and absorption of a material, (401,) each."""
    from renderer.optics.materials import material_tables

    law = material.dispersion
    return material_tables(
        material.like,
        material.temperature_c,
        material.salinity,
        None if law is None else law.model,
        () if law is None else law.values,
        material.absorption_per_m,
    )


def material_arrays(table: Looks) -> looks.Materials:
    """All materials."""
    index = np.array(table.index)
    return looks.Materials(
        pack(index), pack(np.array(table.absorption_per_m)), pack(np.ptp(index, axis=1) > DISPERSIVE, np.bool_)
    )


def object_arrays(items: Sequence[Object], table: Looks) -> looks.Objects:
    """One row an object; surfaces and materials are collected in `table`. Lights are numbered in order."""
    if len(items) > MAX_OBJECTS:
        raise InputError(Fault(f"the shot has {len(items):,} objects", "", f"at most {MAX_OBJECTS:,}"))
    lights = np.cumsum([item.role == "light" for item in items]) - 1
    return looks.Objects(
        kind=pack([ROLES[item.role] for item in items], np.int32),
        material=pack([table.material(item.material) for item in items], np.int32),
        priority=pack([item.priority for item in items], np.int32),
        surface=pack([table.surface(item.surface) for item in items], np.int32),
        light=pack([k if item.role == "light" else -1 for k, item in zip(lights, items, strict=True)], np.int32),
        roughness=pack([item.roughness for item in items]),
        thickness_m=pack([item.thickness_m for item in items]),
    )


def surface_arrays(table: Looks) -> looks.Surfaces:
    """All surfaces, with their textures one after the other."""
    surfaces = list(table.surface_rows)
    n = len(surfaces)
    kinds, coefficients, places = np.zeros(n, int), np.zeros((n, 3)), np.zeros((n, 3), int)
    tables = np.zeros((max(n, 1) if any(s.spectrum for s in surfaces) else 1, N_WAVELENGTHS))
    for row, surface in enumerate(surfaces):
        if surface.picture is not None:
            start, texture = table.texture(surface, surface.picture)
            kinds[row], places[row] = looks.PICTURE, (start, texture.width, texture.height)
        elif surface.spectrum is not None:
            kinds[row], tables[row] = looks.TABLE, reflectance_table(surface.spectrum)
        else:
            kinds[row], coefficients[row] = looks.SIGMOID, coefficients_of(surface, table.notes)
    texels = [texture.texels for _, texture in table.textures.values()]
    return looks.Surfaces(
        finish=pack([FINISHES[surface.finish] for surface in surfaces], np.int32),
        reflectance_kind=pack(kinds, np.int32),
        coefficients=pack(coefficients, shape=(-1, 3)),
        reflectance_table=pack(tables),
        picture=pack(places, np.int32, (-1, 3)),
        texels=frozen(texels[0] if len(texels) == 1 else np.concatenate([*texels, np.zeros((0, 3), np.float32)])),
        roughness=pack([surface.roughness for surface in surfaces]),
        wetness=pack([surface.wetness for surface in surfaces]),
        film_roughness=pack([surface.film_roughness for surface in surfaces]),
    )


def frozen(texels: npt.NDArray[np.float32]) -> npt.NDArray[np.float32]:
    """Read-only without a copy: textures may be large."""
    texels = np.ascontiguousarray(texels)
    texels.flags.writeable = False
    return texels


def coefficients_of(surface: Surface, notes: list[str]) -> Floats:
    """Sigmoid coefficients of a surface's colour."""
    from renderer.colour.upsampling import reflectance_coefficients

    assert surface.reflectance is not None
    found, outside = reflectance_coefficients(np.array([surface.reflectance]), surface.space)
    if outside[0]:
        colour = ", ".join(f"{value:g}" for value in surface.reflectance)
        notes.append(f"no surface can reflect the colour [{colour}] ({surface.space}); the nearest one is shown")
    coefficients: Floats = found[0]
    return coefficients


def reflectance_table(spectrum: tuple[tuple[float, float], ...]) -> Floats:
    """A measured reflectance at every nanometre, straight between its entries and held at its ends."""
    pairs = np.array(spectrum, dtype=np.float64)
    grid = np.linspace(WAVELENGTH_LOW_NM, WAVELENGTH_HIGH_NM, N_WAVELENGTHS)
    return np.asarray(np.interp(grid, pairs[:, 0], pairs[:, 1]), dtype=np.float64)
