"""Broken pictures: each gives one sentence that names the file and what was expected, at once, and no traceback."""

from __future__ import annotations

import struct
import time
import zlib
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from PIL import Image

from renderer.base.errors import InputError
from renderer.pictures.exr_writing import write_exr
from renderer.pictures.reading import read_8_bit, read_linear, read_sky_picture

Writer = Callable[[Path], None]
HDR_HEAD = b"#?RADIANCE\nFORMAT=32-bit_rle_rgbe\n\n"


def rgb(rows: int = 64, columns: int = 128, value: float = 1.0) -> dict[str, np.ndarray]:
    """Channels of noise that does not pack away."""
    draw = np.random.default_rng(1)
    return {c: (value * draw.random((rows, columns))).astype(np.float32) for c in "RGB"}


def exr(channels: dict[str, np.ndarray], **header: object) -> Writer:
    """An OpenEXR file."""
    return lambda path: write_exr(path, channels, header)


def cut(writer: Writer, share: float) -> Writer:
    """A file that lost its end."""

    def write(path: Path) -> None:
        writer(path)
        raw = path.read_bytes()
        path.write_bytes(raw[: int(len(raw) * share)])

    return write


def changed(writer: Writer, old: bytes, new: bytes) -> Writer:
    """A file with some bytes in place of others."""

    def write(path: Path) -> None:
        writer(path)
        raw = path.read_bytes()
        assert old in raw
        path.write_bytes(raw.replace(old, new, 1))

    return write


def window(writer: Writer, *corners: int) -> Writer:
    """An OpenEXR file whose header states another data window."""

    def write(path: Path) -> None:
        writer(path)
        raw = bytearray(path.read_bytes())
        place = raw.index(b"dataWindow\0box2i\0") + 21
        raw[place : place + 16] = struct.pack("<4i", *corners)
        path.write_bytes(raw)

    return write


def rubbish_inside(path: Path) -> None:
    """An OpenEXR file whose packed pixels were overwritten."""
    exr({c: channel.round(1) for c, channel in rgb().items()})(path)
    raw = bytearray(path.read_bytes())
    raw[-1500:-500] = b"\xa5" * 1000
    path.write_bytes(raw)


def with_value(value: float, rows: int = 64, columns: int = 128) -> Writer:
    """An OpenEXR file with one value of its own."""
    channels = rgb(rows, columns)
    channels["G"][5, 9] = value
    return exr(channels)


def content(raw: bytes) -> Writer:
    """A file of these bytes."""
    return lambda path: path.write_bytes(raw) and None


def image(mode: str, **options: object) -> Writer:
    """A picture of a mode through Pillow."""
    channels = {"RGB": 3, "CMYK": 4, "L": 0}[mode]
    shape = (64, 64, channels) if channels else (64, 64)
    pixels = np.random.default_rng(2).integers(0, 256, shape, dtype=np.uint8)
    return lambda path: Image.fromarray(pixels, mode).save(path, **options)


def png(columns: int, rows: int, depth: int, kind: int) -> Writer:
    """A PNG made by hand, with as few rows as its header can be believed to have."""

    def chunk(name: bytes, data: bytes) -> bytes:
        return struct.pack(">I", len(data)) + name + data + struct.pack(">I", zlib.crc32(name + data))

    head = struct.pack(">IIBBBBB", columns, rows, depth, kind, 0, 0, 0)
    body = zlib.compress(b"\0" * 10_000)
    return content(b"\x89PNG\r\n\x1a\n" + chunk(b"IHDR", head) + chunk(b"IDAT", body) + chunk(b"IEND", b""))


def missing(path: Path) -> None:
    """No file."""


NOT_EXR = "not an OpenEXR picture"
LINEAR = [
    ("missing", "a.exr", missing, "does not exist"),
    ("a folder", "a.exr", lambda path: path.mkdir(), "folder"),
    ("empty", "a.exr", content(b""), "empty"),
    ("text called EXR", "a.exr", content(b"these are notes on the lock, not a picture\n" * 9), NOT_EXR),
    ("a PNG called EXR", "a.exr", lambda path: Image.new("RGB", (8, 8)).save(path, format="PNG"), NOT_EXR),
    ("the first bytes alone", "a.exr", content(b"\x76\x2f\x31\x01"), "cut short in its header"),
    ("cut in the header", "a.exr", cut(exr(rgb()), 0.002), "cut short in its header"),
    ("cut in the middle", "a.exr", cut(exr(rgb()), 0.5), "cut short"),
    ("cut at the end", "a.exr", cut(exr(rgb()), 0.999), "cut short"),
    ("damaged pixels", "a.exr", rubbish_inside, "damaged"),
    ("a window inside out", "a.exr", window(exr(rgb()), 9, 9, 3, 3), "-5 x -5 pixels"),
    ("a header of far too many pixels", "a.exr", window(exr(rgb()), 0, 0, 99_999, 99_999), "100,000 x 100,000"),
    ("a window beyond whole numbers", "a.exr", window(exr(rgb()), -(2**31), 0, 2**31 - 1, 9), "4,294,967,296 x 10"),
    ("an attribute longer than the file", "a.exr",
     changed(exr(rgb()), b"box2i\0\x10\0\0\0", b"box2i\0\xff\xff\xff\x7f"),
     "cut short in its header"),
    ("no data window", "a.exr", changed(exr(rgb()), b"dataWindow", b"dataWimdow"), "damaged"),
    ("alpha alone", "a.exr", exr({"A": np.ones((64, 128), np.float32)}), "no colour: its channels are A"),
    ("depth alone", "a.exr", exr({"Z": np.ones((64, 128), np.float32)}), "no colour: its channels are Z"),
    ("not a number", "a.exr", with_value(np.nan),
     "one pixel has a value that is not a finite number, first at column 9, row 5"),
    ("infinite", "a.exr", with_value(np.inf), "not a finite number"),
    ("half floats that overflowed", "a.exr", exr({c: np.full((64, 128), np.inf, np.float16) for c in "RGB"}),
     "8,192 pixels have values that are not a finite number"),
    ("a black sky", "a.exr", exr(rgb(value=0.0)), "black all over"),
    ("a square sky", "a.exr", exr(rgb(64, 64)), "64 x 64 pixels"),
    ("a JPEG as a sky", "a.jpg", image("RGB"), "is not scene-linear"),
    ("text called HDR", "a.hdr", content(b"notes\n" * 50), "not a Radiance picture"),
    ("an HDR that is one line", "a.hdr", content(b"#?RADIANCE" + b"x" * 9000), "not a Radiance picture"),
    ("an HDR without a size", "a.hdr", content(HDR_HEAD), "cut short in its header"),
    ("an HDR that is on its side", "a.hdr", content(HDR_HEAD + b"+X 8 -Y 4\n" + b"\1" * 128), 'reads "+X 8 -Y 4"'),
    ("an HDR of nothing", "a.hdr", content(HDR_HEAD + b"-Y 0 +X 0\n"), "0 x 0 pixels"),
    ("an HDR of far too much", "a.hdr", content(HDR_HEAD + b"-Y 99999 +X 199998\n"), "199,998 x 99,999"),
    ("an HDR that is cut short", "a.hdr", content(HDR_HEAD + b"-Y 64 +X 128\n" + b"\x02\x02\x00\x80\x90\x07" * 60),
     "cut short or damaged at row"),
    ("an HDR whose run is too long", "a.hdr", content(HDR_HEAD + b"-Y 1 +X 8\n" + b"\x02\x02\x00\x08\xff\x07" * 20),
     "damaged at row 0"),
    ("an HDR that repeats nothing", "a.hdr", content(HDR_HEAD + b"-Y 1 +X 4\n" + b"\1\1\1\4" * 20), "damaged at row 0"),
    ("an HDR in XYZ", "a.hdr", content(HDR_HEAD.replace(b"rgbe", b"xyze") + b"-Y 1 +X 2\n" + b"\1" * 8), "xyze"),
    ("an HDR of no exposure", "a.hdr", content(HDR_HEAD.replace(b"\n\n", b"\nEXPOSURE=0\n\n")), "EXPOSURE"),
]  # fmt: skip

EIGHT_BIT = [
    ("missing", "a.png", missing, "does not exist"),
    ("empty", "a.png", content(b""), "empty"),
    ("text called PNG", "a.png", content(b"notes\n" * 50), "cannot be read as PNG"),
    ("text called JPEG", "a.jpg", content(b"notes\n" * 50), "cannot be read as JPEG"),
    ("a PNG cut short", "a.png", cut(image("RGB"), 0.5), "cannot be read"),
    ("a JPEG cut short", "a.jpg", cut(image("RGB"), 0.5), "cannot be read"),
    ("a PNG of zero size", "a.png", png(0, 0, 8, 2), "cannot be read"),
    ("a PNG of far too many pixels", "a.png", png(60_000, 60_000, 8, 2), "far too many pixels"),
    ("a PNG of too many pixels", "a.png", png(15_000, 10_000, 8, 0), "15,000 x 10,000"),
    ("a PNG of 16 bits", "a.png", png(8, 8, 16, 2), "16 bits a channel"),
    ("a grey PNG of 16 bits", "a.png", png(8, 8, 16, 0), "16 bits a channel"),
    ("a TIFF of 16 bits", "a.tif", lambda path: Image.fromarray(np.zeros((8, 8), np.uint16)).save(path), 'kind "I;16"'),
    ("a TIFF of floats", "a.tif", lambda path: Image.fromarray(np.zeros((8, 8), np.float32)).save(path), 'kind "F"'),
    ("a JPEG for print", "a.jpg", image("CMYK"), "CMYK"),
    ("an EXR asked for 8 bits", "a.exr", exr(rgb()), "not read here"),
    ("a picture of no kind", "a", content(b"x"), "not read here"),
]  # fmt: skip


def told(path: Path, read: Callable[[Path], object], said: str) -> None:
    """What every message must be, and how long it may take."""
    started = time.process_time()
    with pytest.raises(InputError) as caught:
        read(path)
    assert time.process_time() - started < 2.0
    (fault,) = caught.value.faults
    assert said in fault.what
    assert fault.where == str(path)
    assert fault.expected
    assert "\n" not in fault.what
    assert not fault.what.endswith(".")
    assert str(path) not in fault.what


@pytest.mark.parametrize(("name", "writer", "said"), [row[1:] for row in LINEAR], ids=[row[0] for row in LINEAR])
def test_broken_skies(tmp_path: Path, capfd: pytest.CaptureFixture[str], name: str, writer: Writer, said: str) -> None:
    path = tmp_path / name
    writer(path)
    told(path, read_sky_picture, said)
    assert capfd.readouterr() == ("", "")  # the libraries' own complaints are kept off the command's output


@pytest.mark.parametrize(("name", "writer", "said"), [row[1:] for row in EIGHT_BIT], ids=[row[0] for row in EIGHT_BIT])
def test_broken_8_bit_pictures(tmp_path: Path, name: str, writer: Writer, said: str) -> None:
    path = tmp_path / name
    writer(path)
    told(path, read_8_bit, said)


def test_whole_ones_are_read(tmp_path: Path) -> None:
    """So that no reader passes the tests above by refusing everything."""
    exr(rgb())(tmp_path / "a.exr")
    assert read_sky_picture(tmp_path / "a.exr").shape == (64, 128, 3)
    exr({"Y": np.ones((4, 5), np.float16)})(tmp_path / "grey.exr")
    assert read_linear(tmp_path / "grey.exr").shape == (4, 5, 3)
    for name, mode in (("a.png", "RGB"), ("a.jpg", "RGB"), ("b.png", "L"), ("a.tif", "RGB"), ("a.bmp", "RGB")):
        image(mode)(tmp_path / name)
        assert read_8_bit(tmp_path / name).shape == (64, 64, 3)
    image("RGB", lossless=True)(tmp_path / "a.webp")
    np.testing.assert_array_equal(read_8_bit(tmp_path / "a.webp"), read_8_bit(tmp_path / "a.png"))
