"""Outlines that have become part of surveyed land keep their names in answers."""

import pytest

from forebay.flow.layout import EdgeProfile, Island, Layout, LineSink, OpenEdge, Outline, Sink, Surveyed
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.search import search_model
from forebay.trade.survey.attachments import with_attached

JETTY = Outline("jetty", (190 - 1j, 210 - 1j, 210 + 30j, 190 + 30j))
SPUR = Outline("spur", (305 + 62j, 320 + 60j, 320 + 66j, 305 + 66j))


@pytest.fixture(scope="module")
def layout():
    edges = (
        OpenEdge("up", 3, 1, 100.0, EdgeProfile.EQUIPOTENTIAL),
        OpenEdge("down", 1, 1, None, EdgeProfile.EQUIPOTENTIAL),
    )
    holm = Island("holm", (290 + 55j, 290 + 75j, 310 + 75j, 310 + 55j))
    shore = Surveyed((0j, 400 + 0j, 400 + 100j, 100j), (holm,), edges)
    elements = Sink("pipe", 190 + 15j, 2.0), LineSink("screen", 195 + 30j, 205 + 30j, 3.0)
    return with_attached(Layout(5.0, shore=shore, elements=elements, structures=(JETTY, SPUR)))


def test_edges_are_named(layout):
    assert layout.structures == ()
    bank, holm = compile_layout(layout).rings
    assert bank.edges.count("jetty") == 3
    # the corner of the island inside the spur cuts none of its own sides off, but parts of two
    assert 3 <= holm.edges.count("spur") <= 4
    assert set(bank.edges) == {"bank", "jetty", "up", "down"}
    assert set(holm.edges) == {"holm", "spur"}


def test_elements_and_stagnation_points_say_on_what_they_are(layout):
    model = compile_layout(layout)
    assert [s.on for s in model.singularities] == ["jetty"]
    assert [line.on for line in model.lines] == ["jetty"]
    found = search_model(model)
    assert found.complete
    on = {point.on for point in found.points}
    # the sinks divide the jetty's own water from that which goes by, and the island parts the flow
    assert "jetty" in on
    assert on & {"holm", "spur"}
