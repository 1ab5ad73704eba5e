"""Surveyed shores and outlines over HTTP: what an answer says of them, and pointers to what is wrong."""

import json
from typing import Any

import pytest

from forebay.api.origins import at_origin
from forebay.api.schemas.layout import Layout
from forebay.api.units import UnitSystem
from forebay.flow.errors import OverlappingStructuresError, UnbalancedDischargeError
from support.http import assert_problem, pointers
from support.tree import ROOT

BEND = json.loads((ROOT / "openapi" / "examples" / "layout-river-bend.json").read_text(encoding="utf-8"))

RECTANGLE: dict[str, Any] = {
    "kind": "surveyed",
    "water": {"type": "Polygon", "coordinates": [[[0, 0], [200, 0], [200, 50], [0, 50], [0, 0]]]},
    "open_edges": [
        {"name": "upstream", "from": [0, 0], "to": [0, 50], "discharge": 40.0},
        {"name": "downstream", "from": [200, 0], "to": [200, 50]},
    ],
}
BOX = {"kind": "outline", "name": "box", "points": [[90, 20], [110, 20], [110, 30], [90, 30]]}


def layout(**changes):
    return {"depth": 2.0, "shore": RECTANGLE, "elements": []} | changes


def sample(client, **request):
    at = {"points": [[50, 25], [150, 10]]}
    answer = client.post("/v1/field/sample", json={"layout": layout(), "at": at} | request)
    assert answer.status_code == 200, answer.text
    return answer.json()


def test_rectangle_is_uniform_flow(ready_client):
    answer = sample(ready_client, quantities=["velocity_bound"])
    # 40 m3/s through 50 m by 2 m; the walls are met to rounding (exact solution of the problem)
    assert answer["result"]["u"] == pytest.approx([0.4, 0.4], rel=1e-9)
    assert answer["result"]["v"] == pytest.approx([0.0, 0.0], abs=1e-9)
    solved = answer["boundary"]["solved"]
    assert solved["through_flux"] == pytest.approx(20.0)
    assert solved["relative_bound"] < 1e-6
    bounds = answer["result"]["velocity_bound"]
    # (4 / pi) bound / distance to the nearest wall (Cauchy's estimate on the largest disc)
    expected = [4 / 3.141592653589793 * solved["stream_function_bound"] / gap for gap in (25, 10)]
    assert bounds == pytest.approx(expected, rel=1e-6)


def test_survey_is_described_before_anything_is_computed(ready_client):
    boundary = ready_client.post("/v1/layout/review", json={"layout": BEND}).json()["boundary"]
    assert boundary["solved"] is None
    survey = boundary["survey"]
    assert survey["grid"] == "EPSG:32631"
    assert survey["scale_error"] == pytest.approx(4e-4, rel=1e-3)  # 0.9996 on the central meridian of UTM
    edges = {edge["name"]: edge for edge in survey["open_edges"]}
    assert edges["upper reach"]["length"] == pytest.approx(82.0)
    assert edges["lower reach"]["discharge"] == pytest.approx(-(95.0 + 4.0 - 6.0))  # continuity
    assert [(moved["what"], moved["pointer"]) for moved in boundary["moved"]] == [
        ("merged-with-land", "#/layout/structures/0")
    ]


def test_units_of_the_boundary_are_named(ready_client):
    answer = sample(ready_client, unit_system="us")
    units, survey = answer["units"], answer["boundary"]["survey"]
    assert units["stream_function_bound"] == "[ft_i]2/s"
    assert units["area"] == "[ft_i]2"
    assert survey["area"] == pytest.approx(200 * 50)  # the same numbers in feet
    assert survey["open_edges"][0]["discharge"] == pytest.approx(40.0)


def test_layout_without_solved_walls_says_nothing_of_them(ready_client):
    channel = {"kind": "channel", "point": [0, 0], "along": [1, 0], "width": 50}
    answer = sample(ready_client, layout=layout(shore=channel), quantities=["velocity_bound"])
    assert "boundary" not in answer
    assert answer["result"]["velocity_bound"] == [None, None]


def test_free_outline_has_a_bound_of_its_own(ready_client):
    answer = sample(ready_client, layout=layout(structures=[BOX]))
    solved = answer["boundary"]["solved"]
    assert [bound["name"] for bound in solved["island_bounds"]] == ["box"]
    assert 0 < solved["relative_bound"] < 1e-2
    assert {"boundary-bound", "boundary-bound-wide"} & {w["code"] for w in answer["warnings"]} or (
        solved["relative_bound"] <= solved["tolerance"]
    )


@pytest.mark.parametrize(
    ("route", "asked"),
    [
        ("stress/tensor", {"at": {"points": [[50, 25]]}}),
        (
            "submergence/check",
            {
                "inlets": [
                    {"name": "bell", "kind": "bell", "diameter": 0.8, "discharge": 0.5, "submergence": 1.5}
                ]
            },
        ),
    ],
)
def test_routes_that_may_do_without_a_layout_tell_of_its_walls(ready_client, route, asked):
    answer = ready_client.post(f"/v1/{route}", json={"layout": layout(), **asked})
    assert answer.status_code == 200, answer.text
    boundary = answer.json()["boundary"]
    assert boundary["solved"]["through_flux"] == pytest.approx(20.0)  # 40 m3/s in 2 m of water
    assert boundary["survey"]["vertices"] == 4


def test_blunt_open_edge_is_noted(ready_client):
    slanted = RECTANGLE | {
        "water": {"type": "Polygon", "coordinates": [[[0, 0], [200, 0], [200, 50], [20, 50]]]},
        "open_edges": [
            {"name": "upstream", "from": [0, 0], "to": [20, 50], "discharge": 40.0},
            RECTANGLE["open_edges"][1],
        ],
    }
    review = ready_client.post("/v1/layout/review", json={"layout": layout(shore=slanted)}).json()
    (warning,) = [w for w in review["warnings"] if w["code"] == "open-edge-blunt"]
    assert warning["pointer"] == "#/layout/shore/open_edges/0"
    assert warning["value"] == pytest.approx(90 + 21.80140949)  # atan(20 / 50)
    assert warning["limit"] == 90.0


CROSSED = [[0, 0], [200, 50], [200, 0], [0, 50]]
WATER = "#/layout/shore/water/coordinates"


@pytest.mark.parametrize(
    ("change", "code", "pointer"),
    [
        ({"water": {"type": "Polygon", "coordinates": [CROSSED]}, "open_edges": []}, "invalid-ring", WATER),
        (
            {"open_edges": [{"name": "e", "from": [100, 25], "to": [0, 50]}]},
            "invalid-open-edge",
            "#/layout/shore/open_edges/0/from",
        ),
        ({"crs": "EPSG:99999"}, "unknown-coordinate-system", "#/layout/shore/crs"),
        ({"grid": "EPSG:4326"}, "unsuitable-grid", "#/layout/shore/grid"),
        ({"water": {"type": "MultiPolygon"}}, "invalid-request", "#/layout/shore/water/type"),
        ({"simplify": -1}, "invalid-request", "#/layout/shore/simplify"),
        (
            {"islands": [{"name": "eyot", "at": [10, 10]}]},
            "unknown-island",
            "#/layout/shore/islands/0/at",
        ),
    ],
)
def test_what_is_wrong_has_a_pointer(ready_client, change, code, pointer):
    request = {"layout": layout(shore=RECTANGLE | change)}
    problem = assert_problem(ready_client.post("/v1/layout/review", json=request), 422, code)
    assert any(found.startswith(pointer) for found in pointers(problem))


@pytest.mark.parametrize(
    ("outline", "pointer"),
    [
        ({"points": BOX["points"], "line": [[0, 0], [1, 1]], "thickness": 1}, "#/layout/structures/0"),
        ({"line": [[0, 0], [1, 1]]}, "#/layout/structures/0"),
        ({"points": [[0, 0], [1, 1]]}, "#/layout/structures/0/points"),
    ],
)
def test_outline_is_said_in_one_way(ready_client, outline, pointer):
    request = {"layout": layout(structures=[{"kind": "outline", "name": "o"} | outline])}
    problem = assert_problem(ready_client.post("/v1/layout/review", json=request), 422, "invalid-request")
    assert pointers(problem) == {pointer}


QUAY = {"kind": "outline", "name": "quay", "points": [[20, 0], [40, 0], [40, 5], [20, 5]]}


def test_error_of_the_flow_names_the_structure_as_it_was_written(ready_client):
    # the quay becomes land, and the flow's first structure is the request's second
    piers = [
        {"kind": "pier", "name": name, "at": [100, y], "radius": 5} for name, y in (("a", 20), ("b", 28))
    ]
    request = {"layout": layout(structures=[QUAY, *piers])}
    problem = assert_problem(
        ready_client.post("/v1/layout/review", json=request), 422, "overlapping-structures"
    )
    assert pointers(problem) == {"#/layout/structures/2/at"}
    assert problem["detail"] == "the pier touches structures/1"


def test_warning_names_the_structure_as_it_was_written(ready_client):
    pier = {"kind": "pier", "name": "pile", "at": [100, 25], "radius": 2}
    request = {"layout": layout(structures=[QUAY, pier], bed_friction=0.005)}
    warnings = ready_client.post("/v1/layout/review", json=request).json()["warnings"]
    about = {w["pointer"] for w in warnings if w["code"] == "pier-lee"}
    # the quay has become part of the land: what is about it leads to the layout as a whole
    assert about == {"#/layout/structures/1", "#/layout"}


def test_error_of_the_conversion_keeps_its_number(ready_client):
    request = {"layout": layout(structures=[QUAY, BOX | {"name": "quay"}])}
    problem = assert_problem(ready_client.post("/v1/layout/review", json=request), 422, "duplicate-name")
    assert pointers(problem) == {"#/layout/structures/1/name"}


def test_error_about_an_island_leads_to_its_ring():
    """Islands of the flow are numbered without those that are dropped; the request has them as rings."""
    hole, dot = [[50, 20], [60, 20], [60, 30], [50, 30]], [[100, 25], [100, 25], [100, 25]]
    water = {"type": "Polygon", "coordinates": [RECTANGLE["water"]["coordinates"][0], dot, hole]}
    site = Layout.model_validate(layout(shore=RECTANGLE | {"water": water}))
    site.converted(UnitSystem.SI)
    error = at_origin(OverlappingStructuresError("touch", ("shore", "islands", 0)), site, UnitSystem.SI)
    assert error.path == ("shore", "water", "coordinates", 2)
    error = at_origin(UnbalancedDischargeError("two", ("shore", "edges", 1)), site, UnitSystem.SI)
    assert error.path == ("shore", "open_edges", 1)
