"""An engine without light: sample values are a hash of seed, round and pixel, so that every sum can be foretold."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

import numpy as np

from renderer.frames.engine import Engine
from renderer.shot.model import Axes, Camera, FrameShot, Settings, Sky

KINDS = ("sky", "direct", "reflected", "transmitted")
COLUMNS, ROWS = 13, 9


@dataclass(frozen=True)
class Counts:
    """What a call counted."""

    segments: int
    samples: int
    non_finite: int
    saturated: int
    capped: int
    cap_lost: int
    left_out: int


@dataclass(frozen=True)
class PlainScene:
    """As much of a scene as frames look at."""

    columns: int
    rows: int
    notes: tuple[str, ...] = ("the setts have no wet look",)
    reference_radiance: float = 1000.0
    object_names: tuple[str, ...] = ("tank", "sill")
    material_names: tuple[str, ...] = ("air", "water")


def shot(frame: int = 1001, **changes: Any) -> FrameShot:
    """A frame of a small window that overlaps the frame's left edge."""
    camera = Camera(
        matrices=np.eye(3, 4)[None], focal_length_mm=28.0, sensor_mm=(36.0, 20.25), pixels=(16, 12), pixel_aspect=1.0,
        window=(-2, 1, COLUMNS, ROWS), distortion=(0.0,) * 5, f_number=0.0, focus_distance_m=1.0, shutter_deg=180.0,
        polariser_deg=None, exposure_stops=0.0, iso=None, exposure_auto=False, white_balance_k=6504.0,
    )  # fmt: skip
    base = FrameShot(
        title="Lock Nine test", source=Path("lock.shot.toml"), variant="", frame=frame, fps=24.0,
        axes=Axes((0.0, 1.0, 0.0), (0.0, 0.0, -1.0), (1.0, 0.0, 0.0)), camera=camera, sun=None,
        sky=Sky("none", 0.0, (1.0, 1.0, 1.0), None, "rec709", 1.0, 0.0), objects=(), bows=(), sign_offs=(),
        settings=Settings(2, 256, 16, 0, ()), output_space="acescg", fingerprint="ab" * 32,
    )  # fmt: skip
    return replace(base, **changes)


def values(seed: int, round_number: int, rows: np.ndarray, columns: int) -> np.ndarray:
    """(rows, columns, 3): some light [cd/m2], different in every sample, by a 64-bit mixer."""
    key = np.uint64(((seed ^ (round_number << 40)) * 0x9E3779B97F4A7C15) & (2**64 - 1))
    place = rows.astype(np.uint64)[:, None, None] * np.uint64(4096) + np.arange(columns, dtype=np.uint64)[None, :, None]
    z = (place * np.uint64(4) + np.arange(3, dtype=np.uint64)) ^ key
    for shift, factor in ((30, 0xBF58476D1CE4E5B9), (27, 0x94D049BB133111EB), (31, 1)):
        z = (z ^ (z >> np.uint64(shift))) * np.uint64(factor)
    return 500.0 + 300.0 * (z >> np.uint64(11)) / 2.0**53


def plain_engine(
    scene_notes: tuple[str, ...] = (), bad_round: int = -1, calls: list[tuple[int, int]] | None = None
) -> Engine:
    """The engine. `bad_round` has a sample that is not finite; `calls` collects (round, first row) of every call."""

    def render_rows(
        scene: PlainScene, number: int, seed: int, row_from: int, row_to: int, sums: Any, quantum: float
    ) -> Counts:
        if calls is not None:
            calls.append((number, row_from))
        whole = np.rint(values(seed, number, np.arange(row_from, row_to), scene.columns) / quantum).astype(np.int64)
        sums.xyz[row_from:row_to] += whole
        sums.replicate_y[number & 7, row_from:row_to] += whole[..., 1]
        for k in range(len(KINDS)):
            sums.kinds[row_from:row_to, :, k] += whole // len(KINDS)
        for b in range(len(sums.bins)):
            sums.bins[b, row_from:row_to] += whole[..., 0] // (b + 1)
        n = (row_to - row_from) * scene.columns
        return Counts(3 * n, n, int(number == bad_round and row_from == 0), 0, n, 5 * n, 2 * n)

    def guide_rows(scene: PlainScene, row_from: int, row_to: int) -> dict[str, np.ndarray]:
        rows = row_to - row_from
        depth = np.full((rows, scene.columns), 2.5)
        depth[:, 0] = np.inf
        ids = np.zeros((rows, scene.columns), dtype=np.int32)
        ids[:, 0] = -1
        return {
            "depth": depth,
            "normal": np.tile([0.0, 0.6, 0.8], (rows, scene.columns, 1)),
            "object_id": ids,
            "material_id": ids,
            "surfaces_crossed": np.full((rows, scene.columns), 4, dtype=np.int32),
            "antisolar_angle": np.full((rows, scene.columns), 42.5),
        }

    def assemble(given: FrameShot) -> PlainScene:
        return PlainScene(given.camera.window[2], given.camera.window[3], notes=scene_notes)

    return Engine(KINDS, assemble, render_rows, guide_rows, lambda threads: threads or 1, lambda: True)


def foretold(seed: int, rounds: range, quantum: float) -> np.ndarray:
    """The sum of the window over rounds, by the values alone."""
    total = np.zeros((ROWS, COLUMNS, 3), dtype=np.int64)
    for number in rounds:
        total += np.rint(values(seed, number, np.arange(ROWS), COLUMNS) / quantum).astype(np.int64)
    return total
