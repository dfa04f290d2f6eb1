"""Lock Nine, the invented canal town: a row of gabled houses, the lock's gates, lamps, bollards and quays."""

from __future__ import annotations

import math
from random import Random

import numpy as np

from mesh_making.forms import ball, block, box, gabled, roof, tube, turned_form
from mesh_making.mesh import Mesh, joined

WALLS = ("brick", "ochre", "white", "blue")


def window(x_m: float, y_m: float, width_m: float, height_m: float) -> dict[str, Mesh]:
    """A sash window on the plane z = 0, its sill at y: frame and bars in front, dark glazing behind."""
    f, z0, z1 = 0.07, -0.05, 0.05
    left, right, top = x_m - width_m / 2.0, x_m + width_m / 2.0, y_m + height_m
    frame = [
        box((left - f, y_m, z0), (left, top, z1)),
        box((right, y_m, z0), (right + f, top, z1)),
        box((left - f - 0.004, top, z0), (right + f + 0.004, top + f, z1 + 0.004)),
        box((left - f - 0.05, y_m - f, z0), (right + f + 0.05, y_m, z1 + 0.05)),
        box((x_m - 0.02, y_m, z0), (x_m + 0.02, top, 0.035)),
        box((left, y_m + 0.5 * height_m - 0.02, z0), (right, y_m + 0.5 * height_m + 0.02, 0.03)),
    ]
    return {"frames": joined(frame), "glazing": box((left, y_m, z0), (right, top, 0.015))}


def house(random: Random, width_m: float, wall: str) -> dict[str, list[Mesh]]:
    """One house, gable to +z, centred in x: parts by look."""
    eaves = 6.2 + 1.8 * random.random()
    ridge = eaves + width_m * (0.42 + 0.1 * random.random())
    depth = 9.0
    parts: dict[str, list[Mesh]] = {
        f"walls_{wall}": [gabled(width_m, depth, eaves, ridge)],
        "roofs": [roof(width_m, depth, eaves, ridge, 0.18)],
    }
    chimney_x = width_m * (0.18 if random.random() < 0.5 else -0.18)
    parts["chimneys"] = [box((chimney_x - 0.35, eaves, -3.2), (chimney_x + 0.35, ridge + 0.9, -2.4))]
    pots = turned_form([(0.0, 0.0), (0.13, 0.0), (0.1, 0.45), (0.0, 0.45)], 10)
    parts["roofs"] += [pots.moved(chimney_x + dx, ridge + 0.9, -2.8) for dx in (-0.18, 0.18)]
    columns = [-0.3 * width_m, 0.0, 0.3 * width_m] if width_m > 5.2 else [-0.24 * width_m, 0.24 * width_m]
    parts["frames"], parts["glazing"], parts["doors"] = [], [], []
    door_column = random.randrange(len(columns))
    for floor in range(2):
        for column, x in enumerate(columns):
            if floor == 0 and column == door_column:
                parts["doors"].append(box((x - 0.5, 0.12, -0.05), (x + 0.5, 2.25, 0.04)))
                parts["frames"].append(box((x - 0.62, 2.25, -0.05), (x + 0.62, 2.4, 0.12)))
                parts["chimneys"].append(box((x - 0.7, 0.0, -0.05), (x + 0.7, 0.12, 0.35)))
                continue
            for look, part in window(x, 0.95 + 2.75 * floor, 0.95, 1.5).items():
                parts[look].append(part)
    for look, part in window(0.0, 0.95 + 2.75 * 2.0, 0.7, 1.1).items():
        parts[look].append(part)
    return parts


def row_of_houses(seed: int, n_houses: int, n_lit: int = 0) -> dict[str, Mesh]:
    """A terrace along x, fronts at z = 0 facing +z, centred on x = 0, standing on y = 0; parts by look.

    The glazing of the `n_lit` windows nearest to the middle of the pavement is a part of its own, `lit`.
    """
    random = Random(seed)
    widths = [4.4 + 2.4 * random.random() for _ in range(n_houses)]
    x = -0.5 * sum(widths)
    together: dict[str, list[Mesh]] = {}
    for k, width in enumerate(widths):
        set_back = -0.35 * random.random()
        for look, parts in house(random, width, WALLS[(k + seed) % len(WALLS)]).items():
            together.setdefault(look, []).extend(part.moved(x + width / 2.0, 0.0, set_back) for part in parts)
        x += width
    if n_lit:
        together["glazing"].sort(key=lambda pane: float(np.linalg.norm(pane.vertices.mean(axis=0)[:2])))
        together["lit"], together["glazing"] = together["glazing"][:n_lit], together["glazing"][n_lit:]
    return {look: joined(parts) for look, parts in together.items() if parts}


def lamp_post() -> dict[str, Mesh]:
    """A quay lamp 3.6 m tall on y = 0: iron, and the lantern's lamp as a ball of its own."""
    shaft = [(0.0, 0.0), (0.16, 0.0), (0.16, 0.12), (0.09, 0.2), (0.06, 0.7), (0.045, 3.0), (0.05, 3.05)]
    iron = turned_form([*shaft, (0.14, 3.1), (0.14, 3.13), (0.0, 3.13)], 16)
    cap = turned_form([(0.0, 3.5), (0.21, 3.5), (0.05, 3.64), (0.0, 3.7)], 16)
    bars = [
        tube(np.array([[0.12 * c, 3.1, 0.12 * s], [0.18 * c, 3.52, 0.18 * s]]), 0.012, 6)
        for c, s in ((math.cos(a), math.sin(a)) for a in (0.4, 0.4 + math.pi / 2, 0.4 + math.pi, 0.4 + 1.5 * math.pi))
    ]
    plain = [Mesh(part.vertices, part.faces) for part in (iron, cap, *bars)]
    return {"iron": joined(plain), "lamp": Mesh(ball(0.09, 8, 12).vertices, ball(0.09, 8, 12).faces).moved(y_m=3.3)}


def bollard() -> Mesh:
    """A mooring bollard, 0.5 m tall on y = 0."""
    profile = [(0.0, 0.0), (0.17, 0.0), (0.17, 0.06), (0.11, 0.1), (0.1, 0.34), (0.16, 0.4), (0.17, 0.45), (0.12, 0.5)]
    return turned_form([*profile, (0.0, 0.52)], 20)


def lock_gate(width_m: float, height_m: float) -> dict[str, Mesh]:
    """A pair of mitred lock gates across x, closed, pointing to -z, bottom at y = 0: planks, and balance beams."""
    half, sweep = width_m / 2.0, 0.17 * width_m
    angle = math.degrees(math.atan2(sweep, half))
    length = math.hypot(half, sweep) - 0.012
    n_planks = 9
    step = length / n_planks
    planks = [box((k * step + 0.006, 0.0, -0.09), ((k + 1) * step - 0.006, height_m, 0.09)) for k in range(n_planks)]
    rails = [box((0.0, y, 0.09), (length, y + 0.22, 0.17)) for y in (0.25, 0.55 * height_m, height_m - 0.3)]
    beam = box((-0.85 * length, height_m + 0.25, -0.16), (length, height_m + 0.55, 0.16))
    posts = [
        box((0.02, height_m, -0.1), (0.26, height_m + 0.25, 0.1)),
        box((length - 0.2, height_m, -0.09), (length, height_m + 0.25, 0.09)),
    ]
    left = {"planks": joined(planks + rails + posts), "beams": beam}
    gates: dict[str, Mesh] = {}
    for look, part in left.items():
        one = part.turned("y", angle).moved(x_m=-half)
        other = Mesh(one.vertices * np.array([-1.0, 1.0, 1.0]), one.faces[:, ::-1].copy())
        gates[look] = joined([one, other])
    return gates


def setts(seed: int, columns: int, rows: int, size_m: tuple[float, float, float]) -> dict[str, Mesh]:
    """Paving in running bond on y = 0, first row at z = 0 and on to -z, centred in x; each sett lies a little askew.

    Two lots: `dry`, left of a line that wanders with z as the edge of a shower's lee does, and `wet`, right of it.
    """
    random = Random(seed)
    joint = 0.011
    lots: dict[str, list[Mesh]] = {"dry": [], "wet": []}
    for row in range(rows):
        z = -(row + 0.5) * (size_m[2] + joint)
        edge = -0.15 + 0.22 * math.sin(1.3 * z) + 0.1 * math.sin(4.1 * z + 1.0)
        for column in range(columns):
            x = (column - 0.5 * columns + (0.5 if row % 2 else 0.0)) * (size_m[0] + joint)
            width = size_m[0] - 0.012 * random.random()
            length = size_m[2] - 0.008 * random.random()
            one = block((width, size_m[1], length), 0.007 + 0.004 * random.random(), 0.003 + 0.004 * random.random())
            one = one.turned("x", 1.6 * (random.random() - 0.5)).turned("z", 1.6 * (random.random() - 0.5))
            one = one.turned("y", 2.4 * (random.random() - 0.5)).moved(x, 0.006 * (random.random() - 0.5), z)
            lots["wet" if x + 0.12 * (random.random() - 0.5) > edge else "dry"].append(one)
    return {name: joined(lot) for name, lot in lots.items()}


def slabs(columns: int, rows: int, size_m: float) -> dict[str, Mesh]:
    """Square slabs on y = 0 about the origin, in two lots like a draughtboard, with joints of 12 mm."""
    lots: dict[str, list[Mesh]] = {"pale": [], "dark": []}
    for row in range(rows):
        for column in range(columns):
            x, z = ((column - (columns - 1) / 2.0) * size_m, (row - (rows - 1) / 2.0) * size_m)
            lots["pale" if (row + column) % 2 else "dark"].append(
                block((size_m - 0.012, 0.2, size_m - 0.012), 0.012).moved(x, 0.0, z)
            )
    return {name: joined(lot) for name, lot in lots.items()}


def masonry(width_m: float, height_m: float, seed: int) -> Mesh:
    """A wall of coursed stone facing +z, centred in x, from y = 0 up; its face lies within 2 cm of z = 0."""
    random = Random(seed)
    laid = []
    course, y = 0.32, 0.0
    while y < height_m - 1e-6:
        top = min(y + course, height_m)
        x = -width_m / 2.0 - (0.35 if round(y / course) % 2 else 0.0)
        while x < width_m / 2.0:
            end = min(x + 0.6 + 0.25 * random.random(), width_m / 2.0)
            if end - max(x, -width_m / 2.0) > 0.06:
                face = 0.02 * random.random()
                laid.append(box((max(x, -width_m / 2.0) + 0.006, y + 0.006, -0.3), (end - 0.006, top - 0.006, face)))
            x = end
        y = top
    return joined(laid)
