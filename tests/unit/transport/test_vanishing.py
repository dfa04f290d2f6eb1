"""Clear things that lose no light cannot be seen in a uniform sky: wherever a path turns, it ends in the same light.

By the conservation of basic radiance L / n^2 along rays through lossless media, with reflected and refracted shares
that add up to 1 (F. E. Nicodemus, "Radiance", Am. J. Phys. 31, 368, 1963).
"""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from renderer.pictures.errors_of_mean import STUDENT_T
from tests.rendering import guides_of, rendered, scene_of

SKY = 1000.0  # cd/m2
ROUNDS = 64
FLOOR = 1e-6  # of the sky, under which no error is taken to be
VIEW = """
[camera]
position = [0, 0, 4]
target = [0, 0, 0]
focal_length = 50
pixels = [64, 64]
[sky]
kind = "uniform"
[materials.glass]
refractive_index = { abbe = [1.52, 58] }
[materials.h2o]
like = "water"
absorption = { per_metre = [[550, 0]] }
"""
SPHERE = """
[[objects]]
name = "sphere"
shape = { sphere = 0.8 }
material = "glass"
"""
CUBE = """
[[objects]]
name = "cube"
shape = { box = [1, 1, 1] }
material = "glass"
transform = { rotation = [25, 35, 10] }
"""
FILM = """
[[objects]]
name = "film"
shape = { box = [3, 0.05, 3] }
material = "h2o"
transform = { rotation = [50, 20, 10] }
"""
GLASS_OF_WATER = """
[[objects]]
name = "tank"
shape = { tank = { size = [1.2, 1.2, 1.2], wall = 0.05, fill = 0.8, filling = "h2o" } }
material = "glass"
overlap_priority = 2
transform = { rotation = [35, 30, 0] }
"""
THINGS = {"sphere": SPHERE, "cube": CUBE, "tilted film of water": FILM, "glass of water": GLASS_OF_WATER}


def covers(scene) -> float:
    """Share of the pixels whose centre looks through an interface."""
    return float((guides_of(scene)["surfaces_crossed"] > 0).mean())


def beyond(picture, sky, limit) -> float:
    """Share of the pixels that are more than so many standard errors from the sky."""
    error = np.maximum(picture.error, FLOOR * sky)
    return float((np.abs(picture.luminance - sky) > limit * error).mean())


def alone(nm: float) -> str:
    """Render one wavelength."""
    return f"[render]\nwavelengths = [{nm}]\n"


@pytest.mark.parametrize("name", THINGS)
def test_things_of_glass_and_water_vanish_at_one_wavelength(name):
    sky = rendered(VIEW.replace("64, 64", "2, 2") + alone(550.0), 8).mean
    scene = scene_of(VIEW + THINGS[name] + alone(550.0))
    assert covers(scene) > 0.2
    picture = rendered(scene, ROUNDS)
    assert picture.luminance.size >= 4096
    assert beyond(picture, sky, 3.0) < 0.01
    assert beyond(picture, sky, 6.0) == 0.0
    assert picture.mean == pytest.approx(sky, rel=1e-3)


@pytest.mark.parametrize("name", THINGS)
def test_things_of_glass_and_water_vanish_in_white_light(name):
    # The layer states the half-width that holds 68.27 % by Student's t with 7 degrees of freedom. What 3 and 6 standard
    # errors are to a normal distribution, t has further out, by its quantiles.
    three, six = (float(stats.t.isf(stats.norm.sf(k), 7)) / STUDENT_T[6] for k in (3.0, 6.0))
    picture = rendered(VIEW + THINGS[name], ROUNDS)
    assert beyond(picture, SKY, three) < 0.01
    assert beyond(picture, SKY, six) == 0.0
    assert picture.mean == pytest.approx(SKY, rel=1e-3)


# A camera in glass sees the sky's own radiance: the factor n^2 that it has there is undone.
FROM_INSIDE = VIEW.replace("[0, 0, 4]", "[0.1, 0.2, 0.3]").replace("64, 64", "16, 16")
WAVES = """
[[objects]]
name = "waves"
shape = { water_surface = { size = [3, 3], cells = [9, 7], depth = 0.5, waves = [
  { amplitude = 0.12, wavelength = 0.9, direction = 30 }, { amplitude = 0.05, wavelength = 0.5, direction = 110 }] } }
material = "h2o"
"""
LENS = """
[[objects]]
name = "lens"
shape = { lens = { radius_front = 1.0, radius_back = -3.0, thickness = 0.4, diameter = 1.2 } }
material = "glass"
transform = { rotation = [10, 20, 0] }
"""
CYLINDER = """
[[objects]]
name = "cylinder"
shape = { cylinder = [0.7, 1.2] }
material = "glass"
smooth = true
transform = { rotation = [30, 10, 0] }
"""
PANE = """
[[objects]]
name = "pane"
shape = { rectangle = [2, 2] }
thickness = 0.004
material = "glass"
transform = { rotation = [40, 50, 0] }
"""
SEEN = {
    "a glass sphere from inside": FROM_INSIDE + SPHERE,
    "coarse waves with interpolated normals": VIEW.replace("[0, 0, 4]", "[0, 1, 4]") + WAVES,
    "a lens": VIEW + LENS,
    "a cylinder with interpolated normals": VIEW + CYLINDER,
    "a pane": VIEW + PANE,
    "a glass sphere through a thin lens": VIEW.replace("focal_length", "f_number = 0.7\nfocal_length") + SPHERE,
    "a turning cube": VIEW + CUBE.replace("[25, 35, 10]", "{ 1001 = [25, 35, 10], 1002 = [85, 35, 70] }"),
}

FAR = VIEW.replace("[0, 0, 4]", "[1e6, 1e6, 1000004]").replace("target = [0, 0, 0]", "target = [1e6, 1e6, 1e6]")
OPEN_SHUTTER = VIEW.replace("[0, 0, 4]", "[0, 0, 1]\nshutter = 360\nshutter_offset = 0")
PLACES = ", ".join(f"{{ translation = [{x}, {y}, 0] }}" for x in (-0.3, 0.1, 0.6) for y in (-0.3, 0.1))
SEEN |= {
    "a mirrored cube": VIEW + CUBE.replace("rotation", "scale = [-1, 1, 1], rotation"),
    "a stretched sphere": VIEW + SPHERE + "transform = { scale = [1.3, 0.6, 1] }\n",
    "a glass of water of a tenth of a millimetre": VIEW.replace("[0, 0, 4]", "[0, 0, 4e-4]")
    + GLASS_OF_WATER.replace("rotation", "scale = 1e-4, rotation"),
    "a glass of water a thousand kilometres off": FAR
    + GLASS_OF_WATER.replace("rotation", "translation = [1e6, 1e6, 1e6], rotation"),
    "a film of a nanometre": VIEW + FILM.replace("0.05", "1e-9"),
    "spheres placed into each other": VIEW + SPHERE.replace("0.8", "0.25") + f"placements = [{PLACES}]\n",
    "a sphere that comes over the camera": OPEN_SHUTTER
    + SPHERE
    + "transform = { translation = { 1001 = [0, 0, 0], 1002 = [0, 0, 1] } }\n",
    "a camera that goes into a sphere": OPEN_SHUTTER.replace(
        "= [0, 0, 1]", "= { 1001 = [0, 0, 1], 1002 = [0, 0, 0.5] }"
    )
    + SPHERE,
}


@pytest.mark.parametrize("name", SEEN)
def test_other_views_and_shapes_vanish_too(name):
    sky = rendered(VIEW.replace("64, 64", "2, 2") + alone(550.0), 8).mean
    picture = rendered(SEEN[name] + alone(550.0), 8)
    lost = picture.tally.cap_lost / 2.0**32 / picture.tally.samples
    assert lost < 1e-4
    assert picture.tally.unmatched == 0
    # The path's share is the same whatever happens to it, but for chance at roulette, and for what a cap cuts.
    assert picture.mean == pytest.approx(sky, rel=1e-3)
    assert picture.luminance.max() < 1.5 * sky


ROUGH = {
    "frosted water": ("roughness = 0.15", 0.95),
    "nearly smooth water": ("roughness = 0.03", 0.96),
    "metal": ('surface = { spectrum = [[400, 1], [700, 1]], finish = "metal", roughness = 0.1 }', 0.97),
    "gloss": ("surface = { spectrum = [[400, 1], [700, 1]], roughness = 0.2 }", 0.98),
}


@pytest.mark.parametrize("name", ROUGH)
def test_coarse_waves_of_rough_things_hardly_darken_and_never_gain(name):
    # Interpolated normals lean up to 30 degrees from the true ones here, in 63 cells; half the lobe of a mirrored ray
    # that grazes the true surface would be lost.
    look, least = ROUGH[name]
    waves = WAVES.replace('material = "h2o"', look) if "surface" in look else WAVES + look + "\n"
    view = VIEW.replace("[0, 0, 4]", "[0, 1, 4]").replace("64, 64", "24, 24")
    sky = rendered(VIEW.replace("64, 64", "2, 2") + alone(550.0), 8).mean
    picture = rendered(view + waves + alone(550.0), 64)
    assert picture.mean_error < 0.005 * sky
    assert least * sky < picture.mean < sky + 4.0 * picture.mean_error


def test_light_that_total_reflection_keeps_in_a_cube_is_counted_as_lost():
    # A ray keeps the sizes of its three direction cosines in a cube. Where all are below the cosine of the critical
    # angle, sqrt(1 - 1/n^2), it can never leave: the cap cuts such paths, and says what it cut.
    n, side, fine = 1.52, 48, 16
    text = VIEW.replace("[0, 0, 4]", "[0.2, 0.2, 0.2]").replace("64, 64", f"{side}, {side}").replace("50", "18")
    cube = CUBE.replace("transform = { rotation = [25, 35, 10] }", "")
    text = text.replace("{ abbe = [1.52, 58] }", f"{n}") + cube + alone(550.0) + "max_interfaces = 256\n"
    # Focal length 18 mm and sensor 36 mm: the picture spans one focal length each way.
    across = (np.arange(side * fine) + 0.5) / (side * fine) * 2.0 - 1.0
    ahead = -np.ones(3) / np.sqrt(3.0)
    right = np.array([1.0, 0.0, -1.0]) / np.sqrt(2.0)
    up = np.cross(right, ahead)
    rays = ahead + across[None, :, None] * right - across[:, None, None] * up
    rays /= np.linalg.norm(rays, axis=-1, keepdims=True)
    trapped = (np.abs(rays) < np.sqrt(1.0 - 1.0 / n**2)).all(axis=-1)
    blocks = trapped.reshape(side, fine, side, fine).mean(axis=(1, 3))
    # Inner pixels whose filter, a pixel to each side, sees rays of one kind alone.
    near = np.array([blocks[i : i + side - 2, j : j + side - 2] for i in range(3) for j in range(3)])
    dark, bright = (near == 1.0).all(axis=0), (near == 0.0).all(axis=0)
    assert dark.sum() > 100
    assert bright.sum() > 100
    picture = rendered(text, 8)
    sky = rendered(VIEW.replace("64, 64", "2, 2") + alone(550.0), 8).mean
    inner = picture.luminance[1:-1, 1:-1]
    assert (inner[dark] == 0.0).all()
    assert inner[bright].mean() == pytest.approx(sky, rel=1e-3)
    lost = picture.tally.cap_lost / 2.0**32 / picture.tally.samples
    assert lost == pytest.approx(1.0 - picture.mean / sky, abs=1e-6)
    assert lost == pytest.approx(trapped.mean(), rel=0.02)
