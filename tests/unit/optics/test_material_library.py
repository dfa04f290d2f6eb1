"""The library of materials, laws that a shot states, and the chart."""

from __future__ import annotations

import xml.etree.ElementTree as ElementTree

import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.optics import dispersion, library
from renderer.optics.materials import index_at, material_names, material_tables, nd_and_vd
from renderer.optics.materials_chart import materials_chart
from renderer.optics.water import water_absorption_per_m, water_index


def test_the_names_that_shots_use_are_there():
    names = set(material_names())
    assert {"air", "water", "sea water", "ice", "fused silica", "soda-lime glass", "diamond", "sapphire"} <= names
    assert {"acrylic", "polycarbonate", "ethanol", "glycerol"} <= names
    for alias in (
        "BK7 crown",
        "n-bk7",
        "F2",
        "SF10",
        "N-SF10",
        "N-SF11",
        "N-SF6",
        "N-SF57",
        "N-K5",
        "N-BAK4",
        "PMMA",
        " Water ",
    ):
        assert library.library_entry(alias)
    every = [name.lower() for name in library.accepted_names()]
    assert len(every) == len(set(every))


@pytest.mark.parametrize("name", material_names())
def test_every_material_is_whole(name):
    entry = library.library_entry(name)
    index, absorption = material_tables(name)
    assert index.shape == absorption.shape == (401,)
    assert np.all((index >= 1.0) & (index < 3.0))
    assert np.all(np.isfinite(absorption) & (absorption >= 0.0))
    assert entry.source
    assert entry.note
    assert entry.extended or (entry.range_nm[0] <= 380.0 and entry.range_nm[1] >= 780.0)
    nd, vd = nd_and_vd(name)
    assert entry.nd_range[0] <= nd <= entry.nd_range[1]
    assert entry.vd_range[0] <= vd <= entry.vd_range[1]
    if name != "air":
        assert np.all(np.diff(index) < 0.0)


def test_a_name_that_is_near_is_named_and_never_taken():
    with pytest.raises(InputError) as caught:
        material_tables("N-BK9")
    assert caught.value.faults[0].nearest == "N-BK7"
    with pytest.raises(InputError):
        material_tables("SF6")  # another glass than N-SF6


def test_water_knows_temperature_and_sea_water_salt():
    cold, warm = (index_at(589.3, "water", t) for t in (5.0, 35.0))
    assert cold > warm + 0.001
    np.testing.assert_array_equal(index_at(500.0, "sea water"), water_index(500.0, 20.0, 35.0))
    np.testing.assert_array_equal(index_at(500.0, "sea water", salinity=0.0), water_index(500.0, 20.0, 0.0))
    np.testing.assert_array_equal(index_at(500.0, "water", salinity=35.0), water_index(500.0, 20.0, 35.0))
    np.testing.assert_array_equal(index_at(500.0, "N-BK7", salinity=35.0), index_at(500.0, "N-BK7"))
    assert float(water_absorption_per_m(740.0, 5.0)) < float(water_absorption_per_m(740.0, 25.0))
    assert np.all(water_absorption_per_m(np.arange(380.0, 500.0), 0.0, 40.0) >= 0.0)


@pytest.mark.parametrize(
    ("like", "temperature_c", "salinity"),
    [("water", -1.0, 0.0), ("water", 61.0, 0.0), ("sea water", 31.0, 35.0), ("sea water", 20.0, 43.0)],
)
def test_water_outside_its_range_is_refused(like, temperature_c, salinity):
    with pytest.raises(InputError) as caught:
        material_tables(like, temperature_c, salinity)
    assert caught.value.faults[0].expected.startswith("0 to")


def test_laws_that_a_shot_states():
    terms = [1.03961212, 0.00600069867, 0.231792344, 0.0200179144, 1.01046945, 103.560653]
    np.testing.assert_array_equal(
        index_at([450.0, 650.0], model="sellmeier", values=terms), index_at([450.0, 650.0], "N-BK7")
    )
    assert index_at(500.0, model="cauchy", values=[1.5, 0.004, 0.0001]) == pytest.approx(
        1.5 + 0.004 / 0.25 + 0.0001 / 0.0625
    )
    assert np.all(material_tables(model="constant", values=[1.7])[0] == 1.7)
    for nd, vd in ((1.52, 58.0), (1.85, 23.8), (1.333, 55.8), (1.6, 5.0), (1.4, 150.0)):
        assert nd_and_vd(model="abbe", values=[nd, vd]) == pytest.approx((nd, vd), rel=1e-12)
        assert np.all(np.diff(material_tables(model="abbe", values=[nd, vd])[0]) < 0.0)


def test_a_table_of_indices_runs_on_along_its_ends():
    nm = np.array([435.8, 486.1, 546.1, 587.6, 656.3])
    pairs = [(float(w), 1.5 + 0.0045e6 / w**2) for w in nm]
    got = index_at([380.0, 435.8, 500.0, 780.0], model="table", values=pairs)
    assert got == pytest.approx([1.5 + 0.0045e6 / w**2 for w in (380.0, 435.8, 500.0, 780.0)], abs=1e-12)
    assert float(index_at(700.0, model="table", values=[(550.0, 1.4)])) == 1.4


def test_own_absorption_is_held_at_its_ends_and_wins_over_the_library():
    _, absorption = material_tables("water", absorption=[(400.0, 2.1), (550.0, 0.4), (700.0, 1.8)])
    assert absorption[[0, 20, 95, 170, 320, 400]] == pytest.approx([2.1, 2.1, 1.25, 0.4, 1.8, 1.8])
    _, clear = material_tables(model="constant", values=[1.5])
    assert np.all(clear == 0.0)
    _, like = material_tables("water", model="constant", values=[1.5])
    np.testing.assert_array_equal(like, material_tables("water")[1])


@pytest.mark.parametrize(
    "arguments",
    [
        {},
        {"model": "hartmann", "values": [1.5]},
        {"model": "constant", "values": []},
        {"model": "constant", "values": [float("nan")]},
        {"model": "constant", "values": [9.0]},
        {"model": "constant", "values": [-1.5]},
        {"model": "sellmeier", "values": [1.0, 0.01, 0.2]},
        {"model": "sellmeier", "values": [1.0, 0.3]},  # a resonance at 548 nm
        {"model": "abbe", "values": [1.5, 0.0]},
        {"model": "abbe", "values": [1.5, -40.0]},
        {"model": "table", "values": [(500.0, 1.5), (700.0, 1.49)]},
        {"model": "table", "values": [(700.0, 1.5), (400.0, 1.51)]},
        {"model": "constant", "values": [1.5], "absorption": [(500.0, -0.1)]},
        {"model": "constant", "values": [1.5], "absorption": []},
        {"model": "constant", "values": [1.5], "absorption": [(500.0, 1.0), (500.0, 2.0)]},
    ],
)
def test_numbers_that_make_no_material_are_refused(arguments):
    with pytest.raises(InputError) as caught:
        material_tables(**arguments)
    assert caught.value.faults[0].expected


def test_a_wavelength_out_of_range_is_refused():
    with pytest.raises(InputError):
        index_at(900.0, "water")


def test_vacuum_laws_are_divided_by_air():
    terms = [(factor, int(power)) for factor, power in library.library_entry("ice").terms]
    absolute = float(dispersion.power_series(589.3 * 1.000272, terms))
    assert float(index_at(589.3, "ice")) == pytest.approx(absolute / 1.000272, abs=1e-6)


@pytest.mark.parametrize("name", material_names())
def test_chart_is_a_picture_with_its_numbers(name):
    root = ElementTree.fromstring(materials_chart(name))
    words = " ".join(element.text or "" for element in root.iter("{http://www.w3.org/2000/svg}text"))
    nd, _ = nd_and_vd(name)
    assert name in words
    assert f"{nd:.5f}" in words
    assert "Source:" in words
    curves = list(root.iter("{http://www.w3.org/2000/svg}polyline"))
    assert len(curves) == 2
    for curve in curves:
        points = np.array([[float(number) for number in point.split(",")] for point in curve.attrib["points"].split()])
        assert points.shape == (401, 2)
        assert np.all((points[:, 0] >= 84) & (points[:, 0] <= 696) & (points[:, 1] >= 84) & (points[:, 1] <= 500))


def test_chart_of_an_unknown_name_is_refused():
    with pytest.raises(InputError):
        materials_chart("<script>")
