"""Ctrl-C and SIGTERM: the first asks the work to stop after the round in hand, a second ends it at once."""

from __future__ import annotations

import signal
from collections.abc import Iterator
from contextlib import contextmanager
from types import FrameType

from renderer.base.errors import Interrupted


class Stop:
    """Whether the work was asked to stop: `patient` work polls `asked` between rounds and saves, other work ends."""

    def __init__(self) -> None:
        self.asked = False
        self.patient = False

    def was_asked(self) -> bool:
        """Whether to stop now."""
        return self.asked

    def receive(self, number: int, frame: FrameType | None) -> None:
        """Take a signal."""
        if self.asked or not self.patient:
            raise Interrupted("stopped")
        self.asked = True


STOP = Stop()


@contextmanager
def listen_for_stops() -> Iterator[Stop]:
    """Take Ctrl-C and SIGTERM while the block runs, where signals can be taken (the main thread)."""
    STOP.asked = STOP.patient = False
    before = {}
    try:
        for number in (signal.SIGINT, signal.SIGTERM):
            before[number] = signal.signal(number, STOP.receive)
    except ValueError:  # not the main thread: whoever owns it takes the signals
        pass
    try:
        yield STOP
    finally:
        for number, handler in before.items():
            signal.signal(number, handler)
