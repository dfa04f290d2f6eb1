"""What the rules know of meshes and materials, measured once for all frames: a file that stays is not read again."""

from __future__ import annotations

import hashlib
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
import numpy.typing as npt

from renderer.arrays.assets import SphereAsset, TriangleAsset
from renderer.geometry.parts import composed, normal_matrix
from renderer.shot.model import Material, Object, Vector

if TYPE_CHECKING:
    from renderer.checks.gap_measure import Fit
    from renderer.geometry.inspection import MeshReport

Floats = npt.NDArray[np.float64]
Key = tuple[object, ...]

MOST_BOUNDS = 100_000  # objects whose placed bounds are kept; one that moves is another object in every frame


class Facts:
    """A memory for one check. Meshes are known by the content of their files, so that a copy costs nothing."""

    def __init__(self) -> None:
        self._contents: dict[Path, str] = {}
        self._meshes: dict[Key, MeshReport] = {}
        self._bounds: dict[int, tuple[Object, tuple[Floats, Floats]]] = {}
        self._facings: dict[Key, Floats] = {}
        self._fits: dict[Key, Fit | None] = {}
        self._indices: dict[Key, tuple[float, float]] = {}

    def content(self, path: Path) -> str:
        """A hash of a file's content, read once for each path."""
        if path not in self._contents:
            with path.open("rb") as file:
                self._contents[path] = hashlib.file_digest(file, "blake2b").hexdigest()
        return self._contents[path]

    def geometry_key(self, item: Object) -> Key:
        """What decides an object's own geometry, whatever its place."""
        if item.mesh is not None:
            return (
                "mesh",
                self.content(item.mesh),
                item.mesh.suffix.lower(),
                item.mesh_nodes,
                item.metres_per_unit,
                item.smooth,
            )
        assert item.shape is not None
        return ("shape", item.shape.kind, tuple(sorted(item.shape.sizes.items())), item.metres_per_unit)

    def mesh(self, item: Object) -> MeshReport:
        """The measured facts of an object's mesh or shape, in its own space."""
        key = self.geometry_key(item)
        if key not in self._meshes:
            self._meshes[key] = _inspect(item)
        return self._meshes[key]

    def world_bounds(self, item: Object) -> tuple[Floats, Floats]:
        """Low and high corner of an object's bounding box as placed. [m]"""
        known = self._bounds.get(id(item))
        if known is None or known[0] is not item:
            if len(self._bounds) > MOST_BOUNDS:
                self._bounds.clear()
            known = (item, _placed_bounds(self.mesh(item), item.matrices[0]))
            self._bounds[id(item)] = known
        return known[1]

    def facing(self, item: Object) -> Vector:
        """The sum of an object's faces as vectors of area along their normals, as placed: where a sheet faces. [m2]"""
        key = self.geometry_key(item)
        if key not in self._facings:
            mesh = triangles(item)
            self._facings[key] = np.zeros(3) if mesh is None else area_vector(mesh)
        x, y, z = normal_matrix(item.matrices[0]) @ self._facings[key]
        return float(x), float(y), float(z)

    def fit(self, vessel: Object, filling: Object) -> Fit | None:
        """How a filling lies in a vessel, in the vessel's metres; None where one is an analytic sphere.

        Known by both geometries and by where one stands in the other, so what moves together is measured once.
        """
        place = composed(inverse(vessel.matrices[0]), filling.matrices[0])
        key: Key = (self.geometry_key(vessel), self.geometry_key(filling), np.round(place, 9).tobytes())
        if key not in self._fits:
            outer, inner = triangles(vessel), triangles(filling)
            self._fits[key] = None if outer is None or inner is None else _fit(outer, inner, place)
        return self._fits[key]

    def index_and_abbe(self, material: Material) -> tuple[float, float]:
        """Index at the d line and Abbe number of a material; the latter is infinite without dispersion."""
        from renderer.optics.materials import nd_and_vd

        law = material.dispersion
        model, values = (law.model, law.values) if law else (None, ())
        key: Key = (material.like, material.temperature_c, material.salinity, model, values)
        if key not in self._indices:
            self._indices[key] = nd_and_vd(material.like, material.temperature_c, material.salinity, model, values)
        return self._indices[key]


def assets(item: Object) -> list[TriangleAsset | SphereAsset]:
    """An object's mesh or shape in its own space, read or built afresh."""
    if item.mesh is not None:
        from renderer.geometry.mesh_files import read_parts
        from renderer.geometry.parts import placed

        return [placed(part) for part in read_parts(item.mesh, item.mesh_nodes, item.metres_per_unit, item.smooth)]
    from renderer.geometry.shapes import build_shape

    assert item.shape is not None
    return list(build_shape(item.shape).assets)


def _placed_bounds(report: MeshReport, matrix: Floats) -> tuple[Floats, Floats]:
    sides = np.array([report.low_m, report.high_m])
    corners = np.array([[sides[i, 0], sides[j, 1], sides[k, 2]] for i in (0, 1) for j in (0, 1) for k in (0, 1)])
    placed = corners @ matrix[:, :3].T + matrix[:, 3]
    return placed.min(axis=0), placed.max(axis=0)


def _inspect(item: Object) -> MeshReport:
    from renderer.geometry.inspection import inspect_mesh

    return inspect_mesh(assets(item))


def triangles(item: Object) -> TriangleAsset | None:
    """An object's triangles as one mesh; None where any of it is an analytic sphere."""
    from renderer.geometry.inspection import joined

    every = assets(item)
    found = [asset for asset in every if isinstance(asset, TriangleAsset)]
    return joined(found) if len(found) == len(every) else None


def area_vector(mesh: TriangleAsset) -> Floats:
    """The sum of a mesh's faces as vectors of area along their normals; zero for a closed mesh. [m2]"""
    corners = mesh.vertices_m[mesh.faces]
    return np.asarray(np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]).sum(axis=0) / 2.0)


def _fit(vessel: TriangleAsset, filling: TriangleAsset, place: Floats) -> Fit:
    from renderer.checks.gap_measure import measure_fit
    from renderer.geometry.parts import Part, placed

    return measure_fit(vessel, placed(Part("", filling, place)))


def inverse(matrix: Floats) -> Floats:
    """The (3, 4) matrix that undoes another."""
    back = np.linalg.inv(matrix[:, :3])
    return np.column_stack([back, -back @ matrix[:, 3]])
