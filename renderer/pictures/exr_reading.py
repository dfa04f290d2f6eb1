"""Reading OpenEXR: limits first, then the official library, then one sentence where either objects."""

from __future__ import annotations

import contextlib
import io
import os
import sys
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
import numpy.typing as npt

from renderer.pictures.exr_header import DEEP, WHOLE, check_whole, read_header
from renderer.pictures.faults import refused

Floats = npt.NDArray[np.float64]


@dataclass(frozen=True)
class ExrPicture:
    """A part of an OpenEXR file: `channels` (rows, columns) by name, in their stored types, and the header's values."""

    channels: dict[str, npt.NDArray[Any]]
    header: dict[str, Any]


@contextlib.contextmanager
def library_silenced() -> Iterator[None]:
    """Keep the library's own complaints, printed by Python and by C alike, off the command's output."""
    sys.stderr.flush()
    kept = os.dup(2)
    try:
        with open(os.devnull, "wb") as nowhere, contextlib.redirect_stdout(io.StringIO()):
            os.dup2(nowhere.fileno(), 2)
            yield
    finally:
        os.dup2(kept, 2)
        os.close(kept)


def read_exr(path: Path) -> ExrPicture:
    """The first part of an OpenEXR file that has pixels in full resolution.

    Raises `InputError` when it is missing, no OpenEXR file, cut short, damaged, deep, or beyond a limit.
    """
    header = read_header(path)
    if header.flags & DEEP:
        raise refused(path, "the picture is deep: many values a pixel", "a flat OpenEXR picture")
    check_whole(path, header)
    import OpenEXR

    try:
        with library_silenced():
            file = OpenEXR.File(str(path), separate_channels=True)
            part = file.parts[0] if file.parts else None
    except (RuntimeError, MemoryError, ValueError):
        part = None
    if part is None or any(channel.pixels is None for channel in part.channels.values()):
        raise refused(path, "the picture's pixels are damaged", WHOLE)
    return ExrPicture({name: channel.pixels for name, channel in part.channels.items()}, dict(part.header))


def read_exr_header(path: Path) -> dict[str, Any]:
    """Values of the header of a picture that is whole; reads no pixels. Raises `InputError` as `read_exr` does."""
    check_whole(path, read_header(path))
    import OpenEXR

    try:
        with library_silenced():
            file = OpenEXR.File(str(path), separate_channels=True, header_only=True)
            return dict(file.parts[0].header)
    except (RuntimeError, IndexError):
        raise refused(path, "the picture's header is damaged", WHOLE) from None


def colour_of(path: Path, picture: ExrPicture) -> Floats:
    """(rows, columns, 3): channels R, G, B, or Y thrice. Raises `InputError` where neither is there."""
    channels = picture.channels
    names = ("R", "G", "B") if {"R", "G", "B"} <= channels.keys() else ("Y", "Y", "Y")
    if names[0] not in channels:
        has = ", ".join(list(channels)[:6]) + (", ..." if len(channels) > 6 else "")
        raise refused(path, f"the picture has no colour: its channels are {has}", "channels R, G and B, or Y")
    shapes = {channels[name].shape for name in names}
    if len(shapes) != 1 or {"RY", "BY"} & channels.keys():
        raise refused(path, "the picture's colour is stored at less than full resolution", "channels R, G and B")
    return np.stack([channels[name].astype(np.float64) for name in names], axis=-1)
