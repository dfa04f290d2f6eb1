"""The errors about a picture's file, worded in one way."""

from __future__ import annotations

from pathlib import Path

from renderer.base.errors import Fault, InputError
from renderer.pictures.limits import MAX_FILE_BYTES, MAX_PIXELS, MAX_SIDE


def refused(path: Path, what: str, expected: str = "") -> InputError:
    """The error about one picture."""
    return InputError(Fault(what, str(path), expected))


def check_file(path: Path, expected: str) -> int:
    """Size of the file [bytes]. Raises `InputError` when it is missing, a folder, empty, or beyond the limit."""
    try:
        size = path.stat().st_size
    except OSError as error:
        reason = "does not exist" if isinstance(error, FileNotFoundError) else f"cannot be opened ({error.strerror})"
        raise refused(path, f"the picture {reason}", expected) from None
    if not path.is_file():
        raise refused(path, "this is a folder, not a picture", expected)
    if size == 0:
        raise refused(path, "the picture cannot be read: its file is empty", expected)
    if size > MAX_FILE_BYTES:
        raise refused(path, f"the picture's file has {size / 1024**3:.1f} GiB", f"at most {MAX_FILE_BYTES >> 30} GiB")
    return size


def check_size(path: Path, columns: int, rows: int, most_pixels: int = MAX_PIXELS) -> None:
    """Raise `InputError` for a picture without pixels, or of more than the limit, by what its header states."""
    if columns < 1 or rows < 1:
        raise refused(path, f"the picture has {columns:,} x {rows:,} pixels", "at least one pixel")
    if columns > MAX_SIDE or rows > MAX_SIDE or columns * rows > most_pixels:
        raise refused(
            path,
            f"the picture's header states {columns:,} x {rows:,} pixels",
            f"1 to {most_pixels:,} in all, and at most {MAX_SIDE:,} a side",
        )
