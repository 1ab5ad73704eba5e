"""Tracing withdrawals: which intakes, in which order, and what a short search does to the answer."""

from dataclasses import replace

import numpy as np
import pytest

from forebay.flow.errors import UnknownNameError
from forebay.flow.layout import Ambient, Layout, LineSink, Sink, Source, StraightBank
from forebay.flow.withdrawal.result import WithdrawalStatus
from forebay.workflows import withdrawal
from forebay.workflows.stagnation import search_stagnation
from forebay.workflows.withdrawal import trace_withdrawal

LAYOUT = Layout(
    depth=2.0,
    ambient=Ambient(0.3 + 0j),
    shore=StraightBank(0j, 1 + 0j),
    elements=(
        Sink("east", 20 + 5j, 1.0),
        Source("works", 10 + 3j, 0.5),
        Sink("west", 0j, 0.6),
    ),
)


def test_all_sinks_by_default():
    answer = trace_withdrawal(LAYOUT)
    assert [intake.name for intake in answer.intakes] == ["east", "west"]
    assert [intake.discharge for intake in answer.intakes] == [1.0, 0.6]


def test_named_intakes_in_the_order_asked_for():
    answer = trace_withdrawal(LAYOUT, ("west", "east"))
    assert [intake.name for intake in answer.intakes] == ["west", "east"]
    alone = trace_withdrawal(LAYOUT, ("east",))
    # the others still act on the water; traced in other company, the sums round otherwise
    assert alone.intakes[0].recirculation_share == pytest.approx(
        answer.intakes[1].recirculation_share, abs=1e-13
    )


@pytest.mark.parametrize("name", ["works", "nobody"])
def test_a_name_that_is_no_intake(name):
    with pytest.raises(UnknownNameError) as caught:
        trace_withdrawal(LAYOUT, ("east", name))
    assert caught.value.path == ("intakes", 1)


def test_a_layout_without_intakes():
    assert trace_withdrawal(replace(LAYOUT, elements=LAYOUT.elements[1:2])).intakes == ()


def test_a_short_search_is_passed_on(monkeypatch):
    search = search_stagnation(LAYOUT)
    monkeypatch.setattr(withdrawal, "search_stagnation", lambda _: replace(search, complete=False))
    (answer,) = trace_withdrawal(LAYOUT, ("east",)).intakes
    assert answer.status is WithdrawalStatus.INCOMPLETE
    assert np.isnan(answer.share_error)


def test_a_line_sink_is_an_intake():
    layout = replace(LAYOUT, elements=(LineSink("screen", 30 + 0j, 34 + 0j, 0.6), *LAYOUT.elements))
    assert [intake.name for intake in trace_withdrawal(layout).intakes] == ["screen", "east", "west"]
