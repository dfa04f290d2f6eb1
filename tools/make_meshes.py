"""Makes every mesh of the shipped shots again: ``python tools/make_meshes.py [--out FOLDER] [--only WORD]``.

Needs NumPy alone. The files are the same bytes each time; a test compares them with those in scenes/.
"""

from __future__ import annotations

import argparse
from collections.abc import Callable, Mapping
from pathlib import Path

from mesh_making import glassware, town
from mesh_making.forms import box
from mesh_making.mesh import Mesh, joined
from mesh_making.writers import write

Made = Mesh | Mapping[str, Mesh]

TANK_M, TANK_WALL_M, TANK_LEVEL_M = (0.36, 0.24, 0.22), 0.005, 0.222


def window_frame() -> Mesh:
    """A casement's outer frame and one bar, 1.2 m wide and 0.9 m tall, foot at y = 0, centred in x and z."""
    return joined(
        [
            box((-0.66, 0.0, -0.035), (-0.60, 0.96, 0.035)),
            box((0.60, 0.0, -0.035), (0.66, 0.96, 0.035)),
            box((-0.664, 0.96, -0.037), (0.664, 1.02, 0.037)),
            box((-0.596, 0.001, -0.03), (0.596, 0.05, 0.03)),
            box((0.31, 0.052, -0.02), (0.345, 0.956, 0.02)),
        ]
    )


def lamp_box() -> Mesh:
    """A lamp maker's box, 9 cm cube, open to +x by a round-cornered port: five slabs and a lip."""
    wall, half = 0.004, 0.045
    return joined(
        [
            box((-half, -half, -half), (half, -half + wall, half)),
            box((-half, half - wall, -half), (half, half, half)),
            box((-half, -half + wall + 1e-4, -half), (half, half - wall - 1e-4, -half + wall)),
            box((-half, -half + wall + 1e-4, half - wall), (half, half - wall - 1e-4, half)),
            box(
                (-half, -half + wall + 1e-4, -half + wall + 1e-4),
                (-half + wall, half - wall - 1e-4, half - wall - 1e-4),
            ),
            *port(half, wall),
        ]
    )


def port(half_m: float, wall_m: float) -> list[Mesh]:
    """The front of the lamp box: four strips that leave a square hole of 26 mm for the bar."""
    hole, inside = 0.013, half_m - wall_m - 2e-4
    x0, x1 = half_m - wall_m, half_m - 1e-4
    return [
        box((x0, -inside, -inside), (x1, -hole, inside)),
        box((x0, hole, -inside), (x1, inside, inside)),
        box((x0, -hole + 1e-4, -inside), (x1, hole - 1e-4, -hole)),
        box((x0, -hole + 1e-4, hole), (x1, hole - 1e-4, inside)),
    ]


MESHES: dict[str, Callable[[], Made]] = {
    "tank_on_sill/tank.ply": lambda: glassware.open_tank(TANK_M, TANK_WALL_M),
    "tank_on_sill/water.ply": lambda: glassware.tank_filling(TANK_M, TANK_WALL_M, TANK_LEVEL_M),
    "tank_on_sill/gravel.ply": lambda: glassware.pebbles(11, (0.35, 0.21), 150),
    "tank_on_sill/goldfish.glb": lambda: glassware.goldfish(0.085),
    "tank_on_sill/window.obj": window_frame,
    "tank_on_sill/houses.glb": lambda: town.row_of_houses(5, 7),
    "basin_looking_up/bed.glb": lambda: town.slabs(8, 14, 1.0),
    "basin_looking_up/wall.ply": lambda: town.masonry(14.0, 3.2, 3),
    "basin_looking_up/houses.glb": lambda: town.row_of_houses(2, 6),
    "basin_looking_up/lamp.glb": town.lamp_post,
    "basin_looking_up/gates.glb": lambda: town.lock_gate(8.0, 3.6),
    "stick_in_bowl/bowl.ply": lambda: glassware.bowl(96),
    "stick_in_bowl/glycerine.ply": lambda: glassware.bowl_filling(0.108, 96),
    "stick_in_bowl/stick.ply": lambda: glassware.straight_bar(
        (-0.169, 0.2165, -0.006), (0.052, 0.0235, -0.012), 0.0038, 24
    ),
    "stick_in_bowl/rod.ply": lambda: glassware.straight_bar((0.159, 0.2105, 0.0345), (-0.045, 0.028, 0.02), 0.0048, 40),
    "rod_of_light/rod.ply": lambda: glassware.bent_rod(0.0115, 48),
    "rod_of_light/lamp_box.ply": lamp_box,
    "wet_setts/setts.glb": lambda: town.setts(7, 26, 44, (0.17, 0.1, 0.105)),
    "wet_setts/houses.glb": lambda: town.row_of_houses(9, 4, n_lit=2),
    "wet_setts/bollard.ply": town.bollard,
    "bow_beside_sun/houses.glb": lambda: town.row_of_houses(4, 9),
    "bow_beside_sun/lamp.glb": town.lamp_post,
    "bow_beside_sun/gates.glb": lambda: town.lock_gate(7.2, 3.0),
    "bow_over_lock/houses.glb": lambda: town.row_of_houses(4, 9),
    "bow_over_lock/lamp.glb": town.lamp_post,
    "bow_over_lock/gates.glb": lambda: town.lock_gate(7.2, 3.0),
}


def main() -> None:
    """Write the meshes, and say where each is and how large."""
    reader = argparse.ArgumentParser(description="Makes every mesh of the shipped shots again.")
    reader.add_argument("--out", type=Path, default=Path(__file__).resolve().parent.parent / "scenes")
    reader.add_argument("--only", default="", help="make only those whose path holds this word")
    chosen = reader.parse_args()
    for name, make in MESHES.items():
        if chosen.only in name:
            path = chosen.out / name
            path.parent.mkdir(parents=True, exist_ok=True)
            write(path, make())
            print(f"{name}: {path.stat().st_size / 1000:.0f} kB")


if __name__ == "__main__":
    main()
