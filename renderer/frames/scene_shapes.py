"""Objects to meshes and places: what is used twice is loaded once, and what shines is listed triangle by triangle."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path

import numpy as np
import numpy.typing as npt

from renderer.arrays.assets import Placement, SphereAsset, TriangleAsset
from renderer.arrays.packing import pack
from renderer.base.errors import Fault, InputError
from renderer.geometry.mesh_files import is_named, load_parts
from renderer.geometry.parts import Part, composed, determinant, identity
from renderer.geometry.round_solids import sphere_mesh
from renderer.geometry.shapes import build_shape
from renderer.shot.model import Object

Floats = npt.NDArray[np.float64]
Asset = TriangleAsset | SphereAsset

LIGHT_SPHERE_ROWS = 24  # a sphere that shines is cut into 48 x 24 patches: 2,208 triangles, 0.4 % less area
BENT_SPHERE_ROWS = 128  # a sphere that is stretched, or carries a picture, is a mesh of exact normals
EVEN = 1e-9  # relative difference of a matrix's axes up to which a sphere stays a sphere
BOX = np.array([[i, j, k] for i in (0, 1) for j in (0, 1) for k in (0, 1)])


FileKey = tuple[Path, float, bool]


@dataclass
class Placing:
    """Assets and where they stand, collected object by object. `items` are all objects of the shot."""

    items: Sequence[Object]
    assets: list[Asset] = field(default_factory=list)
    placements: list[Placement] = field(default_factory=list)
    files: dict[FileKey, list[Part]] = field(default_factory=dict)
    shapes: dict[object, list[Asset]] = field(default_factory=dict)

    def add(self, object_id: int) -> None:
        """Place one object; its file is read, or its shape built, unless an earlier object has the same."""
        item = self.items[object_id]
        try:
            check_matrices(item)
            found = self.parts(item) if item.mesh is not None else self.shape(item)
        except InputError as error:
            raise InputError(*(named(fault, item.name) for fault in error.faults)) from error
        for asset, matrix in found:
            if item.role == "light" and isinstance(asset, TriangleAsset):
                asset = replace(asset)  # triangles that shine are listed by number, so they are nobody else's
            self.placements.append(Placement(self.number(asset), object_id, pack(composed(item.matrices, matrix))))

    def parts(self, item: Object) -> list[tuple[Asset, Floats]]:
        """The parts of a file that an object takes. All that any object takes of it is read at once."""
        assert item.mesh is not None
        key = file_key(item)
        if key not in self.files:
            taken = [other.mesh_nodes for other in self.items if other.mesh is not None and file_key(other) == key]
            nodes = () if () in taken else tuple(sorted({name for names in taken for name in names}))
            self.files[key] = load_parts(item.mesh, nodes, item.metres_per_unit, item.smooth)
        return [(part.asset, part.matrix) for part in self.files[key] if is_named(part.names, item.mesh_nodes)]

    def shape(self, item: Object) -> list[tuple[Asset, Floats]]:
        """The meshes or spheres of a built-in shape."""
        assert item.shape is not None
        sizes = tuple(sorted(item.shape.sizes.items()))
        key = (item.shape.kind, sizes, item.smooth, needs_mesh(item), item.role == "light")
        if key not in self.shapes:
            built = build_shape(item.shape).assets
            self.shapes[key] = [shaded(meshed(asset, item), item.smooth) for asset in built]
        return [(asset, identity()) for asset in self.shapes[key]]

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


def file_key(item: Object) -> FileKey:
    """What decides the triangles that are read from a file."""
    assert item.mesh is not None
    return item.mesh, item.metres_per_unit, item.smooth


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
