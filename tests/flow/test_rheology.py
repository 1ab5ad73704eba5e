"""Generalised Newtonian fluids against the closed forms of flow between plates and in pipes."""

import numpy as np
import pytest
from scipy.optimize import brentq

from forebay.flow.rheology import GeneralisedFluid, shear_rate
from forebay.flow.stress import Fluid
from forebay.flow.stress_state import StrainedPlace, stress_states

SHARP = 1e6
"""Regularisation [s]: the yield stress is met within exp(-1e6 g) for every rate that matters."""

NODES, WEIGHTS = np.polynomial.legendre.leggauss(200)


def rate_under(fluid, stress):
    """Rate of shear at which the fluid bears a stress: the constitutive law inverted by bisection."""
    top = 10.0 * (stress / fluid.consistency) ** (1.0 / fluid.index) + 1e-9
    return brentq(lambda g: float(fluid.shear_stress(np.array(g))) - stress, 0.0, top, xtol=1e-15)


def pipe_discharge(fluid, wall_stress, radius):
    """Rabinowitsch: Q = pi R^3 / tau_w^3 integral of tau^2 g(tau) dtau, split at the yield stress."""
    total = 0.0
    for low, high in ((0.0, fluid.yield_stress), (fluid.yield_stress, wall_stress)):
        tau = low + (high - low) * (NODES + 1) / 2
        rates = np.array([rate_under(fluid, stress) for stress in tau])
        total += (high - low) / 2 * float(WEIGHTS @ (tau**2 * rates))
    return np.pi * radius**3 / wall_stress**3 * total


def test_bingham_plastic_in_a_pipe_follows_buckingham_and_reiner():
    # Q = pi R^3 tau_w / (4 mu_p) [1 - 4/3 p + p^4 / 3], p = tau_y / tau_w
    fluid, wall, radius = GeneralisedFluid(0.02, 1.0, 2.0, 1010.0, SHARP), 5.0, 0.05
    p = 2.0 / wall
    exact = np.pi * radius**3 * wall / (4 * 0.02) * (1 - 4 / 3 * p + p**4 / 3)
    # creep below the yield stress is about 1e-6 1/s against rates of 100 1/s
    assert pipe_discharge(fluid, wall, radius) == pytest.approx(exact, rel=1e-6)


@pytest.mark.parametrize("index", [0.4, 1.0, 1.6])
def test_power_law_in_a_pipe_follows_rabinowitsch(index):
    # Q = pi R^3 n / (3 n + 1) (tau_w / K)^(1/n)
    fluid, wall, radius = GeneralisedFluid(0.8, index, 0.0, 1010.0), 5.0, 0.05
    exact = np.pi * radius**3 * index / (3 * index + 1) * (wall / 0.8) ** (1 / index)
    # 200 nodes; tau^(2 + 1/n) is smooth enough at 0 for 1e-9
    assert pipe_discharge(fluid, wall, radius) == pytest.approx(exact, rel=1e-8)


def test_herschel_bulkley_in_a_pipe():
    # Q = pi R^3 n ((tau_w - tau_y)/K)^(1/n) (1 - p) [(1-p)^2/(3n+1) + 2 p (1-p)/(2n+1) + p^2/(n+1)]
    # (Govier and Aziz 1972, The flow of complex mixtures in pipes; from memory, and by integration)
    n, yield_, wall, radius = 0.6, 1.5, 5.0, 0.05
    fluid = GeneralisedFluid(0.8, n, yield_, 1010.0, SHARP)
    p = yield_ / wall
    bracket = (1 - p) ** 2 / (3 * n + 1) + 2 * p * (1 - p) / (2 * n + 1) + p**2 / (n + 1)
    exact = np.pi * radius**3 * n * ((wall - yield_) / 0.8) ** (1 / n) * (1 - p) * bracket
    assert pipe_discharge(fluid, wall, radius) == pytest.approx(exact, rel=1e-6)


def test_power_law_between_plates():
    # mean speed = n/(2n+1) (h/2) (tau_w/K)^(1/n), gap h
    n, wall, gap = 0.5, 3.0, 0.02
    fluid = GeneralisedFluid(0.8, n, 0.0, 1010.0)
    tau = wall * (NODES + 1) / 2
    rates = np.array([rate_under(fluid, stress) for stress in tau])
    mean = gap / 2 / wall**2 * float(wall / 2 * WEIGHTS @ (tau * rates))
    assert mean == pytest.approx(n / (2 * n + 1) * gap / 2 * (wall / 0.8) ** (1 / n), rel=1e-10)


def couette(fluid, gradient):
    rate = np.zeros((3, 3))
    rate[0, 1] = rate[1, 0] = gradient / 2
    (state,) = stress_states(fluid, (StrainedPlace("s", rate, np.zeros(3)),))
    return state


@pytest.mark.parametrize("gradient", [-10.0, 0.01, 3.0])
def test_plane_couette(gradient):
    fluid = GeneralisedFluid(0.8, 0.6, 1.5, 1010.0, 50.0)
    state = couette(fluid, gradient)
    size = abs(gradient)
    stress = 0.8 * size**0.6 + 1.5 * (1 - np.exp(-50.0 * size))
    assert state.viscous_stress[0, 1] == pytest.approx(np.sign(gradient) * stress, rel=1e-14)
    assert state.dissipation == pytest.approx(stress * size, rel=1e-14)
    assert state.mean_velocity_gradient == pytest.approx(size, rel=1e-14)
    assert state.apparent_viscosity == pytest.approx(stress / size, rel=1e-14)


@pytest.mark.parametrize(("index", "viscosity"), [(0.6, np.inf), (1.0, 0.8 + 75.0), (1.4, 75.0)])
def test_at_rest_there_is_no_stress(index, viscosity):
    state = couette(GeneralisedFluid(0.8, index, 1.5, 1010.0, 50.0), 0.0)
    assert np.all(state.viscous_stress == 0.0)
    assert state.dissipation == 0.0
    assert state.apparent_viscosity == viscosity


def test_index_one_without_yield_stress_is_newtonian():
    rate = np.array([[1.0, 2.5, 0.0], [2.5, -0.4, 0.3], [0.0, 0.3, 0.7]])
    place = (StrainedPlace("s", rate, np.zeros(3)),)
    (sludge,), (newtonian,) = (
        stress_states(fluid, place) for fluid in (GeneralisedFluid(0.8, 1.0, 0.0, 1e3), Fluid(0.8, 1e3))
    )
    assert sludge.viscous_stress == pytest.approx(newtonian.viscous_stress, abs=1e-14)
    assert sludge.dissipation == pytest.approx(newtonian.dissipation, rel=1e-14)


def test_rate_of_shear_is_an_invariant():
    generator = np.random.default_rng(7)
    rate = generator.normal(size=(3, 3))
    rate = rate + rate.T
    turn, _ = np.linalg.qr(generator.normal(size=(3, 3)))
    assert shear_rate(turn @ rate @ turn.T) == pytest.approx(shear_rate(rate), rel=1e-13)
    assert shear_rate(np.eye(3)) == pytest.approx(0.0, abs=1e-15)  # pure dilatation
