"""How frames are to be rendered, as the command line or another application asks for it."""

from __future__ import annotations

from dataclasses import dataclass

from renderer.base.errors import Fault, InputError

MOST_ROUNDS = 1_000_000
ROUNDS_FOR_TARGET = 4_096  # with a target for the standard error, and no number of rounds


@dataclass(frozen=True)
class RenderOptions:
    """None takes the shot's own, or no limit.

    `rounds`: how many, or at most how many where `standard_error` is a target (the frame's, see
    `pictures.errors_of_mean.frame_error`; looked at after every eighth round). `stop_after_s`: for each frame; the
    picture then has the rounds that were done, at least one. `portion`: (k, n), only that group of the rounds, and no
    picture. `overwrite`: begin afresh whatever is there. `half`: colours as half floats. `keep_portions`: leave sums
    on disk beside finished pictures, so that rounds can be added later. `threads` never changes a bit.
    """

    rounds: int | None = None
    seed: int | None = None
    standard_error: float | None = None
    stop_after_s: float | None = None
    portion: tuple[int, int] | None = None
    overwrite: bool = False
    half: bool = False
    preview: bool = True
    keep_portions: bool = True
    threads: int | None = None
    save_every_s: float = 300.0

    def __post_init__(self) -> None:
        """Raise `InputError` for what cannot be."""
        if self.rounds is not None and not 1 <= self.rounds <= MOST_ROUNDS:
            raise _refused("--rounds", f"{self.rounds}", f"1 to {MOST_ROUNDS:,}")
        if self.standard_error is not None and not 0.0 < self.standard_error < 1.0:
            raise _refused("--standard-error", f"{self.standard_error}", "a share between 0 and 1, as in 0.02")
        if self.stop_after_s is not None and not self.stop_after_s > 0.0:
            raise _refused("--stop-after", f"{self.stop_after_s} s", "a time above 0")
        if self.portion is not None:
            self._check_portion(*self.portion)

    def _check_portion(self, k: int, n: int) -> None:
        if not 1 <= k <= n:
            raise _refused("--portion", f"{k}/{n}", "K/N with K from 1 to N, as in 2/8")
        if self.standard_error is not None:
            raise _refused("--portion", "a group of rounds beside a target for the standard error", "one of the two")

    def wanted_rounds(self, of_shot: int) -> int:
        """How many rounds a frame is to have, at most."""
        if self.rounds is not None:
            return self.rounds
        return max(of_shot, ROUNDS_FOR_TARGET) if self.standard_error is not None else of_shot


def _refused(where: str, what: str, expected: str) -> InputError:
    return InputError(Fault(f"{what} cannot be", where, expected))
