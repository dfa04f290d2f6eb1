"""Clear things and what they hold: a tank, a bowl, a bar that guides light, a prism; and a goldfish of painted wood."""

from __future__ import annotations

import math
from random import Random

import numpy as np

from mesh_making.forms import ball, box, tube
from mesh_making.mesh import Floats, Mesh, joined, mesh


def open_tank(size_m: tuple[float, float, float], wall_m: float) -> Mesh:
    """An open glass tank on y = 0, centred in x and z, in one piece: outside, inside, floor and rim."""
    hx, height, hz = size_m[0] / 2.0, size_m[1], size_m[2] / 2.0
    ix, iz = hx - wall_m, hz - wall_m
    rings = [(hx, 0.0, hz), (hx, height, hz), (ix, height, iz), (ix, wall_m, iz)]
    corners = [(sx * x, y, sz * z) for x, y, z in rings for sx, sz in ((-1, 1), (1, 1), (1, -1), (-1, -1))]
    faces = [(3, 2, 1, 0), (12, 13, 14, 15)]
    for ring in range(3):
        faces += [
            (4 * ring + k, 4 * ring + (k + 1) % 4, 4 * ring + 4 + (k + 1) % 4, 4 * ring + 4 + k) for k in range(4)
        ]
    return mesh(corners, faces)


def tank_filling(size_m: tuple[float, float, float], wall_m: float, level_m: float) -> Mesh:
    """The water in that tank up to `level_m`: it reaches half-way into the glass, so that no air is left between."""
    hx, hz, half = size_m[0] / 2.0 - wall_m / 2.0, size_m[2] / 2.0 - wall_m / 2.0, wall_m / 2.0
    return box((-hx, half, -hz), (hx, level_m, hz))


def arc(
    centre: tuple[float, float], radius_m: float, from_deg: float, to_deg: float, n: int
) -> list[tuple[float, float]]:
    """Points of a circular arc in (radius, height), both ends in."""
    steps = [math.radians(from_deg + (to_deg - from_deg) * k / (n - 1)) for k in range(n)]
    return [(centre[0] + radius_m * math.cos(a), centre[1] + radius_m * math.sin(a)) for a in steps]


BOWL_OUTER_M, BOWL_INNER_M, BOWL_FOOT_M = 0.11, 0.1045, 0.034  # radii
BOWL_INNER_RAISED_M = 0.0025  # the inside's centre lies higher, so the bottom is thicker than the rim
BOWL_RIM_DEG = 22.0
BOWL_CENTRE_M = math.sqrt(BOWL_OUTER_M**2 - BOWL_FOOT_M**2)  # over the table


def bowl(segments: int) -> Mesh:
    """A round glass bowl on y = 0: a sphere cut off above, with a rounded rim, a heavy bottom and a flat foot."""
    start = -math.degrees(math.acos(BOWL_FOOT_M / BOWL_OUTER_M))
    outside = arc((0.0, BOWL_CENTRE_M), BOWL_OUTER_M, start, BOWL_RIM_DEG, 40)
    inside = arc((0.0, BOWL_CENTRE_M + BOWL_INNER_RAISED_M), BOWL_INNER_M, BOWL_RIM_DEG, -88.0, 46)
    rim = half_round(outside[-1], inside[0], 8)
    bottom = BOWL_CENTRE_M + BOWL_INNER_RAISED_M - BOWL_INNER_M
    return turned_smoothly([(0.0, 0.0), *outside, *rim, *inside, (0.0, bottom)], segments)


def bowl_filling(level_m: float, segments: int) -> Mesh:
    """The liquid in that bowl up to `level_m` over the table; it reaches 1.5 mm into the glass."""
    radius, centre = BOWL_INNER_M + 0.0015, BOWL_CENTRE_M + BOWL_INNER_RAISED_M
    end = math.degrees(math.asin((level_m - centre) / radius))
    side = arc((0.0, centre), radius, -88.0, end, 44)
    return turned_smoothly([(0.0, centre - radius), *side, (0.0, level_m)], segments)


def half_round(start: tuple[float, float], end: tuple[float, float], n: int) -> list[tuple[float, float]]:
    """The points between two ends of a half circle that bulges to the left of the way from one to the other, turned
    over: the rounded lip between an outside and an inside."""
    middle = ((start[0] + end[0]) / 2.0, (start[1] + end[1]) / 2.0)
    radius = math.dist(start, end) / 2.0
    from_deg = math.degrees(math.atan2(start[1] - middle[1], start[0] - middle[0]))
    return arc(middle, radius, from_deg, from_deg + 180.0, n + 2)[1:-1]


def turned_smoothly(profile: list[tuple[float, float]], segments: int) -> Mesh:
    """A solid of revolution about y (see `turned_form`) with normals.

    They are smooth along its curves and sharp where the profile turns by more than 30 degrees: there the corners are
    doubled, so that each side has its own.
    """
    points = np.array(profile)
    steps = np.diff(points, axis=0)
    across = np.stack([steps[:, 1], -steps[:, 0]], axis=1)
    across /= np.linalg.norm(across, axis=1, keepdims=True)
    vertices: list[Floats] = []
    normals: list[Floats] = []
    faces: list[tuple[int, int, int]] = []
    angles = 2.0 * np.pi * np.arange(segments) / segments
    turn = np.stack([np.cos(angles), -np.sin(angles)], axis=1)

    rings: dict[tuple[float, ...], int] = {}

    def ring(i_point: int, normal: Floats) -> int:
        """The number of the first vertex of the ring of one profile point with one normal; added when it is new."""
        key = (i_point, *normal.tolist())
        if key not in rings:
            rings[key] = len(vertices) * segments
            r, y = points[i_point]
            vertices.append(np.stack([r * turn[:, 0], np.full(segments, y), r * turn[:, 1]], axis=1))
            outward = [normal[0] * turn[:, 0], np.full(segments, normal[1]), normal[0] * turn[:, 1]]
            normals.append(np.stack(outward, axis=1))
        return rings[key]

    for i in range(len(steps)):
        low = ring(i, end_normal(across, points, i, i - 1))
        high = ring(i + 1, end_normal(across, points, i, i + 1))
        for k in range(segments):
            after = (k + 1) % segments
            if points[i, 0] > 0.0:
                faces.append((low + k, low + after, high + after if points[i + 1, 0] > 0.0 else high + k))
            if points[i + 1, 0] > 0.0:
                faces.append((low + k, high + after, high + k))
    return Mesh(np.concatenate(vertices), np.array(faces, dtype=np.int32), np.concatenate(normals))


def end_normal(across: Floats, points: Floats, i_step: int, i_other: int) -> Floats:
    """The normal of one step of a profile at the end that it shares with another step."""
    shared = points[max(i_step, i_other)]
    if shared[0] == 0.0:
        return np.array([0.0, math.copysign(1.0, across[i_step, 1])])
    if not 0 <= i_other < len(across):
        return across[i_step]
    if float(across[i_step] @ across[i_other]) < math.cos(math.radians(30.0)):
        return across[i_step]
    both = across[i_step] + across[i_other]
    return both / np.linalg.norm(both)


def straight_bar(
    start: tuple[float, float, float], end: tuple[float, float, float], radius_m: float, segments: int
) -> Mesh:
    """A round bar between two points."""
    return tube(np.linspace(np.array(start), np.array(end), 3), radius_m, segments)


def bent_rod(radius_m: float, segments: int) -> Mesh:
    """A clear bar that leaves a lamp box to +x, swings through a wide S and comes out towards +z, lying at y = 0.

    Its tightest bend has an inner radius of nearly five bar radii, which loses little light at an index of 1.49.
    """
    straight_in = np.linspace([-0.22, 0.0, -0.06], [-0.10, 0.0, -0.06], 7)
    first = quarter((-0.10, 0.03), 0.09, -90.0, 0.0, 26)
    second = quarter((0.09, 0.03), 0.10, 180.0, 90.0, 26)
    third = quarter((0.09, 0.22), 0.09, -90.0, -14.0, 22)
    flat = np.concatenate([straight_in, first[1:], second[1:], third[1:]])
    return tube(flat, radius_m, segments)


def quarter(centre: tuple[float, float], radius_m: float, from_deg: float, to_deg: float, n: int) -> Floats:
    """Points of an arc in the plane y = 0, angles from +x towards +z."""
    angles = np.radians(np.linspace(from_deg, to_deg, n))
    return np.stack([centre[0] + radius_m * np.cos(angles), np.zeros(n), centre[1] + radius_m * np.sin(angles)], axis=1)


def pebbles(seed: int, size_m: tuple[float, float], count: int) -> Mesh:
    """Rounded pebbles strewn on y = 0 over a rectangle about the origin."""
    random = Random(seed)
    stones = []
    for _ in range(count):
        radius = 0.007 + 0.006 * random.random()
        stone = ball(radius, 6, 9).stretched(1.0 + 0.4 * random.random(), 0.55 + 0.2 * random.random(), 1.0)
        stone = stone.turned("y", 360.0 * random.random())
        x = (random.random() - 0.5) * (size_m[0] - 0.03)
        z = (random.random() - 0.5) * (size_m[1] - 0.03)
        stones.append(stone.moved(x, 0.003 + 0.006 * random.random(), z))
    return joined(stones)


def goldfish(length_m: float) -> dict[str, Mesh]:
    """A goldfish cut from wood, swimming to +x about the origin: body, fins and eyes."""
    body = ball(0.5, 14, 20).stretched(0.66, 0.44, 0.24).stretched(length_m, length_m, length_m)
    tail = fin([(-0.28, 0.0), (-0.56, 0.24), (-0.5, 0.02), (-0.6, -0.2)], 0.018).stretched(length_m, length_m, length_m)
    back = fin([(0.12, 0.2), (-0.04, 0.34), (-0.2, 0.26), (-0.2, 0.14)], 0.018).stretched(length_m, length_m, length_m)
    belly = fin([(0.02, -0.18), (-0.12, -0.15), (-0.16, -0.29)], 0.018).stretched(length_m, length_m, length_m)
    eye = ball(0.026 * length_m, 8, 12)
    eyes = [eye.moved(0.2 * length_m, 0.05 * length_m, side * 0.09 * length_m) for side in (1.0, -1.0)]
    return {"body": body, "fins": joined([tail, back, belly]), "eyes": joined(eyes)}


def fin(outline: list[tuple[float, float]], thickness: float) -> Mesh:
    """A flat piece in the x-y plane with the given outline, anticlockwise or not, of even thickness in z."""
    area = sum(a[0] * b[1] - b[0] * a[1] for a, b in zip(outline, outline[1:] + outline[:1], strict=True))
    points = outline if area > 0.0 else outline[::-1]
    n = len(points)
    corners = [(x, y, thickness / 2.0) for x, y in points] + [(x, y, -thickness / 2.0) for x, y in points]
    faces = [tuple(range(n)), tuple(range(2 * n - 1, n - 1, -1))]
    sides = [(k, k + n, (k + 1) % n + n, (k + 1) % n) for k in range(n)]
    return mesh(corners, [*faces, *sides])
