"""A drop traced by camera paths, lit from far: where its bows stand, and how bright the second is beside the first.

The light that leaves the drop is written down branch by branch, with the power that the path carries there, in place
of one sun: every sample then serves every angle. The sun's disc is folded in afterwards, evenly bright.

R. Descartes, Les Meteores VIII, 1637, for the closed form; indices from IAPWS R9-97 by renderer/optics.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from renderer.base.jit import kernel
from renderer.base.reference import refer
from renderer.colour.observer import observer
from renderer.optics.bow_geometry import bow_radius_deg, drop_index
from renderer.optics.sun import sun_radiance
from renderer.ray_search.search import closest_hit
from renderer.transport.layout import (
    AFTER,
    BRANCH,
    DIRECTION,
    INTERFACES,
    LANE_NM,
    LANE_X,
    RATIO,
    ROW,
    SKIP_INSTANCE,
    SKIP_PRIMITIVE,
    SOLO,
)
from renderer.transport.path import start_path, step
from renderer.transport.points import pair, stream
from renderer.transport.render import frame_of
from renderer.transport.wavelengths import draw_lanes, spectrum_at
from renderer.transport.work import new_work
from tests.rendering import scene_of

FAR = 2000.0
SUN_RADIUS_DEG = 0.2666  # at 1 au: 959.63", IAU 2015 resolution B3
STEP_DEG = 0.02
# The camera looks along -z at a drop with a dark rim of two pixels round it: the pixels' filter reaches over their
# edges, so that beside the picture's border the face of the drop would be sampled too thinly.
SHOT = f"""
title = "one drop"
[camera]
position = [0, 0, {FAR}]
target = [0, 0, 0]
focal_length = {14.4 * FAR}
sensor = [36, 36]
pixels = [16, 16]
[sky]
kind = "none"
[render]
splits = 4
WAVELENGTHS
[materials.rain]
like = "water"
temperature = 20
absorption = {{ per_metre = [[550, 0]] }}
[[objects]]
name = "drop"
shape = {{ sphere = 1.0 }}
material = "rain"
"""


@kernel
def write_down(frame, work, light, n, seed, bins):
    """Follow the paths of n samples of each pixel; add what leaves the drop to `bins`, by its angle to the view."""
    window = frame.camera.window
    for i in range(n):
        for row in range(window[3]):
            for column in range(window[2]):
                key = stream(seed, (row << 32) | column, i & 7)
                work.sample[0], work.sample[1] = key, i >> 3
                u_round, u_pixel = pair(key, i >> 3, 2)
                draw_lanes(frame.spectrum, u_pixel, u_round, work.lanes)
                start_path(frame, work, float(column), float(row), 0.0)
                work.sets[0, 0], work.sets[0, 1] = 0, 0
                k = work.whole[0, BRANCH]
                while k >= 0:
                    r = work.reals
                    _t, instance, _, _, _, _ = closest_hit(
                        frame.world, r[k, 0], r[k, 1], r[k, 2], r[k, DIRECTION], r[k, DIRECTION + 1],
                        r[k, DIRECTION + 2], 0.0, math.inf, work.whole[k, SKIP_INSTANCE],
                        work.whole[k, SKIP_PRIMITIVE], r[k, AFTER], -1, -1,
                    )  # fmt: skip
                    if instance < 0 and work.whole[k, INTERFACES] > 0:
                        power, ratios = 0.0, 0.0
                        for lane in range(1 if work.whole[k, SOLO] == 1 else 4):
                            seen = work.lanes[lane, LANE_X + 1] * spectrum_at(light, work.lanes[lane, LANE_NM])
                            power += r[k, ROW + 4 * lane] * seen
                            ratios += r[k, RATIO + lane]
                        bins[bin_of(r[k, DIRECTION + 2], bins.shape[0])] += power / ratios
                    k = step(frame, work, k)


@kernel
def bin_of(z, n):
    """The bin of a direction whose cosine with +z is z; +z is the way back to the camera."""
    return min(int(math.acos(min(max(z, -1.0), 1.0)) / math.pi * n), n - 1)


@kernel
def write_all(frame, work, light, n, seed, bins):
    """The door: by address."""
    write_down(refer(frame), refer(work), light, n, seed, bins)


def profile(scene, n: int, light: np.ndarray, seed: int = 0) -> tuple[np.ndarray, np.ndarray]:
    """Angles from the antisolar point [degrees] and the light of the drop there, per steradian, without a scale."""
    bins, work = np.zeros(round(180.0 / STEP_DEG)), new_work(0)
    write_all(frame_of(scene, 0, seed), work, light, n, seed, bins)
    middle = (np.arange(len(bins)) + 0.5) * STEP_DEG
    return middle, bins / np.sin(np.radians(middle))


def under_the_sun(light: np.ndarray) -> np.ndarray:
    """A profile with the sun's disc folded in: along a radius of the bow the disc is a half circle's chord wide."""
    offsets = np.arange(-round(SUN_RADIUS_DEG / STEP_DEG), round(SUN_RADIUS_DEG / STEP_DEG) + 1) * STEP_DEG
    chords = np.sqrt(np.maximum(SUN_RADIUS_DEG**2 - offsets**2, 0.0))
    return np.convolve(light, chords / chords.sum(), mode="same")


@pytest.mark.parametrize("wavelength_nm", [450.0, 589.3, 650.0])
def test_a_round_drop_sends_its_bows_where_descartes_has_them(wavelength_nm: float) -> None:
    bows_stand_right(SHOT, wavelength_nm, 0.1)


def test_a_finely_meshed_drop_does_so_too() -> None:
    """A sphere that is stretched by a part in a million is a mesh, with its exact normals interpolated."""
    bows_stand_right(SHOT + "transform = { scale = [1.0, 1.0, 1.000001] }\n", 589.3, 0.3)


def bows_stand_right(shot: str, wavelength_nm: float, within_deg: float) -> None:
    """Hold the outer edge of the first bow's light, and the inner of the second's, to the closed form.

    An edge is where the light, averaged over a tenth of a degree, passes half of its greatest value.
    """
    scene = scene_of(shot.replace("WAVELENGTHS", f"wavelengths = [{wavelength_nm}]"))
    middle, light = profile(scene, 1000, np.ones(401))
    light = np.convolve(light, np.full(5, 0.2), mode="same")
    index = drop_index(wavelength_nm, 20.0)
    for order, pick in ((1, -1), (2, 0)):
        expected = float(bow_radius_deg(order, index))
        near = np.abs(middle - expected) < 2.0
        bright = middle[near][light[near] > 0.5 * light[near].max()]
        assert bright[pick] == pytest.approx(expected, abs=within_deg)


def ray_optics(polarised: bool) -> np.ndarray:
    """The same profile by summing rays over the drop's face: reflected, and after one to seven reflections inside.

    The fifth bow (five reflections) lies on the second, and adds 4 % to its peak.

    H. C. van de Hulst, Light Scattering by Small Particles, 1957, 12.2-12.3, with Fresnel's powers of s and p kept
    apart, or averaged at each meeting as if light forgot its polarisation.
    """
    face = (np.arange(40_000) + 0.5) / 40_000  # squares of the distance from the middle: even shares of the face
    cosine = np.sqrt(1.0 - face)
    n_bins = round(180.0 / STEP_DEG)
    total = np.zeros(n_bins)
    for wavelength_nm in range(384, 780, 4):
        n = float(drop_index(float(wavelength_nm), 20.0))
        share = sun_radiance(40.0, 23.0)[wavelength_nm - 380] * observer()[wavelength_nm - 380, 1]
        inner = np.sqrt(1.0 - face / n**2)
        s, p = ((cosine - n * inner) / (cosine + n * inner)) ** 2, ((n * cosine - inner) / (n * cosine + inner)) ** 2
        if not polarised:
            s = p = 0.5 * (s + p)
        i, r = np.arccos(cosine), np.arccos(inner)
        for k in range(8):
            turned = np.pi - 2.0 * i if k == 0 else 2.0 * (i - r) + k * (np.pi - 2.0 * r)
            power = 0.5 * (s + p) if k == 0 else 0.5 * ((1.0 - s) ** 2 * s**k + (1.0 - p) ** 2 * p**k)
            angle_deg = np.degrees(np.pi - np.arccos(np.cos(turned)))
            bins = np.minimum((angle_deg / STEP_DEG).astype(int), n_bins - 1)
            total += share * np.bincount(bins, power, minlength=n_bins)
    return total / np.sin(np.radians((np.arange(n_bins) + 0.5) * STEP_DEG))


def second_over_first(light: np.ndarray) -> float:
    """Ratio of the bows' peaks under the sun's disc."""
    middle, seen = (np.arange(len(light)) + 0.5) * STEP_DEG, under_the_sun(light)
    return float(seen[(middle > 49.0) & (middle < 56.0)].max() / seen[(middle > 38.0) & (middle < 44.0)].max())


def test_the_second_bow_is_a_seventh_as_bright_as_the_first() -> None:
    """In luminance at 20 C under a sun of its true size: 0.148 by ray optics; 0.122 if polarisation were forgotten."""
    _, light = profile(scene_of(SHOT.replace("WAVELENGTHS", "")), 15_000, sun_radiance(40.0, 23.0))
    found, right, wrong = second_over_first(light), *(second_over_first(ray_optics(kept)) for kept in (True, False))
    assert right == pytest.approx(0.148, abs=0.0005)
    assert wrong == pytest.approx(0.122, abs=0.0005)
    assert found == pytest.approx(0.148, abs=0.004)
