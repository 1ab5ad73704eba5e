"""Names that a request may not use, and contours that are none."""

import pytest

from forebay.api.names import RESERVED
from forebay.flow.layout import Basin, Channel, Corner, DeadEnd, OpenWater, StraightBank
from forebay.flow.shores import frame_of
from support.http import SAMPLE, a_layout, a_sample, assert_problem, example, pointers

CONTOUR = "/v1/contour/integrate"
STRESS = "/v1/stress/tensor"


@pytest.mark.parametrize("name", sorted(RESERVED))
def test_words_of_answers_are_no_names(client, name):
    sink = {"kind": "sink", "name": "fine", "at": [10, 5], "discharge": 1}
    pier = {"kind": "pier", "name": name, "at": [30, 5], "radius": 1}
    for parts, at in (
        ({"elements": [sink, sink | {"name": name}]}, "elements/1"),
        ({"structures": [pier]}, "structures/0"),
    ):
        response = client.post(SAMPLE, json=a_sample(layout=a_layout(**parts)))
        assert pointers(assert_problem(response, 422, "reserved-name")) == {f"#/layout/{at}/name"}


def test_every_bank_is_reserved():
    shores = (
        OpenWater(),
        StraightBank(0j, 1 + 0j),
        Channel(0j, 1 + 0j, 10.0),
        Corner(0j, 1 + 0j, 2.0),
        DeadEnd(0j, 1 + 0j, 10.0),
        Basin(0j, 1 + 0j, 10.0, 20.0),
    )
    names = {wall.name for shore in shores for wall in frame_of(shore, 1 + 1j, 10.0).walls}
    assert len(names) > 5
    assert names <= RESERVED


def test_contours_of_one_name(client):
    contour = {"name": "ring", "circle": {"centre": [0, 0], "radius": 1}}
    request = {"layout": a_layout(), "contours": [contour, contour | {"name": "other"}, contour]}
    problem = assert_problem(client.post(CONTOUR, json=request), 422, "repeated-name")
    assert pointers(problem) == {"#/contours/2/name"}


def test_states_of_one_name(client):
    state = {"name": "shear", "velocity_gradient": [[0, 1], [0, 0]]}
    request = {"fluid": {"temperature": 12}, "states": [state, state]}
    problem = assert_problem(client.post(STRESS, json=request), 422, "repeated-name")
    assert pointers(problem) == {"#/states/1/name"}


@pytest.mark.parametrize(
    "way",
    [
        {"polyline": [[1, 1], [1, 1], [1, 1]]},
        {"polyline": [[1, 1], [1, 1]], "closed": True},
        {"path": [{"line": {"from": [1, 1], "to": [1, 1]}}]},
    ],
)
def test_contour_without_length(client, way):
    request = {"layout": a_layout(), "contours": [{"name": "point", **way}]}
    problem = assert_problem(client.post(CONTOUR, json=request), 422, "contour-without-length")
    assert pointers(problem) == {"#/contours/0"}


def test_pieces_that_do_not_join(client):
    pieces = [{"line": {"from": [0, 0], "to": [1, 0]}}, {"line": {"from": [2, 0], "to": [3, 0]}}]
    request = {"layout": a_layout(), "contours": [{"name": "broken", "path": pieces}]}
    problem = assert_problem(client.post(CONTOUR, json=request), 422, "broken-path")
    assert pointers(problem) == {"#/contours/0/path/1"}


@pytest.mark.parametrize("gradient", [[[0, 1, 0], [0, 0, 0]], [[0, 1], [0, 0, 0]]])
def test_gradient_that_is_not_square(client, gradient):
    request = {"fluid": {"temperature": 12}, "states": [{"name": "s", "velocity_gradient": gradient}]}
    problem = assert_problem(client.post(STRESS, json=request), 422, "tensor-shape")
    assert pointers(problem) == {"#/states/0/velocity_gradient"}
    assert "as many columns as rows" in problem["detail"]


def test_normal_without_direction_is_not_repeated(client):
    state = {"name": "s", "velocity_gradient": [[0, 1], [0, 0]], "planes": [{"normal": [0, 0]}]}
    request = {"fluid": {"temperature": 12}, "states": [state]}
    problem = assert_problem(client.post(STRESS, json=request), 422, "zero-normal")
    assert "[" not in problem["detail"]


def test_example_layout_has_no_reserved_name():
    layout = example("sampleField")["layout"]
    assert not {thing["name"] for thing in layout["elements"] + layout["structures"]} & RESERVED
