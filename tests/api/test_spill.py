"""spill/arrivals: what a request may say, and how the places that cannot be answered are told."""

import pytest

from support.http import a_layout, assert_problem, pointers

ROUTE = "/v1/spill/arrivals"


def a_spill(*releases, **changes):
    return {"layout": a_layout(), "releases": list(releases) or [{"name": "s", "at": [0, 5]}]} | changes


@pytest.mark.parametrize(
    ("release", "pointer"),
    [
        ({"name": "s"}, "#/releases/0"),
        ({"name": "s", "at": [0, 0], "outfall": "o"}, "#/releases/0"),
        ({"name": "s", "patch": {"centre": [0, 0]}}, "#/releases/0/patch"),
        ({"name": "s", "patch": {"centre": [0, 0], "radius": 0}}, "#/releases/0/patch/radius"),
        ({"name": "s", "at": [0, 0], "duration": -1}, "#/releases/0/duration"),
        ({"name": "s", "polyline": [[0, 0]]}, "#/releases/0/polyline"),
    ],
)
def test_releases_that_do_not_fit(client, release, pointer):
    problem = assert_problem(client.post(ROUTE, json=a_spill(release)), 422, "invalid-request")
    assert pointer in pointers(problem)


@pytest.mark.parametrize(
    ("changes", "code", "pointer"),
    [
        (
            {"releases": [{"name": "s", "patch": {"polygon": [[0, 0], [2, 2], [0, 2], [2, 0]]}}]},
            "release-impossible",
            "#/releases/0/patch/polygon",
        ),
        (
            {"releases": [{"name": "s", "polyline": [[1, 1], [1, 1]]}]},
            "release-impossible",
            "#/releases/0/polyline",
        ),
        ({"releases": [{"name": "s", "at": [0, 0]}] * 2}, "repeated-name", "#/releases/1/name"),
        ({"releases": [{"name": "s", "outfall": "nobody"}]}, "unknown-name", "#/releases/0/outfall"),
        ({"intakes": ["nobody"]}, "unknown-name", "#/intakes/0"),
        (
            {"transects": [{"name": "t", "polyline": [[1, 1], [1, 1]]}]},
            "release-impossible",
            "#/transects/0/polyline",
        ),
    ],
)
def test_what_cannot_be(client, changes, code, pointer):
    problem = assert_problem(client.post(ROUTE, json=a_spill(**changes)), 422, code)
    assert pointers(problem) == {pointer}


def test_a_place_without_an_answer_is_a_status_in_a_200(client):
    layout = a_layout(shore={"kind": "straight-bank", "point": [0, 0], "along": [1, 0]})
    answer = client.post(
        ROUTE, json=a_spill({"name": "dry", "at": [0, -5]}, {"name": "wet", "at": [0, 5]}, layout=layout)
    )
    assert answer.status_code == 200, answer.text
    dry, wet = answer.json()["result"]["releases"]
    assert dry["status"] == "on-land"
    assert dry["lost_share"] is None
    assert dry["arrivals"] == dry["outcomes"] == dry["curve"]["time"] == []
    assert wet["status"] == "ok"


def test_no_infinity_and_no_empty_reason_leaves_the_service(client):
    layout = {"depth": 2.0, "ambient": {"velocity": [0.2, 0.0]}}
    answer = client.post(ROUTE, json=a_spill(layout=layout)).json()
    release = answer["result"]["releases"][0]
    assert release["divide_distance"] is None
    assert release["outcomes"][0]["outcome"] == "passes"
    assert release["outcomes"][0]["meaning"]
    assert "advection-only" in {warning["code"] for warning in answer["warnings"]}
    assert answer["units"]["share"] == "1"
