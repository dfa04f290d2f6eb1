"""Whether the standard error that a picture states is what it says: the truth lies within it 68 times of 100."""

from __future__ import annotations

import numpy as np
import pytest

from tests.rendering import rendered, scene_of

SHOT = """
[camera]
position = [0, 1.0, 3]
target = [0, 0.35, 0]
focal_length = 45
pixels = [16, 16]
[sun]
elevation = 40
azimuth = 110
[sky]
kind = "clear"
[materials.glass]
refractive_index = { abbe = [1.52, 58] }
[[objects]]
name = "floor"
shape = { box = [6, 0.1, 6] }
surface = { reflectance = [0.5, 0.4, 0.3] }
transform = { translation = [0, -0.05, 0] }
[[objects]]
name = "ball"
shape = { sphere = 0.4 }
material = "glass"
transform = { translation = [-0.3, 0.45, 0] }
[[objects]]
name = "post"
shape = { cylinder = [0.15, 0.8] }
surface = { reflectance = 0.4, roughness = 0.4 }
transform = { translation = [0.5, 0.4, 0] }
"""


def coverage(rounds, seeds, text=SHOT):
    """Share of pixels and seeds whose error holds the mean of all the other seeds, and that share by seed."""
    scene = scene_of(text)
    pictures = [rendered(scene, rounds, seed) for seed in range(1, seeds + 1)]
    means = np.array([picture.luminance for picture in pictures])
    errors = np.array([picture.error for picture in pictures])
    others = (means.sum(axis=0) - means) / (seeds - 1)
    # The others' mean has an error of its own, a share 1/(seeds - 1) of one seed's variance.
    held = np.abs(means - others) <= errors * np.sqrt(1.0 + 1.0 / (seeds - 1))
    noisy = errors.mean(axis=0) > 1e-9 * means.mean()
    assert noisy.mean() > 0.9
    return float(held[:, noisy].mean()), held[:, noisy].mean(axis=1)


def test_coverage_of_a_few_seeds():
    # 256 pixels of 16 seeds: with all pixels as good as independent, +- 0.7 %.
    share, by_seed = coverage(32, 16)
    assert share == pytest.approx(0.68, abs=0.05)
    assert by_seed.min() > 0.5


@pytest.mark.slow
@pytest.mark.parametrize("rounds", [8, 32, 64, 256])
def test_coverage_of_a_hundred_seeds(rounds):
    share, _ = coverage(rounds, 100)
    assert share == pytest.approx(0.68, abs=0.05)


def test_the_error_falls_as_rounds_are_added():
    few, many = rendered(SHOT, 32), rendered(SHOT, 512)
    # Stratified points do no worse than independent ones, whose error falls as the root of 16.
    assert np.median(many.error) < 0.3 * np.median(few.error)
    within = np.abs(few.luminance - many.luminance) <= 4.2 * np.hypot(few.error, many.error)
    assert within.mean() > 0.98


def test_replicates_without_rounds_are_left_out():
    some = rendered(SHOT, [0, 1, 2, 8, 9])
    assert np.isfinite(some.error).all()
    assert np.isnan(some.replicates[3:]).all()
    with pytest.raises(AssertionError, match="one replicate"):
        _ = rendered(SHOT, [0, 8]).error
