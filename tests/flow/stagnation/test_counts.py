"""The count closes on every shore, with and without current, banks' own elements and piers."""

from dataclasses import replace

import numpy as np
import pytest

from forebay.flow.layout import (
    Ambient,
    Basin,
    Channel,
    Doublet,
    Layout,
    OpenWater,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.count import UncountableFieldError, far_field
from forebay.flow.stagnation.result import SearchMethod, Window
from forebay.flow.stagnation.search import search_model
from support.layouts import BANK_KINDS, POINT_KINDS, random_layout, without_current
from support.sites import SHORES

KINDS = (*POINT_KINDS, *BANK_KINDS)


def _closes(layout):
    model = compile_layout(layout)
    search = search_model(model)
    assert search.complete, (search.degree, search.weight, search.unresolved)
    assert search.method is SearchMethod.DEGREE
    assert search.expected_count == search.found_count == len(search.points)
    for point in search.points:
        assert bool(model.wet(np.array([point.at]))[0])
        # a speed of rounding, or what the radius of inclusion allows at the strain rate there
        scale = 1e-13 * float(model.magnitude(np.array([point.at]))[0])
        assert point.residual_speed <= scale + 2 * np.nan_to_num(point.strain_rate) * point.inclusion_radius
    return search


@pytest.mark.parametrize("shore", list(SHORES))
@pytest.mark.parametrize("seed", range(4))
def test_current(shore, seed):
    _closes(random_layout(shore, seed, kinds=KINDS, count=3 + 5 * seed))


@pytest.mark.parametrize("shore", list(SHORES))
@pytest.mark.parametrize("seed", range(3))
def test_still_water(shore, seed):
    _closes(without_current(random_layout(shore, 10 + seed, kinds=KINDS, count=4 + 3 * seed)))


@pytest.mark.parametrize("shore", [name for name in SHORES if name != "basin-long"])
@pytest.mark.parametrize("piers", [1, 3])
def test_piers(shore, piers):
    layout = random_layout(shore, 20 + piers, kinds=KINDS, count=5, piers=piers)
    search = _closes(layout)
    assert search.degree == _closes(replace(layout, structures=())).degree + 2 * piers


@pytest.mark.parametrize("count", [60])
@pytest.mark.parametrize("shore", ["open-water", "straight-bank", "channel", "corner-obtuse"])
def test_many(shore, count):
    _closes(random_layout(shore, 1, kinds=KINDS, count=count))


def _far(*elements, shore=OpenWater(), velocity=0j):  # noqa: B008 - frozen
    return far_field(
        compile_layout(Layout(1.0, shore=shore, ambient=Ambient(velocity), elements=elements)).rational
    )


@pytest.mark.parametrize(
    ("elements", "order"),
    [
        ((Source("a", 1 + 0j, 1.0),), 1),
        ((Source("a", 1 + 0j, 1.0), Sink("b", -1 + 0j, 1.0)), 2),
        ((Doublet("d", 3j, 1 + 1j),), 2),
        ((Source("a", -1 + 0j, 1.0), Source("b", 1 + 0j, 1.0), Sink("c", 0j, 2.0)), 3),
        ((Vortex("a", 1 + 0j, 1.0), Vortex("b", 1j, -3.0), Vortex("c", -2 + 0j, 2.0)), 2),
    ],
)
def test_first_moment_that_does_not_vanish(elements, order):
    assert _far(*elements).infinity == order
    assert _far(*elements, velocity=0.1 + 0j).infinity == 0


def test_ends_of_a_channel():
    channel = Channel(0j, 1 + 0j, 10.0)
    assert (_far(Sink("t", 3j, 1.0), shore=channel).left, _far(Sink("t", 3j, 1.0), shore=channel).right) == (
        0,
        0,
    )
    still = _far(Sink("t", 3j, 1.0), Source("s", 8 + 3j, 1.0), shore=channel)
    assert (still.left, still.right) == (1, 1)
    drained = _far(Sink("t", 3j, 5.0), shore=channel, velocity=0.5 + 0j)  # takes all that comes
    assert (drained.left, drained.right) == (0, 1)


def test_vortex_near_a_bank_is_a_dipole_far_away():
    """Image of opposite sign: W ~ 1/z^2, so that D = 2 - 2 = 0."""
    bank = StraightBank(0j, 1 + 0j)
    assert _far(Vortex("v", 2j, 1.0), shore=bank).infinity == 2
    assert search_model(compile_layout(Layout(1.0, shore=bank, elements=(Vortex("v", 2j, 1.0),)))).degree == 0


@pytest.mark.parametrize("shore", [OpenWater(), Channel(0j, 1 + 0j, 9.0), Basin(0j, 1 + 0j, 9.0, 5.0)])
def test_water_at_rest_has_no_points_and_no_proof(shore):
    search = search_model(compile_layout(Layout(1.0, shore=shore)))
    assert (search.points, search.expected_count, search.complete) == ((), 0, False)


def test_far_field_of_nothing_is_an_error():
    with pytest.raises(UncountableFieldError):
        _far()


def test_elements_of_no_strength_are_no_poles():
    layout = Layout(1.0, ambient=Ambient(1 + 0j), elements=(Vortex("v", 0j, 0.0), Doublet("d", 5 + 0j, 0j)))
    search = search_model(compile_layout(layout))
    assert (search.degree, search.found_count, search.complete) == (0, 0, True)


def test_vortex_on_a_sink_is_one_pole():
    layout = Layout(1.0, ambient=Ambient(1 + 0j), elements=(Vortex("v", 0j, 1.0), Sink("t", 0j, 1.0)))
    search = search_model(compile_layout(layout))
    assert (search.degree, search.found_count, search.complete) == (2, 1, True)


def test_window_picks_from_all():
    elements = (Sink("a", 0j, 1.0), Sink("b", 10 + 0j, 1.0))
    model = compile_layout(Layout(1.0, ambient=Ambient(1 + 0j), elements=elements))
    whole = search_model(model)
    part = search_model(model, Window((5.0, 20.0), (-1.0, 1.0)))
    assert part.complete
    assert part.points == tuple(point for point in whole.points if point.at.real > 5)
    assert part.expected_count == part.found_count == 1
