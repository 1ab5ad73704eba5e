"""Every warning at, just below and just above its threshold, and that none is left out of this table."""

import math
from dataclasses import replace

import numpy as np
import pytest
from scipy.optimize import brentq
from scipy.special import k1

from forebay.flow.layout import (
    Ambient,
    Channel,
    Core,
    CoreModel,
    Corner,
    DeadEnd,
    Doublet,
    EdgeProfile,
    Layout,
    LineSink,
    LineSource,
    OpenEdge,
    Pier,
    Sink,
    Source,
    StraightBank,
    Surveyed,
    Vortex,
    Water,
)
from forebay.flow.point_intake.reach import depth_mean_error, near_field_reach
from forebay.trade.applicability.ideal import END_SHARE
from forebay.trade.applicability.review import CATALOGUE, RULES, evaluate
from forebay.trade.applicability.site import PortShape, Readings, Site, SiteData
from forebay.trade.applicability.stratification import critical_distance
from forebay.trade.exposure import chosen_thresholds
from forebay.trade.water import water_properties

RULE = {kind.code: rule for kind, rule in RULES}
BANK = StraightBank(0j, 1 + 0j)
ABOVE, BELOW = 1.0 + 1e-9, 1.0 - 1e-9
DEPTH = 4.0
STILL = Layout(DEPTH)
CURRENT = Layout(DEPTH, ambient=Ambient(0.5 + 0j))


def site(layout, data=None, readings=None):
    return Site(layout, data or SiteData(), readings or Readings())


def raised(code, at):
    return list(RULE[code](at))


def flowing(speed, depth=DEPTH):
    return site(Layout(depth, ambient=Ambient(speed * np.exp(0.3j))))


def critical(froude, depth=DEPTH):
    return froude * math.sqrt(9.80665 * depth)


def pair(distance, layout=CURRENT):
    return site(replace(layout, elements=(Sink("a", 0j, 1.0), Vortex("b", distance + 0j, 1.0))))


def asked(distance):
    points = np.array([50.0 + 0j, 0.6 * distance + 0.8j * distance])
    return site(replace(CURRENT, elements=(Source("a", 0j, 1.0),)), readings=Readings(points))


def pier_in(speed):
    return site(Layout(DEPTH, ambient=Ambient(speed + 0j), structures=(Pier("P", 0j, 1.5),)))


def wake(number):
    data = SiteData(bed_friction=number * DEPTH / 3.0)
    return site(replace(CURRENT, structures=(Pier("P", 0j, 1.5),)), data)


def outfall(area=None, distance=50.0, current=0.5):
    elements = (Source("works", 0j, 2.0), Sink("town", distance + 0j, 1.0))
    data = SiteData(port_areas={} if area is None else {"works": area})
    return site(Layout(DEPTH, ambient=Ambient(current + 0j), elements=elements), data)


def jet(share):
    # l_M = Q / sqrt(A) / Ua = 2 / 1 / 0.5 = 4 m: five of them are 20 m
    return outfall(area=1.0, distance=20.0 * share)


def corner(degrees):
    return site(Layout(DEPTH, shore=Corner(0j, 1 + 0j, math.radians(degrees))))


def cored(model, distance):
    vortex = Vortex("g", 1j * distance, 1.0, Core(model, 2.0))
    return site(Layout(DEPTH, shore=BANK, elements=(vortex,)))


def bank_intake(distance, discharge=1.0, current=0.5):
    sink = Sink("a", 1j * distance, discharge)
    return site(Layout(DEPTH, ambient=Ambient(current + 0j), shore=BANK, elements=(sink,)))


def still_channel(net, velocity=0j):
    elements = (Source("a", 5j, 2.0), Sink("b", 9 + 5j, 2.0 - net))
    return site(Layout(DEPTH, ambient=Ambient(velocity), shore=Channel(0j, 1 + 0j, 20.0), elements=elements))


def long_layout(extent):
    # 0.3 h / c_f = 0.3 * 4 / 0.005 = 240 m
    elements = (Sink("a", 0j, 1.0), Sink("b", 10 + 5j, 1.0))
    layout = replace(CURRENT, elements=elements, structures=(Pier("P", extent + 0j, 1.0),))
    return site(layout, SiteData(bed_friction=0.005))


def mixing(share):
    # c_f = 0.01, h = 4: sigma = sqrt(2 * 0.6 * 4 * 0.1 * 100) = sqrt(48) m over 100 m; w / 4 = Q / 8 m
    discharge = 8.0 * math.sqrt(48.0) / share
    elements = (Source("works", 0j, 1.0), Sink("town", 100 + 0j, discharge))
    return site(replace(CURRENT, elements=elements), SiteData(bed_friction=0.01))


def windy(speed):
    return site(CURRENT, SiteData(wind_speed=speed))


def uneven(largest):
    return site(CURRENT, SiteData(depth_range=(3.5, largest)))


def turning(vorticity):
    return site(Layout(DEPTH, ambient=Ambient(gradient=((0.0, 0.1), (0.1 + vorticity, 0.0)))))


def lined(cls=LineSink):
    return site(replace(CURRENT, elements=(cls("bay", 0j, 6 + 8j, 1.0),)))


def known_opening(share):
    # error of the depth mean at mid-depth, 2 sum x K1(x) over even modes, is 0.01 at `share` = 1
    def excess(r):
        return sum(2.0 * n * math.pi * r * k1(n * math.pi * r) for n in (2, 4, 6, 8, 10)) - 0.01

    distance = DEPTH * brentq(excess, 0.5, 2.0, xtol=1e-13)
    layout = replace(CURRENT, elements=(Sink("a", 0j, 1.0),))
    points = np.array([complex(distance * share), 50j])
    return site(layout, SiteData(elevations={"a": DEPTH / 2}), Readings(points))


def tidal(number):
    # KC = U T / D = 0.5 T / 3
    layout = replace(CURRENT, structures=(Pier("P", 0j, 1.5),))
    return site(layout, SiteData(tidal_period=6.0 * number))


def on_the_earth(number):
    # f = 1.03126e-4 1/s at 45 degrees; U = 0.5 m/s
    extent = 0.5 / (2 * 7.2921159e-5 * math.sin(math.pi / 4)) / number
    layout = replace(CURRENT, elements=(Sink("a", 0j, 1.0), Sink("b", extent + 0j, 1.0)))
    return site(layout, SiteData(latitude=45.0))


def apart(extent, data=None):
    return site(replace(CURRENT, elements=(Sink("a", 0j, 1.0), Sink("b", extent + 0j, 1.0))), data)


def density_for(reduced):
    return reduced * water_properties(10.0, 0.0).density / 9.80665


def layered(share, discharge=0.5, reduced=0.0146682):
    # h_c of a point: 0.69 (Q^2 / g')^(1/5)
    distance = share * 1.5 * 0.69 * (discharge**2 / reduced) ** 0.2
    data = SiteData(
        density_difference=density_for(reduced), interface_elevation=1.0 + distance, elevations={"a": 1.0}
    )
    return site(replace(CURRENT, elements=(Sink("a", 0j, discharge),)), data)


def buoyant(number, current=0.5):
    # g' h / U^2
    excess = -density_for(number * 0.25 / DEPTH)
    layout = Layout(DEPTH, ambient=Ambient(current + 0j), elements=(Source("works", 0j, 2.0),))
    return site(layout, SiteData(excess_densities={"works": excess}))


def salty(data=None):
    layout = replace(CURRENT, water=Water(10.0, 30.0), structures=(Pier("P", 0j, 1.5),))
    return site(layout, data)


def solved(bound, tolerance=1e-4):
    return site(Layout(DEPTH, tolerance=tolerance), readings=Readings(boundary_bound=bound))


def cut_at(degrees, profile=EdgeProfile.EQUIPOTENTIAL):
    # water of 100 m by 50 m; its left side is an open edge that meets the lower bank at that angle
    top = 50.0 * np.exp(1j * math.radians(degrees))
    outer = (0j, 100 + 0j, 100 + 50j, complex(top))
    return site(Layout(DEPTH, shore=Surveyed(outer, (), (OpenEdge("upper reach", 3, 1, 5.0, profile),))))


SPED = math.sqrt(1.0 - 1.0 / 1.05**2)
"""Froude number with a first-order speed-up of a twentieth."""

THRESHOLDS = [
    # code, below, at, above: how many warnings each raises
    ("rigid-lid", flowing(critical(0.3) * BELOW), flowing(critical(0.3) * ABOVE), 0.3),
    ("rigid-lid-failed", flowing(critical(0.5) * BELOW), flowing(critical(0.5) * ABOVE), 0.5),
    ("near-field-overlap", pair(8.0), pair(8.0 * BELOW), 8.0),
    ("near-field-result", asked(8.0 * ABOVE), asked(8.0 * BELOW), 8.0),
    ("pier-lee", pier_in(50 * 1.8e-6 / 3.0 * BELOW), pier_in(50 * 1.8e-6 / 3.0 * ABOVE), 50.0),
    ("outfall-jet-speed", outfall(area=4.0), outfall(area=4.0 * BELOW), 1.0),
    ("outfall-jet-reach", jet(1.0), jet(BELOW), 20.0),
    ("salient-corner", corner(180.0), corner(180.0 * ABOVE), 180.0),
    ("core-near-wall", cored(CoreModel.LAMB_OSEEN, 6.0), cored(CoreModel.LAMB_OSEEN, 6.0 * BELOW), 6.0),
    ("core-near-wall", cored(CoreModel.RANKINE, 4.0), cored(CoreModel.RANKINE, 4.0 * BELOW), 4.0),
    ("bank-shear", bank_intake(4.0 * ABOVE), bank_intake(4.0), 4.0),
    ("friction-length", long_layout(240.0), long_layout(240.0 * ABOVE), 240.0),
    ("transverse-mixing", mixing(BELOW), mixing(ABOVE), math.sqrt(48.0)),
    ("wind-drift", windy(5.0 * BELOW), windy(5.0 * ABOVE), 0.15),
    ("uneven-depth", uneven(4.3 * BELOW), uneven(4.3 * ABOVE), 0.2),
    ("rotational-field", turning(0.0), turning(1e-6), 0.0),
    ("surface-speed-up", flowing(critical(SPED) * BELOW), flowing(critical(SPED) * ABOVE), 0.05),
    ("near-field-error", known_opening(ABOVE), known_opening(BELOW), 0.01),
    ("tidal-reversal", tidal(50.0 * ABOVE), tidal(50.0 * BELOW), 50.0),
    ("earth-rotation", on_the_earth(10.0 * ABOVE), on_the_earth(10.0 * BELOW), 10.0),
    ("earth-rotation-strong", on_the_earth(ABOVE), on_the_earth(BELOW), 1.0),
    ("layer-withdrawal", layered(ABOVE), layered(BELOW), 1.5 * 1.2167),
    ("buoyant-spreading", buoyant(0.1 * BELOW), buoyant(0.1 * ABOVE), 0.1),
    ("boundary-bound", solved(1e-4 * BELOW), solved(1e-4 * ABOVE), 1e-4),
    ("boundary-bound-wide", solved(1e-3 * BELOW), solved(1e-3 * ABOVE), 1e-3),
    ("boundary-bound-wide", solved(5e-3 * BELOW, 5e-3), solved(5e-3 * ABOVE, 5e-3), 5e-3),
    # 1e-3 deg of rounding are let pass; the other end meets its bank at less than 90 deg
    ("open-edge-blunt", cut_at(90.0009), cut_at(90.0011), 90.0),
]


@pytest.mark.parametrize(("code", "silent", "loud", "limit"), THRESHOLDS, ids=[row[0] for row in THRESHOLDS])
def test_threshold(code, silent, loud, limit):
    assert raised(code, silent) == []
    (warning,) = raised(code, loud)
    assert warning.code == code
    # ABOVE and BELOW lie 1e-9 from the limits; the speed-up grows 20 times as fast; h_c is given to 1 mm;
    # the angle is 1.1e-3 deg from its limit
    tolerances = {
        "open-edge-blunt": 1.3e-5,
        "surface-speed-up": 1e-7,
        "near-field-error": 1e-7,
        "layer-withdrawal": 5e-4,
    }
    tolerance = tolerances.get(code, 1e-8)
    assert warning.limit == pytest.approx(limit, rel=tolerance)
    assert warning.value == pytest.approx(limit, rel=tolerance, abs=2e-6)


AT_THE_LIMIT = [
    # just on a limit whose side is decided by <, not by rounding
    ("near-field-overlap", pair(8.0)),
    ("outfall-jet-speed", outfall(area=4.0)),
    ("outfall-jet-reach", jet(1.0)),
    ("core-near-wall", cored(CoreModel.LAMB_OSEEN, 6.0)),
    ("friction-length", long_layout(240.0)),
    ("salient-corner", corner(180.0)),
    ("tidal-reversal", tidal(50.0)),
    ("boundary-bound", solved(1e-4)),
    ("boundary-bound-wide", solved(1e-3)),
    ("open-edge-blunt", cut_at(90.0)),
]


@pytest.mark.parametrize(("code", "at"), AT_THE_LIMIT, ids=[row[0] for row in AT_THE_LIMIT])
def test_limit_itself_is_still_believed(code, at):
    assert raised(code, at) == []


def test_intake_on_the_limit_still_draws_from_the_bank():
    assert len(raised("bank-shear", bank_intake(4.0))) == 1


@pytest.mark.parametrize(("bound", "note", "caution"), [(1e-3, 1, 0), (1e-3 * ABOVE, 0, 1), (None, 0, 0)])
def test_bound_is_told_once(bound, note, caution):
    assert len(raised("boundary-bound", solved(bound))) == note
    assert len(raised("boundary-bound-wide", solved(bound))) == caution


def test_same_speed_all_along_an_open_edge_is_bounded_at_its_ends():
    assert raised("open-edge-blunt", cut_at(120.0, EdgeProfile.UNIFORM)) == []


def test_rigid_lid_gives_way_to_its_failure():
    assert raised("rigid-lid", flowing(critical(0.5) * ABOVE)) == []
    assert len(raised("rigid-lid", flowing(critical(0.5) * BELOW))) == 1


ALWAYS = [
    # code, a site where it is not raised, a site where it is, how often
    ("near-field", lined(), pair(30.0), 1),
    ("outfall-passive", pair(30.0), outfall(), 1),
    ("outfall-passive", pair(30.0), lined(LineSource), 1),
    ("shallow-wake", pier_in(0.5), wake(0.1), 1),
    ("channel-end-split", still_channel(0.0), still_channel(1.0), 1),
    ("channel-end-split", still_channel(1.0, 0.1 + 0j), still_channel(-1.0), 1),
    ("mixing-left-out", pair(30.0), outfall(), 1),
    ("turbulence-left-out", site(CURRENT), site(CURRENT, readings=Readings(has_dissipation=True)), 1),
    ("rotational-field", pair(30.0), cored(CoreModel.RANKINE, 50.0), 1),
    ("line-ends", pair(30.0), lined(), 1),
    ("ambient-zero", pair(30.0), pair(30.0, STILL), 1),
    ("ambient-zero", site(STILL), pair(30.0, STILL), 1),
    ("bed-friction-unknown", site(STILL, SiteData(bed_friction=0.003)), site(STILL), 1),
    ("port-area-unknown", outfall(area=1.0), outfall(), 1),
    ("wind-unknown", windy(0.0), site(STILL), 1),
    ("density-difference-unknown", site(STILL, SiteData(density_difference=0.0)), site(STILL), 1),
    ("depth-range-unknown", uneven(4.0), site(STILL), 1),
    ("intake-elevation-unknown", lined(), pair(30.0), 1),
    (
        "threshold-from-memory",
        site(STILL, readings=Readings(thresholds=chosen_thresholds(["silver-perch-egg"]))),
        site(STILL, readings=Readings(thresholds=chosen_thresholds(["salmonid-juvenile"]))),
        1,
    ),
    ("interface-unknown", layered(2.0), apart(9.0, SiteData(density_difference=1.0)), 1),
    ("tidal-period-unknown", salty(SiteData(tidal_period=44714.0)), salty(), 1),
    ("tidal-period-unknown", pier_in(0.5), salty(), 1),
    ("latitude-unknown", apart(300.0), apart(400.0), 1),  # 0.5 / (1.458e-4 * 10) = 343 m
    ("latitude-unknown", apart(400.0, SiteData(latitude=0.0)), apart(400.0), 1),
    ("water-temperature-assumed", site(STILL), site(STILL, readings=Readings(assumed_temperature=10.0)), 1),
]


@pytest.mark.parametrize(("code", "silent", "loud", "count"), ALWAYS, ids=[row[0] for row in ALWAYS])
def test_condition(code, silent, loud, count):
    assert raised(code, silent) == []
    assert [warning.code for warning in raised(code, loud)] == [code] * count


@pytest.mark.parametrize("loud", [row[2] for row in (*THRESHOLDS, *ALWAYS)])
def test_unit_stands_where_something_is_compared(loud):
    for warning in evaluate(loud):
        assert (warning.unit is not None) is (warning.value is not None or warning.limit is not None)


def test_every_warning_is_tested():
    assert {row[0] for row in (*THRESHOLDS, *ALWAYS)} == {kind.code for kind in CATALOGUE}


class TestWakes:
    @pytest.mark.parametrize(
        ("number", "kind"),
        [
            (0.2 * BELOW, "a vortex street"),
            (0.2, "an unsteady bubble"),
            (0.5 * BELOW, "an unsteady bubble"),
            (0.5 * ABOVE, "a steady bubble"),
        ],
    )
    def test_kind_of_shallow_wake(self, number, kind):
        (warning,) = raised("shallow-wake", wake(number))
        assert kind in warning.message
        assert warning.value == pytest.approx(number, rel=1e-12)

    # c_f, D, h and S of the shallow-wake number
    @pytest.mark.parametrize(
        ("friction", "diameter", "depth", "number"),
        [(0.005, 10, 2, 0.025), (0.005, 100, 2, 0.25), (0.01, 200, 5, 0.4)],
    )
    def test_table_of_shallow_wake_numbers(self, friction, diameter, depth, number):
        layout = Layout(depth, ambient=Ambient(1 + 0j), structures=(Pier("P", 0j, diameter / 2),))
        (warning,) = raised("shallow-wake", site(layout, SiteData(bed_friction=friction)))
        assert warning.value == pytest.approx(number, rel=1e-12)

    def test_shedding_frequency(self):
        # f = 0.2 U / D = 0.2 * 0.6 / 3 = 0.04 1/s, every 25 s
        (warning,) = raised("pier-lee", pier_in(0.6))
        assert "every 25 s (0.04 1/s)" in warning.message
        assert "at least 15 m" in warning.message

    def test_pier_in_still_water_without_elements(self):
        assert raised("pier-lee", pier_in(0.0)) == []

    @pytest.mark.parametrize(
        "element",
        [
            Sink("a", 20 + 0j, 2.0),
            Vortex("a", 20 + 0j, 0.5),
            Doublet("a", 20 + 0j, 10 + 0j),
            LineSource("a", 20 - 5j, 20 + 5j, 2.0),
        ],
        ids=lambda element: type(element).__name__,
    )
    def test_elements_move_water_past_a_pier_too(self, element):
        # 2 m3/s over 4 m: 0.5 m2/s / (2 pi 20 m) = 0.004 m/s
        layout = Layout(DEPTH, elements=(element,), structures=(Pier("P", 0j, 1.5),))
        (warning,) = raised("pier-lee", site(layout))
        assert warning.value == pytest.approx(0.5 / (40 * math.pi) * 3.0 / 1.8e-6, rel=1e-12)

    def test_ambient_gradient_moves_water_past_a_pier(self):
        ambient = Ambient(gradient=((0.0, 0.01), (0.0, 0.0)), at=-10j)
        layout = Layout(DEPTH, ambient=ambient, structures=(Pier("P", 0j, 1.5),))
        (warning,) = raised("pier-lee", site(layout))
        assert warning.value == pytest.approx(0.1 * 3.0 / 1.8e-6, rel=1e-12)


class TestSpeeds:
    # speed at which F = 0.3 and 0.5 in 1, 2, 5 m of water [m/s]
    @pytest.mark.parametrize(
        ("depth", "strained", "failed"), [(1, 0.940, 1.566), (2, 1.329, 2.215), (5, 2.101, 3.502)]
    )
    def test_table_of_critical_speeds(self, depth, strained, failed):
        # printed for g = 9.81 m/s2: 2e-4 more than with the standard acceleration
        assert raised("rigid-lid", flowing(strained * 0.999, depth)) == []
        assert len(raised("rigid-lid", flowing(strained * 1.001, depth))) == 1
        assert raised("rigid-lid-failed", flowing(failed * 0.999, depth)) == []
        assert len(raised("rigid-lid-failed", flowing(failed * 1.001, depth))) == 1

    def test_speed_in_the_answer(self):
        (warning,) = raised("rigid-lid-failed", site(STILL, readings=Readings(max_speed=5.0)))
        assert warning.message.startswith("The largest speed in the answer, 5 m/s")

    def test_channel_speeds_up_behind_an_outfall(self):
        # 20 m by 4 m: 80 m3/s more is 1 m/s more
        shore, outfall_ = Channel(0j, 1 + 0j, 20.0), Source("a", 10j, 80.0)
        at = site(Layout(DEPTH, ambient=Ambient(-1.0 + 0j), shore=shore, elements=(outfall_,)))
        assert at.far_speeds == {"upstream": 1.0, "downstream": 2.0}
        (warning,) = raised("rigid-lid", at)
        assert "downstream end" in warning.message

    def test_still_channel_shares_the_net_exchange(self):
        at = site(Layout(DEPTH, shore=Channel(0j, 1 + 0j, 20.0), elements=(Sink("a", 10j, 80.0),)))
        assert at.far_speeds == {"upstream": 0.5, "downstream": 0.5}

    def test_surveyed_water_moves_through_its_open_edges(self):
        # 60 m3/s through 20 m by 4 m; 100 m on, where the water is 30 m wide, 80 m3/s with the outfall's 20
        outer = (0j, 100 - 5j, 100 + 25j, 20j)
        square = EdgeProfile.EQUIPOTENTIAL
        edges = (OpenEdge("upper", 3, 1, 60.0, square), OpenEdge("lower", 1, 1, None, square))
        shore = Surveyed(outer, (), edges)
        at = site(Layout(DEPTH, shore=shore, elements=(Source("a", 50 + 10j, 20.0), Sink("b", 9j + 9, 1e-9))))
        assert at.far_speeds == pytest.approx({"upper": 0.75, "lower": 80 / 120}, rel=1e-9)
        assert raised("ambient-zero", at) == []
        still = replace(shore, edges=(replace(edges[0], discharge=0.0), replace(edges[1], discharge=0.0)))
        assert (
            len(raised("ambient-zero", site(Layout(DEPTH, shore=still, elements=(Sink("b", 9j, 1.0),))))) == 1
        )
        assert site(Layout(DEPTH, shore=replace(shore, edges=()))).current == 0.0

    def test_dead_end_is_fed_through_its_open_end(self):
        at = site(Layout(DEPTH, shore=DeadEnd(0j, 1 + 0j, 20.0), elements=(Sink("a", 5 + 10j, 80.0),)))
        assert at.far_speeds == {"open-end": 1.0}


class TestLayers:
    # h_c at g' = 0.0146682 m/s2, fresh water of 10 over 20 degC
    @pytest.mark.parametrize(("discharge", "critical_height"), [(0.5, 1.217), (2.0, 2.118)])
    def test_table_of_critical_heights(self, discharge, critical_height):
        assert critical_distance(Sink("a", 0j, discharge), 0.0146682) == pytest.approx(
            critical_height, abs=6e-4
        )

    def test_line_draws_the_other_layer_where_its_number_is_two_and_a_third(self):
        height = critical_distance(LineSink("bay", 0j, 10 + 0j, 3.0), 0.02)
        assert 0.3**2 / (0.02 * height**3) == pytest.approx(2.3, rel=1e-12)

    def test_without_elevations_the_depth_decides(self):
        # 1.5 * 2.118 = 3.18 m: in 4 m an interface may be farther, in 3 m it cannot
        data = SiteData(density_difference=density_for(0.0146682))
        elements = (Sink("a", 0j, 2.0),)
        assert raised("layer-withdrawal", site(Layout(4.0, elements=elements), data)) == []
        (warning,) = raised("layer-withdrawal", site(Layout(3.0, elements=elements), data))
        assert "at most 3 m" in warning.message

    def test_elevation_alone_bounds_the_distance(self):
        data = SiteData(density_difference=density_for(0.0146682), elevations={"a": 2.0})
        (warning,) = raised("layer-withdrawal", site(Layout(4.0, elements=(Sink("a", 0j, 2.0),)), data))
        assert warning.value == 2.0

    def test_no_difference_no_layers(self):
        data = SiteData(density_difference=0.0)
        assert raised("layer-withdrawal", site(Layout(3.0, elements=(Sink("a", 0j, 2.0),)), data)) == []

    def test_still_water_lets_any_difference_spread(self):
        (warning,) = raised("buoyant-spreading", buoyant(1e-6, current=0.0))
        assert warning.value is None
        assert "rises" in warning.message

    def test_port_gives_the_densimetric_froude_number(self):
        # U0 = 2 / (pi / 4) m/s, D = 1 m, g' = 0.25 * 4 / 4
        at = buoyant(4.0)
        (warning,) = raised(
            "buoyant-spreading", replace(at, data=replace(at.data, port_areas={"works": math.pi / 4}))
        )
        assert f"Froude number {2 / (math.pi / 4) / math.sqrt(0.25):.2g}" in warning.message


class TestEarth:
    def test_rossby_number(self):
        # U = 0.3 m/s, L = 500 m, f = 1.03126e-4 1/s: Ro = 5.8
        layout = Layout(
            DEPTH, ambient=Ambient(0.3 + 0j), elements=(Sink("a", 0j, 1.0), Sink("b", 500 + 0j, 1.0))
        )
        (warning,) = raised("earth-rotation", site(layout, SiteData(latitude=45.0)))
        assert warning.value == pytest.approx(5.8, abs=0.05)

    def test_southern_latitudes_count_alike(self):
        at = on_the_earth(5.0)
        assert raised("earth-rotation", at) == raised(
            "earth-rotation", replace(at, data=SiteData(latitude=-45.0))
        )

    def test_equator_and_still_water_have_no_rossby_number(self):
        assert raised("earth-rotation-strong", apart(1e6, SiteData(latitude=0.0))) == []
        elements = (Sink("a", 0j, 1.0), Sink("b", 1e6 + 0j, 1.0))
        assert (
            raised("earth-rotation-strong", site(Layout(DEPTH, elements=elements), SiteData(latitude=45)))
            == []
        )


class TestOpenings:
    @pytest.mark.parametrize(("elevation", "depths"), [(0.0, 2.0), (1.0, 2.0), (0.5, 1.0)])
    def test_reach_of_one_and_two_depths_leaves_a_hundredth(self, elevation, depths):
        # table of ratios: 1.24 % at these distances
        assert depth_mean_error(depths * DEPTH, elevation * DEPTH, DEPTH) == pytest.approx(0.01243, abs=6e-6)
        assert near_field_reach(elevation * DEPTH, DEPTH, 0.01243492) == pytest.approx(
            depths * DEPTH, rel=1e-6
        )

    def test_known_elevation_takes_the_place_of_the_guess(self):
        at = known_opening(0.5)
        assert raised("near-field-result", at) == []
        (warning,) = raised("near-field", at)
        assert DEPTH < warning.value < 1.1 * DEPTH

    def test_resolved_opening_is_not_warned_of(self):
        at = known_opening(0.5)
        resolved = replace(at.readings, resolves_openings=True)
        assert raised("near-field-error", replace(at, readings=resolved)) == []

    def test_something_within_the_reach_of_a_known_opening(self):
        data = SiteData(elevations={"a": DEPTH / 2})
        assert raised("near-field-overlap", replace(pair(1.1 * DEPTH), data=data)) == []
        (warning,) = raised("near-field-overlap", replace(pair(DEPTH), data=data))
        assert warning.message.endswith("in its near field.")


class TestSlots:
    def test_diffuser_is_a_slot_unless_its_ports_are_round(self):
        # slot: m = U0 Q / L = 2 * 4 / 10, l_m = m / 0.25 = 3.2 m; round: sqrt(4 * 2) / 0.5 = 5.66 m
        diffuser = LineSource("works", 0j, 10 + 0j, 4.0)
        layout = replace(CURRENT, elements=(diffuser, Sink("a", 20j, 1.0)))
        slot, round_ = (
            site(layout, SiteData(port_areas={"works": 2.0}, port_shapes=shapes))
            for shapes in ({}, {"works": PortShape.ROUND})
        )
        assert raised("outfall-jet-reach", slot) == []
        (warning,) = raised("outfall-jet-reach", round_)
        assert warning.limit == pytest.approx(5 * math.sqrt(32), rel=1e-12)

    def test_wind_says_where_it_drives_the_surface(self):
        (warning,) = raised("wind-drift", site(CURRENT, SiteData(wind_speed=9.0, wind_direction=30.0)))
        assert "towards 30 deg" in warning.message


class TestOutfalls:
    def test_jet_in_still_water_reaches_everything(self):
        (warning,) = raised("outfall-jet-reach", outfall(area=1.0, distance=5000.0, current=0.0))
        assert warning.limit is None
        (speed,) = raised("outfall-jet-speed", outfall(area=1.0, current=0.0))
        assert speed.value is None

    def test_point_of_the_answer_counts(self):
        at = replace(outfall(area=1.0, distance=500.0), readings=Readings(np.array([0 + 3j])))
        (warning,) = raised("outfall-jet-reach", at)
        assert warning.message.startswith("a point of the answer is 3 m")

    def test_lone_outfall_reaches_nothing(self):
        layout = replace(CURRENT, elements=(Source("works", 0j, 2.0),))
        assert raised("outfall-jet-reach", site(layout, SiteData(port_areas={"works": 1.0}))) == []


class TestBanks:
    def test_wide_strip_reaches_the_bank(self):
        # Q / (2 pi h U) = 40 pi / (2 pi 4 0.5) = 10 m, beyond the depth
        assert len(raised("bank-shear", bank_intake(10.0 * BELOW, 40 * math.pi))) == 1
        assert raised("bank-shear", bank_intake(10.0 * ABOVE, 40 * math.pi)) == []

    def test_without_current_every_strip_reaches_it(self):
        (warning,) = raised("bank-shear", bank_intake(1000.0, current=0.0))
        assert warning.limit is None

    def test_no_bank_no_warning(self):
        assert raised("bank-shear", pair(30.0)) == []

    def test_core_near_a_pier(self):
        vortex = Vortex("g", 7 + 0j, 1.0, Core(CoreModel.LAMB_OSEEN, 2.0))
        layout = Layout(DEPTH, elements=(vortex,), structures=(Pier("P", 0j, 1.5),))
        (warning,) = raised("core-near-wall", site(layout))
        assert warning.value == 5.5


class TestIdeal:
    def test_reach_of_line_ends_is_where_both_speeds_are_equal(self):
        (warning,) = raised("line-ends", lined())
        x, length = warning.value, 10.0
        along, across = math.log((length - x) / x) / (2 * math.pi), 0.5
        assert along == pytest.approx(across, rel=1e-12)
        assert pytest.approx(0.0414, abs=5e-5) == END_SHARE

    def test_vorticity_of_a_core(self):
        (warning,) = raised("rotational-field", cored(CoreModel.RANKINE, 50.0))
        assert warning.value == pytest.approx(1.0 / (4 * math.pi))
