"""Built-in solids of revolution: cylinder, lens, the sphere as a mesh. Vertices lie on the true surface, normals are
exact."""

from __future__ import annotations

import numpy as np

from renderer.arrays.assets import TriangleAsset
from renderer.geometry.circles import arc, circle
from renderer.geometry.positions import Floats, Indices
from renderer.geometry.sheets import asset

SHARP = 1e-9  # share of a lens's diameter below which its rim has no thickness


class Lathe:
    """Bands turned round the y axis, collected into one mesh.

    Every band has vertices of its own, so that its normals end at its edges; edges of bands that meet repeat the same
    numbers, so the mesh is watertight to the bit.
    """

    def __init__(self, segments: int) -> None:
        self.segments = segments
        self.cosine, self.sine = circle(segments)
        self.vertices: list[Floats] = []
        self.normals: list[Floats] = []
        self.uvs: list[Floats] = []
        self.faces: list[Indices] = []
        self.count = 0

    def band(self, profile: Floats, normals: Floats) -> None:
        """Turn a profile (k, 2) of (radius, y) with normals (k, 2), listed so that outside is on its right hand when
        seen with the axis to the left: upward on an outer wall. A radius of 0 makes one vertex a segment, at one place.
        """
        k, n = len(profile), self.segments + 1  # the seam is repeated, for texture coordinates
        turn_x, turn_z = np.append(self.cosine, 1.0), np.append(-self.sine, 0.0)
        spread = [
            np.stack([rows[:, :1] * turn_x, np.repeat(rows[:, 1:], n, axis=1), rows[:, :1] * turn_z], axis=2)
            for rows in (profile, normals)
        ]
        u = np.tile(np.arange(n) / self.segments, k)
        v = np.repeat(np.arange(k) / max(k - 1, 1), n)
        a = (np.arange(k - 1)[:, None] * n + np.arange(self.segments)).reshape(-1) + self.count
        lower, upper = np.column_stack([a, a + 1, a + n + 1]), np.column_stack([a, a + n + 1, a + n])
        self.faces += [lower[np.repeat(profile[:-1, 0] > 0.0, self.segments)]]
        self.faces += [upper[np.repeat(profile[1:, 0] > 0.0, self.segments)]]
        self.vertices.append(spread[0].reshape(-1, 3))
        self.normals.append(spread[1].reshape(-1, 3))
        self.uvs.append(np.column_stack([u, v]))
        self.count += k * n

    def level(self, inner: float, outer: float, y: float, up: bool) -> None:
        """A flat ring or disc at height y, facing up or down."""
        radii = (outer, inner) if up else (inner, outer)
        facing = 1.0 if up else -1.0
        self.band(np.array([[r, y] for r in radii]), np.array([[0.0, facing]] * 2))

    def mesh(self) -> TriangleAsset:
        """All bands as one mesh."""
        return asset(
            np.concatenate(self.vertices),
            np.concatenate(self.faces).astype(np.int32),
            np.concatenate(self.normals),
            np.concatenate(self.uvs),
        )


def cylinder(radius_m: float, height_m: float, segments: int) -> TriangleAsset:
    """A cylinder along y about the origin."""
    lathe, y = Lathe(segments), height_m / 2.0
    lathe.level(0.0, radius_m, -y, up=False)
    lathe.band(np.array([[radius_m, -y], [radius_m, y]]), np.array([[1.0, 0.0]] * 2))
    lathe.level(0.0, radius_m, y, up=True)
    return lathe.mesh()


def sphere_mesh(radius_m: float, rows: int) -> TriangleAsset:
    """A sphere of `rows` bands by latitude and twice as many segments; u is longitude, v latitude, poles on y."""
    lathe = Lathe(2 * rows)
    lathe.band(*arc(radius_m, -90.0, 90.0, rows))
    return lathe.mesh()


def cap(radius_m: float, half_diameter_m: float, rings: int) -> tuple[Floats, Floats]:
    """(rings + 1, 2) (distance from the axis, sag) of a spherical face, from the axis out; normals (outward, forward).

    Sag is how far the face stands back from its middle: positive on a face that bulges. 0 as a radius is flat.
    """
    if radius_m == 0.0:
        across = half_diameter_m * np.arange(rings + 1) / rings
        return np.column_stack([across, np.zeros(rings + 1)]), np.tile([0.0, 1.0], (rings + 1, 1))
    across = half_diameter_m * np.arange(rings + 1) / rings
    height = np.sqrt(np.maximum(radius_m**2 - across**2, 0.0))
    sag = np.copysign(across**2 / (abs(radius_m) + height), radius_m)
    return np.column_stack([across, sag]), np.column_stack([across / radius_m, height / abs(radius_m)])


def edge_thickness_m(radius_front_m: float, radius_back_m: float, thickness_m: float, diameter_m: float) -> float:
    """Thickness of a lens at its rim."""
    half = diameter_m / 2.0
    return thickness_m - sum(float(cap(radius, half, 1)[0][-1, 1]) for radius in (radius_front_m, radius_back_m))


def lens(
    radius_front_m: float, radius_back_m: float, thickness_m: float, diameter_m: float, rings: int, segments: int
) -> TriangleAsset:
    """A lens along z, front towards +z, its middle at the origin. Radii are positive where a face bulges, negative
    where it is hollow, 0 where it is flat. `thickness_m` is that of the middle.
    """
    half = diameter_m / 2.0
    front, front_normals = cap(radius_front_m, half, rings)
    back, back_normals = cap(radius_back_m, half, rings)
    lathe = Lathe(segments)  # along y first
    lower = np.column_stack([back[:, 0], back[:, 1] - thickness_m / 2.0])
    upper = np.column_stack([front[:, 0], thickness_m / 2.0 - front[:, 1]])
    lathe.band(lower, back_normals * np.array([1.0, -1.0]))
    if edge_thickness_m(radius_front_m, radius_back_m, thickness_m, diameter_m) > SHARP * diameter_m:
        lathe.band(np.array([lower[-1], upper[-1]]), np.array([[1.0, 0.0]] * 2))
    else:
        upper[-1] = lower[-1]
    lathe.band(upper[::-1], front_normals[::-1])
    mesh = lathe.mesh()
    turn = [0, 2, 1]  # y to z: swapping two axes mirrors, so x is mirrored too
    mirror = np.array([-1.0, 1.0, 1.0])
    return asset(mesh.vertices_m[:, turn] * mirror, mesh.faces, mesh.vertex_normals[:, turn] * mirror, mesh.uvs)
