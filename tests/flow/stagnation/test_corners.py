"""Corners: dead water is named, banks are told apart from the vertex, salient vertices are no zeros."""

import numpy as np
import pytest

from forebay.flow.layout import Basin, Core, CoreModel, Corner, DeadEnd, Layout, Sink, Source, Vortex
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.result import Window
from forebay.flow.stagnation.search import search_model


def spoke(radius, degrees):
    return radius * complex(np.exp(1j * np.radians(degrees)))


@pytest.mark.parametrize("distance", [50.0, 100.0, 200.0, 500.0])
def test_both_corners_of_a_dead_end_are_listed_however_far_the_sink(distance):
    """Between the sink and the closed end the velocity falls as exp(-pi x / width): to 1e-68 at 50 widths."""
    layout = Layout(1.0, shore=DeadEnd(0j, 1 + 0j, 10.0), elements=(Sink("a", distance + 3j, 1.0),))
    found = search_model(compile_layout(layout))
    assert found.complete
    assert {(p.at, p.on) for p in found.points if "closed end" in p.on} == {
        (0j, "right bank/closed end"),
        (10j, "left bank/closed end"),
    }


@pytest.mark.parametrize(("length", "width"), [(5.0, 400.0), (400.0, 5.0), (5.0, 1000.0), (1000.0, 5.0)])
def test_all_four_corners_of_a_slender_basin_are_listed(length, width):
    far = complex(0.6 * length, 0.9 * width) if width > length else complex(0.9 * length, 0.6 * width)
    elements = (Source("a", far, 1.0), Sink("b", 1 + 1j, 1.0))
    found = search_model(
        compile_layout(Layout(1.0, shore=Basin(0j, 1 + 0j, length, width), elements=elements))
    )
    assert found.complete
    assert sum("/" in point.on for point in found.points) == 4


def test_a_thin_wall_has_stagnation_points_of_its_own():
    """Interior angle 360 degrees: both banks are one line, and a point on it is not the vertex."""
    elements = (Sink("a", spoke(5, 100), 1.0), Source("b", spoke(8, 200), 1.0))
    found = search_model(compile_layout(Layout(1.0, shore=Corner(0j, 1 + 0j, 2 * np.pi), elements=elements)))
    assert found.complete
    assert {point.on for point in found.points} == {"first bank/second bank"}
    assert all(point.strain_rate > 0.0 for point in found.points)


@pytest.mark.parametrize("degrees", [270.0, 300.0])
def test_a_salient_vertex_is_no_stagnation_point_in_a_window_that_holds_it(degrees):
    core = Core(CoreModel.LAMB_OSEEN, 1.0)
    elements = (
        Sink("a", spoke(5, 100), 1.0),
        Source("b", spoke(8, 200), 1.0),
        Vortex("v", spoke(12, 60), 1.0, core),
    )
    model = compile_layout(Layout(1.0, shore=Corner(0j, 1 + 0j, np.radians(degrees)), elements=elements))
    whole = search_model(model)
    part = search_model(model, Window((-20.0, 20.0), (-20.0, 20.0)))
    assert whole.complete
    assert part.complete
    assert [p.on for p in part.points] == [p.on for p in whole.points if abs(p.at) < 28.0]
    assert "vertex" not in {point.on for point in whole.points}
