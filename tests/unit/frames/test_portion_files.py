"""The file of a portion: everything comes back, and nothing that was altered is believed."""

from __future__ import annotations

import hashlib
import json
import random
import zlib
from pathlib import Path

import numpy as np
import pytest

from renderer.frames.identity import Identity, frame_seed
from renderer.frames.portion_files import (
    BLOCK_VALUES,
    FIRST_LINE,
    Portion,
    PortionFacts,
    Torn,
    pack_block,
    read_facts,
    read_portion,
    unpack_block,
    write_portion,
)
from renderer.pictures.sums import empty_sums, same

IDENTITY = Identity("ab" * 32, 1001, 7, "x86-64-v3", (("antisolar", "0.1.0"), ("numba", "0.68.1")))
KINDS = ("sky", "direct")


@pytest.fixture
def portion() -> Portion:
    sums = empty_sums(300, 500, len(KINDS), 1)
    draw = np.random.default_rng(2)
    for array in sums.arrays().values():
        array[...] = draw.integers(-(2**50), 2**50, array.shape)
    sums.xyz[0, 0] = [np.iinfo(np.int64).min, np.iinfo(np.int64).max, -1]
    facts = PortionFacts(
        IDENTITY, ((0, 5), (8, 16)), (-4, 2, 500, 300), 2.0**-37, KINDS, {"samples": 2**45, "capped": 3}
    )
    return Portion(facts, sums)


def test_everything_comes_back(tmp_path: Path, portion: Portion) -> None:
    path = tmp_path / "a.portion"
    write_portion(path, portion)
    found = read_portion(path)
    assert found.facts == portion.facts == read_facts(path)
    assert same(found.sums, portion.sums)
    assert portion.sums.kinds.size > BLOCK_VALUES  # so that several blocks were written


def test_any_byte_that_changes_is_noticed(tmp_path: Path, portion: Portion) -> None:
    path = tmp_path / "a.portion"
    write_portion(path, portion)
    raw = path.read_bytes()
    draw = random.Random(5)
    for place in [0, 25, len(raw) - 1, len(raw) - 33, *(draw.randrange(len(raw)) for _ in range(20))]:
        path.write_bytes(raw[:place] + bytes([raw[place] ^ (1 << draw.randrange(8))]) + raw[place + 1 :])
        with pytest.raises(Torn):
            read_portion(path)
    for length in (0, 10, 31, 32, 33, 1000, len(raw) - 1):
        path.write_bytes(raw[:length])
        with pytest.raises(Torn):
            read_portion(path)
    path.write_bytes(raw + b"\0")
    with pytest.raises(Torn):
        read_portion(path)


def sealed(header: object, body: bytes = b"") -> bytes:
    """A file whose checksum agrees, whatever is in it."""
    content = FIRST_LINE + json.dumps(header).encode() + b"\n" + body
    return content + hashlib.sha256(content).digest()


@pytest.mark.parametrize(
    "change",
    [
        {"arrays": [{"name": "xyz", "shape": [2**20, 2**20, 3], "blocks": []}]},
        {"arrays": [{"name": "xyz", "shape": [-1, 2], "blocks": []}]},
        {"arrays": [{"name": "xyz", "shape": [1, 1, 3], "blocks": [5, 5]}]},
        {"arrays": [{"name": "xyz", "shape": [1, 1, 3], "blocks": [-9]}]},
        {"arrays": [{"shape": [1]}]},
        {"arrays": 5},
        {"arrays": []},
        {"rounds": []},
        {"rounds": [[0, 4], [2, 8]]},
        {"rounds": "all"},
        {"quantum": "0x0p+0"},
        {"quantum": "nan"},
        {"window": [0, 0, 0, 3]},
        {"tally": []},
        {"versions": [1]},
        {"frame": "one"},
    ],
)
def test_headers_that_cannot_be(tmp_path: Path, portion: Portion, change: dict[str, object]) -> None:
    """Sealed with a checksum that agrees, as a hostile file would be; sizes are refused before they are allocated."""
    path = tmp_path / "a.portion"
    write_portion(path, portion)
    header = json.loads(path.read_bytes().splitlines()[1])
    path.write_bytes(sealed({**header, **change}, b"\0" * 64))
    with pytest.raises(Torn):
        read_portion(path)


@pytest.mark.parametrize("header", [[], 3, None, "text"])
def test_headers_that_are_no_header(tmp_path: Path, header: object) -> None:
    path = tmp_path / "a.portion"
    path.write_bytes(sealed(header))
    with pytest.raises(Torn, match="header"):
        read_portion(path)


def test_a_block_that_unpacks_to_far_more_is_refused_early() -> None:
    bomb = zlib.compress(b"\0" * 50_000_000)
    with pytest.raises(Torn, match="another size"):
        unpack_block(bomb, 100)
    with pytest.raises(Torn, match="another size"):
        unpack_block(pack_block(np.zeros(99, dtype="<i8")), 100)


def test_a_missing_file_is_torn_too(tmp_path: Path) -> None:
    with pytest.raises(Torn, match="cannot be read"):
        read_portion(tmp_path / "none.portion")
    with pytest.raises(Torn, match="cannot be read"):
        read_facts(tmp_path / "none.portion")


def test_seeds_of_frames_differ_and_stay() -> None:
    seeds = {frame_seed(seed, frame) for seed in range(20) for frame in range(-50, 50)}
    assert len(seeds) == 2000
    assert all(0 <= seed < 2**63 for seed in seeds)
    assert frame_seed(0, 1001) == 937996355274742976  # as it was when this was written: a change loses all portions
