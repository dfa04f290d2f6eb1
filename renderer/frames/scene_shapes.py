"""Objects to meshes and places: what is used twice is loaded once, and what shines is listed triangle by triangle."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field

import numpy as np
import numpy.typing as npt

from renderer.arrays.assets import Placement, SphereAsset, TriangleAsset
from renderer.arrays.packing import pack
from renderer.base.errors import Fault, InputError
from renderer.geometry.mesh_files import load_parts
from renderer.geometry.parts import composed, determinant, identity
from renderer.geometry.round_solids import sphere_mesh
from renderer.geometry.shapes import build_shape
from renderer.shot.model import Object

Floats = npt.NDArray[np.float64]
Asset = TriangleAsset | SphereAsset

LIGHT_SPHERE_ROWS = 24  # a sphere that shines is cut into 48 x 24 patches: 2,208 triangles, 0.4 % less area
BENT_SPHERE_ROWS = 128  # a sphere that is stretched, or carries a picture, is a mesh of exact normals
EVEN = 1e-9  # relative difference of a matrix's axes up to which a sphere stays a sphere
BOX = np.array([[i, j, k] for i in (0, 1) for j in (0, 1) for k in (0, 1)])


@dataclass
class Placing:
    """Assets and where they stand, collected object by object."""

    assets: list[Asset] = field(default_factory=list)
    placements: list[Placement] = field(default_factory=list)
    known: dict[object, list[tuple[int, Floats]]] = field(default_factory=dict)

    def add(self, object_id: int, item: Object) -> None:
        """Place one object; its mesh is loaded, or its shape built, unless an earlier object has the same."""
        key = asset_key(item)
        if item.role == "light" or key not in self.known:  # a light's triangles are its own: they are listed by number
            self.known[key] = [(self.number(asset), matrix) for asset, matrix in assets_of(item)]
        for asset, matrix in self.known[key]:
            self.placements.append(Placement(asset, object_id, pack(composed(item.matrices, matrix))))

    def count(self) -> int:
        """How many primitives there are: triangles and spheres, each once however often it is placed."""
        return sum(len(a.faces) if isinstance(a, TriangleAsset) else len(a.radii_m) for a in self.assets)

    def number(self, asset: Asset) -> int:
        """The asset's place in the list; parts of a file that share triangles share it."""
        for at, other in enumerate(self.assets):
            if other is asset:
                return at
        self.assets.append(asset)
        return len(self.assets) - 1


def asset_key(item: Object) -> object:
    """What decides an object's triangles, whatever its place."""
    if item.mesh is not None:
        return "mesh", item.mesh, item.mesh_nodes, item.metres_per_unit, item.smooth
    assert item.shape is not None
    sizes = tuple(sorted(item.shape.sizes.items()))
    return "shape", item.shape.kind, sizes, item.smooth, item.role == "light", needs_mesh(item)


def assets_of(item: Object) -> Iterator[tuple[Asset, Floats]]:
    """The meshes and spheres of an object, each with the matrix that a file places it by."""
    try:
        check_matrices(item)
        if item.mesh is not None:
            for part in load_parts(item.mesh, item.mesh_nodes, item.metres_per_unit, item.smooth):
                yield part.asset, part.matrix
            return
        assert item.shape is not None
        for asset in build_shape(item.shape).assets:
            yield shaded(meshed(asset, item), item.smooth), identity()
    except InputError as error:
        raise InputError(*(named(fault, item.name) for fault in error.faults)) from error


def named(fault: Fault, name: str) -> Fault:
    """The fault with the object's name, where it says no place of its own."""
    place = f"object {name}" if not fault.where else f"{fault.where}  object {name}"
    return Fault(fault.what, place, fault.expected, fault.nearest)


def check_matrices(item: Object) -> None:
    """Refuse matrices that flatten an object, or are not finite."""
    for matrix in item.matrices:
        if not np.isfinite(matrix).all():
            raise InputError(Fault("the transform is not finite", "", "finite numbers"))
        longest = float(np.abs(matrix[:, :3]).max())
        if abs(determinant(matrix)) <= 1e-12 * longest**3:
            raise InputError(Fault("the transform flattens the object to nothing", "", "a scale that is not 0"))


def needs_mesh(item: Object) -> bool:
    """Whether a sphere must be a mesh: it shines, carries a picture, or is stretched."""
    pictured = item.surface is not None and item.surface.picture is not None
    return item.role in ("light", "pane") or pictured or not all(even(matrix) for matrix in item.matrices)


def even(matrix: Floats) -> bool:
    """Whether a matrix turns and scales alike in all directions."""
    axes = matrix[:, :3].T @ matrix[:, :3]
    return bool(np.abs(axes - np.eye(3) * axes[0, 0]).max() <= EVEN * abs(axes[0, 0]))


def meshed(asset: Asset, item: Object) -> Asset:
    """An analytic sphere as a mesh where it must be one."""
    if isinstance(asset, TriangleAsset) or not needs_mesh(item):
        return asset
    return sphere_mesh(float(asset.radii_m[0]), LIGHT_SPHERE_ROWS if item.role == "light" else BENT_SPHERE_ROWS)


def shaded(asset: Asset, smooth: bool) -> Asset:
    """The asset without its normals when the object is not smooth."""
    if isinstance(asset, SphereAsset) or smooth:
        return asset
    return TriangleAsset(asset.vertices_m, asset.faces, pack(np.zeros((0, 3))), asset.uvs)


def bounds(placing: Placing) -> tuple[Floats, Floats]:
    """Low and high corner of all that is placed, over the whole shutter, (3,) each; zeros for an empty shot. [m]"""
    low, high = np.full(3, np.inf), np.full(3, -np.inf)
    boxes = [asset_bounds(asset) for asset in placing.assets]
    for place in placing.placements:
        corners = np.where(BOX, boxes[place.asset][1], boxes[place.asset][0])
        for matrix in place.matrices:
            world = corners @ matrix[:, :3].T + matrix[:, 3]
            low, high = np.minimum(low, world.min(axis=0)), np.maximum(high, world.max(axis=0))
    return (low, high) if np.isfinite(low).all() else (np.zeros(3), np.zeros(3))


def asset_bounds(asset: Asset) -> tuple[Floats, Floats]:
    """Low and high corner of one asset in its own space."""
    if isinstance(asset, SphereAsset):
        radii = asset.radii_m[:, None]
        return (asset.centres_m - radii).min(axis=0), (asset.centres_m + radii).max(axis=0)
    return asset.vertices_m.min(axis=0), asset.vertices_m.max(axis=0)
