"""Units: every number read and answered in the system asked for, and named in UCUM codes."""

import numpy as np
import pytest

from forebay.api.envelope import units_of
from forebay.api.routers.registry import OPERATIONS
from forebay.api.units import FOOT, SHARED_UNITS, US_UNITS, UnitSystem
from forebay.trade.applicability.review import CATALOGUE
from support.http import SAMPLE, a_sample, assert_problem

QUANTITIES = [
    "direction_deg",
    "stream_function",
    "head_change",
    "vorticity",
    "acceleration_x",
    "pressure_gradient_along",
]


def in_feet(sample):
    """The same request written in US units."""
    layout = sample["layout"]
    (sink,) = layout["elements"]
    element = sink | {
        "at": [part / FOOT for part in sink["at"]],
        "discharge": sink["discharge"] / FOOT**3,
    }
    ambient = {"velocity": [part / FOOT for part in layout["ambient"]["velocity"]]}
    points = [[part / FOOT for part in point] for point in sample["at"]["points"]]
    return sample | {
        "unit_system": "us",
        "layout": layout | {"depth": layout["depth"] / FOOT, "elements": [element], "ambient": ambient},
        "at": {"points": points},
    }


def test_us_request_is_the_si_request_in_other_units(ready_client):
    request = a_sample(digits=17, quantities=QUANTITIES)
    si, us = (ready_client.post(SAMPLE, json=body).json() for body in (request, in_feet(request)))
    assert us["units"]["u"] == "[ft_i]/s"
    assert us["units"]["x"] == "[ft_i]"
    assert us["units"]["stream_function"] == "[ft_i]2/s"
    for name, unit in si["units"].items():
        if name in {"shape", "index"}:
            continue
        back = [UnitSystem.US.read(value, unit) for value in us["result"][name]]
        # a dozen roundings of 1e-16 each on the way there and back
        np.testing.assert_allclose(back, si["result"][name], rtol=1e-13, atol=1e-17)


@pytest.mark.parametrize("unit", US_UNITS)
def test_units_convert_there_and_back(unit):
    there = UnitSystem.US.write(12.5, unit)
    # one multiplication and one division
    assert UnitSystem.US.read(there, unit) == pytest.approx(12.5, rel=4e-16)


@pytest.mark.parametrize(
    ("us", "unit", "si"),
    [
        (1.0, "m", 0.3048),  # international foot, 1959
        (1.0, "m3/s", 0.028316846592),  # NIST SP 811, appendix B.8
        (1.0, "Pa", 47.88025898033584),  # lbf/ft2, NIST SP 811
        (1.0, "Pa.s", 47.88025898033584),
        (1.0, "kg/m3", 16.018463373960142),  # lb/ft3, NIST SP 811
        (212.0, "Cel", 100.0),
        (32.0, "Cel", 0.0),
    ],
)
def test_published_conversion_factors(us, unit, si):
    assert UnitSystem.US.read(us, unit) == pytest.approx(si, rel=1e-15)


@pytest.mark.parametrize(
    "operation", [o for o in OPERATIONS.values() if o.result], ids=lambda o: o.operation_id
)
def test_every_unit_of_an_answer_has_a_us_counterpart(operation):
    assert set(units_of(operation.result).values()) <= set(US_UNITS) | SHARED_UNITS


def numeric_names(value, name=""):
    """Names of the fields that hold a number, at any depth."""
    if isinstance(value, bool) or value is None or isinstance(value, str):
        return set()
    if isinstance(value, int | float):
        return {name}
    if isinstance(value, dict):
        return set().union(*(numeric_names(inner, key) for key, inner in value.items()))
    return set().union(set(), *(numeric_names(inner, name) for inner in value))


@pytest.mark.parametrize("system", ["si", "us"])
@pytest.mark.parametrize(
    "operation", [o for o in OPERATIONS.values() if o.result], ids=lambda o: o.operation_id
)
def test_every_number_of_an_answer_has_its_unit(answer_to_example, operation, system):
    answer = answer_to_example(operation.operation_id, system)
    assert answer.status_code == 200, answer.text
    assert numeric_names(answer.json()["result"]) <= set(answer.json()["units"])


def test_warnings_in_the_units_asked_for(ready_client):
    request = a_sample(digits=17)
    si, us = (ready_client.post(SAMPLE, json=body).json()["warnings"] for body in (request, in_feet(request)))
    assert [warning["code"] for warning in us] == [warning["code"] for warning in si]
    (metres,), (feet,) = ([w for w in warnings if w["code"] == "near-field"] for warnings in (si, us))
    assert (metres["value"], metres["limit"], metres["unit"]) == (4.0, 8.0, "m")
    # two divisions by 0.3048 and one multiplication
    assert (feet["value"] * FOOT, feet["limit"] * FOOT) == pytest.approx((4.0, 8.0), rel=1e-15)
    assert feet["unit"] == "[ft_i]"
    assert "8 m" in feet["message"]
    for warning in si + us:
        compared = warning["value"] is not None or warning["limit"] is not None
        assert (warning["unit"] is not None) is compared


@pytest.mark.parametrize("kind", CATALOGUE, ids=lambda kind: kind.code)
def test_every_unit_of_a_warning_has_a_us_counterpart(kind):
    assert kind.unit is None or kind.unit in set(US_UNITS) | SHARED_UNITS


def test_facts_of_a_problem_in_the_units_asked_for(client):
    shore = {"kind": "straight-bank", "point": [0, 0], "along": [1, 0]}
    layout = {"depth": 4, "shore": shore, "ambient": {"velocity": [1, 0.123456789]}}
    si, us = (
        assert_problem(
            client.post("/v1/layout/review", json={"unit_system": system, "layout": layout}),
            422,
            "current-through-wall",
        )
        for system in ("si", "us")
    )
    assert abs(si["through"]) == abs(us["through"]) == 0.123457
    assert (si["unit"], us["unit"]) == ("m/s", "[ft_i]/s")


def test_water_in_fahrenheit(client):
    answer = client.get("/v1/water", params={"temperature": 68, "unit_system": "us"}).json()
    assert answer["units"]["temperature"] == "[degF]"
    assert answer["units"]["density"] == "[lb_av]/[ft_i]3"
    metric = client.get("/v1/water", params={"temperature": 20}).json()
    back = UnitSystem.US.read(answer["result"]["density"], "kg/m3")
    assert back == pytest.approx(metric["result"]["density"], rel=1e-8)  # nine digits are sent
