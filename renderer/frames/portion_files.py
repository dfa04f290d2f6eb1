"""The file of a portion: finished rounds of a frame, as exact sums.

    antisolar portion 1                       this line
    {"fingerprint": ..., "arrays": [...]}     one line of JSON: identity, rounds, counts, and the arrays that follow
    blocks                                    bytes, zlib (RFC 1950), as long and as many as the header says
    32 bytes                                  SHA-256 of everything before

An array is int64, little-endian, C order, cut into blocks of 2^19 values; a block is written byte by byte of its values
(all lowest bytes first), which packs better, since high bytes hardly differ. Nothing in it is run; sizes are checked
before anything is allocated, and nothing is believed before the checksum agrees.
"""

from __future__ import annotations

import hashlib
import json
import os
import zlib
from collections.abc import Iterator
from concurrent.futures import ThreadPoolExecutor
from dataclasses import asdict, dataclass
from pathlib import Path
from typing import Any, BinaryIO

import numpy as np
import numpy.typing as npt

from renderer.frames.identity import Identity
from renderer.frames.round_ranges import Ranges, joined
from renderer.pictures.sums import Sums
from renderer.pictures.writing import replacing

FIRST_LINE = b"antisolar portion 1\n"
MAX_HEADER_BYTES = 1 << 20
MAX_VALUES = 1 << 34  # of all arrays
BLOCK_VALUES = 1 << 19
PACKING_LEVEL = 1  # zlib: higher ones take three times as long for a few per cent
DIGEST_BYTES = 32
READ_BYTES = 1 << 20

Tally = dict[str, int]


class Torn(Exception):
    """A portion cannot be used; the text says why, for "the portion ... "."""


@dataclass(frozen=True)
class PortionFacts:
    """What a portion is of. `window` as in the camera; `quantum` [cd/m2]; `tally` counts by name."""

    identity: Identity
    rounds: Ranges
    window: tuple[int, int, int, int]
    quantum: float
    kinds: tuple[str, ...]
    tally: Tally


@dataclass(frozen=True)
class Portion:
    """Finished rounds."""

    facts: PortionFacts
    sums: Sums


def write_portion(path: Path, portion: Portion) -> None:
    """Write a portion; it is on disk whole or not at all. Raises `InputError` where it cannot be written."""
    packed = {name: pack_array(array) for name, array in portion.sums.arrays().items()}
    header = facts_json(portion.facts)
    header["arrays"] = [
        {"name": name, "shape": list(array.shape), "blocks": [len(block) for block in packed[name]]}
        for name, array in portion.sums.arrays().items()
    ]
    digest = hashlib.sha256()
    with replacing(path) as temporary, temporary.open("wb") as file:
        line = json.dumps(header, sort_keys=True, separators=(",", ":")).encode("ascii") + b"\n"
        for piece in (FIRST_LINE, line, *(block for blocks in packed.values() for block in blocks)):
            digest.update(piece)
            file.write(piece)
        file.write(digest.digest())


def read_facts(path: Path) -> PortionFacts:
    """What a portion is of, by its header alone; the checksum is not looked at. Raises `Torn`."""
    try:
        with path.open("rb") as file:
            return facts_of_json(_header(file))
    except OSError as error:
        raise Torn(f"cannot be read ({error.strerror})") from None


def read_portion(path: Path) -> Portion:
    """A portion, checked whole. Raises `Torn` where the file is cut short, altered, or no portion."""
    try:
        check_digest(path)
        with path.open("rb") as file:
            header = _header(file)
            arrays = dict(_arrays(file, header))
    except OSError as error:
        raise Torn(f"cannot be read ({error.strerror})") from None
    facts = facts_of_json(header)
    try:
        sums = Sums(**arrays)
    except TypeError:
        raise Torn("has other arrays than this version writes") from None
    _check_shapes(facts, sums)
    return Portion(facts, sums)


def check_digest(path: Path) -> None:
    """Raise `Torn` unless the checksum at the file's end is that of what stands before it."""
    left = path.stat().st_size - DIGEST_BYTES
    digest = hashlib.sha256()
    with path.open("rb") as file:
        while left > 0:
            piece = file.read(min(READ_BYTES, left))
            if not piece:
                break
            digest.update(piece)
            left -= len(piece)
        if left != 0 or file.read(DIGEST_BYTES) != digest.digest():
            raise Torn("is cut short or was altered: its checksum does not agree")


def facts_json(facts: PortionFacts) -> dict[str, Any]:
    """Facts as JSON has them; the quantum in hexadecimal, which loses nothing."""
    return {
        **asdict(facts.identity),
        "rounds": [list(pair) for pair in facts.rounds],
        "window": list(facts.window),
        "quantum": facts.quantum.hex(),
        "kinds": list(facts.kinds),
        "tally": facts.tally,
    }


def facts_of_json(header: dict[str, Any]) -> PortionFacts:
    """The facts in a header. Raises `Torn` where any is missing or of another kind."""
    try:
        identity = Identity(
            fingerprint=str(header["fingerprint"]),
            frame=int(header["frame"]),
            seed=int(header["seed"]),
            cpu_level=str(header["cpu_level"]),
            versions=tuple((str(name), str(number)) for name, number in header["versions"]),
        )
        column, row, columns, rows = (int(part) for part in header["window"])
        ranges = joined((int(first), int(stop)) for first, stop in header["rounds"])
        tally = {str(name): int(count) for name, count in header["tally"].items()}
        quantum = float.fromhex(header["quantum"])
        kinds = tuple(str(kind) for kind in header["kinds"])
    except (KeyError, TypeError, ValueError, AttributeError):
        raise Torn("has a header that cannot be read") from None
    if not ranges or ranges[0][0] < 0 or columns < 1 or rows < 1 or not 0.0 < quantum < np.inf:
        raise Torn("has a header that cannot be")
    return PortionFacts(identity, ranges, (column, row, columns, rows), quantum, kinds, tally)


def pack_array(array: npt.NDArray[np.int64]) -> list[bytes]:
    """The blocks of an array; packed by several threads, since zlib lets go of the interpreter."""
    flat = np.ascontiguousarray(array, dtype="<i8").reshape(-1)
    starts = range(0, flat.size, BLOCK_VALUES)
    with ThreadPoolExecutor(max_workers=os.cpu_count() or 1) as pool:
        return list(pool.map(lambda start: pack_block(flat[start : start + BLOCK_VALUES]), starts))


def pack_block(values: npt.NDArray[np.int64]) -> bytes:
    """One block: bytes of equal weight side by side, packed."""
    shuffled = values.view(np.uint8).reshape(-1, 8).T
    return zlib.compress(np.ascontiguousarray(shuffled).tobytes(), PACKING_LEVEL)


def unpack_block(block: bytes, n_values: int) -> npt.NDArray[np.int64]:
    """The values of a block. Raises `Torn` unless there are exactly so many."""
    worker = zlib.decompressobj()
    try:
        raw = worker.decompress(block, 8 * n_values + 1)
    except zlib.error:
        raise Torn("has a block that cannot be unpacked") from None
    if len(raw) != 8 * n_values or not worker.eof:
        raise Torn("has a block of another size than its header says")
    shuffled = np.frombuffer(raw, dtype=np.uint8).reshape(8, n_values)
    return np.ascontiguousarray(shuffled.T).view("<i8").reshape(-1).astype(np.int64)


def _header(file: BinaryIO) -> dict[str, Any]:
    """The header's JSON; leaves the file at the first block."""
    if file.read(len(FIRST_LINE)) != FIRST_LINE:
        raise Torn("is no portion of this version")
    line = file.readline(MAX_HEADER_BYTES)
    try:
        header = json.loads(line.decode("ascii"))
    except (ValueError, RecursionError):
        raise Torn("has a header that cannot be read") from None
    if not isinstance(header, dict):
        raise Torn("has a header that cannot be read")
    return header


def _arrays(file: BinaryIO, header: dict[str, Any]) -> Iterator[tuple[str, npt.NDArray[np.int64]]]:
    """Every array by name."""
    budget = MAX_VALUES
    entries = header.get("arrays")
    if not isinstance(entries, list):
        raise Torn("has a header that cannot be read")
    for entry in entries:
        try:
            name, shape = str(entry["name"]), tuple(int(side) for side in entry["shape"])
            lengths = [int(length) for length in entry["blocks"]]
        except (KeyError, TypeError, ValueError):
            raise Torn("has a header that cannot be read") from None
        n_values = int(np.prod([*shape, 1], dtype=object))
        budget -= max(n_values, 0)
        if min(*shape, 0) < 0 or budget < 0 or len(lengths) != -(-n_values // BLOCK_VALUES):
            raise Torn("has a header that cannot be")
        array = np.empty(n_values, dtype=np.int64)
        for k, length in enumerate(lengths):
            part = array[k * BLOCK_VALUES : (k + 1) * BLOCK_VALUES]
            part[...] = unpack_block(file.read(max(length, 0)), part.size)
        yield name, array.reshape(shape)


def _check_shapes(facts: PortionFacts, sums: Sums) -> None:
    """Raise `Torn` unless the arrays fit the window and the kinds."""
    _, _, columns, rows = facts.window
    expected = ((rows, columns, 3), (8, rows, columns), (rows, columns, len(facts.kinds), 3))
    found = (sums.xyz.shape, sums.replicate_y.shape, sums.kinds.shape)
    if found != expected or sums.bins.shape[1:] != (rows, columns):
        raise Torn("has arrays of another size than its window")
