"""Stagnation points on and beside polygonal walls, held against circles, counts and mirror images."""

from dataclasses import replace

import numpy as np
import pytest

from forebay.flow.arrays import ComplexArray
from forebay.flow.layout import (
    Ambient,
    Channel,
    EdgeProfile,
    Island,
    Layout,
    OpenEdge,
    Outline,
    Pier,
    Sink,
    Source,
    StraightBank,
    Surveyed,
)
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.result import StagnationSearch, Window
from forebay.flow.stagnation.search import search_model


def _polygon(centre: complex, radius: float, count: int, *, turn: float = 0.3) -> tuple[complex, ...]:
    return tuple(complex(z) for z in centre + radius * np.exp(2j * np.pi * (np.arange(count) + turn) / count))


def _reach(*islands: Island, discharge: float = 100.0) -> Surveyed:
    """Rectangle of 400 m by 100 m, water entering on the left and leaving on the right."""
    across = EdgeProfile.EQUIPOTENTIAL
    return Surveyed(
        outer=(0j, 400 + 0j, 400 + 100j, 100j),
        islands=islands,
        edges=(OpenEdge("upstream", 3, 1, discharge, across), OpenEdge("downstream", 1, 1, None, across)),
    )


def _found(layout: Layout) -> StagnationSearch:
    return search_model(compile_layout(layout))


def test_uniform_flow_has_none():
    found = _found(Layout(10.0, shore=_reach()))
    assert (found.complete, found.points, found.degree) == (True, (), 0)


def test_island_splits_the_flow_at_both_its_ends():
    island = Island("holm", _polygon(200 + 50j, 15.0, 24)[::-1])
    found = _found(Layout(10.0, shore=_reach(island)))
    assert found.complete
    assert [point.on for point in found.points] == ["holm", "holm"]
    front, rear = found.points
    # a 24-gon lies between circles of 14.87 m and 15 m, whose nodes are on the axis of the reach
    assert 14.8 < 200.0 - front.at.real < 15.0
    assert 14.8 < rear.at.real - 200.0 < 15.0
    assert np.cos(np.radians(rear.outflow_deg)) > np.cos(np.radians(7.5))  # square to an edge of a 24-gon


@pytest.mark.parametrize("centre", [20 + 15j, -30 + 40j], ids=["near-the-bank", "far-from-it"])
def test_many_sided_outline_is_like_a_pier(centre):
    layout = Layout(
        5.0, ambient=Ambient(0.4 + 0j), shore=StraightBank(0j, 1 + 0j), elements=(Sink("s", 60 + 8j, 6.0),)
    )
    round_ = _found(replace(layout, structures=(Pier("p", centre, 6.0),)))
    cornered = _found(replace(layout, structures=(Outline("p", _polygon(centre, 6.0, 64)),)))
    assert cornered.complete
    assert len(cornered.points) == len(round_.points)
    for one, other in zip(cornered.points, round_.points, strict=True):
        assert one.on == other.on
        # the 64-gon is up to 0.12 % smaller than the circle, and its own nodes lie on its sides
        assert abs(one.at - other.at) < 0.03 * 6.0


def test_groyne_is_half_of_its_mirrored_self():
    """A solid on the axis of symmetry of open water with mirrored elements, and its half on a bank."""
    half = Layout(
        5.0,
        ambient=Ambient(0.4 + 0j),
        shore=StraightBank(0j, 1 + 0j),
        elements=(Sink("s", 40 + 10j, 15.0), Source("o", -50 + 6j, 3.0)),
        structures=(Outline("groyne", (0j, 4 + 0j, 4 + 15j, 15j)),),
    )
    whole = Layout(
        5.0,
        ambient=Ambient(0.4 + 0j),
        elements=(
            *half.elements,
            Sink("s'", 40 - 10j, 15.0),
            Source("o'", -50 - 6j, 3.0),
        ),
        structures=(Outline("bar", (-15j, 4 - 15j, 4 + 15j, 15j)),),
    )
    one, other = _found(half), _found(whole)
    assert one.complete
    assert other.complete
    above = [point for point in other.points if point.at.imag > 1e-3]
    mine = [point for point in one.points if point.at.imag > 1e-3]
    assert len(above) == len(mine)
    for left, right in zip(mine, above, strict=True):
        assert abs(left.at - right.at) < 2e-3  # both bounds are below 1e-4 of the flow


@pytest.mark.parametrize("seed", range(6))
def test_count_closes_on_random_islands(seed):
    generator = np.random.default_rng(seed)
    centres = [90 + 40j, 200 + 60j, 310 + 35j]
    islands = tuple(
        Island(f"i{k}", tuple(complex(z) for z in _random_solid(generator, centre))[::-1])
        for k, centre in enumerate(centres[: 1 + seed % 3])
    )
    elements = (
        Sink("a", complex(150, generator.uniform(10, 90)), 12.0),
        Source("b", complex(260, generator.uniform(10, 90)), 8.0),
    )
    found = _found(Layout(4.0, shore=_reach(*islands), elements=elements))
    # two poles in the water weigh 2 each, every island 2, two open edges nothing
    assert found.degree == 4 + 2 * len(islands)
    assert found.complete, (found.degree, found.weight)


def _random_solid(generator: np.random.Generator, centre: complex) -> ComplexArray:
    angles = np.sort(generator.uniform(0.0, 2.0 * np.pi, 9))
    solid: ComplexArray = centre + generator.uniform(8.0, 20.0, 9) * np.exp(1j * angles)
    return solid


def test_still_creek_invents_no_points():
    """In a creek speeds fall below the solution's error: noise may not pass for stagnation points."""
    across = EdgeProfile.EQUIPOTENTIAL
    creek = Surveyed(
        outer=(0j, 195 + 0j, 195 - 120j, 205 - 120j, 205 + 0j, 400 + 0j, 400 + 100j, 100j),
        edges=(OpenEdge("in", 7, 1, 100.0, across), OpenEdge("out", 5, 1, None, across)),
    )
    found = _found(Layout(10.0, shore=creek))
    assert (found.complete, found.degree, found.points) == (True, 0, ())


def test_window_shows_what_lies_in_it():
    island = Island("holm", _polygon(200 + 50j, 15.0, 24)[::-1])
    model = compile_layout(Layout(10.0, shore=_reach(island)))
    found = search_model(model, Window((0.0, 200.0), (0.0, 100.0)))
    assert found.complete
    assert [point.at.real < 200.0 for point in found.points] == [True]


def test_outline_in_a_channel():
    layout = Layout(
        5.0,
        ambient=Ambient(0.4 + 0j),
        shore=Channel(0j, 1 + 0j, 60.0),
        structures=(Outline("sill", _polygon(20 + 35j, 6.0, 5)), Pier("p", 60 + 20j, 3.0)),
    )
    found = _found(layout)
    # an outline and a pier, each with a node before and one behind it
    assert found.complete
    assert sorted(point.on for point in found.points) == ["p", "p", "sill", "sill"]
