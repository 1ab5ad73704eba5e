"""One compute route as data, and the whole way from a body in bytes to an answer in bytes.

The way is a plain function of its arguments, so that it runs in the event loop, in a thread or in a process.
"""

import asyncio
from collections.abc import Awaitable, Callable
from dataclasses import dataclass
from time import perf_counter
from typing import Any, Generic, NamedTuple, TypeVar

from pydantic import ValidationError

from forebay.api import envelope
from forebay.api.encoders.envelope_json import ENVELOPE
from forebay.api.expense import Expense
from forebay.api.limits import Limits, Price
from forebay.api.media import JSON
from forebay.api.origins import at_origin
from forebay.api.outcome import Answered, Encoder, Outcome, Reply
from forebay.api.problems import Problem
from forebay.api.reading import read_request
from forebay.api.refusals import from_flow
from forebay.api.schemas.common import Answer, ComputeRequest
from forebay.api.units import UnitSystem
from forebay.api.validation import problem_of
from forebay.flow.errors import FlowError

R = TypeVar("R", bound=ComputeRequest)


@dataclass(frozen=True)
class Operation(Generic[R]):
    """A compute route: its names, its schemas, its computation, its price.

    compute : of a request and the media type asked for, or the limits if `is_about_limits`
    readable : media types of bodies
    """

    operation_id: str
    path: str
    summary: str
    description: str
    request: type[R]
    result: type[Answer] | None
    compute: Callable[[R, Any], Outcome]
    price: Callable[[R], Price]
    encoders: tuple[Encoder, ...] = (ENVELOPE,)
    is_about_limits: bool = False
    readable: tuple[str, ...] = (JSON,)

    @property
    def tag(self) -> str:
        """Group in the documentation: the family in the path."""
        return self.path.split("/")[2]

    @property
    def media_types(self) -> tuple[str, ...]:
        """What this installation can answer with, the default first."""
        return tuple(encoder.media_type for encoder in self.encoders if encoder.is_available())

    def encoder(self, media_type: str) -> Encoder:
        """Encoder of one of the media types."""
        return next(encoder for encoder in self.encoders if encoder.media_type == media_type)


async def nobody_leaves() -> None:
    """A client that waits for ever."""
    await asyncio.Event().wait()


class Job(NamedTuple):
    """One request to be answered.

    content_type : media type of the body
    patience : seconds that its client is willing to wait, None if as long as the limits allow
    has_left : returns once the client has gone, and its answer is of no use
    """

    operation: Operation[Any]
    body: bytes
    media_type: str
    content_type: str = JSON
    patience: float | None = None
    has_left: Callable[[], Awaitable[None]] = nobody_leaves


class Deferred(NamedTuple):
    """The request is right but too large for where it was tried."""


def perform(
    operation: Operation[Any],
    body: bytes,
    media_type: str,
    content_type: str = JSON,
    *,
    limits: Limits,
    allowance: int | None = None,
) -> Reply | Problem | Deferred:
    """Answer of a body, the problem that stands in its way, or Deferred if its work exceeds `allowance`."""
    started, system, site = perf_counter(), UnitSystem.SI, None
    try:
        request = read_request(operation.request, body, content_type)
        system, site = request.unit_system, getattr(request, "layout", None)
        price = operation.price(request)
        limits.check(price)
        if allowance is not None and (price.lengthy or price.work > allowance):
            return Deferred()
        parsed = perf_counter()
        outcome = operation.compute(request, limits if operation.is_about_limits else media_type)
        computed = perf_counter()
        reply = _encode(operation, request, outcome, media_type)
    except ValidationError as error:
        return problem_of(error)
    except FlowError as error:
        return from_flow(at_origin(error, site, system), system)
    except Problem as problem:
        return problem
    times = {"parse": parsed - started, "compute": computed - parsed, "encode": perf_counter() - computed}
    timing = ", ".join(f"{name};dur={1e3 * seconds:.2f}" for name, seconds in times.items())
    expense = Expense.of(operation.operation_id, price.pairs + price.effort)
    return reply._replace(headers={**reply.headers, "Server-Timing": timing}, expense=expense)


def _encode(operation: Operation[Any], request: ComputeRequest, outcome: Outcome, media_type: str) -> Reply:
    document = {}
    if operation.result is not None:
        document = envelope.document(
            operation.result,
            outcome.result,
            request=request,
            site=outcome.site,
            notices=outcome.warnings,
            boundary=outcome.boundary,
        )
    return operation.encoder(media_type).encode(Answered(request, outcome, document))
