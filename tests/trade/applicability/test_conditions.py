"""Warnings with conditions instead of thresholds, and what each of them says."""

import math
from dataclasses import replace

import numpy as np
import pytest

from forebay.flow.layout import (
    Ambient,
    Channel,
    Core,
    CoreModel,
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
    Surveyed,
    Vortex,
)
from forebay.flow.point_intake.reach import depth_mean_error, near_field_reach
from forebay.trade.applicability.ideal import END_SHARE
from forebay.trade.applicability.review import RULES, evaluate
from forebay.trade.applicability.site import PortShape, Readings, SiteData
from forebay.trade.applicability.stratification import critical_distance
from forebay.trade.exposure import chosen_thresholds
from support.thresholds import has_threshold
from support.warned_sites import (
    CURRENT,
    DEPTH,
    STILL,
    apart,
    bank_intake,
    buoyant,
    cored,
    cut_at,
    density_for,
    flowing,
    known_opening,
    layered,
    lined,
    on_the_earth,
    outfall,
    pair,
    pier_in,
    salty,
    site,
    solved,
    uneven,
    wake,
    windy,
)

RULE = {kind.code: rule for kind, rule in RULES}


def raised(code, at):
    return list(RULE[code](at))


def test_bound_that_is_not_known_is_not_told():
    assert raised("boundary-bound", solved(None)) == raised("boundary-bound-wide", solved(None)) == []


def test_same_speed_all_along_an_open_edge_is_bounded_at_its_ends():
    assert raised("open-edge-blunt", cut_at(120.0, EdgeProfile.UNIFORM)) == []


ALWAYS = [
    # code, a site where it is not raised, a site where it is, how often
    ("near-field", lined(), pair(30.0), 1),
    ("outfall-passive", pair(30.0), outfall(), 1),
    ("outfall-passive", pair(30.0), lined(LineSource), 1),
    ("shallow-wake", pier_in(0.5), wake(0.1), 1),
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


@pytest.mark.parametrize("loud", [row[2] for row in ALWAYS])
def test_unit_stands_where_something_is_compared(loud):
    for warning in evaluate(loud):
        assert (warning.unit is not None) is (warning.value is not None or warning.limit is not None)


def test_every_warning_without_a_threshold_is_tested():
    without = {kind.code for kind, rule in RULES if not has_threshold(kind, rule)}
    assert without <= {row[0] for row in ALWAYS}


class TestWakes:
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
        north, south = (raised("earth-rotation", on_the_earth(5.0, latitude)) for latitude in (45.0, -45.0))
        assert north == south
        assert len(north) == 1

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
