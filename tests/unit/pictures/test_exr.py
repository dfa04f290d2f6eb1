"""OpenEXR: every layer comes back as it went in, windows and metadata too, and a file is there whole or not at all."""

from __future__ import annotations

from fractions import Fraction
from pathlib import Path

import numpy as np
import plain_sums
import pytest

from renderer.base.errors import InputError
from renderer.pictures.developing import Development, developed
from renderer.pictures.exr_header import read_header
from renderer.pictures.exr_reading import read_exr, read_exr_header
from renderer.pictures.exr_writing import (
    SPECTRAL,
    camera_header,
    colour_header,
    facts_header,
    facts_of,
    frame_rate,
    write_exr,
)
from renderer.pictures.layers import (
    HALF_MOST,
    colour_channels,
    count_channels,
    error_channels,
    guide_channels,
    kind_channels,
    spectral_channels,
)
from renderer.pictures.reading import read_linear
from renderer.pictures.writing import replacing

KINDS = ("sky", "direct", "reflected", "transmitted")
HOW = Development("rec709", 6504.0, 0.01)


def all_channels(half: bool = False) -> dict[str, np.ndarray]:
    """Every layer that a picture can have."""
    done = plain_sums.accumulated()
    rows, columns = done.sums.size
    guides = {
        "depth": np.where(np.arange(columns) > 2, 3.25, np.inf) * np.ones((rows, 1)),
        "normal": np.tile([0.0, -0.6, 0.8], (rows, columns, 1)),
        "object_id": np.full((rows, columns), -1),
        "material_id": np.full((rows, columns), 7),
        "surfaces_crossed": np.full((rows, columns), 5),
        "antisolar_angle": np.full((rows, columns), 42.125),
    }
    return {
        **colour_channels(done, HOW, half),
        **kind_channels(done, HOW, KINDS, half),
        **error_channels(done, HOW),
        **guide_channels(guides),
        **count_channels(done),
        **spectral_channels(done, (589.3, 450.0)),
    }


@pytest.mark.parametrize("half", [False, True])
def test_every_layer_comes_back(tmp_path: Path, half: bool) -> None:
    channels = all_channels(half)
    path = tmp_path / "a.exr"
    write_exr(path, channels, {"antisolar/rounds": 24})
    found = read_exr(path)
    assert found.channels.keys() == channels.keys()
    for name, array in channels.items():
        assert found.channels[name].dtype == array.dtype, name
        np.testing.assert_array_equal(found.channels[name], array, err_msg=name)
    assert channels["R"].dtype == (np.float16 if half else np.float32)
    expected = {"R", "G", "B", "Z", "normal.X", "normal.Y", "normal.Z", "object_id.id", "material_id.id"}
    expected |= {"surfaces_crossed.count", "antisolar_angle.deg", "samples.count", "standard_error.Y"}
    expected |= {"S0.589,3nm", "S0.450nm"} | {f"light_{kind}.{c}" for kind in KINDS for c in "RGB"}
    assert channels.keys() == expected


def test_values_of_layers() -> None:
    done, channels = plain_sums.accumulated(), all_channels()
    mean = done.sums.xyz * done.quantum / 24
    np.testing.assert_allclose(channels["G"], developed(mean, HOW)[..., 1], rtol=1e-6)
    added = sum(channels[f"light_{kind}.G"].astype(np.float64) for kind in KINDS)
    np.testing.assert_allclose(added, channels["G"], rtol=1e-5)
    np.testing.assert_array_equal(np.unique(channels["Z"]), np.float32([3.25, 1e10]))
    assert (channels["object_id.id"] == 0).all()
    assert (channels["material_id.id"] == 8).all()
    assert (channels["samples.count"] == 24).all()
    np.testing.assert_allclose(channels["S0.450nm"], done.sums.bins[1] * done.quantum / 24, rtol=1e-6)
    spread = (done.sums.replicate_y / 3).std(axis=0, ddof=1) / np.sqrt(8) * 1.0767134 * done.quantum * HOW.exposure
    np.testing.assert_allclose(channels["standard_error.Y"], spread, rtol=1e-5)


def test_half_floats_are_cut_at_their_largest() -> None:
    done = plain_sums.accumulated()
    bright = colour_channels(done, Development("rec709", 6504.0, 1e6), True)
    assert np.isfinite(bright["G"]).all()
    assert bright["G"].max() == HALF_MOST


@pytest.mark.parametrize("window", [(0, 0, 13, 9), (-3, -2, 13, 9), (4, 1, 6, 5)])
def test_windows_pixel_aspect_and_frame_rate(tmp_path: Path, window: tuple[int, int, int, int]) -> None:
    camera = plain_sums.camera(window=window, pixel_aspect=2.0, f_number=8.0, focus_distance_m=4.0, iso=100.0)
    path = tmp_path / "a.exr"
    values = np.arange(window[2] * window[3], dtype=np.float32).reshape(window[3], window[2])
    write_exr(path, {"Y": values}, camera_header(camera, 23.976))
    header = read_exr_header(path)
    first, last = header["dataWindow"]
    assert (*first, *last) == (window[0], window[1], window[0] + window[2] - 1, window[1] + window[3] - 1)
    first, last = header["displayWindow"]
    assert (*first, *last) == (0, 0, 15, 11)
    assert header["pixelAspectRatio"] == 2.0
    assert header["framesPerSecond"] == Fraction(24000, 1001)
    assert header["expTime"] == pytest.approx(0.5 / 23.976)
    assert (header["aperture"], header["focus"], header["isoSpeed"]) == (8.0, 4.0, 100.0)
    np.testing.assert_array_equal(read_exr(path).channels["Y"], values)
    assert read_header(path).window == window


@pytest.mark.parametrize(
    ("fps", "expected"),
    [(24.0, Fraction(24)), (25.0, Fraction(25)), (23.976, Fraction(24000, 1001)), (29.97, Fraction(30000, 1001)),
     (59.94, Fraction(60000, 1001)), (12.5, Fraction(25, 2))],
)  # fmt: skip
def test_frame_rates_are_what_is_meant(fps: float, expected: Fraction) -> None:
    assert frame_rate(fps) == expected


@pytest.mark.parametrize(
    ("space", "white"), [("rec709", (0.3127, 0.329)), ("acescg", (0.32168, 0.33767)), ("xyz", (1 / 3, 1 / 3))]
)
def test_the_colour_space_is_stated(tmp_path: Path, space: str, white: tuple[float, float]) -> None:
    path = tmp_path / "a.exr"
    write_exr(path, {"Y": np.zeros((2, 2), np.float32)}, colour_header(Development(space, 5600.0, 0.004)))
    header = read_exr_header(path)
    assert header["chromaticities"][6:] == pytest.approx(white, abs=1e-7)
    assert header["whiteLuminance"] == pytest.approx(250.0)
    assert facts_of(header) == {"space": space, "whiteBalance": 5600.0}


def test_facts_come_back_and_long_numbers_as_text(tmp_path: Path) -> None:
    path = tmp_path / "a.exr"
    facts = {"rounds": 64, "fingerprint": "ab" * 32, "capShare": 0.25, "capped": 2**40, "title": "Schleuse neun, öde"}
    write_exr(path, {"Y": np.zeros((2, 2), np.float32)}, {**facts_header(facts), **SPECTRAL})
    header = read_exr_header(path)
    assert facts_of(header) == {**facts, "capped": str(2**40)}
    assert header["spectralLayoutVersion"] == "1.0"


def test_the_same_picture_has_the_same_bytes(tmp_path: Path) -> None:
    for name in ("a.exr", "b.exr"):
        write_exr(tmp_path / name, all_channels(), colour_header(HOW))
    assert (tmp_path / "a.exr").read_bytes() == (tmp_path / "b.exr").read_bytes()


def test_a_failed_write_leaves_the_old_file_and_nothing_else(tmp_path: Path) -> None:
    path = tmp_path / "a.exr"
    path.write_bytes(b"old")

    def fail() -> None:
        with replacing(path) as temporary:
            temporary.write_bytes(b"half of the n")
            raise RuntimeError("the machine stumbles")

    with pytest.raises(RuntimeError):
        fail()
    assert path.read_bytes() == b"old"
    assert list(tmp_path.iterdir()) == [path]


def test_a_folder_that_is_a_file_is_an_error_in_one_sentence(tmp_path: Path) -> None:
    (tmp_path / "out").write_text("not a folder", encoding="utf-8")
    with pytest.raises(InputError, match="cannot be written"):
        write_exr(tmp_path / "out" / "a.exr", {"Y": np.zeros((2, 2), np.float32)}, {})


def test_own_pictures_are_read_as_any_other(tmp_path: Path) -> None:
    path = tmp_path / "a.exr"
    channels = all_channels()
    write_exr(path, channels, colour_header(HOW))
    expected = np.stack([channels[c] for c in "RGB"], axis=-1).astype(np.float64)
    np.testing.assert_array_equal(read_linear(path), expected)
