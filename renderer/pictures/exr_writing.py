"""Writing OpenEXR: one part with all layers, windows, colour space and metadata, under a temporary name first."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from pathlib import Path
from typing import Any

import numpy as np

from renderer.pictures.developing import Development, shutter_s
from renderer.pictures.layers import Channels
from renderer.pictures.writing import replacing
from renderer.shot.model import Camera

PREFIX = "antisolar/"
SPECTRAL = {"spectralLayoutVersion": "1.0", "emissiveUnits": "W.m^-2.sr^-1.nm^-1"}  # Fichet et al. 2021
NTSC = Fraction(1000, 1001)  # 23.976 is 24000/1001 and so on, SMPTE ST 12-1
LARGEST_INT = 2**31 - 1  # of the format's whole numbers

# CIE XYZ in the format's convention: the primaries are the axes, the white that of equal energy
XYZ_CHROMATICITIES = (1.0, 0.0, 0.0, 1.0, 0.0, 0.0, 1.0 / 3.0, 1.0 / 3.0)


def write_exr(path: Path, channels: Channels, header: Mapping[str, Any]) -> None:
    """Write channels (rows, columns; half, float or uint32) and a header. Raises `InputError` where it cannot be."""
    import OpenEXR

    base = {"compression": OpenEXR.ZIP_COMPRESSION, "type": OpenEXR.scanlineimage}
    with replacing(path) as temporary, OpenEXR.File({**base, **header}, dict(channels)) as file:
        try:
            file.write(str(temporary))
        except RuntimeError as error:
            raise OSError(str(error)) from error


def camera_header(camera: Camera, fps: float) -> dict[str, Any]:
    """Windows, pixel aspect, frame rate and the standard attributes of the lens."""
    column, row, columns, rows = camera.window
    header: dict[str, Any] = {
        "dataWindow": _box(column, row, columns, rows),
        "displayWindow": _box(0, 0, *camera.pixels),
        "pixelAspectRatio": float(camera.pixel_aspect),
        "framesPerSecond": frame_rate(fps),
        "expTime": shutter_s(camera, fps),
    }
    if camera.f_number > 0.0:
        header |= {"aperture": float(camera.f_number), "focus": float(camera.focus_distance_m)}
    if camera.iso is not None:
        header["isoSpeed"] = float(camera.iso)
    return header


def colour_header(how: Development) -> dict[str, Any]:
    """Chromaticities, the white that is neutral, and the luminance [cd/m2] of a value of 1."""
    from renderer.colour.spaces import space_named

    space = space_named(how.space)
    primaries = (*space.red, *space.green, *space.blue, *space.white)
    return {
        "chromaticities": XYZ_CHROMATICITIES if how.space == "xyz" else primaries,
        "adoptedNeutral": np.array(space.white, dtype=np.float32),
        "whiteLuminance": 1.0 / how.exposure,
        f"{PREFIX}space": how.space,
        f"{PREFIX}whiteBalance": float(how.white_balance_k),
    }


def facts_header(facts: Mapping[str, str | int | float]) -> dict[str, Any]:
    """Facts as attributes of our own; whole numbers beyond 31 bits, which the format lacks, as text."""
    return {
        f"{PREFIX}{name}": str(fact) if isinstance(fact, int) and abs(fact) > LARGEST_INT else fact
        for name, fact in facts.items()
    }


def facts_of(header: Mapping[str, Any]) -> dict[str, Any]:
    """The attributes of our own in a header that was read; empty for a picture that is not ours."""
    return {name.removeprefix(PREFIX): value for name, value in header.items() if name.startswith(PREFIX)}


def frame_rate(fps: float) -> Fraction:
    """Frames a second as the fraction that is meant: 23.976 is 24000/1001."""
    nominal = round(fps / float(NTSC))
    if fps != round(fps) and abs(nominal * float(NTSC) - fps) < 0.002:
        return nominal * NTSC
    return Fraction(fps).limit_denominator(10_000)


def _box(column: int, row: int, columns: int, rows: int) -> tuple[Any, Any]:
    """A window as the format has it: first and last pixel."""
    return np.array([column, row], dtype=np.int32), np.array([column + columns - 1, row + rows - 1], dtype=np.int32)
