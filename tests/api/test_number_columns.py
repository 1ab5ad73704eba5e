"""Bodies with raw columns are answered as the same request in JSON, and refused with a reason."""

import io

import numpy as np
import orjson
import pytest

from forebay.api.reading import read_request
from forebay.api.schemas.field import SampleRequest
from support.http import SAMPLE, a_layout, assert_problem, pointers

RAW = {"Content-Type": "application/octet-stream"}

X, Y = np.linspace(-40.0, 60.0, 700), np.linspace(80.0, 6.0, 700)


def raw(x=X, y=Y, **members):
    """A body: the request on a line, then x and y."""
    line = orjson.dumps({"layout": a_layout()} | members)
    return line + b"\n" + np.asarray(x, dtype="<f8").tobytes() + np.asarray(y, dtype="<f8").tobytes()


@pytest.mark.parametrize("system", ["si", "us"])
def test_answer_is_that_of_the_same_columns_in_json(client, system):
    members = {"layout": a_layout(), "quantities": ["head_change"], "unit_system": system}
    in_json = client.post(SAMPLE, json=members | {"at": {"x": X.tolist(), "y": Y.tolist()}})
    response = client.post(SAMPLE, content=raw(**members), headers=RAW)
    assert response.status_code == 200, response.text[:2000]
    assert response.content == in_json.content
    assert response.headers["etag"] != in_json.headers["etag"]


def test_answer_of_a_worker_is_the_same(ready_client):
    x = np.linspace(20.0, 90.0, 600_000)

    def table(column):
        headers = RAW | {"Accept": "application/x-npy"}
        response = ready_client.post(SAMPLE, content=raw(column, column), headers=headers)
        assert response.status_code == 200, response.text[:2000]
        return np.load(io.BytesIO(response.content))

    many, few = table(x), table(x[:3])  # one in a worker, the other in the event loop
    assert len(many) == len(x)
    assert (many[:3] == few).all()


def test_numbers_are_taken_to_the_last_bit():
    x, y = np.array([0.1, np.nextafter(0.1, 1.0)]), np.array([1e8, -5e-324])
    read = read_request(SampleRequest, raw(x, y), RAW["Content-Type"])
    assert read.at.positions(read.unit_system).tobytes() == (x + 1j * y).tobytes()


def test_heights_are_one_for_all(client):
    layout = a_layout()
    layout["elements"][0]["elevation"] = 1.2
    members = {"layout": layout, "model": "point-intake-3d"}
    x, y = [20.0, 30.0], [5.0, 8.0]
    response = client.post(SAMPLE, content=raw(x, y, **members, at={"z": 1.5}), headers=RAW)
    assert response.json()["result"]["z"] == [1.5, 1.5]
    problem = client.post(SAMPLE, content=raw(x, y, **members, at={"z": [1.5]}), headers=RAW)
    assert pointers(assert_problem(problem, 422, "invalid-request")) == {"#/at/z"}


@pytest.mark.parametrize(
    "body",
    [
        b"",
        b"{}",
        b"{}\n",
        b"[]\n" + bytes(16),
        b"{\n" + bytes(16),
        raw() + b"\0",
        raw()[:-8],
        b"[" * 100_000 + b"\n" + bytes(16),
    ],
    ids=["empty", "line", "no-columns", "list", "torn", "a-byte-more", "a-number-less", "deep"],
)
def test_what_is_not_of_this_form_is_refused(client, body):
    assert_problem(client.post(SAMPLE, content=body, headers=RAW), 400, "malformed-columns")


@pytest.mark.parametrize("wrong", [np.nan, np.inf, -np.inf, 1.0000001e8, -1e300])
@pytest.mark.parametrize("name", ["x", "y"])
def test_numbers_that_the_schema_would_refuse_are_refused(client, name, wrong):
    column = X.copy()
    column[-1] = wrong
    response = client.post(SAMPLE, content=raw(**{name: column}), headers=RAW)
    assert pointers(assert_problem(response, 422, "invalid-request")) == {f"#/at/{name}"}


@pytest.mark.parametrize("at", [{"x": [1.0], "y": [2.0]}, {"x": [1.0]}, []])
def test_places_are_given_once(client, at):
    response = client.post(SAMPLE, content=raw(at=at), headers=RAW)
    assert pointers(assert_problem(response, 422, "invalid-request")) == {"#/at"}


def test_other_faults_are_those_of_the_request(client):
    layout = a_layout(depth=-1.0)
    response = client.post(SAMPLE, content=raw(layout=layout), headers=RAW)
    assert pointers(assert_problem(response, 422, "invalid-request")) == {"#/layout/depth"}
    response = client.post(SAMPLE, content=raw(at={"points": [[1.0, 2.0]]}), headers=RAW)
    assert_problem(response, 422, "invalid-request")


def test_limits_hold(app, client):
    limit = app.state.limits.max_points
    column = np.zeros(limit + 1)
    problem = assert_problem(client.post(SAMPLE, content=raw(column, column), headers=RAW), 422, "too-large")
    assert problem["limit"] == limit


def test_other_routes_read_json_only(client):
    response = client.post("/v1/stagnation/search", content=raw(), headers=RAW)
    assert_problem(response, 415, "unsupported-media-type")
    assert response.headers["accept-post"] == "application/json"
