"""How a filling lies in its vessel: with air between them, touching, or inside the glass; by samples of its surface."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from renderer.arrays.assets import TriangleAsset

Floats = npt.NDArray[np.float64]

SAMPLES = 600  # points on the filling: a share of 1 % is 6 of them
FEWEST_SAMPLES = 120
PAIRS = 120_000_000  # of sample and triangle: some seconds
REACH = 0.02  # of the filling's diagonal: air thicker than this is meant
TOUCHING = 1e-6  # of the same: nearer than this is touching
BATCH = 400_000  # pairs of sample and triangle looked at together


@dataclass(frozen=True)
class Fit:
    """Shares of the filling's surface, in [0, 1]: with a thin film of air before the glass, touching it, or inside it.

    `film_m` is the film's thickness, (median, largest), in the vessel's own metres.
    """

    film_share: float
    touching_share: float
    inside_share: float
    film_m: tuple[float, float]

    @property
    def near_share(self) -> float:
        """How much of the filling's surface has anything to do with the glass."""
        return self.film_share + self.touching_share + self.inside_share


def measure_fit(vessel: TriangleAsset, filling: TriangleAsset) -> Fit:
    """How `filling` lies in `vessel`, both closed and in one space.

    From each sample a ray goes outward: glass whose front it meets within `REACH` has air before it; glass whose back
    it meets first holds the sample.
    """
    count = max(FEWEST_SAMPLES, min(SAMPLES, PAIRS // len(vessel.faces)))
    points, outward = surface_samples(filling, count)
    diagonal = float(np.linalg.norm(np.ptp(filling.vertices_m, axis=0)))
    reach, touching = REACH * diagonal, TOUCHING * diagonal
    corners = vessel.vertices_m[vessel.faces]
    distance, front = first_faces(points - touching * outward, outward, corners)
    distance = distance - touching
    touches = np.abs(distance) <= touching
    film = front & (distance > touching) & (distance <= reach)
    inside = ~front & (distance > touching) & np.isfinite(distance)
    films = distance[film]
    return Fit(
        film_share=float(film.mean()),
        touching_share=float(touches.mean()),
        inside_share=float(inside.mean()),
        film_m=(float(np.median(films)), float(films.max())) if len(films) else (0.0, 0.0),
    )


def surface_samples(mesh: TriangleAsset, count: int) -> tuple[Floats, Floats]:
    """`count` points spread evenly over a mesh's area and the outward unit normal of each, (n, 3) both.

    Always the same ones: within a triangle they follow the two-dimensional sequence of the plastic number.
    """
    corners = mesh.vertices_m[mesh.faces]
    normals = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    areas = np.linalg.norm(normals, axis=1)
    share = np.cumsum(areas) / areas.sum()
    index = np.arange(count)
    face = np.minimum(np.searchsorted(share, (index + 0.5) / count), len(areas) - 1)
    u, v = (0.5 + 0.7548776662466927 * index) % 1.0, (0.5 + 0.5698402909980532 * index) % 1.0
    root = np.sqrt(u)
    a, b, c = 1.0 - root, root * (1.0 - v), root * v
    chosen = corners[face]
    points = a[:, None] * chosen[:, 0] + b[:, None] * chosen[:, 1] + c[:, None] * chosen[:, 2]
    return points, normals[face] / areas[face][:, None]


def first_faces(starts: Floats, directions: Floats, corners: Floats) -> tuple[Floats, npt.NDArray[np.bool_]]:
    """For each ray (n, 3) the distance to the first of the triangles (m, 3, 3), and whether its front is met.

    Infinity where there is none. Moeller and Trumbore, J. Graphics Tools 2(1), 1997, for all pairs in batches.
    """
    distance = np.full(len(starts), np.inf)
    front = np.zeros(len(starts), dtype=np.bool_)
    if not len(corners):
        return distance, front
    base, edge_1, edge_2 = corners[:, 0], corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]
    rows = max(1, BATCH // len(corners))
    for row in range(0, len(starts), rows):
        block = slice(row, row + rows)
        start, direction = starts[block, None], directions[block, None]
        across = np.cross(direction, edge_2[None])
        determinant = (across * edge_1).sum(axis=2)
        offset = start - base
        with np.errstate(divide="ignore", invalid="ignore"):
            u = (offset * across).sum(axis=2) / determinant
            turned = np.cross(offset, edge_1[None])
            v = (direction * turned).sum(axis=2) / determinant
            t = (edge_2 * turned).sum(axis=2) / determinant
            hit = (u >= -1e-9) & (v >= -1e-9) & (u + v <= 1.0 + 1e-9) & (t >= 0.0)
        t = np.where(hit, t, np.inf)
        first = np.argmin(t, axis=1)
        index = np.arange(len(first))
        distance[block] = t[index, first]
        front[block] = determinant[index, first] > 0.0
    return distance, front
