"""Warnings on a sheet: what a pointer leads to has a name."""

import json
from pathlib import Path

import pytest

from forebay.api.calculation_sheet.closing import place_of
from forebay.api.schemas.assessment import AssessmentRequest

RIVER = Path(__file__).parents[3] / "openapi" / "examples" / "layout-river-bend.json"


@pytest.fixture(scope="module")
def request_of_a_bend():
    return AssessmentRequest.model_validate({"layout": json.loads(RIVER.read_text(encoding="utf-8"))})


@pytest.mark.parametrize(
    ("pointer", "name"),
    [
        ("#/layout/elements/1", "works outfall"),
        ("#/layout/elements/0/discharge", "town intake"),
        ("#/layout/structures/0", "groyne"),
        ("#/layout/shore/open_edges/1", "lower reach"),
        ("#/layout/shore/water/coordinates/1", "ring 2 of the surveyed water"),
        ("#/layout/interface_elevation", "layout interface elevation"),
        ("#/screens/0", "screens 0"),
    ],
)
def test_place_of_a_pointer(request_of_a_bend, pointer, name):
    assert place_of(pointer, request_of_a_bend) == name
