"""Tensors of the stress: published tables, exact flows, identities."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose, assert_array_equal
from scipy.spatial.transform import Rotation

from forebay.flow.stress import (
    Fluid,
    dilatation,
    dissipation,
    gradient_from_jet,
    max_shear,
    mean_velocity_gradient,
    padded,
    plane_circle,
    strain_rate,
    stress,
    three_circles,
    tractions,
    viscous_stress,
    vorticity,
)

WATERY = Fluid(1e-3, 1000.0)
ROUNDING = 1e-14  # a handful of additions and products of numbers of order one

entries = st.floats(-100.0, 100.0).filter(lambda value: value == 0.0 or abs(value) > 1e-6)
gradients = st.lists(entries, min_size=9, max_size=9).map(lambda v: np.array(v).reshape(3, 3))
plane_gradients = st.lists(entries, min_size=4, max_size=4).map(lambda v: np.array(v).reshape(2, 2))
fluids = st.builds(Fluid, st.floats(1e-4, 10.0), st.just(1000.0), st.one_of(st.none(), st.floats(0.0, 10.0)))
turns = st.lists(st.floats(-3.0, 3.0), min_size=3, max_size=3).map(
    lambda v: Rotation.from_rotvec(v).as_matrix()
)


def shear_rate(gradient, fluid=WATERY):
    return float(mean_velocity_gradient(dissipation(strain_rate(padded(gradient)), fluid), fluid))


# Batchelor, An Introduction to Fluid Dynamics, 1967, section 3.3; the numbers are those of hand calculation
TABLE = [
    pytest.param([[1, 2], [3, -1]], [2e-3, 5e-3, -2e-3, 0.0], 0.029, np.sqrt(29), 1.0, id="general"),
    pytest.param([[0, 10], [0, 0]], [0.0, 10e-3, 0.0, 0.0], 0.1, 10.0, -10.0, id="couette"),
    pytest.param([[2, 0], [0, -2]], [4e-3, 0.0, -4e-3, 0.0], 0.016, 4.0, 0.0, id="stagnation point"),
    pytest.param([[0, -3], [3, 0]], [0.0, 0.0, 0.0, 0.0], 0.0, 0.0, 6.0, id="rigid rotation"),
]


@pytest.mark.parametrize(("gradient", "tau", "phi", "g", "spin"), TABLE)
def test_table_of_plane_states(gradient, tau, phi, g, spin):
    full = padded(gradient)
    viscous = viscous_stress(strain_rate(full), WATERY)
    given_entries = [viscous[0, 0], viscous[0, 1], viscous[1, 1], viscous[2, 2]]
    assert_allclose(given_entries, tau, rtol=ROUNDING, atol=1e-18)
    assert_allclose(dissipation(strain_rate(full), WATERY), phi, rtol=ROUNDING)
    assert_allclose(shear_rate(gradient), g, rtol=ROUNDING)
    assert_array_equal(vorticity(full), [0.0, 0.0, spin])


@given(st.floats(-1e6, 1e6), st.floats(-1e6, 1e6), st.floats(-1e6, 1e6))
def test_rigid_rotation_dissipates_exactly_nothing(a, b, c):
    rotation = np.array([[0.0, -c, b], [c, 0.0, -a], [-b, a, 0.0]])
    assert shear_rate(rotation) == 0.0
    assert_array_equal(strain_rate(rotation), np.zeros((3, 3)))
    assert_allclose(vorticity(rotation), [2 * a, 2 * b, 2 * c], rtol=1e-15)


def test_plane_couette():
    # U = 1 m/s over h = 10 mm at 20 degC: tau = mu U / h, G = U / h, Phi = mu (U / h)^2
    fluid = Fluid(1.0016e-3, 998.2)
    rate = strain_rate(padded([[0.0, 100.0], [0.0, 0.0]]))
    assert_allclose(viscous_stress(rate, fluid)[0, 1], 0.10016, rtol=ROUNDING)
    assert_allclose(dissipation(rate, fluid), 10.016, rtol=ROUNDING)
    assert shear_rate([[0.0, 100.0], [0.0, 0.0]], fluid) == pytest.approx(100.0, rel=ROUNDING)


def test_plane_poiseuille():
    # gap h, mean U: wall rate 6 U / h; the mean of Phi is U times the pressure gradient 12 mu U / h^2
    mean_speed, gap, fluid = 0.1, 0.02, Fluid(1.0016e-3, 998.2)
    nodes, weights = np.polynomial.legendre.leggauss(
        4
    )  # exact: Phi is a polynomial of degree 2 across the gap
    across = 0.5 * gap * nodes
    slope = -12.0 * mean_speed * across / gap**2
    gradient = np.zeros((4, 2, 2))
    gradient[:, 0, 1] = slope
    mean = float(dissipation(strain_rate(padded(gradient)), fluid) @ weights) / 2.0
    assert_allclose(mean / mean_speed, 3.0048, rtol=ROUNDING)  # -dp/dx [Pa/m]
    assert_allclose(np.sqrt(mean / fluid.dynamic_viscosity), 17.320508, rtol=1e-8)  # printed digits
    wall = [[0.0, 6.0 * mean_speed / gap], [0.0, 0.0]]
    assert shear_rate(wall, fluid) == pytest.approx(30.0, rel=ROUNDING)


def test_pipe_flow():
    # Hagen-Poiseuille, u = 2 U (1 - 4 r2 / D2): rms G = sqrt(32) U / D, -dp/dx = 32 mu U / D2
    mean_speed, diameter, fluid = 0.05, 0.02, Fluid(1.0016e-3, 998.2)
    nodes, weights = np.polynomial.legendre.leggauss(4)
    radius = 0.25 * diameter * (nodes + 1.0)
    gradient = np.zeros((4, 3, 3))
    gradient[:, 2, 0] = -16.0 * mean_speed * radius / diameter**2  # dw/dx along a radius
    phi = dissipation(strain_rate(gradient), fluid)
    area_mean = float((phi * radius) @ weights) / float(radius @ weights)
    assert_allclose(area_mean / mean_speed, 4.0064, rtol=ROUNDING)
    assert_allclose(np.sqrt(area_mean / fluid.dynamic_viscosity), 14.142136, rtol=1e-7)  # printed digits


@pytest.mark.parametrize(("flow", "radius"), [(0.1, 0.5), (-2.0, 3.0)], ids=["source", "sink"])
def test_point_source_strains_by_its_flow_over_area(flow, radius):
    # G = |q| / (pi r2): W = q / (2 pi z), dW/dz = -q / (2 pi z2)
    z = radius * np.exp(0.7j)
    gradient = gradient_from_jet(-flow / (2 * np.pi * z**2), 0.0)
    assert_allclose(dilatation(gradient), 0.0, atol=1e-16)
    assert shear_rate(gradient) == pytest.approx(abs(flow) / (np.pi * radius**2), rel=ROUNDING)


@given(plane_gradients)
def test_jet_of_a_linear_field_gives_its_gradient(gradient):
    # W = u - iv of u = G x, differentiated by hand: dW/dx and dW/dy, then the two complex derivatives
    by_x = gradient[0, 0] - 1j * gradient[1, 0]
    by_y = gradient[0, 1] - 1j * gradient[1, 1]
    slope, skew = 0.5 * (by_x - 1j * by_y), 0.5 * (by_x + 1j * by_y)
    assert_allclose(gradient_from_jet(slope, skew), padded(gradient), rtol=0, atol=1e-13)


@given(gradients, fluids)
def test_viscous_stress_has_the_trace_of_its_bulk_viscosity(gradient, fluid):
    rate = strain_rate(gradient)
    trace = float(np.trace(viscous_stress(rate, fluid)))
    expected = 3.0 * fluid.bulk_viscosity * float(dilatation(rate))
    size = fluid.dynamic_viscosity + abs(fluid.dilatational_viscosity)
    assert_allclose(trace, expected, rtol=0, atol=1e-13 * size * 100.0)  # sums of nine terms up to 100


@given(gradients, fluids)
def test_dissipation_is_stress_times_strain_and_never_negative(gradient, fluid):
    rate = strain_rate(gradient)
    phi = float(dissipation(rate, fluid))
    assert phi >= 0.0
    product = float(np.sum(viscous_stress(rate, fluid) * rate))
    scale = (fluid.dynamic_viscosity + fluid.bulk_viscosity) * float(np.sum(rate**2))
    assert_allclose(phi, product, rtol=0, atol=1e-13 * scale)  # cancellation of the isotropic part


@given(gradients, fluids, turns)
def test_dissipation_does_not_depend_on_the_axes(gradient, fluid, turn):
    rate = strain_rate(gradient)
    turned = strain_rate(turn @ gradient @ turn.T)
    assert_allclose(dissipation(turned, fluid), dissipation(rate, fluid), rtol=1e-12, atol=1e-24)


def test_plane_divergence_stresses_the_vertical():
    # div u = 2: tau_zz = -2/3 mu div u, and the trace vanishes under Stokes' hypothesis
    viscous = viscous_stress(strain_rate(padded([[1, 0], [0, 1]])), WATERY)
    assert_allclose(viscous[2, 2], -4.0 / 3.0 * 1e-3, rtol=ROUNDING)
    assert_allclose(np.trace(viscous), 0.0, atol=1e-18)


def test_second_viscosity_is_that_of_the_dilatation():
    fluid = Fluid(1e-3, 1000.0, second_viscosity=5e-3)
    rate = strain_rate(np.eye(3))
    assert_allclose(viscous_stress(rate, fluid), (2e-3 + 15e-3) * np.eye(3), rtol=ROUNDING)
    assert_allclose(dissipation(rate, fluid), 3 * (2e-3 + 15e-3), rtol=ROUNDING)


def test_pressure_is_compression():
    assert_array_equal(stress(np.zeros((2, 3, 3)), [5.0, 7.0])[1], -7.0 * np.eye(3))


class TestMohr:
    def test_plane_circle_of_a_textbook_state(self):
        # xx = 80, yy = -40, xy = 25: centre 20, radius 65 (a 5-12-13 triangle)
        circle = plane_circle(padded([[80, 25], [25, -40]]))
        assert (float(circle.centre), float(circle.radius)) == (20.0, 65.0)

    def test_three_circles_nest(self):
        circles = three_circles(np.array([5.0, 1.0, -7.0]))
        assert_array_equal(circles.centre, [-1.0, 3.0, -3.0])
        assert_array_equal(circles.radius, [6.0, 2.0, 4.0])
        assert float(max_shear(np.array([5.0, 1.0, -7.0]))) == 6.0

    @given(plane_gradients, st.floats(-3.2, 3.2))
    def test_every_vertical_plane_lies_on_the_circle(self, gradient, angle):
        viscous = viscous_stress(strain_rate(padded(gradient)), WATERY)
        circle = plane_circle(viscous)
        normal = np.array([[np.cos(angle), np.sin(angle), 0.0]])
        found = tractions(viscous, 0.0, normal)
        distance = np.hypot(found.normal_stress[0] - float(circle.centre), found.shear_stress[0])
        assert_allclose(distance, float(circle.radius), rtol=0, atol=1e-14)  # stresses up to 0.2 Pa


class TestTractions:
    def test_couette_wall(self):
        # water above drags the wall along +x with mu du/dy; the pressure pushes on the wall
        viscous = viscous_stress(strain_rate(padded([[0.0, 100.0], [0.0, 0.0]])), Fluid(1.0016e-3, 998.2))
        found = tractions(viscous, 3.0, np.array([[0.0, 1.0, 0.0]]))
        assert_allclose(found.traction, [[0.10016, -3.0, 0.0]], rtol=ROUNDING)
        assert_allclose(found.normal_stress, [-3.0])
        assert_allclose(found.shear_stress, [0.10016], rtol=ROUNDING)

    def test_large_pressure_costs_the_shear_no_digits(self):
        viscous = viscous_stress(strain_rate(padded([[1, 2], [3, -1]])), WATERY)
        normal = np.array([[0.6, 0.8, 0.0]])
        low, high = tractions(viscous, 0.0, normal), tractions(viscous, 1e7, normal)
        assert_array_equal(low.shear_stress, high.shear_stress)

    @given(gradients, turns)
    def test_opposite_sides_pull_against_each_other(self, gradient, turn):
        viscous = viscous_stress(strain_rate(gradient), WATERY)
        there, here = tractions(viscous, 2.0, turn), tractions(viscous, 2.0, -turn)
        assert_allclose(there.traction, -here.traction, rtol=0, atol=1e-15)
        assert_allclose(there.normal_stress, here.normal_stress, rtol=0, atol=1e-15)

    def test_no_planes_no_tractions(self):
        assert tractions(np.zeros((3, 3)), 0.0, np.empty((0, 3))).traction.shape == (0, 3)


def test_arrays_of_states_are_taken_at_once():
    stack = np.stack([padded([[1, 2], [3, -1]]), padded([[0, 10], [0, 0]])])
    rates = strain_rate(stack)
    for n in range(2):
        assert_array_equal(viscous_stress(rates, WATERY)[n], viscous_stress(rates[n], WATERY))
        assert dissipation(rates, WATERY)[n] == dissipation(rates[n], WATERY)
