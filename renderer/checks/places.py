"""Places in words and as values: a direction as a person reads it, and as a fix states it."""

from __future__ import annotations

from renderer.checks import sphere
from renderer.checks.findings import Value
from renderer.checks.keys import bow_key
from renderer.checks.view import FrameView
from renderer.shot.model import Vector


def sun_values(view: FrameView, direction: Vector) -> dict[str, Value]:
    """The keys of the shot file that put the sun at `direction`. [degrees]"""
    return {
        "sun.elevation": round(sphere.elevation_deg(direction, view.axes), 2),
        "sun.azimuth": round(sphere.azimuth_deg(direction, view.axes), 2) % 360.0,
    }


def centre_words(view: FrameView, bow: str, direction: Vector) -> tuple[str, dict[str, Value]]:
    """Where a bow's centre belongs, in words (elevation, azimuth, and its pixel), and as values for a machine."""
    elevation = sphere.elevation_deg(direction, view.axes)
    azimuth = sphere.azimuth_deg(direction, view.axes)
    pixel = view.pixel(direction)
    words = f"elevation {elevation:.2f}°, azimuth {azimuth:.2f}° ({pixel_words(view, pixel)})"
    values: dict[str, Value] = {
        bow_key(bow, "centre"): {"azimuth": round(azimuth, 3) % 360.0, "elevation": round(elevation, 3)},
        "centre_direction": tuple(round(part, 6) for part in direction),
        "centre_pixel": None if pixel is None else (round(pixel[0], 1), round(pixel[1], 1)),
    }
    return words, values


def pixel_words(view: FrameView, pixel: tuple[float, float] | None) -> str:
    """``pixel 640.0, 512.3``, and whether that is outside the frame."""
    if pixel is None:
        return "behind the camera"
    columns, rows = view.shot.camera.pixels
    within = 0.0 <= pixel[0] <= columns and 0.0 <= pixel[1] <= rows
    return f"pixel {pixel[0]:.1f}, {pixel[1]:.1f}" + ("" if within else ", outside the frame")
