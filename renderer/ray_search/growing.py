"""Trees of one kind of primitive, grown on several threads, collected into the arrays of a world."""

from __future__ import annotations

import mmap
from collections.abc import Callable, Sequence
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass, field
from typing import Any

import numpy as np
import numpy.typing as npt

from renderer.arrays.world import NOTHING, SPHERES
from renderer.ray_search.lanes import BALL_WIDTH, PACK_WIDTH
from renderer.ray_search.tree import (
    BINS,
    ROOM_ROWS,
    WIDTH,
    WORK_ROWS,
    blank_node,
    fill_packs,
    grow,
    price,
    record_primitives,
    widen,
    write_child,
)

Floats = npt.NDArray[np.float64]
Singles = npt.NDArray[np.float32]
Indices = npt.NDArray[np.int32]

BLOCK = 1 << 15  # primitives that one thread takes at a time
LARGE_PAGE = 1 << 21  # bytes
SUBTREES = 64  # parts of a large tree that threads take one by one
PACK_SHIFT = 3  # a pack has up to 2^3 primitives
TRIANGLES, BALLS, PLACED = 0, 1, 2  # kinds of leaf


def aligned(rows: int, columns: int, dtype: npt.DTypeLike) -> npt.NDArray[Any]:
    """An array (rows, columns) that begins at a cache line of 64 bytes; large ones lie in large pages.

    A search jumps about in memory: in pages of 4 KiB it would spend much of its time on looking up addresses.
    """
    size = rows * columns * np.dtype(dtype).itemsize
    if size < LARGE_PAGE or not hasattr(mmap, "MADV_HUGEPAGE"):
        raw, step = np.empty(size + 64, dtype=np.uint8), 64
    else:
        room = mmap.mmap(-1, size + LARGE_PAGE, flags=mmap.MAP_PRIVATE | mmap.MAP_ANONYMOUS)
        room.madvise(mmap.MADV_HUGEPAGE)
        raw, step = np.frombuffer(room, dtype=np.uint8), LARGE_PAGE
    shift = -raw.ctypes.data % step
    return raw[shift : shift + size].view(dtype).reshape(rows, columns)


def in_blocks(work: Callable[[int, int], object], n: int, n_threads: int) -> None:
    """Call work(begin, end) for blocks of n things, on threads where it pays."""
    blocks = [(k, min(k + BLOCK, n)) for k in range(0, n, BLOCK)]
    if n_threads == 1 or len(blocks) == 1:
        for begin, end in blocks:
            work(begin, end)
        return
    with ThreadPoolExecutor(n_threads) as pool:
        list(pool.map(lambda block: work(*block), blocks))


@dataclass(frozen=True)
class Part:
    """An asset's primitives as they enter a tree: numbers from `first`, matrix row, and instance or -1."""

    first: int
    count: int
    matrix: int
    instance: int


@dataclass(frozen=True)
class Tables:
    """What hits are looked up in, all assets behind each other. `shifts`: an asset's NORMALS and UVS columns."""

    vertices: Floats
    faces: Indices
    normals: Floats
    uvs: Floats
    spheres: Floats
    matrices: Floats
    shifts: Sequence[tuple[int, int]]


@dataclass
class Forest:
    """All trees, as they are grown one by one. Leaves are kept apart by kind, with the records they point into."""

    tables: Tables
    n_threads: int
    nodes: list[Singles] = field(default_factory=list)
    n_nodes: int = 0
    leaves: tuple[list[Indices], list[Indices], list[Indices]] = field(default_factory=lambda: ([], [], []))
    records: tuple[list[Indices], list[Indices], list[Indices]] = field(default_factory=lambda: ([], [], []))
    n_leaves: list[int] = field(default_factory=lambda: [0, 0, 0])

    def add_parts(self, kind: int, parts: Sequence[Part]) -> tuple[int, Singles]:
        """Grow a tree over assets of one kind; returns its root and its box as a record (8,)."""
        n = sum(part.count for part in parts)
        records = aligned(n, 8, np.float32)
        at = 0
        for part in parts:
            self.record(part, records, at)
            at += part.count
        return self.add(kind, records, PACK_SHIFT)

    def record(self, part: Part, records: npt.NDArray[Any], at: int) -> None:
        """Write the records of a part."""
        t, words = self.tables, records.view(np.int32)

        def block(begin: int, end: int) -> None:
            record_primitives(
                t.vertices, t.faces, t.spheres, t.matrices, part.matrix, part.first, part.instance, begin, end,
                records, words, at,
            )  # fmt: skip

        in_blocks(block, part.count, self.n_threads)

    def add(self, kind: int, records: npt.NDArray[Any], shift: int) -> tuple[int, Singles]:
        """Grow a tree over records (n, 8), leaves of up to 2^shift; returns its root and its box as a record (8,)."""
        n = len(records)
        if n == 0:
            return NOTHING, np.full(8, np.inf, dtype=np.float32)
        boxes, links = aligned(2 * n, 8, np.float32), np.empty((2 * n, 2), dtype=np.int32)
        self.grow(records, boxes, links, shift)
        # Full nodes over nodes of two leaves are the most that there can be: 4 nodes for 7 leaves.
        wide, leaves = np.empty((n * 5 // 8 + 2, 64), dtype=np.float32), np.empty((n, 2), dtype=np.int32)
        code = SPHERES if kind == BALLS else 0
        costs = np.empty((2 * n, WIDTH), dtype=np.float32)
        price(boxes, links, np.empty(2 * n, dtype=np.int32), costs)
        n_nodes, n_leaves, root = widen(
            boxes, links, costs, wide, wide.view(np.int32), self.n_nodes, leaves, self.n_leaves[kind], code,
            np.empty(2 * WIDTH, dtype=np.int64), np.empty(2 * WIDTH, dtype=np.int64), np.empty((n, 2), dtype=np.int64),
        )  # fmt: skip
        self.nodes.append(wide[:n_nodes].copy())
        self.n_nodes += n_nodes
        self.leaves[kind].append(leaves[:n_leaves].copy())
        self.records[kind].append(records.view(np.int32))
        self.n_leaves[kind] += n_leaves
        return int(root), boxes[0].copy()

    def grow(self, records: npt.NDArray[Any], boxes: npt.NDArray[Any], links: Indices, shift: int) -> None:
        """Grow the binary tree: its top on one thread, the subtrees below on several."""
        n = len(records)
        smallest = n // SUBTREES if n > BLOCK else 0
        tasks = np.zeros((16 * SUBTREES if smallest else 1, 4), dtype=np.int64)
        tasks[0, 2] = n

        def run(task: int, least: int) -> int:
            room = aligned(ROOM_ROWS, 8, np.float32)
            counts, costs = np.empty(3 * BINS, dtype=np.int64), np.empty(BINS)
            work = np.empty((WORK_ROWS, 4), dtype=np.int64)
            return int(grow(records, boxes, links, room, counts, costs, work, tasks, task, least, shift))

        n_tasks = run(0, smallest)
        with ThreadPoolExecutor(self.n_threads) as pool:
            list(pool.map(lambda task: run(task, 0), range(1, n_tasks)))

    def join(self, roots: Sequence[tuple[int, Singles]]) -> int:
        """One root over several trees."""
        found = [(root, box) for root, box in roots if root != NOTHING]
        if len(found) < 2:
            return found[0][0] if found else NOTHING
        node, boxes = np.empty((1, 64), dtype=np.float32), np.array([box for _, box in found])
        blank_node(node, node.view(np.int32), 0)
        for k, (root, _) in enumerate(found):
            write_child(node, node.view(np.int32), 0, k, boxes, k, root)
        self.nodes.append(node)
        self.n_nodes += 1
        return self.n_nodes - 1

    def packs(self, instances: Indices) -> tuple[Floats, Floats]:
        """The packs of triangles (n, 80) and of spheres (m, 40)."""
        found = []
        for kind, width in ((TRIANGLES, PACK_WIDTH), (BALLS, BALL_WIDTH)):
            packs, first = aligned(self.n_leaves[kind], width, np.float64), 0
            for leaves, words in zip(self.leaves[kind], self.records[kind], strict=True):
                self.fill(instances, words, leaves, packs, first)
                first += len(leaves)
            found.append(packs)
        return found[0], found[1]

    def fill(self, instances: Indices, words: Indices, leaves: Indices, packs: Floats, first: int) -> None:
        """Write the packs of one tree."""
        t, packs32 = self.tables, packs.view(np.int32)

        def block(begin: int, end: int) -> None:
            fill_packs(
                t.vertices, t.faces, t.spheres, t.matrices, instances, words, leaves, begin, end, packs, packs32, first
            )  # fmt: skip

        in_blocks(block, len(leaves), self.n_threads)

    def placed(self) -> Indices:
        """The instances that leaves of the tree of instances name, (n,)."""
        none = np.zeros(0, dtype=np.int32)
        parts = [
            words[leaves[:, 0], 3] for leaves, words in zip(self.leaves[PLACED], self.records[PLACED], strict=True)
        ]
        return np.concatenate([none, *parts])
