"""Wet surfaces against the published model's own numbers and measured pairs of dry and wet soil."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.optics.wet import diffuse_fresnel, wet_body_reflectance, wet_reflectance
from tests.rendering import rendered


# dry, wet, allowed; A. D. Matthias et al., Soil Sci. Soc. Am. J. 64, 1035 (2000), abstract: Gila sandy loam and Pima
# clay loam; A. Angstrom, Geogr. Ann. 7, 323 (1925), quoted by Lekner & Dorf 1988 (from memory): grey sand, black mould
@pytest.mark.parametrize(
    ("dry", "wet", "allowed"), [(0.279, 0.155, 0.01), (0.221, 0.114, 0.01), (0.182, 0.091, 0.02), (0.141, 0.081, 0.02)]
)
def test_measured_pairs(dry, wet, allowed):
    assert float(wet_body_reflectance(dry)) == pytest.approx(wet, abs=allowed)


@pytest.mark.parametrize(
    ("n", "value"), [(1.05, 0.013885649025), (1.333, 0.066405764783), (1.5, 0.091777959342), (2.0, 0.160596637070)]
)
def test_mean_reflectance_of_diffuse_light(n, value):
    """Closed form of Walsh 1926 and Duntley 1942, checked elsewhere by quadrature to 1e-14."""
    assert float(diffuse_fresnel(n)) == pytest.approx(value, abs=1e-11)


@pytest.mark.parametrize("dry", [0.0, 0.05, 0.182, 0.5, 0.9, 1.0])
def test_the_model_written_out_as_a_sum_over_crossings(dry):
    """Lekner & Dorf 1988 by their series: absorbed (1 - R) a' sum of ((1 - a') p)^k, with nothing in closed form."""
    film, grain = 1.333, 1.5
    cosine = (np.arange(400_000) + 0.5) / 400_000

    def mean(n):
        refracted = np.sqrt(1 - (1 - cosine**2) / n**2)
        s = ((cosine - n * refracted) / (cosine + n * refracted)) ** 2
        p = ((n * cosine - refracted) / (n * cosine + refracted)) ** 2
        return float(np.mean((s + p) * cosine))

    absorbed = 1 - dry
    under = absorbed * ((1 - absorbed) * (1 - mean(grain / film)) / (1 - mean(grain)) + absorbed)
    back = 1 - (1 - mean(film)) / film**2
    lost = sum((1 - mean(film)) * under * ((1 - under) * back) ** k for k in range(200)) if dry < 1 else 0.0
    assert float(wet_reflectance(dry)) == pytest.approx(1 - lost, abs=1e-6)


def rendered_albedo(dry: float, surface: str) -> float:
    """Share of light that a plane sends back, from pictures: under an even sky, its luminance weighted by the cosine.

    Light from all round that leaves one way is light from that way that leaves all round.
    """
    points, weights = np.polynomial.legendre.leggauss(5)
    total = 0.0
    for cosine, weight in zip(0.5 * (points + 1.0), 0.5 * weights, strict=True):
        up, along = 3.0 * cosine, 3.0 * np.sqrt(1.0 - cosine**2)
        shot = PLANE.replace("POSITION", f"[0, {up}, {along}]").replace("SURFACE", surface.replace("DRY", str(dry)))
        total += 2.0 * cosine * weight * rendered(shot, 64).mean / 1000.0
    return total


PLANE = """
[camera]
position = POSITION
target = [0, 0, 0]
focal_length = 2000
pixels = [12, 12]
[sky]
kind = "uniform"
[render]
wavelengths = [550]
[[objects]]
name = "ground"
shape = { box = [100, 0.1, 100] }
surface = { SURFACE }
transform = { translation = [0, -0.05, 0] }
"""


@pytest.mark.parametrize("dry", [0.1, 0.3, 0.6])
def test_wet_over_dry_in_rendered_pictures(dry: float) -> None:
    """J. Lekner and M. C. Dorf, Appl. Opt. 27, 1278 (1988), by the sum over crossings above."""
    matt = "spectrum = [[400, DRY], [700, DRY]]"
    ratio = rendered_albedo(dry, matt + ", wetness = 1") / rendered_albedo(dry, matt)
    assert ratio == pytest.approx(float(wet_reflectance(dry)) / dry, rel=0.01)
