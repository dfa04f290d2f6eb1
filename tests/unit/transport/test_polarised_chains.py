"""Polarisation along chains of smooth interfaces, against coherency matrices followed through the same chain.

The check is written another way than the renderer: 3 x 3 matrices <E E*> of the field in space (M. Born and E. Wolf,
Principles of Optics, 10.9), followed from the light to the lens, where the renderer follows rows of Mueller products
from the lens to the light.
"""

from __future__ import annotations

import numpy as np
import pytest

from tests.rendering import rendered

N = 1.5
FIELD = """
focal_length = 20000
pixels = [6, 6]
[render]
wavelengths = [550]
[materials.glass]
refractive_index = 1.5
[[lights]]
name = "lamp"
shape = { rectangle = [0.8, 0.8] }
luminance = 1000
"""


def unpolarised(ray):
    """Coherency of unpolarised light of power 1 along a ray."""
    return 0.5 * (np.eye(3) - np.outer(ray, ray)).astype(complex)


def planes(ray, normal):
    """Unit vectors s, across the plane of incidence, and p = ray x s."""
    s = np.cross(ray, normal)
    s /= np.linalg.norm(s)
    return s, np.cross(ray, s)


def amplitudes(cosine, n1, n2):
    """Fresnel's rs and rp (Verdet's signs), complex where nothing passes."""
    inner = np.sqrt(complex(1.0 - (n1 / n2) ** 2 * (1.0 - cosine**2)))
    rs = (n1 * cosine - n2 * inner) / (n1 * cosine + n2 * inner)
    rp = (n2 * cosine - n1 * inner) / (n2 * cosine + n1 * inner)
    return rs, rp


def through_pane(coherency, ray, normal, n):
    """Behind a plate whose orders add without interference."""
    s, p = planes(ray, normal)
    big_s, big_p = (abs(r) ** 2 for r in amplitudes(abs(ray @ normal), 1.0, n))
    passed = {"ss": (1 - big_s) / (1 + big_s), "pp": (1 - big_p) / (1 + big_p)}
    passed["sp"] = (1 - big_s) * (1 - big_p) / (1 - big_s * big_p)
    vectors = {"s": s, "p": p}
    found = np.zeros((3, 3), dtype=complex)
    for a in "sp":
        for b in "sp":
            share = passed[a + b] if a == b else passed["sp"]
            found += share * (vectors[a] @ coherency @ vectors[b]) * np.outer(vectors[a], vectors[b])
    return found


def reflected(coherency, ray, normal, n1, n2):
    """After a reflection in n1 at n2; the new ray too."""
    s, p = planes(ray, normal)
    rs, rp = amplitudes(abs(ray @ normal), n1, n2)
    onward = ray - 2.0 * (ray @ normal) * normal
    jones = rs * np.outer(s, s) + rp * np.outer(np.cross(onward, s), p)
    return jones @ coherency @ jones.conj().T, onward


def seen(coherency, axis):
    """Power behind an ideal polariser with this axis."""
    return float((axis @ coherency @ axis).real)


UP = np.array([0.0, 1.0, 0.0])
ANGLES = [0, 30, 45, 90, 135]


@pytest.mark.parametrize("angle", ANGLES)
def test_two_total_reflections_turn_the_phase_of_what_a_pane_has_polarised(angle):
    # A roof of glass over camera and lamp: light goes up from the lamp through a slanting pane, is totally reflected at
    # 45 degrees twice, and comes down. Without the phase of total reflection, cos 73.7 degrees = 0.28 would be 1.
    tilt, about = np.radians(65.0), np.radians(40.0)
    normal = np.array([np.sin(tilt) * np.cos(about), np.cos(tilt), -np.sin(tilt) * np.sin(about)])
    light = through_pane(unpolarised(UP), UP, normal, N)
    near, far = np.array([-1.0, 1.0, 0.0]) / np.sqrt(2.0), np.array([1.0, 1.0, 0.0]) / np.sqrt(2.0)
    face = ((N - 1.0) / (N + 1.0)) ** 2
    total, share = np.zeros((3, 3), dtype=complex), (1.0 - face) ** 2
    for _ in range(6):
        light, _ray = reflected(*reflected(light, UP, near, N, 1.0), far, N, 1.0)
        total += share * light
        # The base keeps a share in, which goes back and is kept in there too: a whole turn later it comes down again.
        light, _ray = reflected(*reflected(light, UP, far, N, 1.0), near, N, 1.0)
        share *= face**2
    axis = np.array([np.cos(np.radians(angle)), 0.0, np.sin(np.radians(angle))])
    # The camera looks up; its +x is the world's, its +y the world's +z.
    shot = f"[camera]\npolariser = {angle}\nmatrix = [1, 0, 0, 0.6, 0, 0, -1, -3, 0, 1, 0, 0, 0, 0, 0, 1]" + FIELD
    shot += "transform = { translation = [-0.6, -2.5, 0], rotation = [-90, 0, 0] }\n"
    shot += '[[objects]]\nname = "roof"\nshape = { prism = { apex = 90, side = 2, length = 1 } }\nmaterial = "glass"\n'
    shot += '[[objects]]\nname = "pane"\nshape = { disc = 0.4 }\nthickness = 0.004\nmaterial = "glass"\n'
    # The disc faces +z: turned about x by tilt - 90 its normal is (0, cos tilt, sin tilt), then about y.
    turn = [65.0 - 90.0, 90.0 + 40.0, 0.0]
    shot += f"transform = {{ translation = [-0.6, -1.6, 0], rotation = {turn} }}\n"
    picture = rendered(shot, 256)
    bare = rendered(BARE, 8).mean
    assert picture.mean / bare == pytest.approx(seen(total, axis), abs=5.0 * picture.mean_error / bare + 2e-5)
    assert picture.mean_error / bare < 0.004


BARE = "[camera]\nposition = [0, 0, 3]\ntarget = [0, 0, 0]" + FIELD


@pytest.mark.parametrize("angle", ANGLES)
def test_two_crossed_mirrors_of_glass(angle):
    # Two black-backed faces in planes of incidence at a right angle to each other: what the first leaves, s, is p to
    # the second. (Solid blocks; light that goes in meets a black body inside and is gone.)
    shot = f"[camera]\npolariser = {angle}\nposition = [3, 0, 0]\ntarget = [0, 0, 0]" + FIELD
    first, second = np.array([1.0, 1.0, 0.0]) / np.sqrt(2.0), np.array([0.0, -1.0, 1.0]) / np.sqrt(2.0)
    shot += "transform = { translation = [0, 3, 3], rotation = [0, 180, 0] }\n"
    for k, (at, turn) in enumerate([((0, 0, 0), (0, 0, 45)), ((0, 3, 0), (45, 0, 0))]):
        middle = np.array(at) - 0.5 * (first if k == 0 else second)
        shot += f'[[objects]]\nname = "glass {k}"\nshape = {{ box = [1, 1, 1] }}\nmaterial = "glass"\n'
        shot += f"transform = {{ translation = {middle.tolist()}, rotation = {list(turn)} }}\n"
        shot += f'[[objects]]\nname = "black {k}"\nshape = {{ box = [0.98, 0.98, 0.98] }}\n'
        shot += "surface = { reflectance = 0 }\n"
        shot += f"transform = {{ translation = {middle.tolist()}, rotation = {list(turn)} }}\n"
    light, ray = unpolarised(np.array([0.0, 0.0, -1.0])), np.array([0.0, 0.0, -1.0])
    light, ray = reflected(light, ray, second, 1.0, N)
    light, ray = reflected(light, ray, first, 1.0, N)
    assert ray == pytest.approx(np.array([1.0, 0.0, 0.0]), abs=1e-12)
    # The camera looks along -x: its +x is the world's -z, its +y the world's +y.
    axis = np.array([0.0, np.sin(np.radians(angle)), -np.cos(np.radians(angle))])
    picture = rendered(shot, 256)
    bare = rendered(BARE, 8).mean
    assert picture.mean / bare == pytest.approx(seen(light, axis), abs=5.0 * picture.mean_error / bare + 2e-6)
    assert picture.mean_error / bare < 0.002


def test_without_a_polariser_both_halves_are_seen():
    # The sum over two crossed polarisers is the picture without one, twice.
    shot = "[camera]\nPposition = [0, 1, 3]\ntarget = [0, 0.2, 0]\nfocal_length = 50\npixels = [8, 8]\n"
    shot += '[sky]\nkind = "overcast"\n[render]\nwavelengths = [550]\n[[objects]]\nname = "pool"\n'
    shot += 'shape = { box = [6, 0.2, 6] }\nmaterial = "water"\n'
    plain, level, upright = (
        rendered(shot.replace("P", more, 1), 64) for more in ("", "polariser = 0\n", "polariser = 90\n")
    )
    error = np.hypot(plain.mean_error, np.hypot(level.mean_error, upright.mean_error))
    assert level.mean + upright.mean == pytest.approx(plain.mean, abs=5.0 * error)
    assert abs(level.mean - upright.mean) > 5.0 * error


def test_a_polariser_halves_light_that_a_matt_surface_has_scattered():
    shot = "[camera]\nPposition = [0, 2, 3]\ntarget = [0, 0, 0]\nfocal_length = 400\npixels = [8, 8]\n"
    shot += '[sky]\nkind = "uniform"\n[render]\nwavelengths = [550]\n[[objects]]\nname = "floor"\n'
    shot += "shape = { box = [9, 0.1, 9] }\nsurface = { reflectance = 0.5 }\n"
    plain, halved = rendered(shot.replace("P", "", 1), 64), rendered(shot.replace("P", "polariser = 35\n", 1), 64)
    assert halved.luminance == pytest.approx(0.5 * plain.luminance, rel=1e-6)
