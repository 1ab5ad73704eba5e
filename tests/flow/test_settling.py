"""Elements a rounding error ashore stand on the bank; a metre ashore they do not."""

import numpy as np
import pytest

from forebay.flow.errors import ElementOnLandError
from forebay.flow.layout import Ambient, Channel, Corner, Layout, LineSink, Sink, StraightBank
from forebay.flow.model import compile_layout

ALONG = complex(np.exp(0.3j))
RIVER = Channel(5e5 + 4.6e6j, ALONG, 100.0)
BANK = StraightBank(0j, 1 + 0j)


def rounded(at, step=1e-3):
    return complex(round(at.real / step) * step, round(at.imag / step) * step)


@pytest.mark.parametrize("distance", [10.0, 20.0, 30.0, 40.0, 50.0])
def test_map_coordinates_in_millimetres_are_on_the_bank_or_in_the_water(distance):
    at = rounded(RIVER.point + distance * ALONG)
    layout = Layout(4.0, ambient=Ambient(0.3 * ALONG), shore=RIVER, elements=(Sink("a", at, 1.0),))
    model = compile_layout(layout)
    moved = model.singularities[0].at
    assert abs(moved - at) < 1e-3
    assert model.wet(np.array([moved]))[0]


def test_what_stands_in_the_water_is_not_moved():
    layout = Layout(4.0, shore=BANK, elements=(Sink("a", 3 + 1e-4j, 1.0), Sink("b", 9 + 5j, 1.0)))
    assert compile_layout(layout).layout is layout


def test_screens_a_little_ashore_stand_on_the_bank():
    layout = Layout(4.0, shore=BANK, elements=(LineSink("a", 3 - 1e-6j, 50 + 0j, 1.0),))
    model = compile_layout(layout)
    assert model.lines[0].start == 3 + 0j
    assert model.lines[0].on == "bank"


def test_further_ashore_is_on_land():
    layout = Layout(4.0, shore=BANK, elements=(Sink("a", 3 - 0.01j, 1.0), Sink("b", 9 + 5j, 1.0)))
    with pytest.raises(ElementOnLandError):
        compile_layout(layout)


def test_the_other_face_of_a_thin_wall_is_water():
    """Interior angle 360 degrees: a point just below the wall stands in the water of the second bank."""
    wall = Corner(0j, 1 + 0j, 2 * np.pi)
    layout = Layout(4.0, shore=wall, elements=(Sink("a", 5 - 1e-6j, 1.0), Sink("b", 5j, 1.0)))
    assert compile_layout(layout).layout is layout
