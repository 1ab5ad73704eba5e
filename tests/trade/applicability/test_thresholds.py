"""Every warning at, just below and just above its threshold, and that no threshold is left out.

On which side "at" falls is what the source's wording says, which stands beside each case: "greater than" and
"closer than" leave it out, "at least", "at most" and "up to" take it in. What a warning of this service's own
making compares is read as its entry in the catalogue is worded.
"""

import math
from dataclasses import replace
from functools import partial

import numpy as np
import pytest

from forebay.flow.arrivals.release import AtPoint, Release
from forebay.flow.arrivals.result import Arrival, ArrivalCurve, ReleaseArrivals, ReleaseStatus, Tail
from forebay.flow.layout import Ambient, Channel, CoreModel, Layout, Sink
from forebay.flow.model import compile_layout
from forebay.trade.applicability.mixing import SPILL_KINDS, spill_notices
from forebay.trade.applicability.review import RULES
from forebay.trade.applicability.site import SiteData
from forebay.trade.applicability.warning import Severity, WarningKind
from support.thresholds import Case, Raised, has_threshold
from support.warned_sites import (
    DEPTH,
    LID_DEPTH,
    asked,
    bank_intake,
    box,
    box_in,
    buoyant,
    cored,
    corner,
    cut_at,
    flowing,
    known_opening,
    layered,
    long_layout,
    mixing,
    on_the_earth,
    outfall,
    pair,
    pier_in,
    salty,
    solved,
    still_channel,
    tidal,
    turning,
    uneven,
    wake,
    windy,
)

ABOVE, FROM, BELOW, UP_TO = Raised.ABOVE, Raised.FROM, Raised.BELOW, Raised.UP_TO
RULE = {kind.code: rule for kind, rule in RULES}


def case(code, at, site_at, raised, wording, **more):
    """A threshold of a rule that looks at sites."""
    return Case(code, at, lambda x: list(RULE[code](site_at(x))), raised, wording, **more)


def told_case(code, at, words, site_at, raised, wording, **more):
    """A threshold at which a rule says something else."""
    return Case(
        code, at, lambda x: [w for w in RULE[code](site_at(x)) if words in w.message], raised, wording, **more
    )


def wake_case(at, words, raised, wording, limit, body=None):
    """A threshold of the shallow-wake number: one of its three kinds of wake."""
    return told_case(
        "shallow-wake", at, words, partial(wake, body=body), raised, wording, limit=limit, value=at
    )


def stated(code, at):
    """Limit that a warning states at a site, where it is a distance that can be given as it is."""
    (warning,) = RULE[code](at)
    return warning.limit


def lid(speed):
    return flowing(speed, LID_DEPTH)


SPED = math.sqrt(1.0 - 1.0 / 1.05**2)
"""Froude number with a first-order speed-up of a twentieth."""

OPENING = SiteData(elevations={"a": 0.5 * DEPTH})
CRITICAL = 1.5 * 0.69 * (0.5**2 / 0.0146682) ** 0.2
"""1.5 h_c of a point, h_c = 0.69 (Q^2 / g')^(1/5): 1.5 times 1.217 m."""

STRIP = 32.0
"""Discharge [m3/s] whose strip is four times as wide as 4 m in 4 m of water at 0.5 m/s."""

SITES = [
    # checks of water surface: "F > 0.3", "F > 0.5"; sqrt(g h) = 2 m/s
    case("rigid-lid", 0.6, lid, ABOVE, "F > 0.3", limit=0.3),
    case("rigid-lid", 1.0, lid, UP_TO, "up to 0.5", limit=0.3, value=0.5),
    case("rigid-lid-failed", 1.0, lid, ABOVE, "F > 0.5", limit=0.5),
    # (1 - F^2)^(-1/2) - 1 is a multiple of 2^-52 and misses 0.05, which is none
    case("surface-speed-up", 2.0 * SPED, lid, ABOVE, "> 0.05", limit=0.05, rounded=True, slack=1e-7),
    case("surface-speed-up", 1.0, lid, UP_TO, "up to F = 0.5", limit=0.05, value=2 / math.sqrt(3) - 1),
    # compact openings: "mid-depth intake: r < h; bed or surface intake: r < 2 h"
    case("near-field-overlap", 8.0, pair, BELOW, "r < 2 h", limit=8.0),
    case("near-field-result", 8.0, asked, BELOW, "r < 2 h", limit=8.0),
    told_case("near-field-result", 4.0, "wherever it opens", asked, BELOW, "r < h", limit=8.0, value=4.0),
    case(
        "near-field-overlap",
        stated("near-field-overlap", pair(1.0, data=OPENING)),
        partial(pair, data=OPENING),
        BELOW,
        "r < h at mid-depth, here where the error is 1 %",
        limit=stated("near-field-overlap", pair(1.0, data=OPENING)),
    ),
    # a sum of Bessel functions meets 0.01 in no float that could be named
    case("near-field-error", 1.0, known_opening, BELOW, "error > 0.01", limit=0.01, rounded=True, slack=1e-7),
    # wakes: "Re > 50"; D = 1.8 um, so that Re is the speed in m/s
    case("pier-lee", 50.0, partial(pier_in, radius=0.9e-6), ABOVE, "Re > 50", limit=50.0),
    case("pier-lee", 50.0, partial(box_in, breadth=1.8e-6), ABOVE, "Re > 50", limit=50.0),
    wake_case(0.2, "a vortex street", BELOW, "S < 0.2", 0.2),
    wake_case(0.2, "an unsteady bubble", FROM, "0.2 to 0.5", 0.5),
    wake_case(0.5, "an unsteady bubble", UP_TO, "0.2 to 0.5", 0.5),
    wake_case(0.5, "a steady bubble", ABOVE, "S > 0.5", 0.5),
    wake_case(0.2, "a vortex street", BELOW, "S < 0.2", 0.2, box(8.0, DEPTH)),
    wake_case(0.5, "a steady bubble", ABOVE, "S > 0.5", 0.5, box(8.0, DEPTH)),
    # tides and the turning earth
    case("tidal-reversal", 300.0, tidal, UP_TO, "KC of 50 or less", limit=50.0),
    case(
        "tidal-reversal",
        300.0,
        partial(tidal, body=box(8.0, 3.0)),
        UP_TO,
        "KC of 50 or less",
        limit=50.0,
    ),
    case(
        "tidal-period-unknown", 0.5, lambda s: salty(salinity=s), FROM, "saline from the limit of fresh water"
    ),
    case("earth-rotation", 10.0, on_the_earth, BELOW, "Ro < 10", limit=10.0),
    case("earth-rotation", 1.0, on_the_earth, FROM, "down to 1", limit=10.0, value=1.0),
    case("earth-rotation-strong", 1.0, on_the_earth, BELOW, "Ro < 1", limit=1.0),
    case("latitude-unknown", 10.0, partial(on_the_earth, latitude=None), BELOW, "Ro < 10 at the pole"),
    # layers and buoyancy
    case(
        "layer-withdrawal",
        stated("layer-withdrawal", layered(1.0)),
        layered,
        BELOW,
        "closer than 1.5 h_c",
        limit=CRITICAL,
        slack=1e-4,  # density of the water enters twice, 1e-5
    ),
    # a density difference times gravity over density: rounded in every float
    case("buoyant-spreading", 0.1, buoyant, ABOVE, "g' h / U^2 > 0.1", limit=0.1, rounded=True),
    # outfalls: Q = 2 m3/s, Ua = 0.5 m/s; l_M = sqrt(Q U0) / Ua = 4 m
    case("outfall-jet-speed", 4.0, outfall, BELOW, "U0 / Ua > 1: a smaller port is faster", limit=1.0),
    case("outfall-jet-reach", 20.0, partial(outfall, 1.0), BELOW, "below 5 l_M", limit=20.0),
    # banks
    case("salient-corner", 180.0, corner, ABOVE, "greater than two right angles", limit=180.0),
    case("core-near-wall", 6.0, partial(cored, CoreModel.LAMB_OSEEN), BELOW, "d < 3 a", limit=6.0),
    case("core-near-wall", 4.0, partial(cored, CoreModel.RANKINE), BELOW, "d < 2 a", limit=4.0),
    case("bank-shear", 4.0, bank_intake, UP_TO, "at most the depth", limit=4.0),
    # Q / (2 pi h U) = 10 m; there the stagnation point is on the bank: "at most"
    case("bank-shear", 10.0, partial(bank_intake, discharge=40 * math.pi), UP_TO, "at most", limit=10.0),
    case("channel-end-split", 0.0, still_channel, Raised.BESIDE, "a net discharge"),
    case("channel-end-split", 0.0, lambda u: still_channel(1.0, complex(u)), Raised.ONLY_AT, "zero velocity"),
    # friction and mixing
    case("friction-length", 240.0, long_layout, ABOVE, "> 0.3 h / c_f", limit=240.0),
    case("transverse-mixing", STRIP, mixing, BELOW, "sigma exceeds a quarter of the strip", limit=4.0),
    # surface and bed
    case("wind-drift", 5.0, windy, ABOVE, "0.03 W > 0.3 U", limit=0.15),
    case("uneven-depth", 5.0, uneven, ABOVE, "varies by more than 20 %", limit=0.2),
    # ideal elements
    case("rotational-field", 0.0, turning, Raised.BESIDE, "vorticity not zero", limit=0.0),
    case(
        "ambient-zero",
        0.0,
        lambda u: pair(30.0, Layout(DEPTH, ambient=Ambient(complex(u)))),
        Raised.ONLY_AT,
        "ambient velocity zero",
        limit=0.0,
    ),
    # solved walls
    case("boundary-bound", 1e-4, solved, ABOVE, "bound > tolerance", limit=1e-4),
    case("boundary-bound", 1e-3, solved, UP_TO, "up to 1e-3", limit=1e-4, value=1e-3),
    case("boundary-bound-wide", 1e-3, solved, ABOVE, "bound > 1e-3", limit=1e-3),
    case(
        "boundary-bound-wide",
        5e-3,
        partial(solved, tolerance=5e-3),
        ABOVE,
        "bound > tolerance where that is larger",
        limit=5e-3,
    ),
    # angles come from coordinates by an arctangent; the limit stated is the right angle, 1.1e-5 lower
    case("open-edge-blunt", 90.001, cut_at, ABOVE, "> 90 deg, drawn", limit=90.0, rounded=True, slack=2e-5),
]

FRICTION, DISCHARGE, WIDTH = 0.003, 1.8, 60.0
RIVER = Layout(DEPTH, ambient=Ambient(0.5 + 0j), elements=(Sink("intake", 100 + 0j, DISCHARGE),))
MIXING = 0.6 * DEPTH * 0.5 * math.sqrt(FRICTION)
"""eps = 0.6 h u*, u* = U sqrt(c_f) [m2/s]."""


def spill_case(code, at, changed, raised, wording, *, layout=RIVER, **more):
    """A threshold of what is said of the answer for a spill."""

    def said(x):
        notices = spill_notices(layout, SiteData(bed_friction=FRICTION), (SPILL,), (answer(**changed(x)),))
        return [notice for notice in notices if notice.code == code]

    return Case(code, at, said, raised, wording, **more)


SPILL = Release("spill", AtPoint(0j))


def answer(time=100.0, divide_distance=math.inf):
    arrival = Arrival("intake", 1.0, time, time, time, time, Tail.BOUNDED)
    curve = ArrivalCurve(np.array([time, time]), np.array([0.0, 1.0]), {})
    return ReleaseArrivals(
        "spill", (arrival,), (), 0.0, (), curve, 0.0, 0.0, divide_distance, 1.0, ReleaseStatus.OK
    )


QUARTER = 0.25 * DISCHARGE / (DEPTH * 0.5)
SPREAD = math.sqrt(2.0 * MIXING * 100.0 / 0.5)

SPILLS = [
    spill_case(
        "spill-strip-blurred",
        QUARTER**2 / (2.0 * MIXING),
        lambda t: {"time": t},
        ABOVE,
        "sigma exceeds a quarter of the strip",
        limit=QUARTER,
    ),
    spill_case(
        "near-dividing-streamline",
        SPREAD,
        lambda d: {"divide_distance": d},
        BELOW,
        "distance < sigma",
        limit=SPREAD,
    ),
    *(
        spill_case(
            "spill-mixed-over-width",
            share * WIDTH**2 / MIXING,
            lambda t: {"time": t},
            ABOVE,
            f"U t > L_m, {where}",
            layout=replace(RIVER, shore=Channel(bank, 1 + 0j, WIDTH)),
            limit=share * 0.5 * WIDTH**2 / MIXING,
            rounded=True,
        )
        for where, bank, share in (("from mid-stream", -30j, 0.1), ("from a bank", 0j, 0.4))
    ),
]

CASES = [*SITES, *SPILLS]

PLACES = ("just-below", "at", "just-above")
ROWS = [
    pytest.param(one, place, id=f"{one.code}-{index}-{PLACES[place]}")
    for index, one in enumerate(CASES)
    for place in range(3)
    if not (one.rounded and place == 1)  # no float is at it: `test_where_a_threshold_is` tries the next ones
]


@pytest.mark.parametrize(("one", "place"), ROWS)
def test_threshold(one, place):
    warnings = one.said(one.about()[place])
    assert [warning.code for warning in warnings] == [one.code] * one.raised.value[place]
    for warning in warnings:
        if one.limit is None:
            assert warning.limit is None
        else:
            assert warning.limit == pytest.approx(one.limit, rel=one.slack)
            expected = one.limit if one.value is None else one.value
            # a limit of zero has neighbours of 5e-324; what is varied is 1e-9 off, and its square 2e-9
            assert warning.value == pytest.approx(expected, rel=one.slack, abs=1e-300)


@pytest.mark.parametrize(
    "one", [pytest.param(one, id=f"{one.code}-{index}") for index, one in enumerate(CASES) if one.at]
)
def test_where_a_threshold_is(one):
    below, above = one.neighbours()
    assert above == math.nextafter(below, math.inf)
    # what is varied goes through a few roundings, of 1e-16 each; a rounded threshold is known to 1e-9 alone
    assert below == pytest.approx(one.at, rel=1e-9 if one.rounded else 2e-15)
    for warning in (*one.said(below), *one.said(above)):
        equal = warning.value is not None and warning.value == warning.limit
        assert not equal or one.raised is UP_TO


def test_every_rule_with_a_threshold_has_a_case():
    kinds = [*RULES, *((kind, None) for kind in SPILL_KINDS)]
    with_threshold = {kind.code for kind, rule in kinds if has_threshold(kind, rule)}
    assert {one.code for one in CASES} == with_threshold


def test_a_rule_that_orders_numbers_is_known_by_its_code_too():
    silent = WarningKind("made-up", Severity.NOTE, "m", "in words alone", "f", "s")

    def rule(at):
        yield at if at > 1.0 else None

    assert has_threshold(silent, rule)
    assert has_threshold(replace(silent, threshold="x at least 3"))
    assert not has_threshold(silent, lambda at: iter([at]))


def test_zone_of_an_intake_touches_its_bank_at_the_limit():
    # why "at" is raised there: the water stands still on the bank, abreast of 10 m by as much
    model = compile_layout(bank_intake(10.0, discharge=40 * math.pi).layout)
    assert abs(model.velocity(np.array([10.0 + 0j]))[0]) < 1e-15  # against 0.5 m/s of current: rounding
