"""Solved walls on a sheet: every bound with its unit, the survey, and what was mended."""

import pytest

from forebay.api.calculation_sheet.results import Units
from forebay.api.calculation_sheet.wall_results import walls_part

UNITS = Units(
    x="m",
    stream_function_bound="m2/s",
    through_flux="m2/s",
    length="m",
    discharge="m3/s",
    area="m2",
    distance="m",
)
SOLVED = {
    "stream_function_bound": 0.0052,
    "relative_bound": 1.9e-4,
    "through_flux": 28.29,
    "tolerance": 1e-4,
    "unknowns": 1674,
    "worst": {"ring": "bank", "x": 60.0, "y": -3.0},
    "island_bounds": [{"name": "eyot", "stream_function_bound": 2.2e-4}],
}
SURVEY = {
    "grid": "EPSG:32631",
    "scale_error": 4e-4,
    "area": 71244.0,
    "vertices_given": 43,
    "vertices": 41,
    "open_edges": [{"name": "upper reach", "length": 82.0, "discharge": 95.0}],
}
MOVED = {
    "what": "merged-with-land",
    "pointer": "#/layout/structures/0",
    "count": 3,
    "distance": 0.5,
    "x": 1.0,
    "y": 2.0,
}


def told(boundary):
    return str(walls_part(boundary, UNITS, lambda pointer: f"the thing at {pointer}"))


def test_everything_is_told():
    text = told({"solved": SOLVED, "survey": SURVEY, "moved": [MOVED]})
    for words in ("0.005", "bank (60, −3) m", "between banks and eyot", "28.29 m2/s", "Unknowns: 1674"):
        assert words in text
    for words in ("upper reach", "41 vertices of the 43 given", "EPSG:32631", "lengths in the grid"):
        assert words in text
    assert "merged with land" in text
    assert "the thing at #/layout/structures/0" in text


@pytest.mark.parametrize(
    ("survey", "absent"),
    [(None, "Surveyed water"), (SURVEY | {"grid": None, "scale_error": None}, "in the grid")],
    ids=["outlines", "local"],
)
def test_what_is_not_there_is_not_told(survey, absent):
    text = told({"solved": SOLVED, "survey": survey, "moved": []})
    assert absent not in text
    assert "Changes to the geometry" not in text
    assert "Unknowns" in text


def test_without_solved_walls_there_is_nothing_to_tell():
    assert told(None) == ""
