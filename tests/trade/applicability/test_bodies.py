"""Bodies in the stream: what stands in the water, how broad it is across it, and what is said of it."""

import math
from dataclasses import replace

import numpy as np
import pytest

from forebay.flow.layout import (
    Ambient,
    Channel,
    Core,
    CoreModel,
    EdgeProfile,
    Island,
    Layout,
    OpenEdge,
    Outline,
    Pier,
    Sink,
    StraightBank,
    Surveyed,
    Vortex,
)
from forebay.trade.applicability.bodies import bodies_of
from forebay.trade.applicability.review import RULES
from forebay.trade.applicability.site import Site, SiteData
from support.warned_sites import box

RULE = {kind.code: rule for kind, rule in RULES}
BANK = StraightBank(0j, 1 + 0j)
CURRENT = Layout(4.0, ambient=Ambient(0.5 + 0j))
GROYNE = Outline("groyne", (0 - 3j, 2 - 3j, 2 + 8j, 8j))
"""Two metres thick, rooted 3 m behind a bank along the x axis and 8 m out."""

EYOT = Island("eyot", (40 + 10j, 40 + 16j, 48 + 16j, 48 + 10j))
REACH = Surveyed(
    (0j, 100 + 0j, 100 + 30j, 30j), (EYOT,), (OpenEdge("upper", 3, 1, 30.0, EdgeProfile.UNIFORM),)
)


def body_of(layout, merged=()):
    (body,) = bodies_of(layout, merged)
    return body


@pytest.mark.parametrize("degrees", [0.0, 30.0, 90.0, 135.0, 270.0])
def test_breadth_of_a_box_across_a_stream(degrees):
    stream = 0.7 * complex(np.exp(1j * math.radians(degrees)))
    body = body_of(Layout(4.0, structures=(box(10.0, 2.0),)))
    # sides of 10 and 2 m seen from upstream: 10 |sin| + 2 |cos|
    turn = math.radians(degrees)
    expected = 10.0 * abs(math.sin(turn)) + 2.0 * abs(math.cos(turn))
    assert body.breadth(stream) == pytest.approx(expected, rel=1e-12)


def test_breadth_without_a_stream_is_the_largest():
    body = body_of(Layout(4.0, structures=(box(10.0, 2.0),)))
    # the diagonal; directions are half a degree off at most: 1 - cos(0.5 deg) = 3.8e-5
    assert body.breadth(0j) == pytest.approx(math.hypot(10.0, 2.0), rel=4e-5)


def test_pier_is_as_broad_as_its_diameter_from_everywhere():
    body = body_of(Layout(4.0, structures=(Pier("P", 3 + 4j, 1.5),)))
    assert body.breadth(1j) == body.breadth(0j) == 3.0
    assert body.stands_free


def test_groyne_counts_from_its_bank():
    body = body_of(replace(CURRENT, shore=BANK, structures=(GROYNE,)))
    assert body.breadth(1 + 0j) == pytest.approx(8.0, rel=1e-12)
    assert not body.stands_free


def test_island_in_a_channel_stands_free():
    channel = Channel(-20j, 1 + 0j, 40.0)
    assert body_of(replace(CURRENT, shore=channel, structures=(box(10.0, 2.0),))).stands_free


def test_what_is_behind_the_bank_is_no_body():
    buried = Outline("store", (0 - 9j, 2 - 9j, 2 - 4j, -4j))
    assert list(bodies_of(replace(CURRENT, shore=BANK, structures=(buried,)))) == []


def test_surveyed_water_has_its_islands_and_what_became_land():
    eyot, groyne = sorted(bodies_of(Layout(4.0, shore=REACH), (GROYNE,)), key=lambda body: body.name)
    assert (eyot.called, eyot.path, eyot.stands_free) == ("island 'eyot'", ("shore", "islands", 0), True)
    assert (groyne.called, groyne.path, groyne.stands_free) == ("outline 'groyne'", (), False)


def said(code, layout, data=None):
    return list(RULE[code](Site(layout, data or SiteData())))


def test_lee_of_a_groyne_holds_an_eddy_and_sheds_none():
    (warning,) = said("pier-lee", replace(CURRENT, shore=BANK, structures=(GROYNE,)))
    assert "an eddy stays in its lee" in warning.message
    assert "at least 40 m" in warning.message  # five times 8 m
    assert warning.value == pytest.approx(0.5 * 8.0 / 1.8e-6, rel=1e-12)


def test_lee_of_an_outline_in_the_stream_sheds():
    # f = 0.2 U / D = 0.2 * 0.5 / 2 = 0.05 1/s
    (warning,) = said("pier-lee", replace(CURRENT, structures=(box(10.0, 2.0),)))
    assert "every 20 s (0.05 1/s)" in warning.message
    assert warning.path == ("structures", 0)


def test_shallow_wake_is_of_what_water_passes_on_both_sides():
    data = SiteData(bed_friction=0.01)
    (free,) = said("shallow-wake", replace(CURRENT, structures=(box(10.0, 2.0),)), data)
    assert free.value == pytest.approx(0.01 * 2.0 / 4.0, rel=1e-12)
    assert said("shallow-wake", replace(CURRENT, shore=BANK, structures=(GROYNE,)), data) == []


@pytest.mark.parametrize(
    ("layout", "merged"),
    [(replace(CURRENT, structures=(box(10.0, 2.0),)), ()), (Layout(4.0, shore=REACH), (GROYNE,))],
    ids=["outline", "surveyed"],
)
def test_tides_concern_every_body(layout, merged):
    data = SiteData(tidal_period=10.0, merged=merged)
    assert len(said("tidal-reversal", layout, data)) == 1 + len(merged)
    salty = replace(layout, water=replace(layout.water, salinity=30.0))
    assert len(said("tidal-period-unknown", salty, SiteData(merged=merged))) == 1


def test_intake_in_a_quay_moves_no_more_water_past_it_than_from_half_its_breadth():
    # 2 m3/s over 4 m at the very middle of a body 2 m broad: 0.5 / (2 pi 1 m)
    layout = replace(CURRENT, structures=(box(10.0, 2.0),), elements=(Sink("a", 0j, 2.0),))
    (warning,) = said("pier-lee", layout)
    assert warning.value == pytest.approx((0.5 + 0.5 / (2 * math.pi)) * 2.0 / 1.8e-6, rel=1e-12)


def test_core_near_an_outline():
    vortex = Vortex("g", 7j, 1.0, Core(CoreModel.LAMB_OSEEN, 2.5))
    (warning,) = said("core-near-wall", Layout(4.0, elements=(vortex,), structures=(box(10.0, 2.0),)))
    assert warning.value == 6.0
