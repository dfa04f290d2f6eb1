"""Computed vertex normals: exact on spheres, creased at edges, one at seams; and which vertices share a place."""

from __future__ import annotations

import numpy as np

from renderer.geometry import normals, positions
from renderer.geometry.normals import smooth_normals
from renderer.geometry.positions import groups_by_sorting, position_groups
from renderer.geometry.round_solids import cylinder, sphere_mesh
from tests.unit.geometry.mesh_writing import CUBE_FACES, CUBE_POINTS


def test_a_sphere_gets_its_own_normals():
    """Exact for a mesh inscribed in a sphere (Max 1999); split vertices at the seam and poles count as one."""
    mesh = sphere_mesh(0.7, 24)
    source, faces, found = smooth_normals(mesh.vertices_m, mesh.faces)
    assert np.array_equal(source, np.arange(len(mesh.vertices_m)))
    assert np.array_equal(faces, mesh.faces)
    assert np.abs(found - mesh.vertices_m / 0.7).max() < 1e-13


def test_a_cube_stays_a_cube():
    source, faces, found = smooth_normals(CUBE_POINTS, CUBE_FACES.astype(np.int32))
    assert len(source) == 8 + 24  # three normals a corner; the eight that were stay, unused
    points = CUBE_POINTS[source]
    assert np.array_equal(points[faces], CUBE_POINTS[CUBE_FACES])
    flat = np.cross(points[faces[:, 1]] - points[faces[:, 0]], points[faces[:, 2]] - points[faces[:, 0]])
    assert np.abs(found[faces] - flat[:, None, :]).max() == 0.0


def test_a_cylinder_is_smooth_round_its_side_and_flat_on_its_ends():
    mesh = cylinder(0.5, 2.0, 48)
    source, faces, found = smooth_normals(mesh.vertices_m, mesh.faces)
    points, exact = mesh.vertices_m[source][faces], mesh.vertex_normals[mesh.faces]
    assert np.array_equal(points, mesh.vertices_m[mesh.faces])
    assert np.abs(found[faces] - exact).max() < 0.05  # the two triangles a side weigh on either hand; 3 degrees at most
    ends = np.abs(exact[:, 0, 1]) > 0.5
    assert np.abs(found[faces][ends] - exact[ends]).max() < 1e-15


def test_turning_the_crease_angle_matters(monkeypatch):
    monkeypatch.setattr(normals, "CREASE_DEG", 120.0)
    source, _, found = smooth_normals(CUBE_POINTS, CUBE_FACES.astype(np.int32))
    assert len(source) == 8
    assert np.abs(np.abs(found) - 3**-0.5).max() < 1e-15


def test_degenerate_triangles_leave_finite_normals():
    points = np.array([[0.0, 0.0, 0.0], [1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [2.0, 0.0, 0.0], [5.0, 5.0, 5.0]])
    faces = np.array([[0, 1, 2], [0, 1, 3], [1, 1, 2], [4, 4, 4]], dtype=np.int32)
    _, used, found = smooth_normals(points, faces)
    assert np.isfinite(found).all()
    assert np.abs(found[used[0]] - (0.0, 0.0, 1.0)).max() == 0.0


def test_a_vertex_of_very_many_faces_is_flat_shaded(monkeypatch):
    monkeypatch.setattr(normals, "MAX_RING", 8)
    angles = np.linspace(0.0, 2.0 * np.pi, 33)[:-1]
    cone = np.vstack([[[0.0, 1.0, 0.0]], np.column_stack([np.sin(angles), 0.0 * angles, np.cos(angles)])])
    faces = np.array([[0, 1 + k, 1 + (k + 1) % 32] for k in range(32)], dtype=np.int32)
    source, used, found = smooth_normals(cone, faces)
    points = cone[source][used]
    flat = np.cross(points[:, 1] - points[:, 0], points[:, 2] - points[:, 0])
    flat /= np.linalg.norm(flat, axis=1, keepdims=True)
    assert np.abs(found[used[:, 0]] - flat).max() < 1e-15


def test_groups_are_positions():
    points = np.array([[0.0, 1.0, 2.0], [3.0, 1.0, 2.0], [-0.0, 1.0, 2.0], [0.0, 1.0, 2.0000000000000004]])
    group, first = position_groups(points)
    assert group[0] == group[2]
    assert len(set(group.tolist())) == 3
    assert sorted(first.tolist()) == [0, 1, 3]


def test_groups_survive_a_hash_that_fails(monkeypatch):
    monkeypatch.setattr(positions, "MIX", np.zeros(3, dtype=np.uint64))
    points = np.random.default_rng(3).integers(0, 4, (500, 3)).astype(np.float64)
    group, first = position_groups(points)
    assert np.array_equal(points[first[group]], points)
    assert len(first) == len(np.unique(points, axis=0))
    slow, _ = groups_by_sorting(np.ascontiguousarray(points).view(np.uint64))
    assert np.array_equal(slow, group)
