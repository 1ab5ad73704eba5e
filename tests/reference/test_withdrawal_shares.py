"""Shares of the intakes' water against counted streamlines, and against continuity."""

import pytest

from forebay.flow.layout import Layout, Sink, outflow
from forebay.workflows.withdrawal import trace_withdrawal
from reference.backtracking import counted_shares
from support.layouts import random_layout
from support.sites import BASINS, SHORES, STRAIGHT_THROUGH

COUNT = 720
KINDS = ("sink", "source", "vortex", "sink", "source", "bank-sink")


def _layouts() -> list[tuple[str, int, int]]:
    return [
        (name, seed, piers)
        for name in SHORES
        for seed, piers in ((0, 0), (3, 0), (1, int(name not in BASINS)))
    ]


def _by_name(layout: Layout):
    return {intake.name: intake for intake in trace_withdrawal(layout).intakes}


@pytest.mark.parametrize(("shore_name", "seed", "piers"), _layouts())
def test_shares_equal_counted_streamlines(shore_name, seed, piers):
    layout = random_layout(shore_name, seed, kinds=KINDS, count=6, piers=piers)
    answers = _by_name(layout)
    for element in layout.elements:
        if not isinstance(element, Sink):
            continue
        answer = answers[element.name]
        counted = counted_shares(layout, element.name, COUNT)
        lost = counted.pop("lost", 0.0)
        assert lost < 0.02  # streamlines that run into a saddle
        exact = {share.origin: share.share for share in answer.shares if share.share > 0}
        for origin in counted.keys() | exact.keys():
            # a streamline more or less on each side of each of the sectors of one origin, of which there are
            # few
            difference = abs(counted.get(origin, 0.0) - exact.get(origin, 0.0))
            assert difference <= lost + 8 / COUNT, (element.name, counted, exact)


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize("shore_name", SHORES)
def test_shares_keep_the_books(shore_name, seed):
    layout = random_layout(shore_name, seed, kinds=KINDS, count=7)
    answers = _by_name(layout)
    given: dict[str, float] = {}
    for element in layout.elements:
        if isinstance(element, Sink):
            answer = answers[element.name]
            assert answer.discharge == element.discharge
            assert sum(share.share for share in answer.shares) == pytest.approx(1.0, abs=1e-9)
            assert all(-1e-12 <= share.share <= 1 + 1e-12 for share in answer.shares)
            for share in answer.shares:
                given[share.origin] = given.get(share.origin, 0.0) + share.share * element.discharge
    # no outfall gives more than it has
    for element in layout.elements:
        assert given.get(element.name, 0.0) <= max(outflow(element), 0.0) + 1e-9


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize("shore_name", sorted(STRAIGHT_THROUGH))
def test_width_far_upstream_carries_the_ambient_share(shore_name, seed):
    # what comes from the current passes a strip of that width at the ambient speed
    layout = random_layout(shore_name, seed, kinds=KINDS, count=6)
    upstream = {"ambient", "upstream"}
    for answer in trace_withdrawal(layout).intakes:
        share = sum(share.share for share in answer.shares if share.origin in upstream)
        strip = answer.width_far_upstream * abs(layout.ambient.velocity) * layout.depth
        assert strip == pytest.approx(share * answer.discharge, abs=1e-8)
