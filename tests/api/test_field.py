"""field/sample over HTTP: ways of saying where, columns, points without a value, tables."""

import csv
import io

import pytest

from forebay.workflows.sample import Quantity
from support.http import SAMPLE, a_layout, a_sample, assert_problem, pointers

ALWAYS = ["x", "y", "u", "v", "speed"]


def result(response):
    assert response.status_code == 200, response.text
    return response.json()["result"]


def test_ways_of_saying_where_agree(ready_client):
    grid = {"grid": {"x": [0, 2], "nx": 3, "y": [10, 11], "ny": 2}}
    points = [[x, y] for y in (10, 11) for x in (0, 1, 2)]
    columns = {"x": [x for x, _ in points], "y": [y for _, y in points]}
    answers = [
        result(ready_client.post(SAMPLE, json=a_sample(at=at))) for at in (grid, {"points": points}, columns)
    ]
    assert answers[0]["shape"] == [2, 3]
    assert answers[1]["shape"] == answers[2]["shape"] == [6]
    for name in ALWAYS:
        assert answers[0][name] == answers[1][name] == answers[2][name]


def test_line_includes_its_ends(ready_client):
    at = {"line": {"from": [0, 0], "to": [30, 60], "count": 4}}
    answer = result(ready_client.post(SAMPLE, json=a_sample(at=at)))
    assert list(zip(answer["x"], answer["y"], strict=True)) == [(0, 0), (10, 20), (20, 40), (30, 60)]


def test_every_quantity_is_a_column(ready_client):
    wanted = [str(quantity) for quantity in Quantity]
    answer = result(ready_client.post(SAMPLE, json=a_sample(quantities=wanted)))
    assert {*ALWAYS, *wanted, "shape", "flagged"} == set(answer)
    assert all(len(answer[name]) == 2 for name in (*ALWAYS, *wanted))


def test_columns_that_were_not_asked_for_are_left_out(ready_client):
    assert set(result(ready_client.post(SAMPLE, json=a_sample()))) == {*ALWAYS, "shape", "flagged"}


SHORE = {"kind": "straight-bank", "point": [0, 0], "along": [1, 0]}


def test_points_without_a_value_are_null_and_flagged(ready_client):
    points = [[10, 5], [0, -3], [0, 3]]
    answer = result(
        ready_client.post(SAMPLE, json=a_sample(layout=a_layout(shore=SHORE), at={"points": points}))
    )
    assert answer["u"][:2] == [None, None]
    assert answer["u"][2] is not None
    assert answer["flagged"] == [{"index": 0, "status": "on-singularity"}, {"index": 1, "status": "on-land"}]


def test_table(ready_client):
    points = [[10, 5], [0, -3], [0, 3]]
    body = a_sample(layout=a_layout(shore=SHORE), at={"points": points}, quantities=["head_change"])
    response = ready_client.post(SAMPLE, json=body, headers={"Accept": "text/csv"})
    assert response.headers["content-type"] == "text/csv; charset=utf-8; header=present"
    rows = list(csv.DictReader(io.StringIO(response.text)))
    assert list(rows[0]) == [*ALWAYS, "head_change", "status"]
    assert [row["status"] for row in rows] == ["on-singularity", "on-land", ""]
    assert rows[0]["u"] == ""
    same = result(ready_client.post(SAMPLE, json=body))
    assert float(rows[2]["head_change"]) == same["head_change"][2]
    assert "u=m/s" in response.headers["forebay-units"].split(", ")


def test_grid_over_the_limit_is_refused_before_any_work(client, app):
    limit = app.state.limits.max_points
    at = {"grid": {"x": [0, 1], "nx": 1_000_000_000, "y": [0, 1], "ny": 1_000_000_000}}
    problem = assert_problem(client.post(SAMPLE, json=a_sample(at=at)), 422, "too-large")
    assert problem["limit"] == limit
    assert problem["asked"] == 10**18
    assert pointers(problem) == {"#/at"}


def test_elements_times_points_over_the_limit_are_refused(client, app):
    limits = app.state.limits
    count = limits.max_points
    elements = [
        {"kind": "sink", "name": f"s{n}", "at": [n, 1], "discharge": 1}
        for n in range(limits.max_pairs // count + 1)
    ]
    body = a_sample(
        layout=a_layout(elements=elements), at={"line": {"from": [0, 0], "to": [1, 0], "count": count}}
    )
    problem = assert_problem(client.post(SAMPLE, json=body), 422, "too-large")
    assert problem["limit"] == limits.max_pairs
    assert problem["asked"] == count * len(elements)


def test_too_many_elements_are_refused(client, app):
    limit = app.state.limits.max_elements
    elements = [{"kind": "sink", "name": f"s{n}", "at": [n, 1], "discharge": 1} for n in range(limit + 1)]
    problem = assert_problem(
        client.post(SAMPLE, json=a_sample(layout=a_layout(elements=elements))), 422, "too-large"
    )
    assert problem["limit"] == limit
    assert pointers(problem) == {"#/layout/elements"}


@pytest.mark.parametrize("count", [100, 30_000, 300_000], ids=["in the loop", "in a thread", "in a process"])
def test_answer_is_the_same_wherever_it_is_computed(ready_client, count):
    at = {"x": [float(n % 100) for n in range(count)], "y": [20.0] * count}
    answer = result(ready_client.post(SAMPLE, json=a_sample(at=at)))
    few = result(ready_client.post(SAMPLE, json=a_sample(at={"x": at["x"][:100], "y": at["y"][:100]})))
    assert len(answer["u"]) == count
    assert answer["u"][-100:] == few["u"]


def test_digest_is_of_the_layout_and_not_of_its_spelling(ready_client):
    spelled = a_layout(water={"temperature": 10}, shore={"kind": "open-water"}, structures=[])
    digests = {
        ready_client.post(SAMPLE, json=a_sample(layout=layout)).json()["provenance"]["layout_digest"]
        for layout in (a_layout(), spelled)
    }
    assert len(digests) == 1
    other = ready_client.post(SAMPLE, json=a_sample(layout=a_layout(depth=5))).json()
    assert other["provenance"]["layout_digest"] not in digests
