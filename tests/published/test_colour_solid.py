"""RGB to reflectance against the object-colour solid: the set of colours that a reflectance between 0 and 1 can have.

Its surface is made of reflectances that are 0 or 1 with at most two transitions (E. Schroedinger, Annalen der Physik
62, 1920; D. L. MacAdam, J. Opt. Soc. Am. 25, 1935). Whether a colour is inside is decided by linear programming over
the 400 nanometres, which knows nothing of sigmoids.
"""

from __future__ import annotations

import numba  # noqa: F401  (before scipy)
import numpy as np
import pytest
from scipy.optimize import linprog

from renderer.colour.differences import ciede2000, cielab
from renderer.colour.observer import observer
from renderer.colour.spaces import applied, inverse, reference_light, reflected_matrix
from renderer.colour.tables import wavelengths_nm
from renderer.colour.upsampling import reflectance_coefficients

SPACES = ["rec709", "rec2020", "acescg"]
FINE_NM = 0.05


def nanometre_weights(space):
    """(400, 3): light times observer, integrated over each nanometre by a fine midpoint rule."""
    x = np.arange(380.0 + FINE_NM / 2, 780.0, FINE_NM)
    light = np.interp(x, wavelengths_nm(), reference_light(space))
    eye = np.stack([np.interp(x, wavelengths_nm(), column) for column in observer().T], axis=1)
    return (eye * light[:, None] * FINE_NM).reshape(400, -1, 3).sum(axis=1)


def seen(coefficients, space):
    """XYZ (n, 3) of sigmoid reflectances under a space's light: literal sums, 20 to the nanometre."""
    x = np.arange(380.0 + FINE_NM / 2, 780.0, FINE_NM)
    light = np.interp(x, wavelengths_nm(), reference_light(space))
    eye = (
        np.stack([np.interp(x, wavelengths_nm(), column) for column in observer().T], axis=1) * light[:, None] * FINE_NM
    )
    t = (x - 580.0) / 200.0
    rows = []
    for c0, c1, c2 in coefficients:
        q = c0 * t**2 + c1 * t + c2
        rows.append((0.5 + 0.5 * q / np.sqrt(1.0 + q**2)) @ eye)
    return np.array(rows)


def missed(rgb, coefficients, space):
    """CIEDE2000 (n,) between what the reflectances show and what was asked for."""
    white = nanometre_weights(space).sum(axis=0)
    target = applied(reflected_matrix(space), rgb)
    return ciede2000(cielab(seen(coefficients, space), white), cielab(target, white))


def reach(rgb, weights, space):
    """How far the solid goes from middle grey toward a colour, in units of its distance: 1 or more is inside."""
    grey = 0.5 * weights.sum(axis=0)
    colour = applied(reflected_matrix(space), rgb)
    answer = linprog(
        np.r_[np.zeros(400), -1.0],
        A_eq=np.hstack([weights.T, (grey - colour)[:, None]]),
        b_eq=grey,
        bounds=[(0, 1)] * 400 + [(0, 20)],
    )
    assert answer.status == 0
    return answer.x[-1]


def two_transition_colours(space, n, seed):
    """RGB (n, 3) of random reflectances that are 1 within a band and 0 without, or the other way round."""
    weights = nanometre_weights(space)
    cumulative = np.vstack([np.zeros(3), np.cumsum(weights, axis=0)])
    rng = np.random.default_rng(seed)
    share = cumulative.sum(axis=1) / cumulative[-1].sum()
    edges = np.interp(np.sort(rng.random((2, n)), axis=0), share, np.arange(401.0))
    low, high = (np.stack([np.interp(e, np.arange(401.0), c) for c in cumulative.T], axis=1) for e in edges)
    xyz = np.where(rng.random((n, 1)) < 0.5, high - low, cumulative[-1] - (high - low))
    return applied(inverse(reflected_matrix(space)), xyz)


def test_all_of_rec709_comes_back():
    """Dense grid of the cube, its faces, edges and corners among it; as stored, that is as float32."""
    steps = np.linspace(0.0, 1.0, 13)
    rgb = np.stack(np.meshgrid(steps, steps, steps), axis=-1).reshape(-1, 3)
    dark = (rgb / 12.0) ** 2.0
    rgb = np.concatenate([rgb, dark])
    coefficients, outside = reflectance_coefficients(rgb, "rec709")
    assert not outside.any()
    assert missed(rgb, coefficients.astype(np.float32).astype(float), "rec709").max() < 0.1  # asked for: 0.5


@pytest.mark.parametrize("space", SPACES)
def test_the_surface_of_the_solid_comes_back(space):
    """The hardest colours that there are: a reflectance that jumps between 0 and 1."""
    rgb = two_transition_colours(space, 300, seed=5)
    coefficients, outside = reflectance_coefficients(rgb, space)
    assert not outside.any()
    assert missed(rgb, coefficients.astype(np.float32).astype(float), space).max() < 0.5


@pytest.mark.parametrize("space", ["rec2020", "acescg"])
def test_inside_the_solid_colours_come_back_and_only_those_outside_are_flagged(space):
    steps = np.linspace(0.0, 1.0, 7)
    rgb = np.stack(np.meshgrid(steps, steps, steps), axis=-1).reshape(-1, 3)
    weights = nanometre_weights(space)
    coefficients, outside = reflectance_coefficients(rgb, space)
    beyond = np.array([reach(colour, weights, space) for colour in rgb]) < 1.0 - 1e-9
    assert 0.1 < beyond.mean() < 0.5  # the cube's corners stand out of the solid in both spaces
    difference = missed(rgb, coefficients, space)
    assert difference[~beyond].max() < 0.5
    assert not outside[~beyond].any()
    assert outside[difference > 0.51].all()
    assert not outside[difference < 0.49].any()


@pytest.mark.parametrize("space", ["rec2020", "acescg"])
def test_outside_the_solid_the_nearest_is_found(space):
    """Against a search of all bands with edges on whole nanometres, in CIELAB: 160,000 colours of the surface."""
    rng = np.random.default_rng(8)
    rgb = rng.random((300, 3)) ** 2
    coefficients, outside = reflectance_coefficients(rgb, space)
    weights = nanometre_weights(space)
    white = weights.sum(axis=0)
    cumulative = np.vstack([np.zeros(3), np.cumsum(weights, axis=0)])
    i, j = np.triu_indices(401, 1)
    bands = cumulative[j] - cumulative[i]
    surface = cielab(np.concatenate([bands, white - bands]), white)
    wanted = cielab(applied(reflected_matrix(space), rgb[outside]), white)
    found = cielab(seen(coefficients[outside], space), white)
    distance = np.linalg.norm(found - wanted, axis=1)
    nearest = np.array([np.sqrt(((surface - lab) ** 2).sum(axis=1).min()) for lab in wanted])
    assert outside.sum() > 30
    excess = distance - nearest
    assert np.median(excess) < 0.02
    assert np.quantile(excess, 0.95) < 0.3
    assert excess.max() < 4.0  # very steep reflectances creep, and a few stop short of the nearest
