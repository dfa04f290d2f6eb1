"""What of a frame is on disk already: a picture that will do, or rounds to go on from."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from renderer.base.errors import Fault, InputError
from renderer.frames.identity import Identity
from renderer.frames.options import RenderOptions
from renderer.frames.portion_files import Portion, Torn, check_digest
from renderer.frames.portions import Found, chosen, found_portions, load, torn_text
from renderer.frames.round_ranges import Ranges, overlap, within
from renderer.frames.work import Work
from renderer.shot.model import FrameShot

Warn = Callable[[str], None]


@dataclass
class Kept:
    """Portions that a run may use. `paths` are those that were added, and torn ones: the next save replaces them.

    `spare` hold rounds of `found` again, as when a run was killed between writing a portion and removing those in it.
    """

    found: list[Found] = field(default_factory=list)
    paths: list[Path] = field(default_factory=list)
    spare: list[Found] = field(default_factory=list)


def facts_of_picture(path: Path) -> dict[str, Any] | None:
    """Our own attributes of a picture on disk; None where there is no file. Raises `InputError` where it is broken."""
    from renderer.pictures.exr_reading import read_exr_header
    from renderer.pictures.exr_writing import facts_of

    return facts_of(read_exr_header(path)) if path.exists() else None


def finished_picture(
    path: Path, identity: Identity, rounds: int, options: RenderOptions, warn: Warn
) -> dict[str, Any] | None:
    """The facts of a picture on disk that is as good as what is asked for; None where there is work to do.

    Raises `InputError` for a file in the picture's place that is not a picture of ours: nothing of others is replaced
    unasked.
    """
    try:
        facts = facts_of_picture(path)
    except InputError as error:
        warn(f"{path.name}: {error.faults[0].what}; it is made again")
        return None
    if facts is None:
        return None
    if "fingerprint" not in facts:
        raise InputError(Fault("a picture of something else is in the way", str(path), "another --out, or --overwrite"))
    wanted = [identity.fingerprint, str(identity.frame), str(identity.seed)]
    same = [str(facts.get(name)) for name in ("fingerprint", "frame", "seed")] == wanted
    if not same or facts.get("colourType") != ("half" if options.half else "float"):
        return None
    within_target = options.standard_error is not None and float(facts.get("frameError", 1.0)) <= options.standard_error
    if int(facts.get("rounds", 0)) < rounds and not within_target:
        return None
    if (facts.get("versions"), facts.get("cpuLevel")) != (versions_text(identity), identity.cpu_level):
        warn(f"{path.name} was made by other versions or for another processor; --overwrite makes it anew")
    return facts


def versions_text(identity: Identity) -> str:
    """The versions as a picture's metadata has them."""
    return ", ".join(f"{name} {number}" for name, number in identity.versions)


def kept_portions(
    out: Path, shot: FrameShot, identity: Identity, wanted: Ranges, warn: Warn, others: bool = False
) -> Kept:
    """Portions of this identity within the wanted rounds, no round twice; with `others`, of other machines too."""
    found, torn = found_portions(out, shot, warn)
    fitting = [one for one in found if fits(one.facts.identity, identity, others)]
    used = chosen(fitting, wanted)
    return Kept(used, torn, [one for one in fitting if one not in used and within(one.facts.rounds, wanted)])


def fits(found: Identity, identity: Identity, others: bool) -> bool:
    """Whether rounds of one identity may be added to those of the other."""
    return found.same_work(identity) if others else found == identity


def covering(out: Path, shot: FrameShot, identity: Identity, wanted: Ranges, warn: Warn) -> Found | None:
    """A portion on disk, whole, that holds all of the wanted rounds and perhaps more."""
    found, _ = found_portions(out, shot, warn)
    for one in found:
        if one.facts.identity == identity and within(wanted, one.facts.rounds):
            try:
                check_digest(one.path)
            except Torn as error:
                warn(torn_text(one.path, error))
            else:
                return one
    return None


def take_kept(work: Work, kept: Kept, window: tuple[int, ...], kinds: Sequence[str], warn: Warn) -> None:
    """Add portions to the work; torn ones, and ones on another grid, are told of and left out."""
    for one in kept.found:
        if overlap(work.rounds, one.facts.rounds):
            continue
        portion = load(one, warn)
        if portion is not None and not _on_one_grid(portion, work, window, kinds):
            warn(torn_text(one.path, Torn("is on another grid or of another window")))
            portion = None
        if portion is not None:
            work.take(portion.facts.rounds, portion.sums, portion.facts.tally)
        kept.paths.append(one.path)
    kept.paths += [one.path for one in kept.spare if within(one.facts.rounds, work.rounds)]


def _on_one_grid(portion: Portion, work: Work, window: tuple[int, ...], kinds: Sequence[str]) -> bool:
    """Whether a portion's whole numbers mean the same as ours."""
    facts = portion.facts
    return (
        facts.quantum == work.quantum
        and facts.window == tuple(window)
        and facts.kinds == tuple(kinds)
        and portion.sums.bins.shape == work.sums.bins.shape
    )
