"""Derived quantities against fields whose answers are known in closed form."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow import derived
from forebay.flow.terms import Jet


def polynomial_flow(z):
    """u = 2x + 3y^2 + 1, v = -2y + x^2: any smooth solenoidal field, with vorticity 2x - 6y."""
    x, y = z.real, z.imag
    u, v = 2 * x + 3 * y**2 + 1, -2 * y + x**2
    u_x, u_y, v_x, v_y = 2.0 + 0 * x, 6 * y, 2 * x, -2.0 + 0 * x
    slope = 0.5 * ((u_x - v_y) - 1j * (u_y + v_x))
    skew = 0.5 * ((u_x + v_y) - 1j * (v_x - u_y))
    return Jet(u - 1j * v, slope, skew), (u, v, u_x, u_y, v_x, v_y)


Z = np.array([0.3 + 0.4j, -1.2 + 0.7j, 2.0 - 1.5j, -0.1 - 0.2j])
EXACT = 1e-14
"""A handful of products of numbers of order 1."""


class TestAgainstPlainFormulae:
    JET, (U, V, U_X, U_Y, V_X, V_Y) = polynomial_flow(Z)
    A_X, A_Y = U * U_X + V * U_Y, U * V_X + V * V_Y
    SPEED = np.hypot(U, V)

    def test_vorticity(self):
        assert_allclose(derived.vorticity(self.JET), self.V_X - self.U_Y, rtol=EXACT)

    def test_strain_rates(self):
        xx, xy, yy = derived.strain_rates(self.JET)
        assert_allclose([xx, xy, yy], [self.U_X, 0.5 * (self.U_Y + self.V_X), self.V_Y], rtol=EXACT)

    def test_acceleration(self):
        assert_allclose(derived.acceleration(self.JET), self.A_X - 1j * self.A_Y, rtol=EXACT)

    def test_pressure_gradient_along_and_across(self):
        along, across = derived.pressure_gradient(self.JET, 1000.0)
        assert_allclose(along, -1000 * (self.A_X * self.U + self.A_Y * self.V) / self.SPEED, rtol=1e-13)
        # a difference of products: one more digit than the other formulae
        assert_allclose(across, -1000 * (self.A_Y * self.U - self.A_X * self.V) / self.SPEED, rtol=1e-13)

    def test_curvature(self):
        expected = (self.U * self.A_Y - self.V * self.A_X) / self.SPEED**3
        assert_allclose(derived.streamline_curvature(self.JET), expected, rtol=1e-13)


class TestConventions:
    def test_anticlockwise_vortex_turns_left_with_curvature_one_over_radius(self):
        """Free vortex W = -i/z: circles of radius r, pressure falling inwards by rho V^2 / r."""
        z = np.asarray(2.0 * np.exp(1j * np.array([0.1, 1.7, 4.0])), np.complex128)
        jet = Jet(-1j / z, 1j / z**2, np.zeros_like(z))
        assert_allclose(derived.streamline_curvature(jet), 0.5, rtol=EXACT)
        along, across = derived.pressure_gradient(jet, 1000.0)
        assert_allclose(along, 0.0, atol=1e-12)  # 1000 times rounding of 0.1
        assert_allclose(
            across, -1000.0 * 0.25 / 2.0, rtol=EXACT
        )  # left of the flow is inwards: pressure falls

    def test_directions(self):
        velocity = np.conj(np.array([1 + 0j, 1j, -1 + 0j, -1j, 1 - 1j, 0j]))
        assert_allclose(derived.direction_deg(velocity), [0, 90, 180, 270, 315, np.nan], rtol=EXACT)

    def test_bernoulli(self):
        velocity = np.array([0j, 0.5 + 0j, 1j])
        assert_allclose(derived.pressure_coefficient(velocity, 0.5), [1.0, 0.0, -3.0], rtol=EXACT)
        head = derived.head_change(velocity, 0.5, gravity=10.0)
        assert_allclose(head, [0.0125, 0.0, -0.0375], rtol=EXACT)
        assert np.all(np.isnan(derived.pressure_coefficient(velocity, 0.0)))

    def test_still_water_has_no_direction_and_no_curvature(self):
        jet = Jet(np.array([0j]), np.array([1 + 0j]), np.array([0j]))
        assert np.isnan(derived.streamline_curvature(jet)[0])
        along, across = derived.pressure_gradient(jet, 1000.0)
        assert np.isnan(along[0])
        assert np.isnan(across[0])


@pytest.mark.parametrize("angle", [0.0, 0.7, 2.9])
def test_scalars_do_not_depend_on_the_axes(angle):
    """Rotate the flow: speed-like scalars stay, strain keeps its invariant."""
    turn = np.exp(1j * angle)
    jet, _ = polynomial_flow(Z)
    turned = Jet(jet.velocity / turn, jet.slope / turn**2, jet.skew)
    assert_allclose(derived.vorticity(turned), derived.vorticity(jet), rtol=EXACT)
    assert_allclose(derived.streamline_curvature(turned), derived.streamline_curvature(jet), rtol=1e-12)
    xx, xy, _ = derived.strain_rates(jet)
    xx_turned, xy_turned, _ = derived.strain_rates(turned)
    assert_allclose(xx_turned**2 + xy_turned**2, xx**2 + xy**2, rtol=EXACT)
