"""Reading pictures that others made: what each kind of file gives, as linear or as 8-bit values."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import numpy.typing as npt

from renderer.pictures.faults import refused
from renderer.pictures.limits import MAX_8_BIT_PIXELS

Floats = npt.NDArray[np.float64]

LINEAR_KINDS = (".exr", ".hdr", ".pic")


def read_linear(path: Path) -> Floats:
    """Scene-linear values (rows, columns, 3) of an OpenEXR or Radiance picture, all finite, in the units of the file.

    Raises `InputError` when the file is missing, of another kind, cut short, damaged, without colour, beyond a limit,
    or has values that are not finite.
    """
    kind = path.suffix.lower()
    if kind == ".exr":
        from renderer.pictures.exr_reading import colour_of, read_exr

        values = colour_of(path, read_exr(path))
    elif kind in LINEAR_KINDS:
        from renderer.pictures.radiance_hdr import read_radiance

        values = read_radiance(path)
    else:
        what = f'a picture of kind "{kind}" is not scene-linear'
        raise refused(path, what, "a file that ends in " + ", ".join(LINEAR_KINDS))
    check_finite(path, values)
    return values


def read_sky_picture(path: Path) -> Floats:
    """A latitude-longitude picture (rows, columns, 3) as `read_linear` gives it, with light in it.

    Raises `InputError` also when it is black all over, or not twice as wide as high.
    """
    values = read_linear(path)
    rows, columns = values.shape[:2]
    if columns != 2 * rows:
        raise refused(path, f"the sky picture has {columns:,} x {rows:,} pixels", "twice as many columns as rows")
    if not (values > 0.0).any():
        raise refused(path, "the sky picture is black all over", "a latitude-longitude picture with light in it")
    return values


def check_finite(path: Path, values: Floats) -> None:
    """Raise `InputError` that counts the values that are not finite, and says where the first is."""
    bad = ~np.isfinite(values)
    if bad.any():
        row, column = (int(part) for part in np.argwhere(bad)[0][:2])
        count = int(np.count_nonzero(bad.any(axis=-1)))
        pixels = "one pixel has a value that is" if count == 1 else f"{count:,} pixels have values that are"
        raise refused(path, f"{pixels} not a finite number, first at column {column}, row {row}", "finite numbers")


def read_8_bit(path: Path, most_pixels: int = MAX_8_BIT_PIXELS) -> npt.NDArray[np.uint8]:
    """Display values (rows, columns, 3) of a PNG, JPEG, TIFF, BMP or WebP picture of 8 bits a channel.

    Transparency is left aside. Raises `InputError` when the file is missing, damaged, cut short, beyond a limit, for
    print (CMYK), transparency alone, or of more than 8 bits, which would be lost in silence.
    """
    from renderer.pictures.eight_bit import read_pixels

    return read_pixels(path, most_pixels)
