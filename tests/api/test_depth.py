"""Heights and openings over HTTP: ways of saying where, what is refused, long columns, tables."""

import csv
import io

import pytest

from support.http import SAMPLE, Json, assert_problem

SINK: Json = {"kind": "sink", "name": "intake", "at": [0.0, 0.0], "discharge": 2.0, "elevation": 1.0}
LAYOUT: Json = {"depth": 4.0, "ambient": {"velocity": [0.1, 0.0]}, "elements": [SINK]}


def body(**changes) -> Json:
    return {"layout": LAYOUT, "model": "point-intake-3d", "at": {"points": [[2, 0, 1], [3, 0, 1]]}} | changes


def answer(client, **changes):
    response = client.post(SAMPLE, json=body(**changes))
    assert response.status_code == 200, response.text
    return response.json()


def test_ways_of_giving_heights_agree(ready_client):
    ways = [
        {"points": [[2, 0, 1], [3, 0, 1]]},
        {"points": [[2, 0], [3, 0]], "z": 1},
        {"x": [2, 3], "y": [0, 0], "z": [1, 1]},
        {"line": {"from": [2, 0], "to": [3, 0], "count": 2}, "z": 1.0},
    ]
    results = [answer(ready_client, at=at)["result"] for at in ways]
    assert all(result == results[0] for result in results)
    assert set(results[0]) == {"x", "y", "z", "u", "v", "w", "speed", "shape", "flagged", "wall_leak"}


def test_many_points_say_the_same_as_few(ready_client):
    few = answer(ready_client)["result"]
    points = [[2, 0, 1], [3, 0, 1]] * 1500
    many = answer(ready_client, at={"points": points})["result"]
    assert many["w"] == few["w"] * 1500
    columns = {"x": [2, 3] * 1500, "y": [0, 0] * 1500, "z": [1, 1] * 1500}
    assert answer(ready_client, at=columns)["result"]["w"] == many["w"]


@pytest.mark.parametrize(
    "changes",
    [
        {"at": {"points": [[2, 0], [3, 0]]}},
        {"model": "depth-mean"},
        {"at": {"points": [[2, 0, 1], [3, 0]]}},
        {"at": {"points": [[2, 0, 1]], "z": 1}},
        {"at": {"x": [2, 3], "y": [0, 0], "z": [1]}},
        {"model": "point-intake"},
    ],
    ids=["no heights", "heights without the model", "some heights", "two ways", "too few heights", "model"],
)
def test_heights_that_do_not_fit_are_refused(ready_client, changes):
    assert_problem(ready_client.post(SAMPLE, json=body(**changes)), 422, "invalid-request")


def test_places_without_a_value(ready_client):
    shore = {"kind": "straight-bank", "point": [0, -2], "along": [1, 0]}
    points = [[0, 0, 1], [0, 0, 3], [1, 1, 4.5], [1, 1, -0.1], [1, -3, 1]]
    result = answer(ready_client, layout=LAYOUT | {"shore": shore}, at={"points": points})["result"]
    assert result["flagged"] == [
        {"index": 0, "status": "on-singularity"},
        {"index": 2, "status": "outside-depth"},
        {"index": 3, "status": "outside-depth"},
        {"index": 4, "status": "on-land"},
    ]
    assert [value is None for value in result["w"]] == [True, False, True, True, True]
    assert result["w"][1] < 0.0  # towards the intake below


def test_quantities_of_the_velocity_alone(ready_client):
    wanted = ["direction_deg", "head_change", "pressure_coefficient"]
    result = answer(ready_client, quantities=wanted)["result"]
    speed = result["speed"][0]
    # Bernoulli against 0.1 m/s
    assert result["head_change"][0] == pytest.approx((0.01 - speed**2) / (2 * 9.80665), rel=1e-7)
    assert result["pressure_coefficient"][0] == pytest.approx(1 - speed**2 / 0.01, rel=1e-7)
    problem = assert_problem(
        ready_client.post(SAMPLE, json=body(quantities=["head_change", "vorticity"])), 422, "plane-quantity"
    )
    assert problem["errors"][0]["pointer"] == "#/quantities/1"


def test_one_height_for_more_points_than_memory_holds_is_too_large(ready_client):
    grid = {"x": [0, 1], "nx": 1_000_000, "y": [0, 1], "ny": 1_000_000}
    response = ready_client.post(SAMPLE, json=body(at={"grid": grid, "z": 1.0}), headers={"Origin": "x"})
    assert_problem(response, 422, "too-large")


def test_table_has_the_heights(ready_client):
    response = ready_client.post(SAMPLE, json=body(), headers={"Accept": "text/csv"})
    rows = list(csv.DictReader(io.StringIO(response.text)))
    assert [float(row["z"]) for row in rows] == [1.0, 1.0]
    assert [float(row["w"]) for row in rows] == answer(ready_client)["result"]["w"]


def test_without_an_elevation_there_is_nothing_to_resolve(ready_client):
    layout = LAYOUT | {"elements": [{key: value for key, value in SINK.items() if key != "elevation"}]}
    assert_problem(ready_client.post(SAMPLE, json=body(layout=layout)), 422, "elevation-missing")


def test_resolved_near_field_is_not_warned_of(ready_client):
    codes = {warning["code"] for warning in answer(ready_client)["warnings"]}
    assert not codes & {"near-field-error", "near-field-result"}
    plane = body(model="depth-mean", at={"points": [[2, 0], [3, 0]]})
    warnings = ready_client.post(SAMPLE, json=plane).json()["warnings"]
    (warning,) = [warning for warning in warnings if warning["code"] == "near-field-error"]
    assert warning["value"] > 0.1
    assert warning["unit"] == "1"


def test_wind_in_one_way_only(ready_client):
    layout = LAYOUT | {"wind": {"speed": 9, "direction_deg": 30}, "wind_speed": 9}
    response = ready_client.post("/v1/layout/review", json={"layout": layout})
    assert_problem(response, 422, "invalid-request")


def test_wind_and_its_short_form_raise_the_same(ready_client):
    values = []
    for wind in ({"wind": {"speed": 9}}, {"wind_speed": 9}):
        response = ready_client.post("/v1/layout/review", json={"layout": LAYOUT | wind})
        found = [w for w in response.json()["warnings"] if w["code"] == "wind-drift"]
        values.append([(w["value"], w["limit"]) for w in found])
    assert values[0] == values[1] == [(0.27, 0.03)]


def test_interface_above_the_surface(ready_client):
    layout = LAYOUT | {"interface_elevation": 5}
    problem = assert_problem(
        ready_client.post("/v1/layout/review", json={"layout": layout}), 422, "elevation-outside-water"
    )
    assert problem["errors"][0]["pointer"] == "#/layout/interface_elevation"
