"""Coordinates cut out of a body: the numbers of the standard library's reader, or the usual way."""

import json

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from forebay.api.number_arrays import LARGEST, STAND_IN, excerpt
from forebay.api.reading import read_request
from forebay.api.schemas.field import SampleRequest
from forebay.api.units import UnitSystem
from forebay.app import create_app
from forebay.settings import Settings
from support.http import SAMPLE, a_layout, a_sample, assert_problem, pointers

COORDINATES = st.one_of(
    st.floats(-LARGEST, LARGEST), st.integers(-(10**8), 10**8), st.sampled_from([0.0, -0.0, 5e-324, 1e-300])
)


@given(st.lists(st.tuples(COORDINATES, COORDINATES), min_size=1, max_size=40), st.sampled_from([None, 1]))
def test_pairs_are_those_of_the_standard_reader(pairs, indent):
    body = json.dumps(a_sample(at={"points": pairs}), indent=indent).encode()
    part = excerpt(body)
    if indent is None:  # a body with line breaks may take the usual way
        assert part is not None
    if part is not None:
        np.testing.assert_array_equal(np.stack((part.x, part.y), axis=-1), np.array(pairs, dtype=float))
        assert json.loads(part.rest) == a_sample(at={"points": [list(STAND_IN)]})


@given(st.lists(st.tuples(COORDINATES, COORDINATES), min_size=1, max_size=40))
def test_columns_are_those_of_the_standard_reader(pairs):
    x, y = (list(column) for column in zip(*pairs, strict=True))
    part = excerpt(json.dumps(a_sample(at={"x": x, "y": y})).encode())
    assert part is not None
    np.testing.assert_array_equal(part.x, x)
    np.testing.assert_array_equal(part.y, y)


LEFT_ALONE = [
    "[[1,2],[3]]",
    "[[1,2,3],[3,4]]",
    "[[1,2],[3,null]]",
    "[[1,2],[3,true]]",
    '[[1,2],["3",4]]',
    "[[1,2],[3,NaN]]",
    "[[1,2],[3,-]]",
    "[[1,2],[03,4]]",
    "[[1,2],[3,1e999]]",
    "[[1,2],[3,2e8]]",
    "[[1,2][3,4]]",
    "[[1,2],,[3,4]]",
    "[[1 2,2],[3,4]]",
    "[]",
    "[[]]",
    "[[1,2],[3,4]",
]


@pytest.mark.parametrize("points", LEFT_ALONE)
def test_what_is_not_plain_pairs_is_left_to_the_usual_way(client, points):
    body = json.dumps(a_sample(at="POINTS")).replace('"POINTS"', f'{{"points": {points}}}').encode()
    assert excerpt(body) is None
    assert client.post(SAMPLE, content=body, headers={"Content-Type": "application/json"}).status_code in {
        400,
        422,
    }


def test_array_that_only_looks_like_the_points_does_not_replace_them():
    layout = a_layout(elements=[a_layout()["elements"][0] | {"name": '"at":{"points":[[1,2]]'}])
    request = read_request(SampleRequest, json.dumps(a_sample(layout=layout)).encode())
    assert request.at.positions(UnitSystem.SI).tolist() == [0, 20 + 5j]


def test_second_member_of_the_name_wins_as_it_does_in_the_usual_way():
    body = json.dumps(a_sample()).encode()[:-1] + b',"at":{"points":[[7,8]]}}'
    assert read_request(SampleRequest, body).at.positions(UnitSystem.SI).tolist() == [7 + 8j]


def test_error_beside_the_arrays_points_where_it_is(client):
    body = a_sample(layout=a_layout(depth=-1))
    assert pointers(assert_problem(client.post(SAMPLE, json=body), 422, "invalid-request")) == {
        "#/layout/depth"
    }


def test_count_of_the_arrays_is_limited():
    small = create_app(Settings(workers=1, max_points=3))
    from starlette.testclient import TestClient

    with TestClient(small, headers={"Origin": "x"}) as client:
        points = [[k, 1] for k in range(4)]
        problem = assert_problem(client.post(SAMPLE, json=a_sample(at={"points": points})), 422, "too-large")
    assert problem["asked"] == 4


@given(st.lists(COORDINATES, min_size=1, max_size=5))
def test_us_coordinates_are_read_in_feet(x):
    body = a_sample(at={"x": x, "y": x}, unit_system="us")
    request = read_request(SampleRequest, json.dumps(body).encode())
    expected = 0.3048 * np.array(x, dtype=float)
    np.testing.assert_array_equal(request.at.positions(request.unit_system).real, expected)
