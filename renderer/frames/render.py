"""One frame of a shot, rendered: what is on disk is kept, missing rounds are added, the picture is written.

Rounds are whole or not there; sums are exact. So threads, portions, machines, the order of rounds and a run that is
killed and taken up again all give the same picture, bit for bit.
"""

from __future__ import annotations

import time
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from renderer.base.errors import Fault, InputError, Interrupted
from renderer.frames.bands import Bands
from renderer.frames.engine import Engine, transport_engine
from renderer.frames.events import (
    Compiling,
    FrameSkipped,
    FrameStarted,
    PictureSaved,
    PortionSaved,
    Progress,
    RoundDone,
    RowsDone,
    SceneReady,
    Warned,
    no_progress,
)
from renderer.frames.finishing import Finish, frame_error_of, write_picture
from renderer.frames.identity import identity_of
from renderer.frames.names import log_path, picture_path, preview_path
from renderer.frames.options import RenderOptions
from renderer.frames.portion_files import Portion, PortionFacts
from renderer.frames.portions import found_portions, of_other_shots, save
from renderer.frames.resuming import Kept, covering, finished_picture, kept_portions, take_kept
from renderer.frames.round_ranges import Ranges, count, group, joined, missing
from renderer.frames.run_log import logged
from renderer.frames.work import FrameFailed, Rounds, ShouldStop, Work
from renderer.pictures.sums import Sums, empty_sums, quantum_of
from renderer.shot.model import FrameShot

LOOK_EVERY = 8  # rounds between looks at the standard error: one for each replicate


@dataclass(frozen=True)
class FrameResult:
    """What became of a frame. `path` is the picture, or the portion where only that was asked for.

    `stopped_by`: rounds, standard error or time; "there already" where nothing was to do. `rendered_rounds` counts
    this run's own. `tally` counts what happened in all rounds, by name.
    """

    frame: int
    path: Path
    preview: Path | None
    rounds: int
    rendered_rounds: int
    stopped_by: str
    standard_error: float | None
    tally: dict[str, int]
    notes: tuple[str, ...]
    seconds: float


def never() -> bool:
    """Never asks to stop."""
    return False


def render_frame(
    shot: FrameShot,
    out: Path,
    options: RenderOptions | None = None,
    *,
    progress: Progress = no_progress,
    should_stop: ShouldStop = never,
    engine: Engine | None = None,
) -> FrameResult:
    """Render a frame into the folder `out`, or one portion of it.

    Raises
    ------
    InputError
        For whatever a user can get wrong; nothing on disk is lost.
    Interrupted
        When `should_stop` said so: finished rounds are on disk, and the next call goes on from there.
    FrameFailed
        When samples are not finite numbers.
    """
    return _Frame(shot, Path(out), options or RenderOptions(), progress, should_stop, engine).run()


class _Frame:
    """A frame while it is worked on."""

    def __init__(
        self,
        shot: FrameShot,
        out: Path,
        options: RenderOptions,
        progress: Progress,
        should_stop: ShouldStop,
        engine: Engine | None,
    ) -> None:
        self.shot, self.out, self.options = shot, out, options
        self.should_stop = should_stop
        self.identity = identity_of(shot, options.seed)
        self.rounds = options.wanted_rounds(shot.settings.rounds)
        self.wanted: Ranges = joined([group(self.rounds, *options.portion) if options.portion else (0, self.rounds)])
        self.progress = progress
        self.engine = engine
        self.started = self.saved_at = time.monotonic()
        self.unsaved = 0
        self.rendered = 0

    def warn(self, text: str) -> None:
        """Tell a person something, and go on."""
        self.progress(Warned(self.shot.frame, text))

    def run(self) -> FrameResult:
        """Do whatever is left to do."""
        if not self.wanted:
            k, n = self.options.portion or (1, 1)
            what = f"portion {k}/{n} of {self.rounds} rounds has no round"
            raise InputError(Fault(what, "--portion", f"N up to {self.rounds}"))
        there = None if self.options.overwrite else self.there()
        return there or self.work()

    def there(self) -> FrameResult | None:
        """The result where what is asked for is on disk already."""
        return self.portion_there() if self.options.portion else self.picture_there()

    def portion_there(self) -> FrameResult | None:
        """The result where a portion on disk holds all the rounds of the one asked for."""
        found = covering(self.out, self.shot, self.identity, self.wanted, self.warn)
        if found is None:
            return None
        return self.skipped(found.path, None, count(found.facts.rounds), None)

    def picture_there(self) -> FrameResult | None:
        """The result where the picture is on disk, and as good as asked for."""
        path = picture_path(self.out, self.shot)
        facts = finished_picture(path, self.identity, self.rounds, self.options, self.warn)
        if facts is None:
            return None
        return self.skipped(path, preview_path(self.out, self.shot), int(facts["rounds"]), facts.get("frameError"))

    def skipped(self, path: Path, preview: Path | None, rounds: int, error: float | None) -> FrameResult:
        """The result where there is nothing to do."""
        self.progress(FrameSkipped(self.shot.frame, path, rounds))
        return FrameResult(self.shot.frame, path, preview, rounds, 0, "there already", error, {}, (), self.seconds())

    def work(self) -> FrameResult:
        """Assemble, take what is kept, render the rest, save."""
        engine = self.engine = self.engine or transport_engine()
        threads = engine.use_threads(self.options.threads)
        self.progress = logged(self.progress, log_path(self.out, self.shot), threads)
        kept = Kept() if self.options.overwrite else self.kept()
        kept_rounds = sum(count(one.facts.rounds) for one in kept.found)
        self.progress(FrameStarted(self.shot.frame, kept_rounds, count(self.wanted)))
        scene = self.assembled(engine)
        work = self.empty_work(engine, scene)
        take_kept(work, kept, self.shot.camera.window, engine.kinds, self.warn)
        stopped_by = self.render_missing(engine, scene, work, kept)
        if self.options.portion or self.options.keep_portions:
            self.save_unsaved(work, kept, engine)
        if self.options.portion:
            return self.result(kept.paths[0], None, work, scene, stopped_by)
        finish = Finish(engine, scene, (self.identity,), stopped_by, self.options)
        path, preview = write_picture(self.out, self.shot, work, finish)
        self.tidy(kept)
        self.progress(PictureSaved(self.shot.frame, path, preview, count(work.rounds), stopped_by, self.seconds()))
        return self.result(path, preview, work, scene, stopped_by)

    def kept(self) -> Kept:
        """What earlier runs left."""
        return kept_portions(self.out, self.shot, self.identity, self.wanted, self.warn)

    def assembled(self, engine: Engine) -> Any:
        """The scene's arrays."""
        if not engine.is_compiled():
            self.progress(Compiling(self.shot.frame))
        started = time.monotonic()
        scene = engine.assemble(self.shot)
        self.progress(SceneReady(self.shot.frame, time.monotonic() - started, tuple(scene.notes)))
        return scene

    def empty_work(self, engine: Engine, scene: Any) -> Work:
        """Work without a round."""
        return Work(self.sums(engine), quantum_of(scene.reference_radiance), (), {})

    def sums(self, engine: Engine) -> Sums:
        """Empty sums of the camera's window. Raises `InputError` where memory does not suffice."""
        _, _, columns, rows = self.shot.camera.window
        n_bins = len(self.shot.settings.wavelengths_nm)
        try:
            return empty_sums(rows, columns, len(engine.kinds), n_bins)
        except MemoryError:
            what = f"the sums of {columns:,} x {rows:,} pixels do not fit this machine's memory"
            raise InputError(Fault(what, str(self.shot.source), "fewer pixels, or a crop")) from None

    def render_missing(self, engine: Engine, scene: Any, work: Work, kept: Kept) -> str:
        """Render until the rounds are there, or something says that it is enough; gives what that was."""
        if self.good_enough(self.look(work)):
            return "standard error"
        todo = missing(work.rounds, self.wanted)
        if not todo:
            return "rounds"
        maker = Rounds(engine, scene, self.identity.work_seed, work.quantum, self.sums(engine), Bands())
        try:
            return self.rounds_until_enough(maker, work, todo, kept, engine)
        except (Interrupted, KeyboardInterrupt) as stop:
            self.save_unsaved(work, kept, engine)
            n = count(work.rounds)
            text = f"frame {self.shot.frame}: stopped; {n} of {count(self.wanted)} rounds are done and kept"
            raise Interrupted(text) from stop
        except (FrameFailed, InputError):
            self.save_unsaved(work, kept, engine)
            raise

    def rounds_until_enough(self, maker: Rounds, work: Work, todo: Ranges, kept: Kept, engine: Engine) -> str:
        """Render rounds one by one; gives what ended it."""
        for number in (number for first, stop in todo for number in range(first, stop)):
            if self.good_enough(self.one_round(maker, number, work)):
                return "standard error"
            if self.out_of_time() and number + 1 < todo[-1][1]:
                return "time"
            if time.monotonic() - self.saved_at >= self.options.save_every_s:  # so that a power cut costs minutes
                self.save(work, kept, engine)
        return "rounds"

    def one_round(self, maker: Rounds, number: int, work: Work) -> float | None:
        """Render one round and add it; gives the frame's standard error where it is looked at.

        Raises `Interrupted` when asked to stop before the round's end.
        """
        started = time.monotonic()
        rows = maker.scratch.size[0]
        tally = maker.render(
            number, self.should_stop, lambda r, done: self.progress(RowsDone(self.shot.frame, r, done, rows))
        )
        if tally is None:
            raise Interrupted("stopped")
        work.take(((number, number + 1),), maker.scratch, tally)
        self.rendered += 1
        self.unsaved += 1
        error = self.look(work)
        seconds = time.monotonic() - started
        self.progress(RoundDone(self.shot.frame, count(work.rounds), count(self.wanted), seconds, error))
        return error

    def look(self, work: Work) -> float | None:
        """The frame's standard error where it is a target, after every eighth round with none missing before it."""
        n = count(work.rounds)
        if self.options.standard_error is None or n == 0 or n % LOOK_EVERY or work.rounds != ((0, n),):
            return None
        return frame_error_of(work.accumulated())

    def good_enough(self, error: float | None) -> bool:
        """Whether the frame is as sure of itself as was asked for."""
        target = self.options.standard_error
        return target is not None and error is not None and error <= target

    def out_of_time(self) -> bool:
        """Whether this frame's time is up."""
        return self.options.stop_after_s is not None and self.seconds() >= self.options.stop_after_s

    def save_unsaved(self, work: Work, kept: Kept, engine: Engine) -> None:
        """Put rounds that were finished since the last save on disk, and several portions in one."""
        if work.whole and (self.unsaved or len(kept.paths) > 1):
            self.save(work, kept, engine)

    def save(self, work: Work, kept: Kept, engine: Engine) -> Path:
        """Write all rounds of the work as one portion, in place of those it was made of."""
        facts = PortionFacts(
            self.identity, work.rounds, self.shot.camera.window, work.quantum, engine.kinds, work.tally
        )
        path = save(self.out, self.shot, Portion(facts, work.sums), kept.paths)
        kept.paths[:] = [path]
        self.unsaved, self.saved_at = 0, time.monotonic()
        self.progress(PortionSaved(self.shot.frame, path, path.name.split(".")[0]))
        return path

    def tidy(self, kept: Kept) -> None:
        """Remove portions that no picture of this shot can use any more."""
        found, _ = found_portions(self.out, self.shot, lambda text: None)
        stale = of_other_shots(found, self.identity)
        if not self.options.keep_portions:
            stale += kept.paths
        for path in stale:
            path.unlink(missing_ok=True)

    def seconds(self) -> float:
        """Since work on the frame began."""
        return time.monotonic() - self.started

    def result(self, path: Path, preview: Path | None, work: Work, scene: Any, stopped_by: str) -> FrameResult:
        """What is handed back."""
        error = frame_error_of(work.accumulated())
        return FrameResult(
            self.shot.frame, path, preview, count(work.rounds), self.rendered, stopped_by, error, work.tally,
            tuple(scene.notes), self.seconds(),
        )  # fmt: skip
