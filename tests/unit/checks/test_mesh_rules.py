"""Rules about meshes, on files written here: each fault is made, found, mended by its fix and found no more."""

from __future__ import annotations

import time
from dataclasses import replace
from pathlib import Path

import frame_builder as build
import numpy as np
import pytest
import trimesh

from renderer.arrays.assets import TriangleAsset
from renderer.checks.facts import Facts
from renderer.checks.findings import ADVICE, IMPLAUSIBLE, IMPOSSIBLE, Finding
from renderer.checks.gap_measure import first_faces, measure_fit, surface_samples
from renderer.checks.mesh_gap import check_gap
from renderer.checks.mesh_rules import check_clean, check_normals, check_watertight
from renderer.checks.mesh_scale import check_scale, longest_side_m
from renderer.checks.view import FrameView
from renderer.shot.model import Material, Object

WATER = Material("water", "water", 20.0, 0.0, None, None)


def ask(rule: object, *objects: Object) -> list[Finding]:
    return list(rule(FrameView(build.frame(objects=objects)), Facts()))


def box_file(
    folder: Path, extents: tuple[float, float, float] = (0.2, 0.2, 0.2), drop: int = 0, flip: object = ()
) -> Path:
    """A box as PLY, with `drop` faces left out and the faces `flip` turned round."""
    mesh = trimesh.creation.box(extents)
    faces = np.array(mesh.faces)
    faces[list(flip)] = faces[list(flip)][:, ::-1]
    path = folder / f"box-{drop}-{len(list(flip))}-{extents[0]}.ply"
    trimesh.Trimesh(mesh.vertices, faces[drop:], process=False).export(path)
    return path


def test_a_closed_box_is_right(tmp_path: Path) -> None:
    item = build.mesh_object(box_file(tmp_path))
    for rule in (check_watertight, check_normals, check_clean, check_gap, check_scale):
        assert ask(rule, item) == []


def test_a_hole_is_found_and_counted(tmp_path: Path) -> None:
    (found,) = ask(check_watertight, build.mesh_object(box_file(tmp_path, drop=1)))
    assert (found.severity, found.measured, found.expected) == (IMPOSSIBLE, 3, 0)


def test_a_single_sheet_is_told_to_be_a_pane(tmp_path: Path) -> None:
    path = tmp_path / "sheet.ply"
    trimesh.Trimesh([[0, 0, 0], [1, 0, 0], [1, 1, 0], [0, 1, 0]], [[0, 1, 2], [0, 2, 3]], process=False).export(path)
    item = build.mesh_object(path)
    (found,) = ask(check_watertight, item)
    assert "single sheet" in found.fix.text
    pane = replace(item, role="pane", thickness_m=found.fix.values["thickness_m"])
    assert ask(check_watertight, pane) == []


def test_a_seam_is_welded(tmp_path: Path) -> None:
    mesh = trimesh.creation.box((0.2, 0.2, 0.2))
    corners = np.array(mesh.triangles.reshape(-1, 3))
    corners[:3] += 2e-7  # one triangle a hair off
    path = tmp_path / "seam.ply"
    trimesh.Trimesh(corners, np.arange(len(corners)).reshape(-1, 3), process=False).export(path)
    (found,) = ask(check_watertight, build.mesh_object(path))
    assert "Merge vertices" in found.fix.text
    welded = trimesh.Trimesh(
        np.round(corners / 1e-6) * 1e-6, mesh.faces * 0 + np.arange(36).reshape(-1, 3), process=False
    )
    welded.export(tmp_path / "welded.ply")
    assert ask(check_watertight, build.mesh_object(tmp_path / "welded.ply")) == []


def test_an_opaque_mesh_may_be_open(tmp_path: Path) -> None:
    item = replace(build.mesh_object(box_file(tmp_path, drop=1)), role="opaque", material=None, surface=build.paint())
    assert ask(check_watertight, item) == []
    assert ask(check_normals, item) == []


def test_inside_out_and_mixed_windings_are_told_apart(tmp_path: Path) -> None:
    (inward,) = ask(check_normals, build.mesh_object(box_file(tmp_path, flip=range(12))))
    assert (inward.title, inward.severity) == ("Solid is inside out", IMPOSSIBLE)
    (mixed,) = ask(check_normals, build.mesh_object(box_file(tmp_path, flip=(0,))))
    assert (mixed.title, mixed.measured) == ("Faces wound both ways", 3)


def test_stored_normals_that_point_in_are_found_for_smooth_objects_alone(tmp_path: Path) -> None:
    mesh = trimesh.creation.icosphere(2, 0.1)
    path = tmp_path / "ball.ply"
    trimesh.Trimesh(mesh.vertices, mesh.faces, vertex_normals=-mesh.vertices / 0.1, process=False).export(
        path, vertex_normal=True
    )
    item = build.mesh_object(path)
    assert ask(check_normals, item) == []
    (found,) = ask(check_normals, replace(item, smooth=True))
    assert (found.severity, found.measured) == (IMPLAUSIBLE, 3 * len(mesh.faces))
    assert ask(check_normals, replace(item, smooth=found.fix.values["objects.block.smooth"])) == []


def test_a_water_surface_must_face_up() -> None:
    lake = build.shape_object("lake", "water_surface", WATER, role="sheet", size=(4.0, 4.0), cells=(4, 4))
    assert ask(check_normals, lake) == []
    turned = np.array([[[1.0, 0, 0, 0], [0, -1.0, 0, 0], [0, 0, -1.0, 0]]])
    (found,) = ask(check_normals, replace(lake, matrices=turned))
    assert (found.title, found.severity) == ("Water surface faces down", IMPOSSIBLE)
    mirrored = np.array([[[1.0, 0, 0, 0], [0, -1.0, 0, 0], [0, 0, 1.0, 0]]])
    assert len(ask(check_normals, replace(lake, matrices=mirrored))) == 1


def test_faces_without_area_are_advice_and_doubled_faces_are_not(tmp_path: Path) -> None:
    mesh = trimesh.creation.box((0.2, 0.2, 0.2))
    for name, extra in (("thin", [[0, 0, 1]]), ("twice", mesh.faces[:1])):
        trimesh.Trimesh(mesh.vertices, np.vstack([mesh.faces, extra]), process=False).export(tmp_path / f"{name}.ply")
    thin = ask(check_clean, build.mesh_object(tmp_path / "thin.ply"))
    assert [(found.severity, found.measured) for found in thin] == [(ADVICE, 1)]
    twice = ask(check_clean, build.mesh_object(tmp_path / "twice.ply"))
    assert [(found.severity, found.measured) for found in twice] == [(IMPLAUSIBLE, 1)]


@pytest.mark.parametrize(
    ("name", "side", "flagged"),
    [
        ("tumbler", 0.12, False), ("tumbler", 40.0, True), ("tumbler", 0.019, True), ("lens front", 1e-5, True),
        ("lens front", 0.05, False), ("rain drop", 0.02, True), ("rain drop", 0.002, False), ("block", 59.0, False),
        ("block", 61.0, True), ("block", 4e-5, True),
    ],
)  # fmt: skip
def test_sizes_by_what_a_thing_is(name: str, side: float, flagged: bool) -> None:
    item = build.shape_object(name, material=build.glass(), size=(side, side / 2, side / 2))
    found = ask(check_scale, item)
    assert bool(found) == flagged
    for finding in found:
        scaled = replace(item, matrices=item.matrices * float(finding.fix.values["scale_by"]))
        assert ask(check_scale, scaled) == []
        assert finding.why
        assert finding.source


def test_a_mesh_in_millimetres_is_recognised(tmp_path: Path) -> None:
    """120 units tall, read as metres: only millimetres make a tumbler of it."""
    item = build.mesh_object(box_file(tmp_path, (80.0, 120.0, 80.0)), "tumbler")
    (found,) = ask(check_scale, item)
    assert found.measured == 120.0
    assert found.fix.values["objects.tumbler.mesh_unit"] == "mm"
    mended = replace(item, metres_per_unit=item.metres_per_unit * found.fix.values["scale_by"])
    assert longest_side_m(mended, Facts()) == pytest.approx(0.12)
    assert ask(check_scale, mended) == []


def test_water_may_be_as_large_as_a_lake() -> None:
    lake = build.shape_object("basin floor", material=WATER, size=(5000.0, 3.0, 900.0))
    assert [found.rule for found in ask(check_scale, lake)] == ["mesh.scale"]  # a basin is at most 60 m
    assert ask(check_scale, replace(lake, name="reach above the weir")) == []


def tank(wall: float = 0.01, priority: int = 0) -> Object:
    """An open glass tank of the built-in shape, 30 x 20 x 20 cm outside."""
    return build.shape_object(
        "tank", "tank", build.glass("tank glass"), priority=priority, size=(0.3, 0.2, 0.2), wall=wall, fill=0.0
    )


def filling(inset: float, priority: int = 0) -> Object:
    """The water in that tank, its sides and bottom `inset` from the inner glass, 15 cm high."""
    width, depth, height = 0.28 - 2 * inset, 0.18 - 2 * inset, 0.15 - inset
    matrices = np.eye(3, 4)[None].copy()
    matrices[0, 1, 3] = -0.09 + inset + height / 2
    item = build.shape_object("water", "box", WATER, priority=priority, size=(width, height, depth))
    return replace(item, matrices=matrices)


@pytest.mark.parametrize(
    ("inset", "flagged"), [(0.0005, True), (1e-5, True), (0.0, False), (-0.004, False), (0.05, False)]
)
def test_a_film_of_air_is_found(inset: float, flagged: bool) -> None:
    found = ask(check_gap, tank(priority=2), filling(inset))
    assert [item.title for item in found] == (["Air between glass and its filling"] if flagged else [])
    if flagged:
        assert found[0].measured == pytest.approx(inset, rel=0.02)
        assert 0.0 < inset < found[0].fix.values["grow_by_m"]
        mended = filling(inset - found[0].fix.values["grow_by_m"])
        assert ask(check_gap, tank(priority=found[0].fix.values["objects.tank.overlap_priority"]), mended) == []


def test_a_filling_that_wins_over_its_glass_is_found() -> None:
    assert ask(check_gap, tank(priority=1), filling(-0.004)) == []
    (found,) = ask(check_gap, tank(), filling(-0.004))  # of two equal priorities the later object wins
    assert found.title == "Filling cuts into its glass"
    assert ask(check_gap, tank(priority=found.fix.values["objects.tank.overlap_priority"]), filling(-0.004)) == []


def test_the_built_in_filling_fits_the_built_in_tank() -> None:
    sizes = {"size": (0.3, 0.2, 0.2), "wall": 0.01, "fill": 0.8}
    water = build.shape_object("water", "tank_filling", WATER, **sizes)
    assert ask(check_gap, tank(priority=1), water) == []


def test_a_stone_on_the_bottom_is_no_filling() -> None:
    stone = build.shape_object("stone", "box", build.glass("quartz"), size=(0.02, 0.02, 0.02))
    matrices = np.eye(3, 4)[None].copy()
    matrices[0, 1, 3] = -0.09 + 0.01 + 1e-4  # a tenth of a millimetre above the glass, with one side of six
    assert ask(check_gap, tank(), replace(stone, matrices=matrices)) == []


def test_a_fit_is_measured_once_for_all_frames(monkeypatch: pytest.MonkeyPatch) -> None:
    from renderer.checks import facts as facts_module

    calls: list[int] = []
    once = facts_module._fit
    monkeypatch.setattr(facts_module, "_fit", lambda *given: calls.append(1) or once(*given))
    facts = Facts()
    for k in range(5):
        for rule in (check_gap, check_watertight, check_scale):
            list(rule(FrameView(build.frame(k, objects=(tank(priority=1), filling(0.001)))), facts))
    assert len(calls) == 1


def test_a_shelf_of_glasses_takes_no_time() -> None:
    """A thousand tumblers of one material beside each other have nothing in each other."""
    glass = build.glass()
    shelf = []
    for k in range(1000):
        matrices = np.eye(3, 4)[None].copy()
        matrices[0, :, 3] = (0.2 * (k % 40), 0.0, 0.2 * (k // 40))
        shelf.append(replace(build.shape_object(f"tumbler[{k}]", material=glass), matrices=matrices))
    start = time.process_time()
    assert ask(check_gap, *shelf) == []
    assert time.process_time() - start < 2.0


def test_samples_lie_on_the_surface_and_rays_find_it() -> None:
    mesh = trimesh.creation.icosphere(3, 1.0)
    ball = TriangleAsset(np.array(mesh.vertices), np.array(mesh.faces, np.int32), np.zeros((0, 3)), np.zeros((0, 2)))
    points, normals = surface_samples(ball, 500)
    assert np.linalg.norm(points, axis=1) == pytest.approx(np.ones(500), abs=0.02)
    assert (points * normals).sum(axis=1).min() > 0.97
    assert abs(points.mean(axis=0)).max() < 0.03  # spread evenly
    distance, front = first_faces(2.0 * points, -points, mesh.triangles)
    assert distance == pytest.approx(np.ones(500), abs=1e-9)
    assert front.all()
    distance, front = first_faces(0.0 * points, points, mesh.triangles)
    assert not front.any()


def test_a_ball_in_a_shell_measures_its_film() -> None:
    def shell(radius: float, inward: bool = False) -> tuple[np.ndarray, np.ndarray]:
        mesh = trimesh.creation.icosphere(4, radius)
        return np.array(mesh.vertices), np.array(mesh.faces[:, ::-1] if inward else mesh.faces, np.int32)

    outer, inner = shell(1.1), shell(1.0, inward=True)
    vessel = TriangleAsset(
        np.vstack([outer[0], inner[0]]),
        np.vstack([outer[1], inner[1] + len(outer[0])]),
        np.zeros((0, 3)),
        np.zeros((0, 2)),
    )
    for radius, share in ((0.99, "film_share"), (1.05, "inside_share")):
        fit = measure_fit(vessel, TriangleAsset(*shell(radius), np.zeros((0, 3)), np.zeros((0, 2))))
        assert getattr(fit, share) == 1.0
    fit = measure_fit(vessel, TriangleAsset(*shell(0.99), np.zeros((0, 3)), np.zeros((0, 2))))
    assert fit.film_m[0] == pytest.approx(0.01, rel=0.01)
