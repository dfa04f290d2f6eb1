"""Keyed values: what a number, a vector or a colour is at a time between its keys."""

from __future__ import annotations

from bisect import bisect_right
from dataclasses import dataclass


@dataclass(frozen=True)
class Keys:
    """Values at whole frames, rising; held before the first and after the last.

    Between two keys each number goes in a straight line, or with `ease` along 3 t^2 - 2 t^3, which leaves and arrives
    at rest. Nothing wraps: from 350 to 10 degrees goes back through 180. Only sums and products are used, so the
    result is the same on every machine.
    """

    frames: tuple[int, ...]
    values: tuple[tuple[float, ...], ...]  # all of one length
    ease: bool = False

    def span(self, time: float) -> tuple[int, int, float]:
        """The keys before and after `time` [frames], and how far between them it is, from 0 to 1."""
        after = bisect_right(self.frames, time)
        if after == 0:
            return 0, 0, 0.0
        before = after - 1
        if after == len(self.frames) or self.frames[before] == time:
            return before, before, 0.0
        share = (time - self.frames[before]) / (self.frames[after] - self.frames[before])
        return before, after, share * share * (3.0 - 2.0 * share) if self.ease else share

    def at(self, time: float) -> tuple[float, ...]:
        """The values at `time` [frames]; a key's own frame gives the key's own value to the bit."""
        before, after, share = self.span(time)
        if before == after:
            return self.values[before]
        pairs = zip(self.values[before], self.values[after], strict=True)
        return tuple(between(a, b, share) for a, b in pairs)


def between(a: float, b: float, share: float) -> float:
    """From a to b, never outside them, without overflow where both are finite."""
    value = a * (1.0 - share) + b * share
    return min(max(value, min(a, b)), max(a, b))


Scalar = float | Keys
Values = tuple[float, ...] | Keys


def number_at(value: Scalar, time: float) -> float:
    """A number at `time` [frames]."""
    return value.at(time)[0] if isinstance(value, Keys) else value


def values_at(value: Values, time: float) -> tuple[float, ...]:
    """A vector or colour at `time` [frames]."""
    return value.at(time) if isinstance(value, Keys) else value
