"""Frames of a shot built by hand, so that a rule is tested without a shot file."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path

import numpy as np

from renderer.checks import sphere
from renderer.shot.model import (
    Axes,
    BowToCheck,
    Camera,
    Dispersion,
    FrameShot,
    Material,
    Object,
    Settings,
    Shape,
    Sky,
    Sun,
    Surface,
    Vector,
)

AXES = Axes(up=(0.0, 1.0, 0.0), north=(0.0, 0.0, -1.0), east=(1.0, 0.0, 0.0))
IDENTITY = np.eye(3, 4)[None]


def camera(
    azimuth: float = 0.0, elevation: float = 0.0, position: Vector = (0.0, 1.7, 0.0), focal: float = 18.0
) -> Camera:
    """A pinhole that looks along a bearing, level with the horizon unless tilted."""
    back = np.array(sphere.opposite(sphere.direction_at(elevation, azimuth, AXES)))
    right = np.cross(np.array(AXES.up), back)
    right /= np.linalg.norm(right)
    matrix = np.column_stack([right, np.cross(back, right), back, np.array(position)])
    return Camera(
        matrices=matrix[None], focal_length_mm=focal, sensor_mm=(36.0, 20.25), pixels=(1280, 720), pixel_aspect=1.0,
        window=(0, 0, 1280, 720), distortion=(0.0, 0.0, 0.0, 0.0, 0.0), f_number=0.0, focus_distance_m=10.0,
        shutter_deg=180.0, polariser_deg=None, exposure_stops=0.0, iso=None, exposure_auto=False,
        white_balance_k=6504.0,
    )  # fmt: skip


def sun(elevation: float, azimuth: float) -> Sun:
    """A sun at an apparent place."""
    return Sun(sphere.direction_at(elevation, azimuth, AXES), elevation, azimuth, 23.0)


def bow(
    centre: Vector | None = None, radius: float | None = None, order: int = 1, name: str = "comp bow",
    anchored: str = "direction", width: float | None = None, outer: str | None = None,
) -> BowToCheck:  # fmt: skip
    """A bow as a shot states it."""
    return BowToCheck(name, order, centre, None, anchored, radius, width, outer)


def opposite_of(place: Sun) -> Vector:
    """The antisolar point of a sun."""
    return sphere.opposite(place.direction)


def shape_object(
    name: str = "block", kind: str = "box", material: Material | None = None, surface: Surface | None = None,
    priority: int = 0, role: str | None = None, roughness: float = 0.0, **sizes: object,
) -> Object:  # fmt: skip
    """An object of a built-in shape."""
    return Object(
        name=name, mesh=None, mesh_nodes=(), shape=Shape(kind, sizes or {"size": (0.1, 0.1, 0.1)}), metres_per_unit=1.0,
        matrices=IDENTITY, role=role or ("opaque" if surface else "solid"), material=material, surface=surface,
        emission=None, priority=priority, roughness=roughness, thickness_m=0.0, smooth=False,
    )  # fmt: skip


def mesh_object(path: Path, name: str = "block", material: Material | None = None, **changes: object) -> Object:
    """An object of a mesh file."""
    item = replace(shape_object(name, material=material or glass()), mesh=path, shape=None)
    return replace(item, **changes)


def glass(name: str = "bottle", like: str | None = "soda-lime glass", law: Dispersion | None = None) -> Material:
    """A clear material."""
    return Material(name, like if law is None else None, 20.0, 0.0, law, None)


def paint(reflectance: Vector = (0.5, 0.5, 0.5), **changes: object) -> Surface:
    """An opaque surface."""
    return replace(Surface(reflectance, "rec709", None, None, "srgb", "matt", 1.0, 0.0, 0.0), **changes)


def frame(number: int = 1001, **changes: object) -> FrameShot:
    """A frame of a plain shot: a level camera to the north, no sun, nothing in view."""
    base = FrameShot(
        title="Lock Nine test", source=Path("lock.shot.toml"), variant="", frame=number, fps=24.0, axes=AXES,
        camera=camera(), sun=None, sky=Sky("clear", 0.0, (1.0, 1.0, 1.0), None, "linear", 1.0, 0.0), objects=(),
        bows=(), sign_offs=(), settings=Settings(2, 256, 64, 0, ()), output_space="acescg", fingerprint="0" * 16,
    )  # fmt: skip
    return replace(base, **changes)


def close(a: float, b: float, tolerance: float) -> bool:
    """Whether two numbers agree to within a tolerance."""
    return math.fabs(a - b) <= tolerance
