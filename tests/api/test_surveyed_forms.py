"""Forms that surveys come in: each is solved to a stated bound or refused with a pointer, and never fails."""

import pytest

from support.http import assert_problem, pointers

RECTANGLE = [[0, 0], [200, 0], [200, 50], [0, 50]]
ISLAND = [[90, 20], [110, 20], [110, 30], [90, 30]]
ENDS = (([0, 0], [0, 50]), ([200, 0], [200, 50]))
FAR = (1e6, 6e6)
"""Offset of a plan in a grid of a state [m]."""


def shifted(ring):
    return [[x + FAR[0], y + FAR[1]] for x, y in ring]


def request(outer, *holes, ends=ENDS, at=(150, 25)):
    """40 m3/s through a basin of 200 m by 50 m, 2 m deep: 0.4 m/s where nothing stands in the way."""
    upstream, downstream = ends
    shore = {
        "kind": "surveyed",
        "water": {"type": "Polygon", "coordinates": [outer, *holes]},
        "open_edges": [
            {"name": "upstream", "from": upstream[0], "to": upstream[1], "discharge": 40.0},
            {"name": "downstream", "from": downstream[0], "to": downstream[1]},
        ],
    }
    layout = {"depth": 2.0, "shore": shore, "elements": []}
    return {"layout": layout, "at": {"points": [at]}, "quantities": ["velocity_bound"], "digits": 17}


def answer(client, *rings, **extra):
    response = client.post("/v1/field/sample", json=request(*rings, **extra))
    assert response.status_code == 200, response.text
    found = response.json()
    # what the issue asks every solved shore to keep to at the default tolerance
    assert found["boundary"]["solved"]["relative_bound"] <= 5e-4
    return found


def velocity(found):
    result = found["result"]
    return complex(result["u"][0], result["v"][0]), result["velocity_bound"][0]


def moved(found):
    return {(change["what"], change["pointer"]) for change in found["boundary"]["moved"]}


RING = "#/layout/shore/water/coordinates/0"
COLLINEAR = [[x, 0] for x in range(0, 205, 5)] + [[200, 50], [133.3, 50], [66.6, 50]]


@pytest.mark.parametrize(
    ("outer", "changes"),
    [
        ([*RECTANGLE, RECTANGLE[0]], set()),
        (RECTANGLE[::-1], {("reversed-ring", RING)}),
        ([*COLLINEAR, [0, 50]], set()),
        ([[0, 0]] * 3 + RECTANGLE[1:], {("repeated-vertex", RING)}),
        ([[0, 0], [100, 0], [100, 30], [100, 0], *RECTANGLE[1:]], {("loop-cut", RING)}),
        (
            [[0, 0], [60, 0], [60.006, 0], [60.006, 0.006], [60.012, 0.006], [60.012, 0], *RECTANGLE[1:]],
            set(),
        ),
    ],
    ids=["closed", "clockwise", "collinear", "duplicates", "spike-of-no-width", "edges-of-6-mm"],
)
def test_rectangle_in_any_form_is_uniform_flow(ready_client, outer, changes):
    found = answer(ready_client, outer)
    computed, bound = velocity(found)
    # a step of 6 mm, 90 m away, disturbs the flow by (0.006 / 90)^2 = 4e-9 of it
    assert abs(computed - 0.4) <= bound + 1e-8
    assert moved(found) == changes


@pytest.mark.parametrize("island", [ISLAND, ISLAND[::-1]], ids=["anticlockwise", "clockwise"])
def test_plan_a_thousand_kilometres_away_is_the_same_plan(ready_client, island):
    ends = tuple(tuple(shifted([end])[0] for end in edge) for edge in ENDS)
    far = request(shifted(RECTANGLE), shifted(island), ends=ends, at=shifted([(150, 25)])[0])
    near = request(RECTANGLE, ISLAND)
    answers = [ready_client.post("/v1/field/sample", json=body).json() for body in (near, far)]
    (one, bound), (other, _) = map(velocity, answers)
    # positions of 6e6 m are rounded by 1e-9 m, which is nothing beside the bound
    assert abs(one - other) <= 2.0 * bound
    # symmetry about the middle line
    assert abs(one.imag) <= bound


@pytest.mark.parametrize(
    "ring",
    [
        [[90, 1], [110, 1], [110, 11], [90, 11]],
        [[80, 25], [120, 25], [120, 25.2], [80, 25.2]],
    ],
    ids=["a-metre-from-the-bank", "slender-bar"],
)
def test_islands_are_passed_on_both_sides(ready_client, ring):
    body = request(RECTANGLE, ring)
    x = 0.5 * (ring[0][0] + ring[1][0])
    gates = [
        {"name": name, "polyline": [[x, low], [x, high]], "closed": False}
        for name, low, high in (("right", 0, ring[0][1]), ("left", ring[2][1], 50))
    ]
    integrals = ready_client.post(
        "/v1/contour/integrate", json={"layout": body["layout"], "contours": gates, "digits": 17}
    )
    assert integrals.status_code == 200, integrals.text
    found = integrals.json()
    right, left = (contour["flux"] for contour in found["result"]["contours"])
    solved = found["boundary"]["solved"]
    # continuity: 20 m2/s pass, each gate being as uncertain as the island's own level
    assert right + left == pytest.approx(20.0, abs=2 * solved["stream_function_bound"])
    assert min(right, left) > 0.0


def test_spike_of_some_width_is_a_wall(ready_client):
    spiked = [[0, 0], [99.95, 0], [100, 30], [100.05, 0], *RECTANGLE[1:]]
    body = request(spiked)
    gate = {"name": "over the spike", "polyline": [[100, 30], [100, 50]], "closed": False}
    found = ready_client.post(
        "/v1/contour/integrate", json={"layout": body["layout"], "contours": [gate], "digits": 17}
    ).json()
    # all 20 m2/s pass between its tip and the other bank, both of them the land's
    error = 2 * found["boundary"]["solved"]["stream_function_bound"]
    assert found["result"]["contours"][0]["flux"] == pytest.approx(20.0, abs=error)


@pytest.mark.parametrize(
    ("rings", "code", "pointer"),
    [
        (([[0, 0], [200, 50], [200, 0], [0, 50]],), "invalid-ring", RING),
        (([[0, 0], [200, 0], [200, 50], [90, -20], [0, 50]],), "invalid-ring", RING),
        (([[0, 0], [1, 0], [2, 0]],), "invalid-ring", RING),
        ((RECTANGLE, [[90, 0], [110, 0], [110, 11], [90, 11]]), "island-not-free", RING[:-1] + "1"),
        ((RECTANGLE, [[290, 10], [310, 10], [310, 11]]), "island-not-free", RING[:-1] + "1"),
        ((RECTANGLE, ISLAND, ISLAND), "island-not-free", RING[:-1] + "2"),
    ],
    ids=["bow-tie", "crossed", "line", "on-the-bank", "outside", "twice"],
)
def test_what_is_no_water_is_refused(ready_client, rings, code, pointer):
    problem = assert_problem(ready_client.post("/v1/field/sample", json=request(*rings)), 422, code)
    assert all(found.startswith(pointer) for found in pointers(problem))
