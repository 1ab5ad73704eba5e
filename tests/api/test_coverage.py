"""Sampled fields as CoverageJSON (OGC 21-069r2): members, axes, ranges and reference systems."""

import pytest

from support.http import a_layout, a_sample

COVERAGE = {"Accept": "application/prs.coverage+json"}
GRID = {"grid": {"x": [-20, 20], "nx": 5, "y": [0, 12], "ny": 4}}


def coverage(client, **changes):
    answer = client.post("/v1/field/sample", json=a_sample(**changes), headers=COVERAGE)
    assert answer.status_code == 200, answer.text
    assert answer.headers["content-type"] == "application/prs.coverage+json"
    return answer.json()


def table(client, **changes):
    return client.post("/v1/field/sample", json=a_sample(**changes)).json()["result"]


def test_grid_has_regular_axes_and_row_major_ranges(ready_client):
    found, plain = coverage(ready_client, at=GRID), table(ready_client, at=GRID)
    assert found["type"] == "Coverage"
    assert found["domain"]["domainType"] == "Grid"
    assert found["domain"]["axes"] == {
        "x": {"start": -20.0, "stop": 20.0, "num": 5},
        "y": {"start": 0.0, "stop": 12.0, "num": 4},
    }
    assert set(found["ranges"]) == set(found["parameters"]) == {"u", "v", "speed"}
    for name, values in found["ranges"].items():
        assert values["type"] == "NdArray"
        assert values["axisNames"] == ["y", "x"]
        assert values["shape"] == [4, 5]
        assert values["values"] == plain[name]


def test_points_are_a_composite_axis(ready_client):
    found = coverage(ready_client)
    assert found["domain"]["domainType"] == "MultiPoint"
    axis = found["domain"]["axes"]["composite"]
    assert axis == {
        "dataType": "tuple",
        "coordinates": ["x", "y"],
        "values": [[0.0, 0.0], [20.0, 5.0]],
    }
    assert found["ranges"]["u"]["shape"] == [2]


def test_units_are_ucum(ready_client):
    for system, code in (("si", "m/s"), ("us", "[ft_i]/s")):
        parameter = coverage(ready_client, unit_system=system)["parameters"]["speed"]
        assert parameter["type"] == "Parameter"
        assert parameter["unit"]["symbol"] == {
            "value": code,
            "type": "http://www.opengis.net/def/uom/UCUM/",
        }
        assert parameter["observedProperty"]["label"]["en"] == "speed"


def test_point_without_value_is_null(ready_client):
    layout = a_layout(shore={"kind": "straight-bank", "point": [0, 0], "along": [1, 0]})
    found = coverage(ready_client, layout=layout, at={"points": [[0, -5], [0, 5]]})
    assert found["ranges"]["u"]["values"][0] is None
    assert found["ranges"]["u"]["values"][1] is not None


@pytest.mark.parametrize("system", ["si", "us"])
def test_map_grid_is_named_and_its_axes_are_metres(ready_client, system):
    elements = [{"kind": "sink", "name": "intake", "at": [480000.0, 5540000.0], "discharge": 1.8}]
    foot = 1.0 if system == "si" else 0.3048
    elements[0]["at"] = [480000.0 / foot, 5540000.0 / foot]
    at = {"grid": {"x": [479990.0 / foot, 480010.0 / foot], "nx": 3, "y": [5540001.0 / foot] * 2, "ny": 1}}
    layout = a_layout(elements=elements, grid="EPSG:25832")
    found = coverage(ready_client, layout=layout, at=at, unit_system=system)
    (reference,) = found["domain"]["referencing"]
    assert reference["coordinates"] == ["x", "y"]
    assert reference["system"] == {
        "type": "ProjectedCRS",
        "id": "http://www.opengis.net/def/crs/EPSG/0/25832",
    }
    axis = found["domain"]["axes"]["x"]
    assert (axis["start"], axis["stop"]) == pytest.approx((479990.0, 480010.0), abs=1e-6)  # rounding at 1e6 m


def test_local_plan_says_that_it_is_one(ready_client):
    (reference,) = coverage(ready_client)["domain"]["referencing"]
    assert "id" not in reference["system"]
    assert "Local plan" in reference["system"]["description"]["en"]
