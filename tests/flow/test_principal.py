"""Principal values and directions: against a general solver, exact axes, chosen orientation."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose, assert_array_equal
from scipy.spatial.transform import Rotation

from forebay.flow.principal import principal_axes

EPS = np.finfo(float).eps

numbers = st.floats(-10.0, 10.0).filter(lambda value: value == 0.0 or abs(value) > 1e-9)
tensors = st.lists(numbers, min_size=6, max_size=6).map(
    lambda v: np.array([[v[0], v[1], v[2]], [v[1], v[3], v[4]], [v[2], v[4], v[5]]])
)
turns = st.lists(st.floats(-3.0, 3.0), min_size=3, max_size=3).map(
    lambda v: Rotation.from_rotvec(v).as_matrix()
)


def axes_of(tensor):
    found = principal_axes(np.array([tensor], dtype=float))
    return found.values[0], found.directions[0]


@given(tensors)
def test_values_and_directions_rebuild_the_tensor(tensor):
    values, directions = axes_of(tensor)
    assert_allclose(directions.T @ np.diag(values) @ directions, tensor, rtol=0, atol=1e-13)  # 10 x 60 eps
    assert (np.diff(values) <= 0.0).all()


@given(tensors)
def test_directions_are_a_right_handed_orthonormal_set(tensor):
    _, directions = axes_of(tensor)
    assert_allclose(directions @ directions.T, np.eye(3), rtol=0, atol=40 * EPS)
    assert_allclose(np.linalg.det(directions), 1.0, rtol=0, atol=40 * EPS)


@given(tensors)
def test_largest_component_of_the_first_two_directions_is_positive(tensor):
    _, directions = axes_of(tensor)
    for direction in directions[:2]:
        assert direction[np.argmax(np.abs(direction) >= (1 - 1e-9) * np.abs(direction).max())] > 0.0


@given(tensors, turns)
def test_values_do_not_depend_on_the_axes(tensor, turn):
    turned = turn @ tensor @ turn.T
    assert_allclose(axes_of(0.5 * (turned + turned.T))[0], axes_of(tensor)[0], rtol=0, atol=2e-13)


@given(numbers, numbers, numbers, numbers)
def test_plane_and_general_route_agree(a, b, c, d):
    values, _ = axes_of([[a, b, 0], [b, c, 0], [0, 0, d]])
    general = np.linalg.eigvalsh(np.array([[a, b, 0], [b, c, 0], [0, 0, d]]))[::-1]
    assert_allclose(values, general, rtol=0, atol=64 * EPS * max(1.0, np.abs(general).max()))


@pytest.mark.parametrize(
    ("tensor", "expected"),
    [
        pytest.param(np.diag([3.0, 2.0, 1.0]), np.eye(3), id="descending"),
        pytest.param(np.diag([2.0, 3.0, 1.0]), [[0, 1, 0], [1, 0, 0], [0, 0, -1]], id="y first"),
        pytest.param(np.diag([-1.0, -1.0, 4.0]), [[0, 0, 1], [1, 0, 0], [0, 1, 0]], id="vertical first"),
        pytest.param(np.zeros((3, 3)), np.eye(3), id="nothing"),
        pytest.param(5.0 * np.eye(3), np.eye(3), id="isotropic"),
    ],
)
def test_axes_of_diagonal_tensors_are_exact(tensor, expected):
    assert_array_equal(axes_of(tensor)[1], expected)


def test_pure_shear_lies_at_45_degrees():
    values, directions = axes_of([[0, 5, 0], [5, 0, 0], [0, 0, 0]])
    assert_array_equal(values, [5.0, 0.0, -5.0])
    half = np.sqrt(0.5)
    assert_allclose(directions, [[half, half, 0], [0, 0, 1], [half, -half, 0]], rtol=0, atol=2 * EPS)


def test_negative_shear_lies_at_minus_45_degrees():
    half = np.sqrt(0.5)
    assert_allclose(axes_of([[0, -5, 0], [-5, 0, 0], [0, 0, 0]])[1][0], [half, -half, 0], atol=2 * EPS)


def test_small_shear_keeps_its_digits():
    # tan(2 angle) = 2e-12: the angle is 1e-12 to twelve digits, which 1 - cos would lose
    direction = axes_of([[1, 1e-12, 0], [1e-12, 0, 0], [0, 0, -1]])[1][0]
    assert_allclose(direction[1], 1e-12, rtol=1e-12)


@pytest.mark.parametrize("axis", [[1, 2, 3], [1, 1, 1], [3, -1, 2]], ids=str)
@pytest.mark.parametrize("sign", [1.0, -1.0], ids=["stretched", "squeezed"])
def test_double_value_gets_chosen_directions(axis, sign):
    unit = np.array(axis) / np.linalg.norm(axis)
    tensor = sign * np.outer(unit, unit)
    values, directions = axes_of(tensor)
    single = 0 if sign > 0 else 2
    assert_allclose(np.abs(directions[single] @ unit), 1.0, rtol=0, atol=4 * EPS)
    assert_allclose(np.sort(values), np.sort([sign, 0, 0]), atol=8 * EPS)
    again = axes_of(tensor * 0.3)[
        1
    ]  # a scaled copy may be decomposed otherwise, but is oriented the same way
    assert_allclose(again, directions, rtol=0, atol=1e-7)


def test_no_tensors_give_no_axes():
    found = principal_axes(np.empty((0, 3, 3)))
    assert found.values.shape == (0, 3)
    assert found.directions.shape == (0, 3, 3)


def test_many_tensors_are_taken_at_once():
    stack = np.array(
        [np.diag([1.0, 2, 3]), [[1, 2, 3], [2, 0, 1], [3, 1, -1]], [[0, 1, 0], [1, 0, 0], [0, 0, 9]]]
    )
    found = principal_axes(stack)
    for n, tensor in enumerate(stack):
        values, directions = axes_of(tensor)
        assert_allclose(found.values[n], values, atol=8 * EPS)
        assert_allclose(found.directions[n], directions, atol=8 * EPS)
