"""Triangles and spheres in their search trees, as kernels see them."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt

# columns of World.instances
OBJECT = 0  # object id
ROOT = 1  # where the search tree of its asset begins; unused where the asset lies in the tree of the world
MATRIX = 2  # first row of World.matrices
STEPS = 3  # how many rows it has there: 1 where it stands still
NORMALS = 4  # what to add to a vertex number for its row of World.normals, or NONE for flat shading
UVS = 5  # the same for World.uvs
FIRST = 6  # its first primitive
COUNT = 7  # how many primitives it has
NONE = -2147483648

SPHERES = 1 << 29  # added to the number of a pack of spheres
NOTHING = -2147483648  # a root with nothing under it


class World(NamedTuple):
    """Everything that rays can meet in one frame.

    Primitives (triangles and spheres) are numbered through all assets, each once however often its asset is placed;
    every placement is an instance. Both numbers together name an element of surface. Instances that stand still and
    are alone of their asset, or of few primitives, lie in one tree in world space; the others lie in a tree of
    instances, each of which leads to the tree of its asset in the asset's own space.

    A node has eight children. Its 64 numbers: for x, y and z the low and the high planes of the children's boxes,
    rounded outward (6 x 8), then the children as int32 (8): a node, or -1 - p for a leaf, p a pack of up to eight
    triangles, or of spheres with SPHERES added, or in the tree of instances a row of `placed`. Free places have
    boxes that are never met. The numbers at the end of a pack are int32: eight instances (-1 in an asset's own tree),
    then eight primitives; free places hold zeros and -1.
    """

    nodes: npt.NDArray[np.float32]  # (n_nodes, 64)
    packs: npt.NDArray[np.float64]  # (n_packs, 80): for x, y, z the corners a, b, c of eight triangles; numbers
    balls: npt.NDArray[np.float64]  # (n_ball_packs, 40): centre x, y, z and radius of eight spheres; numbers
    placed: npt.NDArray[np.int32]  # (n,) instances in the tree of instances
    vertices: npt.NDArray[np.float64]  # (n_vertices, 3) in the asset's space
    faces: npt.NDArray[np.int32]  # (n_primitives, 3): vertices of a triangle; row of spheres, -1, -1 of a sphere
    normals: npt.NDArray[np.float64]  # (n, 3) unit, at the vertices of the assets that have them
    uvs: npt.NDArray[np.float64]  # (n, 2) likewise
    spheres: npt.NDArray[np.float64]  # (n_spheres, 4): centre and radius in the asset's space
    instances: npt.NDArray[np.int32]  # (n_instances, 8), by the columns above
    matrices: npt.NDArray[np.float64]  # (n, 25): object to world (12), world to object (12), sign of the determinant
    roots: npt.NDArray[np.int32]  # (3,): child numbers of the tree of the world and of that of instances; has sheets
    kinds: npt.NDArray[np.int32]  # (n_objects,) kind of each object (renderer/arrays/looks.py)
    touch_m: npt.NDArray[np.float64]  # (1,): distance within which boundaries may count as one
