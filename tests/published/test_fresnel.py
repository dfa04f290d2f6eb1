"""Reflection at smooth interfaces against textbooks and an independent program."""

from __future__ import annotations

import math

import numpy as np
import pytest

from renderer.optics import fresnel, fresnel_kernels

# n1, n2, angle of incidence, Rs, Rp: computed with tmm 0.2.0 (S. J. Byrnes, arXiv:1603.02720), interface_R, 8 decimals
BYRNES = [
    (1.0, 1.5168, 45.0, 0.09597830, 0.00921183),
    (1.0, 1.5168, 56.5, 0.15454728, 0.00000124),
    (1.0, 1.333, 30.0, 0.03093399, 0.01193894),
    (1.0, 1.333, 60.0, 0.11506793, 0.00431390),
    (1.333, 1.0, 40.0, 0.10822601, 0.00293718),
    (1.5168, 1.0, 30.0, 0.11338593, 0.00437033),
    (1.333, 1.5168, 70.0, 0.09279840, 0.03361567),
    (2.4175, 1.0, 20.0, 0.36372217, 0.03336659),
    (1.0, 2.4175, 67.5, 0.50056319, 0.00000032),
    (1.5168, 1.0, 50.0, 1.0, 1.0),
    (2.4175, 1.333, 33.0, 0.66239152, 0.24535082),
    (1.0, 1.333, 85.0, 0.67375710, 0.49328985),
]


@pytest.mark.parametrize(("n1", "n2", "angle_deg", "rs", "rp"), BYRNES)
def test_reflectances_of_both_polarisations(n1, n2, angle_deg, rs, rp):
    got = fresnel.reflectances(angle_deg, n1, n2)
    assert got[0] == pytest.approx(rs, abs=5.1e-9)
    assert got[1] == pytest.approx(rp, abs=5.1e-9)
    ra, rb, *_ = fresnel_kernels.fresnel_mueller(math.cos(math.radians(angle_deg)), n1, n2)
    assert (ra + rb, ra - rb) == pytest.approx((rs, rp), abs=5.1e-9)


# n1, n2, Brewster's angle printed. E. Hecht, Optics, 4th ed. 2002, section 8.6: 56.3 into glass of 1.5 and 53.1 into
# water (from memory); M. Born and E. Wolf, Principles of Optics, 7th ed., section 1.5.3: 56 deg 40' for n = 1.52
@pytest.mark.parametrize(
    ("n1", "n2", "printed_deg", "half_digit"),
    [(1.0, 1.5, 56.3, 0.05), (1.0, 1.33, 53.1, 0.05), (1.0, 1.52, 56 + 40 / 60, 0.5 / 60 + 1e-9)],
)
def test_brewster_angles(n1, n2, printed_deg, half_digit):
    angle = float(fresnel.brewster_angle_deg(n1, n2))
    assert angle == pytest.approx(printed_deg, abs=half_digit)
    assert fresnel.reflectances(angle, n1, n2)[1] == pytest.approx(0.0, abs=1e-30)


# E. Hecht, Optics, 4th ed., table 4.3 "Critical angles" (from memory), printed in degrees and minutes
@pytest.mark.parametrize(
    ("n", "degrees", "minutes"),
    [(1.33, 48, 45), (1.36, 47, 20), (1.50, 41, 49), (1.52, 41, 8), (1.60, 38, 41), (2.42, 24, 24)],
)
def test_critical_angles(n, degrees, minutes):
    assert float(fresnel.critical_angle_deg(n)) == pytest.approx(degrees + minutes / 60, abs=0.75 / 60)


@pytest.mark.parametrize("angle_deg", [48 + 37 / 60, 54 + 37 / 60])
def test_fresnel_rhomb_turns_linear_into_circular_light(angle_deg):
    """Born & Wolf, section 1.5.4: glass of 1.51, two total reflections at 48 deg 37' or 54 deg 37' give 90 degrees."""
    ra, rb, rc, rs, *_ = fresnel_kernels.fresnel_mueller(math.cos(math.radians(angle_deg)), 1.51, 1.0)
    once = np.array([[ra, rb, 0, 0], [rb, ra, 0, 0], [0, 0, rc, rs], [0, 0, -rs, rc]])
    assert math.degrees(math.atan2(rs, rc)) == pytest.approx(45.0, abs=0.02)  # delta = delta_s - delta_p > 0
    after = once @ once @ np.array([1.0, 0.0, 1.0, 0.0])  # linear light at 45 degrees in the rhomb's own frame
    np.testing.assert_allclose(after, [1.0, 0.0, 0.0, -1.0], atol=1e-3)


def test_snells_law_in_a_measured_pair():
    """Water 1.333 at 45 degrees: 32.0 (common textbook example, no single source)."""
    assert float(fresnel.snell_deg(45.0, 1.0, 1.333)) == pytest.approx(32.0, abs=0.05)
