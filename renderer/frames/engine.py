"""What renders rounds. Gathered behind one door, so that frames can be tested without light."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np
import numpy.typing as npt

from renderer.shot.model import FrameShot

Guides = dict[str, npt.NDArray[Any]]


@dataclass(frozen=True)
class Engine:
    """Assembling and transport.

    `render_rows(scene, round_number, seed, row_from, row_to, sums, quantum)` adds one sample to each pixel of some
    rows and gives a dataclass of counts; `guide_rows(scene, row_from, row_to)` gives data of pixel centres by name.
    """

    kinds: tuple[str, ...]
    assemble: Callable[[FrameShot], Any]
    render_rows: Callable[..., Any]
    guide_rows: Callable[[Any, int, int], Guides]
    use_threads: Callable[[int | None], int]
    is_compiled: Callable[[], bool]


def transport_engine() -> Engine:
    """The engine of this project. Importing it imports Numba."""
    from renderer.frames.assemble import assemble
    from renderer.transport.guides import guide_rows
    from renderer.transport.layout import KINDS
    from renderer.transport.render import render_rows

    return Engine(tuple(KINDS), assemble, render_rows, guide_rows, use_threads, is_compiled)


def use_threads(threads: int | None) -> int:
    """Let kernels run on so many threads, or on all that this process may have; gives how many it is."""
    import numba

    from renderer.transport.threads import set_threads

    chosen = set_threads(threads)
    # Search trees are built by loops of Numba's own, which never take more threads than it was started with.
    numba.set_num_threads(min(chosen, int(numba.config.NUMBA_NUM_THREADS)))  # type: ignore[attr-defined]
    return chosen


def is_compiled() -> bool:
    """Whether this version's kernels are on disk already."""
    from renderer.base.cache import kernel_folder

    return any(kernel_folder().glob("**/*.nbi"))


def all_guides(engine: Engine, scene: Any, rows: int, rows_at_once: int = 128) -> Guides:
    """The guides of all rows, made a band at a time."""
    bands = [engine.guide_rows(scene, row, min(row + rows_at_once, rows)) for row in range(0, rows, rows_at_once)]
    return {name: np.concatenate([band[name] for band in bands]) for name in bands[0]}
