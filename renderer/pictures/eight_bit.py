"""Reading pictures of 8 bits a channel. Size and kind are checked by the header, before pixels are decoded."""

from __future__ import annotations

import warnings
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
import numpy.typing as npt

from renderer.base.errors import InputError
from renderer.pictures.faults import check_file, check_size, refused
from renderer.pictures.limits import MAX_8_BIT_PIXELS

if TYPE_CHECKING:
    from PIL import Image

KINDS = {
    ".png": "PNG",
    ".jpg": "JPEG",
    ".jpeg": "JPEG",
    ".tif": "TIFF",
    ".tiff": "TIFF",
    ".bmp": "BMP",
    ".webp": "WEBP",
}
EIGHT_BIT_MODES = ("RGB", "RGBA", "RGBX", "RGBa", "L", "LA", "La", "P", "PA", "1")
EXPECTED = "a picture of 8 bits a channel, or an OpenEXR picture"
PNG_DEPTH_AT = 24  # byte of a PNG file that states the bits a channel (ISO/IEC 15948:2004, 11.2.2)


def read_pixels(path: Path, most_pixels: int = MAX_8_BIT_PIXELS) -> npt.NDArray[np.uint8]:
    """(rows, columns, 3) display values. Raises `InputError` for whatever cannot be read as such."""
    kind = path.suffix.lower()
    if kind not in KINDS:
        raise refused(path, f'a picture of kind "{kind}" is not read here', "a file that ends in " + ", ".join(KINDS))
    check_file(path, EXPECTED)
    _check_depth(path)
    from PIL import Image, UnidentifiedImageError

    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # the library's own limit is lower than ours
            with Image.open(path, formats=tuple(sorted(set(KINDS.values())))) as picture:
                check_size(path, picture.width, picture.height, most_pixels)
                _check_mode(path, picture)
                return np.asarray(picture.convert("RGB"), dtype=np.uint8)
    except InputError:
        raise
    except UnidentifiedImageError:
        raise refused(path, f"the file cannot be read as {KINDS[kind]}, whatever its name says", EXPECTED) from None
    except Image.DecompressionBombError:
        raise refused(path, "the picture has far too many pixels", f"1 to {most_pixels:,} in all") from None
    except MemoryError:
        raise refused(path, "the picture does not fit this machine's memory", "a smaller picture") from None
    except Exception as error:  # whatever the library trips over in a hostile file, a person gets one sentence
        raise refused(path, f"the picture cannot be read ({_reason(path, error)})", EXPECTED) from None


def _check_depth(path: Path) -> None:
    """Raise `InputError` for a PNG of 16 bits a channel, which the library would cut to 8 without a word."""
    with path.open("rb") as file:
        start = file.read(PNG_DEPTH_AT + 1)
    if start[:8] == b"\x89PNG\r\n\x1a\n" and len(start) > PNG_DEPTH_AT and start[PNG_DEPTH_AT] == 16:
        raise refused(path, "the picture has 16 bits a channel", EXPECTED)


def _check_mode(path: Path, picture: Image.Image) -> None:
    """Raise `InputError` for values that are no display RGB or grey."""
    if picture.mode in EIGHT_BIT_MODES:
        return
    if picture.mode == "CMYK":
        raise refused(path, "the picture is for print: its colours are CMYK", "RGB or grey")
    if picture.mode in ("A", "a"):
        raise refused(path, "the picture is transparency alone", "RGB or grey")
    raise refused(path, f'the picture\'s values are of kind "{picture.mode}"', EXPECTED)


def _reason(path: Path, error: Exception) -> str:
    """The first line of an error, short, without the path."""
    lines = str(error).splitlines() or [type(error).__name__]
    return lines[0].replace(str(path), path.name)[:100]
