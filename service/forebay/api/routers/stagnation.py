"""stagnation/search: where the water stands still."""

from collections.abc import Iterator
from dataclasses import asdict
from typing import Any

import numpy as np
from fastapi import APIRouter

from forebay.api.encoders.envelope_json import ENVELOPE
from forebay.api.encoders.geojson import Feature, geojson
from forebay.api.limits import Price
from forebay.api.operation import Operation
from forebay.api.outcome import Answered, Outcome
from forebay.api.review import reviewed
from forebay.api.routers.serving import serve
from forebay.api.schemas.stagnation import StagnationRequest, StagnationResult
from forebay.flow.stagnation.result import StagnationSearch
from forebay.workflows.stagnation import search_stagnation


def compute(request: StagnationRequest, _media_type: str) -> Outcome:
    layout = request.flow_layout()
    return reviewed(request, layout, written(search_stagnation(layout, request.flow_window())))


def written(search: StagnationSearch) -> dict[str, Any]:
    """Fields of a search."""
    fields = asdict(search)
    points = []
    for point in fields.pop("points"):
        at = point.pop("at")
        points.append({"x": at.real, "y": at.imag, **point})
    return {"points": points, **fields}


def features(answered: Answered) -> Iterator[Feature]:
    """A place on the map for each stagnation point."""
    points = zip(answered.outcome.result["points"], answered.document["result"]["points"], strict=True)
    for point, properties in points:
        at = np.array([complex(point["x"], point["y"])])
        yield Feature("stagnation-point", "Point", at, properties)


def price(request: StagnationRequest) -> Price:
    return Price(elements=request.layout.size, lengthy=True)


SEARCH = Operation(
    operation_id="searchStagnation",
    path="/v1/stagnation/search",
    summary="Every stagnation point, with proof that none is missing",
    description=(
        "`complete` is true only where an independent count (the degree of the rational velocity, or "
        "the winding number along the window's edge) equals what was found; otherwise `unresolved` "
        "lists the boxes that the search could not decide."
    ),
    request=StagnationRequest,
    result=StagnationResult,
    compute=compute,
    price=price,
    encoders=(ENVELOPE, geojson(features)),
)

router = APIRouter()
serve(router, SEARCH)
