"""Warnings of screens and of inlets at, just below and just above their thresholds."""

import math
from dataclasses import replace
from types import SimpleNamespace
from typing import Any

import pytest

from forebay.flow.layout import Water
from forebay.trade.screens.notices import SCREEN_KINDS, screen_notices
from forebay.trade.screens.screen_flow import Basis
from forebay.trade.submergence.inlet import Inlet, InletKind
from forebay.trade.submergence.notices import INLET_KINDS, inlet_notices
from forebay.workflows.submergence import Choice, check_submergence
from support.thresholds import Case, Raised, has_threshold

WATER = Water(20.0)
PIPE = Inlet(name="pipe", kind=InletKind.VERTICAL_PIPE, discharge=0.5, height=0.6, submergence=2.0)
BELL = replace(PIPE, kind=InletKind.BELL, height=math.sqrt(0.4 / math.pi))
"""A bell of 0.1 m2."""


def of_screen(code, at, raised, wording, limit, **changed):
    def said(x):
        flow: Any = SimpleNamespace(screen=SimpleNamespace(name="bay", height=2.5), basis=Basis.MODELLED)
        flow.min_approach = x if "min_approach" in changed else 0.1
        depth = x if "depth" in changed else 4.0
        return [notice for notice in screen_notices((flow,), (), depth) if notice.code == code]

    return Case(code, at, said, raised, wording, limit)


def of_inlet(code, at, inlet_at, raised, wording, limit, **more):
    def said(x):
        choice = Choice(rules=("prosser-floor",), from_memory=True)
        checks = check_submergence((inlet_at(x),), WATER, choice)
        return [notice for notice in inlet_notices(checks) if notice.code == code]

    return Case(code, at, said, raised, wording, limit, **more)


def swirling(core):
    return replace(PIPE, circulation=0.4, core_radius=core)


(DEEP,) = check_submergence((swirling(0.1),), WATER, Choice())
assert DEEP.vortex is not None

CASES = [
    of_screen("screen-higher-than-water", 2.5, Raised.BELOW, "height > depth", None, depth=True),
    of_screen("water-leaves-screen", 0.0, Raised.BELOW, "approach velocity < 0", 0.0, min_approach=True),
    of_inlet(
        "submergence-short",
        1.5 * 0.6,
        lambda s: replace(PIPE, submergence=s),
        Raised.BELOW,
        "available < required",
        0.9,
    ),
    # V = Q / 0.1 m2, by way of a diameter: rounded in every float
    of_inlet(
        "inlet-velocity-out-of-band",
        0.06,
        lambda q: replace(BELL, discharge=q),
        Raised.BELOW,
        "outside the band: less than",
        0.6,
        rounded=True,
    ),
    of_inlet(
        "inlet-velocity-out-of-band",
        0.27,
        lambda q: replace(BELL, discharge=q),
        Raised.ABOVE,
        "outside the band: more than",
        2.7,
        rounded=True,
    ),
    # the dip falls with the square of the core
    of_inlet(
        "air-could-be-drawn",
        DEEP.vortex.critical_core_radius,
        swirling,
        Raised.UP_TO,
        "dip >= submergence",
        2.0,
    ),
]

ROWS = [
    pytest.param(one, place, id=f"{one.code}-{one.at:.3g}-{place}")
    for one in CASES
    for place in range(3)
    if not (one.rounded and place == 1)
]


@pytest.mark.parametrize(("one", "place"), ROWS)
def test_threshold(one, place):
    notices = one.said(one.about()[place])
    assert [notice.code for notice in notices] == [one.code] * one.raised.value[place]
    for notice in notices:
        if one.limit is not None:
            assert notice.limit == pytest.approx(one.limit, rel=1e-9)
            # what is varied is 1e-9 off, its square 2e-9; a limit of zero is off by 5e-324
            assert notice.value == pytest.approx(one.limit, rel=3e-9, abs=1e-300)


@pytest.mark.parametrize("one", [pytest.param(one, id=f"{one.code}-{one.at:.3g}") for one in CASES if one.at])
def test_where_a_threshold_is(one):
    below, above = one.neighbours()
    assert above == math.nextafter(below, math.inf)
    assert below == pytest.approx(one.at, rel=2e-15)  # a few roundings


def test_every_kind_with_a_threshold_has_a_case():
    named = {kind.code for kind in (*SCREEN_KINDS, *INLET_KINDS) if has_threshold(kind)}
    assert named <= {one.code for one in CASES}
    assert {one.code for one in CASES} == named | {"inlet-velocity-out-of-band"}  # "outside the band"
