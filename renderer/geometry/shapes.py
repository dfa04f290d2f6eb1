"""Built-in shapes by name: from `shot.model.Shape` to meshes and spheres, with what fills a vessel beside it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from renderer.arrays.assets import SphereAsset, TriangleAsset
from renderer.arrays.packing import pack
from renderer.base.errors import Fault, InputError, nearest_name
from renderer.geometry import flat_solids, round_solids, sheets, vessels
from renderer.shot.model import Shape

Asset = TriangleAsset | SphereAsset
Sizes = dict[str, Any]

SEGMENTS = 128  # of a circle, where the shot does not say
LENS_RINGS = 64
MAX_SEGMENTS = 20_000
MAX_CELLS = 4_000_000  # of a water surface


@dataclass(frozen=True)
class BuiltShape:
    """A shape's meshes; `filling` is what stands in a vessel, empty for anything else."""

    assets: tuple[Asset, ...]
    filling: tuple[TriangleAsset, ...] = ()


def build_shape(shape: Shape) -> BuiltShape:
    """The shape, in metres, in its own axes. Raises `InputError` for sizes that make no shape.

    Curved shapes bring exact normals; whether they are used is the object's `smooth`. Kinds "tank_filling" and
    "bowl_filling" are the filling of the vessel with the same sizes.
    """
    if shape.kind not in BUILDERS:
        raise InputError(
            Fault(f'no shape named "{shape.kind}"', "", ", ".join(sorted(BUILDERS)), nearest_name(shape.kind, BUILDERS))
        )
    sizes = dict(shape.sizes)
    try:
        return BUILDERS[shape.kind](sizes)
    except (KeyError, TypeError) as error:
        raise InputError(Fault(f"the {shape.kind} lacks a size, or has one of the wrong kind ({error})")) from error


def refuse(kind: str, what: str, expected: str) -> InputError:
    """The error about a shape's sizes."""
    return InputError(Fault(f"the {kind} {what}", "", expected))


def length(kind: str, sizes: Sizes, name: str, default: float | None = None) -> float:
    """A length above 0 [m]."""
    value = float(sizes[name] if default is None else sizes.get(name, default))
    if not 0.0 < value < 1e7:
        raise refuse(kind, f"has a {name} of {value:g} m", "more than 0")
    return value


def lengths(kind: str, sizes: Sizes, name: str, n: int) -> tuple[float, ...]:
    """`n` lengths above 0 [m]."""
    values = tuple(float(v) for v in sizes[name])
    if len(values) != n or not all(0.0 < v < 1e7 for v in values):
        raise refuse(kind, f"has a {name} of {list(values)} m", f"{n} lengths of more than 0")
    return values


def segments_of(kind: str, sizes: Sizes) -> int:
    """Segments of a circle."""
    n = int(sizes.get("segments") or SEGMENTS)
    if not 3 <= n <= MAX_SEGMENTS:
        raise refuse(kind, f"has {n} segments", f"3 to {MAX_SEGMENTS}")
    return n


def share(kind: str, sizes: Sizes) -> float:
    """How full a vessel is."""
    fill = float(sizes.get("fill", 0.0))
    if not 0.0 <= fill <= 1.0:
        raise refuse(kind, f"has a fill of {fill:g}", "0 to 1, of the inner height")
    return fill


def build_box(sizes: Sizes) -> BuiltShape:
    """A box about the origin."""
    x, y, z = lengths("box", sizes, "size", 3)
    return BuiltShape((flat_solids.box((x, y, z)),))


def build_sphere(sizes: Sizes) -> BuiltShape:
    """An analytic sphere about the origin."""
    return BuiltShape((SphereAsset(pack([[0.0, 0.0, 0.0]]), pack([length("sphere", sizes, "radius")])),))


def build_cylinder(sizes: Sizes) -> BuiltShape:
    """A cylinder along y about the origin."""
    radius, height = length("cylinder", sizes, "radius"), length("cylinder", sizes, "height")
    return BuiltShape((round_solids.cylinder(radius, height, segments_of("cylinder", sizes)),))


def build_lens(sizes: Sizes) -> BuiltShape:
    """A lens along z, front towards +z."""
    front, back = float(sizes["radius_front"]), float(sizes["radius_back"])
    thickness, diameter = length("lens", sizes, "thickness"), length("lens", sizes, "diameter")
    for name, radius in (("radius_front", front), ("radius_back", back)):
        if radius != 0.0 and not diameter / 2.0 <= abs(radius) < 1e7:
            raise refuse(
                "lens",
                f"has a {name} of {radius:g} m",
                f"at least half its diameter, {diameter / 2:g} m, or 0 for flat",
            )
    edge = round_solids.edge_thickness_m(front, back, thickness, diameter)
    if edge < -round_solids.SHARP * diameter:
        raise refuse(
            "lens", f"has a rim of {edge:.6g} m thickness", f"a thickness of at least {thickness - edge:.6g} m"
        )
    return BuiltShape((round_solids.lens(front, back, thickness, diameter, LENS_RINGS, segments_of("lens", sizes)),))


def build_prism(sizes: Sizes) -> BuiltShape:
    """An isosceles prism with its ridge along z."""
    apex = float(sizes["apex_deg"])
    if not 0.0 < apex < 180.0:
        raise refuse("prism", f"has an apex of {apex:g} degrees", "more than 0 and less than 180")
    return BuiltShape((flat_solids.prism(apex, length("prism", sizes, "side"), length("prism", sizes, "length")),))


def build_tank(sizes: Sizes) -> BuiltShape:
    """An open glass tank and its filling."""
    x, y, z = lengths("tank", sizes, "size", 3)
    wall, fill = length("tank", sizes, "wall"), share("tank", sizes)
    if 2.0 * wall >= min(x, z) or wall >= y:
        raise refuse(
            "tank", f"has walls of {wall:g} m", f"less than half its width, {min(x, z) / 2:g} m, and its height"
        )
    filling = (vessels.tank_filling((x, y, z), wall, fill),) if fill > 0.0 else ()
    return BuiltShape((vessels.tank((x, y, z), wall),), filling)


def build_bowl(sizes: Sizes) -> BuiltShape:
    """An open half-round bowl and its filling."""
    radius, wall, fill = length("bowl", sizes, "radius"), length("bowl", sizes, "wall"), share("bowl", sizes)
    if not radius / 1000.0 <= wall < radius:
        raise refuse("bowl", f"has a wall of {wall:g} m", f"from {radius / 1000:g} m to less than its radius")
    filling = (vessels.bowl_filling(radius, wall, fill),) if fill > 0.0 else ()
    return BuiltShape((vessels.bowl(radius, wall),), filling)


def filling_of(builder: Callable[[Sizes], BuiltShape]) -> Callable[[Sizes], BuiltShape]:
    """What stands in a vessel, as a shape of its own."""

    def build(sizes: Sizes) -> BuiltShape:
        filling = builder(sizes).filling
        if not filling:
            raise refuse("vessel", "has no filling, since its fill is 0", "a fill above 0")
        return BuiltShape(filling)

    return build


def build_water_surface(sizes: Sizes) -> BuiltShape:
    """An open sheet of water facing +y, or a block when it has a depth."""
    size_x, size_z = lengths("water_surface", sizes, "size", 2)
    columns, rows = (int(n) for n in sizes["cells"])
    if columns < 1 or rows < 1 or columns * rows > MAX_CELLS:
        raise refuse("water_surface", f"has {columns} x {rows} cells", f"1 to {MAX_CELLS:,} in all")
    waves = tuple((float(a), float(w), float(d), float(p)) for a, w, d, p in sizes.get("waves", ()))
    if any(wavelength <= 0.0 for _, wavelength, _, _ in waves):
        raise refuse("water_surface", "has a wave without a wavelength", "more than 0 m")
    depth = float(sizes.get("depth") or 0.0)
    if depth != 0.0 and depth <= sum(abs(wave[0]) for wave in waves):
        raise refuse("water_surface", f"has a depth of {depth:g} m", "0, or more than its waves' amplitudes together")
    return BuiltShape((sheets.water_surface((size_x, size_z), (columns, rows), waves, depth),))


def build_rectangle(sizes: Sizes) -> BuiltShape:
    """A rectangle facing +z."""
    width, height = lengths("rectangle", sizes, "size", 2)
    return BuiltShape((sheets.rectangle(width, height),))


def build_disc(sizes: Sizes) -> BuiltShape:
    """A disc facing +z."""
    return BuiltShape((sheets.disc(length("disc", sizes, "radius"), segments_of("disc", sizes)),))


BUILDERS: dict[str, Callable[[Sizes], BuiltShape]] = {
    "box": build_box,
    "sphere": build_sphere,
    "cylinder": build_cylinder,
    "rod": build_cylinder,
    "lens": build_lens,
    "prism": build_prism,
    "tank": build_tank,
    "tank_filling": filling_of(build_tank),
    "bowl": build_bowl,
    "bowl_filling": filling_of(build_bowl),
    "water_surface": build_water_surface,
    "rectangle": build_rectangle,
    "disc": build_disc,
}
