"""Refraction measured in rendered pictures, one wavelength at a time, against closed forms and published figures."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import optimize

from renderer.optics.bow_geometry import drop_index
from tests.rendering import Rendered, rendered

# Maker's data sheet for N-BK7, as in tests/published/test_glass.py: F 486.13, d 587.56 and C 656.27 nm.
LINES = {486.13: 1.52238, 587.56: 1.51680, 656.27: 1.51432}


def middle_of(picture: np.ndarray) -> tuple[float, float]:
    """Column and row of the light's centre, in pixels from the top left corner."""
    rows, columns = np.indices(picture.shape) + 0.5
    return float((columns * picture).sum() / picture.sum()), float((rows * picture).sum() / picture.sum())


def angle_of(column: float, columns: int, half_field: float) -> float:
    """Angle to the right of the camera's axis [radians] of a place along a row; `half_field` is a tangent."""
    return math.atan((2.0 * column / columns - 1.0) * half_field)


# A prism.

DISTANCE = 1.0  # of the camera from the prism; the slit is a thousand times as far
COLUMNS = 400
HALF_FIELD = math.tan(math.radians(1.2))


def prism_shot(turn_deg: float, half_deg: float) -> str:
    """An upright prism, ridge to +x, between a camera and a slit that lie half the deviation off its middle plane."""
    x, z = -math.sin(math.radians(half_deg)), math.cos(math.radians(half_deg))
    return f"""
title = "prism"
[camera]
position = [{x * DISTANCE}, 0, {z * DISTANCE}]
target = [0, 0, 0]
focal_length = {18.0 / HALF_FIELD}
sensor = [36, 0.36]
pixels = [{COLUMNS}, 4]
[sky]
kind = "none"
[render]
wavelengths = {list(LINES)}
[[objects]]
name = "prism"
shape = {{ prism = {{ apex = 60, side = 0.08, length = 0.1 }} }}
material = "N-BK7"
transform = {{ rotation = [-90, {-90 + turn_deg}, 0] }}
[[lights]]
name = "slit"
shape = {{ rectangle = [0.6, 40] }}
luminance = 1000
two_sided = true
transform = {{ translation = [{x * 1000}, 0, {-z * 1000}], rotation = [0, {half_deg}, 0] }}
"""


def test_a_prism_turns_three_lines_by_their_least_deviation() -> None:
    """2 asin(n sin 30) - 60 degrees: J. Fraunhofer's method, in M. Born and E. Wolf, Principles of Optics, 4.7.2."""
    half_deg = math.degrees(math.asin(LINES[587.56] * 0.5)) - 30.0
    turns = np.array([-4.0, -2.0, 0.0, 2.0, 4.0])
    deviations = np.empty((len(turns), len(LINES)))
    for k, turn in enumerate(turns):
        picture = rendered(prism_shot(turn, half_deg), 16)
        for line in range(len(LINES)):
            column, _ = middle_of(picture.bins[line])
            # The axis points at the prism, from where the slit lies twice `half_deg` to the left, the side of the base:
            # light that is seen to the right of the axis has been turned by so much more.
            deviations[k, line] = 2.0 * half_deg + math.degrees(angle_of(column, COLUMNS, HALF_FIELD))
    for line, index in enumerate(LINES.values()):
        bend, slope, level = np.polyfit(turns, deviations[:, line], 2)
        least = level - slope**2 / (4.0 * bend)
        assert bend > 0.0
        assert least == pytest.approx(2.0 * math.degrees(math.asin(index * 0.5)) - 60.0, abs=0.05)


# Snell's window.


def window(wavelengths: str, rounds: int) -> Rendered:
    """Straight up from 1 m under still water over a black bed, near the edge of the window: 46 to 51 degrees."""
    aim = math.radians(48.5)
    return rendered(
        f"""
title = "window"
[camera]
position = [0, -1, 0]
target = [{math.sin(aim)}, {-1 + math.cos(aim)}, 0]
focal_length = {18.0 / math.tan(math.radians(2.5))}
sensor = [0.72, 36]
pixels = [4, 200]
[sky]
kind = "uniform"
luminance = 1000
[render]
{wavelengths}
[[objects]]
name = "water"
shape = {{ water_surface = {{ size = [400, 400], cells = [2, 2] }} }}
below = "clear water"
[[objects]]
name = "bed"
shape = {{ box = [400, 0.2, 400] }}
surface = {{ reflectance = 0 }}
transform = {{ translation = [0, -3, 0] }}
[materials."clear water"]
like = "water"
temperature = 20
absorption = {{ per_metre = [[550, 0]] }}
""",
        rounds,
    )


def transmitted(angle: np.ndarray, critical: float) -> np.ndarray:
    """Unpolarised Fresnel transmittance out of water at an angle in it, 0 beyond the critical angle."""
    n = 1.0 / math.sin(critical)
    outside = np.clip(n * np.sin(angle), 0.0, 1.0)
    a, b = np.cos(angle), np.sqrt(1.0 - outside**2)
    s, p = (n * a - b) / (n * a + b), (a - n * b) / (a + n * b)
    return np.where(n * np.sin(angle) < 1.0, 1.0 - 0.5 * (s * s + p * p), 0.0)


def fitted_edge_deg(rows: np.ndarray) -> float:
    """The critical angle that fits light across the window's edge, top to bottom: Fresnel's, by the pixel filter."""
    n = len(rows)
    half = math.tan(math.radians(2.5))
    # The tent of a pixel's filter is sampled at 15 places; places count from the top of the first row.
    offsets = np.linspace(-1.0, 1.0, 17)[1:-1]
    weights = 1.0 - np.abs(offsets)
    place = np.arange(n)[:, None] + 0.5 + offsets

    def model(turned: float) -> np.ndarray:
        side = np.arctan((2.0 * place / n - 1.0) * half)  # downwards, away from the vertical
        return (transmitted(math.radians(48.5) + side, math.radians(turned)) @ weights) / weights.sum()

    def misfit(turned: float) -> float:
        curve = model(turned)
        scale = (curve @ rows) / (curve @ curve)
        return float(np.square(rows - scale * curve).sum())

    grid = np.arange(47.5, 49.5, 0.02)
    start = grid[np.argmin([misfit(angle) for angle in grid])]
    return float(optimize.minimize_scalar(misfit, bounds=(start - 0.03, start + 0.03), method="bounded").x)


def test_the_window_ends_at_the_critical_angle() -> None:
    """asin(1/n) at the sodium line; n = 1.3330 of water at 20 C against air (IAPWS R9-97) makes it 48.6 degrees."""
    picture = window("wavelengths = [589.3]", 64).bins[0].mean(axis=1)
    n = float(drop_index(589.3, 20.0))
    expected = math.degrees(math.asin(1.0 / n))
    assert expected == pytest.approx(48.6, abs=0.03)
    assert fitted_edge_deg(picture) == pytest.approx(expected, abs=0.1)


def test_in_white_light_the_edge_of_luminance_lies_near_that_of_yellow_green() -> None:
    """Blue bends more, so its window is narrower: the edge of luminance is that of about 560 nm, 0.02 to 0.1 degree in.

    The offset from the sodium line's edge is what a measurement in white light must allow for.
    """
    picture = window("", 256).luminance.mean(axis=1)
    n = float(drop_index(589.3, 20.0))
    offset = fitted_edge_deg(picture) - math.degrees(math.asin(1.0 / n))
    assert -0.12 < offset < 0.02


# Depth and displacement.


def seen_from_above(depth_m: float, filled: bool) -> float:
    """Distance of a mark from the lens as its place in the picture tells: 2 m above the water, the mark 0.1 m aside."""
    field = math.tan(math.radians(4.0))
    water = """
[[objects]]
name = "water"
shape = { water_surface = { size = [40, 40], cells = [2, 2] } }
below = "water"
"""
    picture = rendered(
        f"""
title = "depth"
[camera]
matrix = [1, 0, 0, 0, 0, 0, 1, 2, 0, -1, 0, 0, 0, 0, 0, 1]
focal_length = {18.0 / field}
sensor = [36, 2.25]
pixels = [320, 20]
[sky]
kind = "none"
[render]
wavelengths = [589.3]
[[lights]]
name = "mark"
shape = {{ rectangle = [0.004, 0.004] }}
luminance = 1000
two_sided = true
transform = {{ translation = [0.1, {-depth_m}, 0], rotation = [-90, 0, 0] }}
"""
        + (water if filled else ""),
        32,
    ).bins[0]
    column, _ = middle_of(picture)
    return 0.1 / abs((2.0 * column / 320.0 - 1.0) * field)


def test_a_mark_under_water_seems_three_quarters_as_deep() -> None:
    """d / n near the vertical; at 2 degrees the closed form by Snell's law differs by less than 0.1 %."""
    assert seen_from_above(1.0, filled=False) == pytest.approx(3.0, rel=1e-3)
    apparent = seen_from_above(1.0, filled=True) - 2.0
    assert apparent == pytest.approx(1.0 / 1.3330, rel=0.01)


def test_a_plate_moves_what_is_seen_aside() -> None:
    """t sin(i - r) / cos r, for 50 mm of N-BK7 at 45 degrees (M. Born and E. Wolf; n at the d line by the maker)."""
    field, thickness = math.tan(math.radians(0.25)), 0.05
    shot = f"""
title = "plate"
[camera]
position = [0, 0, 10]
target = [0, 0, 0]
focal_length = {18.0 / field}
sensor = [36, 2.25]
pixels = [320, 20]
[sky]
kind = "none"
[render]
wavelengths = [587.56]
[[lights]]
name = "mark"
shape = {{ rectangle = [0.004, 0.004] }}
luminance = 1000
transform = {{ translation = [0, 0, -10] }}
"""
    plate = f"""
[[objects]]
name = "plate"
shape = {{ box = [0.6, 0.6, {thickness}] }}
material = "N-BK7"
transform = {{ rotation = [0, 45, 0] }}
"""
    bare, _ = middle_of(rendered(shot, 32).bins[0])
    moved, _ = middle_of(rendered(shot + plate, 64).bins[0])
    i = math.radians(45.0)
    r = math.asin(math.sin(i) / LINES[587.56])
    expected = thickness * math.sin(i - r) / math.cos(r)
    found = abs(moved - bare) / 160.0 * field * 20.0
    assert found == pytest.approx(expected, rel=0.01)


# Water's own colour.

# Absorption of pure water at 20 C, per metre: J. D. Mason, M. T. Cone and E. S. Fry, Appl. Opt. 55, 7163 (2016),
# table 2; above 510 nm R. Roettgers, Water Optical Properties Processor, absorption v3 (2016), after Pope and Fry 1997.
PURE_WATER = {450.0: 0.00808, 550.0: 0.0581, 650.0: 0.340}


@pytest.mark.parametrize("length_m", [1.0, 5.0, 20.0])
@pytest.mark.parametrize("wavelength_nm", list(PURE_WATER))
def test_water_passes_what_its_absorption_leaves(length_m: float, wavelength_nm: float) -> None:
    """(1 - R)^2 T / (1 - R^2 T^2) with T = exp(-a L): a slab between two faces of which each reflects R."""
    shot = f"""
title = "water"
[camera]
position = [0, 0, {length_m + 5}]
target = [0, 0, 0]
focal_length = 4000
sensor = [36, 36]
pixels = [16, 16]
[sky]
kind = "none"
[render]
wavelengths = [{wavelength_nm}]
[[lights]]
name = "lamp"
shape = {{ rectangle = [3, 3] }}
luminance = 1000
transform = {{ translation = [0, 0, {-length_m - 1}] }}
"""
    water = f"""
[[objects]]
name = "water"
shape = {{ box = [2, 2, {length_m}] }}
material = "water"
"""
    n = float(drop_index(wavelength_nm, 20.0))
    back, left = ((n - 1.0) / (n + 1.0)) ** 2, math.exp(-PURE_WATER[wavelength_nm] * length_m)
    expected = (1.0 - back) ** 2 * left / (1.0 - (back * left) ** 2)
    found = rendered(shot + water, 8).bins.mean() / rendered(shot, 8).bins.mean()
    assert found == pytest.approx(expected, rel=5e-3)


# Plates at Brewster's angle.


def pile(plates: int, polariser_deg: float | None) -> float:
    """Share of a lamp's light that comes through plates of index 1.5 at Brewster's angle, and the lens's polariser."""
    lens = "" if polariser_deg is None else f"polariser = {polariser_deg}\n"
    brewster = math.degrees(math.atan(1.5))
    shot = f"""
title = "pile"
[camera]
position = [0, 0, 40]
target = [0, 0, 0]
focal_length = 20000
{lens}pixels = [16, 16]
[sky]
kind = "none"
[render]
wavelengths = [550]
[materials.glass]
refractive_index = 1.5
[[lights]]
name = "lamp"
shape = {{ rectangle = [60, 60] }}
luminance = 1000
transform = {{ translation = [0, 0, -30] }}
"""
    glass = "".join(
        f"""
[[objects]]
name = "plate {k}"
shape = {{ box = [40, 40, 0.01] }}
material = "glass"
transform = {{ translation = [0, 0, {0.05 * k}], rotation = [{brewster}, 0, 0] }}
"""
        for k in range(plates)
    )
    open_lens = shot.replace(lens, "") if lens else shot
    return float(rendered(shot + glass, 256).bins[0].mean() / rendered(open_lens, 8).bins[0].mean())


@pytest.mark.parametrize("plates", [2, 5])
def test_piles_of_plates_polarise_as_their_mueller_matrices_say(plates: int) -> None:
    """p passes whole; of s, 2m faces of reflectance R pass (1 - R) / (1 + (2m - 1) R), all orders added without phase.

    G. G. Stokes, Proc. R. Soc. 11, 545 (1862). The plates are turned about the camera's x, which so is the s axis.
    """
    s = math.sin(2.0 * math.atan(1.5) - math.pi / 2.0) ** 2  # sin^2(i - r), where i + r = 90 degrees
    faces = 2 * plates
    passed = (1.0 - s) / (1.0 + (faces - 1) * s)
    assert pile(plates, None) == pytest.approx(0.5 * (1.0 + passed), rel=5e-3)
    assert pile(plates, 0.0) == pytest.approx(0.5 * passed, rel=5e-3)
    assert pile(plates, 90.0) == pytest.approx(0.5, rel=5e-3)
    assert pile(plates, 30.0) == pytest.approx(0.5 * (0.75 * passed + 0.25), rel=5e-3)
