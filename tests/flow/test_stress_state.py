"""Stress states: many places at once, statuses, and what a pressure does."""

import numpy as np
import pytest
from numpy.testing import assert_allclose, assert_array_equal

from forebay.flow.stress import Fluid, padded, strain_rate, vorticity
from forebay.flow.stress_state import StrainedPlace, StressStatus, stress_states

WATERY = Fluid(1e-3, 1000.0)


def place(gradient, **more):
    full = padded(gradient)
    return StrainedPlace("a", strain_rate(full), vorticity(full), **more)


def test_general_plane_state():
    # eigenvalues of D: +-sqrt(7.25), so of tau +-2 mu sqrt(7.25)
    state = stress_states(WATERY, (place([[1, 2], [3, -1]]),))[0]
    largest = 2e-3 * np.sqrt(7.25)
    assert state.status is StressStatus.COMPUTED
    assert_allclose(state.principal_stresses, [largest, 0.0, -largest], rtol=1e-14, atol=1e-18)
    assert_allclose([state.max_shear, state.mohr_circle.radius], largest, rtol=1e-14)
    assert_allclose(state.mohr_circle.centre, 0.0, atol=1e-18)
    assert state.plane_vorticity == 1.0
    assert state.dilatation == 0.0
    assert state.mean_velocity_gradient == pytest.approx(5.385165, rel=1e-7)  # printed digits


def test_directions_belong_to_the_stresses():
    state = stress_states(WATERY, (place([[1, 2, 0.5], [3, -1, 2], [1, 1, 4]], pressure=2.0),))[0]
    for value, direction in zip(state.principal_stresses, state.principal_directions, strict=True):
        assert_allclose(state.stress @ direction, value * direction, rtol=0, atol=1e-15)


def test_pressure_shifts_centres_and_nothing_else():
    low = stress_states(WATERY, (place([[1, 2], [3, -1]]),))[0]
    high = stress_states(WATERY, (place([[1, 2], [3, -1]], pressure=1e6),))[0]
    assert_allclose(high.principal_stresses - low.principal_stresses, -1e6, rtol=1e-15)
    assert_allclose(high.mohr_circle.centre - low.mohr_circle.centre, -1e6, rtol=1e-15)
    assert_allclose([c.centre for c in high.mohr_circles], -1e6, rtol=1e-8)
    assert high.mohr_circle.radius == low.mohr_circle.radius
    assert high.max_shear == low.max_shear
    assert_array_equal(high.principal_directions, low.principal_directions)
    assert_allclose(high.stress, low.viscous_stress - 1e6 * np.eye(3), rtol=1e-15)


def test_largest_circle_spans_the_others():
    circles = stress_states(WATERY, (place([[1, 2, 0.5], [3, -1, 2], [1, 1, 4]]),))[0].mohr_circles
    assert_allclose(circles[0].radius, circles[1].radius + circles[2].radius, rtol=1e-14)


def test_states_do_not_influence_each_other():
    gradients = [[[1, 2], [3, -1]], [[0, 10], [0, 0]], [[0, -3], [3, 0]]]
    together = stress_states(WATERY, tuple(place(gradient) for gradient in gradients))
    for state, gradient in zip(together, gradients, strict=True):
        alone = stress_states(WATERY, (place(gradient),))[0]
        assert_array_equal(state.stress, alone.stress)
        assert state.dissipation == alone.dissipation


def test_overflow_is_a_status():
    states = stress_states(WATERY, (place([[1e200, 0], [0, -1e200]]), place([[1, 2], [3, -1]])))
    assert states[0].status is StressStatus.OUT_OF_RANGE
    assert states[1].status is StressStatus.COMPUTED
    assert np.isnan(states[0].stress).all()
    assert np.isnan(states[0].principal_directions).all()
    assert np.isnan([states[0].dissipation, states[0].mean_velocity_gradient, states[0].dilatation]).all()
    assert not np.isnan(states[1].stress).any()


def test_place_without_flow_keeps_its_status():
    nowhere = StrainedPlace("b", np.full((3, 3), np.nan), np.full(3, np.nan), status=StressStatus.ON_LAND)
    state = stress_states(WATERY, (nowhere,))[0]
    assert state.status is StressStatus.ON_LAND
    assert np.isnan(state.viscous_stress).all()
    assert np.isnan(state.max_shear)


def test_planes_are_kept_in_order():
    normals = np.array([[1.0, 0, 0], [0, 1.0, 0]])
    state = stress_states(WATERY, (place([[1, 2], [3, -1]], pressure=4.0, normals=normals),))[0]
    assert_allclose(state.tractions.traction, state.stress[:2], rtol=1e-15)


def test_no_places_no_states():
    assert stress_states(WATERY, ()) == ()
