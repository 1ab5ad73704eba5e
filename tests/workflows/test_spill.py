"""Arrivals of spills: which intakes, and names that nothing has."""

import pytest

from forebay.flow.arrivals.findings import ArrivalRules
from forebay.flow.arrivals.release import AtPoint, FromOutfall, Release
from forebay.flow.arrivals.result import ReleaseStatus
from forebay.flow.errors import UnknownNameError
from forebay.flow.layout import Ambient, Layout, LineSink, Sink, Source
from forebay.workflows.spill import compute_arrivals

LAYOUT = Layout(
    depth=2.0,
    ambient=Ambient(0.3 + 0j),
    elements=(Sink("east", 20 + 5j, 1.0), Source("works", 10 + 3j, 0.5), LineSink("screen", 0j, 2j, 0.4)),
)
RELEASES = (Release("one", AtPoint(-5 + 1j)), Release("two", AtPoint(19 + 5j)))


def test_all_intakes_are_sinks_of_either_kind():
    assert LAYOUT.intakes == ("east", "screen")


def test_answers_in_the_order_of_the_releases():
    answers = compute_arrivals(LAYOUT, RELEASES, ArrivalRules(("east", "screen")))
    assert [answer.name for answer in answers] == ["one", "two"]
    assert answers[0].arrivals[0].at == "screen"
    assert answers[1].arrivals[0].at == "east"
    assert all(answer.status is ReleaseStatus.OK for answer in answers)


@pytest.mark.parametrize("name", ["works", "nobody"])
def test_a_name_that_is_no_intake(name):
    with pytest.raises(UnknownNameError) as caught:
        compute_arrivals(LAYOUT, RELEASES, ArrivalRules(("east", name)))
    assert caught.value.path == ("intakes", 1)


@pytest.mark.parametrize("name", ["east", "nobody"])
def test_a_name_that_is_no_outfall(name):
    releases = (*RELEASES, Release("three", FromOutfall(name)))
    with pytest.raises(UnknownNameError) as caught:
        compute_arrivals(LAYOUT, releases, ArrivalRules(("east",)))
    assert caught.value.path == ("releases", 2, "outfall")
