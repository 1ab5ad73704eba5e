"""Released water between walls that were solved for: uniform flow, and banks with exact images."""

import numpy as np
import pytest

from forebay.flow.arrivals.findings import ArrivalRules
from forebay.flow.arrivals.release import AlongLine, AtPoint, FromOutfall, OverDisc, Release
from forebay.flow.arrivals.result import Outcome, ReleaseArrivals
from forebay.flow.arrivals.transits import Transect
from forebay.flow.layout import (
    Ambient,
    Channel,
    EdgeProfile,
    Element,
    Layout,
    LineSink,
    OpenEdge,
    Outline,
    Sink,
    Source,
    StraightBank,
    Surveyed,
)
from forebay.workflows.spill import compute_arrivals

LENGTH, SPEED = 12.0, 2.0


def surveyed(*elements: Element) -> Layout:
    """A channel of width 1 between two cuts square to it: 2 m3/s through 1 m of water."""
    across = EdgeProfile.EQUIPOTENTIAL
    edges = OpenEdge("west", 3, 1, SPEED, across), OpenEdge("east", 1, 1, None, across)
    shore = Surveyed((0j, LENGTH + 0j, LENGTH + 1j, 1j), (), edges)
    return Layout(1.0, shore=shore, elements=elements)


def straight(*elements: Element) -> Layout:
    """The same between two banks without end; the cuts are felt as exp(-5.5 pi) = 3e-8."""
    return Layout(1.0, ambient=Ambient(SPEED + 0j), shore=Channel(0j, 1 + 0j, 1.0), elements=elements)


def of(layout: Layout, *releases: Release, transects: tuple[Transect, ...] = ()) -> list[ReleaseArrivals]:
    return list(compute_arrivals(layout, releases, ArrivalRules(layout.intakes, transects)))


def test_uniform_flow_takes_length_over_speed():
    """A weak intake far down the channel leaves the flow uniform up to exp(-2 pi) = 2e-3 of its 0.02 m/s."""
    gate = Transect("gate", (9 + 0.01j, 9 + 0.99j))
    point, line = of(
        surveyed(Sink("town", 10.5 + 0.5j, 0.02)),
        Release("point", AtPoint(2 + 0.3j)),
        Release("line", AlongLine((1 + 0.2j, 1 + 0.8j))),
        transects=(gate,),
    )
    assert point.transits[0].share == 1.0
    assert point.transits[0].first_time == pytest.approx(7.0 / SPEED, rel=1e-4)
    assert line.transits[0].share == pytest.approx(1.0, abs=line.share_error)
    assert line.transits[0].first_time == pytest.approx(8.0 / SPEED, rel=1e-4)
    # of the water between 0.2 and 0.8 the intake takes a strip of 0.02 m2/s / 2 m/s
    (arrival,) = line.arrivals
    assert arrival.share == pytest.approx(0.01 / 0.6, abs=line.share_error + 1e-5)
    assert {outcome.to for outcome in line.outcomes if outcome.outcome is Outcome.PASSES} == {"east"}


RELEASES = (
    Release("works", FromOutfall("works")),
    Release("point", AtPoint(3 + 0.1j)),
    Release("disc", OverDisc(4 + 0.15j, 0.1)),
    Release("line", AlongLine((3 + 0j, 3 + 1j))),
)


@pytest.mark.parametrize(
    "intake", [Sink("town", 6 + 0j, 0.8), LineSink("town", 6 + 0j, 6.4 + 0j, 0.8)], ids=["pipe", "screen"]
)
def test_arrivals_on_a_solved_bank_are_those_on_a_straight_one(intake):
    works = Source("works", 5.5 + 0j, 0.3)
    found, exact = (of(make(intake, works), *RELEASES) for make in (surveyed, straight))
    for one, other in zip(found, exact, strict=True):
        assert one.status is other.status
        (mine,), (given,) = one.arrivals, other.arrivals
        assert mine.share == pytest.approx(given.share, abs=one.share_error + other.share_error)
        for name in ("first_time", "median_time", "last_time"):
            # besides their own errors 3e-8 from the cuts and some 1e-7 from the walls
            slack = one.time_error + other.time_error + 1e-6
            assert getattr(mine, name) == pytest.approx(getattr(given, name), abs=slack)


def test_all_that_an_outfall_on_a_quay_gives_reaches_the_intake_below_it():
    """Both on the wall of an outline; the intake takes more, so that it takes the wall's own water first."""
    quay = Outline("quay", (0j, 60 + 0j, 60 + 5j, 5j))
    layout = Layout(
        4.0,
        ambient=Ambient(0.4 + 0j),
        shore=StraightBank(0j, 1 + 0j),
        elements=(Source("works", 20 + 5j, 0.4), LineSink("town", 30 + 5j, 36 + 5j, 1.2)),
        structures=(quay,),
    )
    (works,) = of(layout, Release("works", FromOutfall("works")))
    (arrival,) = works.arrivals
    assert arrival.share == pytest.approx(1.0, abs=works.share_error + 1e-12)
    # faster than the quay's own speed over the distance, where the outfall and the intake add theirs
    assert 0.0 < arrival.first_time < 16.0 / 0.4
    assert np.isfinite(arrival.median_time)
