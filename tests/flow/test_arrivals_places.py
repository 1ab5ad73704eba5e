"""Releases at points and what becomes of them: every outcome, and every way of having none."""

from math import inf, pi

import numpy as np
import pytest

from forebay.flow.arrivals.analysis import arrive
from forebay.flow.arrivals.findings import ArrivalRules
from forebay.flow.arrivals.release import (
    AlongLine,
    AtPoint,
    FromOutfall,
    OverDisc,
    OverPolygon,
    Release,
    ReleaseError,
)
from forebay.flow.arrivals.result import Outcome, ReleaseStatus, Tail
from forebay.flow.arrivals.transits import Transect
from forebay.flow.layout import (
    Ambient,
    Channel,
    Core,
    CoreModel,
    Layout,
    LineSink,
    LineSource,
    Pier,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.search import search_model

BANK = StraightBank(0j, 1 + 0j)
SINK = Sink("intake", 0j, 1.0)


def layout_of(*elements, velocity=0.5 + 0j, **parts):
    return Layout(depth=1.0, ambient=Ambient(velocity), elements=elements, **parts)


def released(layout, *places, names=None, duration=0.0, **rules):
    sinks = tuple(e.name for e in layout.elements if isinstance(e, Sink | LineSink))
    model = compile_layout(layout)
    releases = tuple(Release(f"r{k}", place, duration) for k, place in enumerate(places))
    asked = ArrivalRules(sinks if names is None else names, **rules)
    return arrive(model, search_model(model), releases, asked)


def shares(answer):
    return {(row.outcome, row.to): row.share for row in answer.outcomes}


def test_on_the_stagnation_point_and_on_the_streamline_into_it():
    # b = q / (2 pi U): the wake of the intake stands at b, and the axis beyond it runs back to it
    b = 1.0 / (2.0 * pi * 0.5)
    bank = layout_of(Sink("intake", 2j, 20.0), shore=BANK)
    stagnation = search_model(compile_layout(bank)).points
    at_rest = max(point.at.real for point in stagnation)
    answers = (*released(layout_of(SINK), AtPoint(b + 0j)), *released(bank, AtPoint(at_rest + 0j)))
    for answer in answers:
        assert shares(answer) == {(Outcome.STAGNATES, ""): 1.0}
        assert answer.status is ReleaseStatus.ON_DIVIDING_STREAMLINE
        assert answer.arrivals == ()
        assert answer.lost_share == 1.0


def test_a_hair_to_either_side_of_a_divide():
    # a source ahead: its water and the stream's part on the axis at its stagnation point
    layout = layout_of(Source("outfall", 0j, 1.0))
    on, above, below = released(layout, AtPoint(-3 + 0j), AtPoint(-3 + 1e-6j), AtPoint(-3 - 1e-6j))
    assert on.status is ReleaseStatus.ON_DIVIDING_STREAMLINE
    for answer in (above, below):
        assert shares(answer) == {(Outcome.PASSES, "ambient"): 1.0}
        assert answer.divide_distance == pytest.approx(1e-6, rel=1e-3)  # the flow is straight there to 1e-4


def test_round_a_vortex_and_in_its_core():
    layout = layout_of(Vortex("gyre", 5 + 5j, 3.0, Core(CoreModel.RANKINE, 0.2)), SINK, velocity=0.1 + 0j)
    for answer in released(layout, AtPoint(5 + 5.5j), AtPoint(5.1 + 5j)):
        assert shares(answer) == {(Outcome.RECIRCULATES, ""): 1.0}
        assert answer.arrivals == ()


def test_at_an_intake_and_at_other_singularities():
    layout = layout_of(SINK, Source("outfall", 5 + 0j, 0.5), Vortex("gyre", 5j, 1.0))
    sink, source, vortex = released(layout, AtPoint(0j), AtPoint(5 + 0j), AtPoint(5j))
    assert sink.arrivals[0].first_time == sink.arrivals[0].end_time == 0.0
    for answer in (source, vortex):
        assert answer.status is ReleaseStatus.ON_SINGULARITY
        assert answer.outcomes == answer.arrivals == ()
        assert np.isnan(answer.lost_share)


def test_on_land():
    layout = layout_of(Sink("intake", 2j, 1.0), shore=BANK, structures=(Pier("P", 9 + 9j, 2.0),))
    places = (AtPoint(-1j), AtPoint(9 + 9.5j), AlongLine((-3 - 1j, 3 - 2j)), OverDisc(-5j, 2.0))
    for answer in released(layout, *places):
        assert answer.status is ReleaseStatus.ON_LAND
        assert np.isnan(answer.lost_share)
        assert answer.arrivals == answer.outcomes == ()


def test_the_horizon_parts_what_comes_later():
    # a step at t, let go over D: by t + D / 4 a quarter has come
    layout = layout_of(SINK)
    time = released(layout, AtPoint(-10 + 0j))[0].arrivals[0].first_time
    answer = released(layout, AtPoint(-10 + 0j), duration=40.0, horizon=time + 10.0)[0]
    assert answer.arrivals[0].share == pytest.approx(0.25, abs=1e-12)
    assert answer.arrivals[0].tail is Tail.CUT_AT_HORIZON
    assert shares(answer)[Outcome.BEYOND_HORIZON, "intake"] == pytest.approx(0.75, abs=1e-12)
    assert answer.lost_share == pytest.approx(0.75, abs=1e-12)
    none = released(layout, AtPoint(-10 + 0j), horizon=0.5 * time)[0]
    assert none.arrivals == ()
    assert shares(none) == {(Outcome.BEYOND_HORIZON, "intake"): 1.0}


def test_an_intake_not_asked_for_takes_what_passes():
    layout = layout_of(SINK, Sink("other", 30 + 0j, 1.0))
    answer = released(layout, AtPoint(-5 + 0j), names=("other",))[0]
    assert shares(answer) == {(Outcome.PASSES, "intake"): 1.0}
    assert answer.arrivals == ()


def test_a_screen_that_the_current_crosses_takes_a_part():
    # far from its ends the normal speed is U + s / 2 before the line and U - s / 2 behind: s / (U + s / 2)
    flux = 0.1
    screen = LineSink("screen", -50j, 50j, 100.0 * flux)
    answer = released(layout_of(screen), AtPoint(-1 + 0j))[0]
    expected = flux / (0.5 + 0.5 * flux)
    assert answer.arrivals[0].share == pytest.approx(expected, rel=1e-3)  # ends at 50 m, seen from 1 m
    assert shares(answer)[Outcome.PASSES, "ambient"] == pytest.approx(1.0 - expected, rel=1e-3)


def test_a_line_far_upstream_loses_what_the_capture_width_leaves():
    # edge y = b angle, so 2 y = (q / U) / (1 + b / L) at L = 1000 m but for (y / L)^2 / 3
    answer = released(layout_of(SINK), AlongLine((-1000 - 3j, -1000 + 3j)))[0]
    width = 2.0 / (1.0 + 1.0 / (2.0 * pi * 0.5) / 1000.0)
    assert answer.arrivals[0].share == pytest.approx(width / 6.0, rel=1e-6)
    assert answer.arrivals[0].tail is Tail.UNBOUNDED
    assert answer.share_error < 1e-3


def test_a_line_on_either_side_of_a_bank_counts_only_where_wet():
    answer = released(layout_of(Sink("intake", 2j, 1.0), shore=BANK), AlongLine((-5 - 3j, -5 + 1j)))[0]
    assert answer.wet_share == pytest.approx(0.25, abs=1e-9)


def test_water_of_a_diffuser_between_two_intakes():
    # by symmetry each intake of a still pond takes half of what a line between them gives
    layout = layout_of(
        Sink("left", -10 + 0j, 1.0),
        Sink("right", 10 + 0j, 1.0),
        LineSource("diffuser", -2j, 2j, 2.0),
        velocity=0j,
    )
    answer = released(layout, FromOutfall("diffuser"))[0]
    taken = {arrival.at: arrival for arrival in answer.arrivals}
    assert taken["left"].share == pytest.approx(0.5, abs=1e-6)  # sides are met 2e-9 off the line
    assert taken["left"].first_time == pytest.approx(taken["right"].first_time, rel=1e-6)


@pytest.mark.parametrize("place", [AlongLine((-8 - 2j, -8 + 3j)), OverDisc(-8 + 1j, 1.5), AtPoint(-8 + 0.5j)])
def test_curve_rises_to_the_captured_share(place):
    answer = released(layout_of(SINK, shore=Channel(-4j, 1 + 0j, 12.0)), place, duration=3.0)[0]
    assert np.all(np.diff(answer.curve.share) >= 0.0)
    assert np.all(np.diff(answer.curve.time) >= 0.0)
    assert answer.curve.share[0] == 0.0
    assert answer.curve.share[-1] == pytest.approx(sum(a.share for a in answer.arrivals), abs=1e-12)
    assert answer.curve.share[-1] + answer.lost_share == pytest.approx(1.0, abs=1e-12)
    assert sum(row.share for row in answer.outcomes) == pytest.approx(1.0, abs=1e-12)


def test_releases_far_beyond_the_layout_still_know_its_divides():
    # the strip of this intake is 0.45 / 0.35 m wide; 120 m upstream, 0.2 m off its axis
    layout = layout_of(Sink("intake", 120 + 6j, 0.45), shore=BANK, velocity=0.35 + 0j)
    point, disc = released(layout, AtPoint(6.2j), OverDisc(40 + 8j, 4.0))
    # the bank's image turns the strip by a few percent of its distance from the axis
    assert point.divide_distance == pytest.approx(0.5 * 0.45 / 0.35 - 0.2, abs=0.15)
    assert disc.status is ReleaseStatus.OK  # no divide had to be searched for


def test_a_transect_far_beyond_the_layout_is_crossed():
    gate = Transect("gate", (3000 - 5j, 3000 + 5j))
    answer = released(layout_of(SINK), AtPoint(-3 + 3j), transects=(gate,))[0]
    # the wake of the intake slows the water by q / (2 pi U) ln(...) / U, a few seconds of 6000
    assert answer.transits[0].first_time == pytest.approx(3003.0 / 0.5, rel=2e-3)


def test_no_intake_at_all():
    answer = released(layout_of(), AtPoint(1 + 1j))[0]
    assert shares(answer) == {(Outcome.PASSES, "ambient"): 1.0}
    assert answer.divide_distance == inf
    assert answer.time_error == 0.0


@pytest.mark.parametrize(
    "points",
    [
        (0j, 1 + 0j),
        (0j, 1 + 1j, 2 + 2j),
        (0j, 4 + 0j, 4 + 4j, 2 - 1j),
        (0j, 1 + 1j, 0 + 1j, 1 + 0j),
        (0j, 4 + 0j, 2 + 0j, 2 + 3j),
    ],
    ids=["two-points", "no-area", "crossing", "bow-tie", "spike"],
)
def test_polygons_that_cannot_be(points):
    with pytest.raises(ReleaseError):
        OverPolygon(points)


def test_a_line_without_length():
    with pytest.raises(ReleaseError):
        AlongLine((1 + 1j, 1 + 1j))


def test_polygons_are_turned_anticlockwise():
    assert OverPolygon((0j, 1j, 1 + 1j, 1 + 0j)).area == pytest.approx(1.0)
