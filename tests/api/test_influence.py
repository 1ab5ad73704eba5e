"""influence/zone over HTTP: what is asked, what is said of the window, units."""

import math

import pytest

from support.http import Json, assert_problem, example

ROUTE = "/v1/influence/zone"
SINK: Json = {"kind": "sink", "name": "intake", "at": [3.0, 1.0], "discharge": 2.0}
OPEN: Json = {"depth": 4.0, "elements": [SINK]}


def ask(client, **body):
    response = client.post(ROUTE, json={"layout": OPEN, "element": "intake", "limit_speed": 0.1, **body})
    assert response.status_code == 200, response.text
    return response.json()


def test_zone_in_open_water(ready_client):
    # r = Q / (2 pi h v)
    result = ask(ready_client)["result"]
    radius = 2.0 / 4.0 / (2 * math.pi * 0.1)
    assert result["status"] == "complete"
    assert result["is_certified"] is True
    assert result["area_least"] <= math.pi * radius**2 <= result["area_largest"]
    assert result["volume"] == pytest.approx(4.0 * result["area"], rel=1e-8)  # nine digits
    assert result["reach_least"] <= radius <= result["reach_largest"]


def test_window_of_its_own_may_be_too_small(ready_client):
    result = ask(ready_client, half_width=0.5)["result"]
    assert result["status"] == "reaches-window"
    assert result["window"] == [2.5, 3.5, 0.5, 1.5]


def test_current_above_the_limit_has_no_end(ready_client):
    layout = OPEN | {"ambient": {"velocity": [0.5, 0.0]}}
    assert ask(ready_client, layout=layout, speed="total")["result"]["status"] == "reaches-window"
    assert ask(ready_client, layout=layout)["result"]["status"] == "complete"


def test_us_units(ready_client):
    foot = 0.3048
    elements = [SINK | {"at": [0, 0], "discharge": 2.0 / foot**3}]
    layout = {"depth": 4.0 / foot, "elements": elements}
    answer = ask(ready_client, layout=layout, limit_speed=0.1 / foot, unit_system="us")
    assert answer["units"]["volume"] == "[ft_i]3"
    si = ask(ready_client)["result"]
    assert answer["result"]["volume"] * foot**3 == pytest.approx(si["volume"], rel=1e-7)  # nine digits


def test_depth_mean_zone_in_the_near_field_says_how_wrong_it_is(ready_client):
    layout = OPEN | {"elements": [SINK | {"elevation": 2.0}]}
    answer = ask(ready_client, layout=layout)
    (warning,) = [w for w in answer["warnings"] if w["code"] == "near-field-error"]
    assert warning["value"] > 1.0  # 0.8 m from a point 2 m above the bed


def test_unknown_element(ready_client):
    problem = assert_problem(
        ready_client.post(ROUTE, json=example("findInfluenceZone", element="x")), 422, "unknown-name"
    )
    assert problem["errors"][0]["pointer"] == "#/element"


def test_depth_without_elevation(ready_client):
    body = {"layout": OPEN, "element": "intake", "limit_speed": 0.1, "model": "point-intake-3d"}
    assert_problem(ready_client.post(ROUTE, json=body), 422, "elevation-missing")


def test_elevation_above_the_surface(ready_client):
    layout = OPEN | {"elements": [SINK | {"elevation": 4.1}]}
    body = {"layout": layout, "element": "intake", "limit_speed": 0.1}
    problem = assert_problem(ready_client.post(ROUTE, json=body), 422, "elevation-outside-water")
    assert problem["errors"][0]["pointer"] == "#/layout/elements/0/elevation"
