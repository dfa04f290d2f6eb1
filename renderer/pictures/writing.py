"""Writing files so that they are there whole or not at all."""

from __future__ import annotations

import os
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path

from renderer.base.errors import Fault, InputError


@contextmanager
def replacing(path: Path) -> Iterator[Path]:
    """A temporary path beside `path`; when the block ends well, what it wrote there is on disk under its own name.

    Raises `InputError` where the folder cannot be made or written to, or the disk is full.
    """
    temporary = path.with_name(f".{path.name}.{os.getpid()}.writing")
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        try:
            yield temporary
            with temporary.open("rb+") as file:
                os.fsync(file.fileno())
            os.replace(temporary, path)
            _sync_folder(path.parent)
        finally:
            with suppress(OSError):
                temporary.unlink(missing_ok=True)
    except OSError as error:
        raise InputError(
            Fault(
                f"the file cannot be written ({error.strerror or error})", str(path), "a folder with room to write in"
            )
        ) from error


def _sync_folder(folder: Path) -> None:
    """Make the new name outlive a power cut, where the system can."""
    if os.name != "posix":
        return
    handle = os.open(folder, os.O_RDONLY)
    try:
        os.fsync(handle)
    finally:
        os.close(handle)
