"""Index at the d line and Abbe number of materials against makers' sheets, with the sheet's digits."""

from __future__ import annotations

import pytest

from renderer.optics.materials import index_at, library_entry, nd_and_vd

# SCHOTT optical glass catalogue, 2017-01-20 (data sheets; five decimals of nd, two of Vd)
SCHOTT = [
    ("N-BK7", 1.51680, 64.17),
    ("N-K5", 1.52249, 59.48),
    ("N-FK51A", 1.48656, 84.47),
    ("N-BAK4", 1.56883, 55.98),
    ("N-LAK22", 1.65113, 55.89),
    ("N-LAK9", 1.69100, 54.71),
    ("F2", 1.62004, 36.37),
    ("SF10", 1.72825, 28.41),
    ("N-SF10", 1.72828, 28.53),
    ("N-SF11", 1.78472, 25.68),
    ("N-SF6", 1.80518, 25.36),
    ("N-SF57", 1.84666, 23.78),
    ("N-LASF9", 1.85025, 32.17),
]


@pytest.mark.parametrize(("glass", "nd", "vd"), SCHOTT)
def test_optical_glass_meets_the_makers_catalogue(glass, nd, vd):
    got_nd, got_vd = nd_and_vd(glass)
    assert got_nd == pytest.approx(nd, abs=0.000006)
    assert got_vd == pytest.approx(vd, abs=0.0061)


# name, nd, tolerance, Vd, tolerance; source beside each
OTHERS = [
    ("fused silica", 1.45846, 1e-5, 67.82, 0.01),  # makers' sheets (from memory); I. H. Malitson, JOSA 55, 1205 (1965)
    ("fluorite", 1.43385, 1e-5, 95.0, 0.1),  # makers' sheets (from memory); I. H. Malitson, Appl. Opt. 2, 1103 (1963)
    ("diamond", 2.4175, 5e-4, 55.3, 0.3),  # database value of F. Peter, Z. Phys. 15, 358 (1923)
    ("sapphire", 1.7682, 1e-4, 72.2, 0.2),  # makers' sheets (from memory)
    ("quartz", 1.54426, 5e-5, 69.9, 0.3),  # no of the D line to five digits, mineral tables (from memory)
    ("ice", 1.3098 / 1.000272, 1e-4, 53.8, 1.5),  # Warren & Brandt 2008 table, absolute; its own four decimals set Vd
    ("soda-lime glass", 1.5230, 1e-4, 58.5, 0.5),  # SCHOTT B 270 data sheet; Vd from memory
    ("acrylic", 1.4918, 2e-3, 57.4, 1.0),  # trade value (from memory); the law of Szczurowski is 0.0012 lower
    ("polycarbonate", 1.5855, 1e-3, 29.9, 2.2),  # trade value (from memory); the law's Vd is known to be low by 2
    ("ethanol", 1.3614, 5e-4, 59.5, 0.5),  # nD of 20 C, tables (from memory)
    ("glycerol", 1.4722, 1.2e-3, 60.0, 5.0),  # nD of 20 C, tables (from memory); published Vd run from 57 to 68
]


@pytest.mark.parametrize(("name", "nd", "nd_within", "vd", "vd_within"), OTHERS)
def test_other_materials_meet_their_sheets(name, nd, nd_within, vd, vd_within):
    got_nd, got_vd = nd_and_vd(name)
    assert got_nd == pytest.approx(nd, abs=nd_within)
    assert got_vd == pytest.approx(vd, abs=vd_within)
    entry = library_entry(name)
    assert entry.nd_range[0] <= got_nd <= entry.nd_range[1]
    assert entry.vd_range[0] <= got_vd <= entry.vd_range[1]


def test_lines_of_a_crown_far_from_the_d_line():
    """SCHOTT data sheet of N-BK7: h 404.66 nm 1.53024, g 435.83 nm 1.52668, r 706.52 nm 1.51289."""
    got = index_at([404.6561, 435.8343, 706.5188], "N-BK7")
    assert got == pytest.approx([1.53024, 1.52668, 1.51289], abs=0.000006)


@pytest.mark.parametrize(("glass", "nd", "vd"), [row for row in SCHOTT if 24 < row[2] < 65])
def test_an_abbe_pair_alone_predicts_the_glass_at_the_ends_of_the_spectrum(glass, nd, vd):
    """The pair with the normal line of glasses: to 0.003 at 404.7 nm and 0.001 at 706.5 nm (our bound)."""
    lines = [404.6561, 706.5188]
    guess, true = index_at(lines, model="abbe", values=[nd, vd]), index_at(lines, glass)
    assert guess[0] == pytest.approx(true[0], abs=0.003)
    assert guess[1] == pytest.approx(true[1], abs=0.001)
