"""From light to picture values: exposure by stops, by ISO 12232 and by itself; the preview's size and values."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import plain_sums
import pytest
from PIL import Image

from renderer.colour.illuminants import white_light
from renderer.colour.observer import spectrum_to_xyz
from renderer.pictures.developing import Development, developed, development_of, shutter_s
from renderer.pictures.preview_png import write_preview

LIGHT = np.full((4, 6), 1000.0)


def test_a_stop_more_is_twice_as_bright() -> None:
    dark, bright = (development_of(plain_sums.camera(exposure_stops=s), 24.0, "acescg", LIGHT) for s in (0.0, 1.0))
    assert bright.exposure == 2.0 * dark.exposure
    assert (dark.space, dark.white_balance_k) == ("acescg", 6504.0)


def test_iso_counts_with_shutter_and_f_number() -> None:
    def exposure(**changes: float) -> float:
        camera = plain_sums.camera(exposure_stops=None, **{"iso": 100.0, "f_number": 8.0, **changes})
        return development_of(camera, 24.0, "acescg", LIGHT).exposure

    assert exposure(iso=200.0) == pytest.approx(2.0 * exposure())
    assert exposure(f_number=4.0) == pytest.approx(4.0 * exposure())
    assert exposure(shutter_deg=90.0) == pytest.approx(0.5 * exposure())
    assert shutter_s(plain_sums.camera(), 24.0) == pytest.approx(1.0 / 48.0)


def test_automatic_exposure_brings_an_even_picture_to_mid_grey() -> None:
    camera = plain_sums.camera(exposure_stops=None, exposure_auto=True)
    how = development_of(camera, 24.0, "rec709", LIGHT)
    assert how.exposure * 1000.0 == pytest.approx(0.18, rel=0.004)  # in steps of a hundredth of a stop


def test_light_of_the_white_balance_comes_out_neutral() -> None:
    seen = spectrum_to_xyz(white_light(4300.0))
    rgb = developed(100.0 * seen / seen[1], Development("acescg", 4300.0, 0.01))
    np.testing.assert_allclose(rgb, [1.0, 1.0, 1.0], atol=1e-6)


@pytest.mark.parametrize(("aspect", "columns"), [(1.0, 6), (2.0, 12), (0.5, 3)])
def test_a_preview_has_square_pixels(tmp_path: Path, aspect: float, columns: int) -> None:
    path = tmp_path / "a.png"
    write_preview(path, np.full((200, 6, 3), 0.18), "rec709", aspect)
    with Image.open(path) as picture:
        assert (picture.size, picture.mode) == ((columns, 200), "RGB")
        assert picture.getpixel((0, 199)) == (118, 118, 118)  # 0.18 by IEC 61966-2-1 is 117.6 of 255, by hand
