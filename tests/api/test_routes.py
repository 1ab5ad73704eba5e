"""Every form that a request of the other routes can take, and where their errors point."""

import pytest

from support.http import SAMPLE, Json, a_layout, a_sample, assert_problem, pointers

SINK = {"kind": "sink", "name": "a", "at": [10, 5], "discharge": 1.0}
SOURCE = {"kind": "source", "name": "b", "at": [30, 5], "discharge": 1.0}
LINE: Json = {"kind": "line-source", "name": "c", "from": [40, 5], "to": [45, 6], "discharge": 1.0}
PIER = {"kind": "pier", "name": "p", "at": [60, 8], "radius": 1.0}
BANK: Json = {"kind": "straight-bank", "point": [0, 0], "along": [2, 0]}
BASIN = {"kind": "basin", "corner": [0, 0], "along": [1, 0], "length": 90, "width": 20}
STILL = {"velocity": [0, 0]}

SHORES = {
    "open-water": ({"kind": "open-water"}, {"velocity": [0.3, 0.1]}),
    "straight-bank": (BANK, {"velocity": [0.3, 0]}),
    "channel": ({"kind": "channel", "point": [0, 0], "along": [1, 0], "width": 20}, {"velocity": [0.3, 0]}),
    "corner": ({"kind": "corner", "vertex": [0, 0], "along": [1, 0], "interior_angle_deg": 90}, STILL),
    "dead-end": ({"kind": "dead-end", "point": [0, 0], "along": [1, 0], "width": 20}, STILL),
    "basin": (BASIN, STILL),
}


@pytest.mark.parametrize(("shore", "ambient"), SHORES.values(), ids=SHORES)
def test_every_shore_is_read(ready_client, shore, ambient):
    layout = a_layout(shore=shore, ambient=ambient, elements=[SINK, SOURCE])
    answer = ready_client.post(SAMPLE, json=a_sample(layout=layout, at={"points": [[20, 9], [20, -1]]}))
    assert answer.status_code == 200, answer.text
    on_land = [] if shore["kind"] == "open-water" else [{"index": 1, "status": "on-land"}]
    assert answer.json()["result"]["flagged"] == on_land


WRONG_SITES: dict[str, tuple[Json, str]] = {
    "duplicate-name": ({"elements": [SINK, SOURCE | {"name": "a"}]}, "#/layout/elements/1"),
    "element-on-land": ({"shore": BANK, "elements": [SINK | {"at": [0, -5]}]}, "#/layout/elements/0/at"),
    "element-in-structure": (
        {"elements": [SINK | {"at": [60, 8]}], "structures": [PIER]},
        "#/layout/elements/0/at",
    ),
    "coincident-elements": ({"elements": [SINK, SOURCE | {"at": [10, 5]}]}, "#/layout/elements/1"),
    "overlapping-structures": (
        {"structures": [PIER, PIER | {"name": "q", "at": [61, 8]}]},
        "#/layout/structures/1",
    ),
    "current-through-wall": ({"shore": BANK, "ambient": {"velocity": [0.3, 0.1]}}, "#/layout/ambient"),
    "unbalanced-discharge": ({"shore": BASIN, "ambient": STILL, "elements": [SINK]}, "#/layout"),
    "divergent-ambient": ({"ambient": {"gradient": [[0.1, 0], [0, 0]]}}, "#/layout/ambient/gradient"),
}


@pytest.mark.parametrize(
    ("code", "changes", "pointer"), [(c, *w) for c, w in WRONG_SITES.items()], ids=WRONG_SITES
)
def test_site_that_cannot_be(client, code, changes, pointer):
    problem = assert_problem(client.post(SAMPLE, json=a_sample(layout=a_layout(**changes))), 422, code)
    assert all(found.startswith(pointer) for found in pointers(problem))


def test_ends_of_a_line_element_are_named_as_the_client_names_them(client):
    layout = a_layout(shore=BANK, elements=[LINE | {"to": [45, -6]}])
    problem = assert_problem(client.post(SAMPLE, json=a_sample(layout=layout)), 422, "element-on-land")
    assert not any(name in pointer for pointer in pointers(problem) for name in ("start", "end"))


def contour(**forms):
    return {"layout": a_layout(elements=[SINK]), "contours": [{"name": "ring", **forms}]}


ARC: Json = {"arc": {"centre": [10, 5], "radius": 2, "from_deg": 0, "to_deg": 180}}
BACK: Json = {"line": {"from": [8, 5], "to": [12, 5]}}


def test_contours_of_every_form(ready_client):
    forms: list[Json] = [
        {"circle": {"centre": [10, 5], "radius": 3}},
        {"polyline": [[7, 2], [13, 2], [13, 8], [7, 8]], "closed": True},
        {"path": [{"arc": {"centre": [10, 5], "radius": 2, "from_deg": 0, "to_deg": 360}}]},
    ]
    for form in forms:
        (ring,) = ready_client.post("/v1/contour/integrate", json=contour(**form)).json()["result"][
            "contours"
        ]
        assert ring["closed"]
        assert ring["discharge"] == pytest.approx(-1.0, abs=1e-9)  # nine digits are sent
        assert {"element": "a", "turns": 1} in ring["enclosed"]


def test_contour_through_an_element_has_no_values(ready_client):
    (ring,) = ready_client.post("/v1/contour/integrate", json=contour(path=[ARC, BACK])).json()["result"][
        "contours"
    ]
    assert ring["status"] == "through-singularity"
    assert ring["flux"] is None


def test_broken_path_points_at_its_piece(client):
    body = contour(path=[ARC, {"line": {"from": [0, 0], "to": [1, 1]}}])
    problem = assert_problem(client.post("/v1/contour/integrate", json=body), 422, "broken-path")
    assert pointers(problem) == {"#/contours/0/path/1"}


@pytest.mark.parametrize(
    "forms",
    [
        {},
        {"polyline": [[0, 0], [1, 1]], "circle": {"centre": [0, 0], "radius": 1}},
        {"circle": {"centre": [0, 0], "radius": 1}, "closed": True},
        {"path": [{}]},
        {"path": [{**ARC, **BACK}]},
        {"polyline": [[0, 0]]},
    ],
)
def test_contour_has_one_form(client, forms):
    assert_problem(client.post("/v1/contour/integrate", json=contour(**forms)), 422, "invalid-request")


GRADIENT: Json = {"name": "s", "velocity_gradient": [[0, 10], [0, 0]]}
OWN = {"dynamic_viscosity": 0.001, "density": 1000, "second_viscosity": 0.002}


def stress(client, **body):
    return client.post("/v1/stress/tensor", json=body)


def test_stress_in_a_layout_uses_its_water(ready_client):
    at = {"points": [[20, 5], [10, 5]]}
    states = stress(ready_client, layout=a_layout(), at=at).json()["result"]["states"]
    assert [state["status"] for state in states] == ["computed", "on-singularity"]
    assert states[0]["at"] == [20, 5]
    assert states[1]["stress"] == [[None] * 3] * 3


def test_stress_of_own_fluid_and_strain_rate(ready_client):
    state = {"name": "s", "strain_rate": [[0, 5], [5, 0]], "pressure": 2}
    (answer,) = stress(ready_client, fluid=OWN, states=[state]).json()["result"]["states"]
    assert answer["stress"][0] == [-2, 0.01, 0]
    assert answer["vorticity"] == [None] * 3


def test_stress_pointers(client):
    ragged = GRADIENT | {"velocity_gradient": [[0, 1], [0, 1, 2]]}
    cases: list[tuple[Json, str, str]] = [
        ({"fluid": OWN, "states": [ragged]}, "tensor-shape", "#/states/0/velocity_gradient"),
        ({"fluid": {"temperature": 90}, "states": [GRADIENT]}, "water-out-of-range", "#/fluid/temperature"),
        ({"fluid": {"density": 1}, "states": [GRADIENT]}, "invalid-request", "#/fluid/dynamic_viscosity"),
        ({"fluid": OWN, "states": [{"name": "s"}]}, "invalid-request", "#/states/0"),
        ({"states": [GRADIENT]}, "invalid-request", "#"),
        ({"fluid": OWN, "states": [GRADIENT], "layout": a_layout()}, "invalid-request", "#"),
    ]
    for body, code, pointer in cases:
        assert pointers(assert_problem(stress(client, **body), 422, code)) == {pointer}


def test_search_in_a_window(ready_client):
    layout = a_layout(elements=[SINK])
    everywhere = ready_client.post("/v1/stagnation/search", json={"layout": layout}).json()["result"]
    (point,) = everywhere["points"]
    assert everywhere["complete"]
    window = {"x": [point["x"] + 1, point["x"] + 9], "y": [-9, 20]}
    elsewhere = ready_client.post("/v1/stagnation/search", json={"layout": layout, "window": window}).json()[
        "result"
    ]
    assert elsewhere["points"] == []
    assert elsewhere["complete"]


def test_empty_window(client):
    body = {"layout": a_layout(), "window": {"x": [1, 1], "y": [0, 1]}}
    problem = assert_problem(client.post("/v1/stagnation/search", json=body), 422, "invalid-request")
    assert pointers(problem) == {"#/window"}


def test_unknown_intake(ready_client):
    body = {"layout": a_layout(), "intakes": ["no such"]}
    problem = assert_problem(ready_client.post("/v1/withdrawal/trace", json=body), 422, "unknown-name")
    assert pointers(problem) == {"#/intakes/0"}


def test_picture_as_png_of_a_given_size(ready_client):
    body = {"layout": a_layout(), "width": 800, "height": 600, "north_deg": 30, "layers": ["speed"],
            "window": {"x": [-20, 40], "y": [-20, 25]}}  # fmt: skip
    response = ready_client.post("/v1/chart/flow-net", json=body, headers={"Accept": "image/png"})
    assert response.headers["content-type"] == "image/png"
    assert response.content.startswith(b"\x89PNG")
    size = [int.from_bytes(response.content[k : k + 4], "big") for k in (16, 20)]
    assert size == [800, 600]
    assert response.headers["forebay-warnings"]


def test_picture_needs_both_sides(client):
    body = {"layout": a_layout(), "width": 800}
    assert_problem(client.post("/v1/chart/flow-net", json=body), 422, "invalid-request")


def test_what_is_known_of_a_site_silences_its_notes(ready_client):
    outfall = SOURCE | {"port_area": 0.5}
    known = {"bed_friction": 0.003, "wind_speed": 2, "density_difference": 0, "depth_range": [4.2, 3.8]}
    codes = []
    for layout in (a_layout(elements=[SOURCE]), a_layout(elements=[outfall], **known)):
        answer = ready_client.post("/v1/layout/review", json={"layout": layout}).json()
        codes.append({warning["code"] for warning in answer["warnings"]})
    assert {code for code in codes[0] - codes[1] if code.endswith("-unknown")}
    assert not {code for code in codes[1] if code.endswith("-unknown")}


def test_assessment_answers_what_was_asked(ready_client):
    layout = a_layout(elements=[SINK])
    bare = ready_client.post("/v1/assessment", json={"layout": layout}).json()["result"]
    assert (bare["field"], bare["stress"], bare["transects"]) == (None, None, None)
    assert len(bare["cautions"]) == 3
    assert bare["withdrawal"]["intakes"][0]["shares"][0]["from"] == "ambient"
    at = {"points": [[0, 0]]}
    full = ready_client.post("/v1/assessment", json={"layout": layout, "at": at}).json()["result"]
    assert full["stress"]["states"][0]["status"] == "computed"
    assert full["field"]["shape"] == [1]
