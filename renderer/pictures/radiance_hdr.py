"""Reading Radiance pictures (.hdr, .pic): three mantissas and a shared exponent a pixel, run-length encoded.

G. Ward, "Real Pixels", Graphics Gems II, 1991, and the file format of the Radiance reference manual, chapter
"Picture file format".
"""

from __future__ import annotations

import re
from pathlib import Path

import numpy as np
import numpy.typing as npt

from renderer.pictures.faults import check_file, check_size, refused

EXPECTED = "a Radiance picture, which starts with #?RADIANCE"
WHOLE = "a Radiance picture that is whole"
MAX_HEADER_LINES = 1_000
MAX_LINE_BYTES = 4_096
ENCODED_WIDTHS = range(8, 32_768)  # only rows of these widths may be encoded channel by channel
RESOLUTION = re.compile(rb"([+-][XY]) (\d{1,9}) ([+-][XY]) (\d{1,9})\s*")

Floats = npt.NDArray[np.float64]
Bytes = npt.NDArray[np.uint8]


def read_radiance(path: Path) -> Floats:
    """Linear RGB (rows, columns, 3), in the units of the file, with its EXPOSURE taken out.

    Raises `InputError` when the file is missing, no Radiance picture, cut short, in CIE XYZ, or beyond a limit.
    """
    check_file(path, EXPECTED)
    raw = path.read_bytes()
    exposure, place = _header(path, raw)
    line, place = _line(path, raw, place)
    match = RESOLUTION.fullmatch(line)
    if match is None or match[1][1:] != b"Y" or match[3][1:] != b"X":
        text = line[:40].decode("ascii", "replace")
        raise refused(path, f'the picture\'s resolution reads "{text}"', 'rows first, as in "-Y 512 +X 1024"')
    rows, columns = int(match[2]), int(match[4])
    check_size(path, columns, rows)
    pixels = _scan_lines(path, raw, place, rows, columns)
    if match[1] == b"+Y":
        pixels = pixels[::-1]
    if match[3] == b"-X":
        pixels = pixels[:, ::-1]
    return to_linear(pixels) / exposure


def to_linear(rgbe: Bytes) -> Floats:
    """Linear RGB (..., 3) of RGBE (..., 4): (mantissa + 1/2) 2^(exponent - 136), and 0 where the exponent is 0."""
    exponent = rgbe[..., 3:].astype(np.int32)
    values = np.ldexp(rgbe[..., :3].astype(np.float64) + 0.5, exponent - 136)
    return np.where(exponent == 0, 0.0, values)


def _header(path: Path, raw: bytes) -> tuple[float, int]:
    """Product of the EXPOSURE lines, and where the header ends."""
    line, place = _line(path, raw, 0)
    if not line.startswith((b"#?RADIANCE", b"#?RGBE")):
        raise refused(path, "the file is not a Radiance picture, whatever its name says", EXPECTED)
    exposure = 1.0
    for _ in range(MAX_HEADER_LINES):
        line, place = _line(path, raw, place)
        if not line:
            return exposure, place
        if line.startswith(b"FORMAT=") and line[7:].strip() != b"32-bit_rle_rgbe":
            text = line[7:40].decode("ascii", "replace").strip()
            raise refused(path, f'the picture\'s format is "{text}"', "32-bit_rle_rgbe")
        if line.startswith(b"EXPOSURE="):
            exposure *= _exposure(path, line)
    raise refused(path, f"the picture's header has more than {MAX_HEADER_LINES:,} lines", EXPECTED)


def _exposure(path: Path, line: bytes) -> float:
    try:
        value = float(line[9:])
    except ValueError:
        value = 0.0
    if not 0.0 < value < np.inf:
        raise refused(path, "the picture's EXPOSURE cannot be read", "a number above 0")
    return value


def _line(path: Path, raw: bytes, place: int) -> tuple[bytes, int]:
    """The line at `place` without its end, and where the next begins."""
    end = raw.find(b"\n", place, place + MAX_LINE_BYTES)
    if end < 0:
        what = "is cut short in its header" if place else "is not a Radiance picture, whatever its name says"
        raise refused(path, f"the file {what}", EXPECTED)
    return raw[place:end].rstrip(b"\r"), end + 1


def _scan_lines(path: Path, raw: bytes, place: int, rows: int, columns: int) -> Bytes:
    """RGBE (rows, columns, 4) of all scan lines."""
    if len(raw) - place < rows * 4:  # the shortest encoding of a row is longer
        raise refused(path, "the picture is cut short", WHOLE)
    pixels = np.empty((rows, columns, 4), dtype=np.uint8)
    marks = bytes((2, 2, columns >> 8, columns & 255))
    try:
        for row in range(rows):
            if columns in ENCODED_WIDTHS and raw[place : place + 4] == marks:
                place = _by_channel(raw, place + 4, pixels[row])
            else:
                place = _by_pixel(raw, place, pixels[row])
    except (IndexError, ValueError):
        raise refused(path, f"the picture is cut short or damaged at row {row:,} of {rows:,}", WHOLE) from None
    return pixels


def _by_channel(raw: bytes, place: int, out: Bytes) -> int:
    """One scan line, channel by channel: runs of equal bytes, and bytes as they are. Gives where the next begins."""
    columns = len(out)
    for channel in range(4):
        done = 0
        while done < columns:
            count = raw[place]
            if count > 128:
                count -= 128
                out[done : done + count, channel] = raw[place + 1]
                place += 2
            else:
                out[done : done + count, channel] = np.frombuffer(raw, np.uint8, count, place + 1)
                place += 1 + count
            done += count
            if count == 0 or done > columns:
                raise ValueError
    return place


def _by_pixel(raw: bytes, place: int, out: Bytes) -> int:
    """One scan line of whole pixels, where (1, 1, 1, n) repeats the one before; each repeat of a repeat adds 8 bits."""
    columns, done, shift = len(out), 0, 0
    while done < columns:
        pixel = np.frombuffer(raw, np.uint8, 4, place)
        place += 4
        if pixel[0] == pixel[1] == pixel[2] == 1:
            count = int(pixel[3]) << shift
            if done == 0 or done + count > columns:
                raise ValueError
            out[done : done + count] = out[done - 1]
            done += count
            shift = min(shift + 8, 24)
        else:
            out[done] = pixel
            done += 1
            shift = 0
    return place
