"""The sun's place by place and time, against NREL's solar position algorithm in pvlib (Reda and Andreas 2004)."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta, timezone

import numpy as np
import pandas
import pytest
from pvlib import solarposition

from renderer.base.errors import InputError
from renderer.optics.sun_place import sun_place

ONE_HOUR_EAST = timezone(timedelta(hours=1))


@pytest.mark.parametrize("latitude_deg", [-65.0, -30.0, 0.0, 45.0, 70.0])
def test_place_at_200_moments(latitude_deg):
    """Within 0.02 degree on the sky, apparent and true, at random moments of 1955 to 2095."""
    rng = np.random.default_rng(int(latitude_deg) + 100)
    first = pandas.Timestamp("1955-01-01", tz="UTC")
    times = pandas.DatetimeIndex(first + pandas.to_timedelta(rng.integers(0, 140 * 365 * 86400, 200), unit="s"))
    longitude = float(rng.uniform(-180.0, 180.0))
    table = solarposition.spa_python(times, latitude_deg, longitude, pressure=101000.0, temperature=10.0)
    for moment, row in zip(times, table.itertuples(), strict=True):
        found = sun_place(latitude_deg, longitude, moment.to_pydatetime())
        assert found.true_elevation_deg == pytest.approx(row.elevation, abs=0.02)
        aside = (found.azimuth_deg - row.azimuth + 180.0) % 360.0 - 180.0
        assert abs(aside) * np.cos(np.radians(row.elevation)) < 0.02
        if row.elevation > -0.5:
            assert found.elevation_deg == pytest.approx(row.apparent_elevation, abs=0.025)


def test_the_sun_can_be_seen_when_it_is_under_the_horizon():
    """The lift on the horizon is 29' for a true elevation of 0 and 34' for an apparent one (from memory)."""
    minutes = [sun_place(0.0, 0.0, datetime(2026, 3, 20, 6, m, tzinfo=UTC)) for m in range(0, 15)]
    near = min(minutes, key=lambda place: abs(place.elevation_deg))
    assert near.true_elevation_deg - near.elevation_deg == pytest.approx(-0.57, abs=0.05)


def test_time_zones_count():
    here = sun_place(60.0, 11.0, datetime(2026, 12, 1, 12, 0, tzinfo=ONE_HOUR_EAST))
    assert here == sun_place(60.0, 11.0, datetime(2026, 12, 1, 11, 0, tzinfo=UTC))


@pytest.mark.parametrize(
    ("latitude_deg", "longitude_deg", "moment", "what"),
    [
        (91.0, 0.0, datetime(2026, 1, 1, tzinfo=ONE_HOUR_EAST), "no place on Earth"),
        (0.0, float("nan"), datetime(2026, 1, 1, tzinfo=ONE_HOUR_EAST), "no place on Earth"),
        (0.0, 0.0, datetime(2026, 1, 1), "time zone"),
        (0.0, 0.0, datetime(1700, 1, 1, tzinfo=ONE_HOUR_EAST), "the year 1700"),
    ],
)
def test_refusals(latitude_deg, longitude_deg, moment, what):
    with pytest.raises(InputError, match=what):
        sun_place(latitude_deg, longitude_deg, moment)
