"""Light of sun, sky and area lights on surfaces and through panes, against closed forms and plain quadrature."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import integrate

from renderer.colour.observer import luminance
from renderer.transport.layout import SMOOTH_BELOW
from tests.rendering import rendered

CAMERA = """
[camera]
position = [0, 2, 3]
target = [0, 0, 0]
focal_length = 400
pixels = [8, 8]
"""
ONE = "[render]\nwavelengths = [550]\n"
UNIFORM = '[sky]\nkind = "uniform"\n'
SKY = 1000.0  # cd/m2


def floor(surface="spectrum = [[400, 0.5], [700, 0.5]]", at=(0.0, -0.05, 0.0)):
    return f"""
[[objects]]
name = "floor"
shape = {{ box = [10, 0.1, 10] }}
surface = {{ {surface} }}
transform = {{ translation = {list(at)} }}
"""


def ball(look, radius=1.0):
    return f"""
[[objects]]
name = "ball"
shape = {{ sphere = {radius} }}
{look}
"""


def lamp(at=(0.0, 0.8, 0.0), size=(1.0, 0.6), turn=(90, 0, 0), value=1000.0):
    return f"""
[[lights]]
name = "lamp"
shape = {{ rectangle = {list(size)} }}
luminance = {value}
transform = {{ translation = {list(at)}, rotation = {list(turn)} }}
"""


def close(picture, expected, rel):
    """The mean is within 5 of its standard errors, which are small against `rel`."""
    assert picture.mean_error < 0.4 * rel * expected
    assert picture.mean == pytest.approx(expected, abs=max(5.0 * picture.mean_error, 1e-5 * expected))


# Matt planes: L = rho E / pi.


@pytest.mark.parametrize("elevation", [90, 40, 5])
def test_sun_on_a_matt_plane(elevation):
    picture = rendered(CAMERA + f"[sun]\nelevation = {elevation}\nazimuth = 130\n" + floor(), 64)
    sun = picture.scene.sun
    # mean radiance of the disc, its solid angle 2 pi (1 - cos a), and the sine of its height
    solid = 2.0 * np.pi * (1.0 - sun.numbers[4])
    irradiance = luminance(sun.radiance) * solid * np.sin(np.radians(elevation))
    close(picture, 0.5 / np.pi * irradiance, 0.01)


def test_uniform_sky_on_a_matt_plane():
    close(rendered(CAMERA + UNIFORM + floor(), 64), 0.5 * SKY, 0.01)


def test_overcast_sky_on_a_matt_plane():
    # ISO 15469:2004 / CIE S 011, sky type 1: L = Lz (1 + 4 exp(-0.7 / cos Z)) / (1 + 4 exp(-0.7)).
    overcast = '[sky]\nkind = "overcast"\n'
    up = CAMERA.replace("target = [0, 0, 0]", "target = [0, 5, 3.001]").replace("400", "20000")
    zenith = rendered(up + overcast, 64).mean
    weight, _ = integrate.quad(lambda c: (1.0 + 4.0 * np.exp(-0.7 / c)) / (1.0 + 4.0 * np.exp(-0.7)) * c, 0.0, 1.0)
    # The map is linear between rows of one degree.
    picture = rendered(CAMERA + overcast + floor(), 128)
    close(picture, 0.5 * 2.0 * weight * zenith, 0.01)


def factor_of_rectangle(width, depth, height):
    """Form factor from a point to a parallel rectangle centred over it (Siegel and Howell, Thermal Radiation)."""
    a, b = 0.5 * width / height, 0.5 * depth / height
    ra, rb = np.hypot(1.0, a), np.hypot(1.0, b)
    return 4.0 / (2.0 * np.pi) * (a / ra * np.arctan(b / ra) + b / rb * np.arctan(a / rb))


@pytest.mark.parametrize("away", [0.0, 1e5])
def test_a_rectangular_light_over_a_matt_plane(away):
    # Far from the origin too, where numbers have fewer digits left.
    view = f"[camera]\nposition = [{away}, 0.5, {away + 3}]\ntarget = [{away}, 0, {away}]\n"
    view += "focal_length = 30000\npixels = [8, 8]\n"
    picture = rendered(view + floor(at=(away, -0.05, away)) + lamp((away, 0.8, away)), 128)
    close(picture, 0.5 * 1000.0 * factor_of_rectangle(1.0, 0.6, 0.8), 0.03)


def test_a_light_shines_from_its_front_alone_unless_two_sided():
    view = CAMERA.replace("400", "30000").replace("0, 2, 3", "0, 0.5, 3")
    away = lamp(turn=(-90, 0, 0))
    assert rendered(view + floor() + away, 8).mean == 0.0
    both = away.replace("luminance", "two_sided = true\nluminance")
    picture = rendered(view + floor() + both, 128)
    close(picture, 0.5 * 1000.0 * factor_of_rectangle(1.0, 0.6, 0.8), 0.03)


# A white furnace: things in light that is the same all round.

WHITE = "spectrum = [[400, 1], [700, 1]]"
OPAQUE = {
    "matt": "",
    "gloss of roughness 0": ", roughness = 0",
    "gloss of roughness 0.3": ", roughness = 0.3",
    "gloss of roughness 0.7": ", roughness = 0.7",
    "wet": ", wetness = 1",
    "half wet": ", wetness = 0.5, roughness = 0.4",
    "rough metal": ', finish = "metal", roughness = 0.3',
    "rougher metal": ', finish = "metal", roughness = 1',
}
FURNACE = CAMERA.replace("0, 2, 3", "0, 0, 3").replace("400", "100") + UNIFORM


@pytest.mark.parametrize("name", OPAQUE)
def test_white_surfaces_never_give_more_than_they_get(name):
    picture = rendered(FURNACE + ball(f"surface = {{ {WHITE}{OPAQUE[name]} }}"), 64)
    assert picture.mean_error < 0.005 * SKY
    assert picture.mean < SKY + 4.0 * picture.mean_error
    if "metal" not in name:
        assert picture.mean > 0.98 * SKY - 4.0 * picture.mean_error


def test_a_white_mirror_gives_all_exactly():
    look = f'surface = {{ {WHITE}, finish = "metal" }}'
    picture = rendered(FURNACE + ball(look) + ONE, 8)
    sky = rendered(FURNACE + ONE, 8).mean
    assert picture.luminance == pytest.approx(np.full((8, 8), sky), rel=1e-9)


def albedo_of_rough_metal(alpha, cosine, n=1500):
    """Share of the light that GGX facets with Smith's correlated masking reflect once (Heitz, JCGT 3(2), 2014)."""
    view = np.array([np.sqrt(1.0 - cosine**2), 0.0, cosine])
    mu, phi = np.meshgrid((np.arange(n) + 0.5) / n, (np.arange(n) + 0.5) / n * np.pi)
    sine = np.sqrt(1.0 - mu**2)
    light = np.stack([sine * np.cos(phi), sine * np.sin(phi), mu], axis=-1)
    half = light + view
    half /= np.linalg.norm(half, axis=-1, keepdims=True)
    facets = alpha**2 / (np.pi * (half[..., 2] ** 2 * (alpha**2 - 1.0) + 1.0) ** 2)
    hidden = [0.5 * (np.sqrt(1.0 + alpha**2 * (1.0 - c**2) / c**2) - 1.0) for c in (cosine, mu)]
    return float((facets / (1.0 + hidden[0] + hidden[1]) / (4.0 * cosine)).mean() * 2.0 * np.pi)


@pytest.mark.parametrize(("roughness", "cosine"), [(0.5, 1.0), (0.7, 0.5), (1.0, 1.0), (1.0, 0.3)])
def test_rough_metal_in_a_furnace_has_the_albedo_of_its_facets(roughness, cosine):
    side = np.sqrt(1.0 - cosine**2)
    view = CAMERA.replace("[0, 2, 3]", f"[0, {cosine}, {side}]").replace("400", "20000") + UNIFORM
    if cosine == 1.0:
        view = view.replace("[0, 1.0, 0.0]", "[0, 1, 0.0001]")
    picture = rendered(view + floor(f'{WHITE}, finish = "metal", roughness = {roughness}'), 128)
    close(picture, SKY * albedo_of_rough_metal(roughness**2, cosine), 0.02)


def test_rough_metal_under_the_sun():
    # The disc is small against the lobe: L = D G / (4 cos v cos l) x irradiance, mean over a small picture.
    alpha, up = 0.4**2, 50.0
    view = CAMERA.replace("400", "20000") + f"[sun]\nelevation = {up}\nazimuth = 20\n"
    picture = rendered(view + floor(f'{WHITE}, finish = "metal", roughness = 0.4'), 64)
    sun = picture.scene.sun
    light, eye = sun.numbers[1:4], np.array([0.0, 2.0, 3.0]) / np.sqrt(13.0)
    half = (light + eye) / np.linalg.norm(light + eye)
    facets = alpha**2 / (np.pi * (half[1] ** 2 * (alpha**2 - 1.0) + 1.0) ** 2)
    hidden = [0.5 * (np.sqrt(1.0 + alpha**2 * (1.0 - c**2) / c**2) - 1.0) for c in (eye[1], light[1])]
    value = facets / (1.0 + sum(hidden)) / (4.0 * eye[1] * light[1])
    irradiance = luminance(sun.radiance) * 2.0 * np.pi * (1.0 - sun.numbers[4]) * light[1]
    close(picture, value * irradiance, 0.02)


GLASS = "[materials.glass]\nrefractive_index = 1.5\n"


@pytest.mark.parametrize(("roughness", "least"), [(0.03, 0.995), (0.1, 0.99), (0.3, 0.97), (0.7, 0.5)])
def test_frosted_glass_in_a_furnace_gains_nothing_and_loses_little(roughness, least):
    look = f'material = "glass"\nroughness = {roughness}'
    picture = rendered(FURNACE + GLASS + ONE + ball(look), 64)
    sky = rendered(FURNACE + ONE, 8).mean
    assert picture.mean_error < 0.005 * sky
    assert least * sky < picture.mean < sky + 4.0 * picture.mean_error


# Weighing drawn lights against scattered rays.


@pytest.mark.parametrize(
    "look",
    [
        pytest.param(f"surface = {{ {WHITE}, roughness = 0.3 }}", id="gloss"),
        pytest.param(f'surface = {{ {WHITE}, finish = "metal", roughness = 0.021 }}', id="nearly a mirror"),
        pytest.param(f'surface = {{ {WHITE}, finish = "metal", roughness = 0.5 }}', id="rough metal"),
        pytest.param(f"surface = {{ {WHITE}, wetness = 1 }}", id="wet"),
        pytest.param('material = "glass"\nroughness = 0.021', id="nearly clear glass"),
        pytest.param('material = "glass"\nroughness = 0.4', id="frosted glass"),
    ],
)
def test_a_sky_and_a_shining_sphere_all_round_give_the_same_light(look):
    # The sky is drawn by its map, the sphere by its triangles, so that the weights differ at every sample.
    room = '[[lights]]\nname = "room"\nshape = { sphere = 5 }\nluminance = 1000\ntwo_sided = true\n'
    sky = rendered(FURNACE + GLASS + ONE + ball(look), 128)
    within = rendered(FURNACE.replace(UNIFORM, "") + GLASS + ONE + ball(look) + room, 128)
    assert np.hypot(sky.mean_error, within.mean_error) < 0.01 * sky.mean
    assert sky.mean == pytest.approx(within.mean, abs=5.0 * np.hypot(sky.mean_error, within.mean_error))


EDGE = (SMOOTH_BELOW - 1e-4, SMOOTH_BELOW + 1e-4)
LOOKS = ['surface = { reflectance = 0.9, finish = "metal", roughness = R }', 'material = "glass"\nroughness = R']


@pytest.mark.parametrize("look", LOOKS)
def test_smooth_and_nearly_smooth_show_the_same_sun_and_sky(look):
    # Under a roughness of 0.02 the sun is found by mirrored rays alone, from there on by drawing it too. The camera
    # looks at its image, half a degree wide, in a level slab; the lobe at 0.02 is a twentieth of that.
    # Light falls steeply, since rough faces lose its polarisation: at Brewster's angle that is 6 % of a glass slab's.
    view = CAMERA.replace("400", "1000").replace("8, 8", "16, 16").replace("0, 2, 3", "0, 2, 0.3")
    view += GLASS + ONE
    light = "[sun]\nelevation = 81.4692\nazimuth = 0\n"
    slab = '[[objects]]\nname = "slab"\nshape = { box = [9, 0.1, 9] }\n' + look + "\n"
    slab += "transform = { translation = [0, -0.05, 0] }\n"
    below, above = (rendered(view + light + slab.replace("= R", f"= {r}"), 512) for r in EDGE)
    error = np.hypot(below.mean_error, above.mean_error)
    assert error < 0.05 * below.mean
    assert below.mean == pytest.approx(above.mean, abs=4.0 * error)
    sky = CAMERA.replace("400", "60").replace("0, 2, 3", "0, 0.5, 4") + GLASS + '[sky]\nkind = "overcast"\n'
    below, above = (rendered(sky + ball(look.replace("= R", f"= {r}")), 64) for r in EDGE)
    error = np.hypot(below.mean_error, above.mean_error)
    assert error < 0.01 * below.mean
    assert below.mean == pytest.approx(above.mean, abs=4.0 * error)


# Panes.


def pane_shares(cosine, n, transmittance=1.0):
    """Transmittance of a plane-parallel plate for s and p, all orders added without interference (Born and Wolf)."""
    inner = np.sqrt(1.0 - (1.0 - cosine**2) / n**2)
    reflected = [((cosine - n * inner) / (cosine + n * inner)) ** 2, ((n * cosine - inner) / (n * cosine + inner)) ** 2]
    tau = transmittance ** (1.0 / inner)
    return [(1.0 - r) ** 2 * tau / (1.0 - (r * tau) ** 2) for r in reflected]


BEHIND = lamp((0, 0, -2), (2, 2), (0, 0, 0))
STRAIGHT = CAMERA.replace("0, 2, 3", "0, 0, 3").replace("400", "20000") + ONE


@pytest.mark.parametrize("rate", [0.0, 100.0])
@pytest.mark.parametrize("turn", [0, 40, 60])
def test_a_pane_passes_what_a_plate_of_its_thickness_passes(turn, rate):
    glass = GLASS + f"absorption = {{ per_metre = [[550, {rate}]] }}\n"
    where = f'material = "glass"\ntransform = {{ rotation = [0, {turn}, 0] }}\n'
    pane = '[[objects]]\nname = "pane"\nshape = { rectangle = [3, 3] }\nthickness = 0.004\n' + where
    plate = '[[objects]]\nname = "plate"\nshape = { box = [3, 3, 0.004] }\n' + where
    clear = rendered(STRAIGHT + BEHIND, 8).mean
    passed = np.mean(pane_shares(np.cos(np.radians(turn)), 1.5, np.exp(-rate * 0.004)))
    assert rendered(STRAIGHT + glass + BEHIND + pane, 8).mean / clear == pytest.approx(passed, rel=1e-5)
    assert rendered(STRAIGHT + glass + BEHIND + plate, 16).mean / clear == pytest.approx(passed, rel=5e-3)


@pytest.mark.parametrize(("axis", "which"), [(90, 0), (0, 1)])
def test_a_polariser_on_the_lens_sees_s_or_p_alone_through_a_pane(axis, which):
    # The pane turns about the vertical, so that s swings upright.
    polarised = STRAIGHT.replace("pixels", f"polariser = {axis}\npixels")
    where = 'material = "glass"\ntransform = { rotation = [0, 60, 0] }\n'
    pane = '[[objects]]\nname = "pane"\nshape = { rectangle = [3, 3] }\nthickness = 0.004\n' + where
    clear = rendered(STRAIGHT + BEHIND, 8).mean
    passed = 0.5 * pane_shares(0.5, 1.5)[which]
    assert rendered(polarised + GLASS + BEHIND + pane, 8).mean / clear == pytest.approx(passed, rel=1e-5)


def test_light_falls_through_a_pane_onto_a_matt_floor():
    view = CAMERA.replace("400", "30000").replace("0, 2, 3", "0, 0.45, 3") + ONE + GLASS
    n = 400
    x, z = np.meshgrid(((np.arange(n) + 0.5) / n - 0.5) * 1.0, ((np.arange(n) + 0.5) / n - 0.5) * 0.6)
    cosine = 0.8 / np.sqrt(x**2 + z**2 + 0.64)
    passed = np.mean(pane_shares(cosine, 1.5), axis=0)
    share = (passed * cosine**4 / 0.64).mean() / (cosine**4 / 0.64).mean()
    pane = '[[objects]]\nname = "pane"\nshape = { rectangle = [30, 30] }\nthickness = 0.004\nmaterial = "glass"\n'
    pane += "transform = { translation = [0, 0.5, 0], rotation = [90, 0, 0] }\n"
    dark = floor("spectrum = [[400, 0.02], [700, 0.02]]")  # so that what goes to and fro below the pane is nothing
    clear = rendered(view + dark + lamp(), 256)
    behind = rendered(view + dark + lamp() + pane, 256)
    assert clear.mean_error < 0.01 * clear.mean
    error = np.hypot(clear.mean_error, behind.mean_error) / clear.mean
    assert behind.mean / clear.mean == pytest.approx(share, abs=4.0 * error)
    # The same pane as a solid stops straight light; scattered rays find the lamp, which is large, through it.
    plate = '[[objects]]\nname = "plate"\nshape = { box = [30, 0.004, 30] }\nmaterial = "glass"\n'
    plate += "transform = { translation = [0, 0.5, 0] }\n"
    solid = rendered(view + dark + lamp() + plate, 512)
    error = np.hypot(clear.mean_error, solid.mean_error) / clear.mean
    assert error < 0.04
    assert solid.mean / clear.mean == pytest.approx(share, abs=4.0 * error)


# What is left out.


WATER = """
[[objects]]
name = "pool"
shape = { box = [12, 0.5, 12] }
material = "water"
transform = { translation = [0, 0.25, 0] }
"""
SUN = "[sun]\nelevation = 60\nazimuth = 90\n"
BED = CAMERA.replace("400", "60") + floor("reflectance = 0.5")


def test_sun_through_smooth_water_onto_a_bed_is_left_out_and_counted():
    # No ray of this view mirrors the sun into the camera, so that nothing at all is left: neither clamped nor in part.
    under_water = rendered(BED + SUN + WATER, 1024)
    assert under_water.mean == 0.0
    assert under_water.tally.left_out > 0
    dry = rendered(BED + SUN, 8)
    assert dry.mean > 0.0
    assert dry.tally.left_out == 0
    frosted = rendered(BED + SUN + WATER.replace("material", "roughness = 0.1\nmaterial"), 64)
    assert frosted.mean > 0.05 * dry.mean


def test_sky_through_smooth_water_onto_a_bed_is_not_left_out():
    # Shares: 1 - d of a uniform sky goes in through the surface, and of what the bed sends up 1 - (1 - d) / n^2 comes
    # back (d = 0.0658 at 1.333, Walsh 1926; L. Lekner and M. Dorf, Appl. Opt. 27, 1278, 1988): the bed's radiance in
    # water is rho E / pi with E n^2-times concentrated, and the camera sees it through the surface.
    n, rho, d = 1.333, 0.5, 0.0658
    view = CAMERA.replace("0, 2, 3", "0, 3, 0.001").replace("400", "20000") + floor(
        f"spectrum = [[400, {rho}], [700, {rho}]]"
    )
    clear = WATER.replace('"water"', '"lock"').replace("12, 0.5, 12", "9.9, 0.05, 9.9").replace("0.25", "0.025")
    picture = rendered(view + UNIFORM + ONE + f"[materials.lock]\nrefractive_index = {n}\n" + clear, 256)
    sky = rendered(CAMERA + UNIFORM + ONE, 8).mean
    inside = 1.0 - (1.0 - d) / n**2
    front = ((n - 1.0) / (n + 1.0)) ** 2
    bed = rho * (1.0 - d) / (1.0 - rho * inside) / n**2 * (1.0 - front)
    close(picture, sky * (front + bed), 0.02)
    with_sun = rendered(BED + SUN + UNIFORM + WATER, 8).mean
    assert with_sun == pytest.approx(rendered(BED + UNIFORM + WATER, 8).mean, rel=1e-6)


def test_a_small_light_through_smooth_water_is_left_out_and_a_large_one_is_not():
    small = rendered(BED + WATER + lamp((0, 3, 0), (0.01, 0.01), value=1e7), 256)
    assert small.mean == 0.0
    large = rendered(BED + WATER + lamp((0, 3, 0), (2, 2)), 64)
    assert large.mean > 0.0
    assert large.tally.left_out == 0
