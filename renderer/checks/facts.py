"""What the rules know of meshes and materials, measured once for all frames: a file that stays is not read again."""

from __future__ import annotations

import hashlib
from pathlib import Path
from typing import TYPE_CHECKING

from renderer.shot.model import Material, Object

if TYPE_CHECKING:
    from renderer.geometry.inspection import MeshReport

Key = tuple[object, ...]


class Facts:
    """A memory for one check. Meshes are known by the content of their files, so that a copy costs nothing."""

    def __init__(self) -> None:
        self._contents: dict[Path, str] = {}
        self._meshes: dict[Key, MeshReport] = {}
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

    def index_and_abbe(self, material: Material) -> tuple[float, float]:
        """Index at the d line and Abbe number of a material; the latter is infinite without dispersion."""
        from renderer.optics.materials import nd_and_vd

        law = material.dispersion
        model, values = (law.model, law.values) if law else (None, ())
        key: Key = (material.like, material.temperature_c, material.salinity, model, values)
        if key not in self._indices:
            self._indices[key] = nd_and_vd(material.like, material.temperature_c, material.salinity, model, values)
        return self._indices[key]


def _inspect(item: Object) -> MeshReport:
    """An object's mesh or shape, measured afresh."""
    from renderer.geometry.inspection import inspect_mesh

    if item.mesh is not None:
        from renderer.geometry.mesh_files import read_parts
        from renderer.geometry.parts import placed

        parts = read_parts(item.mesh, item.mesh_nodes, item.metres_per_unit, item.smooth)
        return inspect_mesh([placed(part) for part in parts])
    from renderer.geometry.shapes import build_shape

    assert item.shape is not None
    return inspect_mesh(build_shape(item.shape).assets)
