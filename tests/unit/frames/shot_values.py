"""Small shots as values, with everything plain unless a test says otherwise."""

from __future__ import annotations

from pathlib import Path

import numpy as np

from renderer.shot.model import Axes, Camera, Emission, FrameShot, Material, Object, Settings, Shape, Sky, Surface

AXES = Axes(up=(0.0, 1.0, 0.0), north=(0.0, 0.0, -1.0), east=(1.0, 0.0, 0.0))
CAMERA = Camera(
    matrices=np.eye(3, 4)[None],
    focal_length_mm=28.0,
    sensor_mm=(36.0, 20.25),
    pixels=(64, 36),
    pixel_aspect=1.0,
    window=(0, 0, 64, 36),
    distortion=(0.0,) * 5,
    f_number=0.0,
    focus_distance_m=4.0,
    shutter_deg=180.0,
    polariser_deg=None,
    exposure_stops=0.0,
    iso=None,
    exposure_auto=False,
    white_balance_k=6504.0,
)
WATER = Material("water", "water", 20.0, 0.0, None, None)
GREY = Surface((0.5, 0.5, 0.5), "rec709", None, None, "linear", "matt", 1.0, 0.0, 0.0)
LAMP = Emission(1000.0, (1.0, 1.0, 1.0), None, None, (), False)


def placed(*at: float, scale=1.0) -> np.ndarray:
    """(1, 3, 4) matrix that scales, along x or alike, and then moves."""
    matrix = np.eye(3, 4)
    matrix[:, :3] *= np.asarray(scale)
    matrix[:, 3] = at
    return matrix[None]


def thing(name="thing", **values) -> Object:
    """A grey box of 1 m, opaque, at the origin; a light has the lamp, a solid is water."""
    role = values.get("role", "opaque")
    given = {
        "name": name,
        "mesh": None,
        "mesh_nodes": (),
        "shape": None if "mesh" in values else Shape("box", {"size": (1.0, 1.0, 1.0)}),
        "metres_per_unit": 1.0,
        "matrices": placed(0.0, 0.0, 0.0),
        "role": role,
        "material": WATER if role in ("solid", "pane", "sheet") else None,
        "surface": GREY if role == "opaque" else None,
        "emission": LAMP if role == "light" else None,
        "priority": 0,
        "roughness": 0.0,
        "thickness_m": 0.0,
        "smooth": False,
    }
    return Object(**{**given, **values})


def shot(*objects: Object, **values) -> FrameShot:
    """One frame with these objects under a uniform sky."""
    given = {
        "title": "",
        "source": Path("test.shot.toml"),
        "variant": "",
        "frame": 1001,
        "fps": 24.0,
        "axes": AXES,
        "camera": CAMERA,
        "sun": None,
        "sky": Sky("uniform", 1000.0, (1.0, 1.0, 1.0), None, "rec709", 1.0, 0.0),
        "objects": objects,
        "bows": (),
        "sign_offs": (),
        "settings": Settings(2, 256, 64, 0, ()),
        "output_space": "acescg",
        "fingerprint": "",
    }
    return FrameShot(**{**given, **values})
