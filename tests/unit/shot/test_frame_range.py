"""Frame ranges: the trade's syntax, in rising order, refused in our words."""

from __future__ import annotations

import pytest

from renderer.base.errors import InputError
from renderer.shot.frame_range import MOST_FRAMES, parse_frames


@pytest.mark.parametrize(
    ("text", "frames"),
    [
        ("1001", (1001,)),
        ("1001-1004", (1001, 1002, 1003, 1004)),
        ("1001-1008x3", (1001, 1004, 1007)),
        ("1-10y2", (2, 4, 6, 8, 10)),
        ("7, 5,6-7", (5, 6, 7)),
        ("-2-1", (-2, -1, 0, 1)),
        ("-5--3", (-5, -4, -3)),
        ("1-2000000x2000", tuple(range(1, 2_000_001, 2000))),
    ],
)
def test_frames(text: str, frames: tuple[int, ...]) -> None:
    assert parse_frames(text) == frames


@pytest.mark.parametrize(
    "text", ["", " ", "a", "1-", "1..5", "5-1", "1-5x0", "1-5x-1", "1,,2", "99999999", "1-9999999", "１"]
)
def test_refused_with_where(text: str) -> None:
    with pytest.raises(InputError) as caught:
        parse_frames(text)
    assert caught.value.faults[0].where == "--frames"
    assert caught.value.faults[0].expected


def test_most_frames_are_allowed_and_one_more_is_not() -> None:
    assert len(parse_frames(f"1-{MOST_FRAMES}")) == MOST_FRAMES
    with pytest.raises(InputError, match="1,000,000 frames"):
        parse_frames(f"0-{MOST_FRAMES}")
