"""Elements on the land round surveyed water: against closed forms, and the same just off the wall."""

import numpy as np
import pytest

from forebay.flow.errors import ElementMisplacedError
from forebay.flow.layout import (
    EdgeProfile,
    Island,
    Layout,
    LineSink,
    OpenEdge,
    Outline,
    Sink,
    Source,
    Surveyed,
)
from forebay.flow.model import compile_layout

EQUI, UNIFORM = EdgeProfile.EQUIPOTENTIAL, EdgeProfile.UNIFORM
LENGTH = 12.0
"""Channel of width 1: ends 6 from the sinks are felt as exp(-6 pi) = 7e-9."""


def channel(*elements, profile=EQUI, tolerance=1e-4):
    edges = OpenEdge("west", 3, 1, 2.0, profile), OpenEdge("east", 1, 1, None, profile)
    shore = Surveyed((0j, LENGTH + 0j, LENGTH + 1j, 1j), (), edges)
    return compile_layout(Layout(1.0, shore=shore, elements=elements, tolerance=tolerance))


def points(count=2000):
    generator = np.random.default_rng(7)
    return generator.uniform(3, 9, count) + 1j * generator.uniform(0, 1, count)


@pytest.mark.parametrize("profile", EdgeProfile)
@pytest.mark.parametrize("at", [6.0, 6.013, 5.7 + 1j])  # 6.0 is the middle of an element of the mesh
def test_sink_on_a_bank_of_a_channel(at, profile):
    """Row of images at the distance of two widths, which coincide in pairs: q/2 coth(pi (z - s)/2)."""
    model = channel(Sink("s", complex(at), 1.0), profile=profile)
    assert model.bound.unknowns <= 1.05 * channel(profile=profile).bound.unknowns
    z = points()
    exact = 2.0 - 0.5 - 0.5 / np.tanh(0.5 * np.pi * (z - at))
    error = np.abs(model.velocity(z) - exact)
    distance = np.minimum(model.distance_to_wall(z), np.abs(model.rings_distance(z)))
    assert np.all(error <= model.bound.velocity(distance) + 1e-7)  # the ends, times the slope of coth there
    across = np.array([3.0 + 0j, 9.0 + 0j])
    flux = model.chord(across, across + 1j).imag
    assert flux == pytest.approx([2.0, 1.0], abs=2.0 * model.bound.absolute)


def test_line_sink_on_a_bank_of_a_channel():
    """Mean of the above over the line: log(sinh / sinh)."""
    start, end = 5.0, 7.0
    model = channel(LineSink("s", start + 0j, end + 0j, 1.0))
    z = points()
    ratio = np.sinh(0.5 * np.pi * (z - start)) / np.sinh(0.5 * np.pi * (z - end))
    exact = 2.0 - 0.5 - np.log(ratio) / (np.pi * (end - start))
    error = np.abs(model.velocity(z) - exact)
    assert np.all(error <= model.bound.velocity(np.abs(model.rings_distance(z))) + 1e-7)


def reach(*elements, tolerance=1e-4):
    """Rectangle of 400 m by 100 m with a round island, 100 m3/s through 10 m of water."""
    turn = np.exp(-2j * np.pi * np.arange(24) / 24)
    island = Island("island", tuple((200 + 50j + 15 * turn).tolist()))
    edges = OpenEdge("up", 3, 1, 100.0, EQUI), OpenEdge("down", 1, 1, None, EQUI)
    shore = Surveyed((0j, 400 + 0j, 400 + 100j, 100j), (island,), edges)
    others = Sink("works", 300 + 60j, 20.0), Source("outfall", 150 + 62j, 10.0)
    return compile_layout(Layout(10.0, shore=shore, elements=(*others, *elements), tolerance=tolerance))


@pytest.mark.parametrize("at", [250.0, 251.3, 396.0])
def test_sink_on_a_bank_costs_no_more_than_none(at):
    """Off the wall by a millionth of a metre the same sink is solved by a mesh that is graded towards it."""
    without, model, beside = reach(), reach(Sink("s", at + 0j, 30.0)), reach(Sink("s", at + 1e-6j, 30.0))
    assert model.bound.unknowns <= 1.25 * without.bound.unknowns
    assert model.bound.relative < 5e-4
    z = np.array([250 + 20j, 200 + 80j, 100 + 50j, 350 + 50j, 240 + 5j])
    reach_ = np.abs(model.rings_distance(z))
    allowed = model.bound.velocity(reach_) + beside.bound.velocity(reach_)
    assert np.all(np.abs(model.velocity(z) - beside.velocity(z)) <= allowed)
    across = model.chord(np.array([100 + 0j, 398 + 0j]), np.array([100 + 100j, 398 + 100j])).imag
    assert across == pytest.approx([10.0, 6.0], abs=2.0 * model.bound.absolute)


def test_bound_follows_the_tolerance():
    """Each tenth of the tolerance gains at least a third: the largest residual is what a mesh is made for."""
    sink = Sink("s", 250 + 0j, 30.0)
    bounds = [reach(sink, tolerance=tolerance).bound.relative for tolerance in (1e-3, 1e-4, 1e-5)]
    assert bounds[0] > 3.0 * bounds[1] > 9.0 * bounds[2]


def test_sink_on_the_first_element_of_an_outline():
    """There the potential along the ring counts from; no other place of a side is like it."""
    square = Outline("q", (190 + 40j, 210 + 40j, 210 + 60j, 190 + 60j))
    layouts = [
        Layout(10.0, elements=(Sink("s", at, 30.0),), structures=(square,))
        for at in (190 + 58.75j, 190 + 58.75j + 1e-4j)
    ]
    z = np.array([170 + 50j, 200 + 90j, 230 + 40j, 185 + 58j])
    one, other = (compile_layout(layout).velocity(z) for layout in layouts)
    assert np.abs(one - other).max() < 1e-4  # moved by 1e-4 m in a velocity that changes by 0.1 1/s at most


@pytest.mark.parametrize("profile", EdgeProfile)
@pytest.mark.parametrize(
    "element", [Sink("s", 12 + 0.5j, 1.0), LineSink("s", 12 + 0.2j, 12 + 0.8j, 1.0)], ids=["point", "line"]
)
def test_nothing_stands_on_an_open_edge(element, profile):
    with pytest.raises(ElementMisplacedError, match="open edge"):
        channel(element, profile=profile)
