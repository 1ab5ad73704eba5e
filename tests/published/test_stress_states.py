"""Newtonian stress, strain rate, dissipation and G, through `stress/tensor`.

Formulae of Batchelor, Panton and White (memory); the table and the numbers of plane and pipe flow were
recomputed by a second route. G = sqrt(dissipation / viscosity): T. R. Camp and P. C. Stein 1943, J. Boston
Soc. Civ. Eng. 30, 203-221.
"""

from math import pi, sqrt

import numpy as np
import pytest

from support.layouts import line_sink, open_water_body, sink

EXACT = 1e-13
"""Sums of a few products of doubles."""

MILLI = {"dynamic_viscosity": 1e-3, "density": 1000.0}
WATER_20 = {"dynamic_viscosity": 1.0016e-3, "density": 998.2}

TABLE = {
    "general": ([[1, 2], [3, -1]], sqrt(7.25), (2, 5, -2, 0), 0.029, sqrt(29), 1),
    "couette": ([[0, 10], [0, 0]], 5.0, (0, 10, 0, 0), 0.1, 10.0, -10),
    "stagnation": ([[2, 0], [0, -2]], 2.0, (4, 0, -4, 0), 0.016, 4.0, 0),
    "rotation": ([[0, -3], [3, 0]], 0.0, (0, 0, 0, 0), 0.0, 0.0, 6),
}


def _state(service, gradient, fluid=MILLI, **extra):
    (state,) = service.stress(fluid, [{"name": "s", "velocity_gradient": gradient, **extra}])
    return state


@pytest.mark.parametrize("row", TABLE.values(), ids=TABLE)
def test_table_of_gradients(service, row):
    gradient, rate, stress, dissipation, mean_gradient, vorticity = row
    state = _state(service, gradient)
    tensor = np.array(state["viscous_stress"])
    assert tensor.shape == (3, 3)
    found = (tensor[0, 0], tensor[0, 1], tensor[1, 1], tensor[2, 2])
    assert found == pytest.approx(tuple(1e-3 * part for part in stress), abs=EXACT)
    assert np.linalg.eigvalsh(state["strain_rate"]) == pytest.approx([-rate, 0.0, rate], abs=1e-12)
    assert state["principal_stresses"] == pytest.approx([2e-3 * rate, 0.0, -2e-3 * rate], abs=EXACT)
    assert state["dissipation"] == pytest.approx(dissipation, abs=EXACT)
    assert state["mean_velocity_gradient"] == pytest.approx(mean_gradient, abs=1e-12)
    assert np.ravel(state["vorticity"])[-1] == pytest.approx(vorticity, abs=EXACT)


def test_printed_digits_of_the_table(service):
    state = _state(service, [[1, 2], [3, -1]])
    assert max(np.linalg.eigvalsh(state["strain_rate"])) == pytest.approx(2.692582, abs=6e-7)
    assert state["mean_velocity_gradient"] == pytest.approx(5.385165, abs=6e-7)


def test_rigid_rotation_has_neither_dissipation_nor_gradient(service):
    state = _state(service, [[0, -3], [3, 0]])
    assert state["dissipation"] == 0.0
    assert state["mean_velocity_gradient"] == 0.0


def test_divergent_plane_field_has_a_stress_across(service):
    # Stokes: tau_zz = -2/3 mu div u
    state = _state(service, [[1, 0], [0, 2]])
    assert np.diag(state["viscous_stress"]) == pytest.approx([0.0, 2e-3, -2e-3], abs=EXACT)
    assert state["dilatation"] == pytest.approx(3.0, abs=EXACT)


def test_plane_couette(service):
    # tau = mu U / h: U = 1, h = 0.01 gives 0.10016 Pa, G = 100, dissipation 10.016 W/m3
    state = _state(service, [[0, 100], [0, 0]], WATER_20)
    assert state["viscous_stress"][0][1] == pytest.approx(0.10016, abs=EXACT)
    assert state["mean_velocity_gradient"] == pytest.approx(100.0, rel=EXACT)
    assert state["dissipation"] == pytest.approx(10.016, rel=EXACT)


def _mean_dissipation(service, rates, weights) -> float:
    states = [{"name": f"s{k}", "velocity_gradient": [[0, rate], [0, 0]]} for k, rate in enumerate(rates)]
    answers = service.stress(WATER_20, states)
    return float(np.dot(weights, [answer["dissipation"] for answer in answers]))


def test_plane_poiseuille(service):
    # U_m = 0.1, h = 0.02: wall rate 6 U_m / h = 30, rms G = sqrt(12) U_m / h = 17.320508, -dp/dx = 3.0048
    # Pa/m
    nodes, weights = np.polynomial.legendre.leggauss(4)  # the dissipation is a polynomial of degree 2
    mean = _mean_dissipation(service, 30.0 * nodes, weights / 2)
    assert sqrt(mean / 1.0016e-3) == pytest.approx(17.320508, abs=6e-7)
    assert mean / 0.1 == pytest.approx(3.0048, rel=1e-12)  # power of the pressure drop is dissipated
    wall = _state(service, [[0, 30.0], [0, 0]], WATER_20)
    assert 2 * wall["viscous_stress"][0][1] / 0.02 == pytest.approx(3.0048, rel=1e-12)


def test_pipe_flow(service):
    # U = 0.05, D = 0.02: wall rate 8 U / D = 20, rms G = sqrt(32) U / D = 14.142136, -dp/dx = 4.0064 Pa/m
    nodes, weights = np.polynomial.legendre.leggauss(4)
    radius = (nodes + 1) / 2
    mean = _mean_dissipation(
        service, 20.0 * radius, weights * radius
    )  # area weights 2 r dr over the unit pipe
    assert sqrt(mean / 1.0016e-3) == pytest.approx(14.142136, abs=6e-7)
    assert mean / 0.05 == pytest.approx(4.0064, rel=1e-12)


@pytest.mark.parametrize(
    ("power", "volume", "viscosity", "expected"),
    [(150.0, 50.0, 1e-3, 54.7723), (38.79, 27.78, 1.14e-3, 35.0)],
    ids=["150 W in 50 m3", "2000 m3/d, 20 min, 15 degC"],
)
def test_camp_and_stein(service, power, volume, viscosity, expected):
    # open water-treatment textbooks: G = sqrt(P / (mu V)); a plane strain that dissipates P/V has that G
    rate = sqrt(power / volume / viscosity) / 2
    state = _state(service, [[rate, 0], [0, -rate]], {"dynamic_viscosity": viscosity, "density": 1000.0})
    assert state["dissipation"] == pytest.approx(power / volume, rel=EXACT)
    assert state["mean_velocity_gradient"] == pytest.approx(expected, rel=2e-4)  # four digits are printed


def test_strain_near_a_sink_reaches_the_fish_threshold(service):
    # G = q / (pi r^2): q = 0.1 m2/s reaches 517 1/s (Neitzel et al. 2004: no injury of juvenile salmonids) at
    # 7.8 mm
    layout = open_water_body([sink(0j, 0.1)])
    body = {"layout": layout, "at": {"points": [[0.0078, 0.0], [0.0079, 0.0]]}, "fluid": MILLI}
    near, away = service.post("stress/tensor", body)["result"]["states"]
    assert near["mean_velocity_gradient"] > 517 > away["mean_velocity_gradient"]
    assert near["mean_velocity_gradient"] == pytest.approx(0.1 / (pi * 0.0078**2), rel=1e-12)


def test_gradient_of_a_layout_is_four_times_its_strain(service):
    # plane potential flow: principal strain rates +-|w''|, G = 2 |w''|, dissipation 4 mu |w''|^2
    layout = open_water_body(
        [sink(1j, 0.7), line_sink(-2 + 0j, 2 + 1j, 1.0)], ambient={"velocity": [0.3, 0.1]}
    )
    body = {"layout": layout, "at": {"points": [[2.0, 3.0]]}, "fluid": WATER_20}
    (state,) = service.post("stress/tensor", body)["result"]["states"]
    rates = np.linalg.eigvalsh(state["strain_rate"])
    assert rates == pytest.approx([-rates[2], 0.0, rates[2]], abs=EXACT)
    assert state["mean_velocity_gradient"] == pytest.approx(2 * rates[2], rel=1e-12)
    assert state["dissipation"] == pytest.approx(4 * 1.0016e-3 * rates[2] ** 2, rel=1e-12)


def test_pressure_and_planes(service):
    # sigma = -p I + tau; traction t = sigma n; on the principal planes it is normal
    state = _state(service, [[2, 0], [0, -2]], pressure=5.0, planes=[{"normal": [1, 1]}])
    assert np.diag(state["stress"]) == pytest.approx([-5 + 4e-3, -5 - 4e-3, -5.0], abs=EXACT)
    assert state["max_shear"] == pytest.approx(4e-3, abs=EXACT)
    assert state["mohr_circle"]["radius"] == pytest.approx(4e-3, abs=EXACT)
    assert state["mohr_circle"]["centre"] == pytest.approx(-5.0, abs=EXACT)
    (traction,) = state["tractions"]
    assert isinstance(traction, dict)
