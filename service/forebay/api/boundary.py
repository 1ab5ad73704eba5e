"""The part of an envelope about solved walls: bounds of the error, the grid, and what was mended."""

from itertools import pairwise
from math import nan
from typing import Any

from forebay.api.problems import API_NAMES, pointer
from forebay.api.schemas.layout import Layout
from forebay.api.units import UnitSystem
from forebay.flow import layout as flow
from forebay.flow.ends import edge_points, ends_of
from forebay.flow.sheets.bound import BoundaryBound
from forebay.trade.survey.rings import Change
from forebay.trade.survey.water import SurveyedWater

Json = dict[str, Any]


def written_boundary(
    request: Layout, units: UnitSystem, layout: flow.Layout, bound: BoundaryBound | None
) -> Json | None:
    """Fields of `boundary` in SI; None where every wall is straight or round.

    request : the layout as written;  layout : the same in SI;  bound : of its flow, None if not computed
    """
    water = request.surveyed(units)
    if water is None and not layout.outlines:
        return None
    return {
        "solved": None if bound is None else _solved(bound, layout.tolerance),
        "survey": None if water is None else _survey(water, layout),
        "moved": [_moved(change) for change in request.mended(units)],
    }


def _solved(bound: BoundaryBound, tolerance: float) -> Json:
    return {
        "stream_function_bound": bound.absolute,
        "relative_bound": bound.relative,
        "through_flux": bound.flux,
        "tolerance": tolerance,
        "unknowns": bound.unknowns,
        "worst": {"ring": bound.ring, "x": bound.vertex.real, "y": bound.vertex.imag},
        "island_bounds": [
            {"name": name, "stream_function_bound": level} for name, level in bound.levels.items()
        ],
    }


def _survey(water: SurveyedWater, layout: flow.Layout) -> Json:
    inflows = {end.name: end.inflow * layout.depth for end in ends_of(layout)}
    shore = water.shore
    return {
        "grid": None if water.grid is None else water.grid.definition,
        "scale_error": nan if water.scale_error is None else water.scale_error,
        "area": water.area,
        "vertices_given": water.given,
        "vertices": water.vertices,
        "open_edges": [
            {
                "name": edge.name,
                "length": sum(abs(end - start) for start, end in pairwise(edge_points(shore, edge))),
                "discharge": inflows[edge.name],
            }
            for edge in shore.edges
        ],
    }


def _moved(change: Change) -> Json:
    steps = (API_NAMES.get(step, step) if isinstance(step, str) else step for step in change.path)
    at = complex(nan, nan) if change.at is None else change.at
    return {
        "what": change.kind,
        "pointer": pointer(("layout", *steps)),
        "count": change.count,
        "distance": change.distance,
        "x": at.real,
        "y": at.imag,
    }
