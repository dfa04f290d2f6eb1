"""The files that a shot names: where they may lie, whether they are there, and what is in them."""

from __future__ import annotations

import hashlib
import json
import os
import re
from collections.abc import Sequence
from pathlib import Path
from urllib.parse import unquote

from renderer.shot.schema.flaws import KEY, Flaw, clean, nearest

_MARKS = re.compile(r"#+")
LARGEST_GLTF = 64 * 1024 * 1024  # bytes of JSON
MOST_NEIGHBOURS = 10_000  # files of a folder that are looked at for a nearest name


def has_frame(name: str) -> bool:
    """Whether a path changes with the frame."""
    return "#" in name


def at_frame(name: str, frame: int) -> str:
    """A path with the frame number in the place of each run of ``#``, as many digits as there are marks."""
    return _MARKS.sub(lambda marks: f"{frame:0{len(marks[0])}d}", name)


class Files:
    """The folder of a shot and the other folders that its paths may lead into. Contents are hashed once a file."""

    def __init__(self, folder: Path, roots: Sequence[Path] = ()) -> None:
        self.folder = folder
        self.bases = tuple(os.path.realpath(base) for base in (folder, *roots))
        self._found: dict[str, Path | Flaw] = {}
        self._hashes: dict[tuple[str, int, int], str] = {}

    def outside(self, name: str) -> Flaw | None:
        """The flaw of a path that leads out of every folder it may lead into, read as text alone."""
        plain = os.path.abspath(self.folder / name)
        places = (*self.bases, *(os.path.abspath(base) for base in (self.folder,)))
        if any(_within(plain, base) for base in places) or any(
            _within(os.path.realpath(plain), base) for base in self.bases
        ):
            return None
        expected = "a path inside the shot file's folder, or inside a folder given by --root"
        return Flaw((), f"`{KEY}` leads out of the shot's folder", expected)

    def find(self, name: str, frame: int) -> Path | Flaw:
        """The file of that name at a frame, or what is wrong with it."""
        actual = at_frame(name, frame)
        if actual not in self._found:
            self._found[actual] = self._look(actual, frame)
        return self._found[actual]

    def _look(self, name: str, frame: int) -> Path | Flaw:
        path = self.folder / name
        flaw = self.outside(name)
        if flaw is not None:
            return flaw
        try:
            real = os.path.realpath(path)
            if not any(_within(real, base) for base in self.bases):
                expected = "a file that lies there itself, or a folder given by --root"
                return Flaw((), f"`{KEY}` leads out of the shot's folder through a symbolic link", expected)
            if os.path.isfile(real):
                return path
            what = (
                "is a folder"
                if os.path.isdir(real)
                else "is no plain file"
                if os.path.exists(real)
                else "does not exist"
            )
        except (OSError, ValueError):
            what = "cannot be looked up"
        return Flaw(
            (),
            f'the file "{clean(name, 200)}" of frame {frame} {what}',
            "a file, relative to the shot file",
            _near(path),
        )

    def content(self, path: Path) -> str:
        """SHA-256 of a file's content, and of the buffers beside it where it is a .gltf, in hexadecimal."""
        hashes = [self._hash(file) for file in (path, *buffers_beside(path))]
        return hashes[0] if len(hashes) == 1 else hashlib.sha256(" ".join(hashes).encode("ascii")).hexdigest()

    def _hash(self, path: Path) -> str:
        real = os.path.realpath(path)
        state = os.stat(real)
        key = (real, state.st_mtime_ns, state.st_size)
        if key not in self._hashes:
            with open(real, "rb") as file:
                self._hashes[key] = hashlib.file_digest(file, "sha256").hexdigest()
        return self._hashes[key]


def buffers_beside(path: Path) -> list[Path]:
    """The files, beside a .gltf or below its folder, that hold its buffers; none for any other file.

    What is broken about them is told by whoever reads the mesh.
    """
    if path.suffix.lower() != ".gltf" or path.stat().st_size > LARGEST_GLTF:
        return []
    try:
        buffers = json.loads(path.read_bytes().decode("utf-8"))["buffers"]
        names = [str(buffer["uri"]) for buffer in buffers if not str(buffer.get("uri", "data:")).startswith("data:")]
    except (ValueError, LookupError, TypeError, AttributeError, RecursionError):
        return []
    base = os.path.realpath(path.parent)
    files = [Path(os.path.realpath(path.parent / unquote(name))) for name in names if "\0" not in name]
    return [file for file in files if _within(str(file), base) and file.is_file()]


def _within(path: str, base: str) -> bool:
    return path == base or path.startswith(base.rstrip(os.sep) + os.sep)


def _near(path: Path) -> str:
    """The nearest name in the same folder."""
    try:
        with os.scandir(path.parent) as items:
            names = [item.name for _, item in zip(range(MOST_NEIGHBOURS), items, strict=False)]
    except OSError:
        return ""
    return nearest(path.name, [name for name in names if name != path.name])
