"""Search of line elements, cores and gradients: closed forms, and the turning round the cells of a grid."""

from math import pi, radians, tanh

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.layout import (
    Ambient,
    Core,
    CoreModel,
    Corner,
    Layout,
    LineSink,
    LineSource,
    Pier,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import FlowModel, compile_layout
from forebay.flow.stagnation.result import SearchMethod, StagnationKind, Window
from forebay.flow.stagnation.search import search_model
from support.layouts import ALL_KINDS, random_layout
from support.sites import SHORES

BANK = StraightBank(0j, 1 + 0j)


def found(*elements, window=None, depth=1.0, **site):
    search = search_model(compile_layout(Layout(depth, elements=elements, **site)), window)
    assert search.complete, (search.degree, search.weight, search.unresolved)
    assert search.method is SearchMethod.WINDING
    assert search.expected_count == search.found_count == len(search.points)
    return search.points


@pytest.mark.parametrize(("speed", "inflow"), [(0.5, 0.15), (0.5, 2.0), (0.2, 0.2)])
def test_flush_slot(speed, inflow):
    """Uniform slot of width s in a bank: x = (s/2) coth(pi U / 2 V)."""
    slot = LineSink("slot", -2 + 0j, 2 + 0j, 4 * inflow)
    (point,) = found(slot, shore=BANK, ambient=Ambient(speed + 0j))
    assert_allclose(point.at, 2 / tanh(pi * speed / (2 * inflow)), atol=1e-12)
    assert (point.on, point.kind, point.is_artefact) == ("bank", StagnationKind.WALL, False)


def test_point_hidden_at_the_end_of_a_slot_is_reported_as_an_artefact():
    """U = 10 V: the point lies s exp(-10 pi) = 1e-13 m beyond the end."""
    (point,) = found(LineSink("slot", -2 + 0j, 2 + 0j, 4 * 0.05), shore=BANK, ambient=Ambient(0.5 + 0j))
    assert (point.at, point.on, point.is_artefact) == (2 + 0j, "bank", True)


@pytest.mark.parametrize("turn", [0.0, 30.0, 137.0])
def test_line_along_the_current(turn):
    """On its axis U = (sigma / 2 pi) ln((x + 2) / (x - 2)); outside, at the downstream end of a sink."""
    unit = np.exp(1j * radians(turn))
    line = LineSink("line", -2 * unit, 2 * unit, 8.0)
    (point,) = found(line, ambient=Ambient(complex(0.5 * unit)))
    ratio = np.exp(2 * pi * 0.5 / 2.0)
    assert_allclose(point.at / unit, 2 * (ratio + 1) / (ratio - 1), atol=1e-12)


def test_weak_line_across_the_current_stops_no_water():
    """|U_n| above half the jump: index 0 and no stagnation point."""
    assert found(LineSink("line", -2j, 2j, 1.0), ambient=Ambient(0.5 + 0j)) == ()


def test_strong_line_across_the_current():
    """Half-angle seen from the point: sigma angle / 2 pi = U, so that it is x = 2 cot(pi U / sigma)."""
    (point,) = found(LineSink("line", -2j, 2j, 8.0), ambient=Ambient(0.5 + 0j))
    assert_allclose(point.at, 2 / np.tan(pi * 0.5 / 2.0), atol=1e-12)


def test_line_that_stands_on_a_bank():
    points = found(LineSource("line", 0j, 4j, 3.0), shore=BANK, ambient=Ambient(0.2 + 0j))
    (point,) = [p for p in points if not p.is_artefact]
    # on the bank the line and its image are one line of 8 m: u = (sigma/pi) atan(4/x), sigma = 3/4
    assert_allclose(point.at, -4 / np.tan(pi * 0.2 / 0.75), atol=1e-12)


def test_rankine_core():
    """Inside W turns rigidly: centre at r = 2 pi U a^2 / Gamma; outside the saddle at Gamma / (2 pi U)."""
    vortex = Vortex("gyre", 0j, 10.0, Core(CoreModel.RANKINE, 2.0))
    saddle, centre = sorted(found(vortex, ambient=Ambient(0.1 + 0j)), key=lambda p: p.kind, reverse=True)
    assert_allclose(saddle.at, 10j / (2 * pi * 0.1), atol=1e-11)
    assert saddle.kind is StagnationKind.SADDLE
    assert_allclose(centre.at, 2j * pi * 0.1 * 4 / 10, atol=1e-12)
    assert centre.kind is StagnationKind.CENTRE
    assert np.isnan(centre.outflow_deg)


def test_lamb_oseen_core():
    """Centre where (1 - exp(-r^2/a^2)) Gamma / (2 pi r) = U."""
    vortex = Vortex("gyre", 0j, 10.0, Core(CoreModel.LAMB_OSEEN, 2.0))
    points = found(vortex, ambient=Ambient(0.1 + 0j))
    assert sorted(point.kind for point in points) == [StagnationKind.CENTRE, StagnationKind.SADDLE]
    for point in points:
        r = point.at.imag
        assert_allclose(-np.expm1(-(r**2) / 4) * 10 / (2 * pi * r), 0.1, rtol=1e-12)


def test_shear_along_a_bank():
    (point,) = found(Sink("t", 10j, 5.0), shore=BANK, ambient=Ambient(0.2 + 0j, ((0.0, 0.05), (0.0, 0.0))))
    y = point.at.imag
    assert 0 < y < 10
    # the eigenvector of the velocity gradient along which water leaves: it grows with the flow
    model = compile_layout(
        Layout(
            1.0,
            shore=BANK,
            ambient=Ambient(0.2 + 0j, ((0.0, 0.05), (0.0, 0.0))),
            elements=(Sink("t", 10j, 5.0),),
        )
    )
    step = 1e-6 * np.exp(1j * radians(point.outflow_deg))
    velocity = np.conj(model.velocity(np.array([point.at + step])))[0]
    assert_allclose(np.angle(velocity / step), 0.0, atol=1e-4)  # first order in the step


def test_strain_in_a_right_angled_corner():
    """W = s z less a source: vertex and the places where they balance."""
    points = found(
        Source("s", 20 + 6j, 8.0),
        depth=4.0,
        shore=Corner(0j, 1 + 0j, pi / 2),
        ambient=Ambient(0j, ((0.01, 0.0), (0.0, -0.01))),
    )
    assert "vertex" in {point.on for point in points}


def test_pier_in_a_shear():
    points = found(
        ambient=Ambient(0.3 + 0j, ((0.0, 0.05), (0.0, 0.0))),
        structures=(Pier("p", 0j, 2.0),),
        window=Window((-3.0, 3.0), (-3.0, 3.0)),
    )
    assert [point.on for point in points] == ["p", "p"]


def test_window_through_a_zero_is_nudged():
    line = LineSink("line", -2 + 0j, 2 + 0j, 8.0)
    ratio = np.exp(2 * pi * 0.5 / 2.0)
    x = 2 * (ratio + 1) / (ratio - 1)
    (point,) = found(line, ambient=Ambient(0.5 + 0j), window=Window((-x, x + 1e-12), (-3.0, 3.0)))
    assert_allclose(point.at, x, atol=1e-12)


def test_window_on_land_is_empty():
    line = LineSink("line", 1j, 2 + 1j, 8.0)
    points = found(line, ambient=Ambient(0.5 + 0j), shore=BANK, window=Window((0.0, 1.0), (-3.0, -2.0)))
    assert points == ()


GRID = 300
"""Cells along each side of the window."""


def _free(model: FlowModel, middle: ComplexArray, cell: float) -> BoolArray:
    """Cells in the water that hold no part of a wall, an element, a line or a core's rim."""
    free = model.wet(middle) & (model.distance_to_wall(middle) > cell)
    for s in model.singularities:
        free &= np.abs(middle - s.at) > cell
    for line in model.lines:
        along = np.clip(((middle - line.start) / (line.end - line.start)).real, 0, 1)
        free &= np.abs(middle - line.start - along * (line.end - line.start)) > cell
    return free


def _turning(w: ComplexArray) -> FloatArray:
    """Turns of W round each cell of a grid, anticlockwise."""
    with np.errstate(invalid="ignore"):  # no value at a singular place; such cells are not free
        steps = [
            w[:-1, 1:] / w[:-1, :-1],
            w[1:, 1:] / w[:-1, 1:],
            w[1:, :-1] / w[1:, 1:],
            w[:-1, :-1] / w[1:, :-1],
        ]
        return np.asarray(sum(np.angle(step) for step in steps) / (2 * pi))


@pytest.mark.parametrize(
    "shore", ["open-water", "straight-bank", "channel", "corner-reflex", "dead-end", "basin"]
)
@pytest.mark.parametrize("seed", [0, 1])
def test_grid_finds_no_other_zeros(shore, seed):
    """Turning round each of 90 000 cells, unless a singular place is near, equals the points listed in it."""
    model = compile_layout(random_layout(shore, seed, kinds=ALL_KINDS, count=5))
    search = search_model(model)
    assert search.complete
    places = np.array([s.at for s in model.singularities] + [line.start for line in model.lines])
    x = np.linspace(places.real.min(), places.real.max(), GRID + 1)
    y = np.linspace(places.imag.min(), places.imag.max(), GRID + 1)
    z = x[None, :] + 1j * y[:, None]
    cell = abs(z[1, 1] - z[0, 0])
    free = _free(model, z[:-1, :-1] + 0.5 * (z[1, 1] - z[0, 0]), cell)
    counted = np.where(free, np.rint(np.nan_to_num(_turning(model.velocity(z)))), 0.0)
    listed = np.zeros_like(counted)
    for point in search.points:
        column, row = np.searchsorted(x, point.at.real) - 1, np.searchsorted(y, point.at.imag) - 1
        if 0 <= column < GRID and 0 <= row < GRID and free[row, column]:
            listed[row, column] += -1 if point.kind is StagnationKind.CENTRE else 1
    assert np.array_equal(counted, listed)


@pytest.mark.parametrize("shore", list(SHORES))
@pytest.mark.parametrize("piers", [0, 1])
def test_everything_mixed_closes(shore, piers):
    search = search_model(compile_layout(random_layout(shore, 2, kinds=ALL_KINDS, count=6, piers=piers)))
    assert search.complete
    assert search.weight == search.degree


def test_many_boxes_are_an_honest_failure(monkeypatch):
    monkeypatch.setattr("forebay.flow.stagnation.quadtree.MOST_BOXES", 150)
    layout = random_layout("open-water", 1, kinds=ALL_KINDS, count=6)
    search = search_model(compile_layout(layout))
    assert not search.complete
    assert search.unresolved
    assert search.expected_count > search.found_count
