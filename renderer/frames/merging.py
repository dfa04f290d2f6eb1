"""Portions of a frame, from one machine or many, merged to the finished picture."""

from __future__ import annotations

import time
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

from renderer.base.errors import Fault, InputError, Interrupted
from renderer.frames.engine import Engine, transport_engine
from renderer.frames.events import PictureSaved, Progress, Warned, no_progress
from renderer.frames.finishing import Finish, frame_error_of, write_picture
from renderer.frames.identity import Identity, identity_of
from renderer.frames.names import portion_folder
from renderer.frames.options import RenderOptions
from renderer.frames.portions import Found, chosen, found_portions
from renderer.frames.render import FrameResult
from renderer.frames.resuming import Kept, Warn, take_kept, versions_text
from renderer.frames.round_ranges import Ranges, count, joined, missing, text
from renderer.frames.work import Work
from renderer.pictures.sums import empty_sums, quantum_of
from renderer.shot.model import FrameShot


@dataclass(frozen=True)
class _Choice:
    """Portions that make the frame, and the identities that they are of."""

    found: tuple[Found, ...]
    identities: tuple[Identity, ...]


def merge_frame(
    shot: FrameShot,
    out: Path,
    options: RenderOptions | None = None,
    *,
    mix: bool = False,
    progress: Progress = no_progress,
    engine: Engine | None = None,
) -> FrameResult:
    """Write the picture of a frame from the portions in `out`; the bytes are those of a run on one machine.

    Of `options`, rounds, seed, half, preview and threads count. Portions of different processors or versions are
    refused unless `mix`: their sum is as good, but its bits are nobody's.

    Raises
    ------
    InputError
        Where portions do not go together, or there is none.
    Interrupted
        Where rounds are missing: the frame is incomplete.
    """
    chosen_options = options or RenderOptions()
    started = time.monotonic()

    def warn(sentence: str) -> None:
        progress(Warned(shot.frame, sentence))

    wanted: Ranges = ((0, chosen_options.wanted_rounds(shot.settings.rounds)),)
    choice = _choose(shot, Path(out), identity_of(shot, chosen_options.seed), wanted, mix, warn)
    engine = engine or transport_engine()
    engine.use_threads(chosen_options.threads)
    scene = engine.assemble(shot)
    _, _, columns, rows = shot.camera.window
    sums = empty_sums(rows, columns, len(engine.kinds), len(shot.settings.wavelengths_nm))
    work = Work(sums, quantum_of(scene.reference_radiance), (), {})
    take_kept(work, Kept(list(choice.found)), shot.camera.window, engine.kinds, warn)
    _refuse_missing(shot, work.rounds, wanted)
    finish = Finish(engine, scene, choice.identities, "rounds", chosen_options)
    path, preview = write_picture(Path(out), shot, work, finish)
    seconds = time.monotonic() - started
    progress(PictureSaved(shot.frame, path, preview, count(work.rounds), "rounds", seconds))
    error = frame_error_of(work.accumulated())
    return FrameResult(
        shot.frame, path, preview, count(work.rounds), 0, "rounds", error, work.tally, tuple(scene.notes), seconds
    )  # fmt: skip


def _choose(shot: FrameShot, out: Path, here: Identity, wanted: Ranges, mix: bool, warn: Warn) -> _Choice:
    """The portions to add: all of one identity where one has every round, else of several where that is allowed."""
    found, torn = found_portions(out, shot, warn)
    fitting = [one for one in found if one.facts.identity.same_work(here)]
    if not fitting:
        raise InputError(_nothing(shot, out, found, torn))
    identities = sorted({one.facts.identity for one in fitting}, key=lambda one: (one != here, one.mark))
    for identity in identities:
        own = chosen([one for one in fitting if one.facts.identity == identity], wanted)
        if not missing(_rounds(own), wanted):
            return _Choice(tuple(own), (identity,))
    together = chosen(fitting, wanted)
    if len(identities) > 1 and not mix:
        _refuse_missing(shot, _rounds(together), wanted)
        kinds = "; ".join(f"{one.cpu_level}, {versions_text(one)}" for one in identities)
        what = f"frame {shot.frame}: portions of different processors or versions do not go together"
        raise InputError(Fault(what, str(portion_folder(out, shot)), f"portions of one kind, or --mix ({kinds})"))
    used = {one.facts.identity for one in together}
    return _Choice(tuple(together), tuple(one for one in identities if one in used))


def _rounds(found: Sequence[Found]) -> Ranges:
    """All rounds of some portions that do not overlap."""
    return joined(pair for one in found for pair in one.facts.rounds)


def _refuse_missing(shot: FrameShot, rounds: Ranges, wanted: Ranges) -> None:
    """Raise `Interrupted` that names the rounds that no portion has."""
    gaps = missing(rounds, wanted)
    if gaps:
        what = f"frame {shot.frame} is incomplete: no portion has rounds {text(gaps)} of {count(wanted)}"
        raise Interrupted(what)


def _nothing(shot: FrameShot, out: Path, found: Sequence[Found], torn: Sequence[Path]) -> Fault:
    """Why no portion can be used."""
    folder = str(portion_folder(out, shot))
    if found:
        what = f"frame {shot.frame}: the portions are of another state of the shot, or of another seed"
        return Fault(what, folder, "portions that were rendered from the shot as it is now")
    what = f"frame {shot.frame} has no portion" + (" that is whole" if torn else "")
    return Fault(what, folder, 'portions from "antisolar render --portion K/N"')
