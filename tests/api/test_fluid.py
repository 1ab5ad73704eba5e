"""The fluid of a stress: stated in the answer, and a note where its temperature was assumed."""

import pytest

from support.http import SAMPLE, a_layout, a_sample

STRESS = "/v1/stress/tensor"
CODE = "water-temperature-assumed"
STATES = [{"name": "shear", "velocity_gradient": [[0, 1], [0, 0]]}]
POINTS = {"points": [[0, 0]]}
ALONG = ["pressure_gradient_along"]


def answer(client, route, **body):
    response = client.post(route, json=body)
    assert response.status_code == 200, response.text
    return response.json()


def notes(envelope):
    """Pointers of the notes about an assumed temperature."""
    return [warning["pointer"] for warning in envelope["warnings"] if warning["code"] == CODE]


def test_water_is_stated_by_its_properties(ready_client):
    envelope = answer(ready_client, STRESS, fluid={"temperature": 12, "salinity": 3}, states=STATES)
    water = ready_client.get("/v1/water", params={"temperature": 12, "salinity": 3}).json()["result"]
    assert envelope["result"]["fluid"] == {
        "law": "newtonian",
        "dynamic_viscosity": water["dynamic_viscosity"],
        "density": water["density"],
        "second_viscosity": None,
    }
    assert envelope["units"]["dynamic_viscosity"] == "Pa.s"
    assert envelope["units"]["density"] == "kg/m3"
    assert notes(envelope) == []


def test_own_fluid_is_stated_as_given(ready_client):
    fluid = {"dynamic_viscosity": 0.002, "density": 1010.0, "second_viscosity": -0.001}
    envelope = answer(ready_client, STRESS, fluid=fluid, states=STATES)
    assert envelope["result"]["fluid"] == {"law": "newtonian", **fluid}
    assert notes(envelope) == []


@pytest.mark.parametrize("system", ["si", "us"])
@pytest.mark.parametrize("fluid", [{}, {"salinity": 35}])
def test_assumed_temperature_of_a_fluid(ready_client, fluid, system):
    envelope = answer(ready_client, STRESS, fluid=fluid, states=STATES, unit_system=system)
    (note,) = envelope["warnings"]
    assert (note["code"], note["severity"], note["pointer"]) == (CODE, "note", "#/fluid")
    expected = {"si": (10.0, "Cel"), "us": (50.0, "[degF]")}  # 10 degC are 50 degF
    assert (note["value"], note["unit"]) == expected[system]


@pytest.mark.parametrize(
    ("water", "body", "expected"),
    [
        ({"temperature": 12}, {}, []),
        ({}, {}, ["#/layout/water/temperature"]),
        ({}, {"fluid": {"temperature": 12}}, []),
        ({}, {"fluid": {}}, ["#/fluid"]),
    ],
)
def test_assumed_temperature_of_a_layout(ready_client, water, body, expected):
    layout = a_layout(water=water)
    assert notes(answer(ready_client, STRESS, layout=layout, at=POINTS, **body)) == expected


@pytest.mark.parametrize(
    ("water", "quantities", "expected"),
    [
        ({}, [], []),
        ({}, ALONG, ["#/layout/water/temperature"]),
        ({"temperature": 12}, ALONG, []),
    ],
)
def test_field_says_so_only_where_it_matters(ready_client, water, quantities, expected):
    sample = a_sample(layout=a_layout(water=water), quantities=quantities)
    assert notes(answer(ready_client, SAMPLE, **sample)) == expected


def test_assessment_states_its_fluid(ready_client):
    envelope = answer(ready_client, "/v1/assessment", layout=a_layout(), at=POINTS)
    assert envelope["result"]["stress"]["fluid"]["density"] == pytest.approx(
        999.7, abs=0.1
    )  # TEOS-10, 10 degC
    assert notes(envelope) == ["#/layout/water/temperature"]
    assert "turbulence-left-out" in {warning["code"] for warning in envelope["warnings"]}


def test_assessment_without_points_has_no_fluid(ready_client):
    envelope = answer(ready_client, "/v1/assessment", layout=a_layout())
    assert envelope["result"]["stress"] is None
    assert notes(envelope) == []
