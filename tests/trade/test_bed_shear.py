"""Friction laws against one another and against worked numbers."""

import numpy as np
import pytest

from forebay.trade.bed_shear import (
    Friction,
    FrictionLaw,
    SmoothBedError,
    friction_coefficient,
    shear_stress,
    turbulent_gradient,
)

G = 9.80665


def coefficient(law, value, depth=2.0):
    return friction_coefficient(Friction(law, value), depth)


def test_mannings_coefficient_is_chezys():
    # C = h^(1/6) / n: common practice
    n, depth = 0.03, 2.0
    chezy = depth ** (1 / 6) / n
    manning = coefficient(FrictionLaw.MANNING, n, depth)
    assert manning == pytest.approx(coefficient(FrictionLaw.CHEZY, chezy), rel=1e-14)


def test_uniform_flow_balances_the_slope():
    # Manning: U = h^(2/3) S^(1/2) / n; the bed bears the weight, tau = rho g h S
    n, depth, slope = 0.025, 1.5, 4e-4
    speed = depth ** (2 / 3) * np.sqrt(slope) / n
    stress = shear_stress(np.array(speed), coefficient(FrictionLaw.MANNING, n, depth), 1000.0)
    assert float(stress) == pytest.approx(1000.0 * G * depth * slope, rel=1e-13)


def test_keulegan_is_the_mean_of_the_logarithmic_profile():
    # u/u* = 5.75 log10(30 z / k): its mean over the depth is 5.75 log10(30 h / (e k)), 30 / e = 11.04;
    # Keulegan's 12.2 holds for wide channels by experiment: the two differ by 5.75 log10(12.2/11.04) = 0.25
    depth, k = 2.0, 0.05
    nodes, weights = np.polynomial.legendre.leggauss(400)
    z = depth * (nodes + 1) / 2
    mean = 0.5 * weights @ (5.75 * np.log10(30 * z / k))
    assert 1 / np.sqrt(coefficient(FrictionLaw.KEULEGAN, k, depth)) == pytest.approx(mean + 0.25, abs=0.01)


def test_coefficient_is_taken_as_given():
    assert coefficient(FrictionLaw.COEFFICIENT, 0.004) == 0.004


def test_roughness_beyond_the_depth_is_refused():
    with pytest.raises(SmoothBedError) as caught:
        coefficient(FrictionLaw.KEULEGAN, 10.0)
    assert caught.value.path == ("friction", "roughness_height")


def test_turbulent_gradient():
    # u* = 0.035 m/s at 1 m in water of 20 degC: sqrt(0.035^3 / (0.4 1.0034e-6)) = 10.3 1/s
    found = turbulent_gradient(np.array([0.035]), 1.0, 1.0034e-6)
    assert found[0] == pytest.approx(10.336, abs=1e-3)
