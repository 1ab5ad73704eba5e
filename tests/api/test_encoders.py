"""One answer in every media type: other readers find the numbers of the JSON envelope."""

import csv
import io
import json

import numpy as np
import pytest

from forebay.api.encoders import arrow
from forebay.api.media import ARROW, CSV, JSON, JSON_LINES, NPY
from support.http import SAMPLE, a_sample, assert_problem, example

BODY = a_sample(at={"points": [[0, 0], [10, 5], [20, 5]]}, quantities=["head_change"])
"""The second point lies on the intake."""


def asked(client, media_type, path=SAMPLE, body=BODY):
    response = client.post(path, json=body, headers={"Accept": media_type})
    assert response.status_code == 200, response.text
    assert response.headers["content-type"].startswith(media_type)
    return response


@pytest.fixture
def columns(ready_client):
    """Columns of the envelope; null is nan."""
    result = asked(ready_client, JSON).json()["result"]
    names = ("x", "y", "u", "v", "speed", "head_change")
    return {name: np.array(result[name], dtype=float) for name in names}


def test_csv_holds_the_columns(ready_client, columns):
    response = asked(ready_client, CSV)
    rows = list(csv.DictReader(io.StringIO(response.text)))
    for name, column in columns.items():
        read = [float(row[name]) if row[name] else np.nan for row in rows]
        np.testing.assert_array_equal(read, column)
    assert [row["status"] for row in rows] == ["", "on-singularity", ""]
    assert "head_change=m" in response.headers["forebay-units"]
    assert response.headers["forebay-warnings"]


def test_npy_holds_the_columns(ready_client, columns):
    response = asked(ready_client, NPY)
    table = np.load(io.BytesIO(response.content), allow_pickle=False)
    assert table.dtype.names == (*columns, "status")
    for name, column in columns.items():
        np.testing.assert_array_equal(table[name], column)
    words = dict(word.split("=") for word in response.headers["forebay-statuses"].split(", "))
    assert [words.get(str(number), "") for number in table["status"]] == ["", "on-singularity", ""]
    assert "u=m/s" in response.headers["forebay-units"]


def test_arrow_holds_the_columns(ready_client, columns):
    pyarrow = pytest.importorskip("pyarrow")
    table = pyarrow.ipc.open_stream(asked(ready_client, ARROW).content).read_all()
    for name, column in columns.items():
        assert table.schema.field(name).metadata[b"unit"]
        np.testing.assert_array_equal(table[name].to_numpy(zero_copy_only=False), column)
    assert table["u"].null_count == 1
    assert table["status"].to_pylist() == ["", "on-singularity", ""]
    assert json.loads(table.schema.metadata[b"provenance"])["service"] == "forebay"


def test_arrow_without_its_library_is_not_offered(ready_client, monkeypatch):
    arrow.is_installed.cache_clear()
    monkeypatch.setattr(arrow, "find_spec", lambda _name: None)
    response = ready_client.post(SAMPLE, json=BODY, headers={"Accept": ARROW})
    arrow.is_installed.cache_clear()
    problem = assert_problem(response, 406, "not-acceptable")
    assert ARROW not in problem["offered"]
    assert NPY in problem["offered"]


@pytest.mark.parametrize("media_type", JSON_LINES)
@pytest.mark.parametrize(
    ("path", "operation_id", "items"),
    [
        ("/v1/contour/integrate", "integrateContour", "contours"),
        ("/v1/withdrawal/trace", "traceWithdrawal", "intakes"),
    ],
)
def test_json_lines_hold_the_envelope_item_by_item(ready_client, media_type, path, operation_id, items):
    body = example(operation_id)
    envelope = asked(ready_client, JSON, path, body).json()
    first, *rest = asked(ready_client, media_type, path, body).text.splitlines()
    assert [json.loads(line) for line in rest] == envelope["result"].pop(items)
    assert json.loads(first) == envelope
