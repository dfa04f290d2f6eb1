"""A shot at one frame, read and resolved: plain frozen values in metres, degrees and world axes. No files, no keys.

Everything keyed has been evaluated; everything named has been found. What comes as (n_steps, ...) is sampled evenly
over the shutter, ends included, and has one step where it stands still.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path

import numpy as np
import numpy.typing as npt

Floats = npt.NDArray[np.float64]
Vector = tuple[float, float, float]


@dataclass(frozen=True)
class Axes:
    """Unit vectors in world axes; east = north x up."""

    up: Vector
    north: Vector
    east: Vector


@dataclass(frozen=True)
class Camera:
    """See the reference of the shot file; `matrices` (n_steps, 3, 4) camera to world in metres, rigid.

    `window` is (first column, first row, columns, rows) of what is rendered, in pixels of the full frame, from the
    top left; it lies beyond the frame with overscan. `polariser_deg` is None without one.
    """

    matrices: Floats
    focal_length_mm: float
    sensor_mm: tuple[float, float]
    pixels: tuple[int, int]
    pixel_aspect: float
    window: tuple[int, int, int, int]
    distortion: tuple[float, float, float, float, float]
    f_number: float
    focus_distance_m: float
    shutter_deg: float
    polariser_deg: float | None
    exposure_stops: float | None  # exactly one of exposure_stops, iso, or auto
    iso: float | None
    exposure_auto: bool
    white_balance_k: float


@dataclass(frozen=True)
class Sun:
    """`direction` is the unit vector to the sun's apparent place, in world axes."""

    direction: Vector
    elevation_deg: float
    azimuth_deg: float
    visibility_km: float


@dataclass(frozen=True)
class Sky:
    """`kind`: clear, overcast, uniform, picture or none. `encoding` is the scene-linear space of the picture: rec709,
    rec2020, acescg or xyz. `scale` multiplies every kind; `turn_deg` turns a picture clockwise seen from above.
    """

    kind: str
    luminance: float  # [cd/m2], of a uniform sky
    colour: Vector  # Rec.709 linear, of a uniform sky; its luminance is taken out
    picture: Path | None
    encoding: str
    scale: float
    turn_deg: float


@dataclass(frozen=True)
class Dispersion:
    """A refractive index by wavelength, relative to air. `model` names the law, `values` are its numbers.

    constant: [n]; sellmeier: [B1, C1, B2, C2, ...] with C in um^2; cauchy: [A, B um^2, C um^4, ...];
    abbe: [nd, Vd]; table: [[nm, n], ...].
    """

    model: str
    values: tuple[float, ...] | tuple[tuple[float, float], ...]


@dataclass(frozen=True)
class Material:
    """A clear substance. `like` names a material of the library and sets whatever is not stated here."""

    name: str
    like: str | None
    temperature_c: float
    salinity: float  # permille
    dispersion: Dispersion | None
    absorption_per_m: tuple[tuple[float, float], ...] | None  # (nm, per metre); None: the library's, or none


@dataclass(frozen=True)
class Surface:
    """An opaque surface: exactly one of reflectance (RGB), spectrum ((nm, reflectance), ...) or picture."""

    reflectance: Vector | None
    space: str  # of reflectance and picture: "rec709", "rec2020", "acescg"
    spectrum: tuple[tuple[float, float], ...] | None
    picture: Path | None
    encoding: str  # of a picture: "srgb" or "linear"
    finish: str  # "matt" or "metal"
    roughness: float
    wetness: float
    film_roughness: float


@dataclass(frozen=True)
class Emission:
    """What an area light gives: luminance [cd/m2], with the colour of exactly one of: colour (Rec.709 RGB),
    temperature_k (black body), spectrum ((nm, relative), ...), or lines alone ((nm, share of the luminance), ...).

    Where spectrum or colour stands beside lines, `lines` shares are of the whole luminance and the rest is the other's.
    """

    luminance: float
    colour: Vector | None
    temperature_k: float | None
    spectrum: tuple[tuple[float, float], ...] | None
    lines: tuple[tuple[float, float], ...]
    two_sided: bool


@dataclass(frozen=True)
class Shape:
    """A built-in shape: `kind` and its sizes by name, lengths in metres, angles in degrees.

    All are about their own origin. box: size (x, y, z); sphere: radius; cylinder (also called rod): radius, height
    (along y), segments; lens: radius_front, radius_back (positive bulges, negative is hollow, 0 is flat), thickness
    (of its middle), diameter; along z, front towards +z; prism: apex_deg, side, length (ridge along z, up); tank:
    outer size (x, y, z), wall, fill (0..1 of the inner height), open towards +y; bowl: outer radius, wall, fill
    (0..1 of the inner depth), half a spherical shell with its rim level at y = 0, open towards +y. A vessel's shape
    is its glass only; what stands in it is a second object of kind tank_filling or bowl_filling with the same
    sizes, which reaches half the wall into the glass and so needs a lower priority than the glass. water_surface:
    size (x, z), cells (nx, nz), waves ((amplitude, wavelength, direction_deg clockwise from -z seen from above,
    phase_deg), ...) added up, facing +y, and depth (0 leaves it open, more closes it to a block with a flat bottom
    at y = -depth); rectangle: size (x, y) facing +z; disc: radius, segments, facing +z. Lengths may be 0 only where
    this says so.
    """

    kind: str
    sizes: dict[str, float | int | tuple[float, ...] | tuple[tuple[float, ...], ...]] = field(default_factory=dict)


@dataclass(frozen=True)
class Object:
    """A placed solid, surface or light. Exactly one of `mesh` and `shape`; exactly one of material, surface, emission.

    `matrices` (n_steps, 3, 4) takes the mesh's own numbers, already scaled to metres by `metres_per_unit`, to the
    world: p_world = M (metres_per_unit * p_mesh). `role` is solid, pane (with thickness_m), sheet (open, with
    `material` below it), opaque or light.
    """

    name: str
    mesh: Path | None
    mesh_nodes: tuple[str, ...]  # take only these named parts of the file; empty takes all
    shape: Shape | None
    metres_per_unit: float
    matrices: Floats
    role: str
    material: Material | None
    surface: Surface | None
    emission: Emission | None
    priority: int
    roughness: float
    thickness_m: float
    smooth: bool  # interpolate vertex normals


@dataclass(frozen=True)
class BowToCheck:
    """A bow as the shot shows it, by geometry. `centre` is a unit world direction at this frame (from a direction, a
    pixel through the lens, or a point in the world), None when not stated; `anchored` is "direction", "pixel" or
    "world", as the shot states it.
    """

    name: str
    order: int
    centre: Vector | None
    centre_pixel: tuple[float, float] | None
    anchored: str
    radius_deg: float | None
    width_deg: float | None
    outer_colour: str | None  # "red" or "violet"


@dataclass(frozen=True)
class SignOff:
    rule: str
    why: str
    until: str | None  # ISO 8601 date
    bow: str | None
    frames: str | None  # a frame range; None for all


@dataclass(frozen=True)
class Settings:
    """How to render: `splits`, interfaces at which both branches are followed; `wavelengths_nm`, or empty for all."""

    splits: int
    max_interfaces: int
    rounds: int
    seed: int
    wavelengths_nm: tuple[float, ...]


@dataclass(frozen=True)
class FrameShot:
    """One frame of a shot, whole."""

    title: str
    source: Path
    variant: str
    frame: int
    fps: float
    axes: Axes
    camera: Camera
    sun: Sun | None
    sky: Sky
    objects: tuple[Object, ...]
    bows: tuple[BowToCheck, ...]
    sign_offs: tuple[SignOff, ...]
    settings: Settings
    output_space: str  # "acescg", "rec709", "rec2020", "xyz"
    fingerprint: str
    fail_on: str | None = None  # the mildest severity that fails the check, where the shot says so
