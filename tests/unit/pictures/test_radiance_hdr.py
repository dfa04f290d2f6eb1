"""Radiance pictures: the three encodings, orientation, exposure, against values written out by hand."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from renderer.pictures.radiance_hdr import read_radiance, to_linear

HEAD = b"#?RADIANCE\n# made by hand\nFORMAT=32-bit_rle_rgbe\n\n"


def encoded_by_channel(row: np.ndarray) -> bytes:
    """A scan line (columns, 4) with a run where two or more bytes are equal, else single bytes."""
    out = bytearray([2, 2, len(row) >> 8, len(row) & 255])
    for channel in range(4):
        place = 0
        while place < len(row):
            stop = place
            while stop < len(row) and row[stop, channel] == row[place, channel] and stop - place < 127:
                stop += 1
            run = stop - place
            out += bytes([128 + run if run > 1 else 1, row[place, channel]])
            place = stop
    return bytes(out)


@pytest.fixture
def rgbe() -> np.ndarray:
    """Noise with long runs in it."""
    pixels = np.random.default_rng(4).integers(0, 256, (6, 300, 4), dtype=np.uint8)
    pixels[:, 40:250] = [10, 20, 30, 130]
    pixels[..., 3] = np.clip(pixels[..., 3], 100, 160)
    return pixels


def write(path: Path, size: str, body: bytes, head: bytes = HEAD) -> Path:
    path.write_bytes(head + size.encode() + b"\n" + body)
    return path


def test_flat_and_encoded_rows_give_the_same(tmp_path: Path, rgbe: np.ndarray) -> None:
    flat = write(tmp_path / "flat.hdr", "-Y 6 +X 300", rgbe.tobytes())
    packed = write(tmp_path / "packed.hdr", "-Y 6 +X 300", b"".join(encoded_by_channel(row) for row in rgbe))
    np.testing.assert_array_equal(read_radiance(flat), to_linear(rgbe))
    np.testing.assert_array_equal(read_radiance(packed), to_linear(rgbe))


def test_repeated_pixels_of_the_old_encoding(tmp_path: Path) -> None:
    body = bytes([9, 8, 7, 129, 1, 1, 1, 2, 5, 5, 5, 128, 1, 1, 1, 4, 1, 1, 1, 1])  # 1 + 2, 1 + 4 + 1 * 256
    values = read_radiance(write(tmp_path / "old.hdr", "-Y 1 +X 264", body))
    np.testing.assert_array_equal(values[0, :3], np.tile(to_linear(np.uint8([9, 8, 7, 129])), (3, 1)))
    np.testing.assert_array_equal(values[0, 3:], np.tile(to_linear(np.uint8([5, 5, 5, 128])), (261, 1)))


def test_mantissa_and_exponent_by_hand() -> None:
    values = to_linear(np.uint8([[127, 0, 255, 129], [200, 10, 10, 0]]))
    np.testing.assert_array_equal(values, [[127.5 / 128, 0.5 / 128, 255.5 / 128], [0.0, 0.0, 0.0]])


def test_rows_and_columns_may_run_the_other_way(tmp_path: Path, rgbe: np.ndarray) -> None:
    path = write(tmp_path / "a.hdr", "+Y 6 -X 300", rgbe.tobytes())
    np.testing.assert_array_equal(read_radiance(path), to_linear(rgbe)[::-1, ::-1])


def test_exposures_are_taken_out(tmp_path: Path, rgbe: np.ndarray) -> None:
    head = HEAD.replace(b"\n\n", b"\nEXPOSURE=2.0\nEXPOSURE= 4\n\n")
    path = write(tmp_path / "a.hdr", "-Y 6 +X 300", rgbe.tobytes(), head)
    np.testing.assert_array_equal(read_radiance(path), to_linear(rgbe) / 8.0)
