"""A frame that is rendered in this process and refined round by round, its picture at hand after each."""

from __future__ import annotations

from collections.abc import Sequence
from os import PathLike

import numpy as np
import numpy.typing as npt

from renderer.frames.bands import Bands
from renderer.frames.engine import Engine, transport_engine
from renderer.frames.identity import identity_of
from renderer.frames.work import Rounds, Work
from renderer.pictures.developing import developed, development_of
from renderer.pictures.errors_of_mean import standard_error
from renderer.pictures.sums import empty_sums, quantum_of
from renderer.shot import load_shot
from renderer.shot.model import FrameShot

Floats = npt.NDArray[np.float64]


class Session:
    """One frame of a shot, in memory. Nothing is written to disk.

    A session is used from one thread at a time; `cancel` alone may be called from another.

    Parameters
    ----------
    shot : FrameShot
        The frame, as `renderer.shot.Shot.at` gives it, or built by the host application.
    seed : int, optional
        Another seed than the shot's.
    threads : int, optional
        Threads of the kernels; all by default. Never changes a bit.
    engine : Engine, optional
        What renders rounds, in place of this project's transport.

    Raises
    ------
    InputError
        For whatever is wrong with the shot.

    Examples
    --------
    A loop that shows a picture getting better::

        session = Session.open("terrace.shot.toml", frame=1001)
        while session.rounds < 64 and session.refine():
            show(session.picture())
    """

    def __init__(
        self, shot: FrameShot, seed: int | None = None, threads: int | None = None, engine: Engine | None = None
    ) -> None:
        self.shot = shot
        self._engine = engine or transport_engine()
        self._engine.use_threads(threads)
        self._scene = self._engine.assemble(shot)
        self.notes: tuple[str, ...] = tuple(self._scene.notes)
        _, _, columns, rows = shot.camera.window
        size = (rows, columns, len(self._engine.kinds), len(shot.settings.wavelengths_nm))
        self._work = Work(empty_sums(*size), quantum_of(self._scene.reference_radiance), (), {})
        seed_of_work = identity_of(shot, seed).work_seed
        self._maker = Rounds(self._engine, self._scene, seed_of_work, self._work.quantum, empty_sums(*size), Bands())
        self._cancelled = False

    @classmethod
    def open(
        cls,
        path: str | PathLike[str],
        frame: int | None = None,
        variant: str | None = None,
        overrides: Sequence[str] = (),
        threads: int | None = None,
    ) -> Session:
        """A session on a frame of a shot file, the first one by default."""
        shot = load_shot(path, variant=variant, overrides=overrides)
        return cls(shot.at(shot.frames[0] if frame is None else frame), threads=threads)

    @property
    def rounds(self) -> int:
        """How many rounds are in the picture."""
        return sum(stop - start for start, stop in self._work.rounds)

    def refine(self, rounds: int = 1) -> bool:
        """Add rounds. False when `cancel` stopped it: finished rounds stay, the one in hand is dropped.

        Raises `FrameFailed` when samples are not finite numbers.
        """
        self._cancelled = False
        for _ in range(rounds):
            number = self.rounds
            tally = self._maker.render(number, lambda: self._cancelled, lambda number, rows: None)
            if tally is None:
                return False
            self._work.take(((number, number + 1),), self._maker.scratch, tally)
        return True

    def cancel(self) -> None:
        """Make a running `refine` return soon, within a band of rows; safe from any thread or signal handler."""
        self._cancelled = True

    def picture(self) -> Floats:
        """The picture so far, (rows, columns, 3) float64, linear in the shot's output space, exposed and balanced.

        Black before the first round. The array is the caller's own.
        """
        rows, columns = self._work.sums.size
        if not self.rounds:
            return np.zeros((rows, columns, 3))
        done = self._work.accumulated()
        how = development_of(self.shot.camera, self.shot.fps, self.shot.output_space, done.luminance())
        return developed(done.mean(done.sums.xyz), how)

    def luminance(self) -> Floats:
        """Luminance of the scene so far, (rows, columns), before exposure and white balance. [cd/m2]"""
        return self._work.accumulated().luminance() if self.rounds else np.zeros(self._work.sums.size)

    def luminance_error(self) -> Floats | None:
        """Standard error of `luminance` by pixel, (rows, columns) [cd/m2]; None before the second round."""
        done = self._work.accumulated()
        error = standard_error(done.sums.replicate_y, done.rounds_by_replicate) if self.rounds else None
        return None if error is None else error * done.quantum
