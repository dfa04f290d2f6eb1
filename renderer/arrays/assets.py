"""What geometry hands to ray search: shared meshes and drops, and where each is placed."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

Floats = npt.NDArray[np.float64]
Indices = npt.NDArray[np.int32]


@dataclass(frozen=True)
class TriangleAsset:
    """A mesh in its own space, in metres.

    vertices_m (n, 3); faces (m, 3) int32, wound so that the geometric normal points outward (counter-clockwise seen
    from outside); vertex_normals (n, 3) unit, or (0, 3) for flat shading; uvs (n, 2), or (0, 2).
    """

    vertices_m: Floats
    faces: Indices
    vertex_normals: Floats
    uvs: Floats


@dataclass(frozen=True)
class SphereAsset:
    """Analytic spheres in their own space: centres_m (n, 3), radii_m (n,)."""

    centres_m: Floats
    radii_m: Floats


@dataclass(frozen=True)
class Placement:
    """One asset put into the world as one object.

    matrices (n_steps, 3, 4): object to world, rows x, y, z; one step where it stands still, else evenly spaced over
    the shutter and interpolated linearly, entry by entry. A matrix that mirrors turns the normals with it, so that
    outward stays outward.
    """

    asset: int
    object_id: int
    matrices: Floats
