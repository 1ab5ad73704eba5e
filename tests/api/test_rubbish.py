"""Rubbish of all sorts gets its 4xx, small and fast, echoes nothing, and the service stays up."""

import json

import pytest

from forebay.api.routers.registry import OPERATIONS
from support.http import SAMPLE, a_layout, a_sample, assert_problem, pointers

PATHS = [operation.path for operation in OPERATIONS.values()]

MALFORMED = {
    "empty": b"",
    "truncated": b'{"layout": {"depth": 4',
    "no JSON": b"depth=4",
    "XML": b"<layout/>",
    "deep array": b"[" * 100_000,
    "deep object": b'{"a":' * 100_000,
    "bad UTF-8": b'{"layout": "\xff\xfe"}',
    "UTF-16": '{"layout": 1}'.encode("utf-16"),
    "byte order mark": b"\xef\xbb\xbf{}",
    "NUL": b"\x00",
    "lone surrogate": b'{"\\ud800": 1}',
    "number without end": b'{"digits": ' + b"9" * 5000 + b"}",
    "two documents": b"{} {}",
    "comment": b"{} // no",
}


@pytest.fixture(autouse=True)
def _stays_up(client):
    yield
    assert client.get("/livez").json() == {"status": "pass"}
    assert client.post(SAMPLE, json=a_sample()).status_code == 200


@pytest.mark.parametrize("path", PATHS)
@pytest.mark.parametrize("body", MALFORMED.values(), ids=MALFORMED)
def test_malformed_json_is_400(client, path, body):
    problem = assert_problem(client.post(path, content=body), 400, "malformed-json")
    assert "errors" not in problem


@pytest.mark.parametrize("path", PATHS)
@pytest.mark.parametrize("body", [b"null", b"[]", b'"layout"', b"4", b"true"])
def test_json_that_is_no_object_is_422(client, path, body):
    problem = assert_problem(client.post(path, content=body), 422, "invalid-request")
    assert pointers(problem) == {"#"}


@pytest.mark.parametrize("path", PATHS)
def test_empty_object_names_what_is_missing(client, path):
    assert_problem(client.post(path, content=b"{}"), 422, "invalid-request")


@pytest.mark.parametrize("path", PATHS)
def test_unknown_field_is_named(client, path):
    response = client.post(path, json={"surprise": 1})
    assert "#/surprise" in pointers(assert_problem(response, 422, "invalid-request"))


NUMBERS = ["NaN", "Infinity", "-Infinity", "1e999", '"4"', "true", "null", "[4]", "{}", '"NaN"']


PLACES = {
    "#/layout/depth": '{"layout": {"depth": %s}, "at": {"points": [[0, 0]]}}',
    "#/at/points/1/0": '{"layout": {"depth": 4}, "at": {"points": [[0, 1], [%s, 0]]}}',
    "#/at/x/1": '{"layout": {"depth": 4}, "at": {"x": [0, %s], "y": [0, 0]}}',
    "#/at/grid/nx": '{"layout": {"depth": 4}, "at": {"grid": {"x": [0, 1], "nx": %s, "y": [0, 1], "ny": 2}}}',
    "#/layout/ambient/velocity/1": (
        '{"layout": {"depth": 4, "ambient": {"velocity": [0, %s]}}, "at": {"points": [[0, 0]]}}'
    ),
    "#/layout/elements/0/discharge": (
        '{"layout": {"depth": 4, "elements": [{"kind": "sink", "name": "a", "at": [0, 0], "discharge": %s}]},'
        ' "at": {"points": [[0, 0]]}}'
    ),
}


@pytest.mark.parametrize("number", NUMBERS)
@pytest.mark.parametrize(("pointer", "body"), PLACES.items(), ids=PLACES)
def test_no_number_is_no_number(client, number, pointer, body):
    problem = assert_problem(client.post(SAMPLE, content=body % number), 422, "invalid-request")
    if pointer.endswith("/discharge") and number == "{}":  # an object is a discharge with its own unit
        assert pointers(problem) == {f"{pointer}/value", f"{pointer}/unit"}
    else:
        assert pointers(problem) == {pointer}


def test_whole_number_may_be_written_with_a_point(client):
    at = {"line": {"from": [0, 0], "to": [1, 0], "count": 19.0}}
    assert client.post(SAMPLE, json=a_sample(at=at)).json()["result"]["shape"] == [19]


CHANNEL = {"kind": "channel", "point": [0, 0], "along": [1, 0], "width": 9}
PIER = {"kind": "pier", "name": "p", "at": [0, 0], "radius": 1}
DOUBLET = {"kind": "doublet", "name": "d", "at": [0, 0], "moment": [1, 0]}
SCREEN = {"kind": "line-sink", "name": "s", "from": [0, 0], "to": [1, 1], "discharge": 1}
EDDY = {"kind": "vortex", "name": "v", "at": [0, 0], "circulation": 1}

WRONG = [
    ({"depth": 0}, "#/layout/depth"),
    ({"depth": -4}, "#/layout/depth"),
    ({"shore": {"kind": "beach"}}, "#/layout/shore/kind"),
    ({"shore": {}}, "#/layout/shore/kind"),
    ({"shore": {"kind": "surveyed"}}, "#/layout/shore/water"),
    ({"shore": CHANNEL | {"along": [0, 0]}}, "#/layout/shore/along"),
    ({"shore": CHANNEL | {"width": 0}}, "#/layout/shore/width"),
    ({"shore": {"kind": "channel", "point": [0, 0], "along": [1, 0]}}, "#/layout/shore/width"),
    ({"structures": [PIER | {"kind": "mole"}]}, "#/layout/structures/0/kind"),
    ({"structures": [PIER | {"name": ""}]}, "#/layout/structures/0/name"),
    ({"structures": [PIER, PIER | {"radius": -1}]}, "#/layout/structures/1/radius"),
    ({"elements": [{"kind": "well"}]}, "#/layout/elements/0/kind"),
    ({"elements": [DOUBLET | {"moment": [1, "q"]}]}, "#/layout/elements/0/moment/1"),
    ({"elements": [SCREEN | {"from": [0]}]}, "#/layout/elements/0/from"),
    ({"elements": [SCREEN | {"discharge": 0}]}, "#/layout/elements/0/discharge"),
    ({"elements": [EDDY | {"core": {"model": "rankine", "radius": 0}}]}, "#/layout/elements/0/core/radius"),
    ({"elements": [EDDY | {"core": {"model": "oseen", "radius": 1}}]}, "#/layout/elements/0/core/model"),
]


@pytest.mark.parametrize(("changes", "pointer"), WRONG, ids=[pointer for _, pointer in WRONG])
def test_pointer_names_the_value_without_union_tags(client, changes, pointer):
    response = client.post(SAMPLE, json=a_sample(layout=a_layout(**changes)))
    assert pointers(assert_problem(response, 422, "invalid-request")) == {pointer}


@pytest.mark.parametrize(
    "at",
    [
        {},
        {"x": [1]},
        {"x": [1], "y": [1, 2]},
        {"x": [1], "y": [1], "points": [[1, 1]]},
        {"points": []},
        {"line": {"from": [0, 0], "to": [1, 1], "count": 0}},
        {
            "line": {"from": [0, 0], "to": [1, 1], "count": 2},
            "grid": {"x": [0, 1], "nx": 1, "y": [0, 1], "ny": 1},
        },
    ],
)
def test_where_must_be_said_in_one_way(client, at):
    problem = assert_problem(client.post(SAMPLE, json=a_sample(at=at)), 422, "invalid-request")
    assert all(pointer.startswith("#/at") for pointer in pointers(problem))


def test_many_errors_are_cut_at_twenty(client):
    elements = [{"kind": "sink", "name": f"s{n}"} for n in range(500)]
    problem = assert_problem(
        client.post(SAMPLE, json=a_sample(layout=a_layout(elements=elements))), 422, "invalid-request"
    )
    assert len(problem["errors"]) == 20
    assert "1000 errors" in problem["detail"]


def test_ten_megabytes_of_wrong_points_get_one_error(client):
    body = b'{"layout": {"depth": 4}, "at": {"points": [' + b'["a", "b"], ' * 800_000 + b"[0, 0]]}}"
    problem = assert_problem(client.post(SAMPLE, content=body), 422, "invalid-request")
    assert pointers(problem) == {"#/at/points/0/0"}


@pytest.mark.parametrize(
    "body",
    [
        {"SECRET" * 20: 1},
        {"layout": {"depth": "SECRET"}},
        {"layout": {"depth": 4, "shore": {"kind": "SECRET"}}},
        {"layout": {"depth": 4, "elements": [{"kind": "SECRET"}]}},
        {"layout": {"depth": 4, "elements": [{"kind": "sink", "name": "SECRET\n"}]}},
        {"unit_system": "SECRET"},
        {"quantities": ["SECRET"]},
    ],
)
def test_input_is_not_echoed(client, body):
    response = client.post(SAMPLE, json=body)
    assert_problem(response, 422, "invalid-request")
    assert "SECRET" not in response.text


def test_pointer_escapes_member_names(client):
    response = client.post(SAMPLE, json={"a/b~c": 1})
    assert "#/a~1b~0c" in pointers(assert_problem(response, 422, "invalid-request"))


def test_duplicate_member_takes_the_last(client):
    body = json.dumps(a_sample())[:-1] + ', "digits": 1, "digits": 5}'
    assert client.post(SAMPLE, content=body).status_code == 200
