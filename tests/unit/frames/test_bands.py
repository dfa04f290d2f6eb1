"""Bands of rows: they fill the frame, and settle where a call takes a fraction of a second."""

from __future__ import annotations

import pytest

from renderer.frames.bands import CALL_S, Bands


@pytest.mark.parametrize("row_s", [1e-5, 1e-3, 0.05, 2.0])
def test_bands_settle_on_the_speed(row_s: float) -> None:
    bands, row, last = Bands(), 0, 0
    for _ in range(200):
        stop = bands.next(row, 10**12)
        last = stop - row
        assert last >= 1
        bands.took(last, last * row_s)
        row = stop
    assert last == max(1, int(CALL_S / row_s))


def test_a_first_call_that_compiles_is_made_up_for() -> None:
    bands = Bands()
    bands.took(bands.next(0, 1000), 60.0)
    calls = 0
    while (rows := bands.next(0, 1000)) < 200:
        bands.took(rows, rows * 1e-3)
        calls += 1
    assert calls <= 5


def test_the_last_band_ends_with_the_frame() -> None:
    assert Bands().next(998, 1000) == 1000
