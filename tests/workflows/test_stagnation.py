"""The use case compiles the layout, searches it, and passes on windows and errors."""

import pytest

from forebay.flow.errors import ElementOnLandError
from forebay.flow.layout import Ambient, Layout, Sink, StraightBank
from forebay.flow.stagnation.result import Window
from forebay.workflows.stagnation import search_stagnation

LAYOUT = Layout(
    1.0, ambient=Ambient(0.5 + 0j), shore=StraightBank(0j, 1 + 0j), elements=(Sink("t", 1j, 5.0),)
)


def test_all_of_the_water():
    search = search_stagnation(LAYOUT)
    assert search.complete
    assert [point.on for point in search.points] == ["bank", "bank"]


def test_window():
    search = search_stagnation(LAYOUT, Window((1.0, 5.0), (-1.0, 1.0)))
    assert (search.complete, search.expected_count, search.found_count) == (True, 1, 1)


def test_wrong_layout():
    wrong = Layout(1.0, shore=StraightBank(0j, 1 + 0j), elements=(Sink("t", -1j, 5.0),))
    with pytest.raises(ElementOnLandError):
        search_stagnation(wrong)
