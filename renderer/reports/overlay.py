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
from renderer.checks.expected import ORDERS
from renderer.checks.view import FrameView
from renderer.reports.drawing import Canvas, Colour, Pen

if TYPE_CHECKING:
    from PIL import Image

Floats = npt.NDArray[np.float64]

MARGIN = 0.14  # of the frame's width, around the frame
CLOCKS_DEG = np.linspace(-180.0, 180.0, 721)
AZIMUTHS_DEG = np.linspace(0.0, 360.0, 1441)

BANDS: tuple[tuple[float, Colour], ...] = (  # share of the way from violet to red, and how it is drawn
    (0.0, (142, 96, 224)),
    (1 / 6, (84, 118, 240)),
    (2 / 6, (66, 186, 216)),
    (3 / 6, (92, 204, 104)),
    (4 / 6, (238, 218, 84)),
    (5 / 6, (244, 158, 60)),
    (1.0, (236, 82, 70)),
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
    """The overlay of one frame: frame, horizon, expected bands, antisolar point, stated bows, and a key to them."""
    columns, rows = view.shot.camera.pixels
    shape = rows / (columns * view.shot.camera.pixel_aspect)
    frame_width = width * (1.0 - 2.0 * MARGIN)
    frame_height = frame_width * shape
    margin = MARGIN * width
    key_height = 0.105 * width
    layout = Layout(margin, 0.6 * margin, frame_width / columns, frame_height / rows)
    canvas = Canvas(width, round(frame_height + 1.2 * margin + key_height))
    corner = (margin, 0.6 * margin, margin + frame_width, 0.6 * margin + frame_height)
    canvas.picture(corner, picture)
    canvas.clip = (0.0, 0.0, float(width), frame_height + 1.2 * margin)
    _draw_horizon(view, layout, canvas)
    if view.antisolar is not None:
        for order in ORDERS:
            _draw_expected(view, layout, canvas, order)
    for bow in view.bows:
        _draw_stated(view, layout, canvas, bow.name)
    _draw_antisolar(view, layout, canvas)
    canvas.frame(corner)
    _draw_key(view, canvas, frame_height + 1.2 * margin)
    return canvas.image


def _draw_horizon(view: FrameView, layout: Layout, canvas: Canvas) -> None:
    azimuths = np.radians(AZIMUTHS_DEG)[:, None]
    level = np.cos(azimuths) * np.array(view.axes.north) + np.sin(azimuths) * np.array(view.axes.east)
    canvas.path(layout.place(view.pixels(level)), Pen(HORIZON, 1.0, dash=0))


def _draw_expected(view: FrameView, layout: Layout, canvas: Canvas, order: int) -> None:
    """The seven rings of one expected bow: bright above the horizon, faint below."""
    if view.antisolar is None:
        return
    violet, red = band_edges_deg(order)
    for share, colour in BANDS:
        circle = view.circle(view.antisolar, violet + share * (red - violet), CLOCKS_DEG)
        places = layout.place(view.pixels(circle))
        above = circle @ np.array(view.axes.up) >= 0.0
        canvas.path(np.where(above[:, None], places, np.nan), Pen(colour, 1.6))
        canvas.path(np.where(above[:, None], np.nan, places), Pen(_dimmed(colour), 1.0))


def band_edges_deg(order: int) -> tuple[float, float]:
    """Radius of the violet and of the red edge of an expected bow. [degrees]"""
    from renderer.optics.bow_geometry import bow_band

    band = bow_band(order)
    return band.violet_deg, band.red_deg


def _dimmed(colour: Colour) -> Colour:
    red, green, blue = (round(0.36 * part + 22) for part in colour)
    return red, green, blue


def _draw_stated(view: FrameView, layout: Layout, canvas: Canvas, name: str) -> None:
    """A stated bow as a dashed ring around its own centre, with its name at the ring's highest point in sight."""
    bow = next(bow for bow in view.bows if bow.name == name)
    if bow.centre is None:
        return
    radius = bow.radius_deg
    if radius is None:
        radius = limits_of(bow.order).typical_deg if bow.order in KNOWN_ORDERS else None
    centre = layout.place(view.pixels(np.array([bow.centre])))[0]
    canvas.saltire(centre, STATED)
    ring = centre[None]
    if radius is not None:
        ring = layout.place(view.pixels(view.circle(bow.centre, radius, CLOCKS_DEG)))
        canvas.path(ring, Pen(STATED, 1.4, dash=9))
    inside = [(x, y) for x, y in ring if canvas.holds(x, y)]
    if inside:
        x, y = min(inside, key=lambda place: place[1])
        canvas.label((x, y), f"as stated: {bow.name}", STATED)


def _draw_antisolar(view: FrameView, layout: Layout, canvas: Canvas) -> None:
    """The antisolar point as a cross; where it is off the canvas, an arrow at the edge towards it."""
    if view.antisolar is None:
        return
    x, y = layout.place(view.pixels(np.array([view.antisolar])))[0]
    if canvas.holds(x, y):
        canvas.cross((x, y), POINT)
        canvas.label((x, y), "antisolar point", POINT)
    elif math.isfinite(x) and math.isfinite(y):
        canvas.arrow((x, y), "antisolar point", POINT)


def _draw_key(view: FrameView, canvas: Canvas, top: float) -> None:
    """What the lines mean, and the sun that they hold for."""
    canvas.clip = None
    canvas.title(top, " · ".join(_facts(view)))
    canvas.key(top, list(_key_entries(view)))


def _facts(view: FrameView) -> Iterator[str]:
    yield view.shot.title or view.shot.source.name
    yield f"frame {view.frame}"
    sun = view.shot.sun
    yield f"sun {sun.elevation_deg:.1f}° high at azimuth {sun.azimuth_deg:.1f}°" if sun else "no sun"


def _key_entries(view: FrameView) -> Iterator[tuple[str, tuple[Colour, ...], int]]:
    """(words, colours of the sample, dash)."""
    if view.antisolar is not None:
        yield "primary bow", tuple(colour for _, colour in BANDS), 0
        yield "secondary bow", tuple(colour for _, colour in reversed(BANDS)), 0
        yield "faint: below the horizon", (_dimmed(BANDS[3][1]),), 0
    yield "horizon", (HORIZON,), 0
    if any(bow.centre is not None for bow in view.bows):
        yield "bow as stated, centre ×", (STATED,), 9
