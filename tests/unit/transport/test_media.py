"""Which material is where: overlaps, walls that coincide, bubbles, open sheets, and cameras inside.

Two ways of modelling one thing must give one picture. Both renders have the same sample points but meet different
boundaries, so they are compared within their standard errors, the whole picture and pixel by pixel.
"""

from __future__ import annotations

import numpy as np
import pytest

from tests.rendering import rendered

VIEW = """
[camera]
position = [0.5, 1.2, 3]
target = [0, 0.4, 0]
focal_length = 60
pixels = [24, 24]
[sky]
kind = "overcast"
[render]
wavelengths = [550]
[materials.glass]
refractive_index = 1.5
[materials.lock]
refractive_index = 1.333
absorption = { per_metre = [[550, 0.5]] }
[materials.air]
refractive_index = 1.0
[[objects]]
name = "floor"
shape = { box = [10, 0.1, 10] }
surface = { reflectance = 0.5 }
transform = { translation = [0, -0.05, 0] }
"""
IN_WATER = (
    VIEW.replace('[sky]\nkind = "overcast"\n', "")
    + """
[[lights]]
name = "lamp"
shape = { rectangle = [0.5, 0.5] }
luminance = 5000
transform = { translation = [0.2, 0.8, 0], rotation = [90, 0, 0] }
[[objects]]
name = "stone"
shape = { box = [0.3, 0.3, 0.3] }
surface = { reflectance = 0.8 }
transform = { translation = [-0.3, 0.3, 0] }
"""
)


def thing(name, shape, material, at=(0.0, 0.5, 0.0), priority=0, more=""):
    return f"""
[[objects]]
name = "{name}"
shape = {{ {shape} }}
material = "{material}"
overlap_priority = {priority}
transform = {{ translation = {list(at)} }}
{more}
"""


def box(name, size, material, at=(0.0, 0.5, 0.0), priority=0):
    return thing(name, f"box = {list(size)}", material, at, priority)


def agree(a, b, limit=5.0):
    """Whether two pictures are one, within `limit` standard errors of their means and twice that of each pixel."""
    assert a.tally.unmatched == b.tally.unmatched == 0
    assert a.mean > 0.0
    assert a.mean == pytest.approx(b.mean, abs=limit * np.hypot(a.mean_error, b.mean_error))
    error = np.maximum(np.hypot(a.error, b.error), 1e-6 * a.mean)
    assert (np.abs(a.luminance - b.luminance) < 2.0 * limit * error).all()


TANK = thing("tank", "tank = { size = [1, 1, 1], wall = 0.1 }", "glass", priority=2)


@pytest.fixture(scope="module")
def tank_with_overlap():
    """Water from the floor of the tank, which is at 0.1, to 0.7; it reaches half-way into walls and floor."""
    return rendered(VIEW + TANK + box("water", [0.9, 0.65, 0.9], "lock", [0, 0.375, 0], 1), 32)


@pytest.mark.parametrize(
    ("size", "middle"),
    [
        pytest.param([0.8, 0.6, 0.8], 0.4, id="walls equal to the last bit or a rounding"),
        pytest.param([0.800001, 0.6000005, 0.800001], 0.39999975, id="overlapping by half a micrometre"),
        pytest.param([1.0, 0.7, 1.0], 0.35, id="out to the outer walls"),
    ],
)
def test_glass_holds_water_however_far_the_water_reaches_into_the_glass(tank_with_overlap, size, middle):
    agree(tank_with_overlap, rendered(VIEW + TANK + box("water", size, "lock", [0, middle, 0], 1), 32))


def test_a_gap_of_air_between_glass_and_water_is_seen(tank_with_overlap):
    # The opposite: what the checks warn of. It mirrors, so the picture must change.
    gap = rendered(VIEW + TANK + box("water", [0.798, 0.599, 0.798], "lock", [0, 0.4005, 0], 1), 32)
    with pytest.raises(AssertionError):
        agree(tank_with_overlap, gap)


def test_priority_decides_and_not_the_order_in_the_file():
    glass, water = box("glass", [1, 1, 1], "glass", priority=2), box("water", [1, 1, 1], "lock", priority=1)
    alone = rendered(VIEW + glass, 8)
    assert np.array_equal(rendered(VIEW + glass + water, 8).sums.xyz, alone.sums.xyz)
    assert np.array_equal(rendered(VIEW + water + glass, 8).sums.xyz, alone.sums.xyz)
    agree(rendered(VIEW + glass + box("small", [0.4, 0.4, 0.4], "lock", priority=1), 32), rendered(VIEW + glass, 32))


def test_a_bubble_of_air_in_water_in_glass():
    water, bubble = (
        box("water", [0.8, 0.8, 0.8], "lock", priority=2),
        thing("bubble", "sphere = 0.3", "air", priority=3),
    )
    picture = rendered(VIEW + box("glass", [1, 1, 1], "glass", priority=1) + water + bubble, 32)
    # A hollow made another way: a coincident ball of glass, which the bubble takes the place of.
    ghost = thing("ghost", "sphere = 0.3", "glass", priority=2)
    agree(picture, rendered(VIEW + box("glass", [1, 1, 1], "glass", priority=1) + water + ghost + bubble, 32))
    with pytest.raises(AssertionError):
        agree(picture, rendered(VIEW + box("glass", [1, 1, 1], "glass", priority=1) + water, 32))


def test_blocks_of_water_that_touch_are_one():
    one = box("water", [1, 1, 1], "lock")
    two = box("left", [0.5, 1, 1], "lock", [-0.25, 0.5, 0]) + box("right", [0.5, 1, 1], "lock", [0.25, 0.5, 0])
    agree(rendered(VIEW + one, 32), rendered(VIEW + two, 32))
    # Straight light passes the touching walls too: lamp and stone stand in different blocks.
    agree(rendered(IN_WATER + one, 128), rendered(IN_WATER + two, 128))


@pytest.mark.parametrize("roughness", [0.0, 0.4])
def test_a_thing_of_lower_priority_is_not_there_even_when_frosted(roughness):
    water = box("water", [1, 1, 1], "lock", priority=3)
    ghost = thing("ghost", "sphere = 0.4", "glass", more=f"roughness = {roughness}")
    agree(rendered(IN_WATER + water, 128), rendered(IN_WATER + water + ghost, 128))


OPEN = """
[[objects]]
name = "pool"
shape = { water_surface = { size = [8, 8], cells = [8, 8], waves = [{ amplitude = 0.03, wavelength = 1.1 }] } }
below = "lock"
transform = { translation = [0, 0.5, 0] }
"""
BASIN = "".join(
    f"""
[[objects]]
name = "basin {k}"
shape = {{ box = {size} }}
surface = {{ reflectance = 0.3 }}
transform = {{ translation = {at} }}
"""
    for k, (size, at) in enumerate(
        [
            ([0.2, 0.8, 6.2], [3, 0.35, 0]),
            ([0.2, 0.8, 6.2], [-3, 0.35, 0]),
            ([6.2, 0.8, 0.2], [0, 0.35, 3]),
            ([6.2, 0.8, 0.2], [0, 0.35, -3]),
        ]
    )
)
CLOSED = OPEN.replace("[8, 8], waves", "[8, 8], depth = 2, waves").replace("below", "material")


@pytest.mark.parametrize(
    "view",
    [
        pytest.param(VIEW, id="from above"),
        pytest.param(
            VIEW.replace("0.5, 1.2, 3", "0.5, 0.3, 1.5").replace("0, 0.4, 0]", "0, 0.6, 0]"), id="from under water"
        ),
    ],
)
def test_an_open_sheet_with_water_below_is_a_block_of_water(view):
    # The basin's walls stand in the water, so that no ray leaves it sideways.
    agree(rendered(view + BASIN + OPEN, 32), rendered(view + BASIN + CLOSED, 32))


def test_a_camera_under_water_sees_what_a_path_into_water_would():
    # A camera behind a window of still water at normal incidence: the sky comes in by 1 - R, absorbed on the way.
    n, depth, rate = 1.333, 0.4, 0.5
    sky = '[sky]\nkind = "uniform"\n'
    view = VIEW.replace('[sky]\nkind = "overcast"\n', sky).replace("[0.5, 1.2, 3]", "[0, 0.1, 0]")
    view = view.replace("[0, 0.4, 0]", "[0, 0.5, 0.0001]").replace("= 60", "= 20000")
    still = OPEN.replace("amplitude = 0.03", "amplitude = 0.0")
    picture = rendered(view.replace("reflectance = 0.5", "reflectance = 0.0") + still, 8)
    plain = rendered(view.replace("reflectance = 0.5", "reflectance = 0.0"), 8)
    passed = 1.0 - ((n - 1.0) / (n + 1.0)) ** 2
    assert picture.mean / plain.mean == pytest.approx(passed * np.exp(-rate * depth), rel=1e-6)


def test_a_lens_that_dips_into_water_sees_both():
    # The opening, of radius 0.1, lies across the surface of black water and looks along it, focused far away: rays that
    # start below the surface end in the water, those from above see the sky. Area of a segment of a circle.
    view = VIEW.replace('"overcast"', '"uniform"').replace("0.5, 1.2, 3", "0, 0.52, 3").replace("0.4, 0]", "0.52, 0]")
    view = view.replace("= 60", "= 20000\nf_number = 100\nfocus_distance = 1e6").replace("24, 24", "8, 8")
    black = OPEN.replace("amplitude = 0.03", "amplitude = 0.0")
    picture = rendered(view.replace("[[550, 0.5]]", "[[550, 1e5]]") + black, 32)
    assert picture.tally.unmatched == 0
    below = (np.arccos(0.2) - 0.2 * np.sqrt(1.0 - 0.2**2)) / np.pi
    assert picture.mean / rendered(view, 8).mean == pytest.approx(1.0 - below, rel=5e-3)


def test_light_that_absorption_has_put_out_leaves_no_broken_number():
    # exp(-x) is exactly 0 from x = 746; what is left of such a path must end, also where it meets total reflection.
    ink = VIEW.replace("[[550, 0.5]]", "[[550, 1e5]]") + box("ink", [1, 1, 1], "lock")
    dark = rendered(ink.replace("0.5, 1.2, 3", "0.3, 0.7, 0.3"), 8)
    assert (dark.sums.xyz == 0).all()
    assert rendered(ink, 8).luminance.min() >= 0.0
    coloured = ink.replace("[[550, 1e5]]", "[[400, 0], [600, 1e5]]").replace("wavelengths = [550]", "")
    assert rendered(coloured.replace("0.5, 1.2, 3", "0.3, 0.7, 0.3"), 32).luminance.max() > 0.0
