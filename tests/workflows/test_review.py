"""Review of a layout: wiring of the rules, and refusal of what cannot be."""

import numpy as np
import pytest

from forebay.flow.errors import DuplicateNameError, ElementInStructureError
from forebay.flow.layout import Ambient, Layout, Pier, Sink, Source
from forebay.trade.applicability.site import Readings, SiteData
from forebay.workflows.review import review_layout

LAYOUT = Layout(
    4.0,
    ambient=Ambient(0.4 + 0j),
    elements=(Sink("town", 0j, 1.0), Source("works", 60 + 0j, 0.5)),
    structures=(Pier("P", 20 + 5j, 1.0),),
)


def codes(*given, **named):
    return {warning.code for warning in review_layout(*given, **named)}


def test_layout_alone():
    assert {"near-field", "pier-lee", "outfall-passive", "bed-friction-unknown"} <= codes(LAYOUT)


def test_answer_at_hand_adds_to_it():
    added = codes(LAYOUT, Readings(np.array([1 + 1j]), 3.0, has_dissipation=True)) - codes(LAYOUT)
    assert added == {"near-field-result", "rigid-lid", "surface-speed-up", "turbulence-left-out"}


def test_data_replace_notes():
    known = codes(LAYOUT, data=SiteData(bed_friction=0.004))
    assert codes(LAYOUT) - known == {"bed-friction-unknown"}
    assert "shallow-wake" in known


@pytest.mark.parametrize(
    ("element", "error"),
    [(Sink("works", 5j, 1.0), DuplicateNameError), (Sink("x", 20 + 5j, 1.0), ElementInStructureError)],
    ids=["same name", "inside the pier"],
)
def test_impossible_layout_is_refused(element, error):
    elements = (*LAYOUT.elements, element)
    with pytest.raises(error):
        review_layout(Layout(4.0, elements=elements, structures=LAYOUT.structures))


def test_review_is_a_pure_function():
    assert review_layout(LAYOUT) == review_layout(LAYOUT)
