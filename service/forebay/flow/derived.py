"""Quantities that follow from the velocity and its first derivatives; all arrays of one shape.

With W = u - iv and V = u + iv:
dW/dz = [(u_x - v_y) - i (u_y + v_x)] / 2 and dW/dzbar = [(u_x + v_y) - i (v_x - u_y)] / 2.
"""

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.terms import Jet


def direction_deg(velocity: ComplexArray) -> FloatArray:
    """Direction of flow [deg], anticlockwise from +x, in [0, 360); nan where the water stands still.

    velocity : W = u - iv [m/s]
    """
    angle = np.degrees(np.angle(np.conj(velocity))) % 360.0
    return np.where(velocity == 0.0, np.nan, np.where(angle == 360.0, 0.0, angle))


def vorticity(jet: Jet) -> FloatArray:
    """v_x - u_y = -2 Im dW/dzbar [1/s], anticlockwise positive."""
    return np.asarray(-2.0 * jet.skew.imag, dtype=np.float64)


def strain_rates(jet: Jet) -> tuple[FloatArray, FloatArray, FloatArray]:
    """D_xx = u_x, D_xy = (u_y + v_x)/2 and D_yy = v_y [1/s]."""
    return jet.slope.real + jet.skew.real, -jet.slope.imag, jet.skew.real - jet.slope.real


def acceleration(jet: Jet) -> ComplexArray:
    """Conjugate acceleration a_x - i a_y = V dW/dz + conj(V) dW/dzbar [m/s2] of steady flow."""
    flow = np.conj(jet.velocity)
    return np.asarray(flow * jet.slope + jet.velocity * jet.skew, dtype=np.complex128)


def streamline_curvature(jet: Jet) -> FloatArray:
    """Curvature (V x a) / |V|^3 [1/m], positive where the streamline turns left; nan where V = 0."""
    return _across(jet) / _squared(jet.velocity)


def pressure_gradient(jet: Jet, density: float) -> tuple[FloatArray, FloatArray]:
    """Pressure gradient -rho a along the streamline and to its left [Pa/m]; nan where V = 0.

    Euler's equation of steady inviscid flow, without gravity. density : rho [kg/m3]
    """
    along = (acceleration(jet) * _tangent(jet.velocity)).real
    return -density * along, -density * _across(jet)


def head_change(velocity: ComplexArray, reference_speed: float, *, gravity: float) -> FloatArray:
    """(U^2 - V^2) / (2 g) [m]: rise of the surface against the ambient, by Bernoulli's theorem.

    velocity : W = u - iv [m/s];  reference_speed : U [m/s];  gravity : g [m/s2]
    """
    return np.asarray((reference_speed**2 - np.abs(velocity) ** 2) / (2.0 * gravity), dtype=np.float64)


def pressure_coefficient(velocity: ComplexArray, reference_speed: float) -> FloatArray:
    """1 - V^2 / U^2 [-]; nan where U = 0, since nothing is there to compare with."""
    if reference_speed == 0.0:
        return np.full(velocity.shape, np.nan)
    return np.asarray(1.0 - (np.abs(velocity) / reference_speed) ** 2, dtype=np.float64)


def _across(jet: Jet) -> FloatArray:
    """Acceleration to the left of the flow [m/s2]."""
    return np.asarray(-(acceleration(jet) * _tangent(jet.velocity)).imag, dtype=np.float64)


def _tangent(velocity: ComplexArray) -> ComplexArray:
    """Unit vector V / |V| as a complex number; nan where V = 0."""
    speed = np.abs(velocity)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(np.where(speed == 0.0, np.nan, np.conj(velocity) / speed), dtype=np.complex128)


def _squared(velocity: ComplexArray) -> FloatArray:
    speed = np.abs(velocity)
    return np.where(speed == 0.0, np.nan, speed * speed)
