"""Zones of intakes: each is on the map and in the key, told apart without colour."""

import re

import numpy as np
import pytest

from forebay.charts.options import FlowNetOptions
from forebay.charts.palette import lightness
from forebay.charts.zones import FILLS, MOST_NAMED, Zone, draw_zones, fills, zone_notes
from forebay.flow.layout import Ambient, Layout, Sink, Water
from forebay.workflows.withdrawal import trace_withdrawal
from forebay.workflows.zones_picture import draw_intake_zones

SITE = Layout(
    depth=4.0,
    water=Water(12.0, 0.0),
    ambient=Ambient(0.1 + 0j),
    elements=(Sink("upper", 0j, 2.0), Sink("lower", 40 + 15j, 1.0)),
)


@pytest.fixture(scope="module")
def drawing():
    intakes = trace_withdrawal(SITE).intakes
    options = FlowNetOptions(size=(640, 520))
    first, second = (draw_intake_zones(SITE, intakes, options).data for _ in range(2))
    assert first == second
    return first.decode()


def test_every_zone_is_on_the_map_and_in_the_key(drawing):
    for name in ("zone-1", "zone-2", "key-zone-1", "key-zone-2", "dividing-streamlines", "caution"):
        assert f'id="{name}"' in drawing


def test_every_zone_has_a_hatching(drawing):
    hatched = re.findall(r'<g id="zone-\d">\s*<path[^>]*url\(#', drawing)
    assert len(hatched) == 2


def test_fills_differ_in_grey():
    # twelve steps of lightness are told apart on paper by common practice; else the hatching must differ
    seen = [(round(12 * lightness(colour)), hatch) for colour, hatch in FILLS]
    assert len(set(seen)) == len(FILLS)
    assert len({hatch for _, hatch in FILLS}) == len(FILLS)


def test_more_zones_than_fills_begin_again():
    assert fills(len(FILLS) + 1)[-1] == FILLS[0]


def test_what_finds_no_place_is_counted():
    from forebay.charts.options import Scene
    from forebay.charts.window import choose_window
    from forebay.flow.model import compile_layout

    model = compile_layout(SITE)
    notes = " ".join(zone_notes(Scene(model, choose_window(model)), MOST_NAMED + 3, 2))
    assert "not named in the key: 3" in notes
    assert "want of room: 2" in notes


def test_an_intake_without_a_zone_is_left_out():
    from forebay.charts.options import Scene
    from forebay.charts.window import choose_window
    from forebay.flow.model import compile_layout

    model = compile_layout(SITE)
    nothing = Zone("dry", np.empty(0, dtype=np.complex128))
    picture = draw_zones(Scene(model, choose_window(model)), (nothing,), FlowNetOptions(size=(640, 520)))
    assert b'id="zone-1"' not in picture.data
