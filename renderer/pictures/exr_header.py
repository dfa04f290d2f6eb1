"""The header of an OpenEXR file, read before anything is allocated, and whether the whole file is there.

Format: "OpenEXR File Layout", openexr.com, as of OpenEXR 3. The library reports a file that was cut short in ways that
a person cannot use; here it is one sentence.
"""

from __future__ import annotations

import struct
from dataclasses import dataclass
from pathlib import Path
from typing import BinaryIO

import numpy as np

from renderer.pictures.faults import check_file, check_size, refused
from renderer.pictures.limits import MAX_CHANNELS, MAX_DECODED_BYTES, MAX_HEADER_BYTES

EXPECTED = "an OpenEXR picture"
WHOLE = "an OpenEXR picture that is whole"
MAGIC = b"\x76\x2f\x31\x01"
TILED, DEEP, MULTI_PART = 0x200, 0x800, 0x1000
ROWS_A_CHUNK = {0: 1, 1: 1, 2: 1, 3: 16, 4: 32, 5: 16, 6: 32, 7: 32, 8: 32, 9: 256}  # by number of compression
BYTES_OF_TYPE = {0: 4, 1: 2, 2: 4}  # uint, half, float


@dataclass(frozen=True)
class ExrHeader:
    """What the first part's header states: attributes by name as (type, bytes), and where the header ends."""

    attributes: dict[str, tuple[str, bytes]]
    flags: int
    end: int

    @property
    def window(self) -> tuple[int, int, int, int]:
        """Data window: first column, first row, columns, rows."""
        x0, y0, x1, y1 = struct.unpack("<4i", self.attributes["dataWindow"][1])
        return x0, y0, x1 - x0 + 1, y1 - y0 + 1

    @property
    def channels(self) -> dict[str, int]:
        """Bytes a pixel of each channel, by name."""
        raw, found, place = self.attributes["channels"][1], {}, 0
        while place < len(raw) and raw[place] != 0:
            end = raw.index(b"\0", place)
            (kind,) = struct.unpack_from("<i", raw, end + 1)
            found[raw[place:end].decode("utf-8", "replace")] = BYTES_OF_TYPE[kind]
            place = end + 1 + 16
        return found


def read_header(path: Path) -> ExrHeader:
    """The header of the first part. Raises `InputError` when the file is no OpenEXR picture or beyond a limit."""
    check_file(path, EXPECTED)
    with path.open("rb") as file:
        start = file.read(8)
        if start[:4] != MAGIC:
            raise refused(path, "the file is not an OpenEXR picture, whatever its name says", EXPECTED)
        if len(start) < 8:
            raise refused(path, "the picture is cut short in its header", WHOLE)
        (flags,) = struct.unpack("<I", start[4:])
        header = _header(path, file, flags)
    try:
        _, _, columns, rows = header.window
        channels = header.channels
        header.attributes["compression"][1][0]
    except (KeyError, ValueError, IndexError, struct.error):
        raise refused(path, "the picture's header is damaged", WHOLE) from None
    check_size(path, columns, rows)
    if not channels or len(channels) > MAX_CHANNELS:
        raise refused(path, f"the picture has {len(channels):,} channels", f"1 to {MAX_CHANNELS:,} channels")
    if columns * rows * sum(channels.values()) > MAX_DECODED_BYTES:
        raise refused(path, "the picture's channels do not fit", f"at most {MAX_DECODED_BYTES >> 30} GiB in all")
    return header


def _header(path: Path, file: BinaryIO, flags: int) -> ExrHeader:
    """Attributes up to the header's end."""
    raw = file.read(MAX_HEADER_BYTES)
    attributes: dict[str, tuple[str, bytes]] = {}
    place = 0
    try:
        while raw[place] != 0:
            name_end = raw.index(b"\0", place)
            type_end = raw.index(b"\0", name_end + 1)
            (size,) = struct.unpack_from("<i", raw, type_end + 1)
            first = type_end + 5
            if size < 0 or first + size > len(raw):
                raise IndexError
            name = raw[place:name_end].decode("utf-8", "replace")
            attributes[name] = (raw[name_end + 1 : type_end].decode("utf-8", "replace"), raw[first : first + size])
            place = first + size
    except (IndexError, ValueError, struct.error):
        raise refused(path, "the picture is cut short in its header", WHOLE) from None
    return ExrHeader(attributes, flags, 8 + place + 1)


def check_whole(path: Path, header: ExrHeader) -> None:
    """Raise `InputError` when rows of the picture are missing, by its table of where they lie.

    For scan-line files of one part, which is how nearly all pictures are stored; others are left to the library.
    """
    rows_a_chunk = ROWS_A_CHUNK.get(header.attributes["compression"][1][0])
    if header.flags & (TILED | DEEP | MULTI_PART) or rows_a_chunk is None:
        return
    n_chunks = -(-header.window[3] // rows_a_chunk)
    size = path.stat().st_size
    with path.open("rb") as file:
        file.seek(header.end)
        table = file.read(8 * n_chunks)
        if len(table) < 8 * n_chunks:
            raise refused(path, "the picture is cut short", WHOLE)
        offsets = np.frombuffer(table, dtype="<u8")
        missing = int(np.count_nonzero((offsets == 0) | (offsets > max(size - 8, 0))))
        if missing == 0:
            file.seek(int(offsets.max()) + 4)
            (packed,) = struct.unpack("<i", file.read(4))
            missing = int(packed < 0 or int(offsets.max()) + 8 + packed > size)
    if missing:
        raise refused(path, f"the picture is cut short: {min(missing * rows_a_chunk, header.window[3]):,} rows", WHOLE)
