"""How much light the shipped shots lose to caps, and that nothing in them breaks, in small pictures of each."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.rendering import rendered

SHOTS = sorted((Path(__file__).parents[2] / "scenes").glob("*/*.shot.toml"))


@pytest.mark.parametrize("shot", SHOTS, ids=lambda path: path.parent.name)
def test_next_to_nothing_is_lost(shot):
    picture = rendered(shot, 8, overrides=["camera.pixels=[48, 27]"])
    assert picture.mean > 0.0
    assert picture.tally.cap_lost / 2.0**32 < 1e-4 * picture.tally.samples
    # Where water runs into a wall, a ray may meet the edge within rounding.
    assert picture.tally.unmatched < 1e-3 * picture.tally.samples


def test_there_are_shots_to_test():
    assert len(SHOTS) >= 6
