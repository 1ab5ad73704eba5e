"""Elements on walls that were solved for: the same flow on a straight bank, whose images are exact."""

import pytest

from forebay.flow.layout import (
    Ambient,
    Channel,
    EdgeProfile,
    Element,
    Layout,
    LineSink,
    LineSource,
    OpenEdge,
    Sink,
    Source,
    Surveyed,
)
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.search import search_model
from forebay.flow.withdrawal.result import IntakeWithdrawal, OriginKind
from forebay.workflows.withdrawal import trace_withdrawal

EQUI = EdgeProfile.EQUIPOTENTIAL
LENGTH = 12.0
"""Ends 5.5 widths away are felt as exp(-5.5 pi) = 3e-8."""

SITES: dict[str, tuple[Element, ...]] = {
    "points": (Sink("town", 6 + 0j, 0.8), Source("works", 5.5 + 0j, 0.3)),
    "screen": (LineSink("town", 6 + 0j, 6.4 + 0j, 0.8), Source("works", 5.5 + 0j, 0.3)),
    "diffuser": (Sink("town", 6 + 1j, 0.8), LineSource("works", 5.5 + 1j, 5.7 + 1j, 0.3)),
    "backwards": (LineSink("town", 6.4 + 0j, 6 + 0j, 0.8), Source("works", 5.5 + 0j, 0.3)),
}


def surveyed(*elements: Element, vertices: tuple[complex, ...] = ()) -> Layout:
    """A channel of width 1 as a polygon, 2 m3/s through 1 m of water; vertices : more of them on its bank."""
    outer = (0j, *vertices, LENGTH + 0j, LENGTH + 1j, 1j)
    edges = OpenEdge("west", len(outer) - 1, 1, 2.0, EQUI), OpenEdge("east", len(outer) - 3, 1, None, EQUI)
    return Layout(1.0, shore=Surveyed(outer, (), edges), elements=elements)


def straight(*elements: Element) -> Layout:
    """The same between two banks without end."""
    return Layout(1.0, ambient=Ambient(2.0 + 0j), shore=Channel(0j, 1 + 0j, 1.0), elements=elements)


def only(layout: Layout) -> IntakeWithdrawal:
    (intake,) = trace_withdrawal(layout).intakes
    return intake


@pytest.mark.parametrize("name", SITES)
def test_all_water_of_an_outfall_on_the_same_bank_reaches_an_intake_that_takes_more(name):
    """What the outfall gives keeps to the bank, so that the intake takes it first: 0.3 of 0.8."""
    intake = only(surveyed(*SITES[name]))
    assert intake.status == "ok"
    assert intake.recirculation_share == pytest.approx(0.375, abs=intake.share_error + 3e-8)
    assert {share.kind for share in intake.shares} == {OriginKind.OUTFALL, OriginKind.FAR_FIELD}
    assert intake.share_error < 1e-5
    # the divide in the water, and the wall's streamline that ends behind the intake
    assert len(intake.dividing_streamlines) == len(only(straight(*SITES[name])).dividing_streamlines) == 2


@pytest.mark.parametrize("name", SITES)
def test_stagnation_points_are_those_on_a_straight_bank(name):
    found, exact = (
        search_model(compile_layout(layout)) for layout in (surveyed(*SITES[name]), straight(*SITES[name]))
    )
    assert found.complete
    assert len(found.points) == 2
    for one, other in zip(found.points, exact.points, strict=True):
        assert one.kind is other.kind
        assert abs(one.at - other.at) < 1e-5  # speeds there are right to 1e-6 at strain rates of 5 1/s
        assert one.on == "bank"


def test_screen_over_a_vertex_of_a_straight_bank():
    """A bank digitised with a vertex behind the screen is the same bank."""
    intake = only(surveyed(*SITES["screen"], vertices=(6.2 + 0j,)))
    assert intake.status == "ok"
    assert intake.recirculation_share == pytest.approx(0.375, abs=intake.share_error + 3e-8)


def test_screen_over_a_whole_edge():
    intake = only(surveyed(*SITES["screen"], vertices=(6 + 0j, 6.4 + 0j)))
    assert intake.status == "ok"
    assert intake.recirculation_share == pytest.approx(0.375, abs=intake.share_error + 3e-8)


def test_weak_intake_lets_the_outfall_pass():
    """An intake of 0.2 below an outfall of 0.3 on its bank takes nothing but the outfall's water."""
    intake = only(surveyed(Sink("town", 6 + 0j, 0.2), Source("works", 5.5 + 0j, 0.3)))
    assert [(share.origin, share.share) for share in intake.shares] == [("works", 1.0)]
