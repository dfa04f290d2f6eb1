"""Growing search trees by the surface area heuristic, in bins, and widening them to eight children a node.

Wald, "On fast Construction of SAH-based Bounding Volume Hierarchies", 2007; Wald, Benthin & Boulos, "Getting Rid of
Packets", 2008. A primitive is a record of eight float32: low x, y, z of its box, its number, minus high x, y, z, its
instance; so one minimum of eight numbers unites two boxes. Node numbers depend on the counts alone, so the tree is the
same for any number of threads.
"""

from __future__ import annotations

import math

import numpy as np

from renderer.arrays.world import NOTHING
from renderer.base.jit import kernel
from renderer.ray_search.lanes import empty_row, swap_rows, unite, unite_middle
from renderer.ray_search.places import carry

BINS = 16
FEW, FEW_BINS = 48, 8  # nodes of few records take fewer bins: there are many of them, and clearing bins costs most
DEEP = 40  # depth from which nodes are halved by count, so that a search's stack is never too small
MIDDLE, BOX, RIGHT = 3 * BINS, 3 * BINS + 1, 3 * BINS + 2  # rows of the room to work in, behind the bins
ROOM_ROWS = 3 * BINS + 3
WIDTH = 8  # children of a wide node
WORK_ROWS = 128
DOWN = 1.9e-7  # relative: three roundings to float32: that of the number, and two where a machine cannot fuse
TINY = 1e-37


@kernel
def half_area(boxes, i):
    """Half the surface of box i."""
    x, y, z = -boxes[i, 4] - boxes[i, 0], -boxes[i, 5] - boxes[i, 1], -boxes[i, 6] - boxes[i, 2]
    return x * y + y * z + z * x


@kernel
def bin_of(records, k, axis, low, scale):
    """The bin in which the middle of a record falls."""
    return np.int64((records[k, axis] - records[k, axis + 4] - low) * scale)


@kernel
def bin_scale(room, axis, n_bins):
    """Lowest middle, and bins a unit, along an axis; 0 where all middles are the same."""
    low = room[MIDDLE, axis]
    extent = -room[MIDDLE, axis + 4] - low
    # A hair less than all bins, so that the last middle falls into the last.
    return low, np.float32(n_bins * 0.9999) / extent if extent > np.float32(0.0) else np.float32(0.0)


@kernel
def fill_bins(records, start, end, room, counts, n_bins):
    """Put records into bins along all three axes."""
    for axis in range(3):
        for b in range(axis * BINS, axis * BINS + n_bins):
            empty_row(room, b)
            counts[b] = 0
    (x0, xs), (y0, ys), (z0, zs) = bin_scale(room, 0, n_bins), bin_scale(room, 1, n_bins), bin_scale(room, 2, n_bins)
    for k in range(start, end):
        x = bin_of(records, k, 0, x0, xs)
        y = bin_of(records, k, 1, y0, ys) + BINS
        z = bin_of(records, k, 2, z0, zs) + 2 * BINS
        unite(room, x, records, k)
        unite(room, y, records, k)
        unite(room, z, records, k)
        counts[x] += 1
        counts[y] += 1
        counts[z] += 1


@kernel
def packs_of(n, shift):
    """Leaves of 2^shift primitives that n of them fill."""
    return (n + (1 << shift) - 1) >> shift


@kernel
def best_split(room, counts, costs, total, shift, n_bins):
    """The cheapest cut: (axis or -1, bin that begins the right side, its count on the left)."""
    best, best_axis, best_bin, best_left = math.inf, np.int64(-1), np.int64(0), np.int64(0)
    for axis in range(3):
        first = axis * BINS
        empty_row(room, RIGHT)
        n = np.int64(0)
        for b in range(n_bins - 1, 0, -1):
            if counts[first + b] > 0:
                unite(room, RIGHT, room, first + b)
                n += counts[first + b]
            costs[b] = half_area(room, RIGHT) * packs_of(n, shift) if n > 0 else 0.0
        empty_row(room, RIGHT)
        n = np.int64(0)
        for b in range(1, n_bins):
            if counts[first + b - 1] > 0:
                unite(room, RIGHT, room, first + b - 1)
                n += counts[first + b - 1]
            if n == 0 or n == total:
                continue
            cost = half_area(room, RIGHT) * packs_of(n, shift) + costs[b]
            if cost < best:
                best, best_axis, best_bin, best_left = cost, axis, b, n
    return best_axis, best_bin, best_left


@kernel
def partition(records, start, end, room, axis, first_right, n_bins):
    """Put the records of the left bins first."""
    low, scale = bin_scale(room, axis, n_bins)
    i, j = start, end - 1
    while i <= j:
        if bin_of(records, i, axis, low, scale) < first_right:
            i += 1
        elif bin_of(records, j, axis, low, scale) >= first_right:
            j -= 1
        else:
            swap_rows(records, i, j)
            i += 1
            j -= 1


@kernel
def measure(records, start, end, room):
    """The box of records, and that of their middles, into the room."""
    empty_row(room, MIDDLE)
    empty_row(room, BOX)
    for k in range(start, end):
        unite(room, BOX, records, k)
        unite_middle(room, MIDDLE, records, k)


@kernel
def grow(records, boxes, links, room, counts, costs, work, tasks, first_task, smallest, shift):
    """Grow the binary tree under one task (node, start, end, depth), a row of `tasks`.

    Node i over n records has its children at i + 1 and i + 2 n_left. `links` (node, 2): start and end of a leaf's
    records, or -1 and the right child. Subtrees of up to `smallest` records become tasks behind those there are;
    leaves have up to 2^shift records. Returns the number of tasks then.
    """
    n_tasks = first_task + 1
    for c in range(4):
        work[0, c] = tasks[first_task, c]
    top = 1
    while top > 0:
        top -= 1
        node, start, end, depth = work[top, 0], work[top, 1], work[top, 2], work[top, 3]
        n = end - start
        if n <= smallest and n_tasks < tasks.shape[0]:
            tasks[n_tasks, 0], tasks[n_tasks, 1], tasks[n_tasks, 2], tasks[n_tasks, 3] = node, start, end, depth
            n_tasks += 1
            continue
        measure(records, start, end, room)
        empty_row(boxes, node)
        unite(boxes, node, room, BOX)
        if n <= 1 << shift:
            links[node, 0], links[node, 1] = start, end
            continue
        axis, first_right, left = np.int64(-1), np.int64(0), np.int64(0)
        n_bins = BINS if n > FEW else FEW_BINS
        if depth < DEEP:
            fill_bins(records, start, end, room, counts, n_bins)
            axis, first_right, left = best_split(room, counts, costs, n, shift, n_bins)
        if axis >= 0:
            partition(records, start, end, room, axis, first_right, n_bins)
        else:
            left = n >> 1
        right = node + 2 * left
        links[node, 0], links[node, 1] = -1, right
        work[top, 0], work[top, 1], work[top, 2], work[top, 3] = right, start + left, end, depth + 1
        top += 1
        work[top, 0], work[top, 1], work[top, 2], work[top, 3] = node + 1, start, start + left, depth + 1
        top += 1
    return n_tasks


@kernel
def cheapest_cut(costs, left, right, n):
    """How many of n children two subtrees together should give the left one, and the cost of that."""
    best, share = np.float32(math.inf), np.int64(1)
    for k in range(max(1, n - WIDTH), min(n - 1, WIDTH) + 1):
        cost = costs[left, k - 1] + costs[right, n - k - 1]
        if cost < best:
            best, share = cost, k
    return share, best


@kernel
def price(boxes, links, order, costs):
    """Costs (node, n): the least area of all wide nodes below a node that hangs on its parents by n children at most.

    Ylitie, Karras & Laine, "Efficient Incoherent Ray Traversal on GPUs Through Compressed Wide BVHs", HPG 2017, 3.1;
    the leaves are given. `order` is room for the nodes' numbers, parents first.
    """
    order[0] = 0
    n_nodes, k = np.int64(1), np.int64(0)
    while k < n_nodes:
        node = order[k]
        k += 1
        if links[node, 0] < 0:
            order[n_nodes], order[n_nodes + 1] = node + 1, links[node, 1]
            n_nodes += 2
    for k in range(n_nodes - 1, -1, -1):
        node = order[k]
        if links[node, 0] >= 0:
            for n in range(WIDTH):
                costs[node, n] = np.float32(0.0)
            continue
        left, right = node + 1, np.int64(links[node, 1])
        _, whole = cheapest_cut(costs, left, right, WIDTH)
        costs[node, 0] = half_area(boxes, node) + whole
        for n in range(2, WIDTH + 1):
            _, cost = cheapest_cut(costs, left, right, n)
            costs[node, n - 1] = min(cost, costs[node, n - 2])


@kernel
def halve(links, costs, node, share, children, shares, at):
    """Write a node's two children, and how many wide children each may become, before place `at`."""
    left, right = node + 1, np.int64(links[node, 1])
    k, _ = cheapest_cut(costs, left, right, share)
    children[at - 1], shares[at - 1] = right, share - k
    children[at - 2], shares[at - 2] = left, k


@kernel
def open_children(links, costs, children, shares):
    """Put what should hang on the node children[0] to the front of `children`; gives how many there are.

    Those still to be halved wait at the end; `shares` is room of the same size.
    """
    n, at, end = np.int64(0), children.shape[0] - 2, children.shape[0]
    halve(links, costs, children[0], WIDTH, children, shares, end)
    while at < end:
        node, share = children[at], shares[at]
        at += 1
        while share > 1 and costs[node, share - 1] == costs[node, share - 2]:
            share -= 1
        if share == 1:
            children[n] = node
            n += 1
        else:
            halve(links, costs, node, share, children, shares, at)
            at -= 2
    return n


@kernel
def write_child(nodes, links32, node, k, boxes, child, number):
    """Write one child into its place of a wide node."""
    for axis in range(3):
        nodes[node, 16 * axis + k] = boxes[child, axis]
        nodes[node, 16 * axis + 8 + k] = -boxes[child, axis + 4]
    links32[node, 48 + k] = number


@kernel
def blank_node(nodes, links32, node):
    """A wide node with no children: its boxes are never met."""
    for axis in range(3):
        for k in range(8):
            nodes[node, 16 * axis + k] = math.inf
            nodes[node, 16 * axis + 8 + k] = -math.inf
    for k in range(8):
        links32[node, 48 + k] = NOTHING
        nodes[node, 56 + k] = 0.0


@kernel
def widen(boxes, links, costs, nodes, links32, first_node, leaves, first_leaf, code, children, shares, work):
    """Write the tree of nodes with eight children from node `first_node` on, and its leaves (start, end) from
    `first_leaf` on; their numbers as children have `code` added. Returns nodes and leaves used in all, and the root.
    """
    if links[0, 0] >= 0:
        leaves[0, 0], leaves[0, 1] = links[0, 0], links[0, 1]
        return np.int64(0), np.int64(1), -1 - (first_leaf + code)
    n_nodes, n_leaves = np.int64(1), np.int64(0)
    work[0, 0], work[0, 1] = 0, 0
    top = 1
    while top > 0:
        top -= 1
        children[0] = work[top, 0]
        node = work[top, 1]
        n = open_children(links, costs, children, shares)
        blank_node(nodes, links32, node)
        for k in range(n):
            child = children[k]
            if links[child, 0] >= 0:
                leaves[n_leaves, 0], leaves[n_leaves, 1] = links[child, 0], links[child, 1]
                number = -1 - (first_leaf + n_leaves + code)
                n_leaves += 1
            else:
                number = first_node + n_nodes
                work[top, 0], work[top, 1] = child, n_nodes
                n_nodes += 1
                top += 1
            write_child(nodes, links32, node, k, boxes, child, number)
    return n_nodes, n_leaves, first_node


@kernel
def lower(x):
    """A number as float32, never larger."""
    return np.float32(x - (abs(x) * DOWN + TINY))


@kernel
def matrix_row(matrices, m):
    """A matrix to the world, as twelve numbers."""
    return (
        matrices[m, 0], matrices[m, 1], matrices[m, 2], matrices[m, 3], matrices[m, 4], matrices[m, 5],
        matrices[m, 6], matrices[m, 7], matrices[m, 8], matrices[m, 9], matrices[m, 10], matrices[m, 11],
    )  # fmt: skip


@kernel
def placed_sphere(spheres, matrices, m, k):
    """Centre and radius of a sphere through a matrix that scales evenly."""
    w = matrix_row(matrices, m)
    x, y, z = carry(w, spheres[k, 0], spheres[k, 1], spheres[k, 2])
    scale = math.sqrt(w[0] * w[0] + w[4] * w[4] + w[8] * w[8])
    return x, y, z, spheres[k, 3] * scale


@kernel
def record_primitives(vertices, faces, spheres, matrices, m, first, instance, begin, end, records, records32, at):
    """Records of the primitives first + begin to first + end of an asset, through matrix row m, from row `at` on."""
    w = matrix_row(matrices, m)
    for k in range(begin, end):
        p, r = first + k, at + k
        if faces[p, 1] < 0:
            x, y, z, radius = placed_sphere(spheres, matrices, m, faces[p, 0])
            x0, y0, z0, x1, y1, z1 = x - radius, y - radius, z - radius, x + radius, y + radius, z + radius
        else:
            a, b, c = faces[p, 0], faces[p, 1], faces[p, 2]
            ax, ay, az = carry(w, vertices[a, 0], vertices[a, 1], vertices[a, 2])
            bx, by, bz = carry(w, vertices[b, 0], vertices[b, 1], vertices[b, 2])
            cx, cy, cz = carry(w, vertices[c, 0], vertices[c, 1], vertices[c, 2])
            x0, y0, z0 = min(min(ax, bx), cx), min(min(ay, by), cy), min(min(az, bz), cz)
            x1, y1, z1 = max(max(ax, bx), cx), max(max(ay, by), cy), max(max(az, bz), cz)
        records[r, 0], records[r, 1], records[r, 2] = lower(x0), lower(y0), lower(z0)
        records[r, 4], records[r, 5], records[r, 6] = lower(-x1), lower(-y1), lower(-z1)
        records32[r, 3], records32[r, 7] = p, instance


@kernel
def fill_packs(vertices, faces, spheres, matrices, instances, records32, leaves, begin, end, packs, packs32, first):
    """Write leaves `begin` to `end` into packs of triangles, or of spheres, from pack `first` on."""
    n_reals = packs.shape[1] - 8
    for leaf in range(begin, end):
        start, n = leaves[leaf, 0], leaves[leaf, 1] - leaves[leaf, 0]
        pack = first + leaf
        for k in range(8):
            if k >= n:
                packs32[pack, 2 * n_reals + k], packs32[pack, 2 * n_reals + 8 + k] = -1, -1
                for c in range(k, n_reals, 8):
                    packs[pack, c] = 0.0
                continue
            p, instance = records32[start + k, 3], records32[start + k, 7]
            packs32[pack, 2 * n_reals + k], packs32[pack, 2 * n_reals + 8 + k] = instance, p
            m = instances[instance, 2] if instance >= 0 else 0
            if faces[p, 1] < 0:
                x, y, z, radius = placed_sphere(spheres, matrices, m, faces[p, 0])
                packs[pack, k], packs[pack, k + 8], packs[pack, k + 16], packs[pack, k + 24] = x, y, z, radius
                continue
            w = matrix_row(matrices, m)
            for c in range(3):
                v = faces[p, c]
                x, y, z = carry(w, vertices[v, 0], vertices[v, 1], vertices[v, 2])
                packs[pack, 8 * c + k], packs[pack, 24 + 8 * c + k], packs[pack, 48 + 8 * c + k] = x, y, z
