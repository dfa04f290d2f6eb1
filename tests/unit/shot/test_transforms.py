"""Matrices: turned about x, then y, then z; keyed by their parts; the same bits everywhere."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from renderer.shot import transforms
from renderer.shot.keyed import Keys
from renderer.shot.schema.objects import Transform

ANGLES = st.floats(-1000.0, 1000.0)


def test_multiples_of_90_are_exact() -> None:
    assert transforms.rotation((0.0, 90.0, 0.0)) == (0.0, 0.0, 1.0, 0.0, 1.0, 0.0, -1.0, 0.0, 0.0)
    assert transforms.rotation((-90.0, 0.0, 180.0)) == (-1.0, 0.0, 0.0, 0.0, 0.0, -1.0, 0.0, -1.0, 0.0)


def about(axis: int, angle: float) -> np.ndarray:
    """A right-handed turn about an axis, by the book."""
    c, s = math.cos(math.radians(angle)), math.sin(math.radians(angle))
    i, j = [(1, 2), (2, 0), (0, 1)][axis]
    found = np.eye(3)
    found[i, i], found[i, j], found[j, i], found[j, j] = c, -s, s, c
    return found


@given(ANGLES, ANGLES, ANGLES)
def test_rotation_is_x_then_y_then_z(x: float, y: float, z: float) -> None:
    expected = about(2, z) @ about(1, y) @ about(0, x)
    assert np.allclose(np.reshape(transforms.rotation((x, y, z)), (3, 3)), expected, atol=1e-12)


def test_scaled_then_turned_then_moved() -> None:
    transform = Transform.model_validate({"translation": [1, 2, 3], "rotation": [0, 0, 90], "scale": [2, 1, 1]})
    m = np.reshape(transforms.transform_at(transform, 1.0, 0.01), (3, 4))
    assert (m @ [1.0, 0.0, 0.0, 1.0]).tolist() == [0.01, 2.02, 0.03]


@given(st.lists(st.floats(-3, 3), min_size=9, max_size=9), st.lists(st.floats(-9, 9), min_size=3, max_size=3))
def test_taken_apart_and_put_together(square: list[float], moved: list[float]) -> None:
    if abs(np.linalg.det(np.reshape(square, (3, 3)))) < 1e-2:
        return
    m = transforms.joined(tuple(square), tuple(moved))
    parts = transforms.taken_apart(m)
    turned = transforms.of_quaternion(parts[:4])
    assert np.allclose(transforms.joined(transforms.times(turned, parts[4:13]), parts[13:]), m, atol=1e-9)
    scale = np.reshape(parts[4:13], (3, 3))
    assert np.allclose(scale, scale.T, atol=1e-9)


def keyed_turns(angle: float) -> Keys:
    """A matrix keyed from no turn to a turn about y."""
    end = np.eye(4)
    end[:3, :3] = about(1, angle)
    end[:3, 3] = (4.0, 0.0, 0.0)
    return Keys((1, 3), (tuple(np.eye(4).ravel()), tuple(end.ravel())))


@pytest.mark.parametrize(("angle", "halfway"), [(90.0, 45.0), (170.0, 85.0), (200.0, -80.0)])
def test_a_keyed_matrix_turns_the_short_way_and_keeps_its_size(angle: float, halfway: float) -> None:
    m = np.reshape(transforms.matrix_at(keyed_turns(angle), 2.0, 0.5), (3, 4))
    assert np.allclose(m[:, :3], about(1, halfway), atol=1e-12)
    assert m[:, 3].tolist() == [1.0, 0.0, 0.0]


def test_a_keyed_mirror_stays_a_mirror() -> None:
    mirror = tuple(np.diag([-1.0, 1.0, 1.0, 1.0]).ravel())
    grown = tuple(np.diag([-3.0, 3.0, 3.0, 1.0]).ravel())
    m = np.reshape(transforms.matrix_at(Keys((1, 3), (mirror, grown)), 2.0, 1.0), (3, 4))
    assert np.allclose(m[:, :3], np.diag([-2.0, 2.0, 2.0]), atol=1e-12)


def test_at_a_key_the_matrix_is_the_keys_own() -> None:
    keys = keyed_turns(33.0)
    assert transforms.matrix_at(keys, 3.0, 1.0) == keys.values[1][:12]


def test_unit_of_tiny_and_huge_vectors() -> None:
    assert transforms.unit((3e-300, 0.0, 4e-300)) == (0.6, 0.0, 0.8)
    assert transforms.unit((3e300, 0.0, 4e300)) == (0.6, 0.0, 0.8)
