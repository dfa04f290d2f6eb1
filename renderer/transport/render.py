"""A round over some rows of the picture, and its door from Python."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any, Protocol

import numpy as np
import numpy.typing as npt

from renderer.arrays.frame import Frame
from renderer.arrays.world import STEPS
from renderer.base.jit import kernel
from renderer.base.reference import refer
from renderer.transport.layout import (
    KINDS,
    N_SETTINGS,
    NON_FINITE,
    SAMPLES,
    SATURATED,
    SET_INDEX,
    SET_MAX_INTERFACES,
    SET_REPLICATE,
    SET_SEED,
    SET_SPLITS,
    TIME_AND_WAVELENGTH,
)
from renderer.transport.path import surroundings, trace_sample
from renderer.transport.points import pair, stream
from renderer.transport.threads import over_rows
from renderer.transport.wavelengths import draw_lanes
from renderer.transport.work import new_work

Counts = npt.NDArray[np.int64]
N_KINDS = len(KINDS)
MOST = 2.0**58  # quanta of one sample; sums of rounds hold 16 times as many
HALF_PLANE = 1 << 24  # added to rows and columns, which overscan makes negative, to name a pixel by one whole number
ROUND_PIXEL = 0xFFFFFFFFFFFFFFFF  # stands for the pixel in the key of what a round has in common


class Sums(Protocol):
    """What rounds are added to, all int64: see renderer/pictures/sums.py, which transport does not know."""

    @property
    def xyz(self) -> Counts:
        """(rows, columns, 3)."""

    @property
    def replicate_y(self) -> Counts:
        """(8, rows, columns)."""

    @property
    def kinds(self) -> Counts:
        """(rows, columns, kinds, 3)."""

    @property
    def bins(self) -> Counts:
        """(n_bins, rows, columns)."""


@dataclass(frozen=True)
class Tally:
    """What was counted while rows were rendered.

    `segments` of paths; `samples`; `non_finite` samples, not added; `saturated` values, cut; `set_overflow`: more
    objects round a point than can be held; `capped` paths cut at a cap, and `cap_lost`, the power they still carried
    in 2^-32 of a path's at the camera; `left_out`: paths to the sun or a small light through smooth interfaces from a
    rough surface; `unmatched`: boundaries left that had not been entered.
    """

    segments: int
    samples: int
    non_finite: int
    saturated: int
    set_overflow: int
    capped: int
    cap_lost: int
    left_out: int
    unmatched: int


@kernel
def quantised(value, quantum, tally):
    """A value as whole quanta, cut where it is too large."""
    scaled = value / quantum
    if abs(scaled) > MOST:
        tally[SATURATED] += 1
        scaled = math.copysign(MOST, scaled)
    return np.int64(np.rint(scaled))


@kernel
def all_finite(values):
    """Whether a sample is made of finite numbers."""
    total = 0.0
    for value in values.flat:
        total += value - value
    return total == 0.0


@kernel
def add_sample(work, quantum, replicate, row, column, xyz, replicate_y, kinds, bins):
    """Add a sample to the sums. Kinds are rounded one by one and added up, so that they make the picture to the bit."""
    for kind in range(N_KINDS):
        for c in range(3):
            whole = quantised(work.light[kind, c], quantum, work.tally)
            kinds[row, column, kind, c] += whole
            xyz[row, column, c] += whole
            if c == 1:
                replicate_y[replicate, row, column] += whole
    for b in range(bins.shape[0]):
        bins[b, row, column] += quantised(work.bins[b], quantum, work.tally)


@kernel
def render_some(frame, work, row_from, row_to, quantum, moves, xyz, replicate_y, kinds, bins):
    """One sample of each pixel of some rows, added to the sums."""
    window, matrices = frame.camera.window, frame.camera.matrices
    seed, replicate, index = frame.settings[SET_SEED], frame.settings[SET_REPLICATE], frame.settings[SET_INDEX]
    u_round, _ = pair(stream(seed, ROUND_PIXEL, replicate), index, TIME_AND_WAVELENGTH)
    low, high, _ = surroundings(frame, matrices[0, 0, 3], matrices[0, 1, 3], matrices[0, 2, 3], 0.0)
    for row in range(row_from, row_to):
        y = window[1] + row
        for column in range(window[2]):
            x = window[0] + column
            key = stream(seed, ((y + HALF_PLANE) << 32) | (x + HALF_PLANE), replicate)
            work.sample[0], work.sample[1] = key, index
            time, u_pixel = pair(key, index, TIME_AND_WAVELENGTH)
            draw_lanes(frame.spectrum, u_pixel, u_round, work.lanes)
            work.light[:, :] = 0.0
            work.bins[:] = 0.0
            trace_sample(frame, work, float(x), float(y), time, low, high, not moves)
            work.tally[SAMPLES] += 1
            if all_finite(work.light) and all_finite(work.bins):
                add_sample(work, quantum, replicate, row, column, xyz, replicate_y, kinds, bins)
            else:
                work.tally[NON_FINITE] += 1


@kernel
def render_piece(frame, work, row_from, row_to, quantum, moves, xyz, replicate_y, kinds, bins):
    """The door from Python: `render_some` with frame and work by address."""
    render_some(refer(frame), refer(work), row_from, row_to, quantum, moves, xyz, replicate_y, kinds, bins)


def settings_of(scene: Any, round_number: int, seed: int) -> np.ndarray[Any, np.dtype[np.int64]]:
    """The whole numbers that a round is rendered with. Round k uses scramble k mod 8 and index k div 8."""
    settings = np.zeros(N_SETTINGS, dtype=np.int64)
    settings[SET_SEED] = np.uint64(seed & 0xFFFFFFFFFFFFFFFF).astype(np.int64)
    settings[SET_REPLICATE], settings[SET_INDEX] = round_number & 7, round_number >> 3
    settings[SET_SPLITS], settings[SET_MAX_INTERFACES] = scene.splits, scene.max_interfaces
    return settings


def frame_of(scene: Any, round_number: int = 0, seed: int = 0) -> Frame:
    """A scene and the settings of a round as kernels take them."""
    return Frame(
        scene.world, scene.objects, scene.materials, scene.surfaces, scene.sun, scene.sky, scene.lights, scene.camera,
        scene.spectrum, settings_of(scene, round_number, seed),
    )  # fmt: skip


def render_rows(
    scene: Any, round_number: int, seed: int, row_from: int, row_to: int, sums: Sums, quantum: float
) -> Tally:
    """Add one sample to each pixel of the rows `row_from` up to `row_to` of the camera's window.

    `scene` has the named tuples of renderer/arrays; `sums` is added to in whole multiples of `quantum` [cd/m2]. What
    is added depends on scene, round, seed and pixel alone.
    """
    frame = frame_of(scene, round_number, seed)
    moves = scene.camera.matrices.shape[0] > 1 or bool((scene.world.instances[:, STEPS] > 1).any())
    tallies = []

    def piece(first: int, stop: int) -> None:
        work = new_work(sums.bins.shape[0])
        render_piece(frame, work, first, stop, quantum, moves, sums.xyz, sums.replicate_y, sums.kinds, sums.bins)
        tallies.append(work.tally)

    over_rows(row_from, row_to, piece)
    return Tally(*(int(count) for count in np.sum(tallies, axis=0)))
