"""A picture of where the bows of the sun stand in a frame, with the bows that the shot states beside them."""

from __future__ import annotations

import io
import math
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
import numpy.typing as npt

from renderer.checks.bow_limits import KNOWN_ORDERS, limits_of
from renderer.checks.expected import ORDERS, bows_of_frame
from renderer.checks.view import FrameView
from renderer.reports.drawing import REFERENCE_WIDTH, Canvas, Colour, Pen
from renderer.shot.model import BowToCheck

if TYPE_CHECKING:
    from PIL import Image

Floats = npt.NDArray[np.float64]

MARGIN = 0.14  # of the frame's width, around the frame
CLOCKS_DEG = np.linspace(-180.0, 180.0, 1441)
KEY_HEIGHT, NOTE_HEIGHT = 106.0, 32.0  # pixels of the reference width
AZIMUTHS_DEG = np.linspace(0.0, 360.0, 1441)

BANDS: tuple[Colour, ...] = (  # from violet to red, as drawn
    (142, 96, 224),
    (84, 118, 240),
    (66, 186, 216),
    (92, 204, 104),
    (238, 218, 84),
    (244, 158, 60),
    (236, 82, 70),
)
HORIZON: Colour = (150, 164, 178)
STATED: Colour = (255, 255, 255)
POINT: Colour = (255, 214, 92)


@dataclass(frozen=True)
class Layout:
    """How frame pixels lie on the canvas: the frame's left top corner, and canvas pixels to a frame pixel."""

    left: float
    top: float
    across: float
    down: float

    def place(self, pixels: Floats) -> Floats:
        """Frame pixels (n, 2) as canvas pixels."""
        return np.asarray(pixels * [self.across, self.down] + [self.left, self.top], dtype=np.float64)


def write_overlay(view: FrameView, path: Path, picture: Path | None = None, width: int = 1440) -> None:
    """Write the overlay of one frame as PNG, under a temporary name first; `picture` is laid under it."""
    path.parent.mkdir(parents=True, exist_ok=True)
    temporary = path.with_name(f".{path.name}.writing")
    temporary.write_bytes(overlay_png(view, picture, width))
    temporary.replace(path)


def overlay_png(view: FrameView, picture: Path | None = None, width: int = 1440) -> bytes:
    """The overlay of one frame as the bytes of a PNG."""
    buffer = io.BytesIO()
    draw_overlay(view, picture, width).save(buffer, format="PNG", optimize=True)
    return buffer.getvalue()


def draw_overlay(view: FrameView, picture: Path | None, width: int) -> Image.Image:
    """The overlay of one frame: horizon, expected bands, sun, antisolar point, stated bows, and a key to them."""
    columns, rows = view.shot.camera.pixels
    margin, notes = MARGIN * width, list(_notes(view))
    frame_width = width - 2.0 * margin
    frame_height = frame_width * rows / (columns * view.shot.camera.pixel_aspect)
    layout = Layout(margin, 0.6 * margin, frame_width / columns, frame_height / rows)
    key_top = frame_height + 1.2 * margin
    canvas = Canvas(width, round(key_top + (KEY_HEIGHT + NOTE_HEIGHT * len(notes)) * width / REFERENCE_WIDTH))
    corner = (margin, 0.6 * margin, margin + frame_width, 0.6 * margin + frame_height)
    canvas.picture(corner, picture)
    canvas.clip = (0.0, 0.0, float(width), key_top)
    for order in ORDERS:
        _draw_expected(view, layout, canvas, order)
    _draw_horizon(view, layout, canvas)
    canvas.frame(corner)
    for bow in view.bows:
        _draw_stated(view, layout, canvas, bow)
    _draw_sun(view, layout, canvas)
    canvas.write_labels()
    canvas.clear_below(key_top)
    canvas.title(key_top, " · ".join(_facts(view)))
    canvas.key(key_top, list(_key_entries(view)))
    canvas.notes(key_top + KEY_HEIGHT * canvas.scale, notes)
    return canvas.image


def _draw_horizon(view: FrameView, layout: Layout, canvas: Canvas) -> None:
    azimuths = np.radians(AZIMUTHS_DEG)[:, None]
    level = np.cos(azimuths) * np.array(view.axes.north) + np.sin(azimuths) * np.array(view.axes.east)
    canvas.path(layout.place(view.pixels(level)), Pen(HORIZON, 1.0))


def _draw_expected(view: FrameView, layout: Layout, canvas: Canvas, order: int) -> None:
    """The band of one expected bow, ring by ring: bright above the horizon, faint below."""
    if view.antisolar is None:
        return
    violet, red = band_edges_deg(order)
    edges = violet + np.linspace(0.0, 1.0, len(BANDS) + 1) * (red - violet)
    circles = [view.circle(view.antisolar, edge, CLOCKS_DEG) for edge in edges]
    places = [layout.place(view.pixels(circle)) for circle in circles]
    for k, colour in enumerate(BANDS):
        above = (circles[k] + circles[k + 1]) @ np.array(view.axes.up) >= 0.0
        canvas.band(places[k], places[k + 1], np.where(above[:, None], colour, _dimmed(colour)))


def band_edges_deg(order: int) -> tuple[float, float]:
    """Radius of the violet and of the red edge of an expected bow. [degrees]"""
    from renderer.optics.bow_geometry import bow_band

    band = bow_band(order)
    return band.violet_deg, band.red_deg


def _dimmed(colour: Colour) -> Colour:
    red, green, blue = (round(0.36 * part + 22) for part in colour)
    return red, green, blue


def _draw_stated(view: FrameView, layout: Layout, canvas: Canvas, bow: BowToCheck) -> None:
    """A stated bow as a dashed ring around its own centre, with its name at the ring's highest point in sight."""
    if bow.centre is None:
        return
    radius = bow.radius_deg
    if radius is None:
        radius = limits_of(bow.order).typical_deg if bow.order in KNOWN_ORDERS else None
    ring = layout.place(view.pixels(np.array([bow.centre])))
    canvas.saltire(ring[0], STATED)
    if radius is not None:
        ring = layout.place(view.pixels(view.circle(bow.centre, radius, CLOCKS_DEG)))
        canvas.path(ring, Pen(STATED, 1.6, dash=9))
    inside = [(float(x), float(y)) for x, y in ring if canvas.holds(x, y)]
    if inside:
        canvas.label(min(inside, key=lambda place: place[1]), f"as stated: {bow.name}", STATED)


def _draw_sun(view: FrameView, layout: Layout, canvas: Canvas) -> None:
    """The sun and the antisolar point; an arrow at the edge towards the latter where it is off the canvas."""
    if view.antisolar is None or view.sun is None:
        return
    x, y = (float(part) for part in layout.place(view.pixels(np.array([view.sun])))[0])
    if canvas.holds(x, y):
        canvas.disc((x, y), POINT)
        canvas.label((x, y), "sun", POINT)
    x, y = (float(part) for part in layout.place(view.pixels(np.array([view.antisolar])))[0])
    if canvas.holds(x, y):
        canvas.cross((x, y), POINT)
        canvas.label((x, y), "antisolar point", POINT)
    elif math.isfinite(x) and math.isfinite(y):
        canvas.arrow((x, y), "antisolar point", POINT)


def _notes(view: FrameView) -> Iterator[str]:
    """Why an expected bow is not in the frame, in a line each."""
    found = bows_of_frame(view)
    if found.why_not:
        yield f"No bows. {found.why_not}"
    for bow in found.bows:
        if bow.why_not:
            yield f"{bow.name.capitalize()}: none in view. {bow.why_not}"


def _facts(view: FrameView) -> Iterator[str]:
    yield view.shot.title or view.shot.source.name
    yield f"frame {view.frame}"
    sun = view.shot.sun
    yield f"sun {sun.elevation_deg:.1f}° high at azimuth {sun.azimuth_deg:.1f}°" if sun else "no sun"


def _key_entries(view: FrameView) -> Iterator[tuple[str, tuple[Colour, ...], int]]:
    """(words, colours of the sample, dash)."""
    if view.antisolar is not None:
        yield "primary bow", BANDS[::-1], 0
        yield "secondary bow", BANDS, 0
        yield "faint: below the horizon", (_dimmed(BANDS[3]),), 0
    yield "horizon", (HORIZON,), 0
    if any(bow.centre is not None for bow in view.bows):
        yield "bow as stated, with its centre", (STATED,), 9
