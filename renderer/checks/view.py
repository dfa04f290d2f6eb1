"""One frame as the rules see it: the shot, and what many rules ask of it, worked out once."""

from __future__ import annotations

from functools import cached_property

import numpy as np
import numpy.typing as npt

from renderer.checks import sphere
from renderer.shot.model import Axes, BowToCheck, FrameShot, Vector

Floats = npt.NDArray[np.float64]

AROUND_SUN = (3, 4)  # orders whose circles lie around the sun, not around the point opposite


class FrameView:
    """`shot` is one frame; everything else follows from it and is worked out on first use."""

    def __init__(self, shot: FrameShot) -> None:
        self.shot = shot

    @property
    def frame(self) -> int:
        """The frame's number."""
        return self.shot.frame

    @property
    def axes(self) -> Axes:
        """The shot's up, north and east."""
        return self.shot.axes

    @property
    def bows(self) -> tuple[BowToCheck, ...]:
        """The bows that the shot states."""
        return self.shot.bows

    @cached_property
    def sun(self) -> Vector | None:
        """Unit direction to the sun's apparent place; None without a sun."""
        return self.shot.sun.direction if self.shot.sun else None

    @cached_property
    def antisolar(self) -> Vector | None:
        """Unit direction to the antisolar point; None without a sun."""
        return sphere.opposite(self.sun) if self.sun else None

    def centre_for(self, order: int) -> Vector | None:
        """Where a bow of `order` has its centre under this sun; None without a sun."""
        return self.sun if order in AROUND_SUN else self.antisolar

    @cached_property
    def matrix(self) -> Floats:
        """Camera to world at mid-shutter, (3, 4)."""
        from renderer.geometry.camera import middle_matrix

        return middle_matrix(self.shot.camera)

    @cached_property
    def position(self) -> Vector:
        """The camera's position at mid-shutter. [m]"""
        return _vector(self.matrix[:, 3])

    @cached_property
    def forward(self) -> Vector:
        """Unit direction of the camera's axis."""
        return sphere.unit(_vector(-self.matrix[:, 2]))

    @cached_property
    def half_diagonal_deg(self) -> float:
        """Angle from the camera's axis to the frame's farthest corner. [degrees]"""
        from renderer.geometry.camera import pixel_direction

        columns, rows = self.shot.camera.pixels
        corners = [(0.0, 0.0), (columns, 0.0), (0.0, rows), (columns, rows)]
        found = pixel_direction(self.shot.camera, corners)
        return max(sphere.angle_deg(self.forward, _vector(direction)) for direction in found)

    def pixels(self, directions: Floats) -> Floats:
        """Where unit directions (n, 3) meet the full frame, (n, 2) from the top left; not-a-number behind the lens."""
        from renderer.geometry.camera import project_directions

        return project_directions(self.shot.camera, directions)

    def pixel(self, direction: Vector) -> tuple[float, float] | None:
        """Where one direction meets the full frame; None behind the lens."""
        x, y = self.pixels(np.array([direction], dtype=np.float64))[0]
        return (float(x), float(y)) if np.isfinite(x) and np.isfinite(y) else None

    def inside(self, pixels: Floats) -> npt.NDArray[np.bool_]:
        """Which of (n, 2) pixels lie within the full frame."""
        columns, rows = self.shot.camera.pixels
        with np.errstate(invalid="ignore"):
            within = (pixels >= 0.0) & (pixels <= np.array([columns, rows]))
        return np.asarray(within.all(axis=1), dtype=np.bool_)

    def in_frame(self, direction: Vector) -> bool:
        """Whether a direction lies within the full frame."""
        return bool(self.inside(self.pixels(np.array([direction], dtype=np.float64)))[0])

    def circle(self, centre: Vector, radius_deg: float, clocks_deg: Floats) -> Floats:
        """Unit directions (n, 3) of the circle around `centre`, by clock angle from its top."""
        top = np.array(sphere.on_circle(centre, 90.0, 0.0, self.axes))
        right = np.array(sphere.on_circle(centre, 90.0, 90.0, self.axes))
        clocks, radius = np.radians(clocks_deg)[:, None], np.radians(radius_deg)
        outward = np.cos(clocks) * top + np.sin(clocks) * right
        return np.asarray(np.cos(radius) * np.array(centre) + np.sin(radius) * outward, dtype=np.float64)


def _vector(values: Floats) -> Vector:
    return float(values[0]), float(values[1]), float(values[2])
