"""The pictures that stand in a report."""

from __future__ import annotations

import io
from pathlib import Path

from renderer.reports.html import Plate
from renderer.shot.model import FrameShot

WIDEST = 1440  # pixels: what a report needs on a desk


def picture_plate(path: Path, frame: int) -> Plate:
    """A rendered frame, made smaller where it is wider than a report shows."""
    from PIL import Image

    from renderer.pictures.reading import read_8_bit

    picture = Image.fromarray(read_8_bit(path))
    if picture.width > WIDEST:
        picture = picture.resize((WIDEST, round(picture.height * WIDEST / picture.width)), Image.Resampling.LANCZOS)
    buffer = io.BytesIO()
    picture.save(buffer, format="PNG", optimize=True)
    return Plate(buffer.getvalue(), f"Frame {frame} as rendered.")


def overlay_plate(shot: FrameShot, picture: Path | None = None) -> Plate:
    """Where the bows of the sun stand in a frame."""
    from renderer.checks.view import FrameView
    from renderer.reports.overlay import overlay_png

    return Plate(overlay_png(FrameView(shot), picture), f"Frame {shot.frame}: where the bows of this sun stand.")
