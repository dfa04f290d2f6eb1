"""Triangles and spheres in their search trees, as kernels see them."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt

# columns of World.instances
OBJECT = 0  # object id
ROOT = 1  # node at which the search tree of its asset begins
MATRIX = 2  # first row of World.matrices
STEPS = 3  # how many rows it has there: 1 where it stands still
NORMALS = 4  # what to add to a vertex number for its row of World.normals, or NONE for flat shading
UVS = 5  # the same for World.uvs
FIRST = 6  # its first primitive
COUNT = 7  # how many primitives it has
NONE = -2147483648


class World(NamedTuple):
    """Everything that rays can meet in one frame.

    Primitives (triangles and spheres) are numbered through all assets, each once however often its asset is placed;
    every placement is an instance. Both numbers together name an element of surface. Instances that stand still and
    are alone of their asset lie in one tree in world space; the others lie in a tree of instances, each of which
    leads to the tree of its asset in the asset's own space.
    """

    boxes: npt.NDArray[np.float64]  # (n_nodes, 6): low x, y, z, high x, y, z, rounded outward
    links: npt.NDArray[np.int32]  # (n_nodes, 2): left child (the right one follows it) and 0; leaf: first item, count
    items: npt.NDArray[np.int32]  # (n_items, 2): instance (-1 in an asset's own tree) and primitive, leaf by leaf
    corners: npt.NDArray[np.float64]  # (n_items, 9): a triangle's corners; a sphere's centre, radius and zeros
    vertices: npt.NDArray[np.float64]  # (n_vertices, 3) in the asset's space
    faces: npt.NDArray[np.int32]  # (n_primitives, 3): vertices of a triangle; row of spheres, -1, -1 of a sphere
    normals: npt.NDArray[np.float64]  # (n, 3) unit, at the vertices of the assets that have them
    uvs: npt.NDArray[np.float64]  # (n, 2) likewise
    spheres: npt.NDArray[np.float64]  # (n_spheres, 4): centre and radius in the asset's space
    instances: npt.NDArray[np.int32]  # (n_instances, 8), by the columns above
    matrices: npt.NDArray[np.float64]  # (n, 25): object to world (12), world to object (12), sign of the determinant
    roots: npt.NDArray[np.int32]  # (3,): root of the tree in world space, of that of instances (-1: none), has sheets
    kinds: npt.NDArray[np.int32]  # (n_objects,) kind of each object (renderer/arrays/looks.py)
    touch_m: npt.NDArray[np.float64]  # (1,): distance within which boundaries may count as one
