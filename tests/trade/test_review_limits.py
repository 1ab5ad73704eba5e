"""A layout of a thousand elements gets a short review, quickly enough to be part of every answer."""

from forebay.flow.layout import Ambient, Layout, Sink
from forebay.trade.applicability.review import MOST_OF_A_KIND, evaluate
from forebay.trade.applicability.site import Site


def test_each_kind_is_raised_at_most_so_often_and_says_that_there_are_more():
    sinks = tuple(Sink(f"s{k}", complex(100.0 * k, 0.0), 1.0) for k in range(MOST_OF_A_KIND + 1))
    raised = [
        w
        for w in evaluate(Site(Layout(4.0, ambient=Ambient(0.3 + 0j), elements=sinks)))
        if w.code == "near-field"
    ]
    assert len(raised) == MOST_OF_A_KIND
    assert "left out" in raised[-1].message
    assert not any("left out" in warning.message for warning in raised[:-1])


def test_exactly_as_many_as_allowed_are_all_said():
    sinks = tuple(Sink(f"s{k}", complex(100.0 * k, 0.0), 1.0) for k in range(MOST_OF_A_KIND))
    raised = [
        w
        for w in evaluate(Site(Layout(4.0, ambient=Ambient(0.3 + 0j), elements=sinks)))
        if w.code == "near-field"
    ]
    assert len(raised) == MOST_OF_A_KIND
    assert "left out" not in raised[-1].message
