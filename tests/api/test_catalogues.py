"""Catalogues and documents: water, limits, criteria, problems."""

from html import escape

import pytest

from forebay.api.cures import CURES
from forebay.api.problems import catalogue, flow_errors
from support.http import assert_problem


def test_limits_are_those_enforced(client, app):
    answer = client.get("/v1/limits").json()
    assert answer["result"] == app.state.limits._asdict()
    assert answer["units"]["max_body"] == "By"


def test_criteria_name_their_sources(client):
    criteria = client.get("/v1/criteria").json()["result"]["criteria"]
    assert len({criterion["id"] for criterion in criteria}) == len(criteria) > 10
    assert all(criterion["source"] and criterion["confidence"] for criterion in criteria)


def test_criterion_in_si_beside_its_published_number(client):
    criteria = client.get("/v1/criteria").json()["result"]["criteria"]
    (half_foot, *_) = [record for record in criteria if record["published_limit"] == "0.5 ft/s"]
    assert half_foot["limit"] == 0.1524  # 0.5 ft/s, the foot being exactly 0.3048 m
    assert half_foot["unit"] == "m/s"


@pytest.mark.parametrize(
    ("query", "parameter"),
    [
        ({}, "temperature"),
        ({"temperature": "warm"}, "temperature"),
        ({"temperature": "nan"}, "temperature"),
        ({"temperature": "1e999"}, "temperature"),
        ({"temperature": 12, "salinity": -1}, "salinity"),
        ({"temperature": 12, "unit_system": "imperial"}, "unit_system"),
        ({"temperature": 12, "temprature": 13}, "temprature"),
        ({"temperature": [12, 13]}, "temperature"),
        ({"temperature": 12, "digits": 3}, "digits"),
    ],
)
def test_wrong_query_names_its_parameter(client, query, parameter):
    problem = assert_problem(client.get("/v1/water", params=query), 422, "invalid-request")
    assert [error["parameter"] for error in problem["errors"]] == [parameter]


def test_water_has_the_digits_asked_for(client):
    exact, rounded = (
        client.get("/v1/water", params={"temperature": 12.3, "digits": digits}).json()["result"]["density"]
        for digits in (17, 5)
    )
    assert rounded == float(f"{exact:.5g}") != exact


def test_range_of_water_in_fahrenheit(client):
    response = client.get("/v1/water", params={"temperature": 20, "unit_system": "us"})
    problem = assert_problem(response, 422, "water-out-of-range")
    assert (problem["lowest"], problem["highest"], problem["unit"]) == (32.0, 104.0, "[degF]")
    assert "-6.6" not in response.text  # what was asked for is not repeated


def test_water_outside_its_range(client):
    problem = assert_problem(client.get("/v1/water", params={"temperature": 90}), 422, "water-out-of-range")
    assert problem["errors"][0]["parameter"] == "temperature"


@pytest.mark.parametrize("code", catalogue())
def test_every_problem_is_explained(client, code):
    kind = catalogue()[code]
    answer = client.get(f"/problems/{code}")
    assert answer.json() == {
        "type": f"/problems/{code}",
        "title": kind.title,
        "status": kind.status,
        "cause": kind.cause,
        "cure": kind.cure,
    }
    page = client.get(f"/problems/{code}", headers={"Accept": "text/html"})
    assert page.headers["content-type"].startswith("text/html")
    assert all(escape(text) in page.text for text in (kind.title, kind.cause, kind.cure))
    assert "{" not in page.text


def test_each_error_of_a_request_has_a_cure_and_no_other():
    assert set(CURES) == set(flow_errors())


def test_unknown_problem(client):
    assert_problem(client.get("/problems/none-such"), 404, "not-found")


def test_problem_page_in_another_format(client):
    assert_problem(client.get("/problems/busy", headers={"Accept": "image/png"}), 406, "not-acceptable")


def test_unknown_asset(client):
    assert_problem(client.get("/docs-assets/problem.html"), 404, "not-found")
    assert_problem(client.get("/docs-assets/%2e%2e/app.py"), 404, "not-found")
