"""The price of a request before any work: what its own route would say of it."""

import pytest

from forebay.api.limits import Tier
from support.http import SAMPLE, a_layout, a_sample, assert_problem, example, pointers

ESTIMATE = "/v1/estimate"


def estimated(client, route, request):
    response = client.post(ESTIMATE, json={"route": route, "request": request})
    assert response.status_code == 200, response.text
    return response.json()["result"]


def test_small_request_is_answered_at_once(client):
    result = estimated(client, SAMPLE, a_sample())
    assert result["verdict"] == "at-once"
    assert result["reason"] is None
    assert (result["points"], result["elements"], result["pairs"], result["values"]) == (2, 1, 2, 10)
    assert 0 < result["seconds"] < 0.01
    assert result["limits"] == client.get("/v1/limits").json()["result"]


def test_large_request_is_queued_and_its_answer_is_about_as_large(ready_client):
    request = a_sample(at={"grid": {"x": [-90, 90], "nx": 1000, "y": [-90, 90], "ny": 1000}})
    result = estimated(ready_client, SAMPLE, request)
    assert result["pairs"] > Tier.INLINE.work
    assert result["verdict"] == "queued"
    request["at"]["grid"] |= {"nx": 100, "ny": 100}
    size = len(ready_client.post(SAMPLE, json=request).content)
    # nine digits, a sign, a point and a comma, less what is round
    assert estimated(ready_client, SAMPLE, request)["bytes"] == pytest.approx(size, rel=0.5)


def test_search_is_queued_and_its_time_is_not_known(client):
    result = estimated(client, "/v1/withdrawal/trace", example("traceWithdrawal"))
    assert result["verdict"] == "queued"
    assert result["seconds"] is None


def test_request_over_a_limit_is_refused_as_its_route_refuses_it(client):
    request = a_sample(at={"grid": {"x": [0, 9], "nx": 30000, "y": [0, 9], "ny": 30000}})
    result = estimated(client, SAMPLE, request)
    refused = assert_problem(client.post(SAMPLE, json=request), 422, "too-large")
    assert result["verdict"] == "refused"
    assert result["reason"] == refused["detail"]
    assert refused["limit"] == client.get("/v1/limits").json()["result"]["max_points"]


def test_errors_point_into_the_inner_request(client):
    body = {"route": SAMPLE, "request": a_sample(layout=a_layout(depth=0))}
    problem = assert_problem(client.post(ESTIMATE, json=body), 422, "invalid-request")
    assert pointers(problem) == {"#/request/layout/depth"}


@pytest.mark.parametrize("route", ["/v1/estimate", "/v1/limits", "/nowhere", ""])
def test_only_compute_routes_have_a_price(client, route):
    body = {"route": route, "request": {}}
    assert pointers(assert_problem(client.post(ESTIMATE, json=body), 422, "no-such-route")) == {"#/route"}
