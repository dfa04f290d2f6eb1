"""Every sampler against its own density: Pearson's chi-square over bins of what is drawn.

K. Pearson, Phil. Mag. 50, 157 (1900). Points are drawn by NumPy's generator with fixed seeds, 200,000 a sampler, and
the limit on the p-value is 1e-4: a right sampler fails one seed in ten thousand, and the seeds are fixed.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats

from renderer.arrays.lights import Sky, Sun
from renderer.arrays.packing import pack
from renderer.base.jit import kernel
from renderer.colour.wavelengths import spectrum_for
from renderer.frames.scene_sky import chances
from renderer.transport.film import on_disc, tent
from renderer.transport.layout import ALPHA, INDEX_BEYOND, INDEX_HERE, LANE_NM, N_LANE_REALS, N_VERTEX, VIEW
from renderer.transport.lights import draw_sky, draw_sun, sky_density, sky_place
from renderer.transport.microfacet import reflect_rough, visible_density, visible_normal
from renderer.transport.points import pair, stream
from renderer.transport.rough_boundary import draw_rough_way
from renderer.transport.surfaces import draw_reflection, lobes
from renderer.transport.vertices import boundary_lane
from renderer.transport.wavelengths import draw_lanes

N = 200_000
LEAST_P = 1e-4
FINE = 30  # steps each way in which a density is added up over a bin


@pytest.fixture
def uv() -> np.ndarray:
    """Evenly spread numbers, (N, 3)."""
    return np.random.default_rng(20261201).random((N, 3))


def p_value(counts: np.ndarray, expected: np.ndarray) -> float:
    """Of Pearson's test; bins that expect fewer than five are put together, and what is in none is a bin of its own."""
    counts, expected = counts.ravel().astype(float), expected.ravel()
    counts, expected = np.append(counts, N - counts.sum()), np.append(expected, max(N - expected.sum(), 0.0))
    rare = expected < 5.0
    counts = np.append(counts[~rare], counts[rare].sum())
    expected = np.append(expected[~rare], expected[rare].sum())
    keep = expected > 1e-3 * N**0.5
    assert counts[~keep].sum() <= 3.0, "points were drawn where the density is nothing"
    square = float((np.square(counts[keep] - expected[keep]) / expected[keep]).sum())
    return float(stats.chi2.sf(square, keep.sum() - 1))


def sphere_bins(directions: np.ndarray, n_polar: int, n_phi: int, widest: float = math.pi) -> np.ndarray:
    """Counts of unit vectors by their angle to z, up to `widest`, and azimuth: (n_polar, n_phi)."""
    polar = np.arctan2(np.hypot(directions[:, 0], directions[:, 1]), directions[:, 2])
    phi = np.arctan2(directions[:, 1], directions[:, 0])
    return np.histogram2d(polar, phi, [n_polar, n_phi], [[0.0, widest], [-math.pi, math.pi]])[0]


def sphere_expected(density, n_polar: int, n_phi: int, widest: float = math.pi) -> np.ndarray:
    """N times the integral of `density(unit vectors)` over each bin of `sphere_bins`, by the midpoint rule."""
    steps, steps_phi = n_polar * FINE, n_phi * FINE
    polar = (np.arange(steps) + 0.5) * widest / steps
    phi = -math.pi + (np.arange(steps_phi) + 0.5) * 2.0 * math.pi / steps_phi
    tt, pp = np.meshgrid(polar, phi, indexing="ij")
    points = np.stack([np.sin(tt) * np.cos(pp), np.sin(tt) * np.sin(pp), np.cos(tt)], axis=-1).reshape(-1, 3)
    cell = np.sin(tt) * (widest / steps) * (2.0 * math.pi / steps_phi)
    fine = (density(points).reshape(tt.shape) * cell).reshape(n_polar, FINE, n_phi, FINE)
    return N * fine.sum(axis=(1, 3))


# Film, sun and sky.


@kernel
def film_points(uv, out):
    """Tent offsets and points of the disc."""
    for i in range(uv.shape[0]):
        out[i, 0] = tent(uv[i, 0], 1.5)
        out[i, 1], out[i, 2] = on_disc(uv[i, 0], uv[i, 1])


def test_the_pixel_filter_and_the_lens_are_drawn_by_their_densities(uv: np.ndarray) -> None:
    out = np.empty((N, 3))
    film_points(uv, out)
    edges = np.linspace(-1.5, 1.5, 31)
    x = edges / 1.5
    share = np.where(x < 0.0, 0.5 * (1.0 + x) ** 2, 1.0 - 0.5 * (1.0 - x) ** 2)
    assert p_value(np.histogram(out[:, 0], edges)[0], N * np.diff(share)) > LEAST_P
    square, angle = out[:, 1] ** 2 + out[:, 2] ** 2, np.arctan2(out[:, 2], out[:, 1])
    counts, _, _ = np.histogram2d(square, angle, [8, 16], [[0.0, 1.0], [-math.pi, math.pi]])
    assert p_value(counts, np.full((8, 16), N / 128.0)) > LEAST_P


@kernel
def sun_points(sun, uv, out):
    """Directions to the sun's disc."""
    for i in range(uv.shape[0]):
        out[i, 0], out[i, 1], out[i, 2] = draw_sun(sun, uv[i, 0], uv[i, 1])


def test_the_sun_is_drawn_evenly_over_its_disc(uv: np.ndarray) -> None:
    cosine = math.cos(math.radians(0.2666))
    sun = Sun(pack([1.0, 0.0, 0.0, 1.0, cosine, 2.0 * math.pi * (1.0 - cosine), 0.5, 0.2, 0.8]), pack(np.zeros(401)))
    out = np.empty((N, 3))
    sun_points(sun, uv, out)
    fall = (1.0 - out[:, 2]) / (1.0 - cosine)  # even in solid angle
    assert fall.max() < 1.0 + 1e-6
    angle = np.arctan2(out[:, 1], out[:, 0])
    counts, _, _ = np.histogram2d(fall, angle, [8, 16], [[0.0, 1.0 + 1e-6], [-math.pi, math.pi]])
    assert p_value(counts, np.full((8, 16), N / 128.0)) > LEAST_P


def patchy_sky() -> Sky:
    """A sky whose cells differ a hundredfold, on tilted axes."""
    coefficients = np.exp(np.random.default_rng(5).uniform(0.0, 4.6, (7, 10, 1)))
    basis = np.full((1, 401), 0.01)
    axes, _ = np.linalg.qr(np.random.default_rng(6).normal(size=(3, 3)))
    row_cdf, column_cdf = chances(coefficients, basis)
    return Sky(pack(axes), pack(coefficients), pack(basis), pack(row_cdf), pack(column_cdf))


@kernel
def sky_points(sky, uv, out):
    """Directions drawn from a sky, and how far their place in its map is from that of the direction."""
    for i in range(uv.shape[0]):
        x, y, z, row, column = draw_sky(sky, uv[i, 0], uv[i, 1])
        row_found, column_found = sky_place(sky, x, y, z)
        out[i, 0], out[i, 1], out[i, 2] = x, y, z
        out[i, 3] = max(abs(row - row_found), abs(column - column_found))


@kernel
def sky_densities(sky, points, out):
    """The density of each direction."""
    for i in range(points.shape[0]):
        row, column = sky_place(sky, points[i, 0], points[i, 1], points[i, 2])
        out[i] = sky_density(sky, row, column)


def test_the_sky_is_drawn_by_its_density(uv: np.ndarray) -> None:
    sky, out = patchy_sky(), np.empty((N, 4))
    sky_points(sky, uv, out)
    assert out[:, 3].max() < 1e-6

    def density(points: np.ndarray) -> np.ndarray:
        found = np.empty(len(points))
        sky_densities(sky, points, found)
        return found

    expected = sphere_expected(density, 24, 48)
    assert expected.sum() == pytest.approx(N, rel=5e-3)
    # The midpoint rule is a little off where a bin holds the edge of a cell: half a per cent, well within the test.
    assert p_value(sphere_bins(out[:, :3], 12, 24), expected.reshape(12, 2, 24, 2).sum(axis=(1, 3))) > LEAST_P


# Wavelengths.


@kernel
def lane_points(spectrum, uv, lanes, out):
    """The wavelengths of the four lanes."""
    for i in range(uv.shape[0]):
        draw_lanes(spectrum, uv[i, 0], uv[i, 1], lanes)
        for lane in range(4):
            out[i, lane] = lanes[lane, LANE_NM]


@pytest.mark.parametrize("lines", [(), (589.0, 589.6), (435.8, 546.1, 578.2)])
def test_wavelengths_are_drawn_by_their_density_and_hit_lines(uv: np.ndarray, lines: tuple[float, ...]) -> None:
    spectrum = spectrum_for(lines)
    out = np.empty((N, 4))
    lane_points(spectrum, uv, np.empty((4, N_LANE_REALS)), out)
    edges = np.linspace(380.0, 780.0, 41)
    mass, mean = np.diff(spectrum.u_low), 0.5 * (spectrum.low_nm + spectrum.high_nm)
    smooth = spectrum.line < 0
    for lane in range(4):
        on_line = np.isin(out[:, lane], lines)
        assert (
            stats.binomtest(int(on_line.sum()), N, mass[~smooth].sum()).pvalue > LEAST_P if lines else not on_line.any()
        )
        expected = N * np.histogram(mean[smooth], edges, weights=mass[smooth])[0]
        assert p_value(np.histogram(out[~on_line, lane], edges)[0], expected) > LEAST_P


# Rough surfaces and boundaries.


def views() -> list[tuple[float, float, float]]:
    """Directions of view: straight on, aslant, grazing."""
    return [(math.sin(a) * math.cos(0.7), math.sin(a) * math.sin(0.7), math.cos(a)) for a in (0.05, 0.9, 1.4)]


@kernel
def normal_points(alpha, x, y, z, uv, out):
    """Microfacet normals."""
    for i in range(uv.shape[0]):
        out[i, 0], out[i, 1], out[i, 2] = visible_normal(alpha, x, y, z, uv[i, 0], uv[i, 1])


@kernel
def normal_densities(alpha, x, y, z, points, out):
    """The density of each normal."""
    for i in range(points.shape[0]):
        h = points[i]
        out[i] = visible_density(alpha, z, h[2], x * h[0] + y * h[1] + z * h[2])


@pytest.mark.parametrize("alpha", [0.15, 0.6])
@pytest.mark.parametrize("view", views())
def test_visible_normals_are_drawn_by_their_density(uv: np.ndarray, alpha: float, view: tuple[float, ...]) -> None:
    out = np.empty((N, 3))
    normal_points(alpha, *view, uv, out)

    def density(points: np.ndarray) -> np.ndarray:
        found = np.empty(len(points))
        normal_densities(alpha, *view, points, found)
        return found

    expected = sphere_expected(density, 30, 24, 0.5 * math.pi)
    assert expected.sum() == pytest.approx(N, rel=0.02)
    assert p_value(sphere_bins(out, 30, 24, 0.5 * math.pi), expected * N / expected.sum()) > LEAST_P


@kernel
def surface_points(top, alpha, x, y, z, uv, out):
    """Directions drawn from an opaque surface."""
    for i in range(uv.shape[0]):
        out[i, 0], out[i, 1], out[i, 2] = draw_reflection(top, alpha, x, y, z, uv[i, 0], uv[i, 1], uv[i, 2])


@kernel
def surface_densities(top, alpha, x, y, z, points, out):
    """The density of each direction; of metal by `reflect_rough` itself."""
    for i in range(points.shape[0]):
        w = points[i]
        out[i] = lobes(top, alpha, x, y, z, w[0], w[1], w[2])[2]
        if top < 0.0:
            out[i] = reflect_rough(alpha, x, y, z, w[0], w[1], w[2])[1]


@pytest.mark.parametrize(("top", "alpha"), [(0.0, 1.0), (-1.0, 0.3), (1.5, 0.25), (1.333, 0.5)])
@pytest.mark.parametrize("view", views())
def test_opaque_surfaces_are_drawn_by_their_density(
    uv: np.ndarray, top: float, alpha: float, view: tuple[float, ...]
) -> None:
    out = np.empty((N, 3))
    surface_points(top, alpha, *view, uv, out)

    def density(points: np.ndarray) -> np.ndarray:
        found = np.empty(len(points))
        surface_densities(top, alpha, *view, points, found)
        return found

    expected = sphere_expected(density, 30, 24, 0.5 * math.pi)
    above = out[:, 2] > 0.0
    assert above.sum() == pytest.approx(expected.sum(), rel=0.02)
    expected *= above.sum() / expected.sum()
    assert p_value(sphere_bins(out[above], 30, 24, 0.5 * math.pi), expected) > LEAST_P


@kernel
def boundary_points(vertex, uv, out):
    """Directions drawn from a rough boundary."""
    for i in range(uv.shape[0]):
        out[i, 0], out[i, 1], out[i, 2] = draw_rough_way(
            vertex, vertex[INDEX_HERE], vertex[INDEX_BEYOND], uv[i, 0], uv[i, 1], uv[i, 2]
        )


@kernel
def boundary_densities(vertex, points, out):
    """The density of each direction, on both sides."""
    for i in range(points.shape[0]):
        w = points[i]
        gloss, gloss_density, cosine = reflect_rough(
            vertex[ALPHA], vertex[VIEW], vertex[VIEW + 1], vertex[VIEW + 2], w[0], w[1], w[2]
        )
        out[i] = boundary_lane(vertex, 0, gloss, gloss_density, cosine, w[0], w[1], w[2])[1]


@pytest.mark.parametrize(("here", "beyond"), [(1.0, 1.5), (1.5, 1.0), (1.333, 1.52)])
@pytest.mark.parametrize("view", views())
def test_rough_boundaries_are_drawn_by_their_density(
    uv: np.ndarray, here: float, beyond: float, view: tuple[float, ...]
) -> None:
    vertex = np.zeros(N_VERTEX)
    vertex[ALPHA], vertex[VIEW : VIEW + 3] = 0.4, view
    vertex[INDEX_HERE : INDEX_HERE + 4], vertex[INDEX_BEYOND : INDEX_BEYOND + 4] = here, beyond
    out = np.empty((N, 3))
    boundary_points(vertex, uv, out)

    def density(points: np.ndarray) -> np.ndarray:
        found = np.empty(len(points))
        boundary_densities(vertex, points, found)
        return found

    expected = sphere_expected(density, 60, 24)
    drawn = out[:, 2] != 0.0
    assert drawn.sum() == pytest.approx(expected.sum(), rel=0.02)
    expected *= drawn.sum() / expected.sum()
    assert p_value(sphere_bins(out[drawn], 60, 24), expected) > LEAST_P


# Points.


@kernel
def net(key, dimension, out):
    """The first points of a pair."""
    for i in range(out.shape[0]):
        out[i, 0], out[i, 1] = pair(key, i, dimension)


@pytest.mark.parametrize(("pixel", "dimension"), [(0, 0), (77, 1), (123456, 35), (2**40 + 5, 2**24 + 16)])
def test_points_fill_every_elementary_interval_once(pixel: int, dimension: int) -> None:
    """The (0, m, 2)-nets of Sobol', USSR Comput. Math. Math. Phys. 7(4), 1967; scrambling keeps them (Owen 1995)."""
    for m in range(1, 9):
        points = np.empty((2**m, 2))
        net(np.uint64(stream(3, pixel, 5)), dimension, points)
        for a in range(m + 1):
            cells = np.floor(points * [2**a, 2 ** (m - a)]).astype(int)
            assert len(np.unique(cells[:, 0] * 2**m + cells[:, 1])) == 2**m


def test_points_of_pixels_and_dimensions_are_even_and_not_correlated() -> None:
    columns = []
    for pixel in range(40):
        for dimension in range(3):
            points = np.empty((64, 2))
            net(np.uint64(stream(0, pixel, 1)), dimension, points)
            columns.append(points[:4].ravel())
    table = np.array(columns)
    correlation = np.corrcoef(table.T)[np.triu_indices(table.shape[1], 1)]
    assert np.abs(correlation).mean() < 3.0 / math.sqrt(len(table))
    first = table[:, 0]
    assert stats.kstest(first, "uniform").pvalue > LEAST_P
