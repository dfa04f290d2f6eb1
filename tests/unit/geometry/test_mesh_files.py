"""Reading meshes: every format gives the same cube, transforms and names hold, nothing is merged, moved or mirrored."""

from __future__ import annotations

import json

import numpy as np
import pytest

from renderer.base.errors import InputError
from renderer.geometry.inspection import inspect_mesh
from renderer.geometry.mesh_files import load_mesh, load_parts
from tests.unit.geometry.mesh_writing import CUBE_FACES, CUBE_POINTS, glb, gltf_header, obj, ply, stl


def one(path, **options):
    (asset,) = load_mesh(path, **options)
    return asset


def cube_glb(path, nodes=({"mesh": 0},), **arrays):
    return glb(path, *gltf_header(CUBE_POINTS, CUBE_FACES, list(nodes), **arrays))


WRITERS = {
    "ply": lambda path: ply(path, CUBE_POINTS, CUBE_FACES),
    "stl": lambda path: stl(path, CUBE_POINTS, CUBE_FACES),
    "obj": lambda path: obj(path, CUBE_POINTS, CUBE_FACES),
    "glb": cube_glb,
}


@pytest.mark.parametrize("kind", WRITERS)
def test_every_format_gives_the_cube(tmp_path, kind):
    asset = one(WRITERS[kind](tmp_path / f"cube.{kind}"), metres_per_unit=0.01)
    found = inspect_mesh(asset)
    assert (found.watertight, found.consistent, found.outward, found.n_faces) == (True, True, True, 12)
    assert found.volume_m3 == pytest.approx(1e-6, rel=1e-12)
    assert asset.vertices_m.dtype == np.float64
    assert asset.faces.dtype == np.int32
    assert len(asset.vertices_m) == 8
    assert asset.vertex_normals.shape == (0, 3)
    assert not asset.vertices_m.flags.writeable


def test_text_formats_and_polygons(tmp_path):
    square = "v 0 0 0\nv 1 0 0\nv 1 1 0\nv 0 1 0\n"
    (tmp_path / "quad.obj").write_text(square + "f 1 2 3 4\n", encoding="utf-8")
    assert one(tmp_path / "quad.obj").faces.shape == (2, 3)
    (tmp_path / "mixed.obj").write_text(square + "v 2 0 0\nf 1 2 3 4\nf 2 5 3\nf -4 -3 -2\n", encoding="utf-8")
    assert one(tmp_path / "mixed.obj").faces.shape == (4, 3)
    head = "ply\nformat ascii 1.0\nelement vertex 4\nproperty float x\nproperty float y\nproperty float z\n"
    head += "element face 1\nproperty list uchar int vertex_index\nend_header\n0 0 0\n1 0 0\n1 1 0\n0 1 0\n4 0 1 2 3\n"
    (tmp_path / "quad.ply").write_text(head, encoding="utf-8")
    assert one(tmp_path / "quad.ply").faces.shape == (2, 3)
    facet = "facet normal 0 0 1\nouter loop\nvertex 0 0 0\nvertex 1 0 0\nvertex 0 1 0\nendloop\nendfacet\n"
    (tmp_path / "text.stl").write_text(f"solid a\n{facet}endsolid a\n", encoding="utf-8")
    assert (
        one(tmp_path / "text.stl").vertices_m.tolist() == [[0, 0, 0], [0, 1, 0], [1, 0, 0]]
        or len(one(tmp_path / "text.stl").vertices_m) == 3
    )


def mixed_ply(path, order="<", cut=0):
    """A cube of one quad and the rest triangles, with a number before and after each list."""
    faces = [[0, 1, 3, 2], *CUBE_FACES[2:].tolist()]
    name = "little" if order == "<" else "big"
    head = f"ply\nformat binary_{name}_endian 1.0\nelement vertex 8\n"
    head += "".join(f"property double {axis}\n" for axis in ("x", "y", "z", "nx", "ny", "nz", "u", "v"))
    head += f"element face {len(faces)}\nproperty uchar flag\nproperty list uchar uint vertex_indices\n"
    head += "property float weight\nend_header\n"
    outward = (CUBE_POINTS - 0.5) / 0.75**0.5
    rows = np.hstack([CUBE_POINTS, outward, CUBE_POINTS[:, :2]]).astype(order + "f8").tobytes()
    body = b"".join(
        b"\7" + bytes([len(f)]) + np.array(f, order + "u4").tobytes() + np.array([1.0], order + "f4").tobytes()
        for f in faces
    )
    content = head.encode() + rows + body
    path.write_bytes(content[: len(content) - cut])
    return path


@pytest.mark.parametrize("order", ["<", ">"])
def test_binary_ply_with_triangles_and_quads(tmp_path, order):
    asset = one(mixed_ply(tmp_path / "mixed.ply", order), smooth=True)
    found = inspect_mesh(asset)
    assert (found.watertight, found.outward, found.n_faces, found.n_normals_against) == (True, True, 12, 0)
    assert np.array_equal(asset.uvs, CUBE_POINTS[:, :2])


def test_binary_ply_of_polygons_cut_short(tmp_path):
    with pytest.raises(InputError, match="cut short, or broken at face 10"):
        one(mixed_ply(tmp_path / "mixed.ply", cut=3))


def test_gltf_with_its_buffer_beside_it(tmp_path):
    header, blob = gltf_header(CUBE_POINTS, CUBE_FACES, [{"mesh": 0}])
    header["buffers"][0]["uri"] = "cube%20data.bin"
    (tmp_path / "cube data.bin").write_bytes(blob)
    (tmp_path / "cube.gltf").write_text(json.dumps(header), encoding="utf-8")
    assert inspect_mesh(one(tmp_path / "cube.gltf")).watertight


def test_nodes_are_placed_by_all_the_matrices_above_them(tmp_path):
    nodes = [
        {"name": "arm", "translation": [10.0, 0.0, 0.0], "children": [1, 2]},
        {"name": "near", "mesh": 0, "scale": [2.0, 2.0, 2.0]},
        {"name": "far", "mesh": 0, "translation": [0.0, 5.0, 0.0], "rotation": [0.0, 0.0, 2**-0.5, 2**-0.5]},
    ]
    path = cube_glb(tmp_path / "arm.glb", nodes)
    parts = {part.name: part for part in load_parts(path, metres_per_unit=0.5)}
    assert parts["near"].asset is parts["far"].asset  # two placings share their triangles
    placed = {
        part.name: asset
        for part, asset in zip(load_parts(path, metres_per_unit=0.5), load_mesh(path, metres_per_unit=0.5), strict=True)
    }
    assert placed["near"].vertices_m.min(axis=0).tolist() == [5.0, 0.0, 0.0]
    assert placed["near"].vertices_m.max(axis=0).tolist() == [6.0, 1.0, 1.0]
    assert placed["far"].vertices_m.min(axis=0).tolist() == pytest.approx([4.5, 2.5, 0.0])  # a quarter turn about z
    assert placed["far"].vertices_m.max(axis=0).tolist() == pytest.approx([5.0, 3.0, 0.5])


def test_parts_are_chosen_by_their_name_or_that_of_a_node_above(tmp_path):
    nodes = [{"name": "arm", "children": [1]}, {"name": "hand", "mesh": 0}, {"name": "lamp", "mesh": 0}]
    path = cube_glb(tmp_path / "arm.glb", nodes)
    assert [part.name for part in load_parts(path, ("arm",))] == ["hand"]
    assert [part.name for part in load_parts(path, ("lamp",))] == ["lamp"]
    assert len(load_parts(path, ("cube",))) == 2  # the mesh's own name
    with pytest.raises(InputError, match=r'no part named "lmap"(.|\n)*nearest: +lamp'):
        load_parts(path, ("lmap",))


def test_mirrored_nodes_keep_outward_faces_and_normals(tmp_path):
    """A node of negative scale turns a mesh inside out unless its winding turns with it."""
    outward = (CUBE_POINTS - 0.5) / 0.75**0.5
    nodes = [{"mesh": 0, "scale": [-1.0, 2.0, 1.0]}]
    (asset,) = load_mesh(cube_glb(tmp_path / "mirror.glb", nodes, normals=outward), smooth=True)
    found = inspect_mesh(asset)
    assert found.outward
    assert found.n_normals_against == 0
    middle = asset.vertices_m.mean(axis=0)
    assert ((asset.vertices_m - middle) * asset.vertex_normals > 0.0).all()
    a, b = asset.vertex_normals[0], np.array([1.0, 0.5, 1.0]) / np.linalg.norm([1.0, 0.5, 1.0])
    assert np.abs(a) == pytest.approx(b, abs=1e-6)  # by the inverse transpose, not by the matrix


def test_normals_and_uvs_of_files_are_kept(tmp_path):
    normals = np.tile([0.0, 0.6, 0.8], (8, 1))
    uvs = CUBE_POINTS[:, :2] * 0.25
    for path in (
        ply(tmp_path / "a.ply", CUBE_POINTS, CUBE_FACES, normals, uvs),
        cube_glb(tmp_path / "a.glb", normals=normals, uvs=uvs * (1.0, -1.0) + (0.0, 1.0)),  # glTF counts v downward
    ):
        asset = one(path, smooth=True)
        if path.suffix == ".glb":
            assert asset.vertex_normals == pytest.approx(np.tile([0.0, 0.6, 0.8], (8, 1)), abs=1e-7)
        order = np.lexsort(asset.vertices_m.T[::-1])
        assert asset.uvs[order] == pytest.approx(asset.vertices_m[order][:, :2] * 0.25, abs=1e-7)
        assert one(path, smooth=False).vertex_normals.shape == (0, 3)
    extra = "vt 0 0\nvt 1 0\nvt 0.5 1\nvn 0 0 1\nf 1/1/1 3/2/1 2/3/1\n"
    asset = one(obj(tmp_path / "a.obj", CUBE_POINTS, [], extra), smooth=True)
    assert sorted(asset.uvs.tolist()) == [[0.0, 0.0], [0.5, 1.0], [1.0, 0.0]]
    assert asset.vertex_normals.tolist() == [[0.0, 0.0, 1.0]] * 3


def test_unusable_normals_are_computed_instead(tmp_path):
    normals = np.tile([0.0, 0.0, 1.0], (8, 1))
    normals[3] = np.nan
    asset = one(cube_glb(tmp_path / "nan.glb", normals=normals), smooth=True)
    assert np.isfinite(asset.vertex_normals).all()
    assert inspect_mesh(asset).n_normals_against == 0


def test_vertices_that_no_face_uses_may_be_anything(tmp_path):
    points = np.vstack([CUBE_POINTS, [[np.nan, np.inf, 0.0]]])
    asset = one(ply(tmp_path / "spare.ply", points, CUBE_FACES))
    assert np.isfinite(asset.vertices_m).all()
    assert inspect_mesh(asset).high_m == (1.0, 1.0, 1.0)


def test_frames_of_a_sequence_may_change_their_triangles(tmp_path):
    first = one(ply(tmp_path / "a.1001.ply", CUBE_POINTS, CUBE_FACES))
    second = one(ply(tmp_path / "a.1002.ply", CUBE_POINTS[:4], CUBE_FACES[:2]))
    assert (len(first.faces), len(second.faces)) == (12, 2)
