"""Sun and sky of a shot as arrays, with the tables by which directions of the sky are drawn."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import numpy.typing as npt

from renderer.arrays import lights
from renderer.arrays.packing import pack
from renderer.base.constants import N_WAVELENGTHS
from renderer.base.errors import Fault, InputError
from renderer.base.exact_functions import sine_cosine_deg
from renderer.shot.model import Axes, FrameShot, Sky, Sun

Floats = npt.NDArray[np.float64]

OVERCAST_SUN_DEG = 45.0  # height of the sun behind an overcast sky in a shot that has none; our choice
EVEN_SHARE = 0.01  # of the chances, spread evenly over the sphere, so that no direction has none


def sun_arrays(sun: Sun | None, sky_kind: str, notes: list[str]) -> lights.Sun:
    """The sun's disc at its apparent place; numbers of 0 without one, under the horizon, or behind an overcast sky."""
    from renderer.optics import sun as optics

    if sun is not None and sky_kind == "overcast":
        notes.append("the overcast sky hides the sun: it lights the clouds, and casts no shadows of its own")
        sun = None
    if sun is None:
        return lights.Sun(pack(np.zeros(9)), pack(np.zeros(N_WAVELENGTHS)))
    radiance = optics.sun_radiance(sun.elevation_deg, sun.visibility_km)
    u1, u2 = optics.LIMB_DARKENING
    shines = float(radiance.max() > 0.0)
    cosine = float(sine_cosine_deg(optics.ANGULAR_RADIUS_DEG)[1])
    numbers = [shines, *sun.direction, cosine, optics.solid_angle_sr(), u1, u2, optics.limb_mean()]
    return lights.Sun(pack(numbers), pack(radiance))


def sky_arrays(shot: FrameShot) -> lights.Sky:
    """The sky as coefficients on basis spectra, and its importance tables."""
    coefficients, basis = sky_map(shot)
    coefficients = np.asarray(coefficients, dtype=np.float64) * shot.sky.scale
    row_cdf, column_cdf = chances(coefficients, basis)
    return lights.Sky(
        axes=pack(axis_rows(shot.axes)),
        coefficients=pack(coefficients),
        basis=pack(basis),
        row_cdf=pack(row_cdf),
        column_cdf=pack(column_cdf),
    )


def axis_rows(axes: Axes) -> Floats:
    """East, up and north as rows."""
    return np.array([axes.east, axes.up, axes.north])


def sky_map(shot: FrameShot) -> tuple[Floats, Floats]:
    """Coefficients (n_rows, n_columns, n_basis) and basis (n_basis, 401) of the shot's kind of sky."""
    from renderer.optics import sky as optics

    sky, sun = shot.sky, shot.sun
    if sky.kind == "none":
        return np.zeros((2, 1, 1)), np.zeros((1, N_WAVELENGTHS))
    if sky.kind == "uniform":
        from renderer.colour.emission import light_spectrum

        return np.ones((2, 1, 1)), light_spectrum(sky.luminance, colour=sky.colour)[None, :]
    if sky.kind == "picture":
        assert sky.picture is not None
        return picture_map(sky.picture, sky)
    if sky.kind == "overcast":
        return optics.overcast_sky(OVERCAST_SUN_DEG if sun is None else sun.elevation_deg)
    if sun is None:
        raise InputError(Fault("a clear sky needs a sun", str(shot.source), "a [sun] table, or another kind of sky"))
    return optics.clear_sky(sun.elevation_deg, sun.azimuth_deg, sun.visibility_km)


def picture_map(path: Path, sky: Sky) -> tuple[Floats, Floats]:
    """A latitude-longitude picture, up at the top and north in the middle, resampled to the nodes of a sky.

    Nodes lie at the corners of pixels, so that a node is the mean of the four pixels round it, and the sum over
    the sphere stays that of the picture.
    """
    from renderer.colour.emission import sky_basis_from_rgb
    from renderer.colour.spaces import converted
    from renderer.pictures.reading import read_sky_picture

    pixels = read_sky_picture(path)
    width = pixels.shape[1]
    linear = converted(pixels, sky.encoding, "rec709")
    rows = np.concatenate([linear[:1], linear, linear[-1:]])
    rows = 0.5 * (rows[:-1] + rows[1:])
    place = (np.arange(width) / width + 0.5 - sky.turn_deg / 360.0) * width - 0.5
    low = np.floor(place)
    share = (place - low)[None, :, None]
    left = low.astype(np.int64) % width
    return rows[:, left] * (1.0 - share) + rows[:, (left + 1) % width] * share, sky_basis_from_rgb()


def node_luminance(coefficients: Floats, basis: Floats) -> Floats:
    """Luminance at the nodes of a sky, (n_rows, n_columns). [cd/m2]"""
    from renderer.colour.observer import luminance

    total = np.zeros(coefficients.shape[:2])
    for k, value in enumerate(luminance(basis)):  # in this order on every machine, since draws depend on it
        total += coefficients[:, :, k] * value
    return total


def chances(coefficients: Floats, basis: Floats) -> tuple[Floats, Floats]:
    """Cumulative shares by which cells between nodes are drawn: (n_rows,) of rows, (n_rows - 1, n_columns + 1) in rows.

    A cell's chance is its mean luminance times its solid angle, and EVEN_SHARE of all chances is by solid angle alone.
    """
    node = np.maximum(node_luminance(coefficients, basis), 0.0)
    n_rows, n_columns = node.shape
    across = 0.5 * (node + np.roll(node, -1, axis=1))
    sine, _ = sine_cosine_deg(90.0 - 180.0 * np.arange(n_rows) / (n_rows - 1))
    solid = ((sine[:-1] - sine[1:]) * 2.0 * np.pi / n_columns)[:, None] * np.ones((1, n_columns))
    bright = 0.5 * (across[:-1] + across[1:]) * solid
    total = bright.sum()
    even = solid / solid.sum()
    chance = even if total <= 0.0 else (1.0 - EVEN_SHARE) * bright / total + EVEN_SHARE * even
    row = chance.sum(axis=1)
    return cumulative(row[None, :])[0], cumulative(chance)


def cumulative(chance: Floats) -> Floats:
    """Running shares of each row, from exactly 0 to exactly 1."""
    sums = np.cumsum(chance, axis=1)
    shares = np.concatenate([np.zeros((len(chance), 1)), sums / sums[:, -1:]], axis=1)
    shares[:, -1] = 1.0
    return shares
