"""What inspection finds on meshes that are broken in one known way each."""

from __future__ import annotations

import numpy as np
import pytest
import trimesh

from renderer.arrays.assets import SphereAsset, TriangleAsset
from renderer.geometry.inspection import component_labels, inspect_mesh
from renderer.geometry.round_solids import sphere_mesh
from tests.unit.geometry.mesh_writing import CUBE_FACES, CUBE_POINTS, ply


def mesh(points=CUBE_POINTS, faces=CUBE_FACES, normals=None):
    empty = np.zeros((0, 3))
    points, faces = np.asarray(points, dtype=np.float64), np.asarray(faces, dtype=np.int32)
    return TriangleAsset(points, faces, empty if normals is None else normals, np.zeros((0, 2)))


def test_a_good_cube():
    found = inspect_mesh(mesh())
    assert (found.n_vertices, found.n_faces, found.n_positions, found.n_components) == (8, 12, 8, 1)
    assert found.watertight
    assert found.consistent
    assert found.outward
    assert found.volume_m3 == pytest.approx(1.0, rel=1e-15)
    assert found.area_m2 == pytest.approx(6.0, rel=1e-15)
    assert found.diagonal_m == pytest.approx(3**0.5)
    assert found.welds_within_m is None


def test_split_vertices_do_not_open_it():
    found = inspect_mesh(mesh(CUBE_POINTS[CUBE_FACES].reshape(-1, 3), np.arange(36).reshape(-1, 3)))
    assert (found.watertight, found.n_vertices, found.n_positions) == (True, 36, 8)


def test_parts_are_inspected_together():
    assert inspect_mesh([mesh(faces=CUBE_FACES[:5]), mesh(faces=CUBE_FACES[5:])]).watertight


def test_a_missing_face():
    found = inspect_mesh(mesh(faces=CUBE_FACES[1:]))
    assert (found.watertight, found.n_open_edges, found.n_flipped_edges, found.outward) == (False, 3, 0, False)


def test_a_flipped_face():
    faces = CUBE_FACES.copy()
    faces[4] = faces[4][::-1]
    found = inspect_mesh(mesh(faces=faces))
    assert (found.watertight, found.consistent, found.n_flipped_edges, found.outward) == (True, False, 3, False)


def test_inside_out():
    found = inspect_mesh(mesh(faces=CUBE_FACES[:, ::-1]))
    assert (found.watertight, found.consistent, found.outward, found.n_inside_out) == (True, True, False, 1)
    assert found.volume_m3 == pytest.approx(-1.0, rel=1e-15)


def test_a_hollow_is_not_inside_out_but_a_neighbour_is():
    inner = CUBE_POINTS * 0.5 + 0.25
    hollow = inspect_mesh([mesh(), mesh(inner, CUBE_FACES[:, ::-1])])
    assert (hollow.n_components, hollow.n_inside_out, hollow.outward) == (2, 0, True)
    assert hollow.volume_m3 == pytest.approx(0.875, rel=1e-14)
    beside = inspect_mesh([mesh(), mesh(inner + 2.0, CUBE_FACES[:, ::-1])])
    assert (beside.n_components, beside.n_inside_out) == (2, 1)


def test_degenerate_and_duplicate_faces():
    points = np.vstack([CUBE_POINTS, [[0.0, 0.0, 0.5]]])
    faces = np.vstack([CUBE_FACES, [[0, 8, 1], [0, 0, 1], CUBE_FACES[3][[2, 1, 0]], CUBE_FACES[3][[1, 2, 0]]]])
    found = inspect_mesh(mesh(points, faces))
    assert (found.n_degenerate, found.n_duplicate) == (2, 2)
    assert found.n_crowded_edges >= 3


def test_not_a_number_is_counted_and_the_rest_measured(tmp_path):
    points = CUBE_POINTS.copy()
    points[7] = np.nan
    found = inspect_mesh(ply(tmp_path / "nan.ply", points, CUBE_FACES))
    assert (found.n_non_finite, found.n_faces, found.watertight) == (1, 12, False)
    assert found.high_m == (1.0, 1.0, 1.0)


def test_nothing_but_not_a_number_still_gives_a_report():
    found = inspect_mesh(mesh(np.full((8, 3), np.nan)))
    assert (found.n_non_finite, found.watertight, found.n_components, found.area_m2) == (8, False, 0, 0.0)


def test_normals_that_point_inward_are_counted():
    outward = (CUBE_POINTS - 0.5) / 0.75**0.5
    assert inspect_mesh(mesh(normals=outward)).n_normals_against == 0
    assert inspect_mesh(mesh(normals=-outward)).n_normals_against == 36


def test_a_hair_line_says_at_which_distance_it_closes():
    points = CUBE_POINTS[CUBE_FACES].reshape(-1, 3)
    points += np.random.default_rng(4).uniform(-1e-7, 1e-7, points.shape)
    found = inspect_mesh(mesh(points, np.arange(36).reshape(-1, 3)))
    assert not found.watertight
    assert 1e-7 < found.welds_within_m <= 1e-5 * 3**0.5 * 1.001
    points[0] += 0.05
    far = inspect_mesh(mesh(points, np.arange(36).reshape(-1, 3)))
    assert far.welds_within_m is None


def test_spheres_are_closed():
    found = inspect_mesh(SphereAsset(np.array([[1.0, 0.0, 0.0], [5.0, 0.0, 0.0]]), np.array([1.0, 0.5])))
    assert (found.watertight, found.outward, found.n_components) == (True, True, 2)
    assert found.low_m == pytest.approx((0.0, -1.0, -1.0))
    assert found.high_m == pytest.approx((5.5, 1.0, 1.0))


def test_agrees_with_another_library_on_random_soups():
    rng = np.random.default_rng(6)
    for _ in range(20):
        ball = sphere_mesh(1.0, 6)
        faces = ball.faces[rng.random(len(ball.faces)) < rng.choice([0.8, 1.0])]
        other = trimesh.Trimesh(ball.vertices_m, faces, process=False)
        other.merge_vertices(merge_norm=True, merge_tex=True)
        found = inspect_mesh(mesh(ball.vertices_m, faces))
        assert found.watertight == other.is_watertight
        assert found.area_m2 == pytest.approx(other.area, rel=1e-12)
        assert found.n_components == other.body_count


def test_components_of_a_long_strip():
    """A chain whose labels must travel far: 5,000 triangles in a row, in a scrambled order."""
    rng = np.random.default_rng(8)
    order = rng.permutation(5002)
    corners = order[np.arange(5000)[:, None] + np.arange(3)].astype(np.int32)
    label = component_labels(rng.permutation(corners), 5002)
    assert set(label.tolist()) == {0}
