"""Keyed values: exact at keys, inside between them, held outside, never wrapped."""

from __future__ import annotations

from hypothesis import given, settings
from hypothesis import strategies as st

from renderer.shot.keyed import Keys, number_at, values_at

FRAMES = st.lists(st.integers(-100_000, 100_000), min_size=1, max_size=8, unique=True).map(sorted)
NUMBERS = st.floats(-1e12, 1e12)


@st.composite
def keyed(draw: st.DrawFn) -> Keys:
    frames = draw(FRAMES)
    width = draw(st.integers(1, 4))
    values = [tuple(draw(NUMBERS) for _ in range(width)) for _ in frames]
    return Keys(tuple(frames), tuple(values), draw(st.booleans()))


@given(keyed())
def test_a_keys_own_frame_gives_its_own_value_to_the_bit(keys: Keys) -> None:
    assert [keys.at(frame) for frame in keys.frames] == list(keys.values)


@given(keyed(), st.floats(0.001, 1e6))
def test_held_outside(keys: Keys, beyond: float) -> None:
    assert keys.at(keys.frames[0] - beyond) == keys.values[0]
    assert keys.at(keys.frames[-1] + beyond) == keys.values[-1]


@given(keyed(), st.floats(-100_001, 100_001))
def test_never_beyond_the_neighbouring_keys(keys: Keys, time: float) -> None:
    before, after, share = keys.span(time)
    assert 0.0 <= share <= 1.0
    for a, b, value in zip(keys.values[before], keys.values[after], keys.at(time), strict=True):
        assert min(a, b) <= value <= max(a, b)


@given(keyed(), st.lists(st.floats(-100_001, 100_001), min_size=2, max_size=2).map(sorted))
@settings(max_examples=200)
def test_rises_where_its_keys_rise(keys: Keys, times: list[float]) -> None:
    rising = Keys(keys.frames, tuple((float(i),) for i in range(len(keys.frames))), keys.ease)
    slack = 1e-9  # rounding of shares may undo a step of one unit in the last place
    assert rising.at(times[0])[0] <= rising.at(times[1])[0] + slack


@given(st.integers(-1000, 1000), st.integers(1, 1000), NUMBERS, NUMBERS)
def test_halfway_is_the_mean_with_and_without_ease(start: int, length: int, a: float, b: float) -> None:
    for ease in (False, True):
        keys = Keys((start, start + length), ((a,), (b,)), ease)
        assert abs(keys.at(start + length / 2)[0] - (a + b) / 2) <= 1e-9 * (abs(a) + abs(b))


def test_linear_and_ease_at_a_quarter() -> None:
    assert Keys((0, 100), ((10.0,), (20.0,))).at(25.0) == (12.5,)
    assert Keys((0, 100), ((10.0,), (20.0,)), ease=True).at(25.0) == (11.5625,)  # 3/16 - 2/64 = 0.15625


def test_angles_do_not_wrap() -> None:
    assert Keys((1, 3), ((350.0,), (10.0,))).at(2) == (180.0,)


def test_what_is_not_keyed_stays() -> None:
    assert number_at(3.0, 17.5) == 3.0
    assert values_at((1.0, 2.0), 17.5) == (1.0, 2.0)
    assert number_at(Keys((1,), ((7.0,),)), 99) == 7.0
