"""estimate: the price of a request against the limits, without running it."""

import json
from typing import Any

from fastapi import APIRouter
from pydantic import ValidationError

from forebay.api.limits import Limits, Price, Tier
from forebay.api.operation import Operation
from forebay.api.outcome import Outcome
from forebay.api.reading import read_request
from forebay.api.routers.serving import serve
from forebay.api.schemas.estimate import EstimateRequest, EstimateResult, Verdict
from forebay.api.validation import problem_of
from forebay.flow.errors import FlowError, TooLargeError


class NoSuchRouteError(FlowError):
    """The address is none of a compute route; /openapi.json lists them."""

    code = "no-such-route"
    title = "No such compute route"


def compute(request: EstimateRequest, limits: Limits) -> Outcome:
    operation = _operation(request.route)
    body = json.dumps(request.request).encode()  # as it came: whole numbers of any size, NaN to be refused
    price: Price = operation.price(_validated(operation, body))
    reason = _refusal(price, limits)
    is_small = len(body) <= Tier.THREAD.body and price.work <= Tier.THREAD.work and not price.lengthy
    at_once = Verdict.AT_ONCE if is_small else Verdict.QUEUED
    return Outcome(
        {
            "verdict": at_once if reason is None else Verdict.REFUSED,
            "reason": reason,
            "points": price.points,
            "elements": price.elements,
            "pairs": price.pairs,
            "values": price.values or None,
            "bytes": price.size or None,
            "seconds": price.seconds,
            "limits": limits._asdict(),
        }
    )


def _operation(route: str) -> Operation[Any]:
    """Operation of a route."""
    from forebay.api.routers.registry import OPERATIONS  # noqa: PLC0415  (the registry imports this module)

    for operation in OPERATIONS.values():
        if operation.path == route and operation is not ESTIMATE:
            return operation
    raise NoSuchRouteError("no compute route has this address", ("route",))


def _validated(operation: Operation[Any], body: bytes) -> Any:  # noqa: ANN401  (a request of any route)
    """The inner request; its errors point into the outer one."""
    try:
        return read_request(operation.request, body)
    except ValidationError as error:
        problem = problem_of(error)
        problem.errors = tuple(
            {**fault, "pointer": f"#/request{fault['pointer'].removeprefix('#')}"} for fault in problem.errors
        )
        raise problem from None


def _refusal(price: Price, limits: Limits) -> str | None:
    try:
        limits.check(price)
    except TooLargeError as error:
        return error.detail
    return None


def price(_request: EstimateRequest) -> Price:
    return Price()


ESTIMATE = Operation(
    operation_id="estimateCost",
    path="/v1/estimate",
    summary="What a request would cost, without running it",
    description=(
        "Points, pairs of element and point, size of the answer and a rough time, against the limits of this "
        "service. The request is validated as its own route would; nothing of it is computed."
    ),
    request=EstimateRequest,
    result=EstimateResult,
    compute=compute,
    price=price,
    is_about_limits=True,
)

router = APIRouter()
serve(router, ESTIMATE)
