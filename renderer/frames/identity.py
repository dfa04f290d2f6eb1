"""What a round's bits depend on: whatever has the same identity may be added together."""

from __future__ import annotations

import hashlib
import json
import platform
from dataclasses import asdict, dataclass

from renderer import __version__
from renderer.base import cache
from renderer.shot.model import FrameShot


@dataclass(frozen=True)
class Identity:
    """A frame of a shot, seeded, on one level of processor and one set of versions.

    `versions` are (name, version) pairs: ours, those of the libraries that compute, and a hash of our kernels.
    """

    fingerprint: str
    frame: int
    seed: int
    cpu_level: str
    versions: tuple[tuple[str, str], ...]

    @property
    def mark(self) -> str:
        """A short hash of it all, for file names."""
        return hashlib.sha256(json.dumps(asdict(self), sort_keys=True).encode()).hexdigest()[:8]

    @property
    def work_seed(self) -> int:
        """The seed that rounds are rendered with: a hash of seed and frame, in [0, 2^63)."""
        return frame_seed(self.seed, self.frame)

    def same_work(self, other: Identity) -> bool:
        """Whether both are of one frame and seed, whatever the machine and versions."""
        return (self.fingerprint, self.frame, self.seed) == (other.fingerprint, other.frame, other.seed)


def identity_of(shot: FrameShot, seed: int | None = None) -> Identity:
    """The identity of rounds that this machine renders; `seed` in place of the shot's own where given."""
    return Identity(
        fingerprint=shot.fingerprint,
        frame=shot.frame,
        seed=shot.settings.seed if seed is None else seed,
        cpu_level=cache.cpu_level(),
        versions=versions_here(),
    )


def versions_here() -> tuple[tuple[str, str], ...]:
    """The versions that can change a bit; the C library's, since its sines and exponentials are what paths use."""
    from importlib.metadata import version

    libraries = tuple((name, version(name)) for name in ("llvmlite", "numba", "numpy"))
    return (("antisolar", __version__), ("kernels", cache.kernel_fingerprint()), *libraries, ("libm", math_library()))


def math_library() -> str:
    """Name and version of the C library that elementary functions come from; the system's where that does not tell."""
    name, number = platform.libc_ver()
    return f"{name} {number}" if name else f"{platform.system()} {platform.release()}"


def frame_seed(seed: int, frame: int) -> int:
    """A 63-bit hash of seed and frame, so that no two frames share their noise."""
    digest = hashlib.sha256(f"antisolar seed {seed} frame {frame}".encode()).digest()
    return int.from_bytes(digest[:8], "big") >> 1
