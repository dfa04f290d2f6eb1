"""Where the sun stands in the sky of a place at a moment, as it is seen: lifted by the air."""

from __future__ import annotations

import math
from dataclasses import dataclass
from datetime import UTC, datetime

from renderer.base.errors import Fault, InputError
from renderer.base.exact_functions import sine_cosine_deg
from renderer.optics.atmosphere import apparent_elevation_deg

EPOCH = datetime(
    2000, 1, 1, 12, tzinfo=UTC
)  # J2000.0, but for the 64 s between the clocks, which the sun does not show
FIRST_YEAR, LAST_YEAR = 1950, 2100  # of the formulae's fit
LOWEST_LIFTED_DEG = -1.0  # of the refraction's formula; what is lower is under the horizon in any case


@dataclass(frozen=True)
class SunPlace:
    """`elevation_deg` is apparent, `true_elevation_deg` without air; azimuth clockwise from north, 0 up to 360."""

    elevation_deg: float
    azimuth_deg: float
    true_elevation_deg: float


def sun_place(latitude_deg: float, longitude_deg: float, moment: datetime) -> SunPlace:
    """The sun's middle from a latitude (-90 to 90, north above 0) and longitude (-180 to 180, east above 0).

    `moment` knows its time zone; 1950 to 2100. InputError outside. Good to 0.02 degree. Low-precision formulae of the
    Astronomical Almanac as in J. J. Michalsky, Solar Energy 40, 227 (1988) (from memory); the lift is Saemundsson's, at
    1010 hPa and 10 C, and goes on unchanged from one degree under the horizon.
    """
    if not (-90.0 <= latitude_deg <= 90.0 and -180.0 <= longitude_deg <= 180.0):
        where = f"{latitude_deg:g}, {longitude_deg:g}"
        expected = "a latitude of -90 to 90 and a longitude of -180 to 180 degrees"
        raise InputError(Fault(f"no place on Earth is at {where}", expected=expected))
    if moment.tzinfo is None:
        raise InputError(Fault("the moment does not say its time zone", expected="a time with Z or +01:00 at its end"))
    if not FIRST_YEAR <= moment.year <= LAST_YEAR:
        raise InputError(Fault(f"the sun's place is not known for the year {moment.year}", expected="1950 to 2100"))
    days = (moment - EPOCH).total_seconds() / 86400.0
    anomaly = 357.528 + 0.9856003 * days
    (once, twice), _ = sine_cosine_deg([anomaly, 2.0 * anomaly])
    longitude = 280.460 + 0.9856474 * days + 1.915 * float(once) + 0.020 * float(twice)
    (sine, tilt), (cosine, level) = sine_cosine_deg([longitude, 23.439 - 4e-7 * days])
    ascension = math.degrees(math.atan2(level * sine, cosine))
    height = float(tilt * sine)  # sine of the declination
    reach = math.sqrt(1.0 - height * height)
    sidereal = 280.46062 + 360.98564737 * days + longitude_deg
    (turn, north), (along, out) = sine_cosine_deg([sidereal - ascension, latitude_deg])
    up = north * height + out * reach * along
    to_north, to_east = out * height - north * reach * along, -reach * turn
    true_deg = math.degrees(math.atan2(up, math.hypot(to_north, to_east)))
    at = max(true_deg, LOWEST_LIFTED_DEG)
    lifted = true_deg + float(apparent_elevation_deg(at)) - at
    return SunPlace(lifted, math.degrees(math.atan2(to_east, to_north)) % 360.0, true_deg)
