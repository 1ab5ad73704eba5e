"""layout/review: applicability warnings alone, before anything is computed."""

from collections.abc import Sequence
from dataclasses import replace
from typing import Any

from fastapi import APIRouter

from forebay.api.limits import Price
from forebay.api.operation import Operation
from forebay.api.outcome import Outcome
from forebay.api.review import reviewed
from forebay.api.routers.serving import serve
from forebay.api.schemas.review import ReviewRequest, ReviewResult
from forebay.trade.applicability.warning import Severity


def compute(request: ReviewRequest, _media_type: str) -> Outcome:
    outcome = reviewed(request, request.flow_layout(), {}, None)
    return replace(outcome, result=counted([warning.severity for warning in outcome.warnings]))


def counted(severities: Sequence[str]) -> dict[str, Any]:
    """How many warnings there are of each severity."""
    return {
        "notes": severities.count(Severity.NOTE),
        "cautions": severities.count(Severity.CAUTION),
        "unsafe_to_use": severities.count(Severity.UNSAFE_TO_USE),
        "worst": max(severities, key=[str(severity) for severity in Severity].index, default=None),
    }


def price(request: ReviewRequest) -> Price:
    return Price(elements=request.layout.size, effort=request.layout.effort)


REVIEW = Operation(
    operation_id="reviewLayout",
    path="/v1/layout/review",
    summary="Where the numbers of a layout should not be trusted",
    description=(
        "Applicability warnings alone; nothing is computed of the flow. Data that the layout does not hold "
        "(port areas, bed friction, wind, density) are asked for by notes."
    ),
    request=ReviewRequest,
    result=ReviewResult,
    compute=compute,
    price=price,
)

router = APIRouter()
serve(router, REVIEW)
