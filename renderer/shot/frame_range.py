"""Frame ranges in the trade's syntax: checked in our own words first, then read by fileseq."""

from __future__ import annotations

import re

from renderer.shot.schema.flaws import Flaw, Flawed, refusal

EXPECTED = 'frames in quotes, as in "1001-1048", "1001-1100x2" or "1001,1005"'
MOST_FRAMES = 1_000_000
LARGEST_FRAME = 10_000_000

_SPAN = re.compile(r"(-?\d{1,9})(?:-(-?\d{1,9})(?:([x:y])(\d{1,9}))?)?", re.ASCII)


def check_range(text: str) -> None:
    """Raise `Flawed` unless `text` is a frame range of bearable length; nothing is allocated for the frames."""
    total = 0
    for part in text.split(","):
        total += _count(part.strip(), text)
        if total > MOST_FRAMES:
            raise Flawed(
                Flaw((), f"`{{key}}` names more than {MOST_FRAMES:,} frames", f"at most {MOST_FRAMES:,} frames")
            )


def _count(part: str, text: str) -> int:
    """How many frames `part` names at most; raises `Flawed`."""
    match = _SPAN.fullmatch(part)
    if match is None:
        raise Flawed(refusal(text, EXPECTED))
    first, last = int(match[1]), int(match[2] or match[1])
    if max(abs(first), abs(last)) > LARGEST_FRAME:
        raise Flawed(refusal(text, f"frame numbers up to {LARGEST_FRAME:,}"))
    if last < first:
        raise Flawed(Flaw((), f'`{{key}}` runs backwards: "{part}"', f'the first frame first: "{last}-{first}"'))
    if match[4] is not None and int(match[4]) == 0:
        raise Flawed(Flaw((), f'`{{key}}` has a step of 0: "{part}"', "a step of 1 or more"))
    step = int(match[4]) if match[3] == "x" else 1
    return (last - first) // step + 1


def frames_of(text: str) -> tuple[int, ...]:
    """The frames that `text` names, rising, each once; raises `Flawed`."""
    from fileseq.frameset import FrameSet

    check_range(text)
    return tuple(sorted({int(frame) for frame in FrameSet(text.replace(" ", ""))}))


def parse_frames(text: str, where: str = "--frames") -> tuple[int, ...]:
    """The frames that `text` names, rising, each once; raises `InputError` that names `where`."""
    from renderer.base.errors import Fault, InputError

    try:
        return frames_of(text)
    except Flawed as error:
        faults = (Fault(flaw.what.replace("`{key}`", "the frame range"), where, flaw.expected) for flaw in error.flaws)
        raise InputError(*faults) from None
