"""Where the bows of round drops stand: pure geometry, in degrees, on arrays of any shape.

Angles of a bow are from the antisolar point (its radius), unless a name says otherwise. Ray optics: radii hold to
0.1 degree for drops of 0.5 mm radius and more. Descartes, *Les Meteores*, 1637; M. V. Berry, "Nature's optics and our
understanding of light", Contemp. Phys. 56, 2 (2015); R. L. Lee and A. B. Fraser, *The Rainbow Bridge*, 2001 (both from
memory).
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from renderer.base.errors import Fault, InputError

Floats = npt.NDArray[np.float64]

SUN_RADIUS_DEG = 0.266453  # at 1 au: IAU 2015 Resolution B3 nominal radius 695700 km over IAU 2012's au
RED_NM, VIOLET_NM = 700.0, 400.0  # the ends that are called red and violet here


class Ring(NamedTuple):
    """One bow of one index. `impact` is the ray's offset from the drop's middle in radii; angles in degrees."""

    impact: Floats
    incidence_deg: Floats
    refraction_deg: Floats
    deviation_deg: Floats  # the total turn of the ray; stationary here
    radius_deg: Floats  # from the antisolar point, 0 to 180
    from_sun_deg: Floats  # 180 - radius
    slope_deg: Floats  # change of radius_deg with the index, degrees per unit of index


def descartes_ring(order: int, index: npt.ArrayLike) -> Ring:
    """The ray of stationary deviation after `order` internal reflections in a drop of relative index `index`.

    cos i = sqrt((n^2 - 1) / (k (k + 2))), D = 180 k + 2 i - 2 (k + 1) r, |dD/dn| = 2 (k + 1) tan r / n.
    InputError where no such ray exists: it needs 1 < index < order + 1.
    """
    n = np.asarray(index, dtype=np.float64)
    if order < 1 or not np.all((n > 1.0) & (n < order + 1.0)):
        raise InputError(
            Fault(
                "no bow of this order exists at this refractive index",
                expected=f"an order of 1 or more and an index above 1 and below {max(order, 1) + 1}",
            )
        )
    cos_i = np.sqrt((n * n - 1.0) / (order * (order + 2.0)))
    incidence = np.arccos(cos_i)
    refraction = np.arcsin(np.sin(incidence) / n)
    deviation = np.pi * order + 2.0 * incidence - 2.0 * (order + 1.0) * refraction
    from_antisolar = np.abs(np.remainder(deviation, 2.0 * np.pi) - np.pi)  # 180 turned light goes straight back
    direction = np.where(np.remainder(deviation, 2.0 * np.pi) >= np.pi, 1.0, -1.0)  # does radius grow with deviation
    slope = direction * 2.0 * (order + 1.0) * np.tan(refraction) / n
    return Ring(
        impact=np.asarray(np.sin(incidence)),
        incidence_deg=np.degrees(incidence),
        refraction_deg=np.degrees(refraction),
        deviation_deg=np.degrees(deviation),
        radius_deg=np.asarray(np.degrees(from_antisolar)),
        from_sun_deg=np.asarray(180.0 - np.degrees(from_antisolar)),
        slope_deg=np.asarray(np.degrees(slope)),
    )


def bow_radius_deg(order: int, index: npt.ArrayLike) -> Floats:
    """Radius of a bow [deg] for drops of relative index `index`; the shape of `index`."""
    return descartes_ring(order, index).radius_deg


def drop_index(wavelength_nm: npt.ArrayLike, temperature_c: float = 20.0, salinity: float = 0.0) -> Floats:
    """Index of drops relative to air: water at a temperature, 0 to 60 C, with `salinity` in per mille, 0 to 42."""
    from renderer.optics.water import water_index

    return water_index(wavelength_nm, temperature_c, salinity)


class Band(NamedTuple):
    """One bow in white light, ray optics. Angles in degrees from the antisolar point."""

    order: int
    red_deg: float  # ring of RED_NM for a point sun
    violet_deg: float  # ring of VIOLET_NM for a point sun
    inner_deg: float  # where its colours begin and end, with the sun's disc
    outer_deg: float
    outer_colour: str  # "red" or "violet"
    bright_side: str  # where the bow's own light goes on beyond it: "inside" or "outside"

    @property
    def width_deg(self) -> float:
        """Whole width with the sun's disc."""
        return self.outer_deg - self.inner_deg

    @property
    def middle_deg(self) -> float:
        """Middle of its colours."""
        return 0.5 * (self.outer_deg + self.inner_deg)


def bow_band(
    order: int, temperature_c: float = 20.0, salinity: float = 0.0, sun_radius_deg: float = SUN_RADIUS_DEG
) -> Band:
    """Edges, width and colour order of the bow of `order` for water drops, widened by the sun's disc."""
    ring = descartes_ring(order, drop_index((RED_NM, VIOLET_NM), temperature_c, salinity))
    red, violet = (float(angle) for angle in ring.radius_deg)
    return Band(
        order=order,
        red_deg=red,
        violet_deg=violet,
        inner_deg=min(red, violet) - sun_radius_deg,
        outer_deg=max(red, violet) + sun_radius_deg,
        outer_colour="red" if red > violet else "violet",
        bright_side="inside" if ring.slope_deg[0] < 0.0 else "outside",  # D is least, and turns away from the bow
    )


def dark_band_deg(
    temperature_c: float = 20.0, salinity: float = 0.0, sun_radius_deg: float = SUN_RADIUS_DEG
) -> tuple[float, float]:
    """Alexander's band [deg]: from the first bow's outer edge to the second's inner one, with the sun's disc."""
    first = bow_band(1, temperature_c, salinity, sun_radius_deg)
    second = bow_band(2, temperature_c, salinity, sun_radius_deg)
    return first.outer_deg, second.inner_deg
