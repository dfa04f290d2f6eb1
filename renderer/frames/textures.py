"""Pictures on surfaces: read within limits, made linear, and turned into coefficients of reflectances.

PNG, JPEG, TIFF, BMP and WebP have 8 bits a channel here, and deeper ones are refused; EXR and Radiance HDR are floats.
Transparency is not read.
"""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

import numpy as np
import numpy.typing as npt

from renderer.base.errors import Fault, InputError

MAX_TEXELS = 1 << 26  # 8192 x 8192
MAX_FILE_BYTES = 1 << 30
BLOCK = 1 << 20  # colours that are turned into coefficients at once
FLOAT_KINDS = (".exr", ".hdr")
BYTE_KINDS = (".png", ".jpg", ".jpeg", ".tif", ".tiff", ".bmp", ".webp")

Floats = npt.NDArray[np.float64]


@dataclass(frozen=True)
class Texture:
    """`texels` (width * height, 3) float32 coefficients, row by row from the top; `share_outside`: of texels that no
    surface can match."""

    texels: npt.NDArray[np.float32]
    width: int
    height: int
    share_outside: float


def refuse(path: Path, what: str, expected: str = "") -> InputError:
    """The error about a picture."""
    return InputError(Fault(what, str(path), expected))


def load_texture(path: Path, encoding: str, space: str) -> Texture:
    """A picture as coefficients. `encoding` is srgb or linear; `space` that of its primaries.

    Raises `InputError` where the picture is missing, broken, too large or not finite.
    """
    kind = path.suffix.lower()
    if kind not in FLOAT_KINDS + BYTE_KINDS:
        raise refuse(
            path,
            f'pictures of kind "{kind}" are not read',
            "a file that ends in " + ", ".join(BYTE_KINDS + FLOAT_KINDS),
        )
    if not path.is_file():
        raise refuse(path, "the picture does not exist")
    if path.stat().st_size > MAX_FILE_BYTES:
        raise refuse(
            path, f"the picture has {path.stat().st_size / 1e9:.1f} GB", f"at most {MAX_FILE_BYTES / 1e9:.1f} GB"
        )
    if kind in FLOAT_KINDS:
        colours, which, (height, width) = float_colours(path, encoding)
    else:
        colours, which, (height, width) = byte_colours(path, encoding)
    coefficients, outside = coefficients_of(colours, space)
    shares = outside[which].mean() if which is not None else outside.mean()
    return Texture(coefficients if which is None else coefficients[which], width, height, float(shares))


def byte_colours(path: Path, encoding: str) -> tuple[Floats, npt.NDArray[np.int64], tuple[int, int]]:
    """Distinct linear colours (k, 3), which one each texel has, and the picture's height and width."""
    from renderer.pictures.reading import read_8_bit

    pixels = read_8_bit(path, MAX_TEXELS)
    packed = pixels.reshape(-1, 3).astype(np.uint32)
    keys, which = np.unique((packed[:, 0] << 16) | (packed[:, 1] << 8) | packed[:, 2], return_inverse=True)
    levels = np.column_stack([keys >> 16, (keys >> 8) & 255, keys & 255])
    table = np.arange(256) / 255.0
    return (decoded(table) if encoding == "srgb" else table)[levels], which, pixels.shape[:2]


def check_size(path: Path, width: int, height: int) -> None:
    """Refuse pictures beyond the limit, by the size that their header states."""
    if width < 1 or height < 1 or width * height > MAX_TEXELS:
        raise refuse(path, f"the picture has {width:,} x {height:,} pixels", f"1 to {MAX_TEXELS:,} in all")


def float_colours(path: Path, encoding: str) -> tuple[Floats, None, tuple[int, int]]:
    """Linear colours of an EXR or HDR picture, one a texel."""
    from renderer.pictures.reading import read_linear

    if encoding == "srgb":
        raise refuse(path, "an EXR or HDR picture is linear, not sRGB", 'encoding = "linear"')
    pixels = read_linear(path)
    check_size(path, pixels.shape[1], pixels.shape[0])
    return pixels.reshape(-1, 3), None, pixels.shape[:2]


def decoded(value: Floats) -> Floats:
    """sRGB to linear (IEC 61966-2-1:1999), the same to the bit on every machine, since textures enter pixels."""
    from renderer.base.exact_functions import power

    return np.where(value <= 0.04045, value / 12.92, power((value + 0.055) / 1.055, 2.4))


def coefficients_of(colours: Floats, space: str) -> tuple[npt.NDArray[np.float32], npt.NDArray[np.bool_]]:
    """Coefficients of linear colours, block by block so that memory stays small, and which no surface can have."""
    from renderer.colour.upsampling import reflectance_coefficients

    coefficients = np.empty((len(colours), 3), dtype=np.float32)
    outside = np.empty(len(colours), dtype=np.bool_)
    for start in range(0, len(colours), BLOCK):
        end = start + BLOCK
        coefficients[start:end], outside[start:end] = reflectance_coefficients(colours[start:end], space)
    return coefficients, outside
