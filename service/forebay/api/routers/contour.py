"""contour/integrate: circulation and flux along contours."""

from collections.abc import Iterator
from dataclasses import asdict
from typing import cast

from fastapi import APIRouter

from forebay.api.encoders.envelope_json import ENVELOPE
from forebay.api.encoders.geojson import Feature, geojson
from forebay.api.encoders.json_lines import json_lines
from forebay.api.limits import Price
from forebay.api.operation import Operation
from forebay.api.outcome import Answered, Outcome
from forebay.api.review import reviewed
from forebay.api.routers.serving import serve
from forebay.api.schemas.contour import ContourRequest, ContourResult, flow_contours
from forebay.workflows.contour import integrate_contours

POINTS_A_SEGMENT = 200
"""Evaluations of the field for one segment: its chords and the quadrature."""

EFFORT_A_SEGMENT = 500_000
"""Work to lead one segment round every obstacle, counted in pairs of element and point."""


FLATNESS = 1e-3
"""Distance of an arc from the chords that stand for it on a map, as part of its radius [-]."""


def compute(request: ContourRequest, _media_type: str) -> Outcome:
    layout = request.flow_layout()
    contours = flow_contours(request.contours, request.unit_system, "contours")
    integrals = integrate_contours(layout, contours)
    return reviewed(request, layout, {"contours": [asdict(integral) for integral in integrals]})


def features(answered: Answered) -> Iterator[Feature]:
    """Each contour on the map, arcs as chords."""
    request = cast("ContourRequest", answered.request)
    contours = flow_contours(request.contours, request.unit_system, "contours")
    for contour, facts in zip(contours, answered.document["result"]["contours"], strict=True):
        yield Feature("contour", "LineString", contour.traced(FLATNESS), facts)


def price(request: ContourRequest) -> Price:
    segments = sum(contour.size for contour in request.contours)
    values = 2 * request.layout.size * len(request.contours)
    layout, effort = request.layout, request.layout.effort + EFFORT_A_SEGMENT * segments
    return Price(POINTS_A_SEGMENT * segments, layout.size, values=values, effort=effort, path=("contours",))


INTEGRATE = Operation(
    operation_id="integrateContour",
    path="/v1/contour/integrate",
    summary="Circulation and flux along contours, element by element",
    description=(
        "Exact, by branch-tracked potential differences; `quadrature` beside it is an independent "
        "numerical integral of the velocity. Flux is positive towards the right of the direction of "
        "travel, so outward on an anticlockwise closed contour. A contour through a singularity has "
        "null values and says so."
    ),
    request=ContourRequest,
    result=ContourResult,
    compute=compute,
    price=price,
    encoders=(ENVELOPE, *json_lines("contours"), geojson(features)),
)

router = APIRouter()
serve(router, INTEGRATE)
