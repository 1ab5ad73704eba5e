"""Requests and checks that tests of the HTTP layer share."""

import copy
from typing import Any

from forebay.api.examples import request_example
from forebay.api.problems import catalogue

Json = dict[str, Any]

SAMPLE = "/v1/field/sample"


def a_layout(**changes: Any) -> Json:
    """One intake in a current, with members replaced."""
    layout: Json = {
        "depth": 4.0,
        "ambient": {"velocity": [0.35, 0.0]},
        "elements": [{"kind": "sink", "name": "town intake", "at": [10.0, 5.0], "discharge": 1.8}],
    }
    return layout | changes


def a_sample(**changes: Any) -> Json:
    """Field at two points of it, with members replaced."""
    return {"layout": a_layout(), "at": {"points": [[0.0, 0.0], [20.0, 5.0]]}} | changes


def example(operation_id: str, **changes: Any) -> Json:
    """A copy of an operation's example, with members replaced."""
    return copy.deepcopy(request_example(operation_id)) | changes


def assert_problem(response: Any, status: int, code: str) -> Json:
    """Check that an answer is a complete problem of this kind, small and readable from another origin."""
    assert response.status_code == status, response.text[:2000]
    assert response.headers["content-type"] == "application/problem+json"
    assert response.headers["access-control-allow-origin"] == "*"
    assert response.headers["x-request-id"]
    assert len(response.content) < 16 * 1024
    problem: Json = response.json()
    assert problem["type"] == f"/problems/{code}"
    assert problem["status"] == status == catalogue()[code].status
    assert problem["title"] == catalogue()[code].title
    assert problem["detail"]
    assert problem["instance"].endswith(response.headers["x-request-id"])
    assert len(problem.get("errors", [])) <= 20
    return problem


def pointers(problem: Json) -> set[str]:
    """Pointers of a problem's errors."""
    return {error["pointer"] for error in problem["errors"]}
