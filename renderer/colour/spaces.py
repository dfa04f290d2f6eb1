"""RGB spaces, their white points, and the adaptation from one white to another."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np

from renderer.base.errors import Fault, InputError, nearest_name
from renderer.colour.illuminants import ACES_WHITE_K, d65, daylight, white_light
from renderer.colour.observer import spectrum_to_xyz
from renderer.colour.tables import Floats, frozen

Pair = tuple[float, float]
D65_XY = (0.3127, 0.3290)  # as ITU-R BT.709 and BT.2020 print it
ACES_XY = (0.32168, 0.33767)  # AMPAS S-2014-004

# K. M. Lam, Metamerism and Colour Constancy, thesis, Bradford 1985; as ISO 15076-1:2010, annex E, prints it
BRADFORD = np.array([[0.8951, 0.2664, -0.1614], [-0.7502, 1.7135, 0.0367], [0.0389, -0.0685, 1.0296]])


@dataclass(frozen=True)
class Space:
    """A linear RGB space: chromaticities (x, y) of its primaries and its white; `title` is what people call it."""

    name: str
    title: str
    red: Pair
    green: Pair
    blue: Pair
    white: Pair


SPACES = {
    space.name: space
    for space in (
        Space("rec709", "Rec.709", (0.640, 0.330), (0.300, 0.600), (0.150, 0.060), D65_XY),  # ITU-R BT.709-6
        Space("rec2020", "Rec.2020", (0.708, 0.292), (0.170, 0.797), (0.131, 0.046), D65_XY),  # ITU-R BT.2020-2
        Space("acescg", "ACEScg", (0.713, 0.293), (0.165, 0.830), (0.128, 0.044), ACES_XY),  # AMPAS S-2014-004
        Space("xyz", "CIE XYZ", (1.0, 0.0), (0.0, 1.0), (0.0, 0.0), D65_XY),  # not scaled to its white: see rgb_to_xyz
    )
}


def space_named(name: str) -> Space:
    """The space of that name: rec709, rec2020, acescg or xyz. InputError with the nearest name otherwise."""
    if name not in SPACES:
        raise InputError(
            Fault(
                f'no colour space is named "{name}"',
                expected="one of " + ", ".join(SPACES),
                nearest=nearest_name(name, SPACES),
            )
        )
    return SPACES[name]


def xy_to_xyz(xy: Pair) -> Floats:
    """XYZ (3,) of a chromaticity at Y = 1."""
    x, y = xy
    return np.array([x / y, 1.0, (1.0 - x - y) / y])


def white_xyz(name: str) -> Floats:
    """XYZ (3,) of a space's white, Y = 1, from the chromaticity that its standard prints."""
    return xy_to_xyz(space_named(name).white)


@cache
def rgb_to_xyz_matrix(name: str) -> Floats:
    """(3, 3): linear RGB to XYZ, Y of white = 1. From the primaries, by SMPTE RP 177-1993; the unit matrix for xyz."""
    space = space_named(name)
    if name == "xyz":
        return frozen(np.eye(3))
    primaries = np.stack([np.array([x, y, 1.0 - x - y]) for x, y in (space.red, space.green, space.blue)], axis=1)
    return frozen(primaries * solved(primaries, xy_to_xyz(space.white)))


@cache
def xyz_to_rgb_matrix(name: str) -> Floats:
    """(3, 3): XYZ to linear RGB, the inverse of `rgb_to_xyz_matrix`."""
    return frozen(inverse(rgb_to_xyz_matrix(name)))


def bradford_matrix(from_white: Floats, to_white: Floats) -> Floats:
    """(3, 3): XYZ as seen under one white to XYZ as seen under another. Linear Bradford, ISO 15076-1:2010, annex E."""
    gains = applied(BRADFORD, to_white) / applied(BRADFORD, from_white)
    return product(inverse(BRADFORD), gains[:, None] * BRADFORD)


def balanced_matrix(name: str, white_balance_k: float) -> Floats:
    """(3, 3): a scene's XYZ to linear values of a space, so that light of `white_balance_k` comes out white.

    The scene's white is daylight (a black body below 4000 K) integrated over 380-780 nm, which is what the renderer
    makes of it; the output's white is the chromaticity that the space's standard prints. For xyz that is D65's, so
    that an XYZ picture shows the same colours as the RGB ones.
    """
    seen = spectrum_to_xyz(white_light(white_balance_k))
    return product(xyz_to_rgb_matrix(name), bradford_matrix(seen / seen[1], white_xyz(name)))


def xyz_to_rgb(xyz: Floats, space: str, white_balance_k: float) -> Floats:
    """Linear values (..., 3) in a space, of a scene's XYZ (..., 3), balanced so that `white_balance_k` is white."""
    return applied(balanced_matrix(space, white_balance_k), xyz)


def converted(rgb: Floats, from_space: str, to_space: str) -> Floats:
    """Linear values (..., 3) of one space as those of another, white to white (Bradford)."""
    if from_space == to_space:
        return np.asarray(rgb, dtype=np.float64)
    adaptation = bradford_matrix(white_xyz(from_space), white_xyz(to_space))
    return applied(
        product(xyz_to_rgb_matrix(to_space), product(adaptation, rgb_to_xyz_matrix(from_space))),
        rgb,
    )


@cache
def reference_light(name: str) -> Floats:
    """Spectrum (401,) of a space's white: D65, and daylight of 6000 K (old scale) for ACEScg; luminous integral 1."""
    light = daylight(ACES_WHITE_K) if name == "acescg" else d65()
    return frozen(light / spectrum_to_xyz(light)[1])


@cache
def reflected_matrix(name: str) -> Floats:
    """(3, 3): RGB of a reflectance to its XYZ under the space's `reference_light`; (1, 1, 1) is that light itself.

    The standard's chromaticities carry four or five decimals, and the light's integral more: Bradford bridges the two.
    """
    seen = spectrum_to_xyz(reference_light(name))
    return frozen(product(bradford_matrix(white_xyz(name), seen), rgb_to_xyz_matrix(name)))


def applied(matrix: Floats, values: Floats) -> Floats:
    """matrix @ each of values (..., 3), summed in a fixed order (a BLAS may use another on another machine)."""
    v = np.asarray(values, dtype=np.float64)
    return np.stack([m[0] * v[..., 0] + m[1] * v[..., 1] + m[2] * v[..., 2] for m in matrix], axis=-1)


def product(a: Floats, b: Floats) -> Floats:
    """The 3x3 product a b, summed in a fixed order."""
    return applied(a, b.T).T


def inverse(m: Floats) -> Floats:
    """The inverse of a 3x3 matrix by cofactors."""
    cofactors = np.stack([np.cross(m[1], m[2]), np.cross(m[2], m[0]), np.cross(m[0], m[1])], axis=1)
    determinant = m[0, 0] * cofactors[0, 0] + m[0, 1] * cofactors[1, 0] + m[0, 2] * cofactors[2, 0]
    return np.asarray(cofactors / determinant)


def solved(m: Floats, b: Floats) -> Floats:
    """x (3,) of m x = b."""
    return applied(inverse(m), b)
