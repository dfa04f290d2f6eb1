"""The shot file's ranges are those that optics states, at both ends, so that what is read can be rendered."""

from __future__ import annotations

from pathlib import Path

import pytest

from renderer.base.errors import InputError
from renderer.optics import atmosphere, library, sky, water
from renderer.shot import load_shot
from renderer.shot.schema.sun_and_sky import LOWEST_SUN_DEG

HEAD = "format = 1\n[camera]\nposition = [0, 1, 5]\ntarget = [0, 1, 0]\nfocal_length = 35\n"
SUN = "[sun]\nelevation = 10\nazimuth = 0\n"


def read(folder: Path, text: str) -> None:
    """Read a shot and resolve its first frame."""
    path = folder / "lock.shot.toml"
    path.write_text(HEAD + text, encoding="utf-8")
    shot = load_shot(path)
    shot.at(shot.frames[0])


@pytest.mark.parametrize(
    ("text", "low", "high"),
    [
        (SUN + "visibility = {}\n", atmosphere.LOWEST_VISIBILITY_KM, atmosphere.HIGHEST_VISIBILITY_KM),
        ('[materials.m]\nlike = "water"\ntemperature = {}\n', 0.0, 60.0),
        ('[materials.m]\nlike = "sea water"\ntemperature = {}\n', 0.0, 30.0),
        ('[materials.m]\nlike = "water"\nsalinity = 0.5\ntemperature = {}\n', 0.0, 30.0),
        ('[materials.m]\nlike = "water"\nsalinity = {}\n', 0.0, water.HIGHEST_SALINITY),
        ('[sun]\nazimuth = 0\nelevation = {}\n[sky]\nkind = "clear"\n', sky.LOWEST_SUN_DEG, 90.0),
        ('[sun]\nazimuth = 0\nelevation = {}\n[sky]\nkind = "overcast"\n', sky.LOWEST_SUN_DEG, 90.0),
    ],
)
def test_both_ends_are_taken_and_nothing_beyond(tmp_path: Path, text: str, low: float, high: float) -> None:
    for value in (low, high):
        read(tmp_path, text.format(value))
    for value in (low - 0.01, high + 0.01):
        with pytest.raises(InputError) as caught:
            read(tmp_path, text.format(value))
        (fault,) = caught.value.faults
        assert "lock.shot.toml:" in fault.where
        assert fault.where.endswith(tuple(line.split(" = ")[0] for line in text.splitlines() if "{}" in line))


def test_a_sun_below_every_known_sky_needs_no_sky(tmp_path: Path) -> None:
    """Without a sky that goes by the sun, a sun may stand anywhere."""
    assert LOWEST_SUN_DEG == sky.LOWEST_SUN_DEG
    read(tmp_path, "[sun]\nazimuth = 0\nelevation = -40\n")
    read(tmp_path, '[sun]\ndirection = [0, -1, 0]\n[sky]\nkind = "uniform"\n')


@pytest.mark.parametrize("change", [str, str.upper, str.title, "  {}  ".format])
def test_every_name_of_the_library_is_taken_in_any_case(tmp_path: Path, change) -> None:
    objects = "".join(
        f'[[objects]]\nname = "o{index}"\nshape = {{ sphere = 0.1 }}\nmaterial = "{change(name)}"\n'
        for index, name in enumerate(library.accepted_names())
    )
    read(tmp_path, objects)
