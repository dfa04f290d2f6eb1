"""Light scattered by large clear drops, without the series: rays, made good at rainbows and near the axis by waves.

Order p: 0 is reflected outside, 1 goes straight through, p >= 2 is reflected p - 1 times inside. Where two rays of an
order leave in almost one direction, beside a rainbow's angle, their sum is the uniform approximation of Chester,
Friedman and Ursell, which real rays give on the bright side and complex ones on the dark side:

    S_j = sqrt(pi) x [P_j x^(1/6) Ai(-xi) + i Q_j x^(-1/6) Ai'(-xi)],
    xi = x^(2/3) zeta,  4/3 zeta^(3/2) = phi_1 - phi_2,
    P_j = (A_j1 + A_j2) zeta^(1/4),  Q_j = (A_j2 - A_j1) zeta^(-1/4),

with the amplitudes A of both rays and their optical paths phi over the radius. Straight on and straight back, a ring of
rays meets on the axis; there Bessel functions take the place of 1/sin. Orders are added by intensity, and fringes that
no spread of sizes shows are left out: this is for clouds of many sizes, not for one drop.

C. Chester, B. Friedman and F. Ursell, Proc. Camb. Phil. Soc. 53 (1957) 599 (uniform approximation).
V. Khare and H. M. Nussenzveig, Phys. Rev. Lett. 33 (1974) 976 (applied to the rainbow).
H. C. van de Hulst, *Light Scattering by Small Particles*, 1957, sections 8.3 (diffraction), 12.2 (rays), 13.3 (axis).
"""

from __future__ import annotations

import io
import math
from dataclasses import dataclass
from functools import cache
from typing import Any

import numpy as np
import numpy.typing as npt

from renderer.optics.airy import airy
from renderer.optics.tables import table_text

Floats = npt.NDArray[np.float64]
Ints = npt.NDArray[np.int64]
Rays = npt.NDArray[Any]  # angles of incidence: float64, or complex128 on the dark side

ORDERS = 12  # p = 0 to 11: what is left is 4e-4 of the light of water drops
DARK_SIDE = math.radians(25.0)  # how far complex rays are followed; at x = 200 nothing is left there
NEAREST = 1e-6  # [radians] no ray is looked for nearer than this to a rainbow's angle
XI_FADE, XI_RAYS = 30.0, 45.0  # fringes fade out between these (35 to 64 fringes from the bow)
U_FADE, U_RAYS = 20.0, 40.0  # as above, for the rings round the axis
AIRY_FROM, TABLE_STEP = -12.0, 0.002
SMALLEST_SINE = 1e-5
FILLED = 0.9962  # the disc's amplitude straight on gains this times x^(-2/3) from rays that graze (van de Hulst 17.26)
EDGE_FILE = "drop_edges.csv"  # what rays leave out, fitted to the full series
EDGE_INDICES = (1.331, 1.345)  # of the drops it was fitted to: water in red and in violet
EDGE_INDEX = 1.333  # whose angles the table counts in


@dataclass(frozen=True)
class RayTable:
    """What rays do at angles (n,), whatever the drop's size, over x^2: from `ray_table`.

    `rays` (4, n): |S1|^2, |S2|^2, Re and Im of S2 S1* of all orders by rays alone. The rest are rows (m,), one for each
    order and way round at each angle: `place` in the angles; `zeta`, `p` (2, m), `q` (2, m) of the uniform
    approximation (zeta is infinite where there is one ray only); `by_rays` (3, m); `ring` (m,): u = x ring on the axis,
    infinite where no ring of rays meets; `side`: +1 straight on, -1 back. `warped_deg` (n,): where `edge_light` is
    looked up, and `violet` how far from its first index to its second.
    """

    angles_rad: Floats
    warped_deg: Floats
    violet: float
    rays: Floats
    place: Ints
    zeta: Floats
    p: Floats
    q: Floats
    by_rays: Floats
    ring: Floats
    side: Floats


def intensities(
    radius_um: float, wavelength_nm: float, index: float, angles_deg: Floats, diffraction: bool = True
) -> Floats:
    """S11, S12, S33 and S34 (4, n) of drops of about this radius at angles (n,) [deg]; see `intensities_of`."""
    return intensities_of(ray_table(index, angles_deg), 2000.0 * math.pi * radius_um / wavelength_nm, diffraction)


def intensities_of(rays: RayTable, size_parameter: float, diffraction: bool = True) -> Floats:
    """S11, S12, S33 and S34 (4, n) of drops of 2 pi r / wavelength; over k^2 they are cross-sections per steradian.

    diffraction: with the spike straight on, and the light of the drop's edge.
    """
    x = size_parameter
    scale = x ** (2.0 / 3.0)
    near = np.flatnonzero((rays.zeta * scale < XI_RAYS) | (rays.ring * x < U_RAYS))
    found = rays.rays.copy()
    if len(near):
        before = rays.by_rays[:, near]
        exact = on_axis(beside_bow(rays, near, x), x * rays.ring[near], rays.side[near])
        exact[:3] -= before
        for row in range(4):
            found[row] += np.bincount(rays.place[near], exact[row], found.shape[1])
    found *= x * x
    if diffraction:
        found[:3] += airy_disc(rays.angles_rad, x)
        found += edge_light(rays, x)
    first, second, real, imaginary = found
    return np.stack([0.5 * (first + second), 0.5 * (second - first), real, imaginary])


def beside_bow(rays: RayTable, rows: Ints, x: float) -> Floats:
    """|S1|^2, |S2|^2, Re and Im of S2 S1*, over x^2, of these rows (4, k) by the uniform approximation."""
    xi = rays.zeta[rows] * x ** (2.0 / 3.0)
    result = np.zeros((4, len(rows)))
    result[:3] = rays.by_rays[:, rows]
    use = np.flatnonzero((xi < XI_RAYS) & np.isfinite(xi))
    xi, chosen = xi[use], rows[use]
    ai2, slope2, both = (looked_up(t, xi, AIRY_FROM) for t in airy_products())
    third = math.pi * x ** (1.0 / 3.0)
    p, q = rays.p[:, chosen], rays.q[:, chosen]
    ai2, slope2 = third * ai2, math.pi * math.pi / third * slope2
    result[0, use] = p[0] ** 2 * ai2 + q[0] ** 2 * slope2
    result[1, use] = p[1] ** 2 * ai2 + q[1] ** 2 * slope2
    result[2, use] = p[0] * p[1] * ai2 + q[0] * q[1] * slope2
    result[3, use] = math.pi * (q[1] * p[0] - p[1] * q[0]) * both
    return result


def on_axis(values: Floats, u: Floats, side: Floats) -> Floats:
    """The same values where rays of a ring meet on the axis: u is x b sin(angle), b the ring's radius over the drop's.

    S1 = sqrt(2 pi u) [A1 J1'(u) + side A2 J1(u) / u], S2 with 1 and 2 exchanged (van de Hulst 13.3).
    """
    use = np.flatnonzero(u < U_RAYS)
    if not len(use):
        return values
    own, other, mixed = (looked_up(t, u[use], 0.0) for t in ring_products())
    first, second, real, imaginary = values[:, use]
    mixed = mixed * side[use]
    result = values.copy()
    result[0, use] = own * first + other * second + mixed * real
    result[1, use] = own * second + other * first + mixed * real
    result[2, use] = (own + other) * real + 0.5 * mixed * (first + second)
    result[3, use] = (own - other) * imaginary
    return result


def airy_disc(angles_rad: Floats, x: float) -> Floats:
    """Light diffracted forward, |S|^2 of both polarisations; nothing behind."""
    u = x * np.sin(angles_rad)
    over = np.interp(u, *bessel_over_u(), right=0.0)  # J1(u)/u
    mean = 1.0 / np.sqrt(math.pi * np.maximum(u, 1.0) ** 3)
    disc = np.where(u < U_RAYS, over, mean)
    obliquity = np.maximum(np.cos(angles_rad), 0.0) * 0.5 * (1.0 + np.cos(angles_rad))
    return np.asarray((x * x * (1.0 + FILLED * x ** (-2.0 / 3.0)) * disc) ** 2 * obliquity)


def edge_weight(angles_rad: Floats, x: float) -> Floats:
    """What edge light is tabulated over: x^(4/3), more near the spike, with which light reflected there is in step."""
    return np.asarray(x ** (4.0 / 3.0) * (1.0 + 0.3 * (angles_rad**2 + (3.0 / x) ** 2) ** -0.75))


@cache
def edge_table() -> tuple[Floats, Floats, Floats]:
    """Logarithms of sizes (k,), angles [deg] (a,), and edge light over `edge_weight` (2, k, 4, a)."""
    rows = np.loadtxt(io.StringIO(table_text(EDGE_FILE)), delimiter=",", comments="#")
    sizes = np.unique(rows[1:, 1])
    inner = rows[1:, 3:].reshape(len(EDGE_INDICES) * len(sizes), 4, -1)
    table = np.concatenate([inner[:, :, :1], inner, inner[:, :, -1:]], axis=2)
    for end, sign in ((0, 1.0), (-1, -1.0)):  # on the axis nothing tells the polarisations apart
        even = 0.5 * (table[:, 0, end] + table[:, 1, end])
        table[:, 0, end], table[:, 1, end], table[:, 2, end], table[:, 3, end] = even, even, sign * even, 0.0
    return np.log(sizes), np.concatenate([[0.0], rows[0, 3:], [180.0]]), table.reshape(2, len(sizes), 4, -1)


def edge_light(rays: RayTable, x: float) -> Floats:
    """Light from rays that graze the drop, and waves that creep round it (4, n): |S1|^2, |S2|^2, Re and Im of S2 S1*.

    Fitted, not derived, to the full series for the indices of water and 300 < x < 6000; angles are scaled by
    2 acos(1/n), at whose multiples rays that graze come out. Beyond its range the nearest size serves, where it is
    little.
    """
    sizes, angles, tables = edge_table()
    table = (1.0 - rays.violet) * tables[0] + rays.violet * tables[1]
    place = float(np.clip(np.interp(math.log(x), sizes, np.arange(len(sizes))), 0.0, len(sizes) - 1.0))
    low = min(int(place), len(sizes) - 2)
    values = table[low] + (place - low) * (table[low + 1] - table[low])
    at = rays.warped_deg
    return np.asarray(edge_weight(rays.angles_rad, x) * np.stack([np.interp(at, angles, row) for row in values]))


def looked_up(table: Floats, at: Floats, start: float) -> Floats:
    """Straight lines between a table's even steps; its first value before them."""
    steps = np.maximum((at - start) / TABLE_STEP, 0.0)
    whole = np.minimum(steps.astype(np.int64), len(table) - 2)
    low = table[whole]
    return np.asarray(low + (steps - whole) * (table[whole + 1] - low))


def faded(at: Floats, start: float, end: float) -> Floats:
    """1 before start, 0 after end, smooth between."""
    t = np.clip((at - start) / (end - start), 0.0, 1.0)
    return np.asarray(1.0 - t * t * (3.0 - 2.0 * t))


@cache
def airy_products() -> tuple[Floats, Floats, Floats]:
    """Ai^2, Ai'^2 and Ai Ai' at -xi from AIRY_FROM on; far on the bright side without their fringes."""
    xi = np.arange(AIRY_FROM, XI_RAYS + 2 * TABLE_STEP, TABLE_STEP)
    value, slope = airy(-xi)
    mean, keep = 0.5 / math.pi / np.sqrt(np.maximum(xi, 1.0)), faded(xi, XI_FADE, XI_RAYS)
    slope_mean = 0.5 / math.pi * np.sqrt(np.maximum(xi, 1.0))
    return mean + (value**2 - mean) * keep, slope_mean + (slope**2 - slope_mean) * keep, value * slope * keep


@cache
def ring_products() -> tuple[Floats, Floats, Floats]:
    """2 pi u times J1'^2, (J1/u)^2 and 2 J1' J1/u; one half of it is light of either side of the ring."""
    u = np.arange(0.0, U_RAYS + 2 * TABLE_STEP, TABLE_STEP)
    j0, j1 = bessel(u)
    over = np.where(u > 0.0, j1 / np.maximum(u, 1e-300), 0.5)
    slope, keep = j0 - over, faded(u, U_FADE, U_RAYS)
    return (
        1.0 + (math.pi * u * slope**2 - 1.0) * keep,
        math.pi * u * over**2 * keep,
        2 * math.pi * u * slope * over * keep,
    )


@cache
def bessel_over_u() -> tuple[Floats, Floats]:
    """u and J1(u) / u."""
    u = np.arange(0.0, U_RAYS + 0.01, 0.01)
    return u, np.concatenate([[0.5], bessel(u[1:])[1] / u[1:]])


def bessel(u: Floats) -> tuple[Floats, Floats]:
    """J0 and J1 by Bessel's integral, to rounding for u < 45."""
    j0, j1 = np.zeros_like(u), np.zeros_like(u)
    n = 80  # the trapezium rule errs by about J_2n(u) over a whole turn
    for k in range(n):
        turn = 2.0 * math.pi * (k + 0.5) / n
        j0 += np.cos(u * math.sin(turn)) / n
        j1 += np.cos(turn - u * math.sin(turn)) / n
    return j0, j1


def ray_table(index: float, angles_deg: Floats, orders: int = ORDERS) -> RayTable:
    """Rays of orders 0 to orders - 1 at angles (n,) [deg, 0 to 180], for an index relative to air of 1.1 to 2."""
    angles = np.radians(np.asarray(angles_deg, dtype=np.float64))
    sine = np.maximum(np.sin(angles), SMALLEST_SINE)
    total = np.zeros((4, len(angles)))
    total[:3] += outside(index, angles)
    total[:3] += straight_through(index, angles, sine)
    parts: list[tuple[Floats, ...]] = []
    for p in range(2, orders):
        lowest = bow(index, p)[1]
        first = max(math.floor((lowest - DARK_SIDE) / math.pi), 0)
        for half_turn in range(first, p):
            part = one_way(index, p, half_turn, angles, sine)
            total[:3] += np.stack([np.bincount(part[0].astype(np.int64), row, len(angles)) for row in part[6:9]])
            parts.append(part)
    rows = np.concatenate([np.stack(part) for part in parts], axis=1)
    red_end, violet_end = EDGE_INDICES
    violet = float(np.clip((index - red_end) / (violet_end - red_end), -0.3, 1.3))
    warp = math.acos(1.0 / EDGE_INDEX) / math.acos(1.0 / index)
    warped = warp * np.degrees(angles)
    warped = np.where(angles < math.radians(165.0) / warp, warped, scaled_back(np.degrees(angles), 165.0 / warp))
    return RayTable(angles, warped, violet, total, rows[0].astype(np.int64), rows[1], rows[2:4], rows[4:6], rows[6:9],
                    rows[9], rows[10])  # fmt: skip


def scaled_back(angles_deg: Floats, start: float) -> Floats:
    """The way from start to 180 degrees laid over that from 165 to 180."""
    return np.asarray(180.0 - (180.0 - angles_deg) * 15.0 / (180.0 - start))


def bow(index: float, p: int) -> tuple[float, float]:
    """Descartes' ray of order p >= 2: its angle of incidence and deviation [radians], turns and all."""
    cosine = math.sqrt((index * index - 1.0) / (p * p - 1.0))
    incidence = math.acos(min(cosine, 1.0))
    return incidence, deviation(incidence, index, p)


def deviation(incidence: float, index: float, p: int) -> float:
    """How far a ray of order p turns [radians]."""
    return (p - 1) * math.pi + 2.0 * incidence - 2.0 * p * math.asin(math.sin(incidence) / index)


def one_way(index: float, p: int, half_turn: int, angles: Floats, sine: Floats) -> tuple[Floats, ...]:
    """Rays of order p that turn by half_turn to half_turn + 1 half turns: columns of a RayTable."""
    i0, lowest = bow(index, p)
    d = half_turn * math.pi + (angles if half_turn % 2 == 0 else math.pi - angles)
    grazing = deviation(0.5 * math.pi, index, p)
    keep = np.flatnonzero((d > lowest - DARK_SIDE) & (d <= (p - 1) * math.pi))
    d, sine = d[keep], sine[keep]
    gap = d - lowest
    gap = np.where(np.abs(gap) < NEAREST, NEAREST, gap)
    bright = gap > 0.0
    zeta, pq = np.full(len(d), np.inf), np.zeros((4, len(d)))
    by_rays = np.zeros((3, len(d)))
    inner = solve(index, p, gap[bright], i0, lowest, -1.0)
    a_inner = np.stack([np.abs(amplitude(index, p, inner, sine[bright], pol)) for pol in (0, 1)])
    a_inner *= np.stack([signs(index, p, inner, pol) for pol in (0, 1)])
    one = np.zeros((2, len(d)))
    one[:, bright] = a_inner
    by_rays[:] = one[0] ** 2, one[1] ** 2, one[0] * one[1]
    two = bright & (d < grazing)
    outer = solve(index, p, gap[two], i0, lowest, 1.0)
    a2 = np.stack([np.abs(amplitude(index, p, outer, sine[two], pol)) * signs(index, p, outer, pol) for pol in (0, 1)])
    a1 = one[:, two]
    by_rays[:, two] += np.stack([a2[0] ** 2, a2[1] ** 2, a2[0] * a2[1]])
    path = optical_path(inner[two[bright]], index, p) - optical_path(outer, index, p)
    root = np.cbrt(0.75 * path)  # zeta^(1/2)
    zeta[two] = root**2
    pq[:2, two], pq[2:, two] = (a1 + a2) * np.sqrt(root), (a2 - a1) / np.sqrt(root)
    dark = ~bright
    ray = solve_complex(index, p, gap[dark], i0, lowest)
    root = np.cbrt(1.5 * np.abs(optical_path(ray, index, p).imag))  # |zeta|^(1/2)
    zeta[dark] = -(root**2)
    for pol in (0, 1):
        sheet = strength(index, p, ray, pol) * np.sqrt(np.sin(ray) * np.cos(ray) / sine[dark])
        sheet = sheet * np.sqrt(1j * root / slope(ray, index, p))
        pq[pol, dark], pq[2 + pol, dark] = 2.0 * sheet.real, 2.0 * sheet.imag / root
    # The ring on the axis: the nearer end of this half turn, unless no ray or only the middle one comes out there.
    end = half_turn + (d > (half_turn + 0.5) * math.pi)
    ring, sign = np.full(len(d), np.inf), np.where(end % 2 == 0, 1.0, -1.0)
    for k in (half_turn, half_turn + 1):
        if k * math.pi > lowest and k < p - 1:
            b = math.sin(float(solve(index, p, np.array([k * math.pi - lowest]), i0, lowest, -1.0)[0]))
            ring = np.where(end == k, b * sine, ring)
    return (keep.astype(np.float64), zeta, *pq, *by_rays, ring, sign)


def slope(incidence: Rays, index: float, p: int) -> Rays:
    """How fast the deviation grows with incidence."""
    inside = np.sqrt(index * index - np.sin(incidence) ** 2)  # n cos r
    return np.asarray(2.0 - 2.0 * p * np.cos(incidence) / inside)


def turned(incidence: Rays, index: float, p: int) -> Rays:
    """`deviation` of many rays, complex ones too."""
    return np.asarray((p - 1) * math.pi + 2.0 * incidence - 2.0 * p * np.arcsin(np.sin(incidence) / index))


def optical_path(incidence: Rays, index: float, p: int) -> Rays:
    """Optical path over the radius, shorter than that of a ray along the axis that did not meet the drop."""
    return np.asarray(2.0 * (np.cos(incidence) - p * np.sqrt(index * index - np.sin(incidence) ** 2)))


def strength(index: float, p: int, incidence: Rays, pol: int) -> Rays:
    """Fresnel's amplitude of order p >= 1, across (0) or in (1) the plane."""
    outside_, inside = np.cos(incidence), np.sqrt(index * index - np.sin(incidence) ** 2)
    if pol == 1:
        outside_, inside = index * index * outside_, inside
    r = (outside_ - inside) / (outside_ + inside)
    return np.asarray((1.0 - r * r) * (-r) ** (p - 1))


def signs(index: float, p: int, incidence: Floats, pol: int) -> Floats:
    """Sign of `strength` of real rays."""
    return np.asarray(np.sign(strength(index, p, incidence, pol)))


def amplitude(index: float, p: int, incidence: Floats, sine: Floats, pol: int) -> Floats:
    """Amplitude over x of a ray that leaves where the sine of the scattering angle is this, but for its phase."""
    spread = np.sin(incidence) * np.cos(incidence) / (sine * np.abs(slope(incidence, index, p)))
    return np.asarray(strength(index, p, incidence, pol) * np.sqrt(spread))


def solve(index: float, p: int, gap: Floats, i0: float, lowest: float, side: float) -> Floats:
    """Incidence of rays that turn by `gap` more than Descartes'; side -1: nearer the axis, 1: farther."""
    grid = i0 + (-i0 if side < 0.0 else 0.5 * math.pi - i0) * np.linspace(0.0, 1.0, 400)
    grid_gap = np.sqrt(np.maximum(turned(grid, index, p) - lowest, 0.0))
    incidence = np.interp(np.sqrt(gap), grid_gap, grid)
    low, high = (0.0, i0) if side < 0.0 else (i0, 0.5 * math.pi)
    for _ in range(3):
        rate = slope(incidence, index, p)
        rate = np.where(np.abs(rate) < 1e-9, math.copysign(1e-9, side), rate)
        incidence = np.clip(incidence - (turned(incidence, index, p) - lowest - gap) / rate, low, high)
    return np.asarray(incidence)


def solve_complex(index: float, p: int, gap: Floats, i0: float, lowest: float) -> Rays:
    """Complex incidence, imaginary part > 0, of rays that turn by `gap` < 0 against Descartes'."""
    curve = 2.0 * p * math.sin(i0) * (index * index - 1.0) / (index * index - math.sin(i0) ** 2) ** 1.5
    ray = i0 + 1j * np.sqrt(-2.0 * gap / curve)
    for _ in range(8):
        ray = ray - (turned(ray, index, p) - lowest - gap) / slope(ray, index, p)
    return np.asarray(ray)


def outside(index: float, angles: Floats) -> Floats:
    """|S1|^2, |S2|^2 and S2 S1, over x^2, of light reflected outside."""
    cosine = np.sin(0.5 * angles)
    inside = np.sqrt(index * index - 1.0 + cosine * cosine)
    r1 = (cosine - inside) / (cosine + inside)
    r2 = (index * index * cosine - inside) / (index * index * cosine + inside)
    return 0.25 * np.stack([r1 * r1, r2 * r2, r1 * r2])


def straight_through(index: float, angles: Floats, sine: Floats) -> Floats:
    """The same of light refracted twice. In closed form: tan i = n sin(D/2) / (n cos(D/2) - 1)."""
    half = 0.5 * angles
    incidence = np.arctan2(index * np.sin(half), index * np.cos(half) - 1.0)
    seen = (index * np.cos(half) > 1.0) & (incidence < 0.5 * math.pi)
    ray = np.where(seen, incidence, 0.1)
    over = np.sin(np.maximum(angles, SMALLEST_SINE)) if len(angles) else sine
    ray = np.where(angles < SMALLEST_SINE, index * 0.5 * SMALLEST_SINE / (index - 1.0), ray)
    over = np.where(angles < SMALLEST_SINE, SMALLEST_SINE, over)
    a1, a2 = (np.where(seen, amplitude(index, 1, ray, over, pol), 0.0) for pol in (0, 1))
    return np.stack([a1 * a1, a2 * a2, a1 * a2])
