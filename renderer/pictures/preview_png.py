"""The 8-bit preview beside a picture."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import numpy.typing as npt

from renderer.pictures.writing import replacing

ROWS_AT_ONCE = 128  # so that the colours in the making need little memory
SQUARE = 1e-6  # a pixel aspect nearer to 1 is 1


def write_preview(path: Path, rgb: npt.NDArray[np.float64], space: str, pixel_aspect: float = 1.0) -> None:
    """Write exposed linear values (rows, columns, 3) of a space as an sRGB PNG, with square pixels.

    Raises `InputError` where the file cannot be written.
    """
    from PIL import Image

    from renderer.colour.preview import preview

    shown = [preview(rgb[row : row + ROWS_AT_ONCE], space) for row in range(0, len(rgb), ROWS_AT_ONCE)]
    picture = Image.fromarray(np.concatenate(shown))
    if abs(pixel_aspect - 1.0) > SQUARE:
        columns = max(1, round(picture.width * pixel_aspect))
        picture = picture.resize((columns, picture.height), Image.Resampling.LANCZOS)
    with replacing(path) as temporary:
        picture.save(temporary, format="PNG")
