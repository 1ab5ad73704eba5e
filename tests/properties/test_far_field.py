"""Far from everything: continuity gives the speeds."""

import numpy as np
import pytest
from hypothesis import given, settings

from forebay.flow.layout import Channel, Corner, DeadEnd, Layout, outflow
from forebay.flow.model import compile_layout
from support.sites import SPAN
from support.strategies import layouts

PROFILE = settings(derandomize=True, deadline=None, max_examples=40)

FAR = 40 * SPAN
"""In a channel what an element does decays like exp(-pi x / width): nothing is left."""

ROUNDING = 1e-11


def _net(layout: Layout) -> float:
    return sum(outflow(element) for element in layout.elements) / layout.depth


@PROFILE
@given(layouts(["channel"], largest=6))
def test_channel_ends(named):
    _, layout = named
    shore, model = layout.shore, compile_layout(layout)
    assert isinstance(shore, Channel)
    middle = shore.point + 0.3j * shore.along * shore.width
    before, after = (
        (velocity * shore.along).real
        for velocity in model.velocity(np.array([middle - FAR * shore.along, middle + FAR * shore.along]))
    )
    speed = (layout.ambient.velocity * np.conj(shore.along)).real
    exchange = _net(layout) / shore.width
    expected = {
        1.0: (speed, speed + exchange),
        -1.0: (speed - exchange, speed),
        0.0: (-exchange / 2, exchange / 2),
    }[float(np.sign(round(speed, 12)))]
    assert (before, after) == pytest.approx(expected, abs=ROUNDING)


@PROFILE
@given(layouts(["channel", "dead-end"], largest=6))
def test_ends_take_what_the_elements_give(named):
    _, layout = named
    model = compile_layout(layout)
    inflow = sum(end.inflow for end in model.ends)
    assert inflow == pytest.approx(-_net(layout), abs=ROUNDING)


@PROFILE
@given(layouts(["dead-end"], largest=6))
def test_open_end_of_a_dead_end(named):
    _, layout = named
    shore, model = layout.shore, compile_layout(layout)
    assert isinstance(shore, DeadEnd)
    at = shore.point + FAR * shore.along + 0.7j * shore.along * shore.width
    (velocity,) = model.velocity(np.array([at]))
    assert velocity * shore.along == pytest.approx(_net(layout) / shore.width, abs=ROUNDING)


@PROFILE
@given(layouts(["open-water", "straight-bank"], largest=6))
def test_current_is_undisturbed_far_away(named):
    # the rest is the net strength over the distance; dipoles leave 1e-3 / FAR^2
    shore_name, layout = named
    model = compile_layout(layout)
    unit = getattr(layout.shore, "along", 1 + 0j)
    at = 1e7 * unit * (0.6 + 0.8j)
    (velocity,) = model.velocity(np.array([at]))
    circulation = 0.0
    if shore_name == "open-water":
        vortices = [e.circulation for e in layout.elements if hasattr(e, "circulation")]
        circulation = sum(vortices) + sum(p.circulation for p in layout.structures)
    net = _net(layout) * (2 if shore_name == "straight-bank" else 1)  # all of it into half of the plane
    expected = np.conj(layout.ambient.velocity) + (net - 1j * circulation) / (2 * np.pi * at)
    assert velocity == pytest.approx(expected, abs=1e-12)


@PROFILE
@given(layouts(["corner-right", "corner-obtuse", "corner-reflex"], largest=6))
def test_corner_lets_the_net_discharge_out_evenly(named):
    # far out the speed is net / (alpha r), radial
    _, layout = named
    shore, model = layout.shore, compile_layout(layout)
    assert isinstance(shore, Corner)
    radial = shore.along * np.exp(0.4j * shore.interior_angle)
    reach = 1e6 * SPAN
    (velocity,) = model.velocity(np.array([shore.vertex + reach * radial]))
    expected = _net(layout) / (shore.interior_angle * reach)
    # the next term is smaller by (SPAN / reach)^(pi / alpha): 1e-6^0.72 = 5e-5 at 250 degrees, of order one
    # strengths
    assert abs(velocity * radial - expected) <= 1e-3 / reach
