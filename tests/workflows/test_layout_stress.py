"""Stress in the flow of a layout: exact strain rates of known flows, places without flow."""

import numpy as np
import pytest
from numpy.testing import assert_allclose, assert_array_equal

from forebay.flow.arrays import ComplexArray
from forebay.flow.layout import (
    Ambient,
    Core,
    CoreModel,
    Layout,
    Pier,
    Sink,
    Source,
    StraightBank,
    Vortex,
    Water,
)
from forebay.flow.stress import Fluid
from forebay.flow.stress_state import StressStatus
from forebay.trade.water import WaterRangeError
from forebay.workflows.layout_stress import compute_layout_stress

WATERY = Fluid(1e-3, 1000.0)
DEPTH = 2.0


def states(layout, *points):
    return compute_layout_stress(WATERY, layout, np.array(points, dtype=complex))


@pytest.mark.parametrize("kind", [Source, Sink])
def test_shear_rate_near_a_point_element(kind):
    # G = q / (pi r2), principal strain rates +-q / (2 pi r2), the radial one of a source being the smaller
    layout = Layout(DEPTH, elements=(kind("a", 1 + 1j, 3.0),))
    radius = 0.5
    state = states(layout, 1 + 1j + radius)[0]
    rate = 1.5 / (np.pi * radius**2)
    assert_allclose(state.mean_velocity_gradient, rate, rtol=1e-14)
    radial = -0.5 * rate if kind is Source else 0.5 * rate
    assert_allclose(np.diag(state.strain_rate), [radial, -radial, 0.0], rtol=1e-14, atol=1e-15)
    assert_allclose(state.vorticity, 0.0, atol=1e-15)
    assert state.at == 1.5 + 1j


def test_front_of_a_pier():
    # |du/dx| = 2 U / a on the front stagnation point, G = 4 U / a: U = 0.5, a = 0.5 gives 4 1/s
    layout = Layout(DEPTH, ambient=Ambient(0.5 + 0j), structures=(Pier("P", 0j, 0.5),))
    state = states(layout, -0.5 + 0j)[0]
    assert_allclose(state.mean_velocity_gradient, 4.0, rtol=1e-12)
    assert_allclose(state.strain_rate[:2, :2], [[-2.0, 0.0], [0.0, 2.0]], rtol=1e-12, atol=1e-12)
    assert_allclose(state.stress[0, 0], -4e-3, rtol=1e-12)


def test_solid_rotation_of_the_ambient_dissipates_exactly_nothing():
    layout = Layout(DEPTH, ambient=Ambient(gradient=((0.0, -0.7), (0.7, 0.0))))
    for state in states(layout, 3 + 4j, -1 + 2j):
        assert state.mean_velocity_gradient == 0.0
        assert state.dissipation == 0.0
        assert state.plane_vorticity == pytest.approx(1.4, rel=1e-15)


def test_ambient_gradient_is_returned():
    gradient = ((0.2, 0.5), (-0.1, -0.2))
    state = states(Layout(DEPTH, ambient=Ambient(1 + 1j, gradient, 5j)), 7 - 3j)[0]
    assert_allclose(state.strain_rate[:2, :2], [[0.2, 0.2], [0.2, -0.2]], rtol=1e-14)
    assert_allclose(state.plane_vorticity, -0.6, rtol=1e-14)
    assert_allclose(state.dilatation, 0.0, atol=1e-16)


@pytest.mark.parametrize("share", [0.05, 0.5, 0.99])
def test_inside_a_rankine_core_the_water_turns_rigidly(share):
    radius, circulation = 2.0, 3.0
    layout = Layout(DEPTH, elements=(Vortex("g", 0j, circulation, Core(CoreModel.RANKINE, radius)),))
    state = states(layout, share * radius * np.exp(0.4j))[0]
    spin = circulation / (np.pi * radius**2)
    assert_allclose(state.plane_vorticity, spin, rtol=1e-13)
    # what the free vortex adds and the core takes away again is larger by 1 / share^2
    assert state.mean_velocity_gradient <= 1e-14 * spin / share**2


def test_inside_a_lamb_oseen_core():
    # s = (r / a)^2: u = Gamma (1 - e^-s) / (2 pi r), r d(u/r)/dr = Gamma (s e^-s - (1 - e^-s)) / (pi r^2)
    radius, circulation, r = 2.0, 3.0, 1.3
    layout = Layout(DEPTH, elements=(Vortex("g", 0j, circulation, Core(CoreModel.LAMB_OSEEN, radius)),))
    state = states(layout, r * np.exp(1.1j))[0]
    s = (r / radius) ** 2
    expected = circulation * abs(s * np.exp(-s) - (1 - np.exp(-s))) / (np.pi * r**2)
    assert_allclose(state.mean_velocity_gradient, expected, rtol=1e-12)
    assert_allclose(state.plane_vorticity, circulation * np.exp(-s) / (np.pi * radius**2), rtol=1e-12)


def test_places_without_flow_are_flagged_and_the_rest_answered():
    layout = Layout(DEPTH, shore=StraightBank(0j, 1 + 0j), elements=(Sink("a", 2j, 1.0),))
    found = states(layout, 2j, -1j, 1 + 1j)
    assert [state.status for state in found] == [
        StressStatus.ON_SINGULARITY,
        StressStatus.ON_LAND,
        StressStatus.COMPUTED,
    ]
    assert np.isnan(found[0].stress).all()
    assert np.isnan(found[1].mean_velocity_gradient)
    assert found[2].mean_velocity_gradient > 0.0
    assert [state.name for state in found] == ["0", "1", "2"]


def test_strain_rate_is_the_difference_of_velocities():
    from forebay.flow.model import compile_layout

    elements = (Source("a", 3 + 2j, 1.2), Sink("b", -2 + 1j, 0.7), Vortex("c", 1 + 4j, -2.0))
    layout = Layout(DEPTH, ambient=Ambient(0.3 + 0j), shore=StraightBank(0j, 1 + 0j), elements=elements)
    points: ComplexArray = np.array([0.5 + 1j, 5 + 3j, -4 + 0.2j])
    model, step = compile_layout(layout), 1e-5
    by_x, by_y = (
        (model.velocity(points + way * step) - model.velocity(points - way * step)) / (2 * step)
        for way in (complex(1, 0), 1j)
    )
    for n, state in enumerate(states(layout, *points)):
        gradient = np.array([[by_x[n].real, by_y[n].real], [-by_x[n].imag, -by_y[n].imag]])
        # rounding 1e-16 over a step of 1e-5, and its square
        assert_allclose(state.strain_rate[:2, :2], 0.5 * (gradient + gradient.T), rtol=0, atol=1e-9)


def test_no_points_no_states():
    assert states(Layout(DEPTH)) == ()


def test_still_water_has_no_stress():
    assert_array_equal(states(Layout(DEPTH), 1j)[0].stress, np.zeros((3, 3)))


def test_wrong_water_is_pointed_at():
    with pytest.raises(WaterRangeError) as caught:
        compute_layout_stress(Water(-3.0), Layout(DEPTH), np.array([0j]))
    assert caught.value.path == ("fluid", "temperature")
