"""What is said of a spill, and when."""

import math
from dataclasses import replace

import numpy as np
import pytest

from forebay.flow.arrivals.release import AtPoint, OverDisc, Release
from forebay.flow.arrivals.result import (
    Arrival,
    ArrivalCurve,
    ReleaseArrivals,
    ReleaseStatus,
    Tail,
)
from forebay.flow.layout import Ambient, Channel, Layout, OpenWater, Sink
from forebay.trade.applicability.mixing import SPILL_KINDS, spill_notices
from forebay.trade.applicability.site import SiteData
from forebay.trade.warning_catalogue import WARNINGS

DEPTH, SPEED, FRICTION, DISCHARGE, WIDTH = 4.0, 0.5, 0.003, 1.8, 60.0
MIXING = 0.6 * DEPTH * SPEED * math.sqrt(FRICTION)
"""eps = 0.6 h u*, u* = U sqrt(c_f) [m2/s]."""

LAYOUT = Layout(DEPTH, ambient=Ambient(SPEED + 0j), elements=(Sink("intake", 100 + 0j, DISCHARGE),))
AT = Release("spill", AtPoint(0j))
DATA = SiteData(bed_friction=FRICTION)
STRIP = DISCHARGE / (DEPTH * SPEED)


def answer(time=100.0, tail=Tail.BOUNDED, **changes):
    arrival = Arrival("intake", 1.0, time, time, time, time, tail)
    curve = ArrivalCurve(np.array([time, time]), np.array([0.0, 1.0]), {})
    found = ReleaseArrivals(
        "spill", (arrival,), (), 0.0, (), curve, 0.0, 0.0, math.inf, 1.0, ReleaseStatus.OK
    )
    return replace(found, **changes)


def codes(found, layout=LAYOUT, data=DATA, release=AT):
    return {notice.code for notice in spill_notices(layout, data, (release,), (found,))}


def test_distance_to_a_divide_is_for_points_alone():
    patch = Release("spill", OverDisc(0j, 2.0))
    assert "near-dividing-streamline" not in codes(answer(divide_distance=math.nan), release=patch)


def test_mixed_over_the_width_of_a_channel_alone():
    channel = replace(LAYOUT, shore=Channel(-30j, 1 + 0j, WIDTH))
    assert "spill-mixed-over-width" in codes(answer(1e9), channel)
    assert "spill-mixed-over-width" not in codes(answer(1e9), replace(LAYOUT, shore=OpenWater()))


def test_numbers_of_a_warning_are_what_was_compared():
    notices = spill_notices(LAYOUT, DATA, (AT,), (answer(1e4),))
    blurred = next(notice for notice in notices if notice.code == "spill-strip-blurred")
    assert blurred.value == pytest.approx(math.sqrt(2.0 * MIXING * 1e4), rel=1e-12)
    assert blurred.limit == pytest.approx(0.25 * STRIP, rel=1e-12)
    assert (blurred.unit, blurred.path, blurred.in_layout) == ("m", ("releases", 0), False)


def test_on_a_divide_and_without_an_end():
    assert "on-dividing-streamline" in codes(answer(status=ReleaseStatus.ON_DIVIDING_STREAMLINE))
    assert "endless-tail" in codes(answer(tail=Tail.UNBOUNDED))
    assert not {"on-dividing-streamline", "endless-tail"} & codes(answer())


def test_always_said():
    assert {"advection-only", "arrival-spread"} <= codes(answer())
    lost = codes(answer(arrivals=()))
    assert "advection-only" in lost
    assert "arrival-spread" not in lost


@pytest.mark.parametrize("data", [SiteData(), DATA])
def test_nothing_of_mixing_without_friction_or_current(data):
    still = replace(LAYOUT, ambient=Ambient(0j))
    layout = LAYOUT if data.bed_friction is None else still
    said = codes(answer(1e9, divide_distance=1e-9), layout, data)
    assert said == {"advection-only", "arrival-spread"}


def test_every_kind_is_in_the_catalogue():
    assert set(SPILL_KINDS) <= set(WARNINGS)
    assert len({kind.code for kind in WARNINGS}) == len(WARNINGS)
