"""Settings that change how light is looked for, and never how much of it there is."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.colour.observer import luminance
from tests.rendering import rendered

VIEW = """
[camera]
position = [0, 1.6, 3]
target = [0, 0.35, 0]
focal_length = 45
pixels = [12, 12]
[sky]
kind = "overcast"
[materials.flint]
refractive_index = { abbe = [1.75, 27] }
absorption = { per_metre = [[400, 3], [700, 0.5]] }
[[objects]]
name = "floor"
shape = { box = [6, 0.1, 6] }
surface = { reflectance = [0.5, 0.4, 0.3], roughness = 0.3 }
transform = { translation = [0, -0.05, 0] }
[[objects]]
name = "prism"
shape = { prism = { apex = 60, side = 0.8, length = 0.8 } }
material = "flint"
transform = { translation = [-0.4, 0.4, 0], rotation = [0, 30, 0] }
[[objects]]
name = "frosted"
shape = { sphere = 0.35 }
material = "flint"
roughness = 0.2
transform = { translation = [0.5, 0.36, 0.2] }
[[objects]]
name = "pane"
shape = { rectangle = [0.8, 0.8] }
thickness = 0.005
material = "flint"
transform = { translation = [0, 0.6, 1.2], rotation = [20, 30, 0] }
"""


def alike(a, b, least):
    """Whether two pictures have one mean within 5 standard errors, which are small against `least` of it."""
    error = np.hypot(a.mean_error, b.mean_error)
    assert error < 0.25 * least * b.mean
    assert a.mean == pytest.approx(b.mean, abs=5.0 * error)
    assert a.xyz.mean(axis=(0, 1)) == pytest.approx(b.xyz.mean(axis=(0, 1)), rel=2.0 * least)


@pytest.fixture(scope="module")
def usual():
    return rendered(VIEW, 384)


@pytest.mark.parametrize("splits", [0, 1, 8])
def test_splitting_changes_no_mean(usual, splits):
    alike(rendered(VIEW + f"[render]\nsplits = {splits}\n", 384, seed=splits + 1), usual, 0.01)


def test_the_mean_over_wavelengths_rendered_alone_is_the_white_picture(usual):
    # Each wavelength alone has no companions, no hero and no weights among them.
    nm = np.arange(382.5, 780.0, 5.0)
    listed = [float(w) for w in nm]
    alone = [rendered(VIEW + f"[render]\nwavelengths = {listed[k : k + 40]}\n", 768) for k in range(0, len(listed), 40)]
    spectrum = np.concatenate([picture.bins.mean(axis=(1, 2)) for picture in alone])
    every = np.interp(np.arange(380.0, 781.0), nm, spectrum)
    assert luminance(every) == pytest.approx(usual.mean, rel=0.01)


@pytest.mark.parametrize(
    "lines",
    [
        "lines = [[589.0, 0.67], [589.6, 0.33]]",
        "lines = [[546.1, 0.5]]\ncolour = [1, 1, 1]",
        "lines = [[435.8, 0.1], [546.1, 0.6], [611.0, 0.3]]",
    ],
)
def test_a_lamp_with_lines_has_the_luminance_it_states(lines):
    view = "[camera]\nposition = [0, 0, 3]\ntarget = [0, 0, 0]\nfocal_length = 400\npixels = [8, 8]\n"
    lamp = f'[[lights]]\nname = "lamp"\nshape = {{ rectangle = [2, 2] }}\nluminance = 1000\n{lines}\n'
    picture = rendered(view + lamp, 256)
    assert picture.mean_error < 3.0
    assert picture.mean == pytest.approx(1000.0, abs=5.0 * picture.mean_error)
    # And beside light without lines, which must not be counted in the lines' share of the wavelengths.
    both = rendered(view + lamp.replace("[2, 2]", "[0.1, 0.1]") + '[sky]\nkind = "uniform"\n', 256)
    assert both.mean == pytest.approx(1000.0, abs=max(5.0 * both.mean_error, 5.0))


def test_a_mirror_maze_is_followed_as_far_as_the_cap_says():
    # Between two mirrors that keep 0.9, L = the lamp's times 0.9^k; the cap on interfaces cuts what is left, counted.
    view = "[camera]\nposition = [0, 0, 0]\ntarget = [0, 0, -1]\nfocal_length = 400\npixels = [4, 4]\n"
    wall = '[[objects]]\nname = "{}"\nshape = {{ box = [4, 4, 0.1] }}\nsurface = {{ {}, finish = "metal" }}\n'
    wall += "transform = {{ translation = [0, 0, {}] }}\n"
    maze = "".join(wall.format(at, "spectrum = [[400, 0.9], [700, 0.9]]", at) for at in (-1, 1))
    dark = rendered(view + maze + "[render]\nmax_interfaces = 20\n", 64)
    assert dark.mean == 0.0
    # The power of a path is 1 until roulette, which keeps its mean: 0.9^21 is cut.
    assert dark.tally.cap_lost / 2.0**32 / dark.tally.samples == pytest.approx(0.9**21, rel=0.1)
