"""Objects become assets and placements: shared where they are the same, apart where they shine."""

from __future__ import annotations

import numpy as np
import pytest

from renderer.arrays.assets import SphereAsset, TriangleAsset
from renderer.base.errors import InputError
from renderer.frames.scene_shapes import Placing, bounds, even
from renderer.shot.model import Shape
from tests.unit.frames.shot_values import placed, thing
from tests.unit.geometry.mesh_writing import CUBE_FACES, CUBE_POINTS, glb, gltf_header, ply

BALL = Shape("sphere", {"radius": 0.5})


def all_placed(*items):
    placing = Placing(items)
    for object_id in range(len(items)):
        placing.add(object_id)
    return placing


def test_one_mesh_placed_many_times_is_loaded_once(tmp_path):
    path = ply(tmp_path / "cube.ply", CUBE_POINTS, CUBE_FACES)
    items = [thing(str(k), mesh=path, matrices=placed(float(k), 0.0, 0.0)) for k in range(5)]
    placing = all_placed(*items, thing("big", mesh=path, metres_per_unit=10.0))
    assert len(placing.assets) == 2  # another unit is another mesh
    assert [place.asset for place in placing.placements] == [0, 0, 0, 0, 0, 1]
    assert [place.object_id for place in placing.placements] == [0, 1, 2, 3, 4, 5]
    assert placing.placements[3].matrices[0, :, 3].tolist() == [3.0, 0.0, 0.0]
    assert placing.count() == 24


def test_equal_shapes_are_one_asset():
    placing = all_placed(thing(), thing(), thing(shape=Shape("box", {"size": (2.0, 1.0, 1.0)})))
    assert [place.asset for place in placing.placements] == [0, 0, 1]


def test_objects_may_take_parts_of_one_file(tmp_path):
    nodes = [{"name": "arm", "mesh": 0, "translation": [5.0, 0.0, 0.0]}, {"name": "leg", "mesh": 0}]
    path = glb(tmp_path / "robot.glb", *gltf_header(CUBE_POINTS, CUBE_FACES, nodes))
    placing = all_placed(
        thing("a", mesh=path, mesh_nodes=("arm",), metres_per_unit=0.5, matrices=placed(0.0, 1.0, 0.0, scale=2.0)),
        thing("b", mesh=path, mesh_nodes=("leg",), metres_per_unit=0.5),
    )
    assert len(placing.files) == 1
    assert len(placing.assets) == 1
    first, second = (place.matrices[0] for place in placing.placements)
    assert first[:, 3].tolist() == [5.0, 1.0, 0.0]  # 5 units are 2.5 m, twice as far in an object of twice the size
    assert first[0, 0] == 2.0
    assert second.tolist() == np.eye(3, 4).tolist()


def test_an_unknown_part_names_the_object(tmp_path):
    path = glb(tmp_path / "robot.glb", *gltf_header(CUBE_POINTS, CUBE_FACES, [{"name": "arm", "mesh": 0}]))
    with pytest.raises(InputError, match=r'no part named "amr"(.|\n)*robot.glb  object hand(.|\n)*nearest: +arm'):
        all_placed(thing("hand", mesh=path, mesh_nodes=("amr",)))


def test_lights_share_no_triangles():
    """Shining triangles are listed by number: two lamps on one mesh would be taken for each other."""
    placing = all_placed(thing(role="light"), thing(role="light"), thing(), thing())
    assert [place.asset for place in placing.placements] == [0, 1, 2, 2]
    assert placing.assets[0].vertices_m is placing.assets[1].vertices_m  # the arrays themselves are


def test_spheres_are_analytic_unless_they_shine_are_stretched_or_carry_a_picture():
    placing = all_placed(
        thing(shape=BALL, role="solid"),
        thing(shape=BALL, matrices=placed(1.0, 2.0, 3.0, scale=-3.0)),
        thing(shape=BALL, matrices=placed(0.0, 0.0, 0.0, scale=(1.0, 2.0, 1.0)), smooth=True),
        thing(shape=BALL, role="light"),
    )
    kinds = [type(placing.assets[place.asset]) for place in placing.placements]
    assert kinds == [SphereAsset, SphereAsset, TriangleAsset, TriangleAsset]
    assert len(placing.assets[placing.placements[3].asset].faces) == 2208
    stretched = placing.assets[placing.placements[2].asset]
    assert np.abs(np.linalg.norm(stretched.vertex_normals, axis=1) - 1.0).max() < 1e-15


def test_even_matrices():
    assert even(placed(1.0, 2.0, 3.0, scale=2.0)[0])
    assert even(placed(1.0, 2.0, 3.0, scale=(1.0, -1.0, 1.0))[0])
    assert not even(placed(1.0, 2.0, 3.0, scale=(1.0, 1.001, 1.0))[0])
    sheared = np.eye(3, 4)
    sheared[0, 1] = 0.01
    assert not even(sheared)


def test_normals_only_where_the_object_is_smooth():
    rod = Shape("cylinder", {"radius": 0.1, "height": 1.0})
    placing = all_placed(thing(shape=rod, smooth=True), thing(shape=rod, smooth=False))
    smooth, flat = (placing.assets[place.asset] for place in placing.placements)
    assert smooth.vertex_normals.shape == smooth.vertices_m.shape
    assert flat.vertex_normals.shape == (0, 3)
    assert flat.vertices_m is smooth.vertices_m or np.array_equal(flat.vertices_m, smooth.vertices_m)


def test_bounds_hold_everything_over_the_whole_shutter():
    moving = np.concatenate([placed(0.0, 0.0, 0.0), placed(7.0, 0.0, 0.0)])
    low, high = bounds(all_placed(thing(matrices=moving), thing(shape=BALL, matrices=placed(0.0, 3.0, 0.0, scale=2.0))))
    assert low.tolist() == [-1.0, -0.5, -1.0]
    assert high.tolist() == [7.5, 4.0, 1.0]
    assert bounds(all_placed())[1].tolist() == [0.0, 0.0, 0.0]


@pytest.mark.parametrize(
    ("matrices", "said"),
    [(placed(0.0, 0.0, 0.0, scale=(1.0, 0.0, 1.0)), "flattens"), (placed(np.nan, 0.0, 0.0), "not finite")],
)
def test_impossible_transforms_name_the_object(matrices, said):
    with pytest.raises(InputError, match=rf"{said}(.|\n)*object pot"):
        all_placed(thing("pot", matrices=matrices))
