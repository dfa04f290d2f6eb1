"""Growing a binary search tree over boxes by the surface area heuristic, in bins (Wald 2007)."""

from __future__ import annotations

import math

import numpy as np

from renderer.base.jit import kernel

BINS = 16
LEAF = 4  # items that a leaf holds at most
DEEP = 48  # depth from which nodes are halved by count, so that a search's stack is never too small


@kernel
def half_area(box):
    """Half the surface of a box (6,); 0 for an empty one."""
    x, y, z = box[3] - box[0], box[4] - box[1], box[5] - box[2]
    if x < 0.0:
        return 0.0
    return x * y + y * z + z * x


@kernel
def clear(box):
    """Make a box (6,) empty."""
    for k in range(3):
        box[k], box[k + 3] = math.inf, -math.inf


@kernel
def grow(box, other):
    """Make a box (6,) hold another."""
    for k in range(3):
        box[k] = min(box[k], other[k])
        box[k + 3] = max(box[k + 3], other[k + 3])


@kernel
def bin_of(boxes, i, axis, low, scale):
    """The bin in which an item's centre falls."""
    return min(int((0.5 * (boxes[i, axis] + boxes[i, axis + 3]) - low) * scale), BINS - 1)


@kernel
def best_split(boxes, order, start, end, centres, bins, counts, right):
    """The cheapest cut: (axis or -1, bin that begins the right side)."""
    best, best_axis, best_bin = math.inf, -1, 0
    for axis in range(3):
        extent = centres[axis + 3] - centres[axis]
        if not extent > 0.0:
            continue
        scale = BINS / extent
        for b in range(BINS):
            clear(bins[b])
            counts[b] = 0
        for k in range(start, end):
            b = bin_of(boxes, order[k], axis, centres[axis], scale)
            grow(bins[b], boxes[order[k]])
            counts[b] += 1
        clear(right)
        n = 0
        for b in range(BINS - 1, 0, -1):
            grow(right, bins[b])
            n += counts[b]
            bins[b, 6] = half_area(right) * n
        clear(right)
        n = 0
        for b in range(BINS - 1):
            grow(right, bins[b])
            n += counts[b]
            cost = half_area(right) * n + bins[b + 1, 6]
            if n > 0 and n < end - start and cost < best:
                best, best_axis, best_bin = cost, axis, b + 1
    return best_axis, best_bin


@kernel
def partition(boxes, order, start, end, centres, axis, first_right):
    """Put the items of the left bins first; returns where the right ones begin."""
    scale = BINS / (centres[axis + 3] - centres[axis])
    i, j = start, end - 1
    while i <= j:
        if bin_of(boxes, order[i], axis, centres[axis], scale) < first_right:
            i += 1
        else:
            order[i], order[j] = order[j], order[i]
            j -= 1
    return i


@kernel
def grow_tree(boxes, order, base, node_boxes, links, first, work, bins, counts):
    """Grow a tree over boxes (n, 6) from node `first` on; returns the number of nodes used in all.

    `order` (n,) is left in the order of the leaves, whose item numbers begin at `base`. `work` (n nodes, 4), `bins`
    (BINS + 2, 7) and `counts` (BINS,) are room to work in.
    """
    used = first + 1
    work[0, 0], work[0, 1], work[0, 2], work[0, 3] = first, 0, boxes.shape[0], 0
    top = 1
    while top > 0:
        top -= 1
        node, start, end, depth = work[top, 0], work[top, 1], work[top, 2], work[top, 3]
        clear(node_boxes[node])
        centres = bins[BINS]
        clear(centres)
        for k in range(start, end):
            grow(node_boxes[node], boxes[order[k]])
            for axis in range(3):
                c = 0.5 * (boxes[order[k], axis] + boxes[order[k], axis + 3])
                centres[axis], centres[axis + 3] = min(centres[axis], c), max(centres[axis + 3], c)
        if end - start <= LEAF:
            links[node, 0], links[node, 1] = base + start, end - start
            continue
        axis, first_right = np.int64(-1), np.int64(0)
        if depth < DEEP:
            axis, first_right = best_split(boxes, order, start, end, centres, bins, counts, bins[BINS + 1])
        middle = (start + end) >> 1
        if axis >= 0:
            middle = partition(boxes, order, start, end, centres, axis, first_right)
        links[node, 0], links[node, 1] = used, 0
        work[top, 0], work[top, 1], work[top, 2], work[top, 3] = used + 1, middle, end, depth + 1
        work[top + 1, 0], work[top + 1, 1], work[top + 1, 2], work[top + 1, 3] = used, start, middle, depth + 1
        top += 2
        used += 2
    return used
