"""Checking screens: which flows are read, which limits apply, and what is refused."""

from dataclasses import replace

import numpy as np
import pytest

from forebay.flow.contour import integrate_contour
from forebay.flow.errors import UnknownNameError
from forebay.flow.layout import Ambient, Basin, Layout, LineSink, Outline, Pier, Sink, Source, StraightBank
from forebay.flow.model import compile_layout
from forebay.flow.paths import Contour
from forebay.trade.criteria import Quantity
from forebay.trade.criteria_catalogue import BY_ID
from forebay.trade.screens.criteria_choice import (
    CriterionFromMemoryError,
    UnknownCriterionError,
    listed_limit,
)
from forebay.trade.screens.notices import screen_notices
from forebay.trade.screens.rules import VerdictStatus, limit_of, own_limits
from forebay.trade.screens.screen import Cleaning, FaceMisplacedError, Pump, Screen, ScreenGeometryError
from forebay.trade.screens.screen_flow import Basis
from forebay.workflows.screen import check_screens

BANK = StraightBank(0j, 1 + 0j)
LAYOUT = Layout(
    depth=4.0,
    ambient=Ambient(0.3 + 0j),
    shore=BANK,
    elements=(
        LineSink("bay", 20 + 0j, 32 + 0j, 2.0),
        LineSink("weir", 60 + 0j, 66 + 0j, 1.0),
        Sink("well", 10 + 5j, 1.0),
    ),
)
BAY = Screen(name="bay", height=2.0, open_fraction=0.5)


def flow_of(layout, screen, *limits, **extra):
    (check,) = check_screens(layout, (screen,), limits, **extra)
    return check.flow, check.verdicts


def test_screens_in_the_order_asked_for():
    checks = check_screens(LAYOUT, (replace(BAY, name="weir"), BAY), ())
    assert [check.flow.screen.name for check in checks] == ["weir", "bay"]
    assert [check.flow.discharge for check in checks] == pytest.approx([1.0, 2.0], rel=1e-12)


def test_only_the_own_pump_is_off():
    flow, _ = flow_of(LAYOUT, BAY)
    (side,) = flow.sides
    alone = replace(LAYOUT, elements=LAYOUT.elements[1:])
    expected, _ = flow_of(
        alone, Screen(name="ghost", face=(20 + 0j, 32 + 0j), discharge=1e-12, height=2.0, open_fraction=0.5)
    )
    parts = np.linspace(0.1, 0.9, 9)
    assert side.off.along(parts) == pytest.approx(expected.sides[0].on.along(parts), abs=1e-10)


def test_pump_off_in_a_basin_has_no_flow():
    basin = Layout(
        depth=2.0,
        shore=Basin(0j, 1 + 0j, 40.0, 20.0),
        elements=(LineSink("bay", 10 + 0j, 20 + 0j, 1.0), Source("inlet", 35 + 10j, 1.0)),
    )
    limits = own_limits("own", {Quantity.MIN_SWEEPING: 0.1})
    flow, (verdict,) = flow_of(basin, BAY, *limits)
    assert flow.sides[0].off is None
    assert "no steady flow" in flow.without_pump
    assert verdict.status is VerdictStatus.NOT_GIVEN
    assert verdict.passed is None
    assert flow.exposure(Pump.OFF) is None


@pytest.mark.parametrize(
    ("criterion", "cleaning", "status"),
    [
        ("nmfs-sw-pump-active-approach", Cleaning.ACTIVE, VerdictStatus.JUDGED),
        ("nmfs-sw-pump-active-approach", Cleaning.PASSIVE, VerdictStatus.NOT_APPLICABLE),
        ("nmfs-sw-pump-passive-approach", Cleaning.ACTIVE, VerdictStatus.NOT_APPLICABLE),
        ("nmfs-sw-pump-passive-approach", Cleaning.PASSIVE, VerdictStatus.JUDGED),
        ("adfg-approach", Cleaning.PASSIVE, VerdictStatus.JUDGED),
    ],
)
def test_limits_apply_to_the_way_of_cleaning(criterion, cleaning, status):
    _, (verdict,) = flow_of(LAYOUT, replace(BAY, cleaning=cleaning), limit_of(BY_ID[criterion]))
    assert verdict.status is status
    assert (verdict.passed is None) == (status is not VerdictStatus.JUDGED)


@pytest.mark.parametrize("criterion", BY_ID.values(), ids=BY_ID)
def test_every_record_can_be_judged(criterion):
    screen = replace(
        BAY,
        cleaning=Cleaning(criterion.cleaned) if criterion.cleaned != "any" else Cleaning.ACTIVE,
        opening=0.002,
        clearance=0.4,
    )
    flow, (verdict,) = flow_of(LAYOUT, screen, limit_of(criterion), passing=100.0)
    assert verdict.status is VerdictStatus.JUDGED
    assert verdict.limit.value == criterion.limit_si
    inside = (
        verdict.value <= verdict.limit.value
        if verdict.limit.is_upper
        else verdict.value >= verdict.limit.value
    )
    assert verdict.passed is inside
    assert flow.discharge == pytest.approx(2.0)


@pytest.mark.parametrize("quantity", [Quantity.MAX_OPENING, Quantity.MIN_CLEARANCE, Quantity.MAX_FLOW_SHARE])
def test_what_is_not_given_is_not_judged(quantity):
    _, (verdict,) = flow_of(LAYOUT, BAY, *own_limits("own", {quantity: 0.1}))
    assert verdict.status is VerdictStatus.NOT_GIVEN
    assert verdict.passed is None
    assert "not given" in verdict.reason


def test_through_slot_limits_never_meet_approach():
    # 0.5 ft/s between the wires: met by twice the approach velocity, not by the approach velocity itself
    limits = own_limits("own", {Quantity.MAX_THROUGH_SLOT: 0.1, Quantity.MAX_APPROACH: 0.1})
    flow, (slot, approach) = flow_of(LAYOUT, BAY, *limits)
    assert slot.value == pytest.approx(2.0 * approach.value)
    assert slot.value == pytest.approx(2.0 / (12.0 * 2.0 * 0.5))
    assert flow.max_approach == pytest.approx(2.0 / (12.0 * 2.0))


def test_limit_that_is_met_exactly_is_met():
    approach = 2.0 / (12.0 * 2.0)
    _, (verdict,) = flow_of(LAYOUT, BAY, *own_limits("own", {Quantity.MAX_APPROACH: approach}))
    assert verdict.passed is True
    assert verdict.share_meeting == 1.0
    _, (verdict,) = flow_of(LAYOUT, BAY, *own_limits("own", {Quantity.MAX_APPROACH: approach * (1 - 1e-9)}))
    assert verdict.passed is False
    assert verdict.share_meeting == 0.0


def test_uniformity_is_of_the_limit_that_goes_with_it():
    approach = 2.0 / (12.0 * 2.0)
    both = own_limits("own", {Quantity.MAX_APPROACH: 0.8 * approach, Quantity.MAX_NONUNIFORMITY: 0.1})
    _, (_, verdict) = flow_of(LAYOUT, BAY, *both)
    assert verdict.value == pytest.approx(0.25)
    assert verdict.passed is False
    _, (verdict,) = flow_of(LAYOUT, BAY, *own_limits("own", {Quantity.MAX_NONUNIFORMITY: 0.1}))
    assert verdict.value == pytest.approx(0.0, abs=1e-12)  # an even line on a straight bank
    assert verdict.passed is True


def test_bypass_splits_the_way():
    # the water sweeps to the right: a bypass at the right end is the usual one, at the left end unreachable
    usual, _ = flow_of(LAYOUT, BAY)
    right, _ = flow_of(LAYOUT, replace(BAY, bypass=12.0))
    left, _ = flow_of(LAYOUT, replace(BAY, bypass=0.0))
    assert right.exposure(Pump.ON).time == pytest.approx(usual.exposure(Pump.ON).time, rel=1e-9)
    assert left.exposure(Pump.ON).time == np.inf
    assert left.min_sweeping(Pump.ON) < 0.0


def test_from_memory_only_where_insisted():
    assert listed_limit("nmfs-west-exposure", 3, allow_from_memory=True).value == 60.0
    with pytest.raises(CriterionFromMemoryError) as caught:
        listed_limit("nmfs-west-exposure", 3, allow_from_memory=False)
    assert caught.value.path == ("criteria", 3)
    with pytest.raises(UnknownCriterionError) as unknown:
        listed_limit("nobody", 1, allow_from_memory=True)
    assert unknown.value.path == ("criteria", 1)


def test_what_is_said_with_the_numbers():
    memory = limit_of(BY_ID["nmfs-west-exposure"], 4)
    tall = replace(BAY, height=5.0)
    crossed = Layout(4.0, ambient=Ambient(0.3 + 0.2j), elements=(LineSink("free", 20 + 0j, 32 + 0j, 2.0),))
    for layout, screen, limits, codes in (
        (LAYOUT, BAY, (), {"regulator-decides", "screen-flux-taken-as-even"}),
        (LAYOUT, BAY, (memory,), {"regulator-decides", "screen-flux-taken-as-even", "criterion-from-memory"}),
        (LAYOUT, tall, (), {"regulator-decides", "screen-flux-taken-as-even", "screen-higher-than-water"}),
        (
            crossed,
            replace(BAY, name="free"),
            (),
            {"regulator-decides", "screen-flux-taken-as-even", "water-leaves-screen"},
        ),
    ):
        flow, _ = flow_of(layout, screen, *limits)
        notices = screen_notices((flow,), limits, layout.depth)
        assert {notice.code for notice in notices} == codes
        assert not any(notice.in_layout for notice in notices)


@pytest.mark.parametrize(
    ("screen", "error", "path"),
    [
        (replace(BAY, name="well"), UnknownNameError, ("screens", 0, "element")),
        (replace(BAY, name="nobody"), UnknownNameError, ("screens", 0, "element")),
        (replace(BAY, end_reach=6.0), ScreenGeometryError, ("screens", 0, "end_reach")),
        (replace(BAY, bypass=12.1), ScreenGeometryError, ("screens", 0, "bypass")),
        (
            replace(BAY, name="f", face=(0 + 1j, 5 + 1j), discharge=1.0),
            FaceMisplacedError,
            ("screens", 0, "face"),
        ),
        (
            replace(BAY, name="f", face=(0j, 0j), discharge=1.0),
            FaceMisplacedError,
            ("screens", 0, "face"),
        ),
    ],
)
def test_what_cannot_be_is_refused_with_its_place(screen, error, path):
    with pytest.raises(error) as caught:
        check_screens(LAYOUT, (screen,), ())
    assert caught.value.path == path


def test_reading_inside_a_pier_is_refused():
    layout = replace(LAYOUT, structures=(Pier("pile", 26 + 1.2j, 1.0),))
    with pytest.raises(ScreenGeometryError) as caught:
        check_screens(layout, (replace(BAY, sample_offset=0.5),), ())
    assert caught.value.path == ("screens", 0, "sample_offset")


QUAY = Outline("quay", (10 + 0j, 30 + 0j, 30 + 4j, 20 + 4j, 10 + 4j))
"""A quay on the bank; its long side has a vertex in the middle, so that it is two edges."""

AT_QUAY = Layout(
    2.0, ambient=Ambient(0.5 + 0j), shore=BANK, elements=(Sink("well", 60 + 20j, 0.1),), structures=(QUAY,)
)


def face(start, end, **changes):
    return Screen(name="face", face=(start, end), discharge=1.2, height=1.5, open_fraction=0.5, **changes)


def test_face_on_the_wall_of_an_outline_draws():
    flow, _ = flow_of(AT_QUAY, face(12 + 4j, 18 + 4j))
    assert flow.basis is Basis.MODELLED
    assert flow.on == "quay"
    (side,) = flow.sides
    assert side.name == "left"
    # what crosses the wall is what the line draws, to rounding
    assert flow.max_approach == pytest.approx(1.2 / (6.0 * 1.5), rel=1e-12)
    assert flow.min_approach == pytest.approx(1.2 / (6.0 * 1.5), rel=1e-12)
    # in front of it, the flow itself: continuity across a strip half a metre deep, by contour integration
    drawing = replace(AT_QUAY, elements=(*AT_QUAY.elements, LineSink("face", 12 + 4j, 18 + 4j, 1.2)))
    (read,) = check_screens(AT_QUAY, (face(12 + 4j, 18 + 4j, sample_offset=0.5),), ())
    gate = Contour.polyline("gate", np.array([12 + 4.5j, 18 + 4.5j]))
    through = integrate_contour(compile_layout(drawing), gate).discharge
    assert through is not None
    assert read.flow.sides[0].on.mean_approach * 6.0 * 1.5 == pytest.approx(abs(through), rel=1e-9)
    # and the draw speeds the water up before the middle and slows it after
    parts = np.array([0.2, 0.8])
    gained = side.on.along(parts) - side.off.along(parts)
    assert gained[0] > 0.01
    assert gained[1] < -0.01


def test_face_over_two_edges_in_a_line_draws_as_over_one():
    one = Outline("quay", (10 + 0j, 30 + 0j, 30 + 4j, 10 + 4j))
    (over_two,), (over_one,) = (
        check_screens(layout, (face(16 + 4j, 24 + 4j),), ())
        for layout in (AT_QUAY, replace(AT_QUAY, structures=(one,)))
    )
    assert over_two.flow.basis is Basis.MODELLED
    parts = np.linspace(0.1, 0.9, 9)
    speeds = (found.flow.sides[0].on.along(parts) for found in (over_two, over_one))
    bound = compile_layout(AT_QUAY).bound
    assert bound is not None
    # the walls are met to far less in the middle of an edge: what is left comes from its ends, 4 m off
    np.testing.assert_allclose(
        next(speeds), next(speeds), atol=2.0 * float(bound.velocity(np.array([4.0]))[0])
    )


BENT = Outline("quay", (10 + 0j, 30 + 0j, 30 + 4j, 20 + 4.000002j, 10 + 4j))
"""The same with a bend too small to leave the wall, but of more than rounding."""


def test_face_over_a_bend_takes_its_approach_from_its_area():
    flow, _ = flow_of(replace(AT_QUAY, structures=(BENT,)), face(16 + 4j, 24 + 4j))
    assert flow.basis is Basis.CALCULATED
    assert flow.on == "quay"
    assert flow.max_approach == pytest.approx(1.2 / (8.0 * 1.5), rel=1e-12)
    (side,) = flow.sides
    assert side.on is side.off
    codes = {notice.code for notice in screen_notices((flow,), (), 2.0)}
    assert codes == {"regulator-decides", "screen-draw-left-out"}


def test_two_faces_draw_together():
    first, second = (
        replace(face(2 + 0j, 8 + 0j), name="first"),
        replace(face(32 + 0j, 38 + 0j), name="second"),
    )
    bare = replace(LAYOUT, elements=LAYOUT.elements[2:])
    both = check_screens(bare, (first, second), ())
    alone = check_screens(bare, (first,), ())
    here, there = (checks[0].flow.sides[0].on.along(np.array([0.5])) for checks in (both, alone))
    # the second, 30 m off, draws 0.3 m2/s from one side: q / (pi r) more, to the square of 3 / 30
    assert here - there == pytest.approx([0.3 / (np.pi * 30.0)], rel=0.01)
