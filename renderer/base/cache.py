"""Where compiled kernels are kept between runs, and what the compiler may assume of the processor."""

from __future__ import annotations

import hashlib
import os
import platform
import sys
import tempfile
from functools import cache
from importlib.metadata import version
from pathlib import Path

PACKAGE = Path(__file__).resolve().parent.parent
MARK = b"renderer.base.jit import"


@cache
def kernel_fingerprint() -> str:
    """A hash of every source file that holds kernels, and of the versions that compile them.

    Numba does not notice an edit in a helper of another file, so the folder's name carries all of them.
    """
    digest = hashlib.sha256()
    for path in sorted(PACKAGE.rglob("*.py")):
        source = path.read_bytes()
        if MARK in source or path.parent.name in ("base", "arrays"):
            digest.update(str(path.relative_to(PACKAGE)).encode() + b"\0" + source + b"\0")
    digest.update(f"{version('numba')} {version('numpy')} {sys.version_info[:2]}".encode())
    return digest.hexdigest()[:16]


def user_cache_folder() -> Path:
    """The folder of this user's caches; ANTISOLAR_CACHE overrides it; else a temporary one.

    Follows the XDG base directory specification on Linux.
    """
    chosen = os.environ.get("ANTISOLAR_CACHE")
    if chosen:
        return Path(chosen)
    base = os.environ.get("XDG_CACHE_HOME")
    return (Path(base) if base else Path(os.path.expanduser("~")) / ".cache") / "antisolar"


def writable(folder: Path) -> bool:
    """Whether `folder` exists or can be made, and a file can be written there."""
    try:
        folder.mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder):
            return True
    except OSError:
        return False


@cache
def cache_folder() -> Path:
    """The first writable place for caches: the user's, else one of this user's own under the temporary folder."""
    first = user_cache_folder()
    if writable(first):
        return first
    second = Path(tempfile.gettempdir()) / f"antisolar-{os.getuid() if hasattr(os, 'getuid') else 'user'}"
    second.mkdir(mode=0o700, parents=True, exist_ok=True)
    if hasattr(os, "getuid") and second.stat().st_uid != os.getuid():
        return Path(tempfile.mkdtemp(prefix="antisolar-"))
    return second


def cpu_level() -> str:
    """The processor level that kernels are compiled for, so that machines of one level agree to the bit.

    ANTISOLAR_CPU_LEVEL chooses; `native` leaves the choice to the compiler.
    """
    chosen = os.environ.get("ANTISOLAR_CPU_LEVEL")
    if chosen:
        return chosen
    return "x86-64-v3" if platform.machine().lower() in ("x86_64", "amd64") else "generic"


def kernel_folder() -> Path:
    """The folder for this version's compiled kernels."""
    checked = "-checked" if os.environ.get("NUMBA_BOUNDSCHECK") == "1" else ""
    return cache_folder() / f"kernels-{kernel_fingerprint()}-{cpu_level()}{checked}"


def prepare() -> None:
    """Tell Numba where to cache and what to compile for. Must run before numba is imported; later calls do nothing."""
    if "numba" in sys.modules:
        return
    os.environ.setdefault("NUMBA_CACHE_DIR", str(kernel_folder()))
    level = cpu_level()
    if level != "native":
        os.environ.setdefault("NUMBA_CPU_NAME", level)
        os.environ.setdefault("NUMBA_CPU_FEATURES", "")
