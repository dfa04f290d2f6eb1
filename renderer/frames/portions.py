"""The portions of a frame on disk: finding them, choosing those that fit together, replacing those grown out of."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path

from renderer.frames.identity import Identity
from renderer.frames.names import PORTION_KIND, portion_folder, portion_path
from renderer.frames.portion_files import Portion, PortionFacts, Torn, read_facts, read_portion, write_portion
from renderer.frames.round_ranges import Ranges, count, overlap, within
from renderer.shot.model import FrameShot

Warn = Callable[[str], None]

MOST_PORTIONS = 100_000


@dataclass(frozen=True)
class Found:
    """A portion on disk, by its header."""

    path: Path
    facts: PortionFacts


def found_portions(out: Path, shot: FrameShot, warn: Warn) -> tuple[list[Found], list[Path]]:
    """Portions in the frame's folder whose header can be read, by name, and the torn ones, of which `warn` hears."""
    found: list[Found] = []
    torn: list[Path] = []
    for path in sorted(portion_folder(out, shot).glob(f"*{PORTION_KIND}"))[:MOST_PORTIONS]:
        try:
            found.append(Found(path, read_facts(path)))
        except Torn as error:
            warn(torn_text(path, error))
            torn.append(path)
    return found, torn


def torn_text(path: Path, error: Torn) -> str:
    """What is said of a portion that cannot be used."""
    return f"the portion {path.name} {error}; its rounds are rendered again"


def chosen(found: Sequence[Found], wanted: Ranges) -> list[Found]:
    """Portions within `wanted` of which no two hold the same round: the largest first, then by name."""
    kept: list[Found] = []
    for one in sorted(found, key=lambda one: (-count(one.facts.rounds), one.path.name)):
        if within(one.facts.rounds, wanted) and not any(overlap(one.facts.rounds, k.facts.rounds) for k in kept):
            kept.append(one)
    return sorted(kept, key=lambda one: one.facts.rounds)


def load(found: Found, warn: Warn) -> Portion | None:
    """A portion's sums; None, and `warn` is told, when the file turns out torn."""
    try:
        return read_portion(found.path)
    except Torn as error:
        warn(torn_text(found.path, error))
        return None


def save(out: Path, shot: FrameShot, portion: Portion, replaced: Sequence[Path]) -> Path:
    """Write a portion, then remove those that it holds all rounds of."""
    path = portion_path(out, shot, portion.facts.rounds, portion.facts.identity.mark)
    write_portion(path, portion)
    for old in replaced:
        if old != path:
            with suppress(OSError):  # another run may have removed it first
                old.unlink()
    return path


def of_other_shots(found: Sequence[Found], identity: Identity) -> list[Path]:
    """Portions that no picture of this shot can use any more: the shot, or a file it uses, has changed since."""
    return [one.path for one in found if one.facts.identity.fingerprint != identity.fingerprint]
