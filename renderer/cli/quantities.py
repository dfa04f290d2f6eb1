"""Kinds of values that options take: times such as 10m, and portions such as 2/8."""

from __future__ import annotations

import re

import click

UNITS_S = {"h": 3600.0, "m": 60.0, "s": 1.0, "": 1.0}
_PIECE = re.compile(r"(\d+(?:\.\d+)?)(h|m|s|)")


def duration_s(text: str) -> float:
    """The seconds of a time: 90, 90s, 10m, 1.5h or 1h30m."""
    written = text.strip().lower()
    pieces = _PIECE.findall(written)
    if not pieces or "".join(number + unit for number, unit in pieces) != written:
        raise click.BadParameter(f'"{text}" is no time; write 90s, 10m or 1h30m')
    seconds = sum(float(number) * UNITS_S[unit] for number, unit in pieces)
    if not seconds > 0.0:
        raise click.BadParameter("a time of 0 renders nothing")
    return seconds


def portion(text: str) -> tuple[int, int]:
    """Which portion of a frame's rounds, of how many: K/N with K from 1 to N."""
    match = re.fullmatch(r"(\d{1,7})/(\d{1,7})", text.strip())
    if match is None or not 1 <= int(match[1]) <= int(match[2]):
        raise click.BadParameter(f'"{text}" is no portion; write K/N with K from 1 to N, as in 2/8')
    return int(match[1]), int(match[2])
