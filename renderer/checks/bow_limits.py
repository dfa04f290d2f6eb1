"""What a bow of each order may look like: the limits that the bow rules hold a shot to.

Fresh water of 0 to 30 degrees C and drops of 0.1 mm radius and more, whose index relative to air is that of IAPWS
R9-97, by full scattering series with the sun's disc folded in; background removed. Angles from the antisolar point, but
from the sun for the third and fourth order, whose limits are plain geometric optics (Descartes 1637).
"""

from __future__ import annotations

from dataclasses import dataclass

KNOWN_ORDERS = (1, 2, 3, 4)

SPRAY_OR_FOG = (
    "Spray from the sea makes it {sea}, drops under 0.1 mm radius (fog) smaller and paler, and flattened "
    "drops of heavy rain lower its top: if that is meant, sign it off and say so."
)


@dataclass(frozen=True)
class BowLimits:
    """Angles in degrees. `radius_deg` is where the brightest ring may lie, `width_deg` its width at half brightness;
    `reach_deg` is what sea water, fog or flattened drops could still explain; `no_light_within_deg` of the sun: no
    point of the bow lies nearer to it.
    """

    order: int
    name: str
    radius_deg: tuple[float, float]
    typical_deg: float
    reach_deg: tuple[float, float]
    width_deg: tuple[float, float] | None
    outer_colour: str
    highest_sun_deg: float | None  # above it the brightest ring lies below a level horizon
    last_light_deg: float | None  # above it all of the bow's light does
    no_light_within_deg: float
    exceptions: str

    @property
    def red_side(self) -> str:
        """Which side of the bow the red is on."""
        return "outside" if self.outer_colour == "red" else "inside"


LIMITS = {
    1: BowLimits(
        order=1,
        name="primary bow",
        radius_deg=(40.8, 42.0),  # the red edge, at half its brightness, is at 42.0-42.5
        typical_deg=41.6,
        reach_deg=(33.0, 42.8),  # from fog of 5 micrometres radius (from memory) to the last of its light
        width_deg=(1.1, 1.8),
        outer_colour="red",
        highest_sun_deg=41.9,
        last_light_deg=42.8,
        no_light_within_deg=137.2,
        exceptions=SPRAY_OR_FOG.format(sea="about 0.9° smaller"),
    ),
    2: BowLimits(
        order=2,
        name="secondary bow",
        radius_deg=(51.1, 52.9),  # the red edge, at half its brightness, is at 49.9-50.9
        typical_deg=51.8,
        reach_deg=(49.5, 57.0),  # to sea water at 35 per mille (+1.7) and a spread of drop sizes
        width_deg=(1.9, 3.4),
        outer_colour="violet",
        highest_sun_deg=52.9,
        last_light_deg=55.0,
        no_light_within_deg=123.0,  # 180 less the far end of its reach
        exceptions=SPRAY_OR_FOG.format(sea="about 1.7° larger").replace("smaller and paler", "larger and paler"),
    ),
    3: BowLimits(
        order=3,
        name="third-order bow",
        radius_deg=(37.5, 42.9),
        typical_deg=41.5,
        reach_deg=(36.0, 44.0),
        width_deg=None,
        outer_colour="red",
        highest_sun_deg=None,
        last_light_deg=None,
        no_light_within_deg=37.5,
        exceptions="Its contrast over the glare of the drops is under 6 %.",
    ),
    4: BowLimits(
        order=4,
        name="fourth-order bow",
        radius_deg=(42.3, 48.7),
        typical_deg=44.0,
        reach_deg=(41.0, 50.0),
        width_deg=None,
        outer_colour="violet",
        highest_sun_deg=None,
        last_light_deg=None,
        no_light_within_deg=42.3,
        exceptions="Its contrast over the glare of the drops is under 6 %.",
    ),
}


def limits_of(order: int) -> BowLimits:
    """The limits of a bow by its order, 1 to 4."""
    return LIMITS[order]
