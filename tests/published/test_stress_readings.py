"""Readings of the trade through `stress/tensor`: exposure, bed shear, flocculation, sludges."""

from math import log, pi, sqrt

import numpy as np
import pytest

from support.layouts import open_water_body, sink

BINGHAM = {
    "law": "bingham",
    "plastic_viscosity": 0.02,
    "yield_stress": 2.0,
    "regularisation": 1e6,
    "density": 1e3,
}


def test_strain_at_a_sink_stays_inside_its_screen(service):
    # q = 0.1 m2/s exceeds 517 1/s (Neitzel et al. 2004) only inside 7.8 mm
    layout = open_water_body([sink(0j, 0.1) | {"opening_radius": 0.05}])
    body = {
        "layout": layout,
        "at": {"points": [[0.049, 0.0], [0.051, 0.0]]},
        "exposure": ["salmonid-juvenile"],
    }
    envelope = service.post("stress/tensor", body)
    inside, outside = envelope["result"]["states"]
    assert inside["status"] == "inside-opening"
    assert inside["exposure"][0]["exceeded"] is None
    assert outside["shear_rate"] == pytest.approx(0.1 / (pi * 0.051**2), rel=1e-12)
    assert outside["exposure"][0]["exceeded"] is False
    (opening,) = envelope["result"]["openings"]
    assert opening["reach"] == pytest.approx(7.8e-3, abs=5e-5)
    assert opening["inside"] is True
    assert "threshold-from-memory" in {warning["code"] for warning in envelope["warnings"]}


def test_exposure_of_a_state_is_its_velocity_gradient(service):
    # 3.0 m/s over 1.8 cm is 168 1/s: above the eggs of silver perch (148 1/s), below all others
    body = {
        "fluid": {"temperature": 20},
        "states": [{"name": "jet", "velocity_gradient": [[0, 3.0 / 0.018], [0, 0]]}],
        "exposure": [],
    }
    (state,) = service.post("stress/tensor", body)["result"]["states"]
    exceeded = {entry["threshold"] for entry in state["exposure"] if entry["exceeded"]}
    assert exceeded == {"silver-perch-egg"}


def test_bed_shear_by_manning(service):
    # tau = rho g n^2 U^2 / h^(1/3)
    layout = {"depth": 2.0, "ambient": {"velocity": [0.6, 0.0]}, "water": {"temperature": 20}, "elements": []}
    body = {"layout": layout, "at": {"points": [[0, 0]]}, "friction": {"manning_n": 0.03}, "height": 1.0}
    result = service.post("stress/tensor", body)["result"]
    (state,) = result["states"]
    expected = 998.2072 * 9.80665 * 0.03**2 * 0.36 / 2.0 ** (1 / 3)
    assert state["bed_shear"] == pytest.approx(expected, rel=1e-5)  # density to 5 decimals of its table
    assert state["wall_shear"] is None
    star = sqrt(expected / 998.2072)
    assert state["friction_velocity"] == pytest.approx(star, rel=1e-5)
    assert state["turbulent_gradient"] == pytest.approx(sqrt(star**3 / (0.4 * 1.0034e-6)), rel=1e-3)
    assert result["friction"]["law"] == "manning"


def test_shear_on_a_wall(service):
    shore = {"kind": "straight-bank", "point": [0, 0], "along": [1, 0]}
    layout = {"depth": 2.0, "ambient": {"velocity": [0.6, 0.0]}, "shore": shore, "elements": []}
    body = {"layout": layout, "at": {"points": [[0, 0], [0, 1]]}, "friction": {"coefficient": 0.004}}
    on, off = service.post("stress/tensor", body)["result"]["states"]
    assert on["wall_shear"] == on["bed_shear"] == pytest.approx(999.70 * 0.004 * 0.36, rel=1e-5)
    assert off["wall_shear"] is None


def test_flocculation_on_the_way_to_an_intake(service):
    # on the axis: G = 2 b U / r^2, u = U (1 + b/r), so that G t = 2 ln[(l+b) L / (l (L+b))]
    layout = open_water_body([sink(0j, 1.0)], ambient={"velocity": [0.5, 0.0]})
    body = {
        "layout": layout,
        "at": {"points": [[-1, 0]]},
        "floc": {"from": [-10, 0], "to": [-0.5, 0], "within": 0.01},
    }
    floc = service.post("stress/tensor", body)["result"]["floc"]
    b = 1 / pi
    assert floc["status"] == "arrives"
    exact = 2 * log((0.5 + b) * 10 / (0.5 * (10 + b)))
    assert abs(floc["camp_number"] - exact) < floc["camp_number_error"] < 0.01 * exact
    assert floc["residence_time"] == pytest.approx((9.5 - b * log((10 + b) / (0.5 + b))) / 0.5, rel=1e-5)


def test_sludge_in_a_pipe_follows_buckingham_and_reiner(service):
    # states at the radii of a pipe with a plug: tau = tau_w r / R, g = (tau - tau_y) / mu_p outside it
    wall, yield_, viscosity = 5.0, 2.0, 0.02
    nodes, weights = np.polynomial.legendre.leggauss(6)
    share = yield_ / wall + (1 - yield_ / wall) * (nodes + 1) / 2
    rates = (wall * share - yield_) / viscosity
    states = [{"name": f"s{k}", "velocity_gradient": [[0, rate], [0, 0]]} for k, rate in enumerate(rates)]
    answers = service.stress(BINGHAM, states)
    stresses = np.array([answer["viscous_stress"][0][1] for answer in answers])
    assert stresses == pytest.approx(wall * share, rel=1e-12)
    # dissipation over the section = (dp/dz) Q, with dp/dz = 2 tau_w / R, R = 1
    dissipated = np.array([answer["dissipation"] for answer in answers])
    power = 2 * pi * (1 - yield_ / wall) / 2 * float(weights @ (dissipated * share))
    p = yield_ / wall
    discharge = pi * wall / (4 * viscosity) * (1 - 4 / 3 * p + p**4 / 3)
    assert power == pytest.approx(2 * wall * discharge, rel=1e-12)  # a polynomial of degree 3


def test_us_units_of_sludge_and_shear(service):
    foot, pound = 0.3048, 4.4482216152605
    sludge = {
        "law": "power-law",
        "consistency": 0.8 * foot**2 / pound,
        "index": 0.6,
        "density": 1010 * foot**3 / 0.45359237,
    }
    body = {
        "fluid": sludge,
        "states": [{"name": "s", "velocity_gradient": [[0, 3], [0, 0]]}],
        "unit_system": "us",
    }
    (state,) = service.post("stress/tensor", body)["result"]["states"]
    assert state["viscous_stress"][0][1] * pound / foot**2 == pytest.approx(0.8 * 3**0.6, rel=1e-12)


@pytest.mark.parametrize(
    "extra",
    [
        {"friction": {"manning_n": 0.03, "chezy_c": 50}},
        {"friction": {}},
        {"exposure": ["sturgeon"]},
    ],
    ids=["two laws", "no law", "unknown threshold"],
)
def test_contradictions_are_refused(service, extra):
    layout = open_water_body([sink(0j, 0.1)])
    response = service.client.post(
        "/v1/stress/tensor", json={"layout": layout, "at": {"points": [[1, 1]]}, **extra}
    )
    assert response.status_code == 422
