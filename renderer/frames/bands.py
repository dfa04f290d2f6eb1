"""Rows rendered in one call: so many that a call takes a fraction of a second. Never changes a bit."""

from __future__ import annotations

CALL_S = 0.2  # what a call aims for; kernels must be back within half a second, to be stopped or shown
FIRST_ROWS = 4
MOST_GROWTH = 4.0  # from one call to the next


class Bands:
    """How many rows to render next, from how long the last ones took."""

    def __init__(self) -> None:
        self.rows = float(FIRST_ROWS)

    def next(self, row: int, rows: int) -> int:
        """Where the band that begins at `row` ends."""
        return min(row + max(1, int(self.rows)), rows)

    def took(self, rows: int, seconds: float) -> None:
        """Learn from a call."""
        wanted = rows * CALL_S / max(seconds, 1e-6)
        self.rows = max(1.0, min(wanted, MOST_GROWTH * max(self.rows, 1.0)))
