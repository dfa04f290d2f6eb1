"""Kinds of values that options take: times such as 10m, and portions such as 2/8."""

from __future__ import annotations

import re

import click

UNITS_S = {"h": 3600.0, "m": 60.0, "s": 1.0, "": 1.0}
_PIECE = re.compile(r"(\d+(?:\.\d+)?)(h|m|s|)")


class Duration(click.ParamType):
    """A time: 90, 90s, 10m, 1.5h or 1h30m. Gives seconds."""

    name = "time"

    def convert(self, value: object, param: click.Parameter | None, context: click.Context | None) -> float:
        """The time in seconds."""
        if isinstance(value, float):
            return value
        text = str(value).strip().lower()
        pieces = _PIECE.findall(text)
        if not pieces or "".join(number + unit for number, unit in pieces) != text:
            self.fail(f'"{value}" is no time; write 90s, 10m or 1h30m', param, context)
        seconds = sum(float(number) * UNITS_S[unit] for number, unit in pieces)
        if not seconds > 0.0:
            self.fail("a time of 0 renders nothing", param, context)
        return seconds


class Portion(click.ParamType):
    """A portion of a frame's rounds: K/N, with K from 1 to N. Gives (K, N)."""

    name = "portion"

    def convert(self, value: object, param: click.Parameter | None, context: click.Context | None) -> tuple[int, int]:
        """Which portion, of how many."""
        if isinstance(value, tuple):
            return value
        match = re.fullmatch(r"(\d{1,7})/(\d{1,7})", str(value).strip())
        if match is None or not 1 <= int(match[1]) <= int(match[2]):
            self.fail(f'"{value}" is no portion; write K/N with K from 1 to N, as in 2/8', param, context)
        return int(match[1]), int(match[2])
